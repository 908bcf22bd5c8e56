"""The library on disk: found again without factoring, rebuilt when damaged, another key for another block."""

from __future__ import annotations

import os
import time
from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from boxes import box_block, material

from blockload.block.model import Block
from blockload.response import respond as responding
from blockload.response import store
from blockload.response.respond import respond
from blockload.response.store import drop, fingerprint, list_entries, load, save


@pytest.fixture(scope="module")
def block() -> Block:
    return box_block()


@pytest.fixture
def kept(block: Block, tmp_path: Path):
    return respond(block, cache=tmp_path), tmp_path


@pytest.fixture
def no_solver(monkeypatch: pytest.MonkeyPatch) -> None:
    def refuse(*_args, **_kwargs):
        raise RuntimeError("factored again")

    monkeypatch.setattr(responding, "factorise", refuse)


@pytest.mark.usefixtures("no_solver")
def test_factoring_is_really_what_the_next_tests_forbid(block: Block, tmp_path: Path) -> None:
    with pytest.raises(RuntimeError, match="factored again"):
        respond(block, cache=tmp_path)


def test_a_second_run_reads_the_same_library_without_factoring(kept, block: Block, request) -> None:
    first, folder = kept
    request.getfixturevalue("no_solver")
    start = time.perf_counter()
    second = respond(block, cache=folder)
    seconds = time.perf_counter() - start

    assert not first.from_cache
    assert second.from_cache
    assert seconds < 2
    assert second.key == first.key
    assert second.checks == first.checks
    assert second.attachments == first.attachments
    for name in store.ARRAYS:
        np.testing.assert_array_equal(getattr(second, name), getattr(first, name))
        assert not getattr(second, name).flags.writeable
    assert isinstance(second.motion, np.memmap) or not store.MAPPED


def cut(path: Path) -> None:
    path.write_bytes(path.read_bytes()[:-8])


def garble(path: Path) -> None:
    path.write_text("{not json")


DAMAGE: dict[str, Callable[[Path], None]] = {
    "stress cut short": lambda entry: cut(entry / "stress.npy"),
    "motion missing": lambda entry: (entry / "motion.npy").unlink(),
    "manifest garbled": lambda entry: garble(entry / "manifest.json"),
    "manifest missing": lambda entry: (entry / "manifest.json").unlink(),
    "manifest of another key": lambda entry: garble_key(entry),
}


def garble_key(entry: Path) -> None:
    path = entry / "manifest.json"
    path.write_text(path.read_text().replace(entry.name, "0" * 64))


@pytest.mark.parametrize("damage", DAMAGE.values(), ids=DAMAGE)
def test_a_damaged_entry_is_built_again(damage, kept, block: Block) -> None:
    first, folder = kept
    damage(folder / first.key)
    again = respond(block, cache=folder)

    assert not again.from_cache
    np.testing.assert_array_equal(again.flexibility, first.flexibility)
    assert respond(block, cache=folder).from_cache


def test_an_entry_is_never_overwritten_and_a_lost_race_is_no_error(kept) -> None:
    first, folder = kept
    marks = {path: path.stat().st_mtime_ns for path in (folder / first.key).iterdir()}
    save(folder, first)

    assert {path: path.stat().st_mtime_ns for path in (folder / first.key).iterdir()} == marks
    assert [path.name for path in folder.iterdir()] == [first.key]


def test_what_a_killed_run_leaves_behind_is_not_taken_for_an_entry(kept) -> None:
    first, folder = kept
    half = folder / ".0123456789abcdef-half"
    half.mkdir()
    (half / "manifest.json").write_text("{}")

    assert [entry.key for entry in list_entries(folder)] == [first.key]


def changed(block: Block, what: str) -> tuple[Block, str]:
    solver = "fronts"
    if what == "material":
        stiffer = material(properties=(72e9, 0.33, 2700.0, 21e-6))
        return replace(block, materials=dict.fromkeys(block.volumes, stiffer)), solver
    if what == "attachments":
        return replace(block, attachments=block.attachments[:-1]), solver
    if what == "facets":
        first = replace(block.attachments[0], facets=block.attachments[0].facets[:-1])
        return replace(block, attachments=(first, *block.attachments[1:])), solver
    if what == "points":
        return box_block(move=lambda p: p * (1 + 1e-12)), solver
    return block, "scipy"


@pytest.mark.parametrize("what", ["material", "attachments", "facets", "points", "solver"])
def test_the_key_follows_everything_the_library_depends_on(what: str, block: Block) -> None:
    other, solver = changed(block, what)

    assert fingerprint(other, solver) != fingerprint(block, "fronts")


def test_the_key_ignores_strength_names_of_files_and_time(block: Block) -> None:
    renamed = replace(block, sha256="1" * 64, metadata={"path": "elsewhere"})

    assert fingerprint(renamed, "fronts") == fingerprint(block, "fronts")
    assert fingerprint(box_block(), "fronts") == fingerprint(block, "fronts")


def test_the_key_follows_the_source_text_of_the_room(block: Block, monkeypatch: pytest.MonkeyPatch) -> None:
    before = fingerprint(block, "fronts")
    monkeypatch.setattr(store, "_source_text", lambda: [("stiffness.py", "another kernel")])

    assert fingerprint(block, "fronts") != before


def test_entries_are_listed_with_their_size_and_dropped_by_key(kept) -> None:
    first, folder = kept
    (entry,) = list_entries(folder)

    assert entry.key == first.key
    assert entry.unit_loads == first.unit_count
    assert entry.unknowns == first.motion.shape[0]
    assert entry.size > first.motion.nbytes + first.stress.nbytes
    assert drop("0000", folder) == ()
    assert [item.key for item in drop(first.key[:8], folder)] == [first.key]
    assert list_entries(folder) == ()
    assert load(folder, first.key) is None


def test_drop_all_empties_the_cache_but_an_empty_key_drops_nothing(kept) -> None:
    _, folder = kept
    old, young = folder / ".old", folder / ".young"
    old.mkdir()
    young.mkdir()
    os.utime(old, (0, 0))

    assert drop("", folder) == ()
    assert len(drop("all", folder)) == 1
    assert list_entries(folder) == ()
    assert [path.name for path in folder.iterdir()] == [".young"]


def test_the_folder_is_the_one_of_the_environment(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    monkeypatch.setenv("BLOCKLOAD_CACHE", str(tmp_path / "here"))
    assert store.cache_folder() == tmp_path / "here"
    monkeypatch.delenv("BLOCKLOAD_CACHE")
    assert "blockload" in str(store.cache_folder())


def test_a_cache_that_cannot_be_written_costs_time_but_no_result(block: Block, tmp_path: Path) -> None:
    blocked = tmp_path / "file"
    blocked.write_text("not a folder")
    said: list[str] = []
    library = respond(block, cache=blocked, progress=lambda stage, _share: said.append(stage))

    assert library.unit_count == library.motion.shape[1]
    assert any("not kept on disk" in stage for stage in said)
