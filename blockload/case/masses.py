"""Masses and inertias: bounds for what is missing, estimates from boxes and discs, and what no body can have."""

from __future__ import annotations

import numpy as np

from ..arrays import Floats, frozen
from .notes import Notes

CORNER_SHARES = (0.025, 0.033, 0.045)
"""One corner's mass as a share of the car's: low, middle, high (unsourced)."""

GEARBOX_SHARES = (0.08, 0.11, 0.14)
"""The gearbox's mass as a share of the car's: low, middle, high (unsourced)."""

_SHARE_SOURCE = "unsourced: usual share of the car's mass"


def bounded_mass(key: str, shares: tuple[float, float, float], total: float, notes: Notes) -> float:
    """Return a missing mass [kg] as the middle of its bound, a share of the car's mass."""
    low, middle, high = (round(share * total, 1) for share in shares)
    notes.bound(key, (f"{low!r} kg", f"{middle!r} kg", f"{high!r} kg"), _SHARE_SOURCE)
    return middle


def estimated_inertia(key: str, inertia: Floats, how: str, notes: Notes) -> Floats:
    """Return missing principal moments (3,) [kg·m²], rounded, and note their bound; `how` says what they come from."""
    rounded = frozen([float(f"{item:.4g}") for item in inertia])
    low, middle, high = (text_of(rounded * factor, "kg*m^2") for factor in (0.6, 1.0, 1.6))
    if notes.turning:
        notes.bound(key, (low, middle, high), f"estimated from {how}, 0.6 and 1.6 times; unsourced")
    else:
        notes.default(
            key, middle, f"estimated from {how}, unsourced; no manoeuvre here turns the car, so it moves nothing"
        )
    return rounded


def text_of(values: Floats, unit: str) -> str:
    """Return a vector as the case file writes it, to six figures."""
    return f"({', '.join(f'{float(item):.6g}' for item in values)}) {unit}"


def check_inertia(key: str, moments: Floats, notes: Notes) -> None:
    """Refuse principal moments (3,) that no body can have: one not above 0, or above the sum of the other two."""
    ordered = np.sort(moments)
    if ordered[0] <= 0.0:
        notes.problem(
            key, f"{text_of(moments, 'kg*m^2')} has a moment that is not positive", "three above 0", "check the signs"
        )
    elif ordered[2] > ordered[0] + ordered[1] + 1e-9 * ordered[2]:
        found = (
            f"{text_of(moments, 'kg*m^2')} is no body's inertia: {ordered[2]:.4g} is more than the other two together"
        )
        notes.problem(key, found, "each principal moment at most the sum of the others", "check numbers and unit")
