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

from ..arrays import Floats, frozen
from ..errors import CaseError, nearest
from ..units import UNITS, canonical, parse, significant
from .csv_text import Sheet, read_sheet
from .frame import rotation_of
from .model import AeroMap

AXES = {"speed": "speed", "ride_front": "length", "ride_rear": "length", "yaw": "angle", "steer": "angle"}
FORCES = ("downforce", "lift", "drag", "force_x", "force_y", "force_z", "front_downforce", "rear_downforce")
MOMENTS = ("moment_x", "moment_y", "moment_z")
POINT = ("x", "y", "z")
WORDS = ("state", "device")
STATEMENTS = (
    "axes",
    "sign",
    "origin",
    "reference_area",
    "reference_length",
    "reference_point",
    "air_density",
    "model",
    "default_state",
    "forces_along",
)
PER_AXLE = ("front_axle", "rear_axle")
"""Names of the two parts a file of per-axle figures is read into: loads on the ground at each axle."""

_SAME = {
    "downforce": ("lift", "force_z", "front_downforce"),
    "lift": ("force_z", "front_downforce"),
    "drag": ("force_x",),
    "force_z": ("front_downforce",),
}
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
    names = _check_columns(sheet)
    _check_statements(sheet, names)
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
        reference_area=None if area is None else _stated(sheet, "reference_area", "area"),
        half_model=half,
    )


def _check_columns(sheet: Sheet) -> tuple[str, ...]:
    where = f"{sheet.path}, column heads"
    names = tuple(head.name for head in sheet.heads)
    known = (*WORDS, *AXES, *FORCES, *MOMENTS, *POINT)
    for head in sheet.heads:
        if head.name not in known:
            raise CaseError(where, f"{head.name!r} is no known column", ", ".join(known), nearest(head.name, known))
        if head.name not in WORDS and head.unit is None:
            remedy = f"write '{head.name} [unit]'; a bare coefficient is '{head.name} [1]'"
            raise CaseError(where, f"{head.name!r} has no unit", "a unit in brackets after every name", remedy)
    for name, others in _SAME.items():
        clash = [other for other in others if name in names and other in names]
        if clash:
            raise CaseError(where, f"{name!r} and {clash[0]!r} give the same force twice", "one of them")
    if not set(FORCES) & set(names):
        raise CaseError(where, "no force", ", ".join(FORCES), "give downforce and drag, or force_x, force_y, force_z")
    for group in (POINT, ("front_downforce", "rear_downforce")):
        given = [name for name in group if name in names]
        if given and len(given) < len(group):
            raise CaseError(where, f"{', '.join(given)} alone", f"{', '.join(group)} together")
    beside = [name for name in names if name in (*MOMENTS, *POINT, "force_x", "force_y")]
    if "front_downforce" in names and beside:
        raise CaseError(where, f"{beside[0]!r} beside per-axle figures", "drag alone may stand beside them")
    return names


def _check_statements(sheet: Sheet, names: tuple[str, ...]) -> None:
    for key in sheet.statements:
        if key not in STATEMENTS:
            known = ", ".join(STATEMENTS)
            raise CaseError(f"{sheet.path}, # {key}", "no known statement", known, nearest(key, STATEMENTS))
    _ask(sheet, "axes", "x forward, y left, z up", "the axes its figures and places are written in")
    _ask(sheet, "sign", "air on car", "'air on car', or 'car on balance' for readings of a balance")
    _one_of(sheet, "sign", ("air on car", "car on balance"))
    _one_of(sheet, "model", ("full", "half"))
    if "yaw" in names and {"drag", "force_x", "force_y"} & set(names):
        _ask(sheet, "forces_along", "car", "whether drag and side force follow the car's axes when it yaws")
        if _one_of(sheet, "forces_along", ("car", "wind")) == "wind":
            remedy = "turn drag and side force into the car's axes before handing them over"
            raise CaseError(f"{sheet.path}, # forces_along", "'wind'", "'car'", remedy)
    across = {"force_y", "moment_x", "moment_z"} & set(names)
    if sheet.statements.get("model") == "half" and across:
        found = f"a half model with {', '.join(sorted(across))}"
        raise CaseError(f"{sheet.path}, # model", found, "downforce, drag, moment_y: the halves cancel in the others")


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
            data[head.name] = sheet.numbers(i) * factor
    pressure = None
    if any(_dimension(sheet, i) in (_FORCE, _MOMENT) for i, n in enumerate(names) if n in (*FORCES, *MOMENTS)):
        pressure = _pressure(sheet, data)
    return _Reading(sheet=sheet, rotation=rotation, origin=origin, pressure=pressure, data=data)


