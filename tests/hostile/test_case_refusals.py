"""Bad case files: each is refused with file, key, what was found, what is allowed and what to do."""

from __future__ import annotations

import re
import sys
from pathlib import Path

import pytest

from blockload.case.messages import SeveralCaseError
from blockload.case.reading import read
from blockload.errors import CaseError

sys.path.insert(0, str(Path(__file__).parent.parent / "case"))
from case_texts import WHOLE, changed, read_text, without, without_table


def refused(folder: Path, text: str, overrides: tuple[str, ...] = ()) -> CaseError:
    with pytest.raises(CaseError) as caught:
        read_text(folder, text, overrides)
    return caught.value


def naming(key: str, error: CaseError) -> CaseError:
    """Return the refusal about a key, be it alone or one of several."""
    errors = error.errors if isinstance(error, SeveralCaseError) else (error,)
    found = [item for item in errors if key in item.where]
    assert found, f"no refusal about {key}: {error}"
    return found[0]


def test_the_whole_case_is_accepted(tmp_path: Path) -> None:
    """The text that all others here spoil reads without bounds; only stated defaults are used."""
    case = read_text(tmp_path, WHOLE)

    assert case.bounds == ()
    assert case.wheelbase == 2.75


BODY = "[bodies.engine]\n"
REFUSALS = [
    # name, old, new, key, found, remedy
    ("unknown_key", 'track = "1.66 m"', 'trackk = "1.66 m"', "axles.front.trackk", "not a key", "axles.front.track?"),
    ("unknown_table", "[drive]", "[drives]", "drives", "not a key", "Did you mean drive?"),
    ("unknown_body", BODY, "[bodies.motor]\nmass=1\n" + BODY, "bodies.motor", "not a key", ""),
    ("key_of_another_table", BODY, BODY + "track = 1.6\n", "bodies.engine.track", "not a key", "axles.front.track"),
    ("missing_mass", 'mass = "190 kg"\n', "", "bodies.engine.mass", "not given", "[bodies.engine]"),
    ("decimal_comma", '"190 kg"', '"190,5 kg"', "bodies.engine.mass", "decimal comma", "'190.5 kg'"),
    ("digit_space", '"190 kg"', '"1 190 kg"', "bodies.engine.mass", "space", "'1190 kg'"),
    ("wrong_dimension", '"190 kg"', '"190 N"', "bodies.engine.mass", "a force, not a mass", "unit"),
    ("grams", '"190 kg"', '"190000 g"', "bodies.engine.mass", "uses g", "0.5 kg"),
    ("negative_mass", '"190 kg"', '"-190 kg"', "bodies.engine.mass", "not positive", "sign"),
    ("tonnes_for_kg", '"190 kg"', '"190 t"', "bodies.engine.mass", "beyond", "unit"),
    ("negative_moment", '"(9, 11, 12) kg*m^2"', '"(9, -11, 12) kg*m^2"', "bodies.engine.inertia", "not positive", ""),
    ("impossible_inertia", '"(9, 11, 12) kg*m^2"', '"(1, 1, 12) kg*m^2"', "bodies.engine.inertia", "more than", "unit"),
    ("mm_for_m", '"-2.75 m"', '"-2750 m"', "axles.rear.x", "beyond", "unit"),
    ("rear_ahead", 'x = "-2.75 m"', 'x = "2.75 m"', "axles.rear.x", "wheelbase", "sign"),
    ("short_wheelbase", 'x = "-2.75 m"', 'x = "-1.2 m"', "axles.rear.x", "wheelbase", "unit"),
    ("front_axle_off", 'x = "0 m"', 'x = "0.4 m"', "axles.front.x", "stands at", "origin"),
    ("track_in_mm", '"1.66 m"', "1660", "axles.front.track", "beyond", "unit"),
    ("radius", '"0.33 m"', '"0.66 m"', "axles.front.loaded_radius", "beyond", "unit"),
    ("roll_without_angle", '"260 kNm/rad"', '"260 kNm"', "axles.front.roll_stiffness", "a moment", "per radian"),
    ("corner_on_right", "(0, 0.79, 0.33)", "(0, -0.79, 0.33)", "axles.front.corner.cg", "-0.79", "sign"),
    ("drive_word", 'drive = "coast"', 'drive = "coastt"', "manoeuvres.kerb.drive", "'coastt'", "'coast'"),
    ("body_word", 'on = "tub"', 'on = "tubb"', "aero.floor.on", "'tubb'", "'tub'"),
    ("carrier_text", 'on = "tub"', "on = 3", "aero.floor.on", "3 cannot", ""),
    ("no_place", 'at = "(-1.40, 0, 0.08) m"\n', "", "aero.floor.at", "missing", "under [aero.floor]"),
    ("empty_device", 'downforce_area = "2.30 m^2"\ndrag_area = "0.20 m^2"\n', "", "aero.floor", "neither", "area"),
    ("left_named_right", 'TL = "(0.24,', 'TL = "(-0.24,', "faces.front.studs.TL", "named for the left", "swap"),
    ("no_size", '{ size = "M12", ', "{ ", "faces.front.stud.size", "no size", 'size = "M12"'),
    ("bad_size", 'size = "M12"', 'size = "M13"', "faces.front.stud", "'M13'", ""),
    ("bad_class", '"12.9"', '"12.8"', "faces.front.stud", "'12.8'", "'12.9'"),
    ("preload_beyond_proof", '"60 kN"', '"90 kN"', "faces.front.stud.preload", "proof load", "size"),
    ("faces_swapped", 'x = "-1.50 m"', 'x = "-2.30 m"', "faces.rear.x", "not ahead", "signs"),
    ("engine_outside", 'cg = "(-1.80, 0, 0.27) m"', 'cg = "(-2.80, 0, 0.27) m"', "bodies.engine.cg", "between", "sign"),
    ("pad_in_wrong_unit", "800 kN/mm", "800 N/m", "installation.pad_stiffness.normal", "beyond", "unit"),
    ("title_number", 'title = "A small car"', "title = 5", "title", "5 cannot", ""),
    ("table_as_text", 'title = "A small car"', "limits = 3", "limits", "3 cannot", ""),
    ("wrong_format", "blockload.case/1", "blockload.case/9", "format", "blockload.case/9", "blockload.case/1"),
    (
        "force_mode_along_x",
        'drive = "coast"',
        'drive = "coast"\nacceleration = [-3, 0, 0]',
        ".acceleration",
        "along x",
        "",
    ),
    (
        "hold_along_x",
        'speed = "75 m/s"',
        "speed = 75\nacceleration = [-9, 0, 0]",
        ".acceleration",
        "hold_speed",
        "brake",
    ),
    ("crank_dir", 'crank_inertia = "0.045 kg*m^2"', "crank_direction = 2", "drive.crank_direction", "2 is no", ""),
]


