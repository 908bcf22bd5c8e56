"""Aero figures from CSV: what was measured or computed over speed, ride heights, yaw, steer and state.

Statements at the head of the file are asked for, because no figure shows them: `# axes = x forward, y left, z up` (the
file's own; also the sense of yaw and steer, about its z), `# sign = air on car` (or `car on balance`), and
`# reference_area` wherever a column is a bare coefficient, `# reference_length` for a moment's, `# air_density` for
forces in newtons. All figures become area and volume per dynamic pressure q = rho v²/2 (forces F = q A, moments
M = q V), in the car's axes. Optional: `reference_point`, `origin`, `model = half`, `default_state`.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from ..arrays import Floats, Ints
from ..errors import CaseError, nearest
from ..unit_table import UNITS
from ..units import canonical, parse
from .aero_grid import lay_out, turned
from .aero_words import (
    ANY,
    AXES,
    FORCES,
    MEANINGS,
    MOMENTS,
    POINT,
    WORDS,
    ask,
    check_columns,
    check_statements,
    stated,
)
from .csv_text import Sheet, read_sheet
from .frame import rotation_of
from .model import AeroMap

PER_AXLE = ("front_axle", "rear_axle")
"""Names of the two parts a file of per-axle figures is read into: loads on the ground at each axle."""

_FORCE, _AREA, _NONE = (UNITS[text].dimension for text in ("N", "m^2", ""))
_MOMENT, _VOLUME = UNITS["N*m"].dimension, (0, 3, 0, 0, 0)


@dataclass(frozen=True, slots=True, kw_only=True)
class Column:
    """One column as understood: its name, unit as written, what it is taken for, and its range in SI."""

    name: str
    unit: str
    meaning: str
    low: float
    high: float


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class AeroFile:
    """A file of aero figures: its columns, its statements, and one map per device ("" where it names none).

    `per_axle` says that `maps` holds the loads on the two axles instead of devices; `reference_area` is None where no
    figure needs it and the file does not state it.
    """

    path: Path
    columns: tuple[Column, ...]
    statements: Mapping[str, str]
    maps: Mapping[str, AeroMap]
    per_axle: bool
    reference_area: float | None
    half_model: bool


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class _Reading:
    """A sheet with what its statements mean: rotation (3, 3) and origin (3,) of its axes in the car."""

    sheet: Sheet
    rotation: Floats
    origin: Floats
    pressure: Floats | None
    data: Mapping[str, Floats]


def read_map(path: Path, device: str, where: str) -> AeroMap:
    """Return one device's map from a CSV file, whether the file holds that device alone or several by name.

    Raises CaseError for a file that cannot be used, names no such device, or holds loads per axle.
    """
    found = read_aero(path, where)
    if found.per_axle:
        remedy = "per-axle figures say nothing of which body carries them: use [aero_total] with [aero_split.NAME]"
        raise CaseError(where, f"{path} gives downforce per axle", "figures of one device", remedy)
    if "" in found.maps:
        return found.maps[""]
    if device not in found.maps:
        raise CaseError(where, f"{path} has no device {device!r}", ", ".join(found.maps), nearest(device, found.maps))
    return found.maps[device]


def read_aero(path: Path, where: str = "aero file") -> AeroFile:
    """Read a file of aero figures (see the module docstring).

    Raises
    ------
    CaseError
        Naming line and column: unknown column, missing unit or statement, hole in the grid, figure that is no number.

    """
    sheet = read_sheet(path, where)
    names = check_columns(sheet)
    check_statements(sheet, names)
    reading = _reading(sheet, names)
    forces, moments, points = _figures(reading)
    area = sheet.statements.get("reference_area")
    per_axle = "front_downforce" in names
    half = sheet.statements.get("model") == "half"
    return AeroFile(
        path=path,
        columns=tuple(_column(reading, i) for i in range(len(names))),
        statements=sheet.statements,
        maps=_per_axle(reading) if per_axle else _devices(reading, forces, moments, points),
        per_axle=per_axle,
        reference_area=None if area is None else stated(sheet, "reference_area", "area"),
        half_model=half,
    )


def _reading(sheet: Sheet, names: tuple[str, ...]) -> _Reading:
    rotation = rotation_of(sheet.statements["axes"], f"{sheet.path}, # axes")
    origin = np.zeros(3)
    if "origin" in sheet.statements:
        origin = np.asarray(parse(sheet.statements["origin"], "length_vector", f"{sheet.path}, # origin"))
    data: dict[str, Floats] = {}
    for i, head in enumerate(sheet.heads):
        if head.name in AXES or head.name in POINT:
            kind = AXES.get(head.name, "length")
            factor = float(parse(f"1 {head.unit}", kind, f"{sheet.path}, column {head.name!r}"))
            data[head.name] = sheet.numbers(i, anything=ANY if head.name in AXES else "") * factor
    pressure = None
    if any(_dimension(sheet, i) in (_FORCE, _MOMENT) for i, n in enumerate(names) if n in (*FORCES, *MOMENTS)):
        pressure = _pressure(sheet, data)
    return _Reading(sheet=sheet, rotation=rotation, origin=origin, pressure=pressure, data=data)


def _pressure(sheet: Sheet, data: Mapping[str, Floats]) -> Floats:
    if "speed" not in data:
        remedy = "add a column 'speed [m/s]', or give areas [m^2] or coefficients [1]"
        raise CaseError(f"{sheet.path}, column heads", "forces without a speed", "the speed of every figure", remedy)
    ask(sheet, "air_density", "1.20 kg/m^3", "the density at which the forces were found")
    speed = data["speed"]
    if not (speed > 0).all():  # any speed counts as none
        line = sheet.lines[int(np.argmin(speed))]
        raise CaseError(f"{sheet.path}, line {line}", "a force at no speed", "a speed above 0", "delete the line")
    return 0.5 * stated(sheet, "air_density", "density") * speed**2


def _figures(reading: _Reading) -> tuple[Floats, Floats, Floats]:
    """Force [m²], moment [m³] and reference point [m], (rows, 3) each, in the car's axes; nan for no point."""
    sheet = reading.sheet
    columns = {head.name: i for i, head in enumerate(sheet.heads)}
    rows = len(sheet.lines)
    sign = -1.0 if sheet.statements["sign"] == "car on balance" else 1.0

    def vector(names: tuple[str, ...]) -> Floats:
        parts = [_scaled(reading, columns[n]) if n in columns else np.zeros(rows) for n in names]
        result: Floats = sign * np.stack(parts, axis=1) @ reading.rotation.T
        return result

    force = vector(("force_x", "force_y", "force_z"))
    moment = vector(MOMENTS)
    for name, axis, direction in (("drag", 0, -1.0), ("downforce", 2, -1.0), ("lift", 2, 1.0)):
        if name in columns:
            force[:, axis] += direction * _scaled(reading, columns[name])
    if sheet.statements.get("model") == "half":
        force, moment = 2.0 * force, 2.0 * moment
    return force, moment, _points(reading, rows)


