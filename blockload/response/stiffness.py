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
    """Assemble the stiffness (3N, 3N) [N/m] as a symmetric CSR array with sorted indices."""
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
    """Sum element blocks into a symmetric matrix of node blocks."""
    from scipy import sparse

    count = len(elements.points)
    first, second = elements.nodes[:, _FIRST], elements.nodes[:, _SECOND]
    swap = first > second
    values = values.reshape(-1, 3, 3)
    swapped = np.flatnonzero(swap.ravel())
    values[swapped] = values[swapped].swapaxes(1, 2)
    keys = (np.minimum(first, second) * count + np.maximum(first, second)).ravel()
    order, starts = _group(keys)
    gather = sparse.csr_array(
        (np.ones(len(order)), order, np.append(starts, len(order))), shape=(len(starts), len(order))
    )
    blocks = (gather @ values.reshape(-1, 9)).reshape(-1, 3, 3)
    rows, columns = np.divmod(keys[order[starts]], count)
    strict = rows < columns
    blocks[~strict] = (blocks[~strict] + blocks[~strict].swapaxes(1, 2)) / 2
    upper = _block_rows(rows, columns, blocks, count)
    lower = _block_rows(columns[strict], rows[strict], blocks[strict].swapaxes(1, 2), count)
    full = (upper + lower).tocsr()
    full.sort_indices()
    return full


def _group(keys: Ints) -> tuple[Ints, Ints]:
    """Order that sorts the keys, and where each new key starts in it."""
    order = np.argsort(keys, kind="stable")
    ordered = keys[order]
    starts = np.flatnonzero(np.append(True, ordered[1:] != ordered[:-1]))
    return order, starts


def _block_rows(rows: Ints, columns: Ints, blocks: Floats, count: int) -> Any:
    """Blocks at (rows, columns) as a block-sparse matrix of `count` block rows."""
    from scipy import sparse

    order = np.lexsort((columns, rows))
    starts = np.searchsorted(rows[order], np.arange(count + 1))
    return sparse.bsr_array((blocks[order], columns[order], starts), shape=(3 * count, 3 * count))


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
