"""Integrals over curved elements and faces: volume, mass, centroid, inertia, area, normal, second moments.

On a ten-node tetrahedron x is quadratic and det J cubic in the reference coordinates, so ∫ x xᵀ dV has degree 7 and
is integrated exactly; on a six-node face the area element is a root and the rule is of order 6.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from ..arrays import Floats, Ints, frozen

if TYPE_CHECKING:
    from skfem import MeshTet2

VOLUME_ORDER = 7
AREA_ORDER = 6
FLATNESS = 1e-3
"""A set whose mean area vector is a smaller share of its area (a full circle, a closed surface) has no normal."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class MassProperties:
    """Mass [kg], cg (3,) [m] and inertia (3, 3) about the cg [kg·m²]."""

    mass: float
    cg: Floats
    inertia: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class FaceMoments:
    """Area [m²], centroid (3,), mean outward normal (3,) of length one or zero, ∫ r rᵀ dA about the centroid (3, 3)."""

    area: float
    centroid: Floats
    normal: Floats
    moments: Floats


def mass_properties(mesh: MeshTet2, density: Floats) -> MassProperties:
    """Return what the mesh weighs; `density` (n_elements,) [kg/m³]."""
    from skfem import Basis, ElementTetP0

    basis = Basis(mesh, ElementTetP0(), intorder=VOLUME_ORDER)
    weights = basis.dx * density[:, None]
    x = np.asarray(basis.global_coordinates())
    mass = float(weights.sum())
    cg = np.einsum("eq,ieq->i", weights, x) / mass
    arm = x - cg[:, None, None]
    second = np.einsum("eq,ieq,jeq->ij", weights, arm, arm, optimize=True)
    return MassProperties(mass=mass, cg=frozen(cg), inertia=frozen(np.trace(second) * np.eye(3) - second))


def volumes(mesh: MeshTet2, volume_of: Ints, count: int) -> Floats:
    """Return the content of each volume, (count,) [m³]."""
    from skfem import Basis, ElementTetP0

    content = Basis(mesh, ElementTetP0(), intorder=3).dx.sum(axis=1)
    return np.asarray(np.bincount(volume_of, weights=content, minlength=count), dtype=float)


def face_moments(mesh: MeshTet2, facets: Ints) -> FaceMoments:
    """Return the moments of a set of facets, normals out of the first element of each."""
    x, vector = _face_points(mesh, np.asarray(facets))
    weights = np.linalg.norm(vector, axis=-1)
    area = float(weights.sum())
    centroid = np.einsum("fq,fqi->i", weights, x) / area
    arm = x - centroid
    moments = np.einsum("fq,fqi,fqj->ij", weights, arm, arm, optimize=True)
    normal = vector.sum(axis=(0, 1))
    size = float(np.linalg.norm(normal))
    unit = normal / size if size > FLATNESS * area else np.zeros(3)
    return FaceMoments(area=area, centroid=frozen(centroid), normal=frozen(unit), moments=frozen(moments))


def facet_nodes(mesh: MeshTet2, facets: Ints) -> Ints:
    """Return the six nodes of each facet, (f, 6): corners a b c seen anticlockwise from outside, mids ab bc ca."""
    elements = mesh.f2t[0, facets]
    local = np.argmax(mesh.t2f[:, elements] == facets, axis=0)
    nodes = mesh.dofs.element_dofs[:, elements]
    return np.asarray(np.take_along_axis(nodes, _LOCAL[local].T, axis=0).T)


# scikit-fem's faces of a tetrahedron, each turned to be anticlockwise from outside, with the mid nodes of its edges
# (mid nodes 4 to 9 lie on edges 01 12 02 03 13 23)
_LOCAL = np.array([[0, 2, 1, 6, 5, 4], [0, 1, 3, 4, 8, 7], [0, 3, 2, 7, 9, 6], [1, 2, 3, 5, 9, 8]])


def _face_points(mesh: MeshTet2, facets: Ints) -> tuple[Floats, Floats]:
    """Return quadrature points (f, q, 3) and area vectors (f, q, 3), weights included."""
    from skfem import ElementTriP2
    from skfem.quadrature import get_quadrature
    from skfem.refdom import RefTri

    at, weights = get_quadrature(RefTri, AREA_ORDER)
    element = ElementTriP2()
    shapes = [element.lbasis(at, i) for i in range(6)]
    values = np.array([shape[0] for shape in shapes])
    slopes = np.array([shape[1] for shape in shapes])
    nodes = mesh.doflocs[:, facet_nodes(mesh, facets)]
    x = np.einsum("ifn,nq->fqi", nodes, values)
    along = np.einsum("ifn,ndq->dfqi", nodes, slopes)
    return x, np.cross(along[0], along[1]) * weights[None, :, None] * _handedness(mesh, facets)[:, None, None]


def _handedness(mesh: MeshTet2, facets: Ints) -> Floats:
    """Return the sign of each facet's first element: meshes made in memory may number theirs either way, (f,)."""
    corners = mesh.p[:, mesh.t[:, mesh.f2t[0, facets]]]
    a, b, c = (corners[:, i] - corners[:, 0] for i in (1, 2, 3))
    return np.asarray(np.sign(np.einsum("if,if->f", a, np.cross(b, c, axis=0))))
