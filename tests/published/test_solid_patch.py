"""The solid patch test of MacNeal & Harder (1985).

A proposed standard set of problems to test finite element accuracy, Finite Elements in Analysis and Design 1, 3-20
(inner nodes and stresses from memory of the paper; the stress is exact
for any inner nodes). Here the seven hexahedra are cut into six tetrahedra each.
"""

from __future__ import annotations

import numpy as np
from skfem import MeshTet, MeshTet2
from solids import elements, solved, unknowns

from blockload.response.elements import jacobians, quadrature, slopes
from blockload.response.recovery import hooke
from blockload.response.stiffness import stiffness

INNER = [
    (0.249, 0.342, 0.192),
    (0.826, 0.288, 0.288),
    (0.850, 0.649, 0.263),
    (0.273, 0.750, 0.230),
    (0.320, 0.186, 0.643),
    (0.677, 0.305, 0.683),
    (0.788, 0.693, 0.644),
    (0.165, 0.745, 0.702),
]
OUTER = [(0, 0, 0), (1, 0, 0), (1, 1, 0), (0, 1, 0), (0, 0, 1), (1, 0, 1), (1, 1, 1), (0, 1, 1)]
FACES = [(0, 1, 2, 3), (4, 5, 6, 7), (0, 1, 5, 4), (1, 2, 6, 5), (2, 3, 7, 6), (3, 0, 4, 7)]
STRAIN = np.array([[2, 1, 1], [1, 2, 1], [1, 1, 2]]) * 0.5e-3
TOLERANCE = 1e-9


def patch() -> MeshTet2:
    """Tetrahedra of the seven hexahedra; each quadrilateral is cut at its lowest node, so neighbours agree."""
    hexahedra = [tuple(range(8, 16))]
    hexahedra += [(*face, *(8 + node for node in face)) for face in FACES]
    cells = []
    for nodes in hexahedra:
        lowest = min(nodes)
        for face in FACES:
            corners = [nodes[k] for k in face]
            if lowest in corners:
                continue
            first = corners.index(min(corners))
            a, b, c, d = corners[first:] + corners[:first]
            cells += [(lowest, a, b, c), (lowest, a, c, d)]
    return MeshTet2.from_mesh(MeshTet(np.array(OUTER + INNER, dtype=float).T, np.array(cells).T))


def test_the_patch_fills_the_cube() -> None:
    _, size = jacobians(elements(patch(), 1.0, 0.0), np.full((1, 3), 0.25))

    assert abs(size.sum() / 6 - 1) < 1e-12


def test_constant_stress_in_every_element(published) -> None:
    mesh = patch()
    some = elements(mesh, 1e6, 0.25)
    field = mesh.doflocs.T @ STRAIN
    boundary = np.any((mesh.doflocs < 1e-9) | (mesh.doflocs > 1 - 1e-9), axis=0)
    motion = solved(
        stiffness(some),
        np.zeros(field.size),
        unknowns(mesh, boundary, (0, 1, 2)),
        np.where(boundary, field.T, 0).T.ravel(),
    )
    at, _ = quadrature(5)
    inverse, _ = jacobians(some, at)
    gradient = np.einsum("eqad,eac->eqdc", slopes(at)[None] @ inverse, motion.reshape(-1, 3)[some.nodes])
    stress = hooke(gradient, some.lame[:, None], some.shear[:, None])

    assert (~boundary).sum() > 8
    np.testing.assert_allclose(motion.reshape(-1, 3), field, atol=TOLERANCE * np.abs(field).max())
    np.testing.assert_allclose(stress, np.broadcast_to([2000.0] * 3 + [400.0] * 3, stress.shape), rtol=TOLERANCE)
    for name, column, value in (("normal", 0, 2000.0), ("shear", 3, 400.0)):
        worst = stress[..., column].ravel()[np.abs(stress[..., column] - value).argmax()]
        published(
            f"solid patch test, worst {name} stress",
            "MacNeal & Harder (1985)",
            expected=value,
            got=worst,
            unit="Pa",
            tolerance=TOLERANCE,
        )