@pytest.mark.parametrize(
    ("old", "new", "key", "found", "remedy"), [r[1:] for r in REFUSALS], ids=[r[0] for r in REFUSALS]
)
def test_refusal_names_key_and_remedy(tmp_path: Path, old: str, new: str, key: str, found: str, remedy: str) -> None:
    """One spoilt line is refused by its full dotted key, with what was found and what to do."""
    error = naming(key, refused(tmp_path, changed(old, new)))

    assert str(tmp_path / "car.toml") in error.where
    assert found in error.found
    assert remedy in error.remedy


def test_crank_acceleration_without_inertia(tmp_path: Path) -> None:
    """The inertia that a crank acceleration acts on is asked for."""
    text = changed(
        'speed = "75 m/s"', "speed = 75\ncrank_acceleration = -1000\noverall_ratio = 9", without("crank_inertia")
    )

    assert "drive.crank_inertia" in refused(tmp_path, text).where


def test_several_mistakes_are_listed_together(tmp_path: Path) -> None:
    """A user mends a file in one go."""
    error = refused(tmp_path, changed('"190 kg"', '"190,5 kg"', changed('"1.66 m"', '"1.66 kg"')))

    assert "2 things to mend" in error.found
    assert "190.5 kg" in error.found
    assert "axles.front.track" in error.found


