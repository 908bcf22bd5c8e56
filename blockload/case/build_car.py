"""Axles and bodies: what is missing is bounded, estimated or asked; with [car] the tub is what is left."""

from __future__ import annotations

from typing import Any

import numpy as np

from ..arrays import Floats, frozen
from ..units import exact, show
from .model import Axle, Body, Face, Link, Rocker
from .notes import Notes
from .schema import CaseTable
from .schema_car import AxleTable, BodyTable, LinksTable

CORNER_SHARES = (0.025, 0.033, 0.045)
GEARBOX_SHARES = (0.08, 0.11, 0.14)
_SHARE_SOURCE = "unsourced: usual share of the car's mass"
ROLL_STIFFNESS = 250e3
TUB_HEIGHT, TUB_WIDTH = 0.6, 0.67
ENGINE_SECTION = (0.6, 0.55)
GEARBOX_SECTION = (0.7, 0.5)
WHEEL_WIDTH = 0.25


def build_car(table: CaseTable, faces: dict[str, Face], notes: Notes) -> tuple[dict[str, Body], dict[str, Axle]]:
    """Return the three bodies of the chain and the two axles."""
    rear_x = table.axles.rear.x
    if rear_x is None:
        remedy = "add x under [axles.rear]: minus the wheelbase, with the front axle at 0"
        notes.problem("axles.rear.x", "the wheelbase is not given", "1.5 m to 4 m behind the front axle", remedy)
        return {}, {}
    total = _total_mass(table)
    if total is None:
        remedy = "add [car] mass, front_weight_share and cg_height, or [bodies.tub] mass and cg"
        notes.problem("car.mass", "the car's total mass is not given", "[car], or [bodies.tub]", remedy)
        return {}, {}
    axles = {name: _axle(name, getattr(table.axles, name), total, notes) for name in ("front", "rear")}
    _roll_split(table, axles, notes)
    bodies = _bodies(table, axles, faces, total, notes)
    return bodies, axles


def _total_mass(table: CaseTable) -> float | None:
    if table.car is not None:
        return table.car.mass
    tub, engine, gearbox = table.bodies.tub, table.bodies.engine, table.bodies.gearbox
    if tub is None or tub.mass is None:
        return None
    chain = tub.mass + (engine.mass or 0.0 if engine else 0.0)
    share = 1.0
    if gearbox is not None and gearbox.mass is not None:
        chain += gearbox.mass
    else:
        share -= GEARBOX_SHARES[1]
    for axle in (table.axles.front, table.axles.rear):
        corner = axle.corner if axle is not None else None
        if corner is not None and corner.mass is not None:
            chain += 2.0 * corner.mass
        else:
            share -= 2.0 * CORNER_SHARES[1]
    return chain / share


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
        roll_stiffness=given.roll_stiffness if given and given.roll_stiffness is not None else ROLL_STIFFNESS,
        bar_share=bar_share if bar_share is not None else 0.4,
        carried_by=carrier,
        corner=corner,
        links=_links(links, carrier) if links is not None else {},
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
        mass = _bounded_mass(f"{prefix}.mass", CORNER_SHARES, total, notes)
    cg = corner.cg if corner is not None else None
    if cg is None:
        cg = frozen([x, track / 2.0, radius])
        notes.default(f"{prefix}.cg", _vector(cg, "m"), "geometry: the wheel centre")
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
        inertia = _estimated(
            f"{prefix}.inertia", frozen([side, mass * r2 / 2.0, side]), "a disc 0.75 of the wheel wide", notes
        )
    _check_inertia(f"{prefix}.inertia", inertia, notes)
    return Body(name=f"{name} corner", mass=mass, cg=cg, inertia=frozen(np.diag(inertia)), inertia_estimated=estimated)


def _bounded_mass(key: str, shares: tuple[float, float, float], total: float, notes: Notes) -> float:
    low, middle, high = (round(share * total, 1) for share in shares)
    notes.bound(key, (f"{low!r} kg", f"{middle!r} kg", f"{high!r} kg"), _SHARE_SOURCE)
    return middle


