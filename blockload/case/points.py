"""Named points from CSV: name,x,y,z with a unit in the header, one point a line."""

from __future__ import annotations

import csv
import re
from pathlib import Path

from ..arrays import Floats, frozen
from ..errors import CaseError
from ..units import parse


def points_bytes(path: Path, where: str) -> bytes:
    """Return the file's bytes; `where` is the key that names it."""
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
