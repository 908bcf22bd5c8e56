"""A chassis that twists between the axles: the two-lump model on the worked car, and what must follow from it.

Model: A. Deakin, D. Crolla, J. P. Ramirez, R. Hanley, SAE 2000-01-3554; M. Sampo, A. Sorniotti, A. Crocombe, SAE
2010-01-0094 (both read in abstract). The shares are those of the invented worked car, worked out by hand from the
formula; no published table of shares was found.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest
from car.random_cars import cars, manoeuvres
from car.worked_car import CAR, FRONT, REAR, car, manoeuvre
from hypothesis import given, settings

from blockload.car.balance import balance
from blockload.car.chassis import elastic_split, in_series
from blockload.case.model import Case, Manoeuvre
from blockload.errors import CaseError

DEGREE = np.pi / 180
TURN = manoeuvre("turn", acceleration=(0, 10.0, 0))
Published = Callable[..., None]


def front_share(case: Case) -> float:
    """Front axle's share of the elastic roll couple, worked back from wheel loads and side forces."""
    force = balance(case, [TURN]).wheels[0]
    couple = []
    for k, axle in enumerate((FRONT, REAR)):
        left, right = force[2 * k], force[2 * k + 1]
        roll = (left[2] - right[2]) * axle.track / 2
        side = left[1] + right[1]
        unsprung = -2 * axle.corner.mass * 10.0
        geometric = -(side + unsprung) * axle.roll_centre_height + unsprung * axle.corner.cg[2]
        couple.append(roll - geometric)
    return couple[0] / sum(couple)


@pytest.mark.parametrize(
    ("stiffness", "share"), [(5e3, 0.606), (10e3, 0.579), (20e3, 0.562), (40e3, 0.552), (None, 0.542)]
)
def test_front_share_of_the_elastic_couple(published: Published, stiffness: float | None, share: float) -> None:
    """Wheel loads of the balanced car carry the shares of the two-lump formula."""
    got = front_share(car(chassis_torsion=None if stiffness is None else stiffness / DEGREE))

    what = "rigid chassis" if stiffness is None else f"chassis of {stiffness / 1e3:g} kN·m/deg"
    source = "two-lump model (SAE 2000-01-3554, SAE 2010-01-0094) on the worked car, by hand"
    published(f"front share of the roll couple, {what}", source, expected=share, got=got, unit="", tolerance=1e-3)


def test_the_split_solves_the_two_lump_equations() -> None:
    """M_f = K_f phi_f + K_c (phi_f - phi_r) and the same behind, solved independently as two equations."""
    front, rear, middle = 260e3, 220e3, 8e3 / DEGREE
    couples = np.array((3000.0, 800.0))
    roll = np.linalg.solve([[front + middle, -middle], [-middle, rear + middle]], couples)

    assert elastic_split(front, rear, middle) @ couples == pytest.approx(roll * (front, rear))
    assert (elastic_split(front, rear, middle) @ couples).sum() == pytest.approx(couples.sum())


def test_a_very_soft_chassis_leaves_each_lump_on_its_own_axle() -> None:
    assert elastic_split(260e3, 220e3, 1e-3) == pytest.approx(np.eye(2), abs=1e-6)
    assert elastic_split(260e3, 220e3, 1e15) == pytest.approx(elastic_split(260e3, 220e3, None), rel=1e-6)


def test_the_block_enters_in_series_with_the_rest() -> None:
    """10 in series with 10 kN·m/deg is the car of 5 kN·m/deg; the parts of a series are 1/K = sum 1/K_i."""
    stiff = 10e3 / DEGREE
    both = balance(car(chassis_torsion=stiff), [TURN], block_torsion=stiff)
    half = balance(car(chassis_torsion=stiff / 2), [TURN])

    assert both.wheels == pytest.approx(half.wheels)
    assert in_series(12e3, 30e3, 20e3, 15e3) == pytest.approx(4285.714, rel=1e-6)
    assert in_series(None, None) is None


@settings(max_examples=25, deadline=None)
@given(cars(), manoeuvres())
def test_a_twisting_chassis_keeps_every_balance(case: Case, it: Manoeuvre) -> None:
    """Sums stay, whatever the stiffness; an extra wheel force still calls for no answer of the other wheels."""
    soft = balance(replace(case, chassis_torsion=3e3 / DEGREE), [it])
    stiff = balance(case, [it])

    assert soft.residual[0] < 1e-9
    assert soft.front_rear_gap[0] < 1e-9
    assert soft.wheels[0].sum(axis=0) == pytest.approx(stiff.wheels[0].sum(axis=0), abs=1e-4)
    for k, name in enumerate(soft.sources):
        if name.startswith("extra."):
            assert np.count_nonzero(np.abs(soft.wheel_force[0, k]).sum(axis=1)) <= 1


def test_a_stiffness_of_nothing_is_refused() -> None:
    with pytest.raises(CaseError, match="torsion_stiffness"):
        balance(replace(CAR, chassis_torsion=0.0), [TURN])
