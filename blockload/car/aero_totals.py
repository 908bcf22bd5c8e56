"""What the aero devices add up to: totals and balance recomputed, maps read at the ride heights they cause.

The front share is given by both conventions: with the load that drag moves from the front to the rear axle, and
without. It is the front axle's load under the aero alone over the whole downforce.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import ArrayLike

from ..arrays import Floats, frozen
from ..case.model import Case, Device, Manoeuvre
from ..errors import CaseError
from ..units import show
from .aero import device_load
from .aero_split import only_totals, splits, with_middle_split
from .bodies import masses
from .manoeuvres import read
from .ride_height import in_the_air
from .wrench import wrench

FORCE_TOLERANCE = 0.005
SHARE_TOLERANCE = 0.005


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Totals:
    """Aero of the straight-running car at n speeds.

    downforce, drag (n, D) of each device [N]; share_with, share_without (n,): the front axle's share of the downforce
    with and without the drag moment (nan without downforce); ride_height (n, 2) [m], nan where no map asks for it;
    outside (n,): which map was read beyond its grid.
    """

    speed: Floats
    devices: tuple[str, ...]
    downforce: Floats
    drag: Floats
    share_with: Floats
    share_without: Floats
    ride_height: Floats
    outside: tuple[str, ...]


def totals(case: Case, speeds: ArrayLike, *, state: str | None = None) -> Totals:
    """Downforce, drag and balance at speeds [m/s], recomputed from the devices.

    Maps are read at zero yaw and steer, in the named state (else their default, else their first), and beyond their
    grid at its edge, which is marked. A case with totals alone stands at its middle split.
    """
    case = as_devices(case)
    values = np.atleast_1d(np.asarray(speeds, dtype=float))
    straight = [
        Manoeuvre(name=f"straight at {v:g} m/s", speed=float(v), acceleration=np.zeros(3), state=state) for v in values
    ]
    inputs = in_the_air(case, read(case, straight), masses(case))
    whole, still = np.zeros((len(values), 6)), np.zeros((len(values), 6))
    downforce, drag = np.zeros((2, len(values), len(case.devices)))
    without = {**inputs.keep, "drag": np.zeros(len(values))}
    for k, device in enumerate(case.devices):
        for total, keep in ((whole, inputs.keep), (still, without)):
            force, moment = device_load(k, inputs.air, inputs.pressure, keep)
            total += wrench(force, device.at)
            total[:, 3:] += moment
        downforce[:, k], drag[:, k] = -inputs.pressure * inputs.air.area[:, k, (0, 1), (2, 0)].T
    return Totals(
        speed=frozen(values),
        devices=tuple(device.name for device in case.devices),
        downforce=frozen(downforce),
        drag=frozen(drag),
        share_with=_front_share(case, whole),
        share_without=_front_share(case, still),
        ride_height=frozen(inputs.air.ride_height),
        outside=inputs.air.outside,
    )


def refuse_wrong_total(case: Case) -> None:
    """Raise CaseError where devices with maps do not add up to [aero_total]; the reader checks constant ones."""
    stated = case.aero_total
    if stated is None or not any(device.table is not None for device in case.devices):
        return
    found = totals(case, stated.at_speed)
    down, drag = float(found.downforce.sum()), float(found.drag.sum())
    listed = ", ".join(f"{name} {show(f, 'kN')}" for name, f in zip(found.devices, found.downforce[0], strict=True))
    for key, said, summed in (("downforce", stated.downforce, down), ("drag", stated.drag, drag)):
        if said is not None and abs(summed - said) > FORCE_TOLERANCE * abs(said):
            raise CaseError(
                f"[aero_total] {key}",
                f"{show(said, 'kN', 4)} is stated, but the devices sum to {show(summed, 'kN', 4)} ({listed})",
                "agreement within 0.5 %",
                "look for a device counted twice, inside another's figure, or left out",
            )
    share = float((found.share_with if stated.share_includes_drag_moment else found.share_without)[0])
    if abs(share - stated.front_share) > SHARE_TOLERANCE:
        raise CaseError(
            "[aero_total] front_share",
            f"{stated.front_share:.4g} is stated {'with' if stated.share_includes_drag_moment else 'without'} the drag "
            f"moment, but the devices give {found.share_with[0]:.4f} with it and {found.share_without[0]:.4f} without",
            "agreement within 0.005",
            "check share_includes_drag_moment first, then where the devices act and in what state the total was found",
        )


def as_devices(case: Case) -> Case:
    """Return the case with devices that answer everywhere: totals split in the middle, maps clamped, in some state."""
    if only_totals(case):
        case = with_middle_split(case, splits(case))
    return replace(case, devices=tuple(_answering(device) for device in case.devices))


def _answering(device: Device) -> Device:
    if device.table is None or not device.table.states:
        return replace(device, outside="clamp")
    first = device.table.default_state or device.table.states[0]
    return replace(device, outside="clamp", table=replace(device.table, default_state=first))


def _front_share(case: Case, total: Floats) -> Floats:
    front, rear = case.axles["front"].x, case.axles["rear"].x
    load = (total[:, 4] + rear * total[:, 2]) / (front - rear)  # of the front axle, as in the wheels' two supports
    return frozen(np.divide(load, -total[:, 2], out=np.full_like(load, np.nan), where=total[:, 2] != 0))
