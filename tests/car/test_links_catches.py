"""Mistakes in suspension, torque paths and load transfer: each input trips its catch, with a message to act on."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from car.linked_car import FRONT_ROCKER, REAR_ENDS, front, linked, links, rear
from car.worked_car import CAR, FRONT, REAR, car, manoeuvre

from blockload.car.balance import balance
from blockload.car.bodies import masses
from blockload.car.links import CONDITION_LIMIT, LINKS, equilibrium_matrix
from blockload.car.model import Term
from blockload.car.residual import refuse, residuals
from blockload.car.suspension import condition_notes
from blockload.car.transfer import share_range, transfer
from blockload.case.model import Case, Tyres
from blockload.errors import BalanceError, CaseError


def refused(case: Case) -> CaseError:
    with pytest.raises(CaseError) as caught:
        balance(case)
    assert caught.value.where
    assert caught.value.found
    assert caught.value.allowed
    return caught.value


def rear_links(**ends: Any) -> Case:
    return linked(rear_axle=replace(REAR, links=links({**REAR_ENDS, **ends}, "gearbox")))


def test_a_usual_corner_is_well_conditioned() -> None:
    """About 20 about the wheel centre; a few hundred about the car's far origin, which says nothing of the corner."""
    cases = balance(linked())
    outboard, inboard = (np.array([REAR_ENDS[name][k] for name in LINKS]) for k in (0, 1))

    for loads in cases.links.values():
        assert 5 < loads.condition < 100
    assert 100 < np.linalg.cond(equilibrium_matrix(outboard, inboard, (0, 0, 0))) < 1000


def test_two_links_on_the_same_points_are_named() -> None:
    """Mistake: the same pair of points typed for two legs."""
    error = refused(rear_links(lower_aft=REAR_ENDS["lower_fore"]))

    assert "lower_fore" in error.found
    assert "lower_aft" in error.found
    assert "upper" not in error.found
    assert error.where == "[axles.rear.links]"


def test_a_toe_link_that_runs_into_the_lower_joint_leaves_the_wheel_free_to_steer() -> None:
    """Mistake: steer picks up the lower ball joint, so nothing holds the upright about its steering axis."""
    joint, inboard = REAR_ENDS["lower_fore"][0], REAR_ENDS["steer"][1]
    error = refused(rear_links(steer=(joint, inboard), pushrod=(joint, REAR_ENDS["pushrod"][1])))

    assert "condition number" in error.found
    assert "turn about" in error.found
    assert f"{CONDITION_LIMIT:g}" in error.allowed


def test_a_rod_that_alone_keeps_the_wheel_from_steering_is_solved_and_pointed_out() -> None:
    """The same toe link with the rod 30 mm off the joint: six links on paper, tensions of hundreds of kN."""
    steer = (REAR_ENDS["lower_fore"][0], REAR_ENDS["steer"][1])
    links_of = balance(rear_links(steer=steer)).links
    notes = list(condition_notes(links_of))

    assert len(notes) == 2, "left and right"
    assert "pushrod" in notes[0]
    assert "steer" in notes[0]
    assert not list(condition_notes(balance(linked()).links))


def test_a_push_rod_in_the_plane_of_the_lower_wishbone_holds_nothing_up() -> None:
    """Mistake: rocker height typed as the wishbone's, so the rod lies in its plane."""
    outer, fore, aft = (np.array(p) for p in (REAR_ENDS["lower_fore"][0], *(REAR_ENDS[n][1] for n in LINKS[2:4])))
    error = refused(rear_links(pushrod=(tuple(outer), tuple((fore + aft) / 2))))

    assert "pushrod" in error.found
    assert "lower_fore" in error.found
    assert "steer" not in error.found


def test_one_point_in_millimetres_is_still_a_refused_or_absurd_corner() -> None:
    """Mistake: mixed units move one end a thousandfold; here the reader's bands are passed by."""
    outboard, inboard = REAR_ENDS["upper_fore"]
    far = tuple(1000 * c for c in inboard)
    cases = balance(rear_links(upper_fore=(outboard, far)))
    usual = balance(rear_links())

    assert cases.links["RL"].condition != pytest.approx(usual.links["RL"].condition, rel=0.05)


@pytest.mark.parametrize(
    ("axle", "where", "words"),
    [
        (rear(steer={"inboard": np.array(REAR_ENDS["steer"][0])}), "steer", "apart"),
        (replace(rear(), links={n: v for n, v in rear().links.items() if n != "steer"}), "links", "missing: steer"),
        (replace(rear(), links={**rear().links, "strut": rear().links["steer"]}), "strut", "no such link"),
        (rear(pushrod={"carried_by": "subframe"}, rocker=None), "carried_by", "subframe"),
        (rear(pushrod={"meets": "middle"}), "pushrod", "middle"),
        (rear(lower_aft={"outboard": np.array((-2.7, 0.7, 0.2))}, pushrod={"meets": "lower"}), "lower", "apart"),
    ],
)
def test_links_that_do_not_make_a_corner_are_refused(axle: Any, where: str, words: str) -> None:
    error = refused(linked(rear_axle=axle))

    assert where in error.where
    assert words in error.found


def rocker(**changes: Any) -> Case:
    return linked(front_axle=front(replace(FRONT_ROCKER, **changes)))


