"""Stiffness and mass of quadratic tetrahedra, assembled by blocks of nodes.

With ∇φ = J⁻ᵀ ∇̂φ the 3×3 block of nodes a and b (isotropic: λ ∂ᵢa ∂ⱼb + μ ∂ⱼa ∂ᵢb + μ δᵢⱼ ∇a·∇b) splits into a
reference part and an element part,

    K[ai, bj] = Σ_q Σ_pr R_q[ab, pr] C_q[pr, ij],    R_q[ab, pr] = ∂̂p a ∂̂r b,
    C_q[pr, ij] = w_q |J| (λ J⁻¹[p,i] J⁻¹[r,j] + μ J⁻¹[p,j] J⁻¹[r,i] + μ δᵢⱼ Σk J⁻¹[p,k] J⁻¹[r,k]),

so all elements of a chunk are one matrix product. Straight elements need one C (R is integrated beforehand, exact);
curved ones use the 14-point rule of order 5, whose weights are positive, so no element can lose stiffness.
The consistent mass uses order 7, exact for curved elements too.
Unknown 3·node + component, the numbering of scikit-fem's ElementVector(ElementTetP2()).
"""

from __future__ import annotations

from typing import Any

import numpy as np

from ..arrays import Floats, Ints
from .elements import Elements, chunks, jacobians, quadrature, shapes, slopes, straight

STRAIGHT_ORDER = 2
CURVED_ORDER = 5
MASS_ORDER = 7
_FIRST, _SECOND = np.triu_indices(10)
_CENTRE = np.full((1, 3), 0.25)


def stiffness(elements: Elements) -> Any:
    """Assemble the stiffness (3N, 3N) [N/m]: symmetric, as 3×3 node blocks in rows with sorted indices (BSR).

    Memory: 4 kB per element for its blocks while they are summed, and chunks of at most CEILING bytes on top.
    """
    values = np.empty((len(elements.nodes), _FIRST.size, 3, 3))
    flat = straight(elements)
    for chosen, order, points in (
        (np.flatnonzero(flat), STRAIGHT_ORDER, 1),
        (np.flatnonzero(~flat), CURVED_ORDER, 14),
    ):
        for part in chunks(len(chosen), 8 * (495 + 300 * points)):
            values[chosen[part]] = _blocks(elements.take(chosen[part]), order, reduced=points == 1)
    return _scatter(elements, values)


def _blocks(elements: Elements, order: int, *, reduced: bool) -> Floats:
    """Blocks (E, 55, 3, 3) of the node pairs a <= b."""
    at, weights = quadrature(order)
    slope = slopes(at)
    reference = slope[:, _FIRST, :, None] * slope[:, _SECOND, None, :]
    if reduced:
        reference = np.tensordot(weights, reference, axes=1)[None]
        inverse, determinant = jacobians(elements, _CENTRE)
    else:
        inverse, determinant = jacobians(elements, at)
        determinant = determinant * weights
    count, points = determinant.shape
    lame = (elements.lame[:, None] * determinant)[..., None, None]
    shear = (elements.shear[:, None] * determinant)[..., None, None]
    elastic = np.empty((points, 3, 3, count, 3, 3))
    gram = inverse @ inverse.swapaxes(-1, -2) * shear
    for p in range(3):
        for r in range(3):
            outer = inverse[:, :, p, :, None] * inverse[:, :, r, None, :]
            block = lame * outer + shear * outer.swapaxes(-1, -2)
            block[..., (0, 1, 2), (0, 1, 2)] += gram[:, :, p, r, None]
            elastic[:, p, r] = block.swapaxes(0, 1)
    left = reference.transpose(1, 0, 2, 3).reshape(_FIRST.size, -1)
    product = left @ elastic.reshape(points * 9, count * 9)
    return product.reshape(_FIRST.size, count, 3, 3).swapaxes(0, 1)


