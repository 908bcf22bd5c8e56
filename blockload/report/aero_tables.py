"""Aero in tables: what the devices add up to, what each does to the faces, and what totals alone leave open."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ..car.aero_check import per_kilonewton, remarks
from ..car.aero_split import only_totals
from ..car.aero_totals import totals
from ..car.model import SECTION, LoadCases
from ..case.model import CARRIERS, FACES, Case
from .tables import Table, table
from .wording import ABSENT, figure, fixed, plain_name

_OPEN = 0.5  # N or N·m: a smaller band is no band


def case_tables(case: Case) -> tuple[Table, ...]:
    """What the aero of a case adds up to, and what each device does to the faces; nothing for a car without."""
    if not case.devices and not only_totals(case):
        return ()
    found = totals_table(case, three_speeds(case)), influence_table(case), *stud_tables(case), moved_table(case)
    return (*remark_tables(case), *found)


def remark_tables(case: Case) -> tuple[Table, ...]:
    """What looks wrong about the devices of a case, if anything does."""
    found = remarks(case)
    return (
        (table("Aero devices to look at again", ("what looks wrong",), [(text,) for text in found]),) if found else ()
    )


def three_speeds(case: Case) -> tuple[float, ...]:
    """Return a third, two thirds and all of the highest speed of the case's manoeuvres."""
    top = max((item.speed for item in case.manoeuvres), default=0.0)
    if top <= 0 and case.aero_total is not None:
        top = case.aero_total.at_speed
    top = top if top > 0 else 50.0
    return (top / 3, 2 * top / 3, top)


def totals_table(case: Case, speeds: Sequence[float]) -> Table:
    """Downforce, drag and balance at speeds, by both conventions of the front share."""
    found = totals(case, speeds)
    rows = [
        (
            f"{fixed(speed, 1)} m/s",
            fixed(found.downforce[i].sum(), 2, scale=1e3),
            fixed(found.drag[i].sum(), 2, scale=1e3),
            fixed(found.share_with[i], 3),
            fixed(found.share_without[i], 3),
            heights(found.ride_height[i]),
            found.outside[i] or "inside",
        )
        for i, speed in enumerate(found.speed)
    ]
    columns = ("speed", "downforce", "drag", "front share with drag moment", "without", "ride heights, mm", "maps")
    note = "kN, summed from the devices; straight running. Ride heights front and rear where a map asks for them."
    return table("Aero recomputed from the devices", columns, rows, note)


def influence_table(case: Case) -> Table:
    """Face components and hardest-pulled stud per kilonewton of downforce on each device."""
    found = per_kilonewton(case)
    rows = []
    for k, name in enumerate(found.devices):
        for f, face in enumerate(FACES):
            axial = found.axial[face][k]
            worst = int(np.argmax(np.abs(axial)))
            stud = f"{case.faces[face].studs[worst].name} {fixed(axial[worst], 3, scale=1e3, sign=True)}"
            components = (fixed(w, 3, scale=1e3, sign=True) for w in found.section[k, f])
            rows.append((plain_name(name), found.on[k], face, *components, stud))
    columns = ("device", "carried by", "face", *SECTION, "stud moved most, kN")
    note = "kN and kN·m per kN of downforce on the device, the wheels answering; studs as of a rigid face."
    return table("One kilonewton on each device", columns, rows, note)


def stud_tables(case: Case) -> tuple[Table, ...]:
    """Axial force of every stud per kilonewton of downforce on each device, a table for each face."""
    found = per_kilonewton(case)
    result = []
    for name in FACES:
        rows = [
            (plain_name(device), *(fixed(a, 3, scale=1e3, sign=True) for a in found.axial[name][k]))
            for k, device in enumerate(found.devices)
        ]
        columns = ("device", *(stud.name for stud in case.faces[name].studs))
        note = "Axial kN per kN of downforce, + pulled; a rigid face on equal studs, before preload."
        result.append(table(f"Studs of the {name} face per kilonewton on each device", columns, rows, note))
    return tuple(result)


