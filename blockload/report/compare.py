"""Two results side by side, with the difference: face wrenches, studs, margins, requirements, stiffness."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any

from ..car.model import SECTION
from .changes import change_table
from .judged_tables import amount
from .tables import Table, table
from .wording import ABSENT, fixed, plain_name

Data = Mapping[str, Any]


def compare(first: Data, second: Data, *, names: tuple[str, str] = ("A", "B")) -> tuple[Table, ...]:
    """Return tables of two results documents beside each other.

    Parameters
    ----------
    first, second : mapping
        Two documents `blockload.results/1`, of a check or of `loads`.
    names : tuple of str
        What the two are called in the note under the first table.

    """
    title = {"A": names[0], "B": names[1]}
    made = [
        _verdicts(first, second, title),
        _sections(first, second),
        _studs(first, second),
        change_table(first, second),
        _margins(first, second),
        _named(first, second, "requirements", "Required of the block"),
        _stiffness(first, second),
    ]
    return tuple(item for item in made if item is not None)


def _verdicts(first: Data, second: Data, names: Mapping[str, str]) -> Table:
    both = (first, second)
    rows = [(plain_name(key), *(str(data.get(key, ABSENT)) for data in both)) for key in ("title", "run_id")]
    rows += [
        (plain_name(key), *(_said(data.get("verdict", {}).get(key)) for data in both))
        for key in ("word", "level", "lowest_margin", "governing")
    ]
    note = "; ".join(f"{letter} is {name}" for letter, name in names.items())
    return table("The two", ("", "A", "B"), rows, note)


def _said(value: Any) -> str:
    if value is None:
        return ABSENT
    return fixed(value, 2) if isinstance(value, float) else plain_name(str(value))


def _pairs(first: Data, second: Data) -> Iterable[tuple[str, Any, Any]]:
    """Return name and both values of every key either has, in the order of the first."""
    for name in dict.fromkeys([*first, *second]):
        yield name, first.get(name), second.get(name)


def _cells(a: float | None, b: float | None, *, scale: float, places: int = 2) -> tuple[str, str, str]:
    difference = None if a is None or b is None else b - a
    return (
        fixed(a, places, scale=scale, sign=True),
        fixed(b, places, scale=scale, sign=True),
        fixed(difference, places, scale=scale, sign=True),
    )


def _faces(first: Data, second: Data) -> Iterable[tuple[str, str, Data, Data]]:
    for case, a, b in _pairs(first["load_cases"], second["load_cases"]):
        for face in ("front", "rear"):
            yield case, face, (a or {}).get("faces", {}).get(face, {}), (b or {}).get("faces", {}).get(face, {})


def _sections(first: Data, second: Data) -> Table:
    rows = []
    for case, face, a, b in _faces(first, second):
        for component in SECTION:
            cells = _cells(a.get("section", {}).get(component), b.get("section", {}).get(component), scale=1e3)
            if any(cell not in (ABSENT, "0.00") for cell in cells):
                rows.append((plain_name(case), face, component, *cells))
    note = "kN and kN·m; components that are zero in both are left out. Each about its own face's stud centroid."
    return table("Face wrenches", ("load case", "face", "component", "A", "B", "B − A"), rows, note)


def _studs(first: Data, second: Data) -> Table:
    """The greatest axial and shear force of every stud over the load cases."""
    extremes: dict[tuple[str, str], list[float | None]] = {}
    for _, face, *sides in _faces(first, second):
        for side, data in enumerate(sides):
            for stud, force in data.get("studs", {}).items():
                kept = extremes.setdefault((face, stud), [None] * 6)
                _widen(kept, side, float(force["axial"]), float(force["shear"]))
    rows = []
    for (face, stud), kept in extremes.items():
        for label, offset in (("most pulled", 0), ("most pressed", 2), ("most shear", 4)):
            words: tuple[str, ...] = _cells(kept[offset], kept[offset + 1], scale=1e3)
            if label != "most shear":
                never = [
                    value is not None and value * (1 if offset == 0 else -1) <= 0.0
                    for value in kept[offset : offset + 2]
                ]
                words = (*("never" if no else word for no, word in zip(never, words, strict=False)), *words[2:])
            rows.append((f"{face} {stud}", label, *words))
    note = "kN, largest over the load cases of each; rigid face on equal studs, before preload; axial + pulled."
    return table("Studs", ("stud", "", "A", "B", "B − A"), rows, note)


def _widen(kept: list[float | None], side: int, axial: float, shear: float) -> None:
    for offset, value, choose in ((0, axial, max), (2, axial, min), (4, shear, max)):
        before = kept[offset + side]
        kept[offset + side] = value if before is None else choose(before, value)


def _margins(first: Data, second: Data) -> Table | None:
    sides = [{(m["criterion"], m["place"]): m for m in data.get("margins", [])} for data in (first, second)]
    rows = []
    for key in dict.fromkeys([*sides[0], *sides[1]]):
        a, b = (side.get(key) for side in sides)
        values = [None if item is None else item["margin"] for item in (a, b)]
        cases = [ABSENT if item is None else plain_name(item["load_case"]) for item in (a, b)]
        governing = cases[0] if cases[0] == cases[1] else " / ".join(cases)
        rows.append((key[0], plain_name(key[1]), governing, *_cells(values[0], values[1], scale=1.0)))
    columns = ("criterion", "place", "load case", "A", "B", "B − A")
    return table("Margins", columns, rows, "Worse end of each band; below zero fails.") if rows else None


def _named(first: Data, second: Data, key: str, title: str) -> Table | None:
    rows = []
    for place, a, b in _pairs(first.get(key) or {}, second.get(key) or {}):
        for quantity, value, other in _pairs(a or {}, b or {}):
            rows.append((plain_name(place), *_amounts(quantity, value, other)))
    return table(title, ("for", "quantity", "unit", "A", "B", "B − A"), rows) if rows else None


def _stiffness(first: Data, second: Data) -> Table | None:
    pairs = _pairs(first.get("stiffness") or {}, second.get("stiffness") or {})
    rows = [_amounts(key, a, b) for key, a, b in pairs if a is not None or b is not None]
    return table("Stiffness", ("mode", "unit", "A", "B", "B − A"), rows) if rows else None


def _amounts(key: str, a: float | None, b: float | None) -> tuple[str, ...]:
    name, shown, unit = amount(key, a)
    _, other, _ = amount(key, b)
    difference = ABSENT if a is None or b is None else amount(key, b - a)[1]
    return name, unit, shown, other, difference
