"""The words of an aero file: its columns, its statements, and what must be said before a figure can be understood."""

from __future__ import annotations

from ..errors import CaseError, nearest
from ..units import parse
from .csv_text import Sheet

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
ANY = "any"
"""Stands in the cells of an axis, or of the state, that makes no difference to a device."""

_SAME = {
    "downforce": ("lift", "force_z", "front_downforce"),
    "lift": ("force_z", "front_downforce"),
    "drag": ("force_x",),
    "force_z": ("front_downforce",),
}


MEANINGS = {
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


def check_columns(sheet: Sheet) -> tuple[str, ...]:
    """Return the names of the columns; CaseError for one unknown, without a unit, or beside one it contradicts."""
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


def check_statements(sheet: Sheet, names: tuple[str, ...]) -> None:
    """Refuse an unknown statement, and ask for those that no figure shows."""
    for key in sheet.statements:
        if key not in STATEMENTS:
            known = ", ".join(STATEMENTS)
            raise CaseError(f"{sheet.path}, # {key}", "no known statement", known, nearest(key, STATEMENTS))
    ask(sheet, "axes", "x forward, y left, z up", "the axes its figures and places are written in")
    ask(sheet, "sign", "air on car", "'air on car', or 'car on balance' for readings of a balance")
    one_of(sheet, "sign", ("air on car", "car on balance"))
    one_of(sheet, "model", ("full", "half"))
    if "yaw" in names and {"drag", "force_x", "force_y"} & set(names):
        ask(sheet, "forces_along", "car", "whether drag and side force follow the car's axes when it yaws")
        if one_of(sheet, "forces_along", ("car", "wind")) == "wind":
            remedy = "turn drag and side force into the car's axes before handing them over"
            raise CaseError(f"{sheet.path}, # forces_along", "'wind'", "'car'", remedy)
    across = {"force_y", "moment_x", "moment_z"} & set(names)
    if sheet.statements.get("model") == "half" and across:
        found = f"a half model with {', '.join(sorted(across))}"
        raise CaseError(f"{sheet.path}, # model", found, "downforce, drag, moment_y: the halves cancel in the others")


def ask(sheet: Sheet, key: str, example: str, what: str) -> None:
    """Refuse a file that does not make a statement."""
    if not sheet.statements.get(key):
        remedy = f"add the line '# {key} = {example}' (or what is true of this file) at its head"
        raise CaseError(str(sheet.path), f"the file does not state {what}", f"a line '# {key} = ...'", remedy)


def one_of(sheet: Sheet, key: str, allowed: tuple[str, ...]) -> str | None:
    """Return a statement that must be one of some words, or None where it is absent."""
    value = sheet.statements.get(key)
    if value is not None and value not in allowed:
        raise CaseError(f"{sheet.path}, # {key}", repr(value), ", ".join(allowed), nearest(value, allowed))
    return value


def stated(sheet: Sheet, key: str, kind: str) -> float:
    """Return a statement's quantity in SI, which must be above 0."""
    where = f"{sheet.path}, # {key}"
    value = float(parse(sheet.statements[key], kind, where))
    if not value > 0:
        raise CaseError(where, repr(sheet.statements[key]), f"a {key.replace('_', ' ')} above 0")
    return value