def _scatter(elements: Elements, values: Floats) -> Any:
    """Sum element blocks (E, 55, 3, 3) into a symmetric matrix of node blocks."""
    from scipy import sparse

    count = len(elements.points)
    first, second = elements.nodes[:, _FIRST].ravel(), elements.nodes[:, _SECOND].ravel()
    values = values.reshape(-1, 3, 3)
    swapped = np.flatnonzero(first > second)
    values[swapped] = values[swapped].swapaxes(1, 2)
    rows, columns = np.minimum(first, second), np.maximum(first, second)
    order = sorted_pairs(rows, columns, count)
    rows, columns = rows[order], columns[order]
    starts = np.flatnonzero(np.append(True, (np.diff(rows) != 0) | (np.diff(columns) != 0)))
    ones = np.ones(len(order))
    gather = sparse.csr_array((ones, order, np.append(starts, len(order))), shape=(len(starts), len(order)))
    upper = (gather @ values.reshape(-1, 9)).reshape(-1, 3, 3)
    return _mirrored(rows[starts], columns[starts], upper, count)


def _mirrored(rows: Ints, columns: Ints, upper: Floats, count: int) -> Any:
    """The symmetric matrix whose blocks on and above the diagonal are given."""
    from scipy import sparse

    strict = np.flatnonzero(rows < columns)
    diagonal = np.flatnonzero(rows == columns)
    upper[diagonal] = (upper[diagonal] + upper[diagonal].swapaxes(1, 2)) / 2
    all_rows, all_columns = np.append(rows, columns[strict]), np.append(columns, rows[strict])
    order = sorted_pairs(all_rows, all_columns, count)
    place = np.empty_like(order)
    place[order] = np.arange(len(order))
    blocks = np.empty((len(order), 3, 3))
    blocks[place[: len(rows)]] = upper
    blocks[place[len(rows) :]] = upper[strict].swapaxes(1, 2)
    starts = np.append(0, np.cumsum(np.bincount(all_rows, minlength=count)))
    size = (3 * count, 3 * count)
    return sparse.bsr_array((blocks, all_columns[order].astype(np.int32), starts.astype(np.int32)), shape=size)


def sorted_pairs(rows: Ints, columns: Ints, count: int) -> Ints:
    """Order that sorts pairs of node numbers by row, then column: two counting sorts."""
    by_column = _counting_sort(columns, count)
    return by_column[_counting_sort(rows[by_column], count)]


def _counting_sort(keys: Ints, count: int) -> Ints:
    """Stable order of keys 0..count − 1: a compressed matrix of one entry a row, turned to columns."""
    from scipy import sparse

    number = np.arange(len(keys) + 1)
    order: Ints = sparse.csr_array((number[:-1], keys, number), shape=(len(keys), count)).tocsc().data
    return order


def mass(elements: Elements) -> Any:
    """Assemble the consistent mass (N, N) [kg] of one component as a CSR array; all three are alike."""
    from scipy import sparse

    at, weights = quadrature(MASS_ORDER)
    shape = shapes(at)
    products = shape[:, :, None] * shape[:, None, :]
    values = np.empty((len(elements.nodes), 10, 10))
    for part in chunks(len(elements.nodes), 8 * 24 * 30):
        _, determinant = jacobians(elements.take(part), at)
        density = elements.density[part, None] * determinant * weights
        values[part] = np.tensordot(density, products, axes=1)
    rows = np.repeat(elements.nodes, 10, axis=1).ravel()
    columns = np.tile(elements.nodes, (1, 10)).ravel()
    count = len(elements.points)
    return sparse.coo_array((values.ravel(), (rows, columns)), shape=(count, count)).tocsr()


def heat_loads(elements: Elements, volumes: int) -> Floats:
    """Nodal forces (3N, V) of 1 K in each volume: ∫ (3λ + 2μ) α ∇φ dV [N/K]."""
    at, weights = quadrature(CURVED_ORDER)
    slope = slopes(at)
    loads = np.zeros((volumes, len(elements.points), 3))
    for part in chunks(len(elements.nodes), 8 * len(at) * 60):
        some = elements.take(part)
        inverse, determinant = jacobians(some, at)
        pressure = (3 * some.lame + 2 * some.shear) * some.expansion
        scaled = inverse * (determinant * weights * pressure[:, None])[..., None, None]
        nodal = np.einsum("qap,eqpi->eai", slope, scaled, optimize=True)
        place = some.volume_of[:, None] * len(elements.points) + some.nodes
        for component in range(3):
            loads[..., component] += np.bincount(
                place.ravel(), nodal[..., component].ravel(), volumes * len(elements.points)
            ).reshape(volumes, -1)
    return loads.reshape(volumes, -1).T.copy()
