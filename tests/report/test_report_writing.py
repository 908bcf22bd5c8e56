"""A run's folder: whole or not there, only our own names touched, one run id in every file."""

from __future__ import annotations

import hashlib
import json
import os
import stat
from dataclasses import replace
from pathlib import Path

import pytest
from report.examples import ExampleRun, example_case

from blockload.errors import OutputError
from blockload.report import writing
from blockload.report.files import fill_beside, write_text
from blockload.report.writing import probe_output, write_run


def run_in(folder: Path) -> ExampleRun:
    """A run whose case file, base and list of points lie in a folder."""
    (folder / "base.toml").write_text("title = 'base'\n", encoding="utf-8")
    (folder / "points.csv").write_text("name,x\n", encoding="utf-8")
    path = folder / "my case.toml"
    path.write_text("extends = 'base.toml'\n", encoding="utf-8")
    case = replace(example_case(), path=path, document={"frame": {"points": "points.csv"}})
    return ExampleRun(case=case)


def test_a_run_writes_results_report_and_inputs_with_one_id(tmp_path: Path) -> None:
    write_run(tmp_path / "out", run_in(tmp_path))
    names = sorted(item.relative_to(tmp_path / "out").as_posix() for item in (tmp_path / "out").rglob("*"))
    data = json.loads((tmp_path / "out/results.json").read_text(encoding="utf-8"))

    assert names == [
        "inputs",
        "inputs/base.toml",
        "inputs/my case.toml",
        "inputs/points.csv",
        "report.html",
        "results.json",
        "sheets",
        "sheets/along-the-car.csv",
        "sheets/force-on-the-engine.csv",
        "sheets/force-on-the-gearbox.csv",
        "sheets/force-on-the-tub.csv",
        "sheets/free-bodies.csv",
    ]
    assert data["run_id"] == "0123456789ab"
    assert 'name="run-id" content="0123456789ab"' in (tmp_path / "out/report.html").read_text(encoding="utf-8")
    for name, known in data["inputs"]["files"].items():
        assert hashlib.sha256((tmp_path / "out/inputs" / name).read_bytes()).hexdigest() == known


def test_other_files_of_the_folder_are_left_alone(tmp_path: Path) -> None:
    out = tmp_path / "out"
    out.mkdir()
    (out / "notes.txt").write_text("mine", encoding="utf-8")
    write_run(out, run_in(tmp_path))

    assert (out / "notes.txt").read_text(encoding="utf-8") == "mine"


def test_a_run_cut_short_leaves_no_old_results_beside_new_files(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    out = tmp_path / "out"
    write_run(out, run_in(tmp_path))

    def fail(*_: object, **__: object) -> str:
        raise KeyboardInterrupt

    monkeypatch.setattr(writing, "page", fail)
    with pytest.raises(KeyboardInterrupt):
        write_run(out, run_in(tmp_path))

    assert not (out / "results.json").exists()
    assert not list(out.glob(".part-*"))


def test_a_writer_that_fails_leaves_the_old_file_and_no_part_behind(tmp_path: Path) -> None:
    path = tmp_path / "fields.vtu"
    path.write_text("old", encoding="utf-8")

    def fail(_: Path) -> None:
        raise ValueError("no mesh")

    with pytest.raises(ValueError, match="no mesh"):
        fill_beside(path, fail)

    assert path.read_text(encoding="utf-8") == "old"
    assert [item.name for item in tmp_path.iterdir()] == ["fields.vtu"]


def test_files_can_be_read_by_others_as_the_user_set_it(tmp_path: Path) -> None:
    write_text(tmp_path / "a.html", "x")
    (tmp_path / "b").write_text("x", encoding="utf-8")

    assert stat.S_IMODE((tmp_path / "a.html").stat().st_mode) == stat.S_IMODE((tmp_path / "b").stat().st_mode)


def test_a_file_where_the_folder_should_be_is_refused_by_name(tmp_path: Path) -> None:
    (tmp_path / "out").write_text("a file", encoding="utf-8")
    with pytest.raises(OutputError) as caught:
        probe_output(tmp_path / "out")

    assert caught.value.where == str(tmp_path / "out")
    assert "cannot be written" in caught.value.found
    assert "--output" in caught.value.remedy


def test_a_folder_below_a_file_is_refused(tmp_path: Path) -> None:
    (tmp_path / "file").write_text("a file", encoding="utf-8")
    with pytest.raises(OutputError):
        write_run(tmp_path / "file" / "deeper", run_in(tmp_path))


@pytest.mark.skipif(not hasattr(os, "geteuid") or os.geteuid() == 0, reason="the superuser may write anywhere")
def test_a_folder_without_permission_is_refused(tmp_path: Path) -> None:
    out = tmp_path / "out"
    out.mkdir()
    out.chmod(0o500)
    with pytest.raises(OutputError):
        probe_output(out)


def test_a_folder_of_the_name_of_our_file_is_refused_and_kept(tmp_path: Path) -> None:
    out = tmp_path / "out"
    (out / "report.html").mkdir(parents=True)
    with pytest.raises(OutputError) as caught:
        write_run(out, run_in(tmp_path))

    assert "report.html" in caught.value.where
    assert (out / "report.html").is_dir()


def test_two_inputs_of_one_name_are_both_kept(tmp_path: Path) -> None:
    run = run_in(tmp_path)
    (tmp_path / "maps").mkdir()
    (tmp_path / "maps" / "points.csv").write_text("another", encoding="utf-8")
    devices = (replace(run.case.devices[0], map=tmp_path / "maps" / "points.csv"), *run.case.devices[1:])
    write_run(tmp_path / "out", replace(run, case=replace(run.case, devices=devices)))

    assert {item.name for item in (tmp_path / "out/inputs").iterdir()} >= {"points.csv", "other-points.csv"}
