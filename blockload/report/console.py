"""What the terminal shows, as rich renderables; nothing here prints.

The summary of a check fits one screen: 40 lines of 100 columns.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import Protocol

from rich import box
from rich.console import RenderableType
from rich.table import Table as RichTable
from rich.text import Text

from ..car.lap_model import LapLoads
from ..car.model import SECTION, LoadCases
from ..case.model import Case
from ..margins.model import Margin, Margins
from . import judged_tables, tables
from .aero_tables import load_case_tables, remark_tables
from .catalogue_tables import catalogue_tables
from .cautions import ONE_LINE
from .choice import governing_index, lowest, lowest_per_criterion
from .lap_tables import lap_tables
from .single_tables import envelope_tables, one_case
from .suspension_tables import suspension_tables
from .wording import band, figure, fixed, plain_name, quantity

WIDTH = 100
STYLES = {"ruled out": "bold red", "not shown": "bold yellow", "shown within scope": "bold green"}


class TableLike(Protocol):
    """Anything with a title, columns, rows and a note can be drawn."""

    @property
    def title(self) -> str: ...  # noqa: D102

    @property
    def columns(self) -> Sequence[str]: ...  # noqa: D102

    @property
    def rows(self) -> Sequence[Sequence[str]]: ...  # noqa: D102

    @property
    def note(self) -> str: ...  # noqa: D102


def render(items: Iterable[TableLike]) -> list[RenderableType]:
    """Return tables as renderables, each with its note beneath."""
    parts: list[RenderableType] = []
    for item in items:
        parts.append(_grid(item))
        if item.note:
            parts.append(Text(item.note, style="dim"))
        parts.append(Text(""))
    return parts


def loads_tables(
    case: Case, cases: LoadCases, laps: Sequence[LapLoads] = (), *, shown: str | None = None
) -> list[RenderableType]:
    """Return the load cases of a case file as tables: summary, wheels, sections, studs, laps.

    `shown` names a load case whose free bodies and sections along the car are shown too; CaseError if unknown.
    """
    chosen = (
        tables.load_case_summary(cases),
        tables.wheel_loads(cases),
        tables.section_wrenches(cases),
        tables.stud_extremes(cases),
        *load_case_tables(cases),
        *remark_tables(case),
        *suspension_tables(case, cases),
        *catalogue_tables(case, cases),
        *envelope_tables(case),
        *lap_tables(laps),
        *(one_case(cases, shown) if shown is not None else ()),
    )
    failed = [item for item in case.checks if not item.ok]
    extra = [judged_tables.check_table(failed, "Checks of the case file that failed")] if failed else []
    return [Text(case.title, style="bold"), Text(""), *render((*chosen, *extra)), Text(ONE_LINE, style="dim")]


def summary(case: Case, cases: LoadCases, margins: Margins) -> list[RenderableType]:
    """Return the one-screen summary of a check."""
    verdict = margins.verdict
    style = STYLES.get(verdict.word, "bold")
    head = Text.assemble(
        (verdict.word.upper(), style), f"  at level {verdict.level}  ", (_short(case.title, WIDTH - 34), "dim")
    )
    parts: list[RenderableType] = [head]
    if verdict.lowest_margin is not None:
        governing = plain_name(_short(verdict.governing, WIDTH))
        parts.append(Text(f"lowest margin {fixed(verdict.lowest_margin, 2)}: {governing}"))
    parts += [Text(f"  because: {_short(reason, 2 * WIDTH - 20)}") for reason in verdict.reasons[:3]]
    if len(verdict.reasons) > 3:
        parts.append(Text(f"  and {len(verdict.reasons) - 3} more reasons in the report"))
    parts += [_faces(cases, _governing_cases(cases, margins)), _margins(margins)]
    if required := judged_tables.requirement_summary(margins):
        parts.append(_grid(required))
    parts += _checks(case, margins)
    parts.append(_clipped("not judged: ", verdict.not_judged, 3))
    parts.append(Text(ONE_LINE, style="dim"))
    return parts


def _governing_cases(cases: LoadCases, margins: Margins) -> list[int]:
    """The load cases that govern the lowest margins, at most three, worst first."""
    found = [cases.names.index(m.load_case) for m in lowest(margins.margins, 12) if m.load_case in cases.names]
    ordered = list(dict.fromkeys(found)) or [governing_index(cases, margins)]
    return ordered[:3]


def _faces(cases: LoadCases, indices: Sequence[int]) -> RichTable:
    grid = _empty("Face wrenches of the governing load cases: kN, kN·m about the centroid of the studs")
    for name in ("load case", "face", *SECTION):
        grid.add_column(name, justify="left" if name in ("load case", "face") else "right", no_wrap=True)
    for index in indices:
        for face in cases.faces:
            values = [fixed(w, 2, scale=1e3, sign=True) for w in cases.section(face)[index]]
            grid.add_row(_short(plain_name(cases.names[index]), 24), face, *values)
    return grid


def _margins(margins: Margins) -> RichTable:
    grid = _empty("Lowest margin of each criterion (below zero fails)")
    for name in ("criterion", "place", "load case", "applied", "allowable", "margin"):
        number = name in ("applied", "allowable", "margin")
        grid.add_column(name, justify="right" if number else "left", no_wrap=True)
    shown = lowest_per_criterion(margins.margins)
    for item in shown[:9]:
        style = "red" if item.margin is not None and item.margin < 0 else ""
        grid.add_row(*_margin_cells(item), style=style)
    if len(shown) > 9:
        grid.add_row(f"and {len(shown) - 9} more in the report", *[""] * 5)
    if not shown:
        grid.add_row("none", *[""] * 5)
    return grid


def _margin_cells(item: Margin) -> tuple[str, ...]:
    trust = "" if item.trust == "converged" else f" ({item.trust})"
    return (
        _short(item.criterion, 16),
        _short(plain_name(item.place) + trust, 24),
        _short(plain_name(item.load_case), 15),
        quantity(item.applied, item.unit),
        quantity(item.allowable, item.unit),
        band(item.band, item.margin),
    )


def _checks(case: Case, margins: Margins) -> list[Text]:
    every = (*case.checks, *margins.checks)
    failed = [item for item in every if not item.ok]
    lines = [Text(f"checks: {len(every) - len(failed)} of {len(every)} passed", style="" if not failed else "bold")]
    for item in failed[:4]:
        text = f"  FAILED {item.name}: {figure(item.value)} against {figure(item.limit)} {item.note}"
        lines.append(Text(_short(text, WIDTH), style="red"))
    if len(failed) > 4:
        lines.append(Text(f"  and {len(failed) - 4} more failed, listed in the report", style="red"))
    return lines


def _clipped(head: str, items: Sequence[str], lines: int) -> Text:
    """Return "head: a; b; c" cut to a number of lines, saying how many items are left out."""
    room = lines * (WIDTH - 8) - len(head)
    shown = 0
    for count in range(1, len(items) + 1):
        if len("; ".join(items[:count])) > room:
            break
        shown = count
    rest = len(items) - shown
    body = "; ".join(items[:shown]) or ("nothing beyond the standing list" if not items else "")
    more = f"; and {rest} more in the report" if rest else ""
    return Text(head + body + more)


def _grid(item: TableLike) -> RichTable:
    grid = _empty(item.title)
    for column, name in enumerate(item.columns):
        cells = [row[column] for row in item.rows]
        numeric = bool(cells) and all(tables.is_number(cell) for cell in cells)
        least = min(12, max((len(cell) for cell in cells), default=0)) if column == 0 else None
        grid.add_column(name, justify="right" if numeric else "left", no_wrap=numeric, min_width=least)
    for row in item.rows:
        grid.add_row(*(Text(cell) for cell in row))
    return grid


def _empty(title: str) -> RichTable:
    return RichTable(
        title=Text(title),
        title_justify="left",
        title_style="bold",
        box=box.SIMPLE_HEAD,
        show_edge=False,
        pad_edge=False,
    )


def _short(text: str, length: int) -> str:
    return text if len(text) <= length else text[: length - 1] + "…"