def _pressure(sheet: Sheet, data: Mapping[str, Floats]) -> Floats:
    if "speed" not in data:
        remedy = "add a column 'speed [m/s]', or give areas [m^2] or coefficients [1]"
        raise CaseError(f"{sheet.path}, column heads", "forces without a speed", "the speed of every figure", remedy)
    _ask(sheet, "air_density", "1.20 kg/m^3", "the density at which the forces were found")
    speed = data["speed"]
    if not (speed > 0).all():
        line = sheet.lines[int(np.argmin(speed))]
        raise CaseError(f"{sheet.path}, line {line}", "a force at no speed", "a speed above 0", "delete the line")
    return 0.5 * _stated(sheet, "air_density", "density") * speed**2


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
        at = np.tile(parse(text, "length_vector", f"{sheet.path}, # reference_point"), (rows, 1))
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
        _ask(sheet, "reference_area", "1.50 m^2", "the area that its coefficients stand for")
        values = values * _stated(sheet, "reference_area", "area")
        if moment:
            _ask(sheet, "reference_length", "2.75 m", "the length that its moment coefficients stand for")
            values = values * _stated(sheet, "reference_length", "length")
        return values * float(parse(f"1 {_plain(head.unit)}", "ratio", where))
    if dimension == (_MOMENT if moment else _FORCE):
        kind = "moment" if moment else "force"
        return values * float(parse(f"1 {head.unit}", kind, where)) / np.asarray(reading.pressure)
    if dimension == (_VOLUME if moment else _AREA):
        return values * (1.0 if moment else float(parse(f"1 {head.unit}", "area", where)))
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


def _devices(reading: _Reading, forces: Floats, moments: Floats, points: Floats) -> dict[str, AeroMap]:
    values = np.concatenate([forces, moments, points], axis=1)
    names = [head.name for head in reading.sheet.heads]
    if "device" not in names:
        return {"": _grid(reading, values, np.arange(len(values)), "")}
    owners = np.array(reading.sheet.words(names.index("device")))
    found = dict.fromkeys(owners.tolist())
    return {str(name): _grid(reading, values, np.flatnonzero(owners == name), str(name)) for name in found}


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
        result[part] = _grid(reading, values, np.arange(len(values)), "")
    return result


def _grid(reading: _Reading, values: Floats, rows: np.ndarray, device: str) -> AeroMap:
    """Lay rows of values out over the full grid of their axes and states; holes and doubles are refused."""
    sheet = reading.sheet
    names = [head.name for head in sheet.heads]
    sense = {name: reading.rotation[2, 2] if name in ("yaw", "steer") else 1.0 for name in AXES}
    axes, grid, place = [], [], []
    for name in AXES:
        if name in reading.data:
            steps, index = np.unique(sense[name] * reading.data[name][rows], return_inverse=True)
            if name == "speed" and len(steps) == 1:
                continue  # one speed says nothing of how the coefficients change with it
            axes.append(name)
            grid.append(frozen(steps))
            place.append(index.reshape(-1))
    words = np.array(sheet.words(names.index("state")) if "state" in names else [""] * len(sheet.lines))[rows]
    states = tuple(dict.fromkeys(str(word) for word in words))
    shape = (len(states), *(len(steps) for steps in grid))
    flat = np.ravel_multi_index((np.array([states.index(word) for word in words]), *place), shape)
    _refuse_doubles(sheet, rows, flat, device)
    _refuse_holes(sheet, flat, shape, (states, axes, grid), device)
    laid = np.empty((int(np.prod(shape)), 9))
    laid[flat] = values[rows]
    return AeroMap(
        source=str(sheet.path),
        axes=tuple(axes),
        grid=tuple(grid),
        states=states if states != ("",) else (),
        default_state=_default_state(sheet, states),
        values=frozen(laid.reshape(*shape, 9)),
    )


def _default_state(sheet: Sheet, states: tuple[str, ...]) -> str | None:
    stated = sheet.statements.get("default_state")
    if stated is not None and stated not in states:
        where = f"{sheet.path}, # default_state"
        raise CaseError(where, repr(stated), ", ".join(states) or "a column 'state'", nearest(stated, states))
    return stated if stated is not None or len(states) > 1 else states[0] or None


