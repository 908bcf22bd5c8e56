"""A file of aero figures as understood, and against a case: totals, balance, each device, and red lines.

How the file meets the case: devices named in the file replace those of the same name; a file without names replaces
the device whose map it is, or that bears its name, and else all of them, as the whole car; figures per axle stand on
the ground at the axles. Nothing of this changes the case.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from pathlib import Path

import numpy as np

from ..arrays import Floats
from ..car.aero_check import remarks
from ..car.aero_totals import Totals, as_devices, totals
from ..case.aero_csv import PER_AXLE, AeroFile, read_aero
from ..case.model import AeroMap, Case, Device
from .aero_alarms import alarms
from .aero_tables import heights, influence_table, moved_table, percent, three_speeds
from .tables import Table, table
from .wording import figure, fixed, plain_name

_WHOLE = "whole_car"
RIDE = {"ride_front", "ride_rear"}


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class AeroReading:
    """What `blockload aero` says: tables, and warnings that belong in red."""

    tables: tuple[Table, ...]
    warnings: tuple[str, ...]


def aero_against(path: Path, case: Case | None = None) -> AeroReading:
    """Read a file of aero figures and, with a case, compare it with the case's own.

    Raises CaseError for a file that cannot be used, or a case whose ride heights it needs and does not find.
    """
    file = read_aero(path)
    tables = [_columns(file), _statements(file), _grids(file)]
    if case is None:
        return AeroReading(tables=tuple(tables), warnings=())
    file, fixed_at = _without_heights(file, case)
    own, merged, notes = _old(case), *_merged(case, file)
    notes = (*fixed_at, *notes)
    speeds = three_speeds(case)
    old, new = totals(own, speeds), totals(merged, speeds)
    tables += [_sums(old, new), *_shares(old, new), _devices(own, merged, old, new)]
    if file.reference_area is not None:
        tables.append(_area(file, old, new))
    if not any(device.name in (_WHOLE, *PER_AXLE) for device in merged.devices):
        tables += [influence_table(merged), moved_table(merged)]
        notes += remarks(merged)
    return AeroReading(tables=tuple(tables), warnings=(*alarms(file, old, new), *notes))


def _without_heights(file: AeroFile, case: Case) -> tuple[AeroFile, tuple[str, ...]]:
    """The file at the middle of its own ride heights where the case knows none, and what that leaves to say."""
    known = (axle.ride_height is not None and axle.ride_stiffness is not None for axle in case.axles.values())
    if all(known) or not any(RIDE & set(found.axes) for found in file.maps.values()):
        return file, ()
    at: dict[str, float] = {}
    maps = {name: _at_middle(found, at) for name, found in file.maps.items()}
    words = ", ".join(f"{plain_name(axis)} {1e3 * value:.3g} mm" for axis, value in sorted(at.items()))
    return replace(file, maps=maps), (f"the case gives no ride heights: compared at {words}, the middle of the file's",)


def _at_middle(found: AeroMap, at: dict[str, float]) -> AeroMap:
    for axis in sorted(RIDE & set(found.axes)):
        place = found.axes.index(axis)
        middle = len(found.grid[place]) // 2
        at[axis] = float(found.grid[place][middle])
        found = replace(
            found,
            axes=(*found.axes[:place], *found.axes[place + 1 :]),
            grid=(*found.grid[:place], *found.grid[place + 1 :]),
            values=np.take(found.values, middle, axis=1 + place),
        )
    return found


def _columns(file: AeroFile) -> Table:
    rows = [(c.name, c.unit or "", c.meaning, figure(c.low), figure(c.high)) for c in file.columns]
    note = "Least and greatest in SI; forces per dynamic pressure (areas), moments per dynamic pressure (volumes)."
    return table(
        f"Columns of {file.path.name} as understood", ("column", "unit", "taken for", "least", "greatest"), rows, note
    )


def _statements(file: AeroFile) -> Table:
    rows = [(plain_name(key), value) for key, value in file.statements.items()]
    if file.half_model:
        rows.append(("half model", "forces, and the moment about y, are doubled"))
    return table("What the file states", ("statement", "as written"), rows)


def _grids(file: AeroFile) -> Table:
    rows = []
    for name, found in file.maps.items():
        axes = [f"{axis}: {len(steps)}" for axis, steps in zip(found.axes, found.grid, strict=True)]
        down, drag = -found.values[..., 2], -found.values[..., 0]
        point = "from the case" if np.isnan(found.values[..., 6]).any() else "given"
        rows.append(
            (
                plain_name(name) or "no device named",
                ", ".join(axes) or "one point",
                ", ".join(found.states) or "none",
                f"{figure(down.min())} to {figure(down.max())}",
                f"{figure(drag.min())} to {figure(drag.max())}",
                point,
            )
        )
    columns = ("device", "grid", "states", "downforce area, m²", "drag area, m²", "reference point")
    return table("Maps in the file", columns, rows, "Full grids; linear along each axis between points.")


def _old(case: Case) -> Case:
    return replace(as_devices(case), aero_total=None)


def _merged(case: Case, file: AeroFile) -> tuple[Case, tuple[str, ...]]:
    """The case with the file's figures in place of its own, and what that leaves to say."""
    own = _old(case)
    notes: list[str] = []
    if file.per_axle:
        notes.append("the file gives loads per axle: they say nothing of which body carries them")
        places = {part: np.array([own.axles[name].x, 0.0, 0.0]) for part, name in zip(PER_AXLE, own.axles, strict=True)}
        devices = tuple(_device(part, file.maps[part], at) for part, at in places.items())
    elif "" in file.maps:
        devices = _unnamed(own, case, file, notes)
    else:
        devices = tuple(replace(d, table=file.maps.get(d.name, d.table), outside="clamp") for d in own.devices)
        known = {device.name for device in own.devices}
        notes += [
            f"device {name!r} of the file is not in the case ({', '.join(known)}): it is left out"
            for name in file.maps
            if name not in known
        ]
    return as_devices(replace(own, devices=devices)), tuple(notes)