def _estimated(key: str, inertia: Floats, how: str, notes: Notes) -> Floats:
    rounded = frozen([float(f"{item:.4g}") for item in inertia])
    low, middle, high = (_vector(rounded * factor, "kg*m^2") for factor in (0.6, 1.0, 1.6))
    notes.bound(key, (low, middle, high), f"estimated from {how}, 0.6 and 1.6 times; unsourced")
    return rounded


def _vector(values: Floats, unit: str) -> str:
    return f"({', '.join(f'{float(item):.6g}' for item in values)}) {unit}"


def _check_inertia(key: str, moments: Floats, notes: Notes) -> None:
    ordered = np.sort(moments)
    if ordered[0] <= 0.0:
        notes.problem(
            key, f"{_vector(moments, 'kg*m^2')} has a moment that is not positive", "three above 0", "check the signs"
        )
    elif ordered[2] > ordered[0] + ordered[1] + 1e-9 * ordered[2]:
        found = (
            f"{_vector(moments, 'kg*m^2')} is no body's inertia: {ordered[2]:.4g} is more than the other two together"
        )
        notes.problem(key, found, "each principal moment at most the sum of the others", "check numbers and unit")


def _roll_split(table: CaseTable, axles: dict[str, Axle], notes: Notes) -> None:
    given = {
        name: item.roll_stiffness if item is not None else None
        for name, item in (("front", table.axles.front), ("rear", table.axles.rear))
    }
    if None not in given.values():
        return
    missing = "front" if given["front"] is None else "rear"
    other = "rear" if missing == "front" else "front"
    middle = given[other]
    if middle is None:
        middle = ROLL_STIFFNESS
        notes.default(f"axles.{other}.roll_stiffness", exact(middle, "kN*m/rad"), "unsourced; only the split matters")
    else:
        axles[missing] = _with_stiffness(axles[missing], middle)
    texts = tuple(f"{float(f'{middle * factor:.4g}')!r} N*m/rad" for factor in (2.0 / 3.0, 1.0, 1.5))
    low, mid, high = texts
    notes.bound(f"axles.{missing}.roll_stiffness", (low, mid, high), "roll split 40 to 60 %; unsourced")


def _with_stiffness(axle: Axle, stiffness: float) -> Axle:
    from dataclasses import replace

    return replace(axle, roll_stiffness=stiffness)


def _links(table: LinksTable, carrier: str) -> dict[str, Link]:
    links = {}
    for name in type(table).model_fields:
        item = getattr(table, name)
        links[name] = Link(
            name=name, outboard=item.outboard, inboard=item.inboard, carried_by=item.carried_by or carrier
        )
    return links


def _rocker(table: Any, prefix: str, notes: Notes) -> Rocker:
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
    return Rocker(pivot=table.pivot, axis=frozen(table.axis / length), bar_bearing_y=table.bar_bearing_y, **pairs)


def _bodies(
    table: CaseTable, axles: dict[str, Axle], faces: dict[str, Face], total: float, notes: Notes
) -> dict[str, Body]:
    engine = _engine(table.bodies.engine, faces, notes)
    gearbox = _gearbox(table.bodies.gearbox, axles["rear"], faces, total, notes)
    if engine is None:
        return {}
    tub = _tub(table, axles, engine, gearbox, notes)
    return {"tub": tub, "engine": engine, "gearbox": gearbox} if tub is not None else {}


def _engine(given: BodyTable | None, faces: dict[str, Face], notes: Notes) -> Body | None:
    if given is None or given.mass is None:
        remedy = 'add mass = "185 kg" under [bodies.engine], with the real figure'
        notes.problem("bodies.engine.mass", "the engine's mass is not given", "10 kg to 2500 kg", remedy)
        return None
    front, rear = faces["front"], faces["rear"]
    cg = given.cg
    if cg is None:
        heights = [stud.at[1] for face in (front, rear) for stud in face.studs]
        cg = frozen([(front.x + rear.x) / 2.0, 0.0, round(float(np.mean(heights)), 4) if heights else 0.3])
        notes.default(
            "bodies.engine.cg", _vector(cg, "m"), "geometry: middle of the faces and of their studs; unsourced"
        )
    elif not rear.x <= cg[0] <= front.x:
        found = f"the engine's CG (x = {show(float(cg[0]), 'm')}) is not between the faces"
        notes.problem("bodies.engine.cg", found, f"x from {rear.x:.4g} to {front.x:.4g} m", "check signs and axes")
    size = (front.x - rear.x, *ENGINE_SECTION)
    return _body("engine", given, given.mass, cg, size, notes)


