"""Axles: wheels, roll split, the left corner, its links and rocker; what is missing is bounded or defaulted."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace

import numpy as np

from ..arrays import Floats, frozen
from ..units import show
from .masses import CORNER_SHARES, bounded_mass, check_inertia, estimated_inertia, text_of
from .model import Axle, Body, Link, Rocker
from .notes import Notes
from .schema import CaseTable
from .schema_car import AxleTable, LinksTable, LinkTable, RockerTable
from .tables import Share

ROLL_STIFFNESS = 250e3
"""Roll stiffness of both axles where neither is given [N·m/rad]: only their ratio matters (unsourced)."""

ROLL_SHARES = ("40 %", "50 %", "60 %")
WHEEL_WIDTH = 0.25


def build_axles(table: CaseTable, total: float, notes: Notes) -> dict[str, Axle]:
    """Return both axles; `total` [kg] is the car's mass, given or estimated, for the bounds of missing corners."""
    axles = {name: _axle(name, getattr(table.axles, name), total, notes) for name in ("front", "rear")}
    return _with_roll_split(table, axles, notes)


def _axle(name: str, given: AxleTable | None, total: float, notes: Notes) -> Axle:
    prefix = f"axles.{name}"
    take = {
        key: notes.take(given, AxleTable, prefix, key)
        for key in ("track", "loaded_radius", "roll_centre_height", "brakes")
    }
    x = given.x if given is not None and given.x is not None else 0.0
    if name == "front" and abs(x) > 1e-3:
        remedy = "count x from the front axle, or state [frame] origin: where this file's zero lies in the car"
        notes.problem("axles.front.x", f"the front axle stands at x = {show(x, 'm')} of the car", "0 m", remedy)
    carrier = given.carried_by if given is not None else None
    if carrier is None:
        carrier = "tub" if name == "front" else "gearbox"
        notes.default(f"{prefix}.carried_by", carrier, "the usual chain: tub in front, gearbox behind")
    rocker = given.rocker if given is not None else None
    bar_share = notes.take(given, AxleTable, prefix, "bar_share") if rocker else (given.bar_share if given else None)
    corner = _corner(name, given, x, take["track"], take["loaded_radius"], total, notes)
    links = given.links if given is not None else None
    return Axle(
        name=name,
        x=x,
        roll_stiffness=ROLL_STIFFNESS,
        bar_share=bar_share if bar_share is not None else 0.4,
        carried_by=carrier,
        corner=corner,
        ride_height=given.ride_height if given is not None else None,
        ride_stiffness=given.ride_stiffness if given is not None else None,
        tyre_stiffness=given.tyre_stiffness if given is not None else None,
        links=_links(links, carrier, prefix, notes) if links is not None else {},
        rocker=_rocker(rocker, prefix, notes) if rocker is not None else None,
        **take,
    )


def _corner(
    name: str, given: AxleTable | None, x: float, track: float, radius: float, total: float, notes: Notes
) -> Body:
    prefix = f"axles.{name}.corner"
    corner = given.corner if given is not None else None
    mass = corner.mass if corner is not None else None
    if mass is None:
        mass = bounded_mass(f"{prefix}.mass", CORNER_SHARES, total, notes)
    cg = corner.cg if corner is not None else None
    if cg is None:
        cg = frozen([x, track / 2.0, radius])
        notes.default(f"{prefix}.cg", text_of(cg, "m"), "geometry: the wheel centre")
    elif cg[1] <= 0.0:
        allowed = "the left corner, y > 0; the right one is mirrored"
        notes.problem(
            f"{prefix}.cg", f"the corner's CG sits at y = {show(float(cg[1]), 'm')}", allowed, "check the sign"
        )
    inertia = corner.inertia if corner is not None else None
    estimated = inertia is None
    if inertia is None:
        r2, w2 = (0.75 * radius) ** 2, WHEEL_WIDTH**2
        side = mass * (r2 / 4.0 + w2 / 12.0)
        inertia = estimated_inertia(
            f"{prefix}.inertia", frozen([side, mass * r2 / 2.0, side]), "a disc 0.75 of the wheel wide", notes
        )
    check_inertia(f"{prefix}.inertia", inertia, notes)
    return Body(name=f"{name} corner", mass=mass, cg=cg, inertia=frozen(np.diag(inertia)), inertia_estimated=estimated)


