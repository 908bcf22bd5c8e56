"""The whole job as a chain of pure steps; the only module that knows every room.

case file → Case → LoadCases → Block → Library → PadLoads → Margins. Heavy rooms are imported by the step that
needs them, so that reading and balancing stay instant.
"""

from __future__ import annotations

import os
import platform
import uuid
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass, replace
from importlib.metadata import PackageNotFoundError, version
from pathlib import Path
from typing import TYPE_CHECKING, Any

from . import __version__
from .car.balance import balance
from .car.catalogue.expanding import expand
from .case.reading import read, replaced

if TYPE_CHECKING:
    from .block.model import AnyBlock
    from .car.lap_model import LapLoads
    from .car.model import LoadCases
    from .case.model import Bound, Case, LapHistory
    from .installation.model import PadLoads
    from .margins.model import Margins, Movement
    from .response.model import Library

Progress = Callable[[str, float], None]

PACKAGES = (
    "numpy",
    "scipy",
    "scikit-fem",
    "meshio",
    "netgen-mesher",
    "ngsolve",
    "pypardiso",
    "pyvista",
    "pydantic",
    "pint",
    "typer",
)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Run:
    """Everything one check produced; block, library and pads are None at level `faces`, laps empty without any."""

    run_id: str
    case: Case
    cases: LoadCases
    block: AnyBlock | None
    library: Library | None
    pads: PadLoads | None
    margins: Margins
    laps: tuple[LapLoads, ...] = ()


def loads(path: Path, overrides: Sequence[str] = (), *, judged_only: bool = False) -> tuple[Case, LoadCases]:
    """Read a case file and balance its load cases, or those alone that take part in a verdict."""
    case = read(path, overrides)
    return case, balance(case, judged_only=judged_only)


def laps(case: Case, histories: Sequence[LapHistory] | None = None) -> tuple[LapLoads, ...]:
    """Balance every sample of every lap of a case; `histories` as read, None to read them here.

    Raises CaseError for a lap that cannot be used.
    """
    if not case.laps:
        return ()
    from .car.laps import lap_loads
    from .car.resampling import resampled

    found = []
    for spec, recorded in zip(case.laps, recordings(case) if histories is None else histories, strict=True):
        history, lost = resampled(recorded, spec.step)
        found.append(lap_loads(case, history, overall_ratio=spec.overall_ratio, lost=lost))
    return tuple(found)


def recordings(case: Case) -> tuple[LapHistory, ...]:
    """Read the files of a case's laps; raises CaseError for one that cannot be used."""
    if not case.laps:
        return ()
    from .case.lap_csv import read_lap

    return tuple(read_lap(spec) for spec in case.laps)


def check(
    path: Path,
    overrides: Sequence[str] = (),
    *,
    solver: str = "auto",
    cache: Path | None = None,
    progress: Progress | None = None,
) -> Run:
    """Go from a case file to margins.

    Parameters
    ----------
    path, overrides
        The case file and `KEY=VALUE` texts laid over it.
    solver : str
        "auto", or the name of one direct solver.
    cache : Path, optional
        Folder of the response libraries; None for the user's own.
    progress : callable, optional
        Told the step and how far it is, 0 to 1.

    Raises
    ------
    BlockloadError
        For bad input, a load case that does not balance, or a block that cannot be solved.

    """
    tell = progress or (lambda _step, _share: None)
    tell("loads", 0.0)
    case, cases = loads(path, overrides, judged_only=True)
    histories = recordings(case)  # a lap that cannot be read is refused before the block is solved
    block, library = _respond(case, solver=solver, cache=cache, progress=tell)
    if case.chassis_without_block and library is not None:
        case = _with_block_twist(case, block, library)
        cases = balance(case, judged_only=True)
    tell("margins", 0.0)
    pads, margins = _judge(case, cases, block, library)
    margins = _over_splits(case, cases, block, library, margins, tell)
    margins = _with_movements(case, block, library, margins, tell)
    tell("margins", 1.0)
    return Run(
        run_id=uuid.uuid4().hex[:12],
        case=case,
        cases=cases,
        block=block,
        library=library,
        pads=pads,
        margins=margins,
        laps=laps(case, histories),
    )


def _respond(
    case: Case, *, solver: str, cache: Path | None, progress: Progress
) -> tuple[AnyBlock | None, Library | None]:
    if case.block is None:
        return None, None
    if case.block.use == "beam":
        return _respond_beam(case)
    from .block.building import build
    from .response.respond import respond

    progress("block", 0.0)
    block = build(case)
    return block, respond(block, solver=solver, cache=cache, progress=progress)


def _respond_beam(case: Case) -> tuple[AnyBlock, Library]:
    from .block.beam import build_beam
    from .block.building import recarried
    from .response.beam_library import respond_beam

    beam = build_beam(case)
    return recarried(beam, case), respond_beam(beam)


