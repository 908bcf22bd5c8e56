"""Laws of a lifted wheel: three wheels in balance, nothing pulled, nothing jumps when the wheel leaves the ground."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from car.random_cars import cars, manoeuvres, mirrored_manoeuvre
from car.worked_car import CAR, FRONT, REAR, car, manoeuvre
from hypothesis import assume, given, settings

from blockload.car.balance import balance
from blockload.car.bodies import masses
from blockload.case.model import Case, Manoeuvre

# nearly all roll stiffness in front: the inner front wheel lifts long before the car does
STIFF = car(axles={"front": replace(FRONT, roll_stiffness=900e3), "rear": replace(REAR, roll_stiffness=60e3)})


def turn(lateral: float, along: float = 0.0, **more: object) -> Manoeuvre:
    drive = "accelerate" if along > 0 else "brake" if along < 0 else "hold_speed"
    return manoeuvre("turn", speed=20.0, acceleration=(along, lateral, 0), drive=drive, **more)


def test_a_lifted_wheel_carries_nothing_and_the_other_three_carry_the_car() -> None:
    cases = balance(STIFF, [turn(15.0)])
    force = cases.wheels[0]
    weight = 1150 * 9.80665 + cases.downforce[0]

    assert cases.lifted[0].tolist() == [True, False, False, False]
    assert not cases.wheel_lift[0], "three wheels are a state of the car"
    assert force[0] == pytest.approx(np.zeros(3))
    assert np.all(force[1:, 2] > 0)
    assert force[:, 2].sum() == pytest.approx(weight)
    assert cases.residual[0] < 1e-9


def test_three_wheel_loads_follow_from_statics_by_hand() -> None:
    """Front inner wheel off at no speed: pitch gives the axles, roll about the ground gives the rear transfer."""
    cases = balance(STIFF, [manoeuvre("turn", acceleration=(0, 14.0, 0))])
    load = cases.wheels[0, :, 2]
    front, rear = 2 * 2552.40, 2 * 3086.42  # static axle loads
    moment = 14.0 * (670 * 0.40 + 190 * 0.27 + 130 * 0.32 + 2 * 38 * 0.33 + 2 * 42 * 0.34)
    transfer = (moment - front * 1.66 / 2) / 1.62  # what the front axle cannot take goes to the rear

    assert cases.lifted[0, 0]
    assert load == pytest.approx((0.0, front, rear / 2 - transfer, rear / 2 + transfer), abs=0.05)


def test_loads_are_continuous_where_the_wheel_leaves_the_ground() -> None:
    """Faces and wheels just before and just after differ by no more than the step in acceleration asks for."""
    low, high = 5.0, 15.0
    for _ in range(40):
        middle = (low + high) / 2
        low, high = (low, middle) if balance(STIFF, [turn(middle)]).lifted.any() else (middle, high)
    before, after = balance(STIFF, [turn(low)]), balance(STIFF, [turn(high)])

    assert after.lifted[0, 0]
    assert not before.lifted.any()
    assert after.wheels == pytest.approx(before.wheels, abs=0.1)
    for face in ("front", "rear"):
        assert after.section(face) == pytest.approx(before.section(face), abs=0.1)


@settings(max_examples=60, deadline=None)
@given(cars(), manoeuvres())
def test_no_wheel_pulls_in_a_case_that_is_called_a_state_of_the_car(case: Case, it: Manoeuvre) -> None:
    cases = balance(case, [replace(it, extra_wheel_force={})])
    assume(not cases.wheel_lift[0])

    assert cases.wheels[0, :, 2].min() >= -1e-6 * cases.wheels[0, :, 2].sum()
    assert cases.lifted[0].sum() <= 1
    assert cases.residual[0] < 1e-9
    assert cases.front_rear_gap[0] < 1e-9


def test_a_braked_turn_on_three_wheels_answers_the_yaw_of_the_one_sided_brake() -> None:
    """The lifted wheel brakes nothing; side forces answer the couple, so the car still has no yaw acceleration."""
    cases = balance(STIFF, [turn(16.0, -3.0)])
    force = cases.wheels[0]
    y = np.array((0.83, -0.83, 0.81, -0.81))
    x = np.array((0.0, 0.0, -2.75, -2.75)) - masses(STIFF).car_cg[0]
    yaw = (x * force[:, 1] - y * force[:, 0]).sum()

    assert cases.lifted[0, 0]
    assert force[0, 0] == 0.0
    assert force[1, 0] < force[3, 0] < 0
    assert yaw == pytest.approx(0.0, abs=1e-6)


@settings(max_examples=20, deadline=None)
@given(manoeuvres())
def test_a_right_turn_lifts_the_mirrored_wheel(it: Manoeuvre) -> None:
    quiet = replace(it, overall_ratio=None, crank_acceleration=0.0, extra_wheel_force={})
    here, there = balance(STIFF, [quiet]), balance(STIFF, [mirrored_manoeuvre(quiet)])

    assert there.lifted[0].tolist() == here.lifted[0][[1, 0, 3, 2]].tolist()
    assert there.wheels[0, [1, 0, 3, 2], 2] == pytest.approx(here.wheels[0, :, 2], abs=1e-6)


def test_a_car_that_would_roll_over_or_stand_on_one_axle_is_said_to_have_no_state() -> None:
    over = manoeuvre("over", acceleration=(0, 40.0, 0))
    nose = manoeuvre("nose stand", speed=1.0, acceleration=(-45.0, 0, 0), drive="brake")
    cases = balance(CAR, [over, nose, CAR.manoeuvres[0]])

    assert cases.wheel_lift.tolist() == [True, True, False]
    assert not cases.lifted.any()


def test_sources_still_add_up_to_the_case_on_three_wheels() -> None:
    cases = balance(STIFF, [turn(15.0)])

    assert cases.wheel_force.sum(axis=1) == pytest.approx(cases.wheels)
    assert cases.wheel_force[0, :, 0] == pytest.approx(np.zeros((len(cases.sources), 3))), "no source presses it"