@pytest.mark.parametrize("table", ["axles.rear", "faces.front", "faces.rear"])
def test_a_missing_table_is_asked_for(tmp_path: Path, table: str) -> None:
    """What has no default and no bound is asked for by name."""
    text = WHOLE
    for name in (table, f"{table}.corner", f"{table}.studs"):
        if f"[{name}]\n" in text:
            text = without_table(name, text)

    assert table in refused(tmp_path, text).where


def test_a_case_without_manoeuvres(tmp_path: Path) -> None:
    """Nothing to do is refused with an example of something to do."""
    text = WHOLE
    for name in ("manoeuvres.v_max", "manoeuvres.kerb", "manoeuvres.kerb.extra_wheel_force"):
        text = without_table(name, text)

    assert "[manoeuvres.v_max]" in refused(tmp_path, text).remedy


def test_damaged_toml_names_its_line(tmp_path: Path) -> None:
    """A broken line is named and shown."""
    error = refused(tmp_path, changed('mass = "670 kg"', 'mass = "670 kg'))

    assert "line 5" in error.where
    assert "670 kg" in error.found


@pytest.mark.parametrize("content", [b"\xff\xfe\x00", b'format = "\xe9"\n'])
def test_a_file_that_is_no_text(tmp_path: Path, content: bytes) -> None:
    """Another encoding is refused, not guessed."""
    path = tmp_path / "car.toml"
    path.write_bytes(content)

    with pytest.raises(CaseError, match="UTF-8"):
        read(path)


def test_a_missing_file_and_a_folder(tmp_path: Path) -> None:
    """Neither makes a traceback."""
    with pytest.raises(CaseError, match="no such file"):
        read(tmp_path / "none.toml")
    with pytest.raises(CaseError, match="folder"):
        read(tmp_path)


def test_an_empty_file_lists_what_is_asked(tmp_path: Path) -> None:
    """From nothing the reader lists everything it must have."""
    found = refused(tmp_path, "").found

    assert all(word in found for word in ("format", "bodies", "axles", "faces"))


def test_extends_in_a_circle(tmp_path: Path) -> None:
    """Two files that extend each other are refused by name."""
    (tmp_path / "other.toml").write_text('extends = "car.toml"\n', encoding="utf-8")
    error = refused(tmp_path, 'extends = "other.toml"\n')

    assert "circle" in error.found
    assert "car.toml -> other.toml -> car.toml" in error.found


def test_extends_a_missing_file(tmp_path: Path) -> None:
    """The message names the key that asked for the file."""
    error = refused(tmp_path, 'extends = "none.toml"\n')

    assert "extends" in error.where
    assert "none.toml" in error.found


@pytest.mark.parametrize(
    ("axes", "word"),
    [
        ("x forward, y right, z up", "left-handed"),
        ("x forward, y left", "x, y and z"),
        ("x forward, y left, z upp", "'upp'"),
        ("x forward, y forward, z up", "one line"),
        ("x left, y rearward, z up", "across"),
        ("forward left up", "x, y and z"),
    ],
)
def test_bad_frames(tmp_path: Path, axes: str, word: str) -> None:
    """A frame that is no right-handed set of three axes is refused."""
    error = refused(tmp_path, WHOLE + f'[frame]\naxes = "{axes}"\n')

    assert "frame.axes" in error.where
    assert word in error.found


@pytest.mark.parametrize("text", ["bodies.engine.mass", "=5", "a b=5", "bodies..mass=5"])
def test_bad_overrides(tmp_path: Path, text: str) -> None:
    """An override that is no KEY=VALUE is refused and quoted."""
    assert f"--set {text}" in refused(tmp_path, WHOLE, (text,)).where


