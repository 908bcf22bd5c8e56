"""Tables of the standard situations: what is covered, which signs turn, what governs each response, on what basis."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import asdict
from typing import Any

from ..car.catalogue.coverage import coverage, ends
from ..car.envelope import GROUP
from ..car.governing import Governing, governing, in_group
from ..car.grip_notes import grip_notes
from ..car.model import LoadCases
from ..case.model import Case
from .tables import Table, table
from .wording import SECTION_WORDS, fixed, plain_name

_MANY = 6
_SHEAR = ("tension", "compression", "shear")


def coverage_table(case: Case) -> Table:
    """Every group of the catalogue: covered, in part, left out with the reason, or not asked for."""
    rows = []
    for row in coverage(case):
        why = "; ".join(f"{plain_name(gap.situation)}: {gap.why} ({gap.remedy})" for gap in row.omissions)
        rows.append((plain_name(row.group), row.status, str(len(row.load_cases)), why))
    note = "A situation that is left out is not judged: silence about it is not a pass."
    return table(
        "Standard situations", ("group", "status", "load cases", "left out, and what would bring it in"), rows, note
    )


def ends_table(cases: LoadCases) -> Table:
    """Both ends of every section component, and whether its sign ever turns round."""
    rows = []
    for item in ends(cases):
        unit, scale, *_ = SECTION_WORDS[item.component]
        turn = "yes" if item.turns else f"no: {', '.join(plain_name(name) for name in item.missing) or 'see the cases'}"
        rows.append(
            (
                f"{item.face} {item.component}",
                f"{fixed(item.least, 2, scale=scale, sign=True)} {unit}, {plain_name(item.least_case)}",
                f"{fixed(item.greatest, 2, scale=scale, sign=True)} {unit}, {plain_name(item.greatest_case)}",
                turn,
            )
        )
    note = "A component that never changes sign may only lack the situation that turns it: those are named."
    return table("Both ends of every section component", ("component", "least", "greatest", "turns round"), rows, note)


def governing_table(cases: LoadCases, group: str | None = GROUP) -> Table:
    """The governing load case of every response among one group (the envelope); of all cases where it is empty."""
    index = in_group(cases, group)
    found = governing(cases, index if len(index) else None)
    title = "What governs each response" + (f" in the {group}" if len(index) else "")
    rows = [(f"{row.face} {row.place} {row.response}", *_governing_cells(row)) for row in found]
    return table(title, ("response", "value", "load case", "next", "load case "), rows, "kN, kN·m; each has its own.")


def basis_table(cases: LoadCases) -> Table:
    """Kind and basis of every load case that states one; cases of one basis share a row, as the envelope's do."""
    found: dict[tuple[str, str], list[str]] = {}
    for c, basis in enumerate(cases.basis):
        if basis:
            counted = f"{cases.kind[c]}, no fatigue cycle" if cases.fatigue_exempt[c] else cases.kind[c]
            words = "boundary of grip and power" if cases.group[c] == GROUP else basis
            found.setdefault((counted, words), []).append(plain_name(cases.names[c]))
    rows = [(_some(names), counted, basis) for (counted, basis), names in found.items()]
    return table("Kind and basis of the load cases", ("load cases", "kind", "basis"), rows)


def catalogue_tables(case: Case, cases: LoadCases) -> tuple[Table, ...]:
    """All tables of this module that have something to say; none for a case without catalogue or envelope."""
    if case.catalogue is None and case.envelope is None:
        return ()
    result = [coverage_table(case), ends_table(cases), basis_table(cases)]
    if case.envelope is not None:
        result.append(governing_table(cases))
    beyond = tuple((note,) for note in grip_notes(case, cases))
    if beyond:
        result.append(table("Beyond the tyres' grip", ("load case",), beyond))
    return tuple(item for item in result if item.rows)


def situation_written(cases: LoadCases, index: int) -> dict[str, Any]:
    """Return kind, group and basis of one load case, as they are written."""
    if not cases.kind:
        return {}
    return {
        "kind": cases.kind[index],
        "fatigue_exempt": cases.fatigue_exempt[index],
        "group": cases.group[index],
        "basis": cases.basis[index],
    }


def coverage_written(case: Case, cases: LoadCases) -> dict[str, Any]:
    """Return coverage, ends of the section components and what governs the envelope, as they are written."""
    if case.catalogue is None and case.envelope is None:
        return {}
    rows = governing(cases, in_group(cases, GROUP))
    return {
        "situations": [asdict(row) for row in coverage(case)],
        "section_ends": [asdict(row) for row in ends(cases)],
        "envelope_governing": [asdict(row) for row in rows],
    }


def _some(names: list[str]) -> str:
    """Return the names, or the first few and how many more."""
    return ", ".join(names) if len(names) <= _MANY else f"{', '.join(names[:2])} and {len(names) - 2} more"


def _governing_cells(row: Governing) -> Iterable[str]:
    unit = "kN" if row.response in _SHEAR else SECTION_WORDS[row.place][0]
    yield f"{fixed(row.value, 2, scale=1e3, sign=True)} {unit}"
    yield plain_name(row.load_case)
    yield fixed(row.second[1], 2, scale=1e3, sign=True) if row.second is not None else ""
    yield plain_name(row.second[0]) if row.second is not None else ""
