"""What the crank does to the engine block and to what hangs behind it.

The clutch passes T_e = (torque of the driven wheels) / (overall ratio), losses left out. With s the sign of crank
rotation about +x, the input shaft puts s T_e on the gearbox and -s T_e on the engine: the studs of the rear face carry
it back, those of the front face see nothing of it. A changing crank speed leaves -s I (d omega/dt) on the engine, which
the wheels answer.
"""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..case.model import Case
from .bodies import Chassis
from .manoeuvres import DRIVEN, Inputs


def crank_torque(case: Case, inputs: Inputs, frame: Chassis, along: Floats) -> Floats:
    """Crank torque T_e (C,) from the tyre force along x of each axle (C, 2); nan without ratio, 0 while braking."""
    driven = np.array(DRIVEN[case.drive.axle]) > 0
    wheels = (along * frame.radius[::2] * driven).sum(axis=-1) * ~inputs.brake
    torque: Floats = wheels / inputs.ratio * inputs.keep["crank"]
    return torque


def crank_couples(case: Case, inputs: Inputs, names: tuple[str, ...], torque: Floats) -> Floats:
    """Couples (C, S) about x on the engine block: from the input shaft and from the crank's inertia."""
    couple = np.zeros((len(inputs.names), len(names)))
    couple[:, names.index("crank")] = -case.drive.crank_direction * np.nan_to_num(torque)
    couple[:, names.index("crank_inertia")] = inertia_couple(case, inputs)
    return couple


def inertia_couple(case: Case, inputs: Inputs) -> Floats:
    """The couple (C,) about x that a changing crank speed leaves on the engine (d'Alembert)."""
    inertia = case.drive.crank_inertia or 0.0
    return -case.drive.crank_direction * inertia * inputs.crank_rate * inputs.keep["crank_inertia"]
