"""Columns with units from a CSV file, as spreadsheets write it: byte-order mark, semicolons or tabs, quoted cells.

A column's head carries its unit in brackets: "speed [km/h]". Lines that start with # are comments; one of the form
"# key = value" is a statement about the whole file. Numbers have a decimal point; nothing is guessed.
"""

from __future__ import annotations

import csv
import re
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from ..arrays import Floats, frozen
from ..errors import CaseError

_HEAD = re.compile(r"([A-Za-z_]\w*)(?:\s*[\[(]\s*(.*?)\s*[\])])?")
_NUMBER = re.compile(r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?")
_STATEMENT = re.compile(r"#+\s*([A-Za-z_][\w ]*?)\s*=\s*(.*)")


@dataclass(frozen=True, slots=True, kw_only=True)
class Head:
    """One column's name and unit as written; the unit is None where no brackets stand."""

    name: str
    unit: str | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Page:
    """A CSV file cut into statements by key, the heads of the columns, and (line number, line) of each row."""

    path: Path
    statements: Mapping[str, str]
    heads: tuple[Head, ...]
    separator: str
    body: tuple[tuple[int, str], ...]

    def sheet(self, first: int = 0, last: int | None = None) -> Sheet:
        """Return some of its rows (all of them by default) as cells; CaseError for one of the wrong length."""
        body = self.body[first:last]
        count, mark = len(self.heads), self.separator
        return Sheet(
            path=self.path,
            statements=self.statements,
            heads=self.heads,
            cells=tuple(_row(_cells(line, mark), count, f"{self.path}, line {n}", mark) for n, line in body),
            lines=tuple(number for number, _ in body),
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class Sheet:
    """A CSV file as text: statements by key, the heads of the columns, cells row by row, the line of each row."""

    path: Path
    statements: Mapping[str, str]
    heads: tuple[Head, ...]
    cells: tuple[tuple[str, ...], ...]
    lines: tuple[int, ...]

    def words(self, column: int) -> tuple[str, ...]:
        """Return the cells of a column, none of which may be empty."""
        for line, row in zip(self.lines, self.cells, strict=True):
            if not row[column]:
                raise CaseError(f"{self.path}, line {line}", f"{self.heads[column].name!r} is empty", "a word")
        return tuple(row[column] for row in self.cells)

    def numbers(self, column: int, *, anything: str = "") -> Floats:
        """Return the numbers of a column as written, before its unit; nan where the word for anything stands."""
        values = []
        for line, row in zip(self.lines, self.cells, strict=True):
            text = row[column]
            if anything and text == anything:
                values.append(np.nan)
            elif _NUMBER.fullmatch(text):
                values.append(float(text))
            else:
                raise _not_a_number(text, f"{self.path}, line {line}, {self.heads[column].name!r}")
        return frozen(values)


def read_sheet(path: Path, where: str) -> Sheet:
    """Read a CSV file.

    Parameters
    ----------
    path : Path
        The file.
    where : str
        What asked for it, for the message if it cannot be read.

    Raises
    ------
    CaseError
        With the line number.

    """
    return read_page(path, where).sheet()


def read_page(path: Path, where: str) -> Page:
    """Read a CSV file as far as its column heads, the figures still as lines; raises as `read_sheet` does."""
    lines = _lines(path, where)
    statements: dict[str, str] = {}
    body: list[tuple[int, str]] = []
    for number, line in lines:
        text = line.strip()
        if text.lstrip('"').startswith("#"):
            _state(statements, text, f"{path}, line {number}")
        elif text.strip(",;\t "):
            body.append((number, line))
    if len(body) < 2:
        allowed = "a line of column names with units, as in 'speed [m/s], downforce [N]', then the figures"
        raise CaseError(str(path), "has no figures", allowed)
    first, head = body[0]
    separator = next((mark for mark in ";\t" if mark in head), ",")
    heads = _heads(_cells(head, separator), f"{path}, line {first}")
    return Page(path=path, statements=statements, heads=heads, separator=separator, body=tuple(body[1:]))


def _lines(path: Path, where: str) -> list[tuple[int, str]]:
    try:
        text = path.read_bytes().decode("utf-8-sig")
    except OSError as error:
        reason = (error.strerror or "cannot be read").lower()
        raise CaseError(where, f"{path} cannot be read ({reason})", "a CSV file", "check the path") from None
    except UnicodeDecodeError:
        raise CaseError(str(path), "is not UTF-8 text", "CSV in UTF-8", "save it as CSV UTF-8") from None
    return list(enumerate(text.splitlines(), 1))


def _state(statements: dict[str, str], text: str, where: str) -> None:
    match = _STATEMENT.fullmatch(text.rstrip(";,\t ").strip('"').strip())
    if match is None:
        return
    key = re.sub(r"\s+", "_", match[1].lower())
    if key in statements:
        raise CaseError(where, f"{key!r} is stated twice", "each statement once", "delete one of the two lines")
    statements[key] = match[2].strip().strip('"').strip()


def _cells(line: str, separator: str) -> list[str]:
    return [cell.strip() for cell in next(csv.reader([line], delimiter=separator))]


def _heads(cells: list[str], where: str) -> tuple[Head, ...]:
    while cells and not cells[-1]:
        cells.pop()
    heads = []
    for cell in cells:
        match = _HEAD.fullmatch(cell)
        if match is None:
            raise CaseError(where, f"{cell!r} is no column head", "a name and a unit, as in 'ride_front [mm]'")
        heads.append(Head(name=match[1].lower(), unit=match[2]))
    names = [head.name for head in heads]
    twice = next((name for name in names if names.count(name) > 1), None)
    if twice is not None:
        raise CaseError(where, f"column {twice!r} stands twice", "each column once", "delete or rename one of the two")
    return tuple(heads)


def _row(cells: list[str], count: int, where: str, separator: str) -> tuple[str, ...]:
    if len(cells) > count and not any(cells[count:]):
        cells = cells[:count]
    if len(cells) != count:
        remedy = "write decimals with a point" if len(cells) > count and separator == "," else "fill or delete the line"
        raise CaseError(where, f"{len(cells)} cells", f"{count}, one under each column head", remedy)
    return tuple(cells)


def _not_a_number(text: str, where: str) -> CaseError:
    allowed = "one number with a decimal point"
    if not text:
        return CaseError(where, "is empty", allowed, "fill the hole: nothing is interpolated over a missing figure")
    comma = re.fullmatch(r"([+-]?\d+),(\d+)", text.replace("−", "-"))
    if comma:
        return CaseError(where, f"{text!r} has a decimal comma", allowed, f"write {comma[1]}.{comma[2]}")
    return CaseError(where, f"{text!r} is no number", allowed, "leave no hole: measure it, or leave the whole line out")