def test_an_override_is_named_where_it_is_wrong(tmp_path: Path) -> None:
    """The message points to the override, not to the file."""
    error = refused(tmp_path, WHOLE, ("bodies.engine.mass=190,5 kg",))

    assert error.where == "--set bodies.engine.mass=190,5 kg"
    assert "'190.5 kg'" in error.remedy


def test_a_mistake_in_the_base_names_the_base(tmp_path: Path) -> None:
    """Where a case extends another, the message names the file that holds the line."""
    (tmp_path / "base.toml").write_text(changed('"190 kg"', '"190,5 kg"'), encoding="utf-8")

    assert "base.toml" in refused(tmp_path, 'extends = "base.toml"\n').where


def test_aero_total_prints_both_conventions(tmp_path: Path) -> None:
    """A share stated by the other convention is refused with both numbers, so that the switch is seen to be wrong."""
    total = "[aero_total]\ndownforce = 12487.5\nat_speed = 75\nfront_share = {}\nshare_includes_drag_moment = {}\n"
    without_drag = (2.3 * (2.75 - 1.40) + 1.4 * (2.75 - 3.05)) / 2.75 / 3.7
    with_drag = without_drag - (0.2 * 0.08 + 0.45 * 0.95) / 2.75 / 3.7
    error = refused(tmp_path, WHOLE + total.format(without_drag, "true"))

    assert f"{with_drag:.4f} with it" in error.found
    assert f"{without_drag:.4f} without it" in error.found
    checks = read_text(tmp_path, WHOLE + total.format(with_drag, "true")).checks
    assert [check.ok for check in checks] == [True, True]
    assert read_text(tmp_path, WHOLE + total.format(without_drag, "false")).aero_total is not None


def test_aero_counted_twice(tmp_path: Path) -> None:
    """A total that the devices exceed by more than 0.5 % is refused with the list of the devices."""
    total = "[aero_total]\ndownforce = 12400\nat_speed = 75\nfront_share = 0.27\nshare_includes_drag_moment = false\n"

    error = refused(tmp_path, WHOLE + total)

    assert "aero_total.downforce" in str(error)
    assert "rear_wing" in str(error)


def test_the_share_convention_is_asked(tmp_path: Path) -> None:
    """No default decides whether the share counts the drag moment."""
    total = "[aero_total]\ndownforce = 12487.5\nat_speed = 75\nfront_share = 0.27\n"

    error = refused(tmp_path, WHOLE + total)

    assert "share_includes_drag_moment" in error.where
    assert "missing" in error.found


def test_car_against_bodies(tmp_path: Path) -> None:
    """A short entry that the bodies contradict is refused with both numbers."""
    car = '[car]\nmass = "1150 kg"\nfront_weight_share = {}\ncg_height = "{} m"\n'
    error = refused(tmp_path, WHOLE + car.format(0.453, 0.30))

    assert "car.cg_height" in error.where
    assert read_text(tmp_path, WHOLE + car.format(0.4527, 0.3605)).checks


def test_a_tub_with_nothing_left(tmp_path: Path) -> None:
    """A car lighter than its engine, gearbox and corners is refused, and so is a tub outside the car."""
    text = without_table("bodies.tub")
    car = '[car]\nmass = "{} kg"\nfront_weight_share = {}\ncg_height = "{} m"\n'

    assert "nothing is left" in refused(tmp_path, text + car.format(450, 0.45, 0.36)).found
    assert "outside the car" in refused(tmp_path, text + car.format(1150, 0.45, 1.19)).found


def test_mirrored_studs_written_twice(tmp_path: Path) -> None:
    """A face that mirrors its studs may not write the right ones too."""
    error = refused(tmp_path, changed('x = "-1.50 m"', 'x = "-1.50 m"\nmirrored = true'))

    assert "right are written too" in naming("faces.front.mirrored", error).found


def test_studs_that_hold_no_moment(tmp_path: Path) -> None:
    """Two studs, or studs on one line, are refused."""
    two = without('BL = "(0.17', without('BR = "(-0.17'))

    assert "hold no moment" in refused(tmp_path, two).found
    assert "hold no moment" in refused(tmp_path, two + '[faces.front.studs.M]\nat = "(0, 0.47) m"\n').found


