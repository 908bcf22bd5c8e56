"""Small helpers of the solid benchmarks: elements of one material, supports, recovered stress at a point."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from skfem import Basis, ElementTetP2, ElementVector, FacetBasis, LinearForm, MeshTet, MeshTet2, condense, solve

from blockload.response.elements import Elements
from blockload.response.recovery import gradients, hooke


def elements(mesh: MeshTet2, young: float, poisson: float, *, density: float = 1.0, expansion: float = 0.0) -> Elements:
    count = mesh.nelements
    return Elements(
        points=np.ascontiguousarray(mesh.doflocs.T),
        nodes=mesh.dofs.element_dofs.T.astype(np.int64),
        volume_of=np.zeros(count, dtype=np.int64),
        lame=np.full(count, young * poisson / ((1 + poisson) * (1 - 2 * poisson))),
        shear=np.full(count, young / (2 * (1 + poisson))),
        density=np.full(count, density),
        expansion=np.full(count, expansion),
    )


def grid(x: np.ndarray, y: np.ndarray, z: np.ndarray, move: Callable[..., tuple] | None = None) -> MeshTet2:
    """A tensor grid of quadratic tetrahedra, every node (middles too) moved by `move`."""
    mesh = MeshTet2.from_mesh(MeshTet.init_tensor(x, y, z))
    return mesh if move is None else MeshTet2(np.array(move(*mesh.doflocs)), mesh.t)


def unknowns(mesh: MeshTet2, chosen: np.ndarray, components: tuple[int, ...]) -> np.ndarray:
    """Unknowns of these components at the chosen nodes (a mask over nodes)."""
    return np.concatenate([3 * np.flatnonzero(chosen) + component for component in components])


def traction_load(
    mesh: MeshTet2, facets: np.ndarray, vector: tuple[float, float, float] | None, pressure: float = 0.0
) -> np.ndarray:
    """Consistent nodal loads of a constant traction, or of a pressure against the surface."""
    basis = FacetBasis(mesh, ElementVector(ElementTetP2()), facets=facets, intorder=6)

    @LinearForm
    def form(v, w):
        parts = vector if vector is not None else [-pressure * w.n[k] for k in range(3)]
        return sum(parts[k] * v[k] for k in range(3))

    return form.assemble(basis)


def solved(matrix, load: np.ndarray, held: np.ndarray, values: np.ndarray | None = None) -> np.ndarray:
    """Displacement with some unknowns prescribed (zero by default)."""
    prescribed = np.zeros(len(load)) if values is None else values
    return solve(*condense(matrix.tocsr(), load, x=prescribed, D=np.unique(held)))


def nodal_stress(some: Elements, motion: np.ndarray, node: int) -> np.ndarray:
    """Stress (6,) at a node, averaged over its elements by their volume."""
    chosen, local = np.nonzero(some.nodes == node)
    own = some.take(chosen)
    nodal, size = gradients(own)
    gradient = np.einsum("ead,eac->edc", nodal[np.arange(len(local)), local], motion.reshape(-1, 3)[own.nodes])
    return np.average(hooke(gradient, own.lame, own.shear), axis=0, weights=size)


def node_at(mesh: MeshTet2, place: tuple[float, float, float]) -> int:
    distance = np.linalg.norm(mesh.doflocs.T - place, axis=1)
    node = int(distance.argmin())
    assert distance[node] < 1e-6, "no node there"
    return node


def vector_basis(mesh: MeshTet2, order: int) -> Basis:
    return Basis(mesh, ElementVector(ElementTetP2()), intorder=order)
