"""`aero FILE --against CASE`: what is understood, what changes, and the red lines for figures read in another sense."""

from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path

import pytest
from car.aero_maps import HEAD, write
from car.worked_car import CAR

from blockload.car.balance import balance
from blockload.case.model import Case
from blockload.case.reading import read
from blockload.report.aero_report import AeroReading, aero_against
from blockload.report.aero_results import aero_written
from blockload.report.aero_tables import (
    bounds_table,
    case_tables,
    influence_table,
    load_case_tables,
    moved_table,
    stud_tables,
    totals_table,
)

CASES = Path(__file__).parents[2] / "cases"
DEVICES = "device, downforce [m^2], drag [m^2]\n"
SAME = "front_wing,1.05,0.12\nfloor,2.30,0.20\nbody,0,0.45\ndiffuser,0.60,0.13\nrear_wing,1.40,0.45\n"


def said(tmp_path: Path, text: str, *, head: str = HEAD, case: Case = CAR, name: str = "aero.csv") -> AeroReading:
    return aero_against(write(tmp_path, text, head=head, name=name), case)


def cell(reading: AeroReading, title: str, row: str, column: str) -> str:
    found = next(t for t in reading.tables if t.title.startswith(title))
    line = next(r for r in found.rows if r[0] == row)
    return line[found.columns.index(column)]


def test_the_same_figures_change_nothing_and_raise_no_alarm(tmp_path: Path) -> None:
    reading = said(tmp_path, DEVICES + SAME)

    assert reading.warnings == ()
    assert cell(reading, "Totals", "75.0 m/s downforce", "old, kN") == "18.056"
    assert cell(reading, "Totals", "75.0 m/s downforce", "difference, kN") == "0.000"
    assert cell(reading, "Front share", "75.0 m/s with drag moment", "new") == "0.3992"


def test_old_new_and_difference_stand_at_three_speeds(tmp_path: Path) -> None:
    reading = said(tmp_path, DEVICES + "floor,2.50,0.20\n")
    totals = next(t for t in reading.tables if t.title == "Totals")

    assert [row[0] for row in totals.rows[::2]] == ["25.0 m/s downforce", "50.0 m/s downforce", "75.0 m/s downforce"]
    assert cell(reading, "Totals", "75.0 m/s downforce", "difference, kN") == "+0.675"
    assert cell(reading, "Totals", "75.0 m/s downforce", "change") == "+3.7 %"


def test_columns_are_shown_as_understood(tmp_path: Path) -> None:
    head = HEAD + "# air_density = 1.2 kg/m^3\n"
    reading = said(tmp_path, "device, speed [km/h], downforce [kN]\nfloor,270,7.7625\n", head=head)

    assert cell(reading, "Columns", "speed", "taken for") == "speed, m/s"
    assert cell(reading, "Columns", "speed", "greatest") == "75.0"
    assert cell(reading, "Columns", "downforce", "greatest") == "2.30"


@pytest.mark.parametrize(
    ("text", "head", "words"),
    [
        (DEVICES + SAME.replace("rear_wing,1.40", "rear_wing,-1.40"), HEAD, "SIGN FLIP: downforce of rear wing"),
        (DEVICES.replace("downforce", "lift") + SAME, HEAD, "SIGN FLIP: downforce of the whole car"),
        ("downforce [m^2], drag [m^2]\n2.675, 0.675", HEAD, "HALF MODEL: the new figures are half"),
        ("downforce [m^2], drag [m^2]\n10.7, 2.70", HEAD, "HALF MODEL: the new figures are twice"),
        ("downforce [m^2]\n2.135", HEAD, "PER AXLE[\\s\\S]*front axle"),
        ("downforce [m^2], drag [m^2]\n3.214, 1.35", HEAD, "PER AXLE[\\s\\S]*rear axle"),
        ("downforce [1], drag [1]\n5.35, 1.35", HEAD + "# reference_area = 1.5 m^2\n", "coefficients areas already"),
        (
            "downforce [1], drag [1]\n3.57, 0.90",
            HEAD + "# reference_area = 1.8 m^2\n",
            "area of 1.50 m² instead of 1.80",
        ),
        (DEVICES + "front_wign,1.05,0.12\n", HEAD, "'front_wign' of the file is not in the case"),
        ("device, yaw [deg], downforce [m^2]\nfloor,2,2.3\nfloor,5,2.2\n", HEAD, "read beyond its grid"),
    ],
)
def test_red_lines(tmp_path: Path, text: str, head: str, words: str) -> None:
    reading = said(tmp_path, text, head=head)

    assert any(re.search(words, line) for line in reading.warnings), reading.warnings


def test_per_axle_figures_are_told_from_the_whole_car(tmp_path: Path) -> None:
    """Loads on the axles: 0.399 and 0.601 of 5.35 m² give the old balance back, and no body carries them."""
    front = 5.35 * 0.39918
    text = f"front_downforce [m^2], rear_downforce [m^2], drag [m^2]\n{front:.5f}, {5.35 - front:.5f}, 1.35\n"
    reading = said(tmp_path, text)

    assert cell(reading, "Front share", "75.0 m/s with drag moment", "new") == "0.3992"
    assert reading.warnings == ("the file gives loads per axle: they say nothing of which body carries them",)


