"""Manoeuvres and cars the balance has no meaning for, each with a message that says what to do."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from car.worked_car import CAR, FRONT, REAR, car, manoeuvre

from blockload.car.balance import balance
from blockload.car.bodies import masses
from blockload.car.residual import refuse, residuals
from blockload.case.model import AeroTotal, Case, Link
from blockload.errors import BalanceError, CaseError


@pytest.mark.parametrize(
    ("given", "where", "found"),
    [
        ({"acceleration": (1, 0, 0)}, "acceleration", "hold_speed"),
        ({"acceleration": (-1, 0, 0), "drive": "coast"}, "acceleration", "coast"),
        ({"drive": "reverse"}, "drive", "reverse"),
        ({"parts": ("downfource",)}, "parts", "downfource"),
        ({"extra_wheel_force": {"LF": np.zeros(3)}}, "extra_wheel_force", "LF"),
        ({"overall_ratio": 0.0}, "overall_ratio", "0"),
        ({"speed": 75.0, "acceleration": (-2, 0, 0), "drive": "brake"}, "drive", "push forward"),
    ],
)
def test_a_manoeuvre_without_meaning_is_refused(given: dict[str, Any], where: str, found: str) -> None:
    with pytest.raises(CaseError) as caught:
        balance(CAR, [manoeuvre("odd", **given)])

    assert caught.value.where.startswith("[manoeuvres.odd]")
    assert where in caught.value.where
    assert found in caught.value.found
    assert caught.value.allowed


def link(name: str, carried_by: str) -> Link:
    return Link(
        name=name, outboard=np.array((-2.75, 0.7, 0.3)), inboard=np.array((-2.6, 0.3, 0.3)), carried_by=carried_by
    )


@pytest.mark.parametrize(
    ("other", "where"),
    [
        (car(drive=replace(CAR.drive, crank_inertia=None)), "crank_acceleration"),
        (car(drive=replace(CAR.drive, axle="front")), "overall_ratio"),
        (car(drive=replace(CAR.drive, axle="rear wheels")), "axle"),
        (car(devices=(replace(CAR.devices[0], map=Path("aero.csv")),)), "map"),
        (car(devices=(replace(CAR.devices[0], on="bumper"),)), "on"),
        (
            car(
                devices=(),
                aero_total=AeroTotal(downforce=1e4, at_speed=50, front_share=0.4, share_includes_drag_moment=True),
            ),
            "aero_total",
        ),
        (
            car(axles={"front": replace(FRONT, roll_stiffness=0.0), "rear": replace(REAR, roll_stiffness=0.0)}),
            "roll_stiffness",
        ),
        (car(faces={"front": replace(CAR.faces["front"], x=-2.5), "rear": CAR.faces["rear"]}), "faces"),
        (
            car(axles={"front": FRONT, "rear": replace(REAR, links={n: link(n, n) for n in ("gearbox", "engine")})}),
            "links",
        ),
        (car(axles={"front": FRONT, "rear": replace(REAR, carried_by="subframe")}), "carried_by"),
        (car(manoeuvres=()), "manoeuvres"),
    ],
)
def test_a_car_that_cannot_be_balanced_is_refused(other: Case, where: str) -> None:
    with pytest.raises(CaseError) as caught:
        balance(other)

    assert where in caught.value.where
    assert caught.value.found
    assert caught.value.allowed


def test_an_axle_on_the_engine_loads_it_at_the_wheel_centres() -> None:
    by_axle = balance(car(axles={"front": FRONT, "rear": replace(REAR, carried_by="engine")}))

    assert {load.name for load in by_axle.engine_loads} == {"corner.RL", "corner.RR"}


def test_a_figure_that_is_not_a_number_never_passes_as_balanced() -> None:
    broken = replace(CAR.bodies["engine"], cg=np.array((np.nan, 0, 0.3)))
    with pytest.raises(BalanceError):
        balance(car(bodies={**CAR.bodies, "engine": broken}))


def test_a_force_left_out_of_the_tables_is_named_with_body_and_case() -> None:
    """Dropping one weight, or moving one face by 50 mm, must trip the residual."""
    cases, car_masses = balance(CAR), masses(CAR)
    without = [term for term in cases.terms if (term.body, term.label) != ("gearbox", "weight")]
    with pytest.raises(BalanceError, match="gearbox") as caught:
        refuse(residuals(without, car_masses, len(cases.names)), cases.names)
    assert caught.value.where.startswith("load case 'static'"), "its weight is the largest share there"

    displaced = [
        replace(term, at=term.at + np.array((0, 0, 0.05)))
        if (term.body, term.label) == ("engine", "front face")
        else term
        for term in cases.terms
    ]
    with pytest.raises(BalanceError, match="engine"):
        refuse(residuals(displaced, car_masses, len(cases.names)), cases.names)
    refuse(residuals(cases.terms, car_masses, len(cases.names)), cases.names)
