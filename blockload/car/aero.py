"""Aero devices: forces q (-Cx A, 0, -Cz A) at the device's own point on its own body, q = rho v^2 / 2."""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..case.model import CARRIERS, Case, Device
from ..errors import CaseError
from .manoeuvres import Inputs


def device_force(device: Device, inputs: Inputs) -> Floats:
    """Force (C, 3) of one device, as far as the cases keep its downforce and drag."""
    force = np.zeros((len(inputs.names), 3))
    force[:, 0] = -inputs.pressure * device.drag_area * inputs.keep["drag"]
    force[:, 2] = -inputs.pressure * device.downforce_area * inputs.keep["downforce"]
    return force


def check_devices(case: Case) -> None:
    """Refuse aero that would be left out silently."""
    if case.aero_total is not None and not case.devices:
        raise CaseError(
            "[aero_total]",
            "given without any [aero.NAME] device",
            "one table per device; the total is a cross-check",
            "list the devices: the same downforce on the floor or on a wing loads the engine differently",
        )
    for device in case.devices:
        if device.on not in CARRIERS:
            raise CaseError(f"[aero.{device.name}] on", repr(device.on), ", ".join(CARRIERS))
        if device.map is not None:
            raise CaseError(
                f"[aero.{device.name}] map",
                str(device.map),
                "downforce_area and drag_area, or a force at a speed",
                "maps are not used yet: give the areas at the speed that matters",
            )
