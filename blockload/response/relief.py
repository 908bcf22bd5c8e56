"""A free body: rigid modes, inertia relief and six auxiliary constraints.

A load f on a free body accelerates it; d'Alembert's forces balance it, f̂ = f − MΦ(ΦᵀMΦ)⁻¹Φᵀf, with Φ the rigid
modes and M the mass matrix, so Φᵀf̂ = 0. K u = f̂ is then solvable with any six
unknowns held that stop rigid motion; their reactions vanish. Which six is a matter of conditioning alone, so they are
chosen by QR with column pivoting on Φᵀ (Golub & Van Loan, Matrix Computations, 4th ed. 2013, section 5.4.2).
The rigid part of u is removed afterwards, u ← u − Φ(ΦᵀMΦ)⁻¹ΦᵀM u.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ..arrays import Floats, Ints


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class FreeBody:
    """Rigid modes Φ (3N, 6) about the body's cg, MΦ (3N, 6) and the inverse of ΦᵀMΦ (6, 6), with mass and cg."""

    modes: Floats
    weighted: Floats
    inverse: Floats
    mass: float
    cg: Floats
    inertia: Floats

    def balance(self, loads: Floats) -> Floats:
        """Add the d'Alembert forces of the acceleration that `loads` (3N, k) cause."""
        return loads - self.weighted @ (self.inverse @ (self.modes.T @ loads))

    def strip(self, motion: Floats) -> Floats:
        """Remove the rigid part of a motion (3N, k)."""
        return motion - self.modes @ (self.inverse @ (self.weighted.T @ motion))

    def held(self, allowed: Ints | None = None) -> Ints:
        """Six unknowns (among `allowed`) that stop rigid motion best, by pivoted QR."""
        from scipy.linalg import qr

        radius = np.sqrt(np.trace(self.inertia) / self.mass)
        rows = self.modes / np.array([1.0] * 3 + [radius] * 3)
        if allowed is not None:
            rows = rows[allowed]
        pivots = qr(rows.T, mode="economic", pivoting=True)[2][:6].astype(np.int64)
        return np.sort(pivots if allowed is None else allowed[pivots])


def rigid_modes(points: Floats, centre: Floats) -> Floats:
    """Translations and rotations about `centre` of points (N, 3), as (3N, 6)."""
    arm = points - centre
    modes = np.zeros((len(points), 3, 6))
    modes[:, (0, 1, 2), (0, 1, 2)] = 1.0
    modes[:, (0, 1, 2), (4, 5, 3)] = arm[:, (2, 0, 1)]
    modes[:, (0, 1, 2), (5, 3, 4)] = -arm[:, (1, 2, 0)]
    return modes.reshape(-1, 6)


def free_body(points: Floats, mass: Any) -> FreeBody:
    """Weigh the body: `mass` is the consistent mass (N, N) of one component."""
    lumped = np.asarray(mass.sum(axis=1)).ravel()
    total = float(lumped.sum())
    cg = lumped @ points / total
    modes = rigid_modes(points, cg)
    weighted = (mass @ modes.reshape(len(points), 18)).reshape(-1, 6)
    generalised = modes.T @ weighted
    inertia = (generalised[3:, 3:] + generalised[3:, 3:].T) / 2
    return FreeBody(
        modes=modes,
        weighted=weighted,
        inverse=np.linalg.inv(generalised),
        mass=total,
        cg=cg,
        inertia=inertia,
    )


def hold(matrix: Any, held: Ints) -> Any:
    """The matrix with rows and columns of the held unknowns emptied, their diagonal kept; symmetric still."""
    result = matrix.copy()
    for node, component in zip(*np.divmod(held, 3), strict=True):
        own = slice(matrix.indptr[node], matrix.indptr[node + 1])
        neighbours = matrix.indices[own]
        stiff = result.data[own][neighbours == node][0, component, component]
        result.data[own, component, :] = 0.0
        for other in neighbours:
            start, stop = matrix.indptr[other], matrix.indptr[other + 1]
            place = start + np.searchsorted(matrix.indices[start:stop], node)
            result.data[place, :, component] = 0.0
        place = own.start + np.searchsorted(neighbours, node)
        result.data[place, component, component] = stiff
    return result
