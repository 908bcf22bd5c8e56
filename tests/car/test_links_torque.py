"""Torque from tyre to crank, clutch dumps, free-revving engines, and what spins: by hand and by law."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from car.worked_car import CAR, car, manoeuvre

from blockload.car.balance import balance
from blockload.car.clutch import clutch_dump, driven_grip, dump_manoeuvre, free_revs
from blockload.car.spin import neglected
from blockload.car.torque import crank_speed, engine_notes, full_load_torque, power_train
from blockload.case.model import Engine, Tyres
from blockload.errors import CaseError

RPM = np.pi / 30
ENGINE = Engine(bore=0.09, stroke=0.078, cylinders=8, bmep=14e5, max_speed=9000 * RPM)
# the car's CG behind the front axle and above the ground, from its bodies [m]
CG = (670 * 1.22 + 190 * 1.80 + 130 * 2.62 + 2 * 42 * 2.75) / 1150
HEIGHT = (670 * 0.40 + 190 * 0.27 + 130 * 0.32 + 2 * 38 * 0.33 + 2 * 42 * 0.34) / 1150
GRIPPY = car(tyres=Tyres(mu_x=1.7, mu_y=1.7))


def test_crank_speed_follows_the_road() -> None:
    """75 m/s, 4.5 : 1 and 0.34 m: 992.6 rad/s = 9479 rpm."""
    assert crank_speed(np.array(75.0), np.array(4.5), 0.34) / RPM == pytest.approx(9479, abs=0.5)


def test_power_at_the_crank_is_the_power_of_the_drag() -> None:
    """Holding speed without losses: T w = F v, so ratio and crank speed are consistent with the road speed."""
    cases = balance(CAR, [CAR.manoeuvres[1]])
    drag = cases.drag[0]

    assert power_train(car(engine=ENGINE), cases).power[0] == pytest.approx(drag * 75.0)


def test_a_ratio_that_overspeeds_the_engine_is_said() -> None:
    case = car(engine=ENGINE)
    notes = list(engine_notes(case, balance(case, [CAR.manoeuvres[1]])))

    assert len(notes) == 1
    assert "9479 rpm" in notes[0]
    assert "overall_ratio" in notes[0]


def test_more_torque_than_the_engine_gives_is_said_with_both_figures() -> None:
    """9 m/s² in a tall gear asks more of the crank than 14 bar in 3.97 l (442 N·m) give."""
    case = car(engine=replace(ENGINE, max_speed=None))
    pull = manoeuvre("pull", speed=50.0, acceleration=(9, 0, 0), drive="accelerate", overall_ratio=5.0)
    notes = list(engine_notes(case, balance(case, [pull])))

    assert any("442.3 N·m" in note for note in notes)
    assert any("mean effective pressure" in note for note in notes)


def test_usual_figures_raise_no_note_and_missing_ones_are_not_judged() -> None:
    calm = manoeuvre("calm", speed=50.0, acceleration=(2, 0, 0), drive="accelerate", overall_ratio=5.0)
    case = car(engine=ENGINE)

    assert not list(engine_notes(case, balance(case, [calm])))
    assert not list(engine_notes(CAR, balance(CAR)))
    assert np.isnan(power_train(CAR, balance(CAR)).available).all()


def test_a_piston_speed_beyond_racing_practice_is_said() -> None:
    case = car(engine=replace(ENGINE, max_speed=None))
    fast = manoeuvre("fast", speed=80.0, overall_ratio=4.5)
    notes = list(engine_notes(case, balance(case, [fast])))

    assert any("mean piston speed 26.3 m/s" in note for note in notes)


def test_a_torque_curve_is_read_between_its_points_and_not_beyond() -> None:
    curve = np.array([(3000 * RPM, 300.0), (6000 * RPM, 450.0), (9000 * RPM, 400.0)])
    engine = Engine(torque_curve=curve)
    torque = full_load_torque(engine, np.array((2000, 4500, 9000, 9500)) * RPM)

    assert torque[1:3] == pytest.approx((375.0, 400.0))
    assert np.isnan(torque[[0, 3]]).all()
    case = car(engine=engine)
    notes = list(engine_notes(case, balance(case, [CAR.manoeuvres[1]])))
    assert any("does not reach" in note for note in notes)


def test_grip_at_rest_solves_the_load_transfer_it_causes() -> None:
    """F = mu (W b + F h / L) in closed form."""
    weight, share, moved = 1150 * 9.80665, CG / 2.75, HEIGHT / 2.75

    assert driven_grip(GRIPPY) == pytest.approx(1.7 * weight * share / (1 - 1.7 * moved), rel=1e-6)


def test_falling_friction_lowers_the_grip() -> None:
    fading = car(tyres=Tyres(mu_x=1.7, load_sensitivity=5e-5, reference_load=2000.0))
    force = driven_grip(fading)
    load = (1150 * 9.80665 * CG + force * HEIGHT) / 2.75

    assert force < driven_grip(GRIPPY)
    assert force == pytest.approx(1.7 * load * (1 - 5e-5 * (load / 2 - 2000.0)), rel=1e-6)


@pytest.mark.parametrize(("ratio", "limit"), [(4.0, "clutch capacity"), (14.0, "tyre grip")])
def test_a_clutch_dump_is_limited_by_capacity_or_grip_whichever_is_less(ratio: float, limit: str) -> None:
    case = replace(GRIPPY, drive=replace(GRIPPY.drive, clutch_capacity=600.0))
    dump = clutch_dump(case, ratio, gas_torque=200.0)
    grip = driven_grip(case) * 0.34 / ratio

    assert dump.limited_by == limit
    assert dump.torque == pytest.approx(min(600.0, grip))
    assert dump.crank_rate == pytest.approx(-(dump.torque - 200.0) / 0.045)


def test_the_dump_as_a_load_case_puts_its_torque_on_the_rear_studs_and_the_crank_couple_beside_it() -> None:
    """At the clutch the balance finds the dump's torque again; front studs feel the crank's inertia couple alone."""
    dump = clutch_dump(GRIPPY, 12.0)
    cases = balance(GRIPPY, [dump_manoeuvre(dump)])

    assert cases.crank_torque[0] == pytest.approx(dump.torque)
    assert cases.crank_couple[0].sum() == pytest.approx(dump.torque - 0.045 * -dump.crank_rate, abs=1e-6)
    assert cases.tyre_use[0, 2:].mean() == pytest.approx(1.0, abs=0.03), "the driven tyres are at their limit"


def test_a_dump_without_friction_or_inertia_is_refused() -> None:
    with pytest.raises(CaseError, match="mu_x"):
        clutch_dump(CAR, 10.0)
    with pytest.raises(CaseError, match="crank_inertia"):
        clutch_dump(replace(GRIPPY, drive=replace(GRIPPY.drive, crank_inertia=None)), 10.0)


def test_an_engine_without_a_flywheel_gets_the_couple_of_its_crank() -> None:
    """3000 rad/s² on 0.045 kg·m²: 135 N·m about x on the block, up and down, nothing with a flywheel."""
    free = car(engine=Engine(flywheel=False))
    cases = balance(free, free_revs(free))

    assert cases.crank_couple.sum(axis=1) == pytest.approx((135.0, -135.0))
    assert cases.residual.max() < 1e-9
    assert free_revs(CAR) == ()


def test_what_spins_is_sized_against_what_it_is_left_out_of() -> None:
    """Wheels in a 25.5 m/s² turn: 1.2 * 25.5 / 0.33 = 92.7 N·m each in front, 3.6 % of the load transfer in all."""
    turn = manoeuvre("turn", speed=60.0, acceleration=(0, 25.5, 0), overall_ratio=5.0)
    found = {item.name: item for item in neglected(CAR, balance(CAR, [turn, CAR.manoeuvres[0]]))}
    wheels = found["gyroscopic couple of the wheels"]
    crank = found["gyroscopic couple of the crank"]

    assert wheels.size[0] == pytest.approx(2 * 25.5 * (1.2 / 0.33 + 1.3 / 0.34))
    assert wheels.share[0] == pytest.approx(0.036, abs=0.001)
    assert crank.size[0] == pytest.approx(0.045 * 60 * 5 / 0.34 * 25.5 / 60)
    assert found["centripetal part at the farther face"].size[0] == pytest.approx((25.5 / 60) ** 2 * (2.12 - CG))
    assert wheels.size[1] == 0.0
