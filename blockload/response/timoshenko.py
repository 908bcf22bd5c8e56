"""Three-dimensional Timoshenko beam elements: 12×12 stiffness and consistent mass, exact for uniform elements.

A node has u_x u_y u_z θ_x θ_y θ_z at a point of a straight reference line along local x; the section may lie anywhere
about it. Strains ε = u_x', γ_y = u_y' − θ_z, γ_z = u_z' + θ_y, κ = θ' answer the section's forces s = C e. Without
load between the nodes statics alone give the forces of every section from those of the far end q,

    s(x) = B(x) q,   f = ∫ Bᵀ C⁻¹ B dx,   k = Γ f⁻¹ Γᵀ,   Γ = (−B(0); 1)

so k is exact for any C, coupled as it may be (eccentric centroid, shear centre off it, oblique principal axes); for a
symmetric section it is the matrix of Przemieniecki, Theory of Matrix Structural Analysis (1968), section 5.6, with
shear. The motion u(x) that goes with it interpolates the consistent mass. Arrays have elements along the first axis.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ..arrays import Floats, Ints

_CROSS_X = np.array([[0.0, 0.0, 0.0], [0.0, 0.0, -1.0], [0.0, 1.0, 0.0]])  # e_x ×


def carried_over(away: Floats) -> Floats:
    """Return B (..., 6, 6): a wrench moved back by `away` along x, keeping its force."""
    result = np.broadcast_to(np.eye(6), (*np.shape(away), 6, 6)).copy()
    result[..., 3:, :3] = np.multiply.outer(away, _CROSS_X)
    return result


def _gauss(count: int, length: Floats) -> tuple[Floats, Floats]:
    """Points and weights (n, count) over elements of these lengths."""
    at, weight = np.polynomial.legendre.leggauss(count)
    return np.multiply.outer(length, (at + 1) / 2), np.multiply.outer(length, weight / 2)


def end_flexibility(length: Floats, section: Floats) -> Floats:
    """Return f (n, 6, 6): motion of the far end for unit forces there, the near end held."""
    at, weight = _gauss(2, length)
    moved = carried_over(length[:, None] - at)
    compliance = np.linalg.inv(section)
    result: Floats = np.einsum("nq,nqai,nab,nqbj->nij", weight, moved, compliance, moved, optimize=True)
    return result


def stiffness(length: Floats, section: Floats) -> Floats:
    """Return k (n, 12, 12) of elements of length (n,) [m] and section stiffness (n, 6, 6)."""
    ends = np.concatenate([-carried_over(length), np.broadcast_to(np.eye(6), (len(length), 6, 6))], axis=1)
    k = ends @ np.linalg.inv(end_flexibility(length, section)) @ ends.transpose(0, 2, 1)
    return np.asarray((k + k.transpose(0, 2, 1)) / 2)


def shapes(length: Floats, section: Floats, at: Floats) -> Floats:
    """Return the motion (n, q, 6, 12) at places (n, q) along the elements for unit motion of their ends."""
    points, weights = _gauss(2, np.ones(1))
    inner = at[:, :, None] * points[0]
    rigid = carried_over(at[:, :, None] - inner).swapaxes(-1, -2)
    moved = carried_over(length[:, None, None] - inner)
    strain = np.linalg.inv(section)[:, None, None] @ moved
    own = np.einsum("nq,p,nqpij->nqij", at, weights[0], rigid @ strain)
    own = own @ np.linalg.inv(end_flexibility(length, section))[:, None]
    far = carried_over(length).transpose(0, 2, 1)[:, None]
    return np.concatenate([carried_over(at).swapaxes(-1, -2) - own @ far, own], axis=-1)


def mass(length: Floats, section: Floats, per_length: Floats) -> Floats:
    """Return the consistent mass (n, 12, 12) for a mass (n, 6, 6) per length."""
    at, weight = _gauss(4, length)
    N = shapes(length, section, at)
    m = np.einsum("nq,nqai,nab,nqbj->nij", weight, N, per_length, N, optimize=True)
    return np.asarray((m + m.transpose(0, 2, 1)) / 2)


def spread_load(length: Floats, section: Floats, per_length: Floats) -> Floats:
    """Return the nodal loads (n, 12) of an even wrench (n, 6) per length."""
    at, weight = _gauss(2, length)
    result: Floats = np.einsum("nq,nqai,na->ni", weight, shapes(length, section, at), per_length)
    return result


def turned(matrix: Floats, axes: Floats) -> Floats:
    """Return matrices (n, 12, 12) or loads (n, 12) in the frame's axes; `axes` (n, 3, 3) has the local ones as rows."""
    turn = np.zeros((len(axes), 12, 12))
    for k in range(0, 12, 3):
        turn[:, k : k + 3, k : k + 3] = axes
    if matrix.ndim == 2:
        return np.asarray(np.einsum("nij,ni->nj", turn, matrix))
    return np.asarray(turn.transpose(0, 2, 1) @ matrix @ turn)


def assembled(ends: Ints | Sequence[Sequence[int]], matrices: Floats, count: int) -> Floats:
    """Return the sum (6N, 6N) of element matrices between nodes `ends` (n, 2), or (6N,) of element loads."""
    rows = (6 * np.asarray(ends)[:, :, None] + np.arange(6)).reshape(len(matrices), 12)
    if matrices.ndim == 2:
        return np.asarray(np.bincount(rows.ravel(), matrices.ravel(), 6 * count), dtype=float)
    total = np.zeros((6 * count, 6 * count))
    np.add.at(total, (rows[:, :, None], rows[:, None, :]), matrices)
    return total


def rigid_arm(arm: Floats) -> Floats:
    """Return the motion (..., 6, 6) of a point at `arm` (..., 3) from a node, rigidly joined to it."""
    x, y, z = np.moveaxis(np.asarray(arm, dtype=float), -1, 0)
    result = np.broadcast_to(np.eye(6), (*x.shape, 6, 6)).copy()
    result[..., 0, 4], result[..., 0, 5] = z, -y
    result[..., 1, 3], result[..., 1, 5] = -z, x
    result[..., 2, 3], result[..., 2, 4] = y, -x
    return result
