"""Dynamic factors of road vehicles against print.

J. C. Brown, A. J. Robertson, S. T. Serpento, *Motor Vehicle Structures* (2002), table 2.4 p. 20 (braking by author) and
p. 24 (side force that tips the car); D. Barton, J. D. Fieldhouse, *Automotive Chassis Engineering* (2018), p. 225;
Commission Regulation (EU) 1005/2010 (towing). The books are quoted from notes on them.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np
import pytest
from car.catalogue_car import equipped
from car.worked_car import CAR, manoeuvre

from blockload.car.balance import balance
from blockload.car.bodies import masses
from blockload.car.catalogue.expanding import expand
from blockload.car.catalogue.factors import side_force
from blockload.case.factors import BRAKING, DEFAULTS

BROWN = "Brown, Robertson & Serpento (2002)"
Published = Callable[..., None]


@pytest.mark.parametrize(
    ("author", "printed"),
    [("Pawlowski (1969)", 1.75), ("Cranfield tests", 1.1), ("Garrett (1953)", 0.75), ("Tidbury (1966), trucks", 1.84)],
)
def test_braking_by_author(published: Published, author: str, printed: float) -> None:
    """The author's deceleration as data, and the braking force that it makes of the car's weight."""
    factor = BRAKING[author]
    case = replace(CAR, devices=())
    braked = manoeuvre("brake", acceleration=(-factor.value * CAR.gravity, 0, 0), drive="brake")
    force = -balance(case, (braked,)).wheels[0, :, 0].sum()

    got = force / (masses(case).total * case.gravity)
    published(
        f"braking force over weight, {author}",
        f"{BROWN}, table 2.4",
        expected=printed,
        got=got,
        unit="1",
        tolerance=1e-9,
    )
    assert author in factor.source


def test_side_force_of_a_kerb_strike(published: Published) -> None:
    """K W B / (2 h), with W = 7.85 kN, B = 1.46 m, h = 0.30 m and Garrett's K = 1.75."""
    got = side_force(7.85e3, 1.46, 0.30, DEFAULTS["side"].value)

    published("kerb side force, K = 1.75", f"{BROWN}, p. 24", expected=33.43e3, got=got, unit="N", tolerance=2e-4)


def test_the_side_force_with_a_factor_of_one_is_what_tips_this_car() -> None:
    """Independent of the formula: at that lateral acceleration the balanced inner wheels carry nothing."""
    track = 1.64
    axles = {name: replace(axle, track=track) for name, axle in CAR.axles.items()}
    case = replace(CAR, axles=axles, devices=())
    car = masses(case)
    force = side_force(car.total * case.gravity, track, float(car.car_cg[2]), 1.0)
    cases = balance(case, (manoeuvre("tipping", acceleration=(0.0, force / car.total, 0.0)),))

    inner = cases.wheels[0, 0::2, 2].sum()
    assert abs(inner) < 1e-9 * car.total * case.gravity


def test_the_side_force_is_shared_by_moments_about_the_cg() -> None:
    """Front to rear as L2 to L1 (Brown et al., p. 24): the spin case takes the rear axle's share on one wheel."""
    cases = balance(equipped("spin"))
    car = masses(CAR)
    total = side_force(car.total * CAR.gravity, (1.66 + 1.62) / 2, float(car.car_cg[2]), 1.75)

    assert -cases.wheels[0, 2, 1] == pytest.approx(total * -car.car_cg[0] / 2.75, rel=1e-12)


def test_vertical_factor_lies_in_the_printed_range() -> None:
    """2 to 3 times static (Barton & Fieldhouse 2018, p. 225)."""
    assert 2.0 <= DEFAULTS["vertical"].value <= 3.0


def test_towing_pulls_with_half_the_mass(published: Published) -> None:
    """At least half the laden mass, in tension and compression (Commission Regulation (EU) 1005/2010)."""
    pulls = [item for item in expand(equipped("towing")) if item.name.startswith("tow_front")]
    forces = [item.point_forces[0].force[0] for item in pulls]

    published(
        "towing force over weight",
        "Commission Regulation (EU) 1005/2010",
        expected=0.5,
        got=forces[0] / (masses(CAR).total * CAR.gravity),
        unit="1",
        tolerance=1e-12,
    )
    np.testing.assert_allclose(forces[0], -forces[1])