def _unnamed(own: Case, case: Case, file: AeroFile, notes: list[str]) -> tuple[Device, ...]:
    found = file.maps[""]
    match = [d.name for d in case.devices if d.map is not None and d.map.resolve() == file.path.resolve()]
    match = match or [d.name for d in case.devices if d.name == file.path.stem]
    if match:
        notes.append(f"the file names no device; it is taken for {match[0]!r}")
        return tuple(replace(d, table=found) if d.name == match[0] else d for d in own.devices)
    notes.append("the file names no device and is taken for the whole car: totals and balance only")
    if np.isnan(found.values[..., 6]).any():
        notes.append("without a reference point the balance of the whole car is unknown; here it is the old one's")
        return (_device(_WHOLE, found, _centre(own)),)
    return (_device(_WHOLE, found, np.zeros(3)),)


def _device(name: str, found: AeroMap, at: Floats) -> Device:
    return Device(name=name, on="tub", at=at, downforce_area=0.0, drag_area=0.0, table=found, outside="clamp")


def _centre(case: Case) -> Floats:
    """Where the old downforce acts along the car, at the height of its drag, at the highest speed."""
    found = totals(case, three_speeds(case)[-1:])
    front, rear = case.axles["front"].x, case.axles["rear"].x
    x = rear + float(found.share_without[0]) * (front - rear)
    lost = float(found.share_without[0] - found.share_with[0]) * found.downforce.sum() * (front - rear)
    height = lost / found.drag.sum() if found.drag.sum() else 0.0
    return np.array([x, 0.0, height])


def _sums(old: Totals, new: Totals) -> Table:
    rows = []
    for i, speed in enumerate(old.speed):
        for kind in ("downforce", "drag"):
            a, b = float(getattr(old, kind)[i].sum()), float(getattr(new, kind)[i].sum())
            rows.append(
                (
                    f"{fixed(speed, 1)} m/s {kind}",
                    fixed(a, 3, scale=1e3),
                    fixed(b, 3, scale=1e3),
                    fixed(b - a, 3, scale=1e3, sign=True),
                    percent(b, a),
                )
            )
    return table("Totals", ("speed", "old, kN", "new, kN", "difference, kN", "change"), rows, "Straight running.")


def _shares(old: Totals, new: Totals) -> tuple[Table, ...]:
    rows = []
    for i, speed in enumerate(old.speed):
        for key, words in (("share_with", "with drag moment"), ("share_without", "without")):
            a, b = float(getattr(old, key)[i]), float(getattr(new, key)[i])
            rows.append((f"{fixed(speed, 1)} m/s {words}", fixed(a, 4), fixed(b, 4), fixed(b - a, 4, sign=True)))
    found = [table("Front share of the downforce", ("speed and convention", "old", "new", "difference"), rows)]
    if np.isfinite(old.ride_height).any() or np.isfinite(new.ride_height).any():
        lines = [
            (f"{fixed(v, 1)} m/s", heights(old.ride_height[i]), heights(new.ride_height[i]))
            for i, v in enumerate(old.speed)
        ]
        found.append(table("Ride heights, front and rear, mm", ("speed", "old", "new"), lines))
    return tuple(found)


def _devices(own: Case, merged: Case, old: Totals, new: Totals) -> Table:
    rows = []
    names = dict.fromkeys((*old.devices, *new.devices))
    on = {device.name: device.on for device in (*own.devices, *merged.devices)}
    for name in names:
        for kind in ("downforce", "drag"):
            a, b = (_of(found, kind, name) for found in (old, new))
            flip = "SIGN FLIP" if a is not None and b is not None and a * b < 0 else ""
            change = None if a is None or b is None else b - a
            cells = (fixed(x, 3, scale=1e3) for x in (a, b))
            rows.append((plain_name(name), on[name], kind, *cells, fixed(change, 3, scale=1e3, sign=True), flip))
    columns = ("device", "carried by", "", "old, kN", "new, kN", "difference, kN", "")
    return table(f"Each device at {fixed(old.speed[-1], 1)} m/s", columns, rows)


def _of(found: Totals, kind: str, name: str) -> float | None:
    if name not in found.devices:
        return None
    return float(getattr(found, kind)[-1, found.devices.index(name)])


def _area(file: AeroFile, old: Totals, new: Totals) -> Table:
    rows = []
    for kind in ("downforce", "drag"):
        a, b = float(getattr(old, kind)[-1].sum()), float(getattr(new, kind)[-1].sum())
        likely = file.reference_area * a / b if file.reference_area is not None and b else None
        rows.append((kind, figure(b / a) if a else figure(None), figure(file.reference_area), figure(likely)))
    columns = ("", "new over old", "reference area stated, m²", "area that would bring the old, m²")
    note = "Where both lines ask for the same other area, the stated one is the first thing to check."
    return table("Reference area", columns, rows, note)
