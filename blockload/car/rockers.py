"""What a push or pull rod works on: rocker, spring, anti-roll bar and heave element, as separate loads on the body.

A rocker turns about its axis e through the pivot p. Each member k with line of action d_k through its rocker end r_k
has the lever l_k = ((r_k - p) x d_k) . e, and the torques of rod, spring, bar link and heave element cancel:
    f_P l_P + f_S l_S + f_B l_B + f_H l_H = 0        (tensions f, each pulling the rocker towards its far end).
The right rocker is the mirror image; e mirrors as an axial vector, so that the levers are the same on both sides. The
half sum of the two rods' torques goes to springs and heave element (`heave_share`), half their difference to springs
and bar (`bar_share`, the bar's part of the axle's elastic roll couple). The pivot takes what is left: a force, and a
couple square to e where members lie out of plane. The heave element pulls the rockers together, so the body sees it
at the two pivots only, equal and opposite.

The bar lies across the car in two bearings. Its drop links pull equally and oppositely, so it needs no torque from the
body, and the bearings answer the links with forces in proportion to their spacing; side thrust is shared equally. The
bearings are placed at the x and z of the bar-arm ends: their forces do not depend on the arm's length.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import Rocker
from ..errors import CaseError
from .links import MIRROR

_SHORTEST_LEVER = 1e-3  # m
_AXIAL = -MIRROR  # signs that mirror an axial vector


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class RockerMap:
    """Loads of an axle's two rockers on their body, linear in the tensions (2,) of the left and right rod.

    names (n,), side (n,): 0 left, 1 right; at (n, 3); load (n, 6, 2): force and moment about `at` per newton;
    tension (m, 2, 2): members (m,) spring, bar_link, heave, each left and right, per newton of left and right rod.
    """

    names: tuple[str, ...]
    side: tuple[int, ...]
    at: Floats
    load: Floats
    members: tuple[str, ...]
    tension: Floats


def rockers(
    rocker: Rocker,
    rod: tuple[Floats, Floats],
    *,
    bar_share: float,
    heave_share: float = 0.0,
    where: str = "rocker",
) -> RockerMap:
    """Split the forces of an axle's rods, `rod` = left (outboard, inboard) ends, over what the rockers meet.

    Raises CaseError for a member without a lever about the axis, or a share that has no member to take it.
    """
    _check_shares(rocker, bar_share, heave_share, where)
    axis = _unit(rocker.axis, f"{where}.axis")
    lines = _lines(rocker, rod, where)
    levers = {name: _lever(rocker.pivot, axis, start, line, f"{where}.{name}") for name, start, line in lines}
    tension = _tensions(levers, bar_share, heave_share)
    points = [load for side in (0, 1) for load in _side(rocker, lines, tension, side)]
    if rocker.bar_link is not None:
        points += _bearings(rocker, tension["bar_link"], where)
    names, sides, places, loads = zip(*points, strict=True)
    members = tuple(name for name, _, _ in lines if name != "pushrod")
    return RockerMap(
        names=names,
        side=sides,
        at=frozen(np.array(places)),
        load=frozen(np.array(loads)),
        members=members,
        tension=frozen(np.array([tension[name] for name in members])),
    )


def _lines(rocker: Rocker, rod: tuple[Floats, Floats], where: str) -> list[tuple[str, Floats, Floats]]:
    """Name, rocker end and direction of pull of every member on the left rocker."""
    pairs = [("pushrod", (rod[1], rod[0])), ("spring", rocker.spring), ("bar_link", rocker.bar_link)]
    if rocker.heave is not None:
        pairs.append(("heave", (rocker.heave, rocker.heave * MIRROR)))
    return [(name, pair[0], _unit(pair[1] - pair[0], f"{where}.{name}")) for name, pair in pairs if pair is not None]


def _tensions(levers: dict[str, float], bar_share: float, heave_share: float) -> dict[str, Floats]:
    """Tensions (2, 2) of each member, left and right, per newton in the left and right rod."""
    mean, difference = np.full((2, 2), 0.5), np.array([[0.5, -0.5], [-0.5, 0.5]])
    own = {
        "pushrod": -np.eye(2),
        "spring": (1.0 - heave_share) * mean + (1.0 - bar_share) * difference,
        "bar_link": bar_share * difference,
        "heave": heave_share * mean,
    }
    return {name: -levers["pushrod"] / lever * own[name] for name, lever in levers.items()}


def _side(
    rocker: Rocker, lines: list[tuple[str, Floats, Floats]], tension: dict[str, Floats], side: int
) -> list[tuple[str, int, Floats, Floats]]:
    """Pivot and spring loads of one side: name, side, place, load (6, 2)."""
    mirror, axial = (MIRROR, _AXIAL) if side else (np.ones(3), np.ones(3))
    pivot = np.zeros((6, 2))
    result = []
    for name, start, line in lines:
        per_newton = np.concatenate([line * mirror, np.cross(start - rocker.pivot, line) * axial])
        pivot += np.outer(per_newton, tension[name][side])
    result.append(("rocker_pivot", side, rocker.pivot * mirror, pivot))
    if rocker.spring is not None:
        start, far = rocker.spring
        line = _unit(far - start, "spring") * mirror
        load = np.zeros((6, 2))
        load[:3] = -np.outer(line, tension["spring"][side])
        result.append(("spring", side, far * mirror, load))
    return result


def _bearings(rocker: Rocker, tension: Floats, where: str) -> list[tuple[str, int, Floats, Floats]]:
    """Loads of the two bar bearings on the body: name, side, place, load (6, 2)."""
    if rocker.bar_link is None or rocker.bar_bearing_y is None or not rocker.bar_bearing_y > 0:
        found = "not given" if rocker.bar_bearing_y is None else f"{rocker.bar_bearing_y:g} m"
        remedy = "give it: the bar's bearings carry the drop links' couple"
        raise CaseError(f"{where}.bar_bearing_y", found, "the y of the left bearing, above 0", remedy)
    start, arm = rocker.bar_link
    pull = -_unit(arm - start, f"{where}.bar_link")  # of the drop link on the left bar arm
    left, right = np.outer(pull, tension[0]), np.outer(pull * MIRROR, tension[1])
    spread = arm[1] / rocker.bar_bearing_y
    half_sum, half_difference = (left + right) / 2, (left - right) / 2 * spread
    half_difference[1] = 0.0  # side thrust is shared equally
    place = np.array((arm[0], rocker.bar_bearing_y, arm[2]))
    none = np.zeros((3, 2))
    return [
        ("bar_bearing", 0, place, np.concatenate([half_sum + half_difference, none])),
        ("bar_bearing", 1, place * MIRROR, np.concatenate([half_sum - half_difference, none])),
    ]


def _lever(pivot: Floats, axis: Floats, start: Floats, line: Floats, where: str) -> float:
    lever = float(np.cross(start - pivot, line) @ axis)
    if abs(lever) < _SHORTEST_LEVER:
        raise CaseError(
            where,
            f"its line of action passes the rocker's axis at {round(1e3 * abs(lever), 6):g} mm",
            f"a lever of at least {1e3 * _SHORTEST_LEVER:g} mm",
            "check pivot, axis and both ends: with no lever the rocker is free to turn",
        )
    return lever


def _unit(vector: Floats, where: str) -> Floats:
    length = float(np.linalg.norm(vector))
    if not length > 0:
        raise CaseError(where, "has no direction", "two different ends, or an axis that is not zero")
    result: Floats = vector / length
    return result


def _check_shares(rocker: Rocker, bar_share: float, heave_share: float, where: str) -> None:
    if rocker.spring is None:
        found = "no spring: nothing holds the rocker"
        raise CaseError(f"{where}.spring", found, "rocker end and body end", "give both ends of the spring")
    for name, share in (("bar_share", bar_share), ("heave_share", heave_share)):
        if not 0.0 <= share <= 1.0:
            raise CaseError(f"{where}: {name}", f"{share:g}", "0 to 1")
    if bar_share > 0 and rocker.bar_link is None:
        raise CaseError(
            f"{where}.bar_link",
            f"not given, but {100 * bar_share:g} % of the axle's elastic roll couple is in the bar",
            "rocker end and bar-arm end",
            "give the drop link, or set bar_share = 0: a bar that meets no rocker is another load path",
        )
    if heave_share > 0 and rocker.heave is None:
        raise CaseError(f"{where}.heave", f"not given, with heave_share = {heave_share:g}", "its left rocker end")
