"""What one newton on each device does to the faces: where the downforce acts matters more than how much there is.

The wheels answer as in the balance, so a device between the axles sags the engine (top pressed, bottom pulled) and one
outside the wheelbase hogs it.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import FACES, Case, Manoeuvre
from .balance import balance
from .model import LoadCases


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Sensitivity:
    """Section wrench (D, 2, 6) at the front and rear face per newton on each device; N/N and N·m/N."""

    devices: tuple[str, ...]
    section: Floats


def per_downforce(case: Case) -> Sensitivity:
    """Section wrenches per newton of downforce on each device."""
    return _per_newton(case, "downforce")


def per_drag(case: Case) -> Sensitivity:
    """Section wrenches per newton of drag on each device, the driven axle holding the speed; shaft couple left out."""
    return _per_newton(case, "drag")


def _per_newton(case: Case, kind: str) -> Sensitivity:
    down, drag = (1.0, 0.0) if kind == "downforce" else (0.0, 1.0)
    devices = tuple(
        replace(device, downforce_area=down, drag_area=drag, map=None, table=None) for device in case.devices
    )
    unit = Manoeuvre(name=f"one newton of {kind} on each device", speed=1.0, acceleration=np.zeros(3), parts=(kind,))
    cases = balance(replace(case, air_density=2.0, devices=devices), [unit])
    return Sensitivity(
        devices=tuple(device.name for device in devices),
        section=frozen(np.stack([_by_source(cases, face, len(devices)) for face in FACES], axis=1)),
    )


def _by_source(cases: LoadCases, face: str, devices: int) -> Floats:
    signs = np.array((1.0, 1.0, 1.0, 1.0, -1.0, -1.0)) * (1.0 if face == "front" else -1.0)
    wrench: Floats = cases.faces[face].wrench[0, :devices] * signs
    return wrench
