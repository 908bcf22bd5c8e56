"""How each axle hands the wrenches on its two corners to the bodies, as one linear map.

Without links a corner acts on its carrier as one wrench at the wheel centre. With links each inboard end is a point
load on its own body; behind a rocker the rod's point load gives way to those of pivots, springs and bar bearings, whose
sum over both sides is the sum of the two rods. All maps are fixed by the geometry: any number of load cases and sources
is one matrix product.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from types import MappingProxyType

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import CARRIERS, CORNERS, Axle, Case
from ..errors import CaseError
from .bodies import AXLES, Chassis
from .links import CONDITION_USUAL, MIRROR, CornerMap, ends, six_links
from .model import LinkLoads
from .rockers import RockerMap, rockers
from .twobody import two_bodies
from .wrench import moved, sealed


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class PickUp:
    """One place where an axle's corners load a body.

    corner (0 to 3) names its side; body indexes CARRIERS; load (6, 2, 6) is force and moment about `at` (3,) on the
    body from the wrenches on the left and right corner about their wheel centres.
    """

    name: str
    corner: int
    body: int
    at: Floats
    load: Floats
    attachment: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class AxleMap:
    """Pick-ups of an axle; on_bodies (3, 6, 2, 6): their sum on tub, engine and gearbox about the origin.

    sides: the six links left and right, empty without links; members, tension (2, n, 2, 6): tension of all two-force
    members of each side (links, then spring, bar_link and heave behind a rocker).
    """

    pickups: tuple[PickUp, ...]
    on_bodies: Floats
    sides: tuple[CornerMap, ...]
    members: tuple[str, ...]
    tension: Floats


def axle_maps(case: Case, frame: Chassis) -> tuple[AxleMap, AxleMap]:
    """Maps of the front and the rear axle."""
    front, rear = (_axle_map(case.axles[name], frame, 2 * k) for k, name in enumerate(AXLES))
    return front, rear


def corner_wrenches(frame: Chassis, resultant: Floats) -> Floats:
    """Wrenches (..., 4, 6) on the corners about their wheel centres, from those about the origin."""
    return moved(resultant, frame.wheel_centre)


def body_wrenches(maps: tuple[AxleMap, AxleMap], wrenches: Floats) -> Floats:
    """Loads (..., 3, 6) on tub, engine and gearbox about the origin, from `corner_wrenches` (..., 4, 6)."""
    flat = wrenches.reshape(*wrenches.shape[:-2], 24)
    both = np.concatenate([axle.on_bodies.reshape(18, 12) for axle in maps], axis=1)
    result: Floats = (flat @ both.T).reshape(*flat.shape[:-1], 3, 6)
    return result


def pickup_load(pickup: PickUp, wrenches: Floats) -> Floats:
    """Force and moment (..., 6) of one pick-up about its place, from `corner_wrenches` (..., 4, 6)."""
    first = 2 * (pickup.corner // 2)
    axle = wrenches[..., first : first + 2, :].reshape(*wrenches.shape[:-2], 12)
    result: Floats = axle @ pickup.load.reshape(6, 12).T
    return result


def link_loads(maps: tuple[AxleMap, AxleMap], wrenches: Floats) -> MappingProxyType[str, LinkLoads]:
    """Tensions by corner, from `corner_wrenches` (C, S, 4, 6); only axles with links are in it."""
    result = {}
    for k, axle in enumerate(maps):
        pair = wrenches[..., 2 * k : 2 * k + 2, :].reshape(*wrenches.shape[:-2], 12)
        for side, corner in enumerate(axle.sides):
            tension = pair @ axle.tension[side].reshape(-1, 12).T
            result[CORNERS[2 * k + side]] = LinkLoads(
                names=axle.members, tension=sealed(tension), condition=corner.condition, weakest=corner.weakest
            )
    return MappingProxyType(result)


def condition_notes(links: Mapping[str, LinkLoads]) -> Iterator[str]:
    """Sentences on corners that are solved, but held less well than usual."""
    for corner, loads in links.items():
        if loads.condition > CONDITION_USUAL:
            yield (
                f"{corner}: condition number {loads.condition:.3g} (usual: about 20): the wheel is weakly held by "
                f"{', '.join(loads.weakest)}, and small errors of their points move the tensions much"
            )


def _axle_map(axle: Axle, frame: Chassis, first: int) -> AxleMap:
    centres = frame.wheel_centre[first : first + 2]
    if not axle.links:
        return _without_links(centres, frame.carrier[first], first)
    sides = _sides(axle, centres)
    rocker = _rocker(axle)
    pickups = _pickups(axle, sides, rocker, first)
    names = sides[0].names if rocker is None else (*sides[0].names, *rocker.members)
    return AxleMap(
        pickups=pickups,
        on_bodies=_on_bodies(pickups),
        sides=sides,
        members=names,
        tension=frozen(_tension(sides, rocker)),
    )


def _without_links(centres: Floats, carrier: int, first: int) -> AxleMap:
    pickups = []
    for side in (0, 1):
        load = np.zeros((6, 2, 6))
        load[:, side] = np.eye(6)
        corner = first + side
        name = f"corner.{CORNERS[corner]}"
        pickups.append(PickUp(name=name, corner=corner, body=carrier, at=frozen(centres[side]), load=frozen(load)))
    return AxleMap(
        pickups=tuple(pickups),
        on_bodies=_on_bodies(tuple(pickups)),
        sides=(),
        members=(),
        tension=np.zeros((2, 0, 2, 6)),
    )


def _sides(axle: Axle, centres: Floats) -> tuple[CornerMap, CornerMap]:
    where = f"[axles.{axle.name}.links]"
    outboard, inboard = ends(axle.links, where)
    meets = axle.links["pushrod"].meets
    result = []
    for signs, centre in zip((np.ones(3), MIRROR), centres, strict=True):
        if meets == "upright":
            result.append(six_links(outboard * signs, inboard * signs, centre, where=where))
        else:
            result.append(two_bodies(outboard * signs, inboard * signs, centre, wishbone=meets, where=where))
    return result[0], result[1]


def _rocker(axle: Axle) -> RockerMap | None:
    if axle.rocker is None:
        return None
    rod = axle.links["pushrod"]
    return rockers(
        axle.rocker,
        (rod.outboard, rod.inboard),
        bar_share=axle.bar_share,
        heave_share=axle.rocker.heave_share,
        where=f"[axles.{axle.name}.rocker]",
    )


def _pickups(
    axle: Axle, sides: tuple[CornerMap, CornerMap], rocker: RockerMap | None, first: int
) -> tuple[PickUp, ...]:
    result = []
    for side, corner in enumerate(sides):
        for j, name in enumerate(corner.names):
            if rocker is not None and name == "pushrod":
                continue
            link = axle.links[name]
            load = np.zeros((6, 2, 6))
            load[:3, side] = corner.force[j]
            result.append(_pickup(axle, name, first + side, link.carried_by, corner.inboard[j], load, link.attachments))
    if rocker is not None and axle.rocker is not None:
        carrier = axle.links["pushrod"].carried_by
        rods = _rods(sides)
        for name, side, at, per_newton in zip(rocker.names, rocker.side, rocker.at, rocker.load, strict=True):
            load = np.einsum("ir,rsk->isk", per_newton, rods)
            result.append(_pickup(axle, name, first + side, carrier, at, load, axle.rocker.attachments))
    return tuple(result)


def _pickup(
    axle: Axle, name: str, corner: int, carrier: str, at: Floats, load: Floats, attachments: tuple[str, str] | None
) -> PickUp:
    if carrier not in CARRIERS:
        raise CaseError(f"[axles.{axle.name}.links.{name}] carried_by", repr(carrier), ", ".join(CARRIERS))
    return PickUp(
        name=f"{name}.{CORNERS[corner]}",
        corner=corner,
        body=CARRIERS.index(carrier),
        at=frozen(at),
        load=frozen(load),
        attachment=None if attachments is None else attachments[corner % 2],
    )


def _rods(sides: tuple[CornerMap, CornerMap]) -> Floats:
    """Tensions of the left and right rod, (2, 2, 6), from the wrenches on the two corners."""
    result = np.zeros((2, 2, 6))
    for side, corner in enumerate(sides):
        result[side, side] = corner.tension[corner.names.index("pushrod")]
    return result


def _tension(sides: tuple[CornerMap, CornerMap], rocker: RockerMap | None) -> Floats:
    """Tensions (2, n, 2, 6) of all members."""
    links = np.zeros((2, len(sides[0].names), 2, 6))
    for side, corner in enumerate(sides):
        links[side, :, side] = corner.tension
    if rocker is None:
        return links
    behind = np.einsum("mtr,rsk->tmsk", rocker.tension, _rods(sides))
    return np.concatenate([links, behind], axis=1)


def _on_bodies(pickups: tuple[PickUp, ...]) -> Floats:
    """Sum (3, 6, 2, 6) of pick-ups on each body, about the origin."""
    result = np.zeros((len(CARRIERS), 6, 2, 6))
    for pickup in pickups:
        per_column = moved(pickup.load.reshape(6, 12).T, (0.0, 0.0, 0.0), pickup.at)
        result[pickup.body] += per_column.T.reshape(6, 2, 6)
    return frozen(result)
