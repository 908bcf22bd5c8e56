"""Laws of links inside the balanced car: on the worked car, on random geometry, random manoeuvres and random cars."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from car.linked_car import REAR_ENDS, front, linked, links, rear
from car.random_cars import cars, manoeuvres, mirrored_manoeuvre
from car.worked_car import CAR, manoeuvre
from hypothesis import given, settings
from hypothesis import strategies as st

from blockload.car.balance import balance
from blockload.car.bodies import chassis
from blockload.car.links import LINKS, MIRROR, directions
from blockload.car.model import LoadCases, Term
from blockload.car.stations import section_along
from blockload.case.model import CORNERS, Case, Manoeuvre

SCALE = 1e5  # N and N·m: the magnitudes the sums below are made of
shifts = st.lists(st.floats(-0.03, 0.03), min_size=36, max_size=36).map(lambda v: np.array(v).reshape(6, 2, 3))


def terms(cases: LoadCases, body: str, *labels: str) -> list[Term]:
    return [term for term in cases.terms if term.body == body and term.label.startswith(labels)]


def summed(found: list[Term], about: np.ndarray) -> np.ndarray:
    """Force and moment (C, 6) of free-body lines about a point."""
    force = np.sum([term.force for term in found], axis=0)
    moment = np.sum([term.moment + np.cross(term.at - about, term.force) for term in found], axis=0)
    return np.concatenate([force, moment], axis=1)


def shaken(shift: np.ndarray) -> Case:
    """Both axles with every link end moved a little."""

    def moved(axle: object) -> object:
        given = {
            name: replace(link, outboard=link.outboard + s[0], inboard=link.inboard + s[1])
            for (name, link), s in zip(axle.links.items(), shift, strict=True)  # type: ignore[attr-defined]
        }
        return replace(axle, links=given)  # type: ignore[type-var]

    return linked(moved(front()), moved(rear()))  # type: ignore[arg-type]


@settings(max_examples=25, deadline=None)
@given(shifts, manoeuvres())
def test_link_directions_times_tensions_equal_the_wheel_wrench(shift: np.ndarray, it: Manoeuvre) -> None:
    """To 1e-9 of the loads, in force and moment, against everything else in the corner's own free-body table."""
    case = shaken(shift)
    cases = balance(case, [it])
    for k, corner in enumerate(CORNERS):
        axle = case.axles["front" if k < 2 else "rear"]
        signs = MIRROR if k % 2 else np.ones(3)
        outboard = np.array([axle.links[name].outboard for name in LINKS]) * signs
        inboard = np.array([axle.links[name].inboard for name in LINKS]) * signs
        tension = cases.links[corner].tension[0, :, :6].sum(axis=0)
        force = directions(outboard, inboard) * tension[:, None]
        centre = chassis(case).wheel_centre[k]
        pull = np.concatenate([force.sum(axis=0), np.cross(outboard - centre, force).sum(axis=0)])
        rest = [t for t in cases.terms if t.body == corner and t.label not in LINKS]

        assert pull == pytest.approx(-summed(rest, centre)[0], abs=1e-9 * SCALE)
    assert cases.residual[0] < 1e-9


@settings(max_examples=25, deadline=None)
@given(shifts, manoeuvres())
def test_the_faces_do_not_know_of_links_on_one_body(shift: np.ndarray, it: Manoeuvre) -> None:
    with_links, without = balance(shaken(shift), [it]), balance(CAR, [it])
    for face in ("front", "rear"):
        expected = without.faces[face].wrench
        assert with_links.faces[face].wrench == pytest.approx(expected, abs=1e-9 * SCALE)
    assert with_links.wheels == pytest.approx(without.wheels, abs=1e-9 * SCALE)


@settings(max_examples=25, deadline=None)
@given(manoeuvres())
def test_rocker_loads_of_both_sides_add_up_to_the_rods(it: Manoeuvre) -> None:
    """Leaving the rocker out puts the rods' force and moment where pivots, springs and bar bearings were."""
    with_rocker, without = balance(linked(), [it]), balance(linked(front(None), rear(None)), [it])
    for body in ("tub", "gearbox"):
        split = terms(with_rocker, body, "rocker_pivot", "spring", "bar_bearing")
        rods = terms(without, body, "pushrod")
        assert (len(split), len(rods)) == (6, 2)
        assert summed(split, np.zeros(3)) == pytest.approx(summed(rods, np.zeros(3)), abs=1e-9 * SCALE)


@settings(max_examples=25, deadline=None)
@given(manoeuvres())
def test_a_leg_on_the_engine_loads_it_by_exactly_what_the_faces_change(it: Manoeuvre) -> None:
    """The engine's own loads and both faces balance its weight and inertia; the rear face changes by the legs alone."""
    on_engine = {"upper_fore": {"carried_by": "engine", "inboard": np.array((-2.10, 0.26, 0.42))}}
    case = linked(rear_axle=rear(**on_engine))
    cases = balance(case, [it])
    base = balance(linked(rear_axle=rear(upper_fore={"inboard": np.array((-2.10, 0.26, 0.42))})), [it])
    assert [load.name for load in cases.engine_loads] == ["upper_fore.RL", "upper_fore.RR"]
    reference = cases.faces["rear"].reference
    legs = np.zeros(6)
    for load in cases.engine_loads:
        force = load.force.sum(axis=1)[0]
        legs += np.concatenate([force, np.cross(load.at - reference, force) + load.moment.sum(axis=1)[0]])
    change = (cases.faces["rear"].wrench - base.faces["rear"].wrench).sum(axis=1)[0]

    assert change == pytest.approx(-legs, abs=1e-9 * SCALE)
    assert cases.faces["front"].wrench == pytest.approx(base.faces["front"].wrench, abs=1e-9 * SCALE)
    assert cases.residual[0] < 1e-9
    assert cases.front_rear_gap[0] < 1e-9


