"""[frame]: from the axes a case file writes its coordinates in to the car's own (ISO 8855), once, on reading.

p_car = R p_file + origin, with R a signed permutation of determinant +1. Places get both; directions only R; axial
vectors too, since R is a proper rotation; principal moments are permuted. Names of points become their coordinates.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from ..arrays import Floats, frozen
from ..errors import CaseError, nearest
from ..units import parse
from .documents import Document, join_key
from .points import points_bytes, read_points
from .schema_car import FrameTable
from .tables import Meta, Table, fields, inner

CAR_AXES = "x forward, y left, z up"
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
    """Rotation (3, 3) and origin (3,) of a file's frame in the car, and its named points (already in the car).

    path is the case file, source the points file, content the points file's bytes.
    """

    rotation: Floats
    origin: Floats
    points: Mapping[str, Floats]
    path: Path
    source: Path
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
    for key in table:
        if key not in FrameTable.model_fields:
            allowed = ", ".join(FrameTable.model_fields)
            raise CaseError(
                f"{path}, frame.{key}", f"frame.{key} is not a key", allowed, nearest(key, FrameTable.model_fields)
            )
    rotation, origin = axes_and_origin(table, path)
    points: Mapping[str, Floats] = {}
    content, source = b"", path
    name = table.get("points")
    if name is not None:
        if not isinstance(name, str):
            raise CaseError(f"{path}, frame.points", f"{name!r} is no file name", "the path of a CSV file")
        source = path.parent / name
        content = points_bytes(source, f"{path}, frame.points")
        raw = read_points(content, source)
        points = {key: frozen(rotation @ value + origin) for key, value in raw.items()}
    return Frame(rotation=rotation, origin=origin, points=points, path=path, source=source, content=content)


def axes_and_origin(table: Mapping[str, Any], path: Path) -> tuple[Floats, Floats]:
    """Return rotation (3, 3) and origin (3,) of a [frame] table in the car; raises as `read_frame` does."""
    rotation = rotation_of(table.get("axes", CAR_AXES), f"{path}, frame.axes")
    origin = parse(table.get("origin", [0.0, 0.0, 0.0]), "length_vector", f"{path}, frame.origin")
    return rotation, frozen(origin)


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


def to_car(document: Mapping[str, Any], table: type[Table], frame: Frame, place: str = "") -> Document:
    """Return the document with every coordinate in the car's frame, as bare SI numbers; nothing else is changed.

    What cannot be read stays as it is, for the schema to refuse; `place` is the dotted key so far, for messages.

    Raises
    ------
    CaseError
        If a place names a point that the points file lacks.

    """
    result = dict(document)
    for name, info, meta in fields(table):
        if name not in document or inner(info.annotation)[0] is FrameTable:
            continue
        value, key = document[name], f"{place}{name}"
        below, many = inner(info.annotation)
        if below is None:
            result[name] = _value(value, meta, frame, key)
        elif many and isinstance(value, Mapping):
            result[name] = {
                entry: _item(item, below, meta, frame, f"{key}.{join_key([entry])}") for entry, item in value.items()
            }
        elif isinstance(value, Mapping):
            result[name] = to_car(value, below, frame, f"{key}.")
    return result


def _item(item: Any, below: type[Table], meta: Meta, frame: Frame, key: str) -> Any:
    if isinstance(item, Mapping):
        return to_car(item, below, frame, f"{key}.")
    if meta.short is None:
        return item
    short = next((inner_meta for name, _, inner_meta in fields(below) if name == meta.short), Meta())
    return _value(item, short, frame, key)


def _value(value: Any, meta: Meta, frame: Frame, key: str) -> Any:
    if meta.frame == "sign":
        return int(value * frame.rotation[0, 0]) if value in (1, -1) else value
    if meta.frame in (None, "path") or meta.kind is None:
        return value
    if meta.many and isinstance(value, list) and value and not isinstance(value[0], (int, float)):
        return [_one(item, meta, frame, key) for item in value]
    return _one(value, meta, frame, key)


def _one(value: Any, meta: Meta, frame: Frame, key: str) -> Any:
    if meta.frame == "place" and frame.points and isinstance(value, str) and re.match(r"\s*[^\W\d]", value):
        return _point(value.strip(), frame, key)
    try:
        read = np.atleast_1d(parse(value, meta.kind or "", ""))
    except CaseError:
        return value
    return _turned(read, meta.frame or "", frame)


def _point(name: str, frame: Frame, key: str) -> list[float]:
    if name not in frame.points:
        found = f"{name!r} is no point of {frame.source.name}"
        raise CaseError(f"{frame.path}, {key}", found, ", ".join(frame.points), nearest(name, frame.points))
    point: list[float] = frame.points[name].tolist()
    return point


def _turned(read: Floats, what: str, frame: Frame) -> Any:
    """Return numbers of the file in the car: "vector" and "axial" only turn, since the rotation is proper."""
    rotation, origin = frame.rotation, frame.origin
    if what == "x":
        return float(rotation[0, 0] * read[0] + origin[0])
    if what == "y":
        return float(rotation[1].sum() * read[0] + origin[1])
    if what == "yz":
        return [float(item) for item in (rotation @ [0.0, *read] + origin)[1:]]
    if what == "pair":
        return (np.abs(rotation[1:, 1:]) @ read).tolist()
    if what == "product":
        return float(rotation[1:, 1:].sum(axis=1).prod() * read[0])
    if what == "moments":
        return (np.abs(rotation) @ read).tolist()
    turned = rotation @ read
    return (turned + origin if what == "place" else turned).tolist()
