"""Writing a run's folder: results.json comes last, so that its presence means the run is whole."""

from __future__ import annotations

import hashlib
import tomllib
from collections.abc import Iterable, Iterator, Mapping, Sequence
from pathlib import Path
from typing import Any

from ..car.balance import balance
from ..car.envelope import envelope
from ..car.lap_model import LapLoads
from ..car.model import LoadCases
from ..case.model import Case
from ..errors import OutputError
from .choice import governing_index
from .curves import along_csv, envelope_csv, free_bodies_csv
from .files import probe_folder, refusal, write_beside, write_text
from .handover import Installed, write_sheets
from .lap_files import laps_written, write_laps
from .page import page
from .pictures import MISSING, Pictures, draw
from .results import results, write_json
from .run import RunLike
from .surface import Surface, surface, write_fields

_TABLES = (".csv", ".npy")
NO_SURFACE = f"{MISSING}: a beam has no surface to draw."
SWITCHED_OFF = f"{MISSING}: they were switched off for this run."


def probe_output(folder: Path) -> None:
    """Refuse an output folder that cannot be written, before the work starts; raises OutputError."""
    probe_folder(folder)


def write_run(folder: Path, run: RunLike, *, pictures: bool = True) -> None:
    """Write inputs/, sheets/, laps/, fields.vtu, report.html and, last, results.json into `folder`.

    Each file is written beside and renamed; no other name in the folder is touched. The results of an older run are
    taken away first, so that a run cut short never leaves old numbers beside new files.

    Raises
    ------
    OutputError
        Where the folder cannot be written.

    """
    probe_folder(folder)
    _clear(folder)
    hashes = _write_inputs(folder / "inputs", run.case)
    stills = _block(folder, run, pictures=pictures)
    write_text(folder / "report.html", page(run, stills))
    data = results(run.case, run.cases, run.block, run.library, run.pads, run.margins, run_id=run.run_id)
    data["inputs"]["files"] = hashes
    data |= laps_written(run.laps)
    _hand_over(folder, run)
    write_json(folder / "results.json", data)


def write_handover(
    folder: Path,
    case: Case,
    cases: LoadCases,
    laps: Sequence[LapLoads] = (),
    *,
    installed: Installed | None = None,
    run_id: str = "loads",
) -> None:
    """Write what others work on with: hand-over sheets, free bodies, sections along the car, the envelope."""
    write_sheets(folder, case, cases, laps=laps, installed=installed, run_id=run_id)
    write_text(folder / "along-the-car.csv", along_csv(cases))
    write_text(folder / "free-bodies.csv", free_bodies_csv(cases))
    if case.envelope is not None:
        write_text(folder / "envelope.csv", envelope_csv(envelope(case)))


def _hand_over(folder: Path, run: RunLike) -> None:
    """Hand over every load case, those among them that take no part in the verdict."""
    cases, installed = run.cases, None
    if not all(item.judged for item in run.case.manoeuvres) or run.case.catalogue is not None:
        cases = balance(run.case)
    if run.library is not None and run.pads is not None:
        installed = Installed(cases=run.cases, library=run.library, pads=run.pads)
    write_handover(folder / "sheets", run.case, cases, run.laps, installed=installed, run_id=run.run_id)
    write_laps(folder / "laps", run.laps)


def _clear(folder: Path) -> None:
    """Take away what an older run wrote under our names."""
    old = [folder / name for name in ("results.json", "report.html", "fields.vtu")]
    old += [path for part in ("sheets", "laps") for path in sorted((folder / part).glob("*")) if path.suffix in _TABLES]
    for path in old:
        try:
            path.unlink(missing_ok=True)
        except OSError as error:
            raise refusal(path, error) from error


def _block(folder: Path, run: RunLike, *, pictures: bool) -> Pictures | None:
    """Write the surface fields and draw the block, where there is one."""
    seen = _surface(run)
    if seen is None:
        return None if run.block is None else Pictures(missing=NO_SURFACE)
    write_fields(folder / "fields.vtu", seen, run_id=run.run_id)
    return draw(seen, run.margins) if pictures else Pictures(missing=SWITCHED_OFF)


def _surface(run: RunLike) -> Surface | None:
    if run.library is None or run.pads is None or run.margins.surface is None:
        return None
    index = governing_index(run.cases, run.margins)
    return surface(run.cases, run.library, run.pads, run.margins.surface, index)


def _write_inputs(folder: Path, case: Case) -> dict[str, str]:
    """Copy the case file and what it names; return file names with their hashes. The mesh is kept by hash alone."""
    hashes: dict[str, str] = {}
    for source in dict.fromkeys(_sources(case)):
        try:
            content = source.read_bytes()
        except OSError:
            continue  # read while the case was read; gone since, and its hash stands in the results
        name = source.name
        while name in hashes:
            name = f"other-{name}"
        write_beside(folder / name, content)
        hashes[name] = hashlib.sha256(content).hexdigest()
    return hashes


def _sources(case: Case) -> Iterator[Path]:
    """Yield the case file, the files it extends, its list of points, its aero maps and its laps."""
    path: Path | None = case.path
    while path is not None:
        yield path
        path = _extended(path)
    points = case.document.get("frame", {}).get("points")
    if isinstance(points, str):
        yield case.path.parent / points
    yield from (device.map for device in case.devices if device.map is not None)
    yield from (lap.file for lap in case.laps)


def _extended(path: Path) -> Path | None:
    try:
        document: Mapping[str, Any] = tomllib.loads(path.read_text(encoding="utf-8-sig"))
    except (OSError, ValueError):
        return None
    base = document.get("extends")
    return path.parent / base if isinstance(base, str) else None


__all__ = ["probe_output", "write_handover", "write_laps", "write_run", "write_text"]


def refuse_own_inputs(case: Case, targets: Iterable[Path]) -> None:
    """Refuse to write over the case file or anything it is made of; raises OutputError."""
    inputs = {source.resolve() for source in _sources(case)}
    if case.block is not None and case.block.mesh is not None:
        inputs.add(case.block.mesh.resolve())
    for target in targets:
        if target.resolve() in inputs:
            raise OutputError(str(target), "is an input of this case", "a new file", "choose another name")
