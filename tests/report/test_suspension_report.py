"""Links, power train and lifted wheels as written and shown: what the file says can be summed again and be caught."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from car.linked_car import FRONT_ENDS, FRONT_ROCKER, REAR_ENDS, REAR_ROCKER, linked, rear
from car.worked_car import CAR, FRONT, REAR, car, manoeuvre

from blockload.car.balance import balance
from blockload.car.brakes import brake_swap
from blockload.case.model import Engine, Link, Rocker, Tyres
from blockload.case.reading import read
from blockload.report.results import load_case, reassembled_residual
from blockload.report.suspension_tables import (
    brake_table,
    grip_table,
    link_extremes,
    power_table,
    roll_table,
    spin_table,
    suspension_tables,
)

CASES = Path(__file__).parents[2] / "cases"


def test_a_wrong_tension_in_the_file_shows_in_the_balance_summed_again() -> None:
    written = load_case(linked(), balance(linked()), 2)
    assert reassembled_residual(written) < 1e-9

    written["links"]["RL"]["lower_fore"] *= 1.001
    assert reassembled_residual(written) > 1e-6


def test_tensions_are_written_by_corner_and_link() -> None:
    cases = balance(linked())
    written = load_case(linked(), cases, 3)["links"]

    assert set(written) == {"FL", "FR", "RL", "RR"}
    assert written["FR"]["steer"] == pytest.approx(cases.links["FR"].tension[3, :, 4].sum())
    assert "heave" in written["RL"]
    assert load_case(CAR, balance(CAR), 3)["links"] == {}


def test_a_bent_wishbone_keeps_its_own_forces_in_the_file() -> None:
    """Its legs are no two-force members: pointing at a tension would lose their side force."""
    case = linked(rear_axle=rear(pushrod={"meets": "lower", "outboard": np.array((-2.76, 0.60, 0.22))}))
    written = load_case(case, balance(case), 2)
    legs = [line for line in written["free_bodies"]["RL"] if line["label"].startswith("lower")]

    assert all("force" in line for line in legs)
    assert reassembled_residual(written) < 1e-9


def test_tables_name_the_governing_case_and_keep_quiet_without_links() -> None:
    extremes = link_extremes(balance(linked()))

    assert any("brake" in cell for row in extremes.rows for cell in row)
    assert "Condition number" in extremes.note
    assert [t.title for t in suspension_tables(CAR, balance(CAR))] == ["Power train"]
    assert suspension_tables(CAR, balance(CAR, [CAR.manoeuvres[0]])) == ()


def test_the_power_train_table_says_what_does_not_go_together() -> None:
    case = car(engine=Engine(bore=0.09, stroke=0.078, cylinders=8, max_speed=900.0))
    shown = power_table(case, balance(case, [CAR.manoeuvres[1]]))

    assert shown.rows[0][1] == "9479"
    assert "overall ratio" in shown.note


def test_a_wheel_in_the_air_is_named() -> None:
    axles = {"front": replace(FRONT, roll_stiffness=900e3), "rear": replace(REAR, roll_stiffness=60e3)}
    case = car(axles=axles)
    turn = manoeuvre("turn", speed=20.0, acceleration=(0, 15.0, 0))
    over = manoeuvre("over", acceleration=(0, 40.0, 0))
    tables = {item.title: item for item in suspension_tables(case, balance(case, [turn, over]))}
    rows = tables["Wheels off the ground"].rows

    assert rows[0][:2] == ("turn", "FL")
    assert "three wheels" in rows[1][2]


def test_what_is_left_out_is_sized_or_called_unknown() -> None:
    rows = spin_table(CAR, balance(CAR)).rows

    assert len(rows) == 4
    assert all(row[0] for row in rows)


def test_a_tyre_beyond_its_grip_is_named_with_its_load_case() -> None:
    hard = manoeuvre("hard", speed=40.0, acceleration=(0, 24, 0))
    cases = balance(car(tyres=Tyres(mu_x=1.7, mu_y=1.7)), [hard, CAR.manoeuvres[0]])
    rows = grip_table(cases).rows

    assert {row[0] for row in rows} == {"hard"}
    assert ("hard", "FR") in {row[:2] for row in rows}
    assert load_case(CAR, cases, 0)["wheels"]["FR"]["tyre_use"] > 1
    assert grip_table(balance(CAR)).rows == (), "friction not known: nothing to say"


def test_the_roll_table_parts_add_up() -> None:
    rows = {row[0]: row for row in roll_table(CAR).rows}
    parts = sum(float(rows[name][1]) for name in ("geometric", "unsprung", "elastic"))

    assert parts == pytest.approx(float(rows["whole"][1]), abs=0.02)
    assert rows["elastic"][3] == "54.2"


def test_swapping_the_brakes_changes_links_and_no_face_on_one_body() -> None:
    one = brake_swap(linked(), "rear")
    assert one is not None
    assert one.to == "inboard"
    assert one.face_change < 1e-6
    assert one.link_change > 1e3
    leg = brake_swap(linked(rear_axle=rear(upper_fore={"carried_by": "engine"})), "rear")
    assert leg is not None
    assert leg.face_change > 1.0, "a leg on the engine takes its change across the rear face"
    assert len(brake_table(linked()).rows) == 2
    assert brake_swap(car(manoeuvres=CAR.manoeuvres[:1]), "rear") is None


def points(link: Link) -> list[float]:
    return [*link.outboard, *link.inboard]


def test_the_demo_on_links_is_the_car_of_these_tests_and_has_the_faces_of_the_demo() -> None:
    """Hard-points as read from the file, left side; faces to 1e-9 as without links."""
    case = read(CASES / "demo-links.toml")
    for axle, ends, rocker in (("front", FRONT_ENDS, FRONT_ROCKER), ("rear", REAR_ENDS, REAR_ROCKER)):
        for name, pair in ends.items():
            assert points(case.axles[axle].links[name]) == pytest.approx([*pair[0], *pair[1]])
        found = case.axles[axle].rocker
        assert isinstance(found, Rocker)
        assert found.pivot == pytest.approx(rocker.pivot)
        assert found.heave_share == rocker.heave_share
    plain, linked_demo = balance(read(CASES / "demo.toml")), balance(case)
    for face in ("front", "rear"):
        assert linked_demo.section(face) == pytest.approx(plain.section(face), abs=1e-6)


def test_the_demo_with_a_leg_on_the_engine_loads_the_heads() -> None:
    cases = balance(read(CASES / "demo-links-engine.toml"))

    assert {load.attachment for load in cases.engine_loads} == {"head_left", "head_right"}
    assert cases.residual.max() < 1e-9
