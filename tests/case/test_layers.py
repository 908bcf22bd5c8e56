"""Layers: `extends`, overrides, replacing one key, and what the Case keeps of where it came from."""

from __future__ import annotations

import hashlib
from pathlib import Path

import numpy as np
import pytest
from case_texts import WHOLE, read_text
from hypothesis import given
from hypothesis import strategies as st

from blockload.case.documents import join_key, literal, merged, nested, override, split_key
from blockload.case.model import Case
from blockload.case.reading import read, replaced
from blockload.errors import CaseError

DEMO = Path(__file__).parents[2] / "cases" / "demo.toml"


def test_the_demo_reads() -> None:
    """The demo case: bodies, faces and manoeuvres as its file states them."""
    case = read(DEMO)

    assert [manoeuvre.name for manoeuvre in case.manoeuvres][:3] == ["static", "v_max", "brake"]
    assert case.wheelbase == 2.75
    assert case.axles["front"].roll_stiffness == 260e3
    assert case.faces["rear"].studs[2].name == "ML"
    assert case.block is not None
    assert case.block.mesh_unit == 1e-3
    assert case.installation.pad_stiffness == (("given", 800e6, 400e6),)
    assert all(check.ok for check in case.checks)
    assert case.bounds == ()


def test_keys_go_over_the_base(tmp_path: Path) -> None:
    """A case that extends another changes the keys it names and keeps the rest, over two steps."""
    (tmp_path / "base.toml").write_text(WHOLE, encoding="utf-8")
    (tmp_path / "middle.toml").write_text('extends = "base.toml"\n[bodies.engine]\nmass = "180 kg"\n', encoding="utf-8")
    case = read_text(tmp_path, 'extends = "middle.toml"\ntitle = "Third"\n[bodies.gearbox]\nmass = "120 kg"\n')

    assert (case.bodies["engine"].mass, case.bodies["gearbox"].mass, case.bodies["tub"].mass) == (180.0, 120.0, 670.0)
    assert case.title == "Third"
    assert "extends" not in case.document


def test_paths_follow_the_file_that_names_them(tmp_path: Path) -> None:
    """A mesh named in a base of another folder stays beside that base."""
    (tmp_path / "bases").mkdir()
    pads = '[block]\nmesh = "m.vtu"\n[block.attachments]\nother = { main_bearings = "m" }\n'
    for face in ("front", "rear"):
        pads += f'{face} = {{ TL = "a", TR = "b", BL = "c", BR = "d" }}\n'
    (tmp_path / "bases" / "base.toml").write_text(WHOLE + pads, encoding="utf-8")
    case = read_text(tmp_path, 'extends = "bases/base.toml"\n')

    assert case.block is not None
    assert case.block.mesh.resolve() == (tmp_path / "bases" / "m.vtu").resolve()


@pytest.mark.parametrize(
    ("text", "mass"),
    [
        ("bodies.engine.mass=180 kg", 180.0),
        ("bodies.engine.mass = 180", 180.0),
        ('bodies.engine.mass="180 kg"', 180.0),
        ("bodies.engine={mass='180 kg'}", 180.0),
        ('bodies."engine".mass=180 kg', 180.0),
    ],
)
def test_overrides(tmp_path: Path, text: str, mass: float) -> None:
    """A value is a TOML literal if it reads as one, else text; the override is kept in the case."""
    case = read_text(tmp_path, WHOLE, (text,))

    assert case.bodies["engine"].mass == mass
    assert case.overrides == (text,)
    np.testing.assert_array_equal(case.bodies["engine"].cg, [-1.8, 0.0, 0.27])


def test_an_override_may_reach_into_a_stud_written_as_text(tmp_path: Path) -> None:
    """A stud written as (y, z) keeps its place when another of its keys is set."""
    case = read_text(tmp_path, WHOLE, ("faces.front.studs.TL.preload=50 kN",))

    assert case.faces["front"].studs[0].preload == 50e3
    assert case.faces["front"].studs[1].preload == 60e3
    np.testing.assert_array_equal(case.faces["front"].studs[0].at, [0.24, 0.47])
    moved = replaced(case, "faces.front.studs.TL", "(0.20, 0.40) m")
    np.testing.assert_array_equal(moved.faces["front"].studs[0].at, [0.20, 0.40])


def test_replacing_leaves_the_case_alone(tmp_path: Path) -> None:
    """A replaced key makes another case; the given one and its document stay as they are."""
    case = read_text(tmp_path, WHOLE)
    other = replaced(replaced(case, "bodies.gearbox.mass", "140 kg"), 'aero."rear_wing".drag_area', "0.5 m^2")

    assert (case.bodies["gearbox"].mass, other.bodies["gearbox"].mass) == (130.0, 140.0)
    assert other.devices[1].drag_area == 0.5
    assert case.document["bodies"]["gearbox"]["mass"] == "130 kg"
    assert other.overrides == ("bodies.gearbox.mass=140 kg", 'aero."rear_wing".drag_area=0.5 m^2')
    assert other.sha256 == case.sha256


