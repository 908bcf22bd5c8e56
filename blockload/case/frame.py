"""[frame]: from the axes a case file writes its coordinates in to the car's own (ISO 8855), once, on reading.

p_car = R p_file + origin, with R a signed permutation of determinant +1. Places get both; directions only R; axial
vectors too, since R is a proper rotation; principal moments are permuted. Names of points become their coordinates.
"""

from __future__ import annotations

import csv
import re
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from ..arrays import Floats, frozen
from ..errors import CaseError, nearest
from ..units import parse
from .documents import Document
from .schema_car import FrameTable
from .tables import Meta, Table, fields, inner

_DIRECTIONS = {
    "forward": (1, 0, 0),
    "rearward": (-1, 0, 0),
    "left": (0, 1, 0),
    "right": (0, -1, 0),
    "up": (0, 0, 1),
    "down": (0, 0, -1),
}
_ALLOWED = "three axes in words such as 'x rearward, y right, z up': x forward or rearward, right-handed"


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Frame:
    """Rotation (3, 3) and origin (3,) of a file's frame in the car, and its named points (already in the car)."""

    rotation: Floats
    origin: Floats
    points: Mapping[str, Floats]
    content: bytes = b""


def read_frame(document: Mapping[str, Any], path: Path) -> Frame | None:
    """Return the frame a document states, or None where it states none.

    Raises
    ------
    CaseError
        If axes, origin or points cannot be used.

    """
    table = document.get("frame")
    if not isinstance(table, Mapping):
        return None
    rotation = rotation_of(table.get("axes", "x forward, y left, z up"), f"{path}, frame.axes")
    origin = parse(table.get("origin", [0.0, 0.0, 0.0]), "length_vector", f"{path}, frame.origin")
    points: Mapping[str, Floats] = {}
    content = b""
    name = table.get("points")
    if name is not None:
        if not isinstance(name, str):
            raise CaseError(f"{path}, frame.points", f"{name!r} is no file name", "the path of a CSV file")
        content = _bytes(path.parent / name, f"{path}, frame.points")
        raw = read_points(content, path.parent / name)
        points = {key: frozen(rotation @ value + origin) for key, value in raw.items()}
    return Frame(rotation=rotation, origin=frozen(origin), points=points, content=content)


def rotation_of(axes: Any, where: str) -> Floats:
    """Return the rotation (3, 3) from axes named in words, as in "x rearward, y right, z up", to the car's.

    Raises
    ------
    CaseError
        If the words do not name a right-handed frame with x along the car.

    """
    if not isinstance(axes, str):
        raise CaseError(where, f"{axes!r} is not text", _ALLOWED)
    pairs = [item.split() for item in re.split(r"[,;]", axes)]
    if [item[0] if item else "" for item in pairs] != ["x", "y", "z"] or any(len(item) != 2 for item in pairs):
        raise CaseError(where, f"{axes!r} does not name x, y and z in turn", _ALLOWED)
    for _, word in pairs:
        if word not in _DIRECTIONS:
            remedy = nearest(word, _DIRECTIONS)
            raise CaseError(where, f"{axes!r}: {word!r} is no direction", ", ".join(_DIRECTIONS), remedy)
    rotation = np.array([_DIRECTIONS[word] for _, word in pairs], dtype=float).T
    determinant = round(float(np.linalg.det(rotation)))
    if determinant == 0:
        raise CaseError(where, f"{axes!r} has two axes along one line", _ALLOWED, "name one axis of each kind")
    if determinant < 0:
        remedy = "turn one axis round; a left-handed frame would swap the car's left and right"
        raise CaseError(where, f"{axes!r} is left-handed", _ALLOWED, remedy)
    if rotation[0, 0] == 0:
        remedy = "write this file with x along the car; the mesh has its own [block] turn"
        raise CaseError(where, f"{axes!r} has x across the car", _ALLOWED, remedy)
    return frozen(rotation)


def _bytes(path: Path, where: str) -> bytes:
    try:
        return path.read_bytes()
    except OSError as error:
        reason = (error.strerror or "cannot be read").lower()
        raise CaseError(where, f"{path} cannot be read ({reason})", "a CSV file: name,x,y,z") from None


