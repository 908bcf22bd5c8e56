"""Laws of a corner on links: any geometry, any wrench, one body or two."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from blockload.car.links import LINKS, MIRROR, CornerMap, directions, equilibrium_matrix, six_links
from blockload.car.twobody import two_bodies
from blockload.errors import CaseError

USUAL = {
    "upper_fore": ((0.0, 0.70, 0.47), (0.24, 0.28, 0.43)),
    "upper_aft": ((0.0, 0.70, 0.47), (-0.16, 0.27, 0.43)),
    "lower_fore": ((-0.01, 0.72, 0.20), (0.34, 0.20, 0.17)),
    "lower_aft": ((-0.01, 0.72, 0.20), (-0.16, 0.19, 0.17)),
    "steer": ((-0.15, 0.70, 0.30), (-0.17, 0.24, 0.27)),
    "pushrod": ((-0.01, 0.72, 0.20), (0.05, 0.26, 0.50)),
}
OUTBOARD = np.array([USUAL[name][0] for name in LINKS])
INBOARD = np.array([USUAL[name][1] for name in LINKS])
CENTRE = np.array((0.0, 0.81, 0.34))

numbers = st.floats(-1.0, 1.0)
wrenches = st.lists(numbers, min_size=6, max_size=6).map(np.array)
shifts = st.lists(st.floats(-0.04, 0.04), min_size=36, max_size=36).map(lambda v: np.array(v).reshape(2, 6, 3))


def net(corner: CornerMap, wrench: np.ndarray, about: np.ndarray) -> np.ndarray:
    """Force and moment of all inboard forces about a point."""
    force = corner.force @ wrench
    return np.concatenate([force.sum(axis=0), np.cross(corner.inboard - about, force).sum(axis=0)])


@settings(max_examples=60, deadline=None)
@given(shifts, wrenches)
def test_directions_times_tensions_equal_the_wheel_wrench(shift: np.ndarray, wrench: np.ndarray) -> None:
    """Force and moment, to 1e-9, in the direct sum over the links and in the loads on the body."""
    outboard, inboard = OUTBOARD + shift[0], INBOARD + shift[1]
    corner = six_links(outboard, inboard, CENTRE)
    along = directions(outboard, inboard)
    tension = corner.tension @ wrench
    pull = np.concatenate([along, np.cross(outboard - CENTRE, along)], axis=1).T @ tension

    assert pull == pytest.approx(-wrench, abs=1e-9)
    assert net(corner, wrench, CENTRE) == pytest.approx(wrench, abs=1e-9)


@settings(max_examples=60, deadline=None)
@given(shifts, wrenches, st.sampled_from(["upper", "lower"]))
def test_two_bodies_hand_on_the_wheel_wrench(shift: np.ndarray, wrench: np.ndarray, wishbone: str) -> None:
    outboard, inboard = OUTBOARD + shift[0], INBOARD + shift[1]
    fore = LINKS.index(f"{wishbone}_fore")
    outboard[fore + 1] = outboard[fore]
    outboard[5] = 0.75 * outboard[fore] + 0.15 * inboard[fore] + 0.1 * inboard[fore + 1] + (0, 0, 0.02)
    corner = two_bodies(outboard, inboard, CENTRE, wishbone=wishbone)

    assert net(corner, wrench, CENTRE) == pytest.approx(wrench, abs=1e-9)


@settings(max_examples=30, deadline=None)
@given(shifts, wrenches)
def test_the_wishbone_itself_is_in_balance(shift: np.ndarray, wrench: np.ndarray) -> None:
    """About the line of its inboard joints only the rod and the outer joint turn it."""
    outboard, inboard = OUTBOARD + shift[0], INBOARD + shift[1]
    outboard[3] = outboard[2]
    outboard[5] = 0.8 * outboard[2] + 0.2 * inboard[2] + (0, 0, 0.02)
    corner = two_bodies(outboard, inboard, CENTRE, wishbone="lower")
    force = corner.force @ wrench
    line = inboard[2] - inboard[3]
    # the joint carries what the upright's other members leave of the wrench
    joint = wrench[:3] - force[[0, 1, 4]].sum(axis=0)
    about = inboard[3]
    turning = np.cross(outboard[2] - about, joint) @ line
    rod = np.cross(outboard[5] - about, -force[5]) @ line

    assert turning + rod == pytest.approx(0.0, abs=1e-9)
    assert joint == pytest.approx(force[[2, 3, 5]].sum(axis=0), abs=1e-9)


@settings(max_examples=30, deadline=None)
@given(shifts, wrenches)
def test_a_rod_at_the_outer_joint_makes_two_bodies_the_six_links_again(shift: np.ndarray, wrench: np.ndarray) -> None:
    outboard, inboard = OUTBOARD + shift[0], INBOARD + shift[1]
    outboard[3] = outboard[5] = outboard[2]
    one = six_links(outboard, inboard, CENTRE)
    two = two_bodies(outboard, inboard, CENTRE, wishbone="lower")

    assert two.force @ wrench == pytest.approx(one.force @ wrench, abs=1e-9)
    assert two.tension @ wrench == pytest.approx(one.tension @ wrench, abs=1e-9)


def test_a_rod_along_the_wishbone_leaves_the_other_members_as_a_hand_sum_says() -> None:
    """Levers: with the rod half way up the wishbone, a square rod carries twice the joint's square force."""
    outboard = np.array([(0, 1, 1), (0, 1, 1), (0, 1, 0), (0, 1, 0), (0.5, 1, 0.5), (0, 0.5, 0)], dtype=float)
    inboard = np.array([(1, 0, 1), (-1, 0, 1), (1, 0, 0), (-1, 0, 0), (0.5, 0, 0.5), (0, 0.5, 1)], dtype=float)
    corner = two_bodies(outboard, inboard, (0, 1, 0.5), wishbone="lower")
    up = np.array((0, 0, 1.0, 0, 0, 0))  # through both outer joints

    assert corner.tension[5] @ up == pytest.approx(-2.0)
    assert (corner.force @ up)[2:4].sum(axis=0) == pytest.approx((0, 0, -1.0), abs=1e-12)