def moved_table(case: Case) -> Table:
    """M_sag at both faces per kilonewton on each device, were it carried by each of the bodies."""
    found = per_kilonewton(case)
    rows = []
    for k, name in enumerate(found.devices):
        cells = []
        for f in range(len(FACES)):
            for b, body in enumerate(CARRIERS):
                text = fixed(found.moved[k, b, f, 4], 3, scale=1e3, sign=True)
                cells.append(f"[{text}]" if body == found.on[k] else text)
        rows.append((plain_name(name), *cells))
    columns = ("device", *(f"{face}, {body}" for face in FACES for body in CARRIERS))
    note = "M_sag at each face, kN·m per kN of downforce, were the body named its carrier; in brackets as in the case."
    return table("Were a device carried by another body", columns, rows, note)


def load_case_tables(cases: LoadCases) -> tuple[Table, ...]:
    """Ride heights and map edges, and what totals alone leave open, as far as the load cases have them."""
    return tuple(item for item in (ride_table(cases), bounds_table(cases)) if item is not None)


def ride_table(cases: LoadCases) -> Table | None:
    """Ride heights of every load case and which map was read beyond its grid; None where no map asks for them."""
    if not np.isfinite(cases.ride_height).any() and not any(cases.outside_map):
        return None
    rows = [
        (plain_name(name), *(fixed(h, 1, scale=1e-3) for h in cases.ride_height[i]), cases.outside_map[i])
        for i, name in enumerate(cases.names)
    ]
    note = "mm at the axle lines, agreeing with the axle loads they cause. At a map's edge the force there was used."
    return table("Ride heights", ("load case", "front", "rear", "read beyond the map"), rows, note)


def bounds_table(cases: LoadCases) -> Table | None:
    """Least and greatest of what the split of whole-car aero moves; None where devices are known."""
    found = cases.aero_bounds
    if found is None:
        return None
    sections = [found.section[face] for face in cases.faces]
    moves = [k for k in range(len(SECTION)) if any(np.ptp(ends[..., k], axis=0).max() > _OPEN for ends in sections)]
    rows = []
    for i, name in enumerate(cases.names):
        for face, loads in cases.faces.items():
            ends, axial = found.section[face][:, i], found.stud_axial[face][:, i]
            if np.ptp(ends, axis=0).max() <= _OPEN:
                continue
            worst = int(np.argmax(axial[1]))
            cells = (_range(*ends[:, k]) for k in moves)
            said = f"{plain_name(name)} (a wheel lifts)" if found.lifts[i] else plain_name(name)
            rows.append((said, face, *cells, loads.studs[worst], _range(*axial[:, worst])))
    columns = ("load case", "face", *(SECTION[k] for k in moves), "most pulled stud", "its pull")
    note = (
        "kN and kN·m: least to greatest over every split of the stated totals that keeps total and balance, each "
        f"carrier pressing down by 0 or more: {len(found.splits)} extreme splits, the load cases standing at their "
        "mean. What this decides is not shown. Where a wheel lifts at some split, the bounds are those of four wheels."
    )
    return table("Open because only totals of the aero are known", columns, rows, note)


def heights(ride: np.ndarray) -> str:
    """Return ride heights as "28.1, 43.7" in mm, or a dash."""
    if not np.isfinite(ride).all():
        return ABSENT
    return ", ".join(fixed(float(h), 1, scale=1e-3) for h in ride)


def _range(low: float, high: float) -> str:
    ends = [fixed(float(x), 2, scale=1e3, sign=True) for x in (low, high)]
    return ends[0] if ends[0] == ends[1] else " to ".join(ends)


def percent(new: float, old: float) -> str:
    """Return the change of a figure in percent, or a dash where there was none."""
    return ABSENT if old == 0 else f"{figure(100 * (new / old - 1), digits=2, sign=True)} %"