def _with_roll_split(table: CaseTable, axles: Mapping[str, Axle], notes: Notes) -> dict[str, Axle]:
    """Return the axles with their roll stiffness; a percentage is that axle's share of both."""
    given = {name: item.roll_stiffness if (item := getattr(table.axles, name)) is not None else None for name in axles}
    if given["front"] is None and given["rear"] is None:
        notes.bound("axles.front.roll_stiffness", ROLL_SHARES, "front axle's share of both; unsourced")
        given["front"] = Share(0.5)
    elif None in given.values() and not any(isinstance(item, Share) for item in given.values()):
        missing = "front" if given["front"] is None else "rear"
        notes.bound(f"axles.{missing}.roll_stiffness", ROLL_SHARES, f"{missing} axle's share of both; unsourced")
        given[missing] = Share(0.5)
    shares = {name: item.value for name, item in given.items() if isinstance(item, Share)}
    if len(shares) == 2 and abs(sum(shares.values()) - 1.0) > 1e-6:
        notes.problem("axles.rear.roll_stiffness", "the two shares do not make 100 %", "100 %", "leave one of them out")
    if not shares:
        return {name: replace(axle, roll_stiffness=float(given[name] or 0.0)) for name, axle in axles.items()}
    name, share = next(iter(shares.items()))
    other = given["rear" if name == "front" else "front"]
    total = other / (1.0 - share) if isinstance(other, float) else 2.0 * ROLL_STIFFNESS
    return {
        key: replace(axle, roll_stiffness=(share if key == name else 1.0 - share) * total)
        for key, axle in axles.items()
    }


def _links(table: LinksTable, carrier: str, prefix: str, notes: Notes) -> dict[str, Link]:
    return {name: _link(name, getattr(table, name), carrier, prefix, notes) for name in type(table).model_fields}


def _link(name: str, item: LinkTable, carrier: str, prefix: str, notes: Notes) -> Link:
    key = f"{prefix}.links.{name}"
    if item.outboard[1] <= item.inboard[1]:
        found = f"the outboard end (y = {show(float(item.outboard[1]), 'm')}) is not outside the inboard end"
        notes.problem(
            key, found, "the left link: outboard y greater than inboard y", "check the signs, or swap the ends"
        )
    if float(np.linalg.norm(item.outboard - item.inboard)) < 0.01:
        notes.problem(key, "both ends are at one place", "a link longer than 10 mm", "correct one end")
    return Link(
        name=name,
        outboard=item.outboard,
        inboard=item.inboard,
        carried_by=item.carried_by or carrier,
        meets=item.meets or "upright",
        attachments=_pair(item.attachments, f"{key}.attachments", notes),
    )


def _pair(given: Sequence[str] | None, key: str, notes: Notes) -> tuple[str, str] | None:
    if given is None:
        return None
    if len(given) != 2:
        notes.problem(key, f"{len(given)} names are given", "two: left and right", "name both sides")
        return None
    return given[0], given[1]


def _rocker(table: RockerTable, prefix: str, notes: Notes) -> Rocker:
    pairs: dict[str, tuple[Floats, Floats] | None] = {}
    for name in ("spring", "bar_link"):
        ends = getattr(table, name)
        if ends is not None and len(ends) != 2:
            notes.problem(f"{prefix}.rocker.{name}", f"{len(ends)} points are given", "two: rocker end and far end")
            ends = None
        pairs[name] = (ends[0], ends[1]) if ends is not None else None
    length = float(np.linalg.norm(table.axis))
    if length == 0.0:
        notes.problem(f"{prefix}.rocker.axis", "the axis has no direction", "a direction such as [1, 0, 0]")
        length = 1.0
    return Rocker(
        pivot=table.pivot,
        axis=frozen(table.axis / length),
        spring=pairs["spring"],
        bar_link=pairs["bar_link"],
        bar_bearing_y=table.bar_bearing_y,
        heave=table.heave,
        heave_share=table.heave_share or 0.0,
        attachments=_pair(table.attachments, f"{prefix}.rocker.attachments", notes),
    )
