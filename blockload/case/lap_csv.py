"""Laps from CSV: what a car's recorder or a lap simulation wrote down, one line per sample.

Columns carry their unit in the head: time or distance (or both), speed, a_x and a_y of the car's CG; optional a_z, yaw
and steer, ride heights, overall_ratio, crank torque at the clutch and crank_acceleration, loads of wheels, push rods or
dampers with FL FR RL RR at the end of the name, and a column `state` of words for aero maps. What no figure shows is
asked for: `# axes = x forward, y left, z up` (the file's own), `# a_z = without gravity` (or `with gravity`: an
accelerometer at rest reads one g upward), `# rods = tension positive` (or `compression positive`).
"""

from __future__ import annotations

import io
import warnings
from collections.abc import Mapping
from types import MappingProxyType

import numpy as np

from ..arrays import Floats, frozen
from ..errors import CaseError, nearest
from ..unit_table import STANDARD_GRAVITY
from ..units import parse
from .csv_text import Page, read_page
from .frame import rotation_of
from .model import CORNERS, LapHistory, LapSpec

MEASURED = ("wheel", "pushrod", "damper")
"""Loads that, measured on both wheels of an axle, stand in for that axle's computed vertical loads."""
COLUMNS = {
    "time": "time",
    "distance": "length",
    "speed": "speed",
    "a_x": "acceleration",
    "a_y": "acceleration",
    "a_z": "acceleration",
    "yaw": "angle",
    "steer": "angle",
    "ride_front": "length",
    "ride_rear": "length",
    "overall_ratio": "ratio",
    "torque": "moment",
    "crank_acceleration": "angular_acceleration",
    **{f"{what}_{corner.lower()}": "force" for what in MEASURED for corner in CORNERS},
}
"""Columns and their kind of quantity."""
STATE = "state"
STATEMENTS = {
    "axes": None,
    "a_z": ("without gravity", "with gravity"),
    "rods": ("tension positive", "compression positive"),
}
_ABOUT_Z = ("yaw", "steer")
_FASTEST = 150.0  # m/s
_HARDEST = 10.0  # times gravity
_HOLE = 20.0  # times the usual step: a longer one is a hole in the record
_ROWS = 4096  # looked at together when a figure must be found that is none


def read_lap(spec: LapSpec) -> LapHistory:
    """Read a lap as it was recorded, in the car's axes and SI.

    Raises
    ------
    CaseError
        Naming line and column: unknown column, missing unit or statement, a figure that is no number, time that runs
        backward, a hole in the record.

    """
    page = read_page(spec.file, f"[laps.{spec.name}] file")
    names = _check_columns(page)
    _check_statements(page, names)
    factors = {name: _factor(page, index, name) for index, name in enumerate(names) if name != STATE}
    raw = _figures(page, names)
    data = {name: raw[name] * factor for name, factor in factors.items()}
    _check_speed(page, data)
    time = data.pop("time", None)
    distance = data.pop("distance", None)
    for name, values in (("time", time), ("distance", distance)):
        if values is not None:
            _check_order(page, name, values)
    acceleration = _acceleration(page, data)
    _turn(page, data)
    return LapHistory(
        name=spec.name,
        path=spec.file,
        time=None if time is None else frozen(time),
        distance=None if distance is None else frozen(distance),
        speed=frozen(data.pop("speed")),
        acceleration=frozen(acceleration),
        channels=_channels(data),
        state=tuple(page.sheet().words(names.index(STATE))) if STATE in names else None,
    )