def read_points(content: bytes, path: Path) -> dict[str, Floats]:
    """Return named points [m] from CSV: a header name,x,y,z with a unit, as in "name,x [mm],y [mm],z [mm]".

    Commas, semicolons or tabs separate; a byte-order mark is skipped; comment lines start with #.

    Raises
    ------
    CaseError
        With the line number.

    """
    try:
        text = content.decode("utf-8-sig")
    except UnicodeDecodeError:
        raise CaseError(str(path), "is not UTF-8 text", "CSV in UTF-8", "save it as UTF-8") from None
    lines = [(n, line) for n, line in enumerate(text.splitlines(), 1) if line.strip() and not line.startswith("#")]
    if not lines:
        raise CaseError(str(path), "is empty", "a header name,x,y,z with a unit, then one point a line")
    header = lines[0][1]
    separator = next((mark for mark in ";\t" if mark in header), ",")
    unit = _points_unit(header, separator, f"{path}, line {lines[0][0]}")
    points: dict[str, Floats] = {}
    for number, line in lines[1:]:
        where = f"{path}, line {number}"
        cells = [cell.strip() for cell in next(csv.reader([line], delimiter=separator))]
        if len(cells) != 4 or not cells[0]:
            remedy = "write decimals with a point" if len(cells) > 4 and separator == "," else ""
            raise CaseError(where, f"{line.strip()!r} has {len(cells)} cells", "four: name,x,y,z", remedy)
        if cells[0] in points:
            raise CaseError(where, f"point {cells[0]!r} stands twice", "each name once", "rename one of them")
        points[cells[0]] = frozen([float(parse(f"{cell} {unit}", "length", where)) for cell in cells[1:]])
    return points


def _points_unit(header: str, separator: str, where: str) -> str:
    allowed = "name,x,y,z with a length unit, as in 'name,x [mm],y [mm],z [mm]' or 'name,x,y,z [mm]'"
    cells = [cell.strip().strip('"') for cell in header.split(separator)]
    matches = [re.fullmatch(r"(name|x|y|z)[\s\[(/_]*([a-zµ]*)[\])]*", cell.lower()) for cell in cells]
    names = [match[1] if match else "" for match in matches]
    if names != ["name", "x", "y", "z"]:
        raise CaseError(where, f"{header.strip()!r} is no such header", allowed)
    units = {match[2] for match in matches if match and match[2]}
    if len(units) != 1:
        found = "has no unit" if not units else f"has several units: {', '.join(sorted(units))}"
        raise CaseError(where, f"the header {header.strip()!r} {found}", allowed, "add one unit, as in x [mm]")
    (unit,) = units
    parse(f"1 {unit}", "length", where)
    return str(unit)


def to_car(document: Mapping[str, Any], table: type[Table], frame: Frame) -> Document:
    """Return the document with every coordinate in the car's frame, as bare SI numbers; nothing else is changed.

    What cannot be read stays as it is, for the schema to refuse with its full key.
    """
    result = dict(document)
    for name, info, meta in fields(table):
        if name not in document or inner(info.annotation)[0] is FrameTable:
            continue
        value = document[name]
        below, many = inner(info.annotation)
        if below is None:
            result[name] = _value(value, meta, frame)
        elif many and isinstance(value, Mapping):
            result[name] = {key: _item(item, below, meta, frame) for key, item in value.items()}
        elif isinstance(value, Mapping):
            result[name] = to_car(value, below, frame)
    return _crank(result, table, frame)


def _crank(result: Document, table: type[Table], frame: Frame) -> Document:
    direction = result.get("crank_direction")
    if table.__name__ == "DriveTable" and direction in (1, -1):
        result["crank_direction"] = int(direction * frame.rotation[0, 0])
    return result


def _item(item: Any, below: type[Table], meta: Meta, frame: Frame) -> Any:
    if isinstance(item, Mapping):
        return to_car(item, below, frame)
    if meta.short is None:
        return item
    short = next((inner_meta for name, _, inner_meta in fields(below) if name == meta.short), Meta())
    return _value(item, short, frame)


def _value(value: Any, meta: Meta, frame: Frame) -> Any:
    if meta.frame in (None, "path") or meta.kind is None:
        return value
    if meta.many and isinstance(value, list) and value and not isinstance(value[0], (int, float)):
        return [_one(item, meta, frame) for item in value]
    return _one(value, meta, frame)


def _one(value: Any, meta: Meta, frame: Frame) -> Any:
    if meta.frame == "place" and isinstance(value, str) and value.strip() in frame.points:
        return frame.points[value.strip()].tolist()
    try:
        read = np.atleast_1d(parse(value, meta.kind or "", ""))
    except CaseError as error:
        if meta.frame == "place" and isinstance(value, str) and frame.points and "has no number" in error.found:
            raise CaseError(
                f"point {value!r}", "is not in the points file", ", ".join(frame.points), nearest(value, frame.points)
            ) from None
        return value
    rotation, origin = frame.rotation, frame.origin
    if meta.frame == "x":
        return float(rotation[0, 0] * read[0] + origin[0])
    if meta.frame == "y":
        return float(rotation[1].sum() * read[0] + origin[1])
    if meta.frame == "yz":
        return [float(item) for item in (rotation @ [0.0, *read] + origin)[1:]]
    if meta.frame == "moments":
        return (np.abs(rotation) @ read).tolist()
    turned = rotation @ read
    return (turned + origin if meta.frame == "place" else turned).tolist()