def _points(reading: _Reading, rows: int) -> Floats:
    sheet = reading.sheet
    if "x" in reading.data:
        at = np.stack([reading.data[name] for name in POINT], axis=1)
    elif "reference_point" in sheet.statements:
        text = sheet.statements["reference_point"]
        at = np.tile(np.asarray(parse(text, "length_vector", f"{sheet.path}, # reference_point")), (rows, 1))
    else:
        return np.full((rows, 3), np.nan)
    result: Floats = at @ reading.rotation.T + reading.origin
    return result


def _scaled(reading: _Reading, column: int) -> Floats:
    """One force or moment column per dynamic pressure, as written in sign and axis."""
    sheet = reading.sheet
    head = sheet.heads[column]
    where = f"{sheet.path}, column {head.name!r}"
    values = sheet.numbers(column)
    moment = head.name in MOMENTS
    dimension = _dimension(sheet, column)
    if dimension == _NONE:
        ask(sheet, "reference_area", "1.50 m^2", "the area that its coefficients stand for")
        factor = stated(sheet, "reference_area", "area") * float(parse(f"1 {_plain(head.unit)}", "ratio", where))
        if moment:
            ask(sheet, "reference_length", "2.75 m", "the length that its moment coefficients stand for")
            factor *= stated(sheet, "reference_length", "length")
        return factor * values
    if dimension == (_MOMENT if moment else _FORCE) and reading.pressure is not None:
        return float(parse(f"1 {head.unit}", "moment" if moment else "force", where)) * values / reading.pressure
    if dimension == (_VOLUME if moment else _AREA):
        return (1.0 if moment else float(parse(f"1 {head.unit}", "area", where))) * values
    allowed = "N*m, m^3 (moment over pressure) or 1" if moment else "N, m^2 (force over pressure) or 1 (coefficient)"
    raise CaseError(where, f"the unit {head.unit!r}", allowed, "correct the unit in the column's head")


