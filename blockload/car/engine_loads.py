"""Loads that enter the engine at a place of their own rather than through its faces."""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..case.model import CORNERS, Case
from .aero import device_force
from .bodies import Chassis
from .corners import CornerLoads
from .manoeuvres import Inputs
from .model import LocalLoad
from .sources import ENGINE
from .wrench import moved, sealed


def engine_loads(case: Case, inputs: Inputs, frame: Chassis, corners: CornerLoads) -> tuple[LocalLoad, ...]:
    """Devices, and the resultants of corners, that the engine itself carries."""
    result = []
    for k, device in enumerate(case.devices):
        if device.on == "engine":
            load = np.zeros((*corners.shaft.shape[:2], 6))
            load[:, k, :3] = device_force(device, inputs)
            result.append(_local(f"aero.{device.name}", device.attachment, device.at, load))
    for i, corner in enumerate(CORNERS):
        if frame.carrier[i] == ENGINE:
            centre = frame.wheel_centre[i]
            load = moved(corners.resultant[:, :, i], centre)
            if frame.casing[i] == ENGINE:
                load[..., 4] -= corners.shaft[:, :, i]
            result.append(_local(f"corner.{corner}", None, centre, load))
    return tuple(result)


def _local(name: str, attachment: str | None, at: Floats, load: Floats) -> LocalLoad:
    return LocalLoad(name=name, attachment=attachment, at=at, force=sealed(load[..., :3]), moment=sealed(load[..., 3:]))
