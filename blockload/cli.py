"""The command line: parses, calls the pipeline, prints, sets exit codes. Nothing else in the package prints.

Exit codes: 0 shown within scope (or done); 1 ruled out or not shown; 2 bad input or a refused analysis;
3 our own failure.
"""

from __future__ import annotations

import sys
import traceback
from collections.abc import Iterator
from contextlib import contextmanager
from enum import StrEnum
from io import TextIOWrapper
from pathlib import Path
from typing import TYPE_CHECKING, Annotated

import typer

from . import __version__
from .errors import BlockloadError, CaseError, OutputError

if TYPE_CHECKING:
    from .pipeline import Progress

app = typer.Typer(
    name="blockload",
    no_args_is_help=True,
    add_completion=False,
    pretty_exceptions_enable=False,
    rich_markup_mode=None,
    help="Decides whether an engine block is strong, stiff and round enough to be a piece of the chassis.",
)

CaseFile = Annotated[Path, typer.Argument(metavar="CASE", help="The case file (TOML).", show_default=False)]
Overrides = Annotated[
    list[str] | None,
    typer.Option("--set", metavar="KEY=VALUE", help="Lay one key over the case file; may be repeated."),
]


class SolverName(StrEnum):
    """The direct solvers one may ask for; which of them are installed is told by `info`."""

    AUTO = "auto"
    FRONTS = "fronts"
    SCIPY = "scipy"
    NGSOLVE = "ngsolve"
    PYPARDISO = "pypardiso"


Solver = Annotated[SolverName, typer.Option(help="Direct solver; auto takes the quickest installed.")]


@app.command()
def check(
    case: CaseFile,
    set_: Overrides = None,
    output: Annotated[
        Path | None, typer.Option("--output", metavar="DIR", help="Where to write; default runs/<case name>.")
    ] = None,
    solver: Solver = SolverName.AUTO,
    pictures: Annotated[bool, typer.Option(help="Draw the block for the report.")] = True,
) -> None:
    """Go from the car's figures to margins and a report: the main job."""
    from . import pipeline
    from .report.console import summary
    from .report.writing import probe_output, write_run

    folder = output if output is not None else Path("runs") / case.stem
    probe_output(folder)
    with _progress() as progress:
        run = pipeline.check(case, set_ or (), solver=solver, progress=progress)
        progress("report", 0.0)
        write_run(folder, run, pictures=pictures)
    _show(*summary(run.case, run.cases, run.margins))
    fields = ", fields.vtu" if run.margins.surface is not None else ""
    typer.echo(f"Written to {folder}: results.json, report.html{fields}")
    raise typer.Exit(0 if run.margins.verdict.word == "shown within scope" else 1)


@app.command()
def loads(
    case: CaseFile,
    set_: Overrides = None,
    json: Annotated[Path | None, typer.Option("--json", metavar="FILE", help="Also write the load cases.")] = None,
    report: Annotated[
        Path | None, typer.Option("--report", metavar="FILE", help="Also write a page with the echo picture.")
    ] = None,
    sheets: Annotated[
        Path | None,
        typer.Option("--sheets", metavar="DIR", help="Also write hand-over sheets (CSV) for the neighbours, and laps."),
    ] = None,
    show: Annotated[
        str | None, typer.Option("--show", metavar="NAME", help="Also print one load case's free bodies and sections.")
    ] = None,
) -> None:
    """Print the balanced load cases: wheels, faces, studs. Needs no block, answers at once."""
    from . import pipeline
    from .report.console import loads_tables

    read_case, cases = pipeline.loads(case, set_ or ())
    if json is not None or report is not None:
        from .report.writing import refuse_own_inputs

        refuse_own_inputs(read_case, [target for target in (json, report) if target is not None])
    laps = pipeline.laps(read_case)
    tables = loads_tables(read_case, cases, laps, shown=show)
    if json is not None:
        from .report.lap_files import laps_written
        from .report.results import load_results, write_json

        write_json(json, load_results(read_case, cases) | laps_written(laps))
    if report is not None:
        from .report.page import loads_page
        from .report.writing import write_text

        write_text(report, loads_page(read_case, cases, laps))
    if sheets is not None:
        from .report.writing import probe_output, write_handover, write_laps

        probe_output(sheets)
        write_handover(sheets, read_case, cases, laps)
        write_laps(sheets / "laps", laps)
    _show(*tables)


@app.command()
def aero(
    file: Annotated[Path, typer.Argument(metavar="FILE", help="An aero file (CSV).", show_default=False)],
    against: Annotated[
        Path | None, typer.Option("--against", metavar="CASE", help="The case to compare it with.")
    ] = None,
) -> None:
    """Say how an aero file is understood, and what it changes against a case."""
    from .case.reading import read
    from .report.aero_report import aero_against
    from .report.console import render

    reading = aero_against(file, read(against) if against is not None else None)
    _show(*render(reading.tables))
    for warning in reading.warnings:
        typer.secho(f"WARNING {warning}", fg=typer.colors.RED, err=True)


