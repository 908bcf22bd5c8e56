"""Totals, balance, influence and remarks: the sums that catch a wrong aero figure."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from car.aero_maps import aero_map, no_point, with_map
from car.worked_car import CAR, manoeuvre

from blockload.car.aero_check import factor_on_aero, per_kilonewton, remarks
from blockload.car.aero_totals import totals
from blockload.car.balance import balance
from blockload.case.model import CARRIERS


def test_totals_and_both_conventions_of_the_share_by_hand() -> None:
    """Sums of Cz A, Cx A and their levers over the wheelbase, written out."""
    found = totals(CAR, [25.0, 75.0])
    down = np.array([1.05, 2.30, 0.0, 0.60, 1.40])
    drag = np.array([0.12, 0.20, 0.45, 0.13, 0.45])
    x = np.array([0.8, -1.4, -0.9, -2.5, -3.05])
    z = np.array([0.2, 0.08, 0.45, 0.15, 0.95])
    without = (down @ (2.75 + x)) / 2.75 / down.sum()

    assert found.downforce.sum(axis=1) == pytest.approx(0.6 * np.array([25, 75]) ** 2 * 5.35)
    assert found.drag[1] == pytest.approx(3375.0 * drag)
    assert found.share_without == pytest.approx(without)
    assert found.share_with == pytest.approx(without - drag @ z / 2.75 / down.sum())


def test_share_with_the_drag_moment_is_that_of_the_axle_loads() -> None:
    """The balance's own wheel loads: at rest and at speed, holding it."""
    cases = balance(CAR, [manoeuvre("rest"), manoeuvre("v", speed=75.0)])
    gained = np.diff(cases.wheels[:, :, 2], axis=0)[0]

    assert totals(CAR, 75.0).share_with[0] == pytest.approx(gained[:2].sum() / gained.sum())


def test_influence_of_each_device_follows_the_closed_form() -> None:
    """M_sag at a cut x_c per unit load at x: (-x/WB)(x_c + WB) - [behind the cut](x_c - x)."""
    found = per_kilonewton(CAR)
    x = np.array([d.at[0] for d in CAR.devices])
    for f, (cut, behind) in enumerate(((-1.5, ("engine", "gearbox")), (-2.12, ("gearbox",)))):
        carried = np.array([d.on in behind for d in CAR.devices])
        expected = -x / 2.75 * (cut + 2.75) - carried * (cut - x)

        assert found.section[:, f, 4] == pytest.approx(1e3 * expected)


def test_a_device_on_another_body_loads_the_faces_otherwise_and_by_how_much() -> None:
    """Mistake: the floor on the gearbox. What would change stands beside what the case says."""
    found = per_kilonewton(CAR)
    floor = found.devices.index("floor")

    assert found.moved[floor, CARRIERS.index("tub")] == pytest.approx(found.section[floor])
    shift = found.moved[floor, CARRIERS.index("gearbox"), :, 4] - found.section[floor, :, 4]
    assert shift == pytest.approx([1e3 * (1.5 - 1.4), 1e3 * (2.12 - 1.4)])


def test_studs_per_kilonewton_sum_to_the_section() -> None:
    found = per_kilonewton(CAR)

    assert found.axial["front"].sum(axis=1) == pytest.approx(found.section[:, 0, 0], abs=1e-9)
    assert found.shear["rear"].sum(axis=1) == pytest.approx(-found.section[:, 1, 1:3], abs=1e-9)


def test_a_device_ahead_of_the_front_face_on_the_gearbox_is_remarked() -> None:
    wrong = tuple(replace(d, on="gearbox") if d.name == "floor" else d for d in CAR.devices)

    assert remarks(CAR) == ()
    assert "floor" in remarks(replace(CAR, devices=wrong))[0]
    assert "ahead of the front face" in remarks(replace(CAR, devices=wrong))[0]


def test_a_device_behind_the_rear_face_on_the_tub_is_remarked() -> None:
    wrong = tuple(replace(d, on="tub") if d.name == "rear_wing" else d for d in CAR.devices)

    assert "behind the rear face" in remarks(replace(CAR, devices=wrong))[0]


@pytest.mark.parametrize(("down", "words"), [(-1.4, "lifts the car everywhere"), (1.4, "")])
def test_a_device_that_lifts_is_remarked_in_a_map_too(down: float, words: str) -> None:
    table = aero_map({}, lambda: (-0.45, 0, -down, 0, 0, 0, *no_point()))
    found = remarks(with_map("rear_wing", table))

    assert (words in found[0]) if words else found == ()


def test_a_factor_on_the_air_shows() -> None:
    """Mistake: aero scaled by a bump factor. The check recomputes q A from the speed."""
    cases = balance(
        CAR, [manoeuvre("v", speed=60.0), manoeuvre("rest"), manoeuvre("bump", speed=60, acceleration=(0, 0, 20))]
    )
    scaled = replace(cases, downforce=cases.downforce * np.array([1.0, 1.0, 3.0]))

    assert factor_on_aero(CAR, cases) == pytest.approx([1.0, np.nan, 1.0], nan_ok=True)
    assert factor_on_aero(CAR, scaled)[2] == pytest.approx(3.0)