def test_the_whole_car_about_a_point_gives_its_balance(tmp_path: Path) -> None:
    """Force at the wheelbase's middle with a moment: front share 1/2 + M/(F WB)."""
    head = HEAD + "# reference_point = (-1.375, 0, 0) m\n"
    reading = said(tmp_path, "downforce [m^2], moment_y [m^3]\n5.35, 1.4\n", head=head)

    assert cell(reading, "Front share", "75.0 m/s without", "new") == f"{0.5 + 1.4 / 5.35 / 2.75:.4f}"


def test_a_file_named_after_a_device_is_taken_for_it(tmp_path: Path) -> None:
    reading = said(tmp_path, "downforce [m^2], drag [m^2]\n1.5, 0.5\n", name="rear_wing.csv")

    assert cell(reading, "Totals", "75.0 m/s downforce", "difference, kN") == "+0.338"
    assert "taken for 'rear_wing'" in reading.warnings[0]


def test_without_a_case_the_file_is_shown_as_understood(tmp_path: Path) -> None:
    reading = aero_against(write(tmp_path, DEVICES + SAME))

    assert [t.title.split()[0] for t in reading.tables] == ["Columns", "What", "Maps"]


def test_the_demo_map_meets_its_own_case() -> None:
    """The shipped map against the case that uses it: nothing changes."""
    reading = aero_against(CASES / "aero" / "demo-map.csv", read(CASES / "demo-map.toml"))

    assert cell(reading, "Totals", "82.0 m/s downforce", "difference, kN") == "0.000"
    assert reading.warnings == ()


def test_the_demo_cases_show_ride_heights_and_open_bounds() -> None:
    mapped, open_one = (balance(read(CASES / name)) for name in ("demo-map.toml", "demo-totals.toml"))

    assert [t.title for t in load_case_tables(mapped)] == ["Ride heights"]
    assert load_case_tables(balance(CAR)) == ()
    found = bounds_table(open_one)
    assert found is not None
    assert found.columns[2:5] == ("N", "V_z", "M_sag")
    assert "downforce only" in [row[0] for row in found.rows]


def test_results_carry_ride_heights_bounds_and_nothing_else() -> None:
    mapped, open_one = (balance(read(CASES / name)) for name in ("demo-map.toml", "demo-totals.toml"))
    v_max = open_one.names.index("v_max")
    low, high = aero_written(open_one, v_max)["aero"]["bounds"]["front"]["section"]["M_sag"]

    assert low < open_one.section("front")[v_max, 4] < high
    assert set(aero_written(mapped, 0)["aero"]) == {"ride_height"}
    assert aero_written(balance(CAR), 0) == {}


def test_tables_of_a_case_name_every_device() -> None:
    for table in (influence_table(CAR), moved_table(CAR), *stud_tables(CAR)):
        assert {row[0] for row in table.rows} == {"front wing", "floor", "body", "diffuser", "rear wing"}
    assert totals_table(CAR, [75.0]).rows[0][1:5] == ("18.06", "4.56", "0.399", "0.446")
    assert "[+0.636]" in next(row for row in moved_table(CAR).rows if row[0] == "floor")


def test_tables_of_an_open_car_name_every_carrier() -> None:
    case = read(CASES / "demo-totals.toml")

    assert [len(table.rows) for table in case_tables(case)] == [3, 10, 5, 5, 5]
    assert case_tables(replace(CAR, devices=())) == ()


def test_figures_that_are_not_used_are_said(tmp_path: Path) -> None:
    """An area beside a map, a split beside devices, a drag that nobody gave."""
    mapped = read(CASES / "demo-map.toml")
    text = (CASES / "demo-totals.toml").read_text(encoding="utf-8").replace('drag = "4.556 kN"\n', "")
    (tmp_path / "open.toml").write_text(text, encoding="utf-8")
    open_one = read(tmp_path / "open.toml")
    both = read(CASES / "demo.toml", ['aero_split.nose.on="tub"', 'aero_split.nose.at="(0.5, 0, 0.2) m"'])
    said = {item.key: item.value for case in (mapped, open_one, both) for item in case.defaults}

    assert said["aero.floor.downforce_area"] == "not used"
    assert said["aero_total.drag"] == "0 kN"
    assert said["aero_split"] == "not used"
    assert balance(open_one).drag.max() == 0.0


def test_a_floor_on_the_gearbox_is_pointed_out_wherever_the_case_is_shown() -> None:
    """Mistake: aero on the wrong body."""
    wrong = tuple(replace(d, on="gearbox") if d.name == "floor" else d for d in CAR.devices)

    assert "carried by the gearbox" in case_tables(replace(CAR, devices=wrong))[0].rows[0][0]
    assert case_tables(CAR)[0].title == "Aero recomputed from the devices"


def test_a_case_without_ride_heights_is_compared_at_the_middle_of_the_files_and_told_so() -> None:
    """The worked car knows no springs: the map's middle heights stand in, and the reading says which."""
    reading = aero_against(CASES / "aero" / "demo-map.csv", read(CASES / "demo.toml"))

    assert any("no ride heights" in warning and "25 mm" in warning for warning in reading.warnings)
    assert "Totals" in [item.title for item in reading.tables]
