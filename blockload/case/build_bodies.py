"""The bodies of the chain: given, bounded or estimated; with [car] the tub is what is left."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from ..arrays import Floats, frozen
from ..units import exact, show
from .masses import CORNER_SHARES, GEARBOX_SHARES, bounded_mass, check_inertia, estimated_inertia, text_of
from .model import Axle, Body, Face
from .notes import Notes
from .schema import CaseTable
from .schema_car import BodyTable

ENGINE_CG_HEIGHT = 0.27
TUB_HEIGHT, TUB_WIDTH = 0.6, 0.67
ENGINE_SECTION = (0.6, 0.55)
GEARBOX_SECTION = (0.7, 0.5)
"""Boxes for missing inertias [m] (the tub's width as a share of the track): unsourced, told with every estimate."""


def total_mass(table: CaseTable, notes: Notes) -> float | None:
    """Return the car's mass [kg]: stated, or scaled up from tub and engine; None, with the reason noted, if neither.

    Only bounds of missing masses hang on the scaled value, so it uses nothing that may itself be bounded.
    """
    if table.car is not None:
        return table.car.mass
    tub, engine = table.bodies.tub, table.bodies.engine
    if tub is None or tub.mass is None:
        remedy = "add [car] mass, front_weight_share and cg_height, or [bodies.tub] mass and cg"
        notes.problem("car.mass", "the car's total mass is not given", "[car], or [bodies.tub]", remedy)
        return None
    known = tub.mass + (engine.mass if engine is not None and engine.mass is not None else 0.0)
    return known / (1.0 - GEARBOX_SHARES[1] - 4.0 * CORNER_SHARES[1])


def build_bodies(
    table: CaseTable, axles: Mapping[str, Axle], faces: Mapping[str, Face], total: float, notes: Notes
) -> dict[str, Body]:
    """Return tub, engine and gearbox; empty, with the reasons noted, where one cannot be built."""
    engine = _engine(table.bodies.engine, faces, notes)
    gearbox = _gearbox(table.bodies.gearbox, axles["rear"], faces, total, notes)
    if engine is None:
        return {}
    tub = _tub(table, axles, engine, gearbox, notes)
    return {"tub": tub, "engine": engine, "gearbox": gearbox} if tub is not None else {}


def _engine(given: BodyTable | None, faces: Mapping[str, Face], notes: Notes) -> Body | None:
    if given is None or given.mass is None:
        remedy = 'add mass = "185 kg" under [bodies.engine], with the real figure'
        notes.problem("bodies.engine.mass", "the engine's mass is not given", "10 kg to 2500 kg", remedy)
        return None
    front, rear = faces["front"], faces["rear"]
    cg = given.cg
    if cg is None:
        cg = frozen([(front.x + rear.x) / 2.0, 0.0, ENGINE_CG_HEIGHT])
        notes.default("bodies.engine.cg", text_of(cg, "m"), "halfway between the faces, 0.27 m high; unsourced")
    elif not rear.x <= cg[0] <= front.x:
        found = f"the engine's CG (x = {show(float(cg[0]), 'm')}) is not between the faces"
        notes.problem("bodies.engine.cg", found, f"x from {rear.x:.4g} to {front.x:.4g} m", "check signs and axes")
    size = (front.x - rear.x, *ENGINE_SECTION)
    return _body("engine", given, given.mass, cg, size, notes)


def _gearbox(given: BodyTable | None, rear: Axle, faces: Mapping[str, Face], total: float, notes: Notes) -> Body:
    mass = given.mass if given is not None else None
    if mass is None:
        mass = bounded_mass("bodies.gearbox.mass", GEARBOX_SHARES, total, notes)
    cg = given.cg if given is not None else None
    face = faces["rear"].x
    if cg is None:
        cg = frozen([(face + rear.x) / 2.0, 0.0, rear.loaded_radius])
        notes.default("bodies.gearbox.cg", text_of(cg, "m"), "geometry: halfway from rear face to rear axle; unsourced")
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
        inertia = estimated_inertia(key, frozen(box), how, notes)
    check_inertia(key, inertia, notes)
    return Body(name=name, mass=mass, cg=cg, inertia=frozen(np.diag(inertia)), inertia_estimated=estimated)


def _tub(table: CaseTable, axles: Mapping[str, Axle], engine: Body, gearbox: Body, notes: Notes) -> Body | None:
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
    if given is not None and (given.mass is not None or given.cg is not None):
        found = "only one of the tub's mass and cg is given beside [car]"
        notes.problem("bodies.tub", found, "both, or neither", "take it out: the tub is then what [car] leaves")
        return None
    others = [(body.mass, body.cg) for body in (engine, gearbox)]
    others += [(2.0 * axle.corner.mass, axle.corner.cg * (1.0, 0.0, 1.0)) for axle in axles.values()]
    mass = table.car.mass - sum(item for item, _ in others)
    if mass <= 0.0:
        weigh = show(table.car.mass - mass, "kg")
        found = f"engine, gearbox and corners together weigh {weigh}, so nothing is left for the tub"
        notes.problem("car.mass", found, f"more than that (found {show(table.car.mass, 'kg')})", "check the masses")
        return None
    centre = np.array([-(1.0 - table.car.front_weight_share) * wheelbase, 0.0, table.car.cg_height])
    cg = (table.car.mass * centre - sum(item * at for item, at in others)) / mass
    if not (axles["rear"].x < cg[0] < 1.0 and 0.02 < cg[2] < 1.5 and abs(cg[1]) < 0.5):
        found = f"the tub that is left ({show(mass, 'kg')}) would have its CG at {text_of(cg, 'm')}, outside the car"
        remedy = "check mass, front_weight_share and cg_height against the engine's and gearbox's"
        notes.problem("car.front_weight_share", found, "a tub inside the car", remedy)
        return None
    source = "what [car] leaves after engine, gearbox and corners"
    notes.default("bodies.tub.mass", exact(round(float(mass), 6), "kg"), source)
    notes.default("bodies.tub.cg", text_of(cg, "m"), source)
    return _body("tub", given, float(mass), frozen(cg), size, notes)
