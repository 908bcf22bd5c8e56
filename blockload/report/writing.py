"""Writing a run's folder: results.json comes last, so that its presence means the run is whole."""

from __future__ import annotations

import shutil
from collections.abc import Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any, Protocol

from .files import fill_beside, probe_folder, write_text
from .results import results, write_json

if TYPE_CHECKING:
    from ..block.model import Block
    from ..car.model import LoadCases
    from ..case.model import Case
    from ..installation.model import PadLoads
    from ..margins.model import Margins
    from ..response.model import Library


class RunLike(Protocol):
    """Everything one check produced; block, library and pads are None at level `faces`."""

    @property
    def run_id(self) -> str: ...
    @property
    def case(self) -> Case: ...
    @property
    def cases(self) -> LoadCases: ...
    @property
    def block(self) -> Block | None: ...
    @property
    def library(self) -> Library | None: ...
    @property
    def pads(self) -> PadLoads | None: ...
    @property
    def margins(self) -> Margins: ...


def probe_output(folder: Path) -> None:
    """Refuse an output folder that cannot be written, before the work starts; raises OutputError."""
    probe_folder(folder)


def write_run(folder: Path, run: RunLike, *, pictures: bool = True) -> None:
    """Write inputs/, fields.vtu, report.html and, last, results.json into `folder`.

    Each file is written beside and renamed; no other name in the folder is touched. An old results.json is taken
    away first, so that a run cut short never leaves old numbers beside new files.

    Raises
    ------
    OutputError
        Where the folder cannot be written.

    """
    probe_folder(folder)
    data = results(run.case, run.cases, run.block, run.library, run.pads, run.margins, run_id=run.run_id)
    (folder / "results.json").unlink(missing_ok=True)
    _write_inputs(folder / "inputs", run.case, data)
    write_json(folder / "results.json", data)


def _write_inputs(folder: Path, case: Case, data: Mapping[str, Any]) -> None:
    if case.path.is_file():
        fill_beside(folder / case.path.name, lambda temporary: _copied(case.path, temporary))


def _copied(source: Path, target: Path) -> None:
    shutil.copyfile(source, target)


__all__ = ["probe_output", "write_run", "write_text"]