@app.command()
def compare(
    first: Annotated[Path, typer.Argument(metavar="A", help="A case file or the folder of a run.")],
    second: Annotated[Path, typer.Argument(metavar="B", help="Another one.")],
) -> None:
    """Print two cases or runs side by side, with the difference."""
    from . import pipeline
    from .report.compare import compare as side_by_side
    from .report.console import render

    results = [pipeline.results_of(path) for path in (first, second)]
    _show(*render(side_by_side(*results, names=(str(first), str(second)))))


@app.command()
def new(
    case: Annotated[Path, typer.Argument(metavar="CASE", help="The file to write; must not exist.")],
) -> None:
    """Write a commented case file: every key with its unit, default and source."""
    from .case.template import template
    from .report.writing import write_text

    if case.exists():
        raise OutputError(str(case), "the file exists already", "a new file name", "choose another name")
    write_text(case, template())
    typer.echo(f"Written: {case}. Fill in the values and run: blockload loads {case}")


@app.command()
def materials() -> None:
    """List the grades that ship, with the source of each value."""
    from .block.materials import grades_table
    from .report.console import render

    _show(*render([grades_table()]))


@app.command()
def info() -> None:
    """Print versions, solvers and the cache: what to send with a question."""
    from .pipeline import environment

    for name, value in environment().items():
        typer.echo(f"{name:<18}{value}")


@app.command()
def cache(
    drop: Annotated[
        str | None, typer.Option("--drop", metavar="KEY", help="Delete one library by its key, or 'all'.")
    ] = None,
) -> None:
    """List the response libraries kept on disk, or drop them."""
    from .response import store

    if drop is not None:
        dropped = store.drop(drop)
        for entry in dropped:
            typer.echo(f"dropped {entry.key[:16]}")
        if not dropped:
            raise CaseError(
                "--drop", f"no entry's key starts with {drop!r}", "a key as listed, or all", "see: blockload cache"
            )
    entries = store.list_entries()
    for entry in entries:
        typer.echo(f"{entry.key[:16]}  {entry.size / 1e6:9.1f} MB  {entry.path.parent}")
    if not entries:
        typer.echo("the cache is empty")


@app.command()
def verify(
    run: Annotated[Path, typer.Argument(metavar="RUN", help="The folder of a run.")],
) -> None:
    """Reassemble the balance of a run from its own files and compare the hashes of its inputs."""
    from .report.verifying import verify_run

    checks = verify_run(run)
    for item in checks:
        typer.echo(
            f"{'ok  ' if item.ok else 'FAIL'}  {item.name}: {item.value:.3g} (limit {item.limit:.3g}) {item.note}"
        )
    raise typer.Exit(0 if all(item.ok for item in checks) else 1)


@app.callback(invoke_without_command=True)
def _root(
    version: Annotated[bool, typer.Option("--version", help="Print the version.")] = False,
) -> None:
    if version:
        typer.echo(f"blockload {__version__}")
        raise typer.Exit


def _show(*parts: object) -> None:
    from rich.console import Console

    console = Console(highlight=False, width=None if sys.stdout.isatty() else 100)
    for part in parts:
        console.print(part)


@contextmanager
def _progress() -> Iterator[Progress]:
    """Progress on the error stream, silent when that is not a terminal."""
    if not sys.stderr.isatty():
        yield lambda _step, _share: None
        return
    from rich.console import Console
    from rich.progress import BarColumn, Progress, TextColumn, TimeElapsedColumn

    columns = (TextColumn("{task.description}"), BarColumn(), TimeElapsedColumn())
    with Progress(*columns, console=Console(stderr=True), transient=True) as bar:
        task = bar.add_task("", total=1.0)
        yield lambda step, share: bar.update(task, description=step, completed=share)


def main() -> None:
    """Entry point: run a command and turn every refusal into a message and an exit code."""
    for stream in (sys.stdout, sys.stderr):
        if isinstance(stream, TextIOWrapper):  # a pipe on Windows may not know the minus sign
            stream.reconfigure(encoding="utf-8", errors="replace")
    try:
        app()
    except BlockloadError as refusal:
        typer.echo(f"blockload: {refusal}", err=True)
        sys.exit(2)
    except KeyboardInterrupt:
        typer.echo("blockload: stopped; finished stages stay in the cache", err=True)
        sys.exit(2)
    except Exception:  # the last fence: our own failure must still say how to report it
        traceback.print_exc()
        typer.echo(
            f"blockload {__version__}: this is a failure of ours, not of your input. Please report the lines above "
            "with the output of 'blockload info' and the case file.",
            err=True,
        )
        sys.exit(3)
