"""Which load cases ask more of an axle than its tyres hold.

Blows at the wheels, towing and cars on supports are not driven by grip and are left out; so is a case of chosen parts.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from ..arrays import Floats
from ..case.model import Case
from .bodies import AXLES
from .limits import axle_use
from .model import LoadCases

SLACK = 2e-3  # a crank's own couple moves load between two tyres at their limit by this much
_NOT_DRIVEN = ("extra.", "point.")


def grip_used(case: Case, cases: LoadCases) -> Floats:
    """Share of its grip that each axle uses, (C, 2); nan where friction is unknown or grip does not drive the case."""
    wheels = cases.wheels.reshape(-1, 2, 2, 3)
    if case.tyres.mu_x is None and case.tyres.mu_y is None:
        return np.full(wheels.shape[:2], np.nan)
    loads = np.maximum(wheels[..., 2], 0.0)
    used = axle_use(case, wheels[..., 0].sum(axis=-1), wheels[..., 1].sum(axis=-1), loads)
    other = [s for s, name in enumerate(cases.sources) if name.startswith(_NOT_DRIVEN)]
    blows = cases.wheel_force[:, other].any(axis=(1, 2, 3))
    struck = np.logical_or(blows, cases.acceleration[:, other].any(axis=(1, 2)))
    result: Floats = np.where(struck[:, None], np.nan, used)
    return result


def grip_notes(case: Case, cases: LoadCases) -> Iterator[str]:
    """Sentences on load cases beyond the grip of an axle, worst axle first in each."""
    used = grip_used(case, cases)
    for c, name in enumerate(cases.names):
        beyond = [k for k in np.argsort(-np.nan_to_num(used[c])) if used[c, k] > 1.0 + SLACK]
        if beyond:
            words = " and ".join(f"the {AXLES[k]} axle {used[c, k]:.3g} times" for k in beyond)
            yield (
                f"{name}: asks of {words} what its tyres hold; lower the accelerations of [performance] or the "
                "manoeuvre, or correct [tyres]"
            )