def test_the_hash_is_that_of_the_bytes(tmp_path: Path) -> None:
    """A lone file's hash is its SHA-256; a changed base changes the hash of what extends it."""
    case = read_text(tmp_path, WHOLE)
    assert case.sha256 == hashlib.sha256((tmp_path / "car.toml").read_bytes()).hexdigest()

    first = read_text(tmp_path, 'extends = "car.toml"\n', name="over.toml").sha256
    (tmp_path / "car.toml").write_text(WHOLE + "# touched\n", encoding="utf-8")
    assert read(tmp_path / "over.toml").sha256 != first


def test_reading_is_repeatable_and_frozen(tmp_path: Path) -> None:
    """Two readings agree; the arrays of a case cannot be changed."""
    one, two = read_text(tmp_path, WHOLE), read_text(tmp_path, WHOLE)

    assert one.defaults == two.defaults
    with pytest.raises(ValueError, match="read-only"):
        one.bodies["tub"].cg[0] = 1.0
    with pytest.raises(AttributeError):
        one.title = "other"  # type: ignore[misc]


def _kinds(case: Case) -> list[str]:
    return [manoeuvre.drive for manoeuvre in case.manoeuvres]


def test_manoeuvre_defaults(tmp_path: Path) -> None:
    """An extra wheel force coasts unless said; all else holds its speed."""
    text = WHOLE.replace('drive = "coast"\n', "")

    assert _kinds(read_text(tmp_path, text)) == ["hold_speed", "coast"]


def test_a_force_at_a_speed_is_an_area(tmp_path: Path) -> None:
    """Downforce at at_speed gives the area that makes it, with the case's air density."""
    text = WHOLE.replace('downforce_area = "1.40 m^2"', 'downforce = "4.725 kN"\nat_speed = "270 km/h"')

    assert read_text(tmp_path, text).devices[1].downforce_area == pytest.approx(1.4)


NAME = st.text(st.characters(exclude_categories=("Cs",)), min_size=1, max_size=8)


@given(st.lists(NAME, min_size=1, max_size=4))
def test_keys_read_back(parts: list[str]) -> None:
    """A dotted key with quotes where TOML needs them splits into the parts it was joined from."""
    assert list(split_key(join_key(parts), "")) == parts


@given(st.lists(NAME, min_size=1, max_size=3), st.floats(allow_nan=False, allow_infinity=False))
def test_overrides_read_back(parts: list[str], number: float) -> None:
    """KEY=VALUE of any key and number is the document that nests them."""
    assert override(f"{join_key(parts)}={number!r}") == nested(parts, number)


def test_how_files_are_read_cannot_be_set(tmp_path: Path) -> None:
    """Extends and frame belong to files; set from outside they would be ignored, so they are refused."""
    for text in ("extends=other.toml", "frame.axes=x rearward, y right, z up"):
        with pytest.raises(CaseError, match="cannot be set"):
            read_text(tmp_path, WHOLE, (text,))


@pytest.mark.parametrize(
    ("key", "low", "high"),
    [
        ("bodies.engine.mass", "171 kg", "209 kg"),
        ("axles.front.roll_stiffness", "234 kNm/rad", "286 kNm/rad"),
        ("bodies.engine.inertia", "(8.1, 9.9, 10.8) kg*m^2", "(9.9, 12.1, 13.2) kg*m^2"),
        ("faces.front.stud.preload", "54 kN", "66 kN"),
    ],
)
def test_a_stated_band_is_run_at_both_ends(tmp_path: Path, key: str, low: str, high: str) -> None:
    """A number known within a band becomes a bound that leaves the middle where it is."""
    case = read_text(tmp_path, WHOLE + f'[known."{key}"]\nbasis = "guess"\nband = "10 %"\n')
    (bound,) = case.bounds

    assert (bound.low, bound.high) == (low, high)
    assert case.known[key].band == pytest.approx(0.1)
    assert replaced(case, key, bound.low).title == replaced(case, key, bound.high).title == case.title


def test_a_place_has_no_band(tmp_path: Path) -> None:
    """A share of a place means nothing."""
    with pytest.raises(CaseError, match="means nothing"):
        read_text(tmp_path, WHOLE + '[known."bodies.engine.cg"]\nbasis = "guess"\nband = "10 %"\n')


def test_merging_changes_neither() -> None:
    """Merging goes table by table and leaves both documents alone."""
    base, over = {"a": {"b": 1, "c": 2}, "d": 3}, {"a": {"b": 4}, "d": {"e": 5}}

    assert merged(base, over) == {"a": {"b": 4, "c": 2}, "d": {"e": 5}}
    assert base == {"a": {"b": 1, "c": 2}, "d": 3}


def test_literals() -> None:
    """What reads as TOML is its value, the rest is text."""
    assert literal("true") is True
    assert literal("[1, 2]") == [1, 2]
    assert literal("130 kg") == "130 kg"
    assert literal("1\nb = 2") == "1\nb = 2"
