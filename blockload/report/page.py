"""The report as one self-contained page: no script, nothing fetched, every text from the case file escaped."""

from __future__ import annotations

import base64
import re
from collections.abc import Iterable, Sequence
from datetime import UTC, datetime
from functools import cache
from pathlib import Path
from typing import Any

from jinja2 import Environment, FileSystemLoader, StrictUndefined
from markupsafe import Markup, escape

from .. import __version__
from ..block.beam import BeamBlock
from ..car.envelope import envelope
from ..car.lap_model import LapLoads
from ..car.model import LoadCases
from ..case.model import Case
from ..margins.model import Margins
from . import judged_tables, tables
from .aero_tables import case_tables, load_case_tables
from .bands import bands_svg
from .beam_sketch import beam_svg
from .cautions import cautions
from .choice import extreme_indices, governing_index, lowest, lowest_per_criterion
from .colours import margin_legend, stress_legend
from .diagram import diagram_svg
from .echo import echo_svg
from .envelope_picture import envelope_svg
from .faces import faces_svg
from .lap_picture import lap_svg
from .lap_tables import lap_tables
from .pictures import Picture, Pictures
from .routes import pad_table, routes
from .run import RunLike
from .suspension_tables import car_tables, suspension_tables
from .wording import fixed, plain_name

_XMLNS = " xmlns='http://www.w3.org/2000/svg'"
LEVEL_WORDS = {
    "faces": "faces: rigid faces and studs, no block yet",
    "beam": "beam: a beam between the faces",
    "solid": "solid: the block as a solid",
    "refined solid": "refined solid: the block as a solid, refined where it matters",
}


def page(run: RunLike, pictures: Pictures | None = None, *, made: datetime | None = None) -> str:
    """Return report.html of a finished check.

    Parameters
    ----------
    run : RunLike
        Everything the check produced.
    pictures : Pictures, optional
        Stills of the block, or the reason why there are none.
    made : datetime, optional
        When the report was made; default now.

    """
    case, cases, margins = run.case, run.cases, run.margins
    index = governing_index(cases, margins)
    shown = _shown_cases(cases, margins, index)
    verdict = margins.verdict
    worst = lowest(margins.margins)
    values = {
        "title": case.title,
        "verdict": verdict,
        "level": LEVEL_WORDS.get(verdict.level, verdict.level),
        "lowest": None if verdict.lowest_margin is None else fixed(verdict.lowest_margin, 2),
        "governing": plain_name(verdict.governing),
        "echo": _inline(echo_svg(case, None)),
        "bands": _inline(bands_svg(lowest_per_criterion(margins.margins)[:7])) if margins.margins else "",
        "words": [tables.section_in_words(cases, index)],
        "routes": routes(cases, index, run.library, run.pads),
        "cautions": cautions(case),
        "not_judged": verdict.not_judged,
        "unsourced": judged_tables.unsourced(case),
        "pictures": _block_pictures(pictures),
        "beam": _inline(beam_svg(run.block)) if isinstance(run.block, BeamBlock) else "",
        "loads": _load_tables(case, cases),
        "governing_faces": _inline(faces_svg(cases, index, key="governing")),
        "faces": [_inline(faces_svg(cases, i, key=f"faces-{i}")) for i in shown[1:]],
        "diagram": _inline(diagram_svg(cases, index)),
        "studs": [*_pad_tables(run, shown[:1]), *(tables.stud_forces(cases, i) for i in shown)],
        **_driven(case, run.laps),
        "free_bodies": tables.free_bodies(cases, index),
        "free_body_case": plain_name(cases.names[index]),
        "margins": [judged_tables.margin_table(worst), judged_tables.cause_table(worst[:24])],
        "stiffness": _stiffness(margins),
        "requirements": judged_tables.requirement_tables(margins),
        "checks": _checks(case, margins),
        "assumptions": judged_tables.assumption_tables(case, margins),
    }
    mesh = run.block.sha256 or None if run.block else None
    return _render("page.html", values | _identity(run.run_id, case, made, mesh))


def loads_page(case: Case, cases: LoadCases, laps: Sequence[LapLoads] = (), *, made: datetime | None = None) -> str:
    """Return the page of `loads --report`: echo picture, load cases, free bodies, checks; no verdict."""
    index = governing_index(cases)
    values = {
        "title": case.title,
        "verdict": None,
        "level": "loads only: nothing is judged",
        "echo": _inline(echo_svg(case, None)),
        "words": [tables.section_in_words(cases, index)],
        "routes": routes(cases, index),
        "cautions": cautions(case),
        "not_judged": ("everything: this page shows loads, no margin",),
        "unsourced": judged_tables.unsourced(case),
        "loads": _load_tables(case, cases),
        "governing_faces": _inline(faces_svg(cases, index, key="governing")),
        "faces": [_inline(faces_svg(cases, i, key=f"faces-{i}")) for i in extreme_indices(cases) if i != index],
        "diagram": _inline(diagram_svg(cases, index)),
        "studs": [tables.stud_forces(cases, index)],
        **_driven(case, laps),
        "free_bodies": tables.free_bodies(cases, index),
        "free_body_case": plain_name(cases.names[index]),
        "checks": [judged_tables.check_table(case.checks, "Checks of the case file")] if case.checks else [],
        "assumptions": judged_tables.assumption_tables(case, None),
    }
    empty: dict[str, Any] = {
        "lowest": None,
        "governing": "",
        "bands": "",
        "pictures": None,
        "beam": "",
        "margins": [],
        "stiffness": [],
        "requirements": (),
    }
    return _render("page.html", values | empty | _identity("loads", case, made, None))