def _gearbox(given: BodyTable | None, rear: Axle, faces: dict[str, Face], total: float, notes: Notes) -> Body:
    mass = given.mass if given is not None else None
    if mass is None:
        mass = _bounded_mass("bodies.gearbox.mass", GEARBOX_SHARES, total, notes)
    cg = given.cg if given is not None else None
    face = faces["rear"].x
    if cg is None:
        cg = frozen([(face + rear.x) / 2.0, 0.0, rear.loaded_radius])
        notes.default("bodies.gearbox.cg", _vector(cg, "m"), "geometry: halfway from rear face to rear axle; unsourced")
    size = (max(2.0 * abs(face - rear.x), 0.5), *GEARBOX_SECTION)
    return _body("gearbox", given, mass, cg, size, notes)


def _body(
    name: str, given: BodyTable | None, mass: float, cg: Floats, size: tuple[float, float, float], notes: Notes
) -> Body:
    inertia = given.inertia if given is not None else None
    estimated = inertia is None
    key = f"bodies.{name}.inertia"
    if inertia is None:
        squares = np.square(size)
        box = mass / 12.0 * (squares.sum() - squares)
        how = f"a box of {size[0]:.3g} x {size[1]:.3g} x {size[2]:.3g} m"
        inertia = _estimated(key, frozen(box), how, notes)
    _check_inertia(key, inertia, notes)
    return Body(name=name, mass=mass, cg=cg, inertia=frozen(np.diag(inertia)), inertia_estimated=estimated)


def _tub(table: CaseTable, axles: dict[str, Axle], engine: Body, gearbox: Body, notes: Notes) -> Body | None:
    given = table.bodies.tub
    wheelbase = axles["front"].x - axles["rear"].x
    size = (max(wheelbase, 0.1), TUB_WIDTH * axles["front"].track, TUB_HEIGHT)
    if given is not None and given.mass is not None and given.cg is not None:
        return _body("tub", given, given.mass, given.cg, size, notes)
    if table.car is None:
        absent = "mass" if given is None or given.mass is None else "cg"
        remedy = "add it, or give [car] mass, front_weight_share and cg_height instead"
        notes.problem(f"bodies.tub.{absent}", f"the tub's {absent} is not given", "[bodies.tub] or [car]", remedy)
        return None
    others = [(engine.mass, engine.cg), (gearbox.mass, gearbox.cg)]
    for axle in axles.values():
        others.append((2.0 * axle.corner.mass, axle.corner.cg * (1.0, 0.0, 1.0)))
    mass = table.car.mass - sum(item for item, _ in others)
    if mass <= 0.0:
        found = f"engine, gearbox and corners together weigh {show(table.car.mass - mass, 'kg')}, so nothing is left for the tub"
        notes.problem("car.mass", found, f"more than that (found {show(table.car.mass, 'kg')})", "check the masses")
        return None
    centre = np.array([-(1.0 - table.car.front_weight_share) * wheelbase, 0.0, table.car.cg_height])
    cg = (table.car.mass * centre - sum(item * at for item, at in others)) / mass
    if not (axles["rear"].x < cg[0] < 1.0 and 0.02 < cg[2] < 1.5 and abs(cg[1]) < 0.5):
        found = f"the tub that is left ({show(mass, 'kg')}) would have its CG at {_vector(cg, 'm')}, outside the car"
        remedy = "check mass, front_weight_share and cg_height against the engine's and gearbox's"
        notes.problem("car.front_weight_share", found, "a tub inside the car", remedy)
        return None
    source = "what [car] leaves after engine, gearbox and corners"
    notes.default("bodies.tub.mass", exact(round(float(mass), 6), "kg"), source)
    notes.default("bodies.tub.cg", _vector(cg, "m"), source)
    return _body("tub", given, float(mass), frozen(cg), size, notes)
