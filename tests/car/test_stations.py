"""Diagrams along the car: nothing beyond its ends, the face's own section wrench at a face, statics between."""

from __future__ import annotations

import numpy as np
import pytest
from car.random_cars import cars, manoeuvres
from car.worked_car import CAR
from hypothesis import given, settings

from blockload.car.balance import balance
from blockload.car.stations import reference_line, section_along, stations
from blockload.case.model import Case, Manoeuvre


@settings(max_examples=25, deadline=None)
@given(cars(), manoeuvres())
def test_at_a_face_the_diagram_is_the_section_wrench_and_beyond_the_car_it_is_zero(case: Case, it: Manoeuvre) -> None:
    cases = balance(case, [it])
    x = [cases.faces[name].reference[0] for name in ("front", "rear")]
    along = section_along(cases, np.array([5.0, *x, -9.0]))

    assert along[0, 0] == pytest.approx(np.zeros(6), abs=1e-5)
    assert along[0, 1] == pytest.approx(cases.section("front")[0], abs=1e-5)
    assert along[0, 2] == pytest.approx(cases.section("rear")[0], abs=1e-5)
    assert along[0, 3] == pytest.approx(np.zeros(6), abs=1e-5)


def test_sagging_between_two_loads_has_the_slope_of_the_shear() -> None:
    """Without loads between, dM_sag/dx = -V_z (V front on rear, x forward) but for N times the line's own slope."""
    cases = balance(CAR)
    x = np.array([-1.6, -1.7])
    first, second = section_along(cases, x).transpose(1, 0, 2)
    line = reference_line(cases, x)
    rise = -first[:, 2] * (x[0] - x[1]) + first[:, 0] * (line[0, 2] - line[1, 2])

    assert first[:, :3] == pytest.approx(second[:, :3])
    assert first[:, 4] - second[:, 4] == pytest.approx(rise, abs=1e-6)


def test_hand_form_of_the_static_sagging_ahead_of_the_rear_axle() -> None:
    """(Fz_r - W_u)(x_c + WB) less the weights behind the cut times their arms."""
    cut, g = -2.0, 9.80665
    by_hand = (2 * 3086.4202 - 84 * g) * (cut + 2.75) - 130 * g * (cut + 2.62)

    assert section_along(balance(CAR), np.array([cut]))[0, 0, 4] == pytest.approx(by_hand, abs=0.01)


def test_the_crank_twists_the_block_more_and_more_towards_the_gearbox() -> None:
    cases = balance(CAR)
    v_max = cases.names.index("v_max")
    torsion = section_along(cases, np.array([-1.5, -1.81, -2.12]))[v_max, :, 3]

    assert torsion == pytest.approx([0.0, 344.25 / 2, 344.25], abs=1e-6)


def test_stations_stand_on_both_sides_of_every_step() -> None:
    cases = balance(CAR)
    x = stations(cases)
    along = section_along(cases, x)
    fine = section_along(cases, np.linspace(x[-1], x[0], 4001))

    assert np.all(np.diff(x) < 0)
    assert np.abs(along).max(axis=1) == pytest.approx(np.abs(fine).max(axis=1), rel=2e-3)
    assert np.all(np.abs(along).max(axis=1) >= np.abs(fine).max(axis=1) - 1e-6)
