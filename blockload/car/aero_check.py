"""What each aero device does to the faces and studs, and what looks wrong about it.

The same downforce on the floor or on a wing loads the engine differently, even with another sign; so does the body
that carries it. Nothing here changes a load: it shows which figure decides.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import CARRIERS, FACES, Case, Device, Manoeuvre
from .aero_split import only_totals
from .aero_totals import as_devices
from .balance import balance
from .model import LoadCases

_KILONEWTON = 1000.0


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Influence:
    """What one kilonewton of downforce on each device does, the wheels answering.

    section (D, 2, 6) [N, N·m] at the front and rear face, in the order of SECTION; axial and shear map a face to its
    studs' forces (D, n) and (D, n, 2) [N]; moved (D, 3, 2, 6) is the section were the device carried by the tub, the
    engine or the gearbox.
    """

    devices: tuple[str, ...]
    on: tuple[str, ...]
    section: Floats
    axial: dict[str, Floats]
    shear: dict[str, Floats]
    moved: Floats


def per_kilonewton(case: Case) -> Influence:
    """Section wrenches and stud forces per kilonewton of downforce on each device, and were it carried elsewhere."""
    case = replace(case, devices=case.aero_split) if only_totals(case) else as_devices(case)
    bodies = [device.on for device in case.devices]
    own = _unit_cases(case, case.devices)
    elsewhere = [replace(device, on=body) for device in case.devices for body in CARRIERS]
    count = len(case.devices)
    return Influence(
        devices=tuple(device.name for device in case.devices),
        on=tuple(bodies),
        section=_sections(own, count),
        axial={name: frozen(face.stud_axial[0, :count]) for name, face in own.faces.items()},
        shear={name: frozen(face.stud_shear[0, :count]) for name, face in own.faces.items()},
        moved=frozen(_sections(_unit_cases(case, elsewhere), len(elsewhere)).reshape(count, len(CARRIERS), 2, 6)),
    )


def factor_on_aero(case: Case, cases: LoadCases) -> Floats:
    """Downforce of each load case over that of the same car at its speed, unfactored, (C,); nan without downforce.

    Above 1, a dynamic factor, meant for masses, has been put on the air as well; below, some of it was left out (0
    where a case keeps no downforce). nan too for a car with a map, whose area is not one number.
    """
    if any(device.table is not None for device in case.devices):
        return np.full(len(cases.names), np.nan)
    area = sum(device.downforce_area for device in as_devices(case).devices)
    own = 0.5 * case.air_density * cases.speed**2 * area
    result: Floats = np.divide(cases.downforce, own, out=np.full_like(own, np.nan), where=own != 0)
    return result


def remarks(case: Case) -> tuple[str, ...]:
    """What looks wrong about the devices of a case: carried by the wrong body, or pushing the wrong way."""
    found = []
    front, rear = (case.faces[name].x for name in FACES)
    for device in case.devices:
        x = float(device.at[0])
        if device.on == "gearbox" and x > front:
            found.append(_misplaced(device, f"{x:.3f} m, ahead of the front face at {front:.3f} m"))
        if device.on == "tub" and x < rear:
            found.append(_misplaced(device, f"{x:.3f} m, behind the rear face at {rear:.3f} m"))
        down, drag = _span(device)
        if down[1] < 0:
            found.append(f"[aero.{device.name}] lifts the car everywhere: is the sign of its downforce right?")
        elif down[0] < 0 < down[1]:
            found.append(f"[aero.{device.name}] lifts in part of its map")
        if drag[0] < 0:
            found.append(f"[aero.{device.name}] pushes the car forward: is the sign of its drag right?")
    return tuple(found)


def _misplaced(device: Device, place: str) -> str:
    return (
        f"[aero.{device.name}] is carried by the {device.on} but acts at x = {place}: its load then crosses a face it "
        "may not cross in the car; see what changes if another body carries it"
    )


def _span(device: Device) -> tuple[tuple[float, float], tuple[float, float]]:
    """Least and greatest area of downforce and of drag."""
    if device.table is None:
        return (device.downforce_area,) * 2, (device.drag_area,) * 2
    values = device.table.values.reshape(-1, 9)
    down, drag = -values[:, 2], -values[:, 0]
    return (float(down.min()), float(down.max())), (float(drag.min()), float(drag.max()))


def _unit_cases(case: Case, devices: Sequence[Device]) -> LoadCases:
    """One load case in which each device, as a source of its own, presses with one kilonewton."""
    units = tuple(
        replace(d, name=f"{d.name}.{i}", downforce_area=1.0, drag_area=0.0, map=None, table=None)
        for i, d in enumerate(devices)
    )
    speed = float(np.sqrt(2.0 * _KILONEWTON / case.air_density))
    unit = Manoeuvre(name="one kilonewton each", speed=speed, acceleration=np.zeros(3), parts=("downforce",))
    return balance(replace(case, devices=units, aero_total=None), [unit])


def _sections(cases: LoadCases, count: int) -> Floats:
    signs = np.array((1.0, 1.0, 1.0, 1.0, -1.0, -1.0))
    front, rear = (cases.faces[name].wrench[0, :count] for name in FACES)
    return frozen(np.stack([front * signs, -rear * signs], axis=1))
