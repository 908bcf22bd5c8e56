"""Lap files as recorders and spreadsheets write them: read where they are clear, refused by line where they are not."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from car.linked_car import linked
from car.worked_car import CAR

from blockload.car.lap_model import flags
from blockload.car.laps import lap_loads
from blockload.car.resampling import resampled
from blockload.case.lap_csv import read_lap
from blockload.case.model import LapHistory, LapSpec
from blockload.case.reading import read
from blockload.errors import CaseError

CASES = Path(__file__).parents[2] / "cases"
AXES = "# axes = x forward, y left, z up\n"
HEAD = "time [s],speed [km/h],a_x [g],a_y [m/s^2]\n"
ROWS = "0,90,0.1,2\n0.1,93.6,0.1,3\n0.2,97.2,0,4\n"


def lap(folder: Path, text: str) -> LapHistory:
    path = folder / "lap.csv"
    path.write_bytes(text.encode())
    return read_lap(LapSpec(name="lap", file=path))


def refused(folder: Path, text: str) -> CaseError:
    with pytest.raises(CaseError) as caught:
        lap(folder, text)
    return caught.value


@pytest.mark.parametrize(
    "text",
    [
        AXES + HEAD + ROWS,
        "\ufeff" + AXES + HEAD + ROWS,
        (AXES + HEAD + ROWS).replace(",", ";").replace("x forward; y left;", "x forward, y left,"),
        (AXES + HEAD + ROWS).replace("\n", "\r\n"),
        AXES + HEAD + "\n" + ROWS + "\n# a remark\n;;;\n",
        AXES + '"time [s]","speed [km/h]","a_x [g]","a_y [m/s^2]"\n' + ROWS.replace("0.1,93.6", '"0.1","93.6"'),
        "# axes = x rearward, y right, z up\n" + HEAD + "0,90,-0.1,-2\n0.1,93.6,-0.1,-3\n0.2,97.2,0,-4\n",
    ],
    ids=["plain", "byte-order mark", "semicolons", "CRLF", "blank lines", "quotes", "other axes"],
)
def test_one_lap_in_every_spelling_is_the_same_lap(tmp_path: Path, text: str) -> None:
    made = lap(tmp_path, text)

    np.testing.assert_allclose(made.speed, [25.0, 26.0, 27.0])
    np.testing.assert_allclose(made.acceleration[:, 0], [0.980665, 0.980665, 0.0])
    np.testing.assert_allclose(made.acceleration[:, 1], [2.0, 3.0, 4.0])
    assert made.time is not None
    np.testing.assert_allclose(made.time, [0.0, 0.1, 0.2])


def test_an_accelerometer_that_reads_gravity_and_rods_that_count_compression_are_understood(tmp_path: Path) -> None:
    head = AXES + "# a_z = with gravity\n# rods = compression positive\n"
    columns = "time [s],speed [m/s],a_x [g],a_y [g],a_z [g],pushrod_FL [kN],pushrod_FR [kN]\n"
    made = lap(tmp_path, head + columns + "0,20,0,0,1.5,4,-5\n0.1,20,0,0,1,4,5\n")

    np.testing.assert_allclose(made.acceleration[:, 2], [0.5 * 9.80665, 0.0], atol=1e-12)
    np.testing.assert_allclose(made.channels["pushrod.FL"], [-4e3, -4e3])
    np.testing.assert_allclose(made.channels["pushrod.FR"], [5e3, -5e3])


@pytest.mark.parametrize(
    ("text", "where", "words"),
    [
        ("", "lap.csv", "no figures"),
        (AXES + HEAD, "lap.csv", "no figures"),
        (HEAD + ROWS, "lap.csv", "axes"),
        (AXES + HEAD.replace("speed [km/h]", "speed") + ROWS, "column heads", "has no unit"),
        (AXES + HEAD.replace("km/h", "kN") + ROWS, "speed", "force"),
        (AXES + HEAD.replace("km/h", "knots per mile") + ROWS, "speed", "unit"),
        (AXES + HEAD.replace("a_y", "lateral") + ROWS, "column heads", "no known column"),
        (AXES + HEAD.replace(",a_y [m/s^2]", "") + "0,90,0\n1,90,0\n", "column heads", "a_y"),
        (AXES + HEAD.replace("time [s]", "yaw [deg]") + ROWS, "column heads", "time"),
        (AXES + HEAD + ROWS.replace("0.1,93.6", "0.1,"), "line 4", "is empty"),
        (AXES + HEAD + ROWS.replace("93.6", "nan"), "line 4", "no number"),
        (AXES + HEAD + ROWS.replace("93.6", "inf"), "line 4", "no number"),
        (AXES + HEAD + ROWS.replace("93.6", "93_6"), "line 4", "no number"),
        (AXES + HEAD + ROWS.replace("0.1,93.6", "0,1,93,6"), "line 4", "cells"),
        ((AXES + HEAD + ROWS.replace("93.6", "93,6")).replace(",0", ";0"), "lap.csv", ""),
        (AXES + HEAD + ROWS.replace("0.2,", "0.1,"), "line 5", "does not follow"),
        (AXES + HEAD + ROWS.replace("0.2,", "0.05,"), "line 5", "does not follow"),
        (AXES + HEAD + ROWS + "90,90,0,0\n", "line 6", "after the line before"),
        (AXES + HEAD.replace("km/h", "m/s") + ROWS.replace("93.6", "936"), "line 4", "936"),
        (AXES + HEAD.replace("a_x [g]", "a_x [m/s^2]") + ROWS.replace("0.2,97.2,0", "0.2,97.2,150"), "line 5", "150"),
        (AXES + HEAD + ROWS.replace("93.6", "-93.6"), "line 4", "-26"),
        (AXES + HEAD.replace("\n", ",a_z [g]\n") + ROWS.replace("\n", ",1\n"), "lap.csv", "a_z contains gravity"),
        (AXES + HEAD.replace("\n", ",pushrod_FL [N]\n") + ROWS.replace("\n", ",1\n"), "column heads", "pushrod_fr"),
        (AXES + HEAD.replace("\n", ",ride_front [mm]\n") + ROWS.replace("\n", ",30\n"), "column heads", "ride height"),
        ("# axes = x forward, y right, z up\n" + HEAD + ROWS, "axes", "left-handed"),
        (AXES + "# rods = sometimes\n" + HEAD + ROWS, "rods", "sometimes"),
        (AXES + HEAD.replace("a_y", "a_x") + ROWS, "line 2", "twice"),
    ],
)
def test_a_file_that_is_not_clear_is_refused_where_it_is_not(tmp_path: Path, text: str, where: str, words: str) -> None:
    error = refused(tmp_path, text)

    assert where in error.where
    assert words in f"{error.found} {error.allowed}"
    assert error.allowed


def test_a_decimal_comma_gets_the_number_to_write(tmp_path: Path) -> None:
    text = AXES + HEAD.replace(",", ";") + "0;90;0;2\n0.1;93,6;0;3\n"

    assert "93.6" in refused(tmp_path, text).remedy


def test_one_bad_figure_far_down_a_long_file_is_found(tmp_path: Path) -> None:
    rows = [f"{k / 100:.2f},90,0,0" for k in range(9000)]
    rows[8765] = "87.65,9o,0,0"
    error = refused(tmp_path, AXES + HEAD + "\n".join(rows) + "\n")

    assert f"line {8765 + 3}" in error.where
    assert "'9o'" in error.found


def test_a_file_that_is_not_there_names_the_key(tmp_path: Path) -> None:
    with pytest.raises(CaseError) as caught:
        read_lap(LapSpec(name="friday", file=tmp_path / "nowhere.csv"))

    assert "[laps.friday] file" in caught.value.where


def test_distance_without_movement_or_that_runs_back_is_refused(tmp_path: Path) -> None:
    head = AXES + "distance [m],speed [m/s],a_x [g],a_y [g]\n"
    still = lap(tmp_path, head + "0,0,0,0\n5,0,0,0\n9,10,0,0\n")
    with pytest.raises(CaseError, match="stands"):
        resampled(still, 0.1)

    assert "does not follow" in refused(tmp_path, head + "0,10,0,0\n5,10,0,0\n4,10,0,0\n").found


def test_measured_members_that_the_car_does_not_have_are_refused() -> None:
    zero = np.zeros(3)
    history = LapHistory(
        name="lap",
        path=Path("lap.csv"),
        time=np.arange(3.0),
        distance=None,
        speed=zero + 20.0,
        acceleration=np.zeros((3, 3)),
        channels={"pushrod.FL": zero, "pushrod.FR": zero},
    )
    with pytest.raises(CaseError, match="front axle has no links"):
        lap_loads(CAR, history)
    case = linked()
    stiff = {**case.axles, "front": replace(case.axles["front"], rocker=None)}
    with pytest.raises(CaseError, match="front axle has no rocker with a spring"):
        lap_loads(replace(case, axles=stiff), replace(history, channels={"damper.FL": zero, "damper.FR": zero}))


def test_samples_beyond_grip_and_statics_are_counted_with_the_worst_and_its_place() -> None:
    acceleration = np.zeros((5, 3))
    acceleration[1:, 1] = (10.0, 20.0, 40.0, 12.0)
    acceleration[4, 0] = np.nan
    history = LapHistory(
        name="lap",
        path=Path("lap.csv"),
        time=np.arange(5.0),
        distance=None,
        speed=np.full(5, 10.0),
        acceleration=acceleration,
    )
    case = replace(CAR, tyres=replace(CAR.tyres, mu_x=1.7, mu_y=1.7))
    loads = lap_loads(case, history)
    found = {flag.what: flag for flag in flags(loads)}
    grip = next(flag for what, flag in found.items() if "front axle" in what)
    pull = next(flag for what, flag in found.items() if "pull" in what)
    lost = next(flag for what, flag in found.items() if "balance" in what)

    assert (grip.count, grip.worst_at) == (2, 3)
    assert grip.worst == loads.axle_use[3, 0]
    assert loads.axle_use[2, 0] == pytest.approx(20.0 / (1.7 * 9.80665), rel=0.05)  # little air
    assert (pull.worst_at, pull.worst < 0.0) == (3, True)
    assert (lost.count, lost.worst_at) == (1, 4)


@pytest.mark.parametrize(
    ("changes", "words"),
    [
        (["laps.a.file=lap.csv", "laps.a.step=0"], "laps.a.step"),
        (["laps.a.step=20 ms"], "laps.a.file"),
        (["laps.a.file=lap.csv", "laps.a.rate=100"], "laps.a.rate"),
        (['laps."a/b".file=lap.csv'], "a/b"),
    ],
)
def test_the_case_files_own_keys_are_checked(changes: list[str], words: str) -> None:
    with pytest.raises(CaseError) as caught:
        read(CASES / "demo.toml", changes)

    assert words in str(caught.value)