def test_known_names_a_key(tmp_path: Path) -> None:
    """How well a number is known is said of a key that exists."""
    error = refused(tmp_path, WHOLE + '[known."bodies.engine.mas"]\nbasis = "guess"\n')

    assert "'bodies.engine.mass'" in error.remedy


def test_second_paths(tmp_path: Path) -> None:
    """Stating that there are none while describing one is refused."""
    path = '[paths.strut]\nstiffness = "50 kN/mm"\nfrom = { body = "tub", at = [-1.4, 0.3, 0.5] }\n'
    text = WHOLE + path + 'to = { body = "gearbox", at = [-2.4, 0.3, 0.5] }\n'

    assert read_text(tmp_path, text).paths[0].to_body == "gearbox"
    text = text.replace("[installation]", '[installation]\nsecond_paths = "none"')
    assert "installation.second_paths" in refused(tmp_path, text).where


def test_block_names(tmp_path: Path) -> None:
    """A pad that is no stud, a stud without a pad and a carrier that is no attachment are each refused."""
    pads = '[block]\nmesh = "m.vtu"\n[block.attachments.front]\nTL="a"\nTR="b"\nBL="c"\n{}\n[block.attachments.rear]\n'
    pads += 'TL="a"\nTR="b"\nBL="c"\nBR="d"\n[block.attachments.other]\n{}\n'

    assert read_text(tmp_path, WHOLE + pads.format('BR="d"', 'main_bearings="m_*"')).block is not None
    assert "stud BR" in refused(tmp_path, WHOLE + pads.format("", 'main_bearings="m_*"')).found
    assert "block.carried_on" in refused(tmp_path, WHOLE + pads.format('BR="d"', "")).where
    error = refused(tmp_path, WHOLE + pads.format('BR="d"\nBQ="e"', 'main_bearings="m_*"'))
    assert "block.attachments.front.BQ" in error.where


def test_tub_matrix(tmp_path: Path) -> None:
    """A tub stiffness of the wrong size, unsymmetric, or giving energy is refused."""
    rows = [[1e9 if i == j else 0.0 for j in range(12)] for i in range(12)]

    def text(tub: object) -> str:
        return f"{WHOLE}tub = {tub}\n"

    tub = read_text(tmp_path, text(rows)).installation.tub
    assert tub is not None
    assert tub.shape == (12, 12)
    assert "shape (6, 12)" in refused(tmp_path, text(rows[:6])).found
    rows[0][1] = 5e8
    assert "not symmetric" in refused(tmp_path, text(rows)).found
    rows[1][0] = 5e8
    rows[3][3] = -1e9
    assert "negative eigenvalue" in refused(tmp_path, text(rows)).found


@pytest.mark.parametrize(
    ("override", "key"),
    [
        ("bodies.tub.cg=(-1.22, 0, 0.4) mm", "bodies.tub.cg"),
        ("axles.rear.corner.cg=(0, 0.77, 0.34) m", "axles.rear.corner.cg"),
        ("bodies.gearbox.cg=(-1.0, 0, 0.32) m", "bodies.gearbox.cg"),
        ("bodies.engine.inertia=(9000, 11000, 12000) kg*m^2", "bodies.engine.inertia"),
        ("faces.front.studs.TL=(0.24, 0.47) mm", "faces.front.studs.TL"),
        ("bodies.engine.mass=１９０ kg", "bodies.engine.mass"),
    ],
)
def test_slips_of_unit_place_and_digit_are_refused_by_key(override: str, key: str) -> None:
    """A CG in mm, a corner at the other axle, a gearbox ahead of the engine, a stud on the road, full-width digits."""
    demo = Path(__file__).parents[2] / "cases" / "demo.toml"
    with pytest.raises(CaseError, match=re.escape(key)):
        read(demo, [override])