def _refuse_doubles(sheet: Sheet, rows: np.ndarray, flat: np.ndarray, device: str) -> None:
    order = np.argsort(flat, kind="stable")
    same = np.flatnonzero(np.diff(flat[order]) == 0)
    if len(same):
        first, second = (sheet.lines[int(rows[order[same[0] + k]])] for k in (0, 1))
        found = f"lines {first} and {second} give {_of(device)}the same point twice"
        raise CaseError(str(sheet.path), found, "each point of the grid once", "delete one of the two")


def _refuse_holes(
    sheet: Sheet,
    flat: np.ndarray,
    shape: tuple[int, ...],
    names: tuple[tuple[str, ...], list[str], list[Floats]],
    device: str,
) -> None:
    missing = np.setdiff1d(np.arange(int(np.prod(shape))), flat)
    if not len(missing):
        return
    states, axes, grid = names
    place = np.unravel_index(int(missing[0]), shape)
    parts = [f"state {states[place[0]]}"] if states != ("",) else []
    for name, steps, index in zip(axes, grid, place[1:], strict=True):
        unit = next(head.unit for head in sheet.heads if head.name == name)
        factor = float(parse(f"1 {unit}", AXES[name], str(sheet.path)))
        parts.append(f"{name} {significant(steps[index] / factor)} {unit}")
    total = int(np.prod(shape))
    raise CaseError(
        str(sheet.path),
        f"{_of(device)}the grid has {len(missing)} holes of {total} points, the first at {', '.join(parts)}",
        "one line for every combination of the values that stand in its columns",
        "fill the holes, or resample scattered points onto a full grid; nothing is interpolated over a hole",
    )


def _column(reading: _Reading, index: int) -> Column:
    sheet = reading.sheet
    head = sheet.heads[index]
    if head.name in WORDS:
        found = dict.fromkeys(sheet.words(index))
        return Column(name=head.name, unit="", meaning=f"names: {', '.join(found)}", low=np.nan, high=np.nan)
    if head.name in reading.data:
        values, meaning = reading.data[head.name], _MEANINGS[head.name]
    else:
        values = _scaled(reading, index)
        per = "volume M/q" if head.name in MOMENTS else "area F/q"
        meaning = f"{_MEANINGS[head.name]}, as {per}"
    return Column(
        name=head.name,
        unit=str(head.unit),
        meaning=meaning,
        low=float(values.min()),
        high=float(values.max()),
    )


_MEANINGS = {
    "speed": "speed, m/s",
    "ride_front": "ride height at the front axle, m",
    "ride_rear": "ride height at the rear axle, m",
    "yaw": "yaw of the car to the air, rad about the file's z",
    "steer": "steer angle, rad about the file's z",
    "downforce": "force downward, m²",
    "lift": "force upward, m²",
    "drag": "force rearward, m²",
    "force_x": "force along the file's x, m²",
    "force_y": "force along the file's y, m²",
    "force_z": "force along the file's z, m²",
    "front_downforce": "load on the front axle, m²",
    "rear_downforce": "load on the rear axle, m²",
    "moment_x": "moment about the file's x, m³",
    "moment_y": "moment about the file's y, m³",
    "moment_z": "moment about the file's z, m³",
    "x": "place along the file's x, m",
    "y": "place along the file's y, m",
    "z": "place along the file's z, m",
}


def _ask(sheet: Sheet, key: str, example: str, what: str) -> None:
    if not sheet.statements.get(key):
        remedy = f"add the line '# {key} = {example}' (or what is true of this file) at its head"
        raise CaseError(str(sheet.path), f"the file does not state {what}", f"a line '# {key} = ...'", remedy)


def _one_of(sheet: Sheet, key: str, allowed: tuple[str, ...]) -> str | None:
    value = sheet.statements.get(key)
    if value is not None and value not in allowed:
        raise CaseError(f"{sheet.path}, # {key}", repr(value), ", ".join(allowed), nearest(value, allowed))
    return value


def _stated(sheet: Sheet, key: str, kind: str) -> float:
    where = f"{sheet.path}, # {key}"
    value = float(parse(sheet.statements[key], kind, where))
    if not value > 0:
        raise CaseError(where, repr(sheet.statements[key]), f"a {key.replace('_', ' ')} above 0")
    return value


def _of(device: str) -> str:
    return f"device {device}: " if device else ""