def _check_columns(page: Page) -> tuple[str, ...]:
    where = f"{page.path}, column heads"
    names = tuple(head.name for head in page.heads)
    known = (*COLUMNS, STATE)
    for head in page.heads:
        if head.name not in known:
            remedy = nearest(head.name, known) or "delete the column, or rename it"
            raise CaseError(where, f"{head.name!r} is no known column", ", ".join(known), remedy)
        if head.name != STATE and head.unit is None:
            remedy = f"write '{head.name} [unit]'; a ratio is '{head.name} [1]'"
            raise CaseError(where, f"{head.name!r} has no unit", "a unit in brackets after every name", remedy)
    if not {"time", "distance"} & set(names):
        raise CaseError(where, "neither time nor distance", "time, distance or both", "add 'time [s]'")
    for name in ("speed", "a_x", "a_y"):
        if name not in names:
            remedy = "every sample needs speed and the acceleration of the car's CG along x and y"
            raise CaseError(where, f"{name!r} is missing", "speed, a_x, a_y", remedy)
    _check_pairs(where, names)
    return names


def _check_pairs(where: str, names: tuple[str, ...]) -> None:
    for left, right in (("fl", "fr"), ("rl", "rr")):
        kinds = [what for what in MEASURED if {f"{what}_{left}", f"{what}_{right}"} & set(names)]
        if len(kinds) > 1:
            found = f"{' and '.join(kinds)} loads of {left} and {right}"
            raise CaseError(where, found, "one kind of measured load per axle", "leave the other one out")
        for what in kinds:
            missing = [f"{what}_{side}" for side in (left, right) if f"{what}_{side}" not in names]
            if missing:
                remedy = "measured loads stand in for a whole axle: add the other side, or leave both out"
                raise CaseError(where, f"{missing[0]!r} is missing", f"{what}_{left} and {what}_{right}", remedy)
    if ("ride_front" in names) != ("ride_rear" in names):
        raise CaseError(where, "one ride height alone", "ride_front and ride_rear together")


def _check_statements(page: Page, names: tuple[str, ...]) -> None:
    for key, value in page.statements.items():
        if key not in STATEMENTS:
            continue  # recorders write many remarks of the form name = value
        allowed = STATEMENTS[key]
        if allowed is not None and value not in allowed:
            raise CaseError(f"{page.path}, # {key}", repr(value), ", ".join(allowed), nearest(value, allowed))
    _ask(page, "axes", "x forward, y left, z up", "the axes its accelerations are written in")
    if "a_z" in names:
        _ask(page, "a_z", "without gravity", "whether a_z contains gravity, as an accelerometer's reading does")
    if any(name.startswith(("pushrod", "damper")) for name in names):
        _ask(page, "rods", "tension positive", "the sign of its rod and damper forces")


def _ask(page: Page, key: str, example: str, what: str) -> None:
    if not page.statements.get(key):
        remedy = f"add the line '# {key} = {example}' (or what is true of this file) at its head"
        raise CaseError(str(page.path), f"the file does not state {what}", f"a line '# {key} = ...'", remedy)


def _factor(page: Page, index: int, name: str) -> float:
    return float(parse(f"1 {page.heads[index].unit}", COLUMNS[name], f"{page.path}, column {name!r}"))


def _figures(page: Page, names: tuple[str, ...]) -> dict[str, Floats]:
    """Columns of numbers as written; read in one go, and line by line only to say what is wrong."""
    columns = [index for index, name in enumerate(names) if name != STATE]
    text = io.StringIO("\n".join(line for _, line in page.body))
    try:
        with warnings.catch_warnings():
            warnings.simplefilter("error")
            values = np.loadtxt(text, delimiter=page.separator, comments=None, quotechar='"', usecols=columns, ndmin=2)
    except (ValueError, UserWarning, Warning):
        values = np.full((len(page.body), len(columns)), np.nan)
    cells = page.body[0][1].count(page.separator)
    even = all(line.count(page.separator) == cells for _, line in page.body)
    if not (even and np.isfinite(values).all() and len(values) == len(page.body)):
        return _slowly(page, names)
    return {names[index]: values[:, k] for k, index in enumerate(columns)}


