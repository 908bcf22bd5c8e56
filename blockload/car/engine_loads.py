"""Loads that enter the engine at a place of their own rather than through its faces."""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..case.model import CORNERS, Case
from .aero import device_load
from .bodies import Chassis
from .manoeuvres import Inputs
from .model import LocalLoad
from .sources import ENGINE
from .suspension import AxleMap, pickup_load
from .wrench import sealed


def engine_loads(
    case: Case, inputs: Inputs, frame: Chassis, maps: tuple[AxleMap, AxleMap], shaft: Floats, wrenches: Floats
) -> tuple[LocalLoad, ...]:
    """Devices, links (or whole corners) and half-shaft couples that the engine itself carries.

    `shaft` (C, S, 4) is the torque of each half-shaft on its wheel, `wrenches` (C, S, 4, 6) those of the corners.
    """
    result = []
    for k, device in enumerate(case.devices):
        if device.on == "engine":
            load = np.zeros((*shaft.shape[:2], 6))
            load[:, k] = np.hstack(device_load(k, inputs.air, inputs.pressure, inputs.keep))
            result.append(_local(f"aero.{device.name}", device.attachment, device.at, load))
    for axle in maps:
        for pickup in axle.pickups:
            if pickup.body == ENGINE:
                load = pickup_load(pickup, wrenches)
                result.append(_local(pickup.name, pickup.attachment, pickup.at, load))
    for i, corner in enumerate(CORNERS):
        if frame.casing[i] == ENGINE and shaft[:, :, i].any():
            load = np.zeros((*shaft.shape[:2], 6))
            load[..., 4] = -shaft[:, :, i]
            result.append(_local(f"half-shaft.{corner}", None, frame.wheel_centre[i], load))
    return tuple(result)


def _local(name: str, attachment: str | None, at: Floats, load: Floats) -> LocalLoad:
    return LocalLoad(name=name, attachment=attachment, at=at, force=sealed(load[..., :3]), moment=sealed(load[..., 3:]))
