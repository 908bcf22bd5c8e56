"""Quadratic tetrahedra: shape functions, geometry at quadrature points, and which elements are straight.

Local order of the ten nodes: corners 0 1 2 3, then the middles of (01) (12) (02) (03) (13) (23), as in scikit-fem.
With barycentric coordinates L the shape functions are L(2L − 1) at corners and 4 Li Lj at middles
(Zienkiewicz, Taylor & Zhu, The Finite Element Method, 7th ed. 2013, section 6.2). Geometry uses the same functions,
so an element whose middles sit halfway along straight edges has a constant Jacobian.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..arrays import Floats, Ints
from ..block.model import Block
from ..errors import BlockError

Bools = NDArray[np.bool_]
EDGES = ((0, 1), (1, 2), (0, 2), (0, 3), (1, 3), (2, 3))
STRAIGHT_TOLERANCE = 1e-12
CEILING = 128 * 2**20
_CORNER_SLOPES = np.array([[-1.0, -1.0, -1.0], [1.0, 0.0, 0.0], [0.0, 1.0, 0.0], [0.0, 0.0, 1.0]])


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Elements:
    """Points (N, 3) [m], the ten nodes of every element (E, 10) and what each is made of (E,).

    lame and shear are Lamé's constants [Pa], density [kg/m³], expansion [1/K], volume_of indexes the block's volumes.
    """

    points: Floats
    nodes: Ints
    volume_of: Ints
    lame: Floats
    shear: Floats
    density: Floats
    expansion: Floats

    def take(self, chosen: Ints | slice) -> Elements:
        """Return these elements only, on the same points."""
        return Elements(
            points=self.points,
            nodes=self.nodes[chosen],
            volume_of=self.volume_of[chosen],
            lame=self.lame[chosen],
            shear=self.shear[chosen],
            density=self.density[chosen],
            expansion=self.expansion[chosen],
        )


def elements_of(block: Block) -> Elements:
    """Gather a block's elements with their materials."""
    materials = [block.materials[name] for name in block.volumes]
    young = np.array([item.youngs_modulus for item in materials])
    poisson = np.array([item.poissons_ratio for item in materials])
    volume_of = np.asarray(block.volume_of, dtype=np.int64)
    lame = young * poisson / ((1 + poisson) * (1 - 2 * poisson))
    shear = young / (2 * (1 + poisson))
    return Elements(
        points=np.ascontiguousarray(block.mesh.doflocs.T),
        nodes=np.ascontiguousarray(block.mesh.dofs.element_dofs.T, dtype=np.int64),
        volume_of=volume_of,
        lame=lame[volume_of],
        shear=shear[volume_of],
        density=np.array([item.density for item in materials])[volume_of],
        expansion=np.array([item.thermal_expansion for item in materials])[volume_of],
    )


def shapes(at: Floats) -> Floats:
    """Shape functions (q, 10) at reference points (q, 3)."""
    weights = np.column_stack([1 - at.sum(axis=1), at])
    corners = weights * (2 * weights - 1)
    middles = [4 * weights[:, i] * weights[:, j] for i, j in EDGES]
    return np.column_stack([corners, *middles])


def slopes(at: Floats) -> Floats:
    """Derivatives (q, 10, 3) of the shape functions by the reference coordinates, at points (q, 3)."""
    weights = np.column_stack([1 - at.sum(axis=1), at])
    corners = (4 * weights - 1)[:, :, None] * _CORNER_SLOPES
    middles = [4 * (weights[:, [i]] * _CORNER_SLOPES[j] + weights[:, [j]] * _CORNER_SLOPES[i]) for i, j in EDGES]
    return np.concatenate([corners, np.stack(middles, axis=1)], axis=1)


def quadrature(order: int) -> tuple[Floats, Floats]:
    """Points (q, 3) and weights (q,) on the reference tetrahedron, exact for polynomials of this order."""
    from skfem.quadrature import get_quadrature
    from skfem.refdom import RefTet

    at, weights = get_quadrature(RefTet, order)
    return np.ascontiguousarray(at.T), np.asarray(weights)


def jacobians(elements: Elements, at: Floats) -> tuple[Floats, Floats]:
    """Inverse Jacobians (E, q, 3, 3) (row: reference, column: space), sizes of determinants (E, q) at points (q, 3)."""
    slope = slopes(at)
    corners = elements.points[elements.nodes].transpose(0, 2, 1)
    flat = corners @ slope.transpose(1, 2, 0).reshape(10, -1)
    jacobian = flat.reshape(-1, 3, 3, len(at)).transpose(0, 3, 1, 2)
    columns = [jacobian[..., k] for k in range(3)]
    inverse = np.stack([np.cross(columns[(k + 1) % 3], columns[(k + 2) % 3]) for k in range(3)], axis=-2)
    determinant = np.einsum("eqi,eqi->eq", columns[0], inverse[..., 0, :])
    folded = ~(np.all(determinant > 0, axis=1) | np.all(determinant < 0, axis=1))
    if folded.any():
        found = f"{int(folded.sum())} elements are folded: their Jacobian changes sign"
        raise BlockError("the block's mesh", found, "elements with a Jacobian of one sign", "repair the mesh")
    return inverse / determinant[..., None, None], np.abs(determinant)


def straight(elements: Elements) -> Bools:
    """Whether every middle sits halfway along its edge, (E,) of bool."""
    nodes = elements.points[elements.nodes]
    size = np.abs(nodes[:, 1:4] - nodes[:, :1]).max(axis=(1, 2))
    result: Bools = np.ones(len(nodes), dtype=np.bool_)
    for k, (i, j) in enumerate(EDGES):
        bow = np.abs(nodes[:, 4 + k] - (nodes[:, i] + nodes[:, j]) / 2).max(axis=1)
        result &= bow <= STRAIGHT_TOLERANCE * size + 8 * np.finfo(float).eps * np.abs(nodes[:, i]).max(axis=1)
    return result


def chunks(count: int, bytes_each: int, ceiling: int | None = None) -> Iterator[slice]:
    """Cut a range into slices whose work arrays stay below `ceiling` bytes (CEILING by default)."""
    step = max(1, (ceiling or CEILING) // max(1, bytes_each))
    for start in range(0, count, step):
        yield slice(start, min(start + step, count))