def _slowly(page: Page, names: tuple[str, ...]) -> dict[str, Floats]:
    parts: dict[str, list[Floats]] = {name: [] for name in names if name != STATE}
    for first in range(0, len(page.body), _ROWS):
        sheet = page.sheet(first, first + _ROWS)
        for index, name in enumerate(names):
            if name != STATE:
                parts[name].append(sheet.numbers(index))
    return {name: np.concatenate(found) for name, found in parts.items()}


def _check_speed(page: Page, data: Mapping[str, Floats]) -> None:
    speed = data["speed"]
    _within(page, "speed", (speed < 0.0) | (speed > _FASTEST), speed, f"0 to {_FASTEST:g} m/s", "m/s")
    most = _HARDEST * STANDARD_GRAVITY
    for name in ("a_x", "a_y", "a_z"):
        if name in data:
            _within(page, name, np.abs(data[name]) > most, data[name], f"at most {most:.0f} m/s^2", "m/s^2")
    if "overall_ratio" in data:
        ratio = data["overall_ratio"]
        _within(page, "overall_ratio", (ratio < 0.5) | (ratio > 60.0), ratio, "0.5 to 60", "")


def _within(page: Page, name: str, wrong: np.ndarray, values: Floats, allowed: str, unit: str) -> None:
    if wrong.any():
        k = int(np.argmax(wrong))
        where = f"{page.path}, line {page.body[k][0]}, {name!r}"
        raise CaseError(where, f"{values[k]:.4g} {unit}".strip(), allowed, "check the column's unit and sign")


def _check_order(page: Page, name: str, values: Floats) -> None:
    step = np.diff(values)
    back = step <= 0.0 if name == "time" else step < 0.0
    if back.any():
        k = int(np.argmax(back)) + 1
        where = f"{page.path}, line {page.body[k][0]}, {name!r}"
        found = f"{values[k]:.6g} does not follow {values[k - 1]:.6g} in the line before"
        remedy = "several laps in one file: cut it into one file each, or add 'time [s]' that runs on"
        raise CaseError(where, found, f"{name} that runs forward", remedy)
    usual = float(np.median(step)) if len(step) else 0.0
    if len(step) and usual > 0.0 and step.max() > _HOLE * usual:
        k = int(np.argmax(step)) + 1
        unit = "s" if name == "time" else "m"
        raise CaseError(
            f"{page.path}, line {page.body[k][0]}, {name!r}",
            f"{step[k - 1]:.4g} {unit} after the line before, where {usual:.4g} {unit} is usual",
            f"at most {_HOLE:g} times the usual step",
            "the record has a hole: cut the file there, nothing is interpolated over it",
        )


def _acceleration(page: Page, data: dict[str, Floats]) -> Floats:
    along, across, up = data.pop("a_x"), data.pop("a_y"), data.pop("a_z", None)
    rotation = rotation_of(page.statements["axes"], f"{page.path}, # axes")
    own = np.stack([along, across, np.zeros_like(along) if up is None else up], axis=1)
    turned: Floats = own @ rotation.T
    if up is not None and page.statements["a_z"] == "with gravity":
        turned[:, 2] -= STANDARD_GRAVITY
    return turned


def _turn(page: Page, data: dict[str, Floats]) -> None:
    """Give angles the sense of the car's z, and rods the sign of tension."""
    upward = float(rotation_of(page.statements["axes"], f"{page.path}, # axes")[2, 2])
    pull = -1.0 if page.statements.get("rods") == "compression positive" else 1.0
    for name in data:
        if name in _ABOUT_Z:
            data[name] = data[name] * upward
        if name.startswith(("pushrod", "damper")):
            data[name] = data[name] * pull


def _channels(data: Mapping[str, Floats]) -> Mapping[str, Floats]:
    """The optional columns by name; measured loads with their corner in capitals, as "pushrod.FL"."""
    result = {}
    for name, values in data.items():
        what, _, corner = name.partition("_")
        result[f"{what}.{corner.upper()}" if what in MEASURED else name] = frozen(values)
    return MappingProxyType(result)
