"""Laws of rockers: the separate loads on the body add up to the rods, and the bar and the heave element stay inside."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from blockload.car.links import MIRROR
from blockload.car.rockers import RockerMap, rockers
from blockload.case.model import Rocker

ROD = (np.array((0.0, 0.69, 0.22)), np.array((0.06, 0.26, 0.50)))
ROCKER = Rocker(
    pivot=np.array((0.07, 0.20, 0.49)),
    axis=np.array((1.0, 0.12, 0.05)),
    spring=(np.array((0.08, 0.19, 0.56)), np.array((0.26, 0.06, 0.55))),
    bar_link=(np.array((0.06, 0.15, 0.51)), np.array((0.07, 0.16, 0.38))),
    bar_bearing_y=0.12,
    heave=np.array((0.06, 0.195, 0.57)),
)
shifts = st.lists(st.floats(-0.02, 0.02), min_size=24, max_size=24).map(lambda v: np.array(v).reshape(8, 3))
shares = st.floats(0.0, 1.0)
pulls = st.lists(st.floats(-1e4, 1e4), min_size=2, max_size=2).map(np.array)


def moved(shift: np.ndarray) -> Rocker:
    spring, bar = ROCKER.spring, ROCKER.bar_link
    assert spring is not None
    assert bar is not None
    assert ROCKER.heave is not None
    return replace(
        ROCKER,
        pivot=ROCKER.pivot + shift[0] / 2,
        axis=ROCKER.axis + 10 * shift[1],
        spring=(spring[0] + shift[2], spring[1] + shift[3]),
        bar_link=(bar[0] + shift[4], bar[1] + shift[5]),
        heave=ROCKER.heave + shift[6] / 2,
    )


def net(load: np.ndarray, at: np.ndarray) -> np.ndarray:
    force = load[:, :3]
    return np.concatenate([force.sum(axis=0), (np.cross(at, force) + load[:, 3:]).sum(axis=0)])


def rods(pull: np.ndarray) -> np.ndarray:
    """Force and moment of both rods on what holds their inboard ends."""
    line = (ROD[0] - ROD[1]) / np.linalg.norm(ROD[0] - ROD[1])
    at = np.array([ROD[1], ROD[1] * MIRROR])
    force = np.array([line * pull[0], line * MIRROR * pull[1]])
    return np.concatenate([force.sum(axis=0), np.cross(at, force).sum(axis=0)])


@settings(max_examples=80, deadline=None)
@given(shifts, shares, shares, pulls)
def test_the_point_loads_of_both_sides_add_up_to_the_rods(
    shift: np.ndarray, bar: float, heave: float, pull: np.ndarray
) -> None:
    """Force and moment, to 1e-9 of the pull, for any geometry, bar share, heave share and pair of rod forces."""
    result = rockers(moved(shift), ROD, bar_share=bar, heave_share=heave)

    assert net(result.load @ pull, result.at) == pytest.approx(rods(pull), abs=1e-9 * (1 + np.abs(pull).max()) * 10)


@settings(max_examples=40, deadline=None)
@given(shifts, shares, shares, pulls)
def test_the_pivot_takes_no_couple_about_its_axis(
    shift: np.ndarray, bar: float, heave: float, pull: np.ndarray
) -> None:
    given = moved(shift)
    result = rockers(given, ROD, bar_share=bar, heave_share=heave)
    axis = given.axis / np.linalg.norm(given.axis)
    for side, sign in ((0, np.ones(3)), (1, -MIRROR)):
        k = [n for n, name in enumerate(result.names) if name == "rocker_pivot" and result.side[n] == side]
        couple = result.load[k[0], 3:] @ pull
        assert couple @ (axis * sign) == pytest.approx(0.0, abs=1e-10 * (1 + np.abs(pull).max()))


def tension(result: RockerMap, member: str, pull: tuple[float, float]) -> np.ndarray:
    values: np.ndarray = result.tension[result.members.index(member)] @ np.array(pull)
    return values


def test_equal_rods_leave_the_bar_idle_and_opposite_rods_the_heave_element() -> None:
    result = rockers(ROCKER, ROD, bar_share=0.4, heave_share=0.3)

    assert tension(result, "bar_link", (1, 1)) == pytest.approx([0, 0])
    assert tension(result, "heave", (1, -1)) == pytest.approx([0, 0])
    assert tension(result, "bar_link", (1, -1)).sum() == pytest.approx(0)
    left, right = tension(result, "heave", (1.0, 0.3))
    assert left == pytest.approx(right), "one element has one tension"


def test_springs_and_bar_share_the_roll_torque_as_stated() -> None:
    """Opposite rods: without the bar the springs carry all of it, with it they carry one minus the bar's share."""
    alone = rockers(ROCKER, ROD, bar_share=0.0)
    shared = rockers(ROCKER, ROD, bar_share=0.4)
    all_bar = rockers(ROCKER, ROD, bar_share=1.0)

    assert tension(shared, "spring", (1, -1)) == pytest.approx(0.6 * tension(alone, "spring", (1, -1)))
    assert tension(shared, "spring", (1, 1)) == pytest.approx(tension(alone, "spring", (1, 1)))
    assert tension(all_bar, "spring", (1, -1)) == pytest.approx([0, 0])


def test_the_heave_element_loads_the_body_at_the_pivots_only_and_with_no_net_force() -> None:
    """Going from no heave element to one moves load from the springs to the pivots; the sum stays."""
    without = rockers(ROCKER, ROD, bar_share=0.4, heave_share=0.0)
    with_it = rockers(ROCKER, ROD, bar_share=0.4, heave_share=1.0)
    pull = np.array((1.0, 1.0))

    assert "heave" not in with_it.names, "it touches no body"
    change = (with_it.load - without.load) @ pull
    assert net(change, with_it.at) == pytest.approx(np.zeros(6), abs=1e-12)
    springs = [k for k, name in enumerate(with_it.names) if name == "spring"]
    assert (with_it.load @ pull)[springs] == pytest.approx(np.zeros((2, 6)), abs=1e-12)


def test_the_bar_has_no_net_force_without_side_thrust() -> None:
    """Upright drop links: the two bearings answer equally and oppositely, their couple that of the links."""
    bar = (np.array((0.06, 0.15, 0.51)), np.array((0.06, 0.15, 0.38)))
    result = rockers(replace(ROCKER, bar_link=bar), ROD, bar_share=0.4)
    pull = np.array((1000.0, -400.0))
    bearings = [k for k, name in enumerate(result.names) if name == "bar_bearing"]
    load, at = (result.load @ pull)[bearings], result.at[bearings]
    link = tension(result, "bar_link", (1000.0, -400.0))[0]

    assert load[:, :3].sum(axis=0) == pytest.approx(np.zeros(3), abs=1e-12)
    assert abs(net(load, at)[3]) == pytest.approx(2 * 0.15 * abs(link))


def test_mirrored_rods_give_mirrored_loads() -> None:
    result = rockers(ROCKER, ROD, bar_share=0.4, heave_share=0.3)
    signs = np.concatenate([MIRROR, -MIRROR])
    one, other = result.load @ np.array((900.0, 250.0)), result.load @ np.array((250.0, 900.0))
    for k, (name, side) in enumerate(zip(result.names, result.side, strict=True)):
        twin = next(
            j for j, (n, s) in enumerate(zip(result.names, result.side, strict=True)) if n == name and s == 1 - side
        )
        assert other[twin] == pytest.approx(one[k] * signs, abs=1e-9)
        assert result.at[twin] == pytest.approx(result.at[k] * MIRROR)