def _driven(case: Case, laps: Sequence[LapLoads]) -> dict[str, Any]:
    """The envelope and the laps, as pictures with their captions and as tables."""
    curves = []
    if case.envelope is not None:
        said = "Every vertex is a load case; seen from above, with the samples of the laps."
        curves.append((_inline(envelope_svg(envelope(case), laps)), said))
    for k, lap in enumerate(laps):
        said = "Axial stud force, + pulled; rigid face on equal studs, before preload."
        curves.append((_inline(lap_svg(lap, key=f"lap-{k}")), said))
    return {"curves": curves, "lap_tables": lap_tables(laps)}


def _shown_cases(cases: LoadCases, margins: Margins, index: int) -> list[int]:
    """The governing case and the next two that govern some criterion."""
    others = [
        cases.names.index(m.load_case) for m in lowest_per_criterion(margins.margins) if m.load_case in cases.names
    ]
    return list(dict.fromkeys([index, *others]))[:3]


def _load_tables(case: Case, cases: LoadCases) -> list[tables.Table]:
    return [
        tables.load_case_summary(cases),
        tables.wheel_forces(cases),
        tables.section_wrenches(cases),
        tables.face_routes(case, cases),
        tables.stud_extremes(cases),
        tables.device_table(case),
        *load_case_tables(cases),
        *suspension_tables(case, cases),
        *car_tables(case, cases),
        *case_tables(case),
    ]


def _pad_tables(run: RunLike, indices: Iterable[int]) -> list[tables.Table]:
    if run.library is None or run.pads is None:
        return []
    return [pad_table(run.cases, run.library, run.pads, i) for i in indices]


def _stiffness(margins: Margins) -> list[tables.Table]:
    if not margins.stiffness:
        return []
    return [judged_tables.stiffness_table(margins), judged_tables.rear_face_table(margins)]


def _checks(case: Case, margins: Margins) -> list[tables.Table]:
    found = [("Checks of the case file", case.checks), ("Checks of this run", margins.checks)]
    return [judged_tables.check_table(checks, title) for title, checks in found if checks]


def _block_pictures(pictures: Pictures | None) -> dict[str, Any] | None:
    if pictures is None:
        return None
    return {
        "missing": pictures.missing,
        "overview": [_data(item) for item in pictures.overview],
        "hotspots": [_data(item) for item in pictures.hotspots],
        "margin_legend": _inline(margin_legend()),
        "stress_legend": _inline(stress_legend(pictures.stress_range, pictures.stress_peak)),
    }


def _data(item: Picture) -> dict[str, str]:
    encoded = base64.b64encode(item.png).decode("ascii")
    return {"source": f"data:image/png;base64,{encoded}", "caption": item.caption, "alt": item.alt}


def _identity(run_id: str, case: Case, made: datetime | None, mesh: str | None) -> dict[str, Any]:
    moment = (made or datetime.now(UTC)).astimezone(UTC)
    return {
        "run_id": run_id,
        "version": __version__,
        "date": moment.strftime("%Y-%m-%d %H:%M UTC"),
        "hashes": [("case file", case.sha256), *([("mesh", mesh)] if mesh else [])],
    }


def _inline(svg: str) -> Markup:
    """An SVG of our own as part of the page: its texts were escaped when it was drawn."""
    return Markup(svg.replace(_XMLNS, ""))  # noqa: S704


@cache
def _environment() -> Environment:
    made = Environment(
        loader=FileSystemLoader(Path(__file__).parent),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    made.filters["symbols"] = _symbols
    return made


def _symbols(words: str) -> Markup:
    """A text with symbols such as M_sag set with their subscript; the text is escaped first."""
    return Markup(re.sub(r"\b([A-Zaα])_([a-z]{1,3})\b", r"\1<sub>\2</sub>", str(escape(words))))  # noqa: S704


def _render(template: str, values: dict[str, Any]) -> str:
    style = (Path(__file__).parent / "page.css").read_text(encoding="utf-8")
    return _environment().get_template(template).render(style=Markup(style), **values)  # noqa: S704
