"""The command line as a user meets it: every command, its exit codes, and no traceback for a user's mistake."""

from __future__ import annotations

import json
import re
import shutil
import subprocess
import sys
from collections.abc import Callable
from pathlib import Path
from typing import Any

import pytest

from blockload.report.verifying import verify_run

ROOT = Path(__file__).parent.parent
CASES = ROOT / "cases"
README = (ROOT / "README.md").read_text(encoding="utf-8")


def blockload(*arguments: object, cwd: Path | None = None) -> subprocess.CompletedProcess[str]:
    return subprocess.run(
        [sys.executable, "-m", "blockload", *map(str, arguments)], capture_output=True, text=True, cwd=cwd, check=False
    )


def commands() -> list[str]:
    from typer.main import get_command

    from blockload.cli import app

    return sorted(get_command(app).commands)  # type: ignore[attr-defined]


@pytest.mark.parametrize("command", commands())
def test_every_command_has_help_and_stands_in_the_readme(command: str) -> None:
    done = blockload(command, "--help")

    assert done.returncode == 0
    assert len(done.stdout.splitlines()) > 4
    assert f"`{command}" in README


def test_loads_prints_tables_and_writes_json_and_page(tmp_path: Path) -> None:
    done = blockload("loads", CASES / "demo.toml", "--json", "loads.json", "--report", "loads.html", cwd=tmp_path)
    data = json.loads((tmp_path / "loads.json").read_text(encoding="utf-8"))

    assert done.returncode == 0
    assert "v max" in done.stdout
    assert "M_sag" in done.stdout
    assert data["format"] == "blockload.results/1"
    assert "<svg" in (tmp_path / "loads.html").read_text(encoding="utf-8")


def test_check_at_level_faces_writes_a_run_that_verifies(tmp_path: Path) -> None:
    done = blockload("check", CASES / "concept.toml", cwd=tmp_path)
    run = tmp_path / "runs" / "concept"
    verified = blockload("verify", run)

    assert done.returncode == 1
    assert {item.name for item in run.iterdir()} == {"results.json", "report.html", "inputs", "sheets"}
    assert verified.returncode == 0, verified.stdout


def _first_case(data: dict[str, Any]) -> dict[str, Any]:
    return next(iter(data["load_cases"].values()))


def _loaded_margin(data: dict[str, Any]) -> dict[str, Any]:
    return next(item for item in data["margins"] if item["margin"] is not None)


FALSIFIED: dict[str, Callable[[dict[str, Any]], object]] = {
    "a wheel": lambda data: _first_case(data)["wheels"]["FL"]["force"].__setitem__(2, 1.0),
    "a section": lambda data: _first_case(data)["faces"]["front"]["section"].update(M_sag=1.0),
    "a stud": lambda data: _first_case(data)["faces"]["rear"]["studs"]["TL"].update(axial=0.0),
    "a margin": lambda data: _loaded_margin(data).update(margin=5.0),
    "an applied value": lambda data: _loaded_margin(data).update(applied=1.0),
    "the lowest margin": lambda data: data["verdict"].update(lowest_margin=3.0),
    "the verdict": lambda data: data["verdict"].update(word="shown within scope"),
}


