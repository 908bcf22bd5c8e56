"""The command line as a user meets it: every command, its exit codes, and no traceback for a user's mistake."""

from __future__ import annotations

import json
import re
import shutil
import subprocess
import sys
from pathlib import Path

import pytest

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


def test_a_run_whose_numbers_were_touched_does_not_verify(tmp_path: Path) -> None:
    blockload("check", CASES / "concept.toml", "--output", tmp_path / "run")
    path = tmp_path / "run" / "results.json"
    data = json.loads(path.read_text(encoding="utf-8"))
    first = next(iter(data["load_cases"].values()))
    first["wheels"]["FL"]["force"][2] += 10.0
    path.write_text(json.dumps(data), encoding="utf-8")

    assert blockload("verify", tmp_path / "run").returncode == 1


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