@pytest.mark.parametrize(
    ("case", "where", "words"),
    [
        (rocker(spring=None), "spring", "nothing holds"),
        (rocker(bar_link=None), "bar_link", "40 %"),
        (rocker(bar_bearing_y=None), "bar_bearing_y", "not given"),
        (rocker(heave_share=0.5), "heave", "0.5"),
        (rocker(axis=np.zeros(3)), "axis", "no direction"),
        (rocker(axis=np.array((0.0, 1.0, 0.0))), "rocker", "passes the rocker's axis"),
        (rocker(spring=(np.array((0.0, 0.26, 0.56)), np.array((0.0, 0.28, 0.42)))), "spring", "axis at 0 mm"),
        (rocker(heave_share=1.5), "heave_share", "1.5"),
    ],
)
def test_a_rocker_that_cannot_hold_its_rod_is_refused(case: Case, where: str, words: str) -> None:
    """Mistake: the rod's load put on the casing, its spring, bar or pivot forgotten."""
    error = refused(case)

    assert where in error.where
    assert words in error.found


@pytest.mark.parametrize("label", ["spring.RL", "rocker_pivot.RR", "bar_bearing.RL"])
def test_a_rocker_load_left_out_breaks_the_balance(label: str) -> None:
    """Mistake: rod on the casing, rocker loads omitted; the sum of the point loads no longer is the corner's."""
    case = linked()
    cases = balance(case)
    without = [term for term in cases.terms if term.label != label]
    with pytest.raises(BalanceError, match="gearbox"):
        refuse(residuals(without, masses(case), len(cases.names)), cases.names)


def test_drive_torque_applied_at_the_contact_and_again_at_the_hub_breaks_the_balance() -> None:
    """Mistake: T_w = R Fx counted twice on the wheel."""
    case = linked()
    cases = balance(case)
    twice = [term for term in cases.terms if (term.body, term.label) == ("RL", "half-shaft")]
    assert len(twice) == 1
    driven = [cases.names.index(name) for name in ("v_max", "corner_left", "launch")]
    assert twice[0].moment[driven, 1] == pytest.approx(0.34 * cases.wheels[driven, 2, 0])
    with pytest.raises(BalanceError, match="RL"):
        refuse(residuals([*cases.terms, *twice], masses(case), len(cases.names)), cases.names)


def test_crank_torque_on_the_front_studs_breaks_the_balance() -> None:
    """Mistake: the shaft's couple taken by the front face: engine and tub no longer agree."""
    cases = balance(CAR)
    wrong: list[Term] = []
    for term in cases.terms:
        if (term.body, term.label) == ("engine", "input shaft"):
            wrong.append(replace(term, moment=-term.moment))
        else:
            wrong.append(term)
    with pytest.raises(BalanceError, match="engine"):
        refuse(residuals(wrong, masses(CAR), len(cases.names)), cases.names)


def test_grip_beyond_the_tyre_is_seen_and_falls_with_load() -> None:
    """Mistake: 2.6 g from tyres of 1.7: use above 1; load sensitivity makes it worse on the loaded side."""
    hard = manoeuvre("hard", speed=40.0, acceleration=(0, 24, 0))
    plain = balance(car(tyres=Tyres(mu_x=1.7, mu_y=1.7)), [hard])
    fading = balance(
        car(tyres=Tyres(mu_x=1.7, mu_y=1.7, load_sensitivity=5e-5, reference_load=3000.0)), [hard, CAR.manoeuvres[0]]
    )

    assert plain.tyre_use[0, 1] > 1
    outer, factor = plain.wheels[0, 1], 1 - 5e-5 * (plain.wheels[0, 1, 2] - 3000.0)
    assert fading.tyre_use[0, 1] == pytest.approx(np.hypot(outer[0], outer[1]) / 1.7 / (outer[2] * factor))
    assert fading.tyre_use[1].tolist() == [0, 0, 0, 0]
    assert np.isnan(balance(CAR, [hard]).tyre_use).all(), "friction not known: not judged"
    with pytest.raises(CaseError, match="reference_load"):
        balance(car(tyres=Tyres(mu_x=1.7, load_sensitivity=5e-5)), [hard])


def test_a_percentage_of_load_transfer_is_not_a_percentage_of_stiffness() -> None:
    """Mistake: a fixed split typed for the stiffness split; the parts show how far the two differ."""
    split = transfer(CAR)
    low, high = share_range(CAR, 0.4, 0.6)
    weight = 9.80665 * (670 * 0.40 + 190 * 0.27 + 130 * 0.32 + 2 * 38 * 0.33 + 2 * 42 * 0.34)

    assert split.front_elastic_share == pytest.approx(260 / 480)
    assert -split.total.sum() == pytest.approx(weight)
    assert split.front_share < split.front_elastic_share - 0.03
    assert low < split.front_share < high


def test_links_overrule_the_axle_they_hang_on() -> None:
    """All six on the engine load the engine, as an axle carried by the engine does."""
    on_engine = {name: replace(link, carried_by="engine") for name, link in rear(None).links.items()}
    by_links = balance(linked(FRONT, replace(REAR, links=on_engine)))
    by_axle = balance(linked(FRONT, replace(REAR, carried_by="engine")))

    assert by_links.section("rear") == pytest.approx(by_axle.section("rear"), abs=1e-6)
    assert len(by_links.engine_loads) == 12


def test_attachments_of_left_and_right_legs_reach_the_block() -> None:
    names = {"carried_by": "engine", "attachments": ("leg_left", "leg_right")}
    cases = balance(linked(rear_axle=rear(upper_fore=names)))

    assert {load.name: load.attachment for load in cases.engine_loads} == {
        "upper_fore.RL": "leg_left",
        "upper_fore.RR": "leg_right",
    }