def _dimension(sheet: Sheet, column: int) -> tuple[int, ...] | None:
    text = canonical(_plain(sheet.heads[column].unit))
    if text == "m^3":
        return _VOLUME
    unit = UNITS.get(text)
    return None if unit is None else unit.dimension


def _plain(unit: str | None) -> str:
    return "" if unit in (None, "-", "1") else str(unit)


def _laid(reading: _Reading, values: Floats, rows: Ints, device: str) -> AeroMap:
    """A device's map, with yaw and steer counted about the car's z."""
    found = lay_out(reading.sheet, reading.data, values, rows, device)
    return found if reading.rotation[2, 2] > 0 else turned(turned(found, "yaw"), "steer")


def _devices(reading: _Reading, forces: Floats, moments: Floats, points: Floats) -> dict[str, AeroMap]:
    values = np.concatenate([forces, moments, points], axis=1)
    names = [head.name for head in reading.sheet.heads]
    if "device" not in names:
        return {"": _laid(reading, values, np.arange(len(values)), "")}
    owners = np.array(reading.sheet.words(names.index("device")))
    found = dict.fromkeys(owners.tolist())
    return {str(name): _laid(reading, values, np.flatnonzero(owners == name), str(name)) for name in found}


def _per_axle(reading: _Reading) -> dict[str, AeroMap]:
    """Two loads on the ground; drag goes to the front one, where it adds no moment: the axle loads hold it already."""
    names = [head.name for head in reading.sheet.heads]
    if "device" in names:
        raise CaseError(f"{reading.sheet.path}, column heads", "'device' beside per-axle figures", "one of the two")
    scale = 2.0 if reading.sheet.statements.get("model") == "half" else 1.0
    result = {}
    for part, column in zip(PER_AXLE, ("front_downforce", "rear_downforce"), strict=True):
        values = np.zeros((len(reading.sheet.lines), 9))
        values[:, 6:] = np.nan
        values[:, 2] = -scale * _scaled(reading, names.index(column))
        if part == PER_AXLE[0] and "drag" in names:
            values[:, 0] = -scale * _scaled(reading, names.index("drag"))
        result[part] = _laid(reading, values, np.arange(len(values)), "")
    return result


def _column(reading: _Reading, index: int) -> Column:
    sheet = reading.sheet
    head = sheet.heads[index]
    if head.name in WORDS:
        found = dict.fromkeys(sheet.words(index))
        return Column(name=head.name, unit="", meaning=f"names: {', '.join(found)}", low=np.nan, high=np.nan)
    if head.name in reading.data:
        values, meaning = reading.data[head.name], MEANINGS[head.name]
    else:
        values = _scaled(reading, index)
        per = "volume M/q" if head.name in MOMENTS else "area F/q"
        meaning = f"{MEANINGS[head.name]}, as {per}"
    return Column(
        name=head.name,
        unit=str(head.unit),
        meaning=meaning,
        low=float(np.nanmin(values)) if np.isfinite(values).any() else np.nan,
        high=float(np.nanmax(values)) if np.isfinite(values).any() else np.nan,
    )
