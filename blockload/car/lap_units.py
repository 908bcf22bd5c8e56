"""Unit loads of a car: what acts on its bodies per unit of each number that changes along a lap.

Worked out by the rules of single load cases, so that the two cannot differ.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import CARRIERS, CORNERS, Case, Manoeuvre
from .aero import check_devices
from .aero_split import only_totals, splits, with_middle_split
from .aero_totals import refuse_wrong_total
from .bodies import Chassis, Masses, chassis, masses
from .manoeuvres import read
from .model import BODIES
from .sources import elementary, source_names
from .suspension import AxleMap, axle_maps
from .wrench import wrench


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class UnitLoads:
    """What does not change from sample to sample of a lap.

    still (7, 6): weight; per_a (3, 7, 6), per_rate (7, 6), per_device (6 D, 7, 6): loads on the bodies per unit of
    acceleration, crank acceleration, and force and moment of each device; per_kick (4, 7, 6) and kick_motion (4, 6):
    loads on the bodies and motion of the car per unit of vertical force at a contact point.
    """

    case: Case
    car: Masses
    frame: Chassis
    maps: tuple[AxleMap, AxleMap]
    still: Floats
    per_a: Floats
    per_rate: Floats
    per_device: Floats
    per_kick: Floats
    kick_motion: Floats
    block_torsion: float | None


def unit_loads(case: Case, block_torsion: float | None) -> UnitLoads:
    """Work out the unit loads; where only totals of the aero are known, at the mean of the extreme splits."""
    if only_totals(case):
        case = with_middle_split(case, splits(case))
    check_devices(case)
    refuse_wrong_total(case)
    car, frame = masses(case), chassis(case)
    rated = case.drive.crank_inertia is not None
    units = [(0.0, 0.0, 0.0), (1.0, 0.0, 0.0), (0.0, 1.0, 0.0), (0.0, 0.0, 1.0)]
    probes = [_probe(acceleration=frozen(a)) for a in units]
    probes.append(_probe(crank_acceleration=1.0 if rated else 0.0))
    probes += [_probe(extra_wheel_force={corner: frozen((0.0, 0.0, 1.0))}) for corner in CORNERS]
    inputs = read(case, probes)
    found = elementary(case, inputs, source_names(case, inputs), car, frame)
    loads, motion = found.loads.sum(axis=1), found.motion.sum(axis=1)
    return UnitLoads(
        case=case,
        car=car,
        frame=frame,
        maps=axle_maps(case, frame),
        still=loads[0],
        per_a=loads[1:4] - loads[0],
        per_rate=loads[4] - loads[0],
        per_device=_device_units(case),
        per_kick=loads[5:] - loads[0],
        kick_motion=motion[5:] - motion[0],
        block_torsion=block_torsion,
    )


def _probe(**what: Any) -> Manoeuvre:
    return Manoeuvre(**{"name": "unit", "acceleration": frozen(np.zeros(3)), "drive": "accelerate"} | what)


def _device_units(case: Case) -> Floats:
    """Loads (6 D, 7, 6) on the bodies of unit forces and moments at the devices' points."""
    units = np.zeros((len(case.devices), 6, len(BODIES), 6))
    for k, device in enumerate(case.devices):
        body = CARRIERS.index(device.on)
        units[k, :3, body] = wrench(np.eye(3), device.at)
        units[k, 3:, body, 3:] = np.eye(3)
    return units.reshape(-1, len(BODIES), 6)