@pytest.fixture(scope="module")
def concept_run(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = tmp_path_factory.mktemp("concept") / "run"
    blockload("check", CASES / "concept.toml", "--output", folder)
    return folder


@pytest.mark.parametrize("what", FALSIFIED)
def test_a_run_whose_numbers_were_touched_does_not_verify(what: str, concept_run: Path, tmp_path: Path) -> None:
    run = shutil.copytree(concept_run, tmp_path / "run")
    data = json.loads((run / "results.json").read_text(encoding="utf-8"))
    FALSIFIED[what](data)
    (run / "results.json").write_text(json.dumps(data), encoding="utf-8")

    assert all(item.ok for item in verify_run(concept_run))
    assert not all(item.ok for item in verify_run(run))


def test_results_that_lack_what_a_run_holds_are_refused_by_name(tmp_path: Path) -> None:
    (tmp_path / "results.json").write_text('{"format": "blockload.results/1"}', encoding="utf-8")
    for command in (("verify", tmp_path), ("compare", tmp_path, tmp_path)):
        done = blockload(*command)

        assert done.returncode == 2
        assert "load_cases" in done.stderr


@pytest.mark.parametrize("option", ["--report", "--json"])
def test_a_case_file_is_never_written_over(option: str, tmp_path: Path) -> None:
    for name in ("concept.toml", "concept-narrow.toml"):
        shutil.copy(CASES / name, tmp_path / name)
    before = (tmp_path / "concept.toml").read_bytes()
    done = blockload("loads", "concept-narrow.toml", option, "concept.toml", cwd=tmp_path)

    assert done.returncode == 2
    assert "input of this case" in done.stderr
    assert (tmp_path / "concept.toml").read_bytes() == before


@pytest.mark.skipif(sys.platform == "win32", reason="links need rights there")
def test_a_link_that_leads_back_to_itself_is_refused(tmp_path: Path) -> None:
    (tmp_path / "loop.toml").symlink_to(tmp_path / "loop.toml")
    done = blockload("loads", tmp_path / "loop.toml")

    assert done.returncode == 2
    assert "Traceback" not in done.stderr


def test_compare_prints_two_cases_side_by_side(tmp_path: Path) -> None:
    done = blockload("compare", CASES / "concept.toml", CASES / "concept-narrow.toml", cwd=tmp_path)

    assert done.returncode == 0
    assert "B − A" in done.stdout
    assert list(tmp_path.iterdir()) == []


def test_new_writes_a_case_that_can_be_read_and_never_overwrites(tmp_path: Path) -> None:
    target = tmp_path / "car.toml"
    first = blockload("new", target)
    loads = blockload("loads", target)
    again = blockload("new", target)

    assert first.returncode == 0
    assert loads.returncode == 0, loads.stderr
    assert again.returncode == 2
    assert "exists" in again.stderr


@pytest.mark.parametrize("command", ["materials", "info", "cache"])
def test_lists_are_printed(command: str) -> None:
    done = blockload(command)

    assert done.returncode == 0
    assert done.stdout.strip()


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (["loads", "nowhere.toml"], "nowhere.toml"),
        (["loads", CASES / "demo.toml", "--set", "bodies.engine.mass=190,5 kg"], "190.5 kg"),
        (["loads", CASES / "demo.toml", "--set", "bodies.engine.mas=190 kg"], "mass"),
        (["check", CASES / "demo.toml", "--set", "block.mesh=nowhere.vtu"], "nowhere.vtu"),
        (["compare", "nowhere", CASES / "concept.toml"], "nowhere"),
        (["verify", CASES], "results.json"),
        (["check", CASES / "concept.toml", "--solver", "magic"], "solver"),
    ],
    ids=lambda value: None if isinstance(value, str) else str(value[0]),
)
def test_a_users_mistake_gets_a_message_and_exit_code_2(arguments: list[object], words: str, tmp_path: Path) -> None:
    done = blockload(*arguments, cwd=tmp_path)

    assert done.returncode == 2, done.stdout + done.stderr
    assert words in done.stderr
    assert "Traceback" not in done.stderr
    assert list(tmp_path.iterdir()) == []


def test_an_output_folder_that_cannot_be_written_is_refused_before_the_work(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("in the way", encoding="utf-8")
    done = blockload("check", CASES / "concept.toml", "--output", tmp_path / "file" / "run")

    assert done.returncode == 2
    assert "Traceback" not in done.stderr
    assert str(tmp_path / "file") in done.stderr


def test_a_refused_case_leaves_nothing_behind(tmp_path: Path) -> None:
    shutil.copy(CASES / "concept.toml", tmp_path / "case.toml")
    text = (tmp_path / "case.toml").read_text(encoding="utf-8")
    (tmp_path / "case.toml").write_text(re.sub(r'mass = "[^"]+"', 'mass = "-5 kg"', text, count=1), encoding="utf-8")
    done = blockload("check", "case.toml", cwd=tmp_path)

    assert done.returncode == 2
    assert [item.name for item in tmp_path.iterdir()] == ["case.toml"]