def _with_block_twist(case: Case, block: AnyBlock | None, library: Library | None) -> Case:
    """Put the block's own torsional stiffness in series with the rest of the chassis, where the case asks for it."""
    if block is None or library is None or not case.chassis_without_block:
        return case
    from .car.chassis import in_series
    from .margins.stiffness import face_to_face

    own = float(face_to_face(block, library, case)[0])
    return replace(case, chassis_torsion=in_series(case.chassis_torsion, own), chassis_without_block=False)


def _judge(
    case: Case, cases: LoadCases, block: AnyBlock | None, library: Library | None
) -> tuple[PadLoads | None, Margins]:
    """Judge all load cases; where some are no states of the car, only the others may rule out.

    A band spans pad stiffnesses, each with its own worst load case: an impossible one at one end would otherwise hide
    a failure, or lend it its other end.
    """
    from .margins.load_checks import unreal_cases

    pads, margins = _judge_all(case, cases, block, library)
    unreal = unreal_cases(case, cases)
    if not unreal or len(unreal) == len(cases.names):
        return pads, margins
    every = (*case.manoeuvres, *expand(case))
    real = balance(case, [item for item in every if item.name in cases.names and item.name not in unreal])
    alone = _judge_all(case, real, block, library)[1].verdict
    if "ruled out" not in (alone.word, margins.verdict.word):
        return pads, margins
    reason = f"judged without {', '.join(unreal)}, which are no states of the car"
    word = "ruled out" if alone.word == "ruled out" else "not shown"
    return pads, replace(margins, verdict=replace(margins.verdict, word=word, reasons=(*alone.reasons, reason)))


def _judge_all(
    case: Case, cases: LoadCases, block: AnyBlock | None, library: Library | None
) -> tuple[PadLoads | None, Margins]:
    from .margins.judging import judge

    if block is None or library is None:
        return None, judge(case, cases, None, None, None)
    from .block.building import recarried
    from .installation.install import install

    block = recarried(block, case)
    pads = install(cases, block, library, case)
    return pads, judge(case, cases, block, library, pads)


def _over_splits(
    case: Case, cases: LoadCases, block: AnyBlock | None, library: Library | None, margins: Margins, progress: Progress
) -> Margins:
    """Widen the margins over every split of whole-car aero, where no more than its totals is known."""
    if cases.aero_bounds is None:
        return margins
    from .car.aero_split import extreme_cases
    from .margins.open_aero import over_splits

    ends = []
    for index, (_, other) in enumerate(extreme_cases(case)):
        progress("splits of the downforce", index / len(cases.aero_bounds.splits))
        ends.append(_judge(other, balance(other, judged_only=True), block, library)[1])
    return over_splits(case, cases, margins, ends)


def _with_movements(
    case: Case, block: AnyBlock | None, library: Library | None, margins: Margins, progress: Progress
) -> Margins:
    """Rerun the dense part at both ends of every bounded input and lay the result over the verdict."""
    from .margins.movements import moved

    found = []
    for index, bound in enumerate(case.bounds):
        progress("bounded inputs", index / len(case.bounds))
        found.append(_movement(case, bound, block, library))
    return moved(margins, tuple(found))


def _movement(case: Case, bound: Bound, block: AnyBlock | None, library: Library | None) -> Movement:
    from .margins.model import Movement

    ends = (_with_block_twist(other, block, library) for other in _ends(case, bound))
    low, high = (_judge(other, balance(other, judged_only=True), block, library)[1].verdict for other in ends)
    return Movement(
        key=bound.key,
        low=bound.low,
        high=bound.high,
        margin_low=low.lowest_margin,
        margin_high=high.lowest_margin,
        word_low=low.word,
        word_high=high.word,
    )


def _ends(case: Case, bound: Bound) -> Iterator[Case]:
    for text in (bound.low, bound.high):
        changed = replaced(case, bound.key, text)
        yield replace(changed, bounds=())


def results_of(path: Path) -> dict[str, Any]:
    """Return the results of a run's folder, or of a case file checked here and now without writing anything."""
    if path.is_dir():
        from .report.verifying import read_results

        return read_results(path)
    from .report.results import results

    run = check(path)
    return results(run.case, run.cases, run.block, run.library, run.pads, run.margins, run_id=run.run_id)


def environment() -> dict[str, str]:
    """Return versions, solvers, cores and the cache folder: what a question about a run should come with."""
    from .response import factor, store

    found = {"blockload": __version__, "python": platform.python_version(), "system": platform.platform()}
    for package in PACKAGES:
        try:
            found[package] = version(package)
        except PackageNotFoundError:
            found[package] = "not installed"
    found["solvers"] = ", ".join(name for name in factor.SOLVERS if factor.installed(name))
    found["cores"] = str(os.cpu_count())
    found["cache"] = str(store.cache_folder())
    return found