@settings(max_examples=25, deadline=None)
@given(manoeuvres(), st.sampled_from(["front", "rear"]))
def test_where_the_brake_sits_changes_links_and_no_face(it: Manoeuvre, axle: str) -> None:
    stop = replace(it, drive="brake", acceleration=np.array((-50.0, *it.acceleration[1:])))
    outboard = balance(linked(), [stop])
    inboard_axles = {name: a if name != axle else replace(a, brakes="inboard") for name, a in linked().axles.items()}
    inboard = balance(linked(inboard_axles["front"], inboard_axles["rear"]), [stop])
    for face in ("front", "rear"):
        assert inboard.faces[face].wrench == pytest.approx(outboard.faces[face].wrench, abs=1e-9 * SCALE)
    change = [np.abs(inboard.links[c].tension - outboard.links[c].tension).max() for c in CORNERS]
    moved, still = (change[2:], change[:2]) if axle == "rear" else (change[:2], change[2:])
    assert max(moved) > 1e3
    assert max(still) == 0.0


@settings(max_examples=25, deadline=None)
@given(manoeuvres())
def test_a_mirrored_manoeuvre_swaps_the_tensions_of_left_and_right(it: Manoeuvre) -> None:
    """Without crank couples the car is symmetric, so the left corner's tensions become the right corner's."""
    quiet = replace(it, overall_ratio=None, crank_acceleration=0.0)
    here, there = balance(linked(), [quiet]), balance(linked(), [mirrored_manoeuvre(quiet)])
    for left, right in (("FL", "FR"), ("RL", "RR")):
        for one, other in ((left, right), (right, left)):
            expected = here.links[one].tension.sum(axis=1)
            assert there.links[other].tension.sum(axis=1) == pytest.approx(expected, abs=1e-9 * SCALE)


@settings(max_examples=20, deadline=None)
@given(cars(("gearbox",)), manoeuvres())
def test_random_cars_stay_in_balance_on_links(case: Case, it: Manoeuvre) -> None:
    """Links scaled to a random car: every body's residual, summed line by line, is rounding."""
    axle = case.axles["rear"]
    to = np.array((axle.x + 2.75, 0.0, 0.0))
    ends = {name: (o + to, i + to) for name, (o, i) in ((n, np.array(e)) for n, e in REAR_ENDS.items())}
    given_links = links({name: (tuple(o), tuple(i)) for name, (o, i) in ends.items()}, "gearbox")  # type: ignore[misc]
    with_links = replace(case, axles={**case.axles, "rear": replace(axle, links=given_links)})
    cases, plain = balance(with_links, [it]), balance(case, [it])

    assert cases.residual[0] < 1e-9
    assert cases.faces["front"].wrench == pytest.approx(plain.faces["front"].wrench, abs=1e-9 * SCALE)
    assert cases.faces["rear"].wrench == pytest.approx(plain.faces["rear"].wrench, abs=1e-9 * SCALE)


def test_tensions_are_linear_in_the_sources() -> None:
    """Parts of a straight manoeuvre, each balanced alone, add up to the whole."""
    parts = ("downforce", "drag", "weight", "inertia", "crank", "crank_inertia")
    whole = manoeuvre("all", speed=50.0, acceleration=(4, 0, 0), drive="accelerate", overall_ratio=6.0)
    cases = balance(linked(), [whole, *(replace(whole, name=part, parts=(part,)) for part in parts)])
    tension = cases.links["RL"].tension.sum(axis=1)

    assert tension[1:].sum(axis=0) == pytest.approx(tension[0], abs=1e-9 * SCALE)


def test_the_heave_element_moves_load_inside_the_gearbox_only() -> None:
    """With and without it: faces and links the same, pivots and springs not."""
    rocker = rear().rocker
    assert rocker is not None
    with_it, without = balance(linked()), balance(linked(rear_axle=rear(replace(rocker, heave_share=0.0))))
    for face in ("front", "rear"):
        assert with_it.faces[face].wrench == pytest.approx(without.faces[face].wrench, abs=1e-9 * SCALE)
    six = slice(0, 6)
    assert with_it.links["RL"].tension[..., six] == pytest.approx(without.links["RL"].tension[..., six])
    pivots = [summed(terms(c, "gearbox", "rocker_pivot.RL"), np.zeros(3)) for c in (with_it, without)]
    assert np.abs(pivots[0] - pivots[1]).max() > 100.0
    both = [summed(terms(c, "gearbox", "rocker_pivot", "spring"), np.zeros(3)) for c in (with_it, without)]
    assert both[0] == pytest.approx(both[1], abs=1e-9 * SCALE)


def test_diagrams_meet_the_faces_with_links_on_the_engine() -> None:
    """Section forces summed along the car from the single pick-ups agree with the face wrench at both faces."""
    case = linked(rear_axle=rear(upper_fore={"carried_by": "engine", "inboard": np.array((-2.10, 0.26, 0.42))}))
    cases = balance(case)
    x = np.array([cases.faces[name].reference[0] for name in ("front", "rear")])
    along = section_along(cases, x)

    assert along[:, 0] == pytest.approx(cases.section("front"), abs=1e-6)
    assert along[:, 1] == pytest.approx(cases.section("rear"), abs=1e-6)