@settings(max_examples=40, deadline=None)
@given(shifts, wrenches)
def test_the_right_corner_is_the_mirror_image(shift: np.ndarray, wrench: np.ndarray) -> None:
    """Mirrored forces, and moments as axial vectors, give equal tensions and mirrored loads."""
    outboard, inboard = OUTBOARD + shift[0], INBOARD + shift[1]
    left = six_links(outboard, inboard, CENTRE)
    right = six_links(outboard * MIRROR, inboard * MIRROR, CENTRE * MIRROR)
    mirrored = wrench * np.concatenate([MIRROR, -MIRROR])

    assert right.tension @ mirrored == pytest.approx(left.tension @ wrench, abs=1e-9)
    assert right.force @ mirrored == pytest.approx((left.force @ wrench) * MIRROR, abs=1e-9)
    assert right.condition == pytest.approx(left.condition)


@settings(max_examples=40, deadline=None)
@given(shifts, wrenches, st.lists(st.floats(-3, 3), min_size=3, max_size=3).map(np.array))
def test_moving_the_whole_corner_changes_nothing(shift: np.ndarray, wrench: np.ndarray, move: np.ndarray) -> None:
    """Moments are taken about the wheel centre: tension and condition number do not depend on the car's origin."""
    outboard, inboard = OUTBOARD + shift[0], INBOARD + shift[1]
    here = six_links(outboard, inboard, CENTRE)
    there = six_links(outboard + move, inboard + move, CENTRE + move)

    assert there.tension @ wrench == pytest.approx(here.tension @ wrench, abs=1e-9)
    assert there.condition == pytest.approx(here.condition, rel=1e-9)


@settings(max_examples=40, deadline=None)
@given(shifts, st.floats(1e-3, 0.5))
def test_every_accepted_corner_is_within_its_condition_limit(shift: np.ndarray, flat: float) -> None:
    """Flattening the corner towards a plane is either solved well or refused, never solved badly."""
    outboard, inboard = OUTBOARD + shift[0], INBOARD + shift[1]
    middle = inboard[:, 2].mean()
    outboard[:, 2] = middle + flat * (outboard[:, 2] - middle)
    inboard[:, 2] = middle + flat * (inboard[:, 2] - middle)
    try:
        corner = six_links(outboard, inboard, CENTRE)
    except CaseError:
        assume(False)
    wrench = np.ones(6)

    assert net(corner, wrench, CENTRE) == pytest.approx(wrench, abs=1e-9)
    matrix = equilibrium_matrix(outboard, inboard, CENTRE)
    assert corner.condition == pytest.approx(np.linalg.cond(matrix), rel=1e-6)
    assert corner.condition <= 1e4
