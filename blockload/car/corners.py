"""What the four corners hand on: one wrench each on the body that carries them.

A half-shaft (driven wheel, inboard brake) brings T_w = R Fx onto the wheel and takes it from the casing, so the links
see Fx at hub height. Where casing and carrier are one body, the sum on that body is R Fx at the ground either way.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import Floats
from ..case.model import Case
from .bodies import AXLES, Chassis
from .manoeuvres import DRIVEN, Inputs
from .wrench import wrench


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class CornerLoads:
    """resultant (C, S, 4, 6) of each corner on its carrier, about the origin; shaft (C, S, 4): T_w on the wheel."""

    resultant: Floats
    shaft: Floats


def corner_loads(case: Case, inputs: Inputs, frame: Chassis, own: Floats, tyre: Floats) -> CornerLoads:
    """Resultants from each corner's own loads (C, S, 4, 6), weight and inertia included, and tyre forces (C, S, 4, 3).

    Extra wheel forces belong in `own`: they roll the wheel or meet its brake, but no torque of drive or braking.
    """
    shaft = _through_shaft(case, inputs)[:, None, :] * frame.radius * tyre[..., 0]
    resultant = own + wrench(tyre, frame.contact)
    resultant[..., 4] += shaft
    return CornerLoads(resultant=resultant, shaft=shaft)


def _through_shaft(case: Case, inputs: Inputs) -> Floats:
    """Ones (C, 4) where the wheel's torque comes through a half-shaft, zeros where it stays in the corner."""
    driven = np.array(DRIVEN[case.drive.axle]) > 0
    inboard = np.array([case.axles[name].brakes == "inboard" for name in AXLES])
    axles = np.where(inputs.brake[:, None], inboard, driven)
    return np.repeat(axles, 2, axis=1).astype(float)
