"""Aero files and keys that cannot be used: each refusal says where, what and what to do."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from car.aero_maps import HEAD, SPRUNG_FRONT, SPRUNG_REAR, aero_map, no_point, with_map, write
from car.worked_car import CAR, manoeuvre

from blockload.car.balance import balance
from blockload.case.aero_csv import read_aero, read_map
from blockload.case.model import AeroTotal
from blockload.case.reading import read
from blockload.errors import BalanceError, CaseError

FLOOR = "ride_front [mm],ride_rear [mm],downforce [m^2]\n"
YAWED = "yaw [deg], drag [m^2]\n0, 1\n5, 1"


@pytest.mark.parametrize(
    ("head", "text", "words"),
    [
        ("", "drag [m^2]\n1", r"# axes = x forward"),
        ("# axes = x forward, y left, z up\n", "drag [m^2]\n1", r"# sign = air on car"),
        ("# axes = x forward, y right, z up\n# sign = air on car\n", "drag [m^2]\n1", "left-handed"),
        (HEAD, "drag\n1", "'drag' has no unit"),
        (HEAD, "drag [kg]\n1", r"unit 'kg'"),
        (HEAD, "drag [m]\n1", r"unit 'm'"),
        (HEAD, "drag [1]\n0.5", "reference_area"),
        (HEAD, "drag [N]\n500", "without a speed"),
        (HEAD, "speed [m/s],drag [N]\n50,500", "air_density"),
        (HEAD + "# air_density = 1.2 kg/m^3\n", "speed [m/s],drag [N]\n0,0", "force at no speed"),
        (HEAD, "moment_y [m^3]\n1", "no force"),
        (HEAD, "drag [m^2], moment_y [1]\n1, 1", "reference_area"),
        (HEAD + "# reference_area = 2 m^2\n", "drag [m^2], moment_y [1]\n1, 1", "reference_length"),
        (HEAD + "# reference_area = 0 m^2\n", "drag [1]\n1", "above 0"),
        (HEAD, "downfroce [m^2]\n1", "Did you mean 'downforce'"),
        (HEAD, "downforce [m^2], lift [m^2]\n1, -1", "same force twice"),
        (HEAD, "drag [m^2], drag [m^2]\n1, 1", "stands twice"),
        (HEAD, "drag [m^2], x [m]\n1, 1", "x, y, z together"),
        (HEAD, YAWED, "forces_along"),
        (HEAD + "# forces_along = wind\n", YAWED, "turn drag and side force"),
        (HEAD + "# model = half\n", "drag [m^2], force_y [m^2]\n1, 0.1", "halves cancel"),
        (HEAD + "# modle = half\n", "drag [m^2]\n1", "Did you mean 'model'"),
        (HEAD + "# sign = air on car\n", "drag [m^2]\n1", "stated twice"),
        (HEAD, "drag [m^2]\n1,5", "decimals with a point"),
        (HEAD, "speed [m/s];drag [m^2]\n50;1,5", r"write 1\.5"),
        (HEAD, "drag [m^2]\nnan", "no number"),
        (HEAD, "drag [m^2]\ninf", "no number"),
        (HEAD, "speed [m/s],drag [m^2]\n50,", "is empty"),
        (HEAD, "drag [m^2]\n", "has no figures"),
        (HEAD, FLOOR + "20,40,2\n20,60,2\n30,40,2\n", r"1 holes of 4 points.*ride_front 30.0 mm, ride_rear 60.0 mm"),
        (HEAD, FLOOR + "20,40,2\n31,52,2\n37,66,2\n", "resample scattered points"),
        (HEAD, FLOOR + "20,40,2\n20,40,2.1\n", "lines 4 and 5 give the same point twice"),
        (HEAD, FLOOR + "20,any,2\n30,40,2\n", "'any' in some lines"),
        (HEAD + "# default_state = shut\n", "state, drag [m^2]\nopen, 1", "'shut'"),
    ],
)
def test_files_that_cannot_be_understood_are_refused(tmp_path: Path, head: str, text: str, words: str) -> None:
    with pytest.raises(CaseError, match=f"(?s){words}"):
        read_aero(write(tmp_path, text, head=head))


def test_a_device_the_file_does_not_know_is_named_with_its_neighbours(tmp_path: Path) -> None:
    path = write(tmp_path, "device, drag [m^2]\nfloor, 1\nrear_wing, 2")

    with pytest.raises(CaseError, match=r"floor, rear_wing[\s\S]*Did you mean 'rear_wing'"):
        read_map(path, "rear_wnig", "[aero.rear_wnig] map")


def test_per_axle_figures_are_no_device(tmp_path: Path) -> None:
    path = write(tmp_path, "front_downforce [m^2], rear_downforce [m^2], drag [m^2]\n2, 3, 1")

    with pytest.raises(CaseError, match=r"per axle[\s\S]*aero_split"):
        read_map(path, "wing", "[aero.wing] map")


def test_not_a_file_and_not_text_are_told_apart(tmp_path: Path) -> None:
    with pytest.raises(CaseError, match="cannot be read"):
        read_map(tmp_path / "no.csv", "wing", "[aero.wing] map")
    path = tmp_path / "wide.csv"
    path.write_bytes("drag [m^2]".encode("utf-16"))
    with pytest.raises(CaseError, match="UTF-8"):
        read_map(path, "wing", "[aero.wing] map")


def test_a_state_nobody_knows_or_nobody_chose_is_refused() -> None:
    table = aero_map({}, lambda: (-0.4, 0, -1.4, 0, 0, 0, *no_point()), states=("shut", "open"))
    car = with_map("rear_wing", table)

    with pytest.raises(CaseError, match=r"none given[\s\S]*shut, open"):
        balance(car, [manoeuvre("v", speed=50.0)])
    with pytest.raises(CaseError, match="Did you mean 'open'"):
        balance(car, [manoeuvre("v", speed=50.0, state="opne")])
    with pytest.raises(CaseError, match="no aero map has named states"):
        balance(CAR, [manoeuvre("v", speed=50.0, state="open")])


@pytest.mark.parametrize("key", ["ride_height", "ride_stiffness", "tyre_stiffness"])
def test_a_map_over_ride_height_asks_for_heights_and_springs(key: str) -> None:
    table = aero_map({"ride_front": np.array([0.0, 0.1])}, lambda h: (0, 0, -2 - h, 0, 0, 0, *no_point()))
    car = with_map("floor", table)
    axles = {"front": SPRUNG_FRONT, "rear": replace(SPRUNG_REAR, **{key: None})}

    with pytest.raises(CaseError, match=rf"\[axles.rear\] {key}"):
        balance(replace(car, axles=axles), [manoeuvre("v", speed=50.0)])


def test_a_car_that_the_air_pulls_down_faster_than_its_springs_push_is_refused_by_name() -> None:
    table = aero_map({"ride_front": np.array([-2.0, 2.0])}, lambda h: (0, 0, -4 + 400 * h, 0, 0, 0, *no_point()))

    with pytest.raises(BalanceError, match=r"down_the_straight[\s\S]*not stable"):
        balance(with_map("floor", table), [manoeuvre("slow", speed=5.0), manoeuvre("down_the_straight", speed=80.0)])


def test_a_map_that_jumps_leaves_no_height_and_is_refused_by_name() -> None:
    """Downforce jumps up as the floor rises through 40 mm: below it the car rises, above it the car sinks."""
    steps = np.array([0.0, 0.04, 0.0400000001, 0.2])
    table = aero_map({"ride_front": steps}, lambda h: (0, 0, -8.0 if h > 0.04 else 0.0, 0, 0, 0, *no_point()))
    car = with_map("floor", table)
    wings = tuple(replace(d, downforce_area=0.0) if d.name != "floor" else d for d in car.devices)

    with pytest.raises(BalanceError, match=r"over_the_step[\s\S]*do not settle"):
        balance(replace(car, devices=wings), [manoeuvre("over_the_step", speed=80.0)])


def total(**given: float) -> AeroTotal:
    figures = {"downforce": 18e3, "at_speed": 75.0, "front_share": 0.4, "share_includes_drag_moment": False, **given}
    return AeroTotal(**figures)  # type: ignore[arg-type]


def test_a_total_without_any_place_to_carry_it_is_refused() -> None:
    with pytest.raises(CaseError, match=r"aero_split"):
        balance(replace(CAR, devices=(), aero_total=total()))


def test_a_balance_the_carriers_cannot_reach_is_refused_with_their_places() -> None:
    wings = tuple(d for d in CAR.devices if d.name in ("diffuser", "rear_wing"))

    with pytest.raises(CaseError, match=r"front share of 0.4[\s\S]*diffuser -2.500, rear_wing -3.050"):
        balance(replace(CAR, devices=(), aero_split=wings, aero_total=total()))


def test_a_total_that_lifts_is_refused() -> None:
    with pytest.raises(CaseError, match="above 0"):
        balance(replace(CAR, devices=(), aero_split=CAR.devices, aero_total=total(downforce=-1e3)))


def test_a_mapped_device_that_does_not_add_up_to_the_total_is_refused_with_both_conventions() -> None:
    """Mistake: aero counted twice, or quoted by the other convention."""
    table = aero_map({}, lambda: (-0.2, 0, -2.3, 0, 0, 0, *no_point()))
    right = total(downforce=18056.25, front_share=0.3992, share_includes_drag_moment=True)
    balance(replace(with_map("floor", table), aero_total=right))

    with pytest.raises(CaseError, match=r"0\.3992 with it and 0\.4460 without"):
        balance(replace(with_map("floor", table), aero_total=replace(right, share_includes_drag_moment=False)))
    twice = aero_map({}, lambda: (-0.4, 0, -4.6, 0, 0, 0, *no_point()))
    with pytest.raises(CaseError, match="counted twice"):
        balance(replace(with_map("floor", twice), aero_total=right))


@pytest.mark.parametrize(
    ("override", "words"),
    [
        (
            ["aero.copy.on='tub'", "aero.copy.at='(-1.4, 0, 0.08) m'", "aero.copy.downforce_area='2.3 m^2'"],
            "counted twice",
        ),
        (["aero_total.share_includes_drag_moment=false"], "check share_includes_drag_moment first"),
        (["car.mass='1150 kg'", "car.front_weight_share=0.453", "car.cg_height='0.40 m'"], "the bodies give 0.36047 m"),
        (["car.mass='990 kg'", "car.front_weight_share=0.453", "car.cg_height='0.36 m'"], "the bodies give 1150 kg"),
    ],
    ids=["aero twice", "other convention", "CG of the sprung mass", "corners left out of the mass"],
)
def test_the_car_is_refused_where_its_parts_do_not_sum_to_it(override: list[str], words: str) -> None:
    """Mistakes: aero counted twice or shared by the other convention; transfer from sprung CG; unsprung mass apart."""
    with pytest.raises(CaseError, match=words):
        read(Path(__file__).parents[2] / "cases" / "demo.toml", override)
