"""How far any body is from equilibrium, reassembled from the lines of its free-body table."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import numpy as np

from ..arrays import Floats
from ..errors import BalanceError
from .bodies import Masses
from .model import BODIES, Term

LIMIT = 1e-6
_FLOOR = 1e-9  # of the car's largest sum: below it a body's loads are rounding, not loads
_ARM = 1.0  # m: turns that floor into a moment


def residuals(terms: Iterable[Term], car: Masses, cases: int) -> Floats:
    """Residual (C, B) of each body: the larger of force and moment sums over the sums of their magnitudes.

    Moments are about the body's cg; the magnitudes of a moment sum count r x F and couples apart.
    """
    force, moment = np.zeros((cases, 7, 3)), np.zeros((cases, 7, 3))
    force_size, moment_size = np.zeros((cases, 7)), np.zeros((cases, 7))
    for term in terms:
        b = BODIES.index(term.body)
        arm = np.cross(np.broadcast_to(np.asarray(term.at) - car.cg[b], term.force.shape), term.force)
        force[:, b] += term.force
        moment[:, b] += term.moment + arm
        force_size[:, b] += np.linalg.norm(term.force, axis=-1)
        moment_size[:, b] += np.linalg.norm(term.moment, axis=-1) + np.linalg.norm(arm, axis=-1)
    scale = _FLOOR * np.maximum(force_size, moment_size / _ARM).max(axis=1, keepdims=True)
    return np.maximum(
        _ratio(np.linalg.norm(force, axis=-1), np.maximum(force_size, scale)),
        _ratio(np.linalg.norm(moment, axis=-1), np.maximum(moment_size, scale * _ARM)),
    )


def refuse(residual: Floats, names: Sequence[str]) -> None:
    """Raise BalanceError for the worst body of residuals (C, B) if it is not in equilibrium."""
    if np.all(residual <= LIMIT):
        return
    worst = np.where(np.isnan(residual), np.inf, residual)
    c, b = (int(k) for k in np.unravel_index(int(worst.argmax()), worst.shape))
    raise BalanceError(
        f"load case {names[c]!r}, body {BODIES[b]}",
        f"the forces on it leave a residual of {residual[c, b]:.2g} of their magnitudes",
        f"at most {LIMIT:g}",
        "look for a figure that is not a number or absurdly large in the case file; otherwise this is our own fault",
    )


def _ratio(value: Floats, size: Floats) -> Floats:
    return np.divide(value, size, out=np.zeros_like(value), where=size != 0)
