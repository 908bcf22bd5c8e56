"""The solids of a vee engine block, with their names, on netgen's geometry kernel [mm].

Only the meshing child process imports this. Everything is a prism along x, an upright prism, a tube or a body of
revolution, so that surfaces either coincide exactly or stand well apart. Cutters carry the names of the faces they
leave; faces that solids share are named after gluing.
"""

from __future__ import annotations

import math
from typing import Any

from netgen.occ import Glue

from .bosses import with_bosses, with_ribs
from .prisms import MM, OVERRUN, Frame, named
from .shape import SIDES, VeeShape


def build(shape: VeeShape) -> dict[str, Any]:
    """Return the solids by volume name."""
    frame = Frame(shape)
    solids = {"block": _block(frame), "sump": _sump(frame), "caps": _caps(frame)}
    for side in SIDES:
        solids[f"head_{side}"] = _head(frame, side)
    for name, solid in solids.items():
        solid.mat(name)
    return solids


def glued(solids: dict[str, Any], shape: VeeShape) -> Any:
    """Return the solids as one compound with conformal interfaces, the chamber roofs named."""
    compound = Glue(list(solids.values()))
    for side in SIDES:
        _name_chambers(compound, Frame(shape), side)
    return compound


def curved_radii(shape: VeeShape) -> dict[str, float]:
    """Return the radius that sets the element size of each curved face and pad, by the start of its name [mm].

    On bosses and pads it is larger than their own, but in thin castings follows the wall they run into.
    """
    radii = {"bore_": shape.bore, "main_": shape.main_bore, "nose_": shape.nose_bore, "tail_": shape.tail_bore}
    bosses = {f"boss_{pad.face}_{pad.name}": 2.0 * min(1.8 * pad.boss, 8.0 * shape.wall) for pad in shape.pads}
    pads = {f"pad_{pad.face}_{pad.name}": 3.0 * pad.radius for pad in shape.pads}
    return {name: MM * diameter / 2 for name, diameter in {**radii, **bosses, **pads}.items()}


def _block(frame: Frame) -> Any:
    s = frame.shape
    solid = with_ribs(frame, _block_outside(frame), "block")
    for chamber in _crank_chambers(frame):
        solid -= chamber
    half, wall = MM * s.bank_half_width, MM * s.wall
    foot, deck = MM * s.bore_end, MM * s.deck
    for side in SIDES:
        for bay in (0, -1):
            chest = frame.bays(s.bulkhead)[bay]
            solid -= frame.in_bank(side, (foot, deck - MM * s.deck_plate), (wall - half, half - wall), chest)
        for i, station in enumerate(s.bores(side), start=1):
            solid -= frame.bore(f"bore_{side[0].upper()}{i}", side, MM * station, (foot, deck + OVERRUN))
    solid = with_bosses(frame, solid, "block")
    for i, station in enumerate(s.mains, start=1):
        solid -= _cap_box(frame, station, MM * s.parting_z - OVERRUN)
        solid -= _main_bore(frame, i, station)
    solid -= frame.on_crank("nose_bore", frame.outside[0] - OVERRUN, frame.inside[0] + OVERRUN, s.nose_bore)
    return solid - frame.on_crank("tail_bore", frame.inside[1] - OVERRUN, frame.outside[1] + OVERRUN, s.tail_bore)


def _block_outside(frame: Frame) -> Any:
    """Crankcase with its flange and side ribs, two banks, and the floor of the valley between them."""
    s = frame.shape
    parting, shoulder, valley = MM * s.parting_z, MM * s.shoulder_z, MM * s.valley_z
    half, deck = MM * s.bank_half_width, MM * s.deck
    solid = frame.upright(frame.plan(0.0, *frame.outside), parting, shoulder)
    solid += frame.upright(frame.plan(-MM * s.flange, *frame.outside), parting, parting + MM * s.flange)
    for station in s.mains:
        start, stop = MM * (station - s.bulkhead / 2), MM * (station + s.bulkhead / 2)
        solid += frame.upright(frame.plan(-MM * s.side_rib, start, stop), parting, shoulder)
    for side in SIDES:
        solid += frame.in_bank(side, (0.1 * deck, deck), (-half, half), frame.outside)
    # the floor ends inside both banks
    (y0, z0), (y1, z1) = (frame.bank_point("left", along, 6.0 - half) for along in (0.5 * deck, 0.9 * deck))
    width = y0 + (y1 - y0) * (valley - z0) / (z1 - z0)
    section = [(-width, shoulder), (width, shoulder), (width, valley), (-width, valley)]
    return solid + frame.along_x(section, *frame.outside)


def _crank_chambers(frame: Frame) -> list[Any]:
    """One per bay: upright sides, eaves under the shoulders, a roof square to each bank, a flat top."""
    s = frame.shape
    wall, parting = MM * s.wall, MM * s.parting_z
    eave, top = MM * s.shoulder_z - wall, MM * s.chamber_top_z
    (y0, z0), (y1, z1) = (frame.bank_point("left", MM * s.chamber_roof, across) for across in (0.0, 10.0))
    slope = (y1 - y0) / (z1 - z0)
    outer, inner = y0 + slope * (eave - z0), y0 + slope * (top - z0)
    wide = MM * max(s.skirt_front, s.skirt_rear)
    half = [(wide, parting - OVERRUN), (wide, eave), (outer, eave), (inner, top)]
    section = half + [(-y, z) for y, z in reversed(half)]
    plan = frame.upright(frame.plan(wall, 0.0, frame.length), parting - 2 * OVERRUN, top + 2 * OVERRUN)
    return [frame.along_x(section, *bay) * plan for bay in frame.bays(s.bulkhead)]


def _cap_box(frame: Frame, station: float, bottom: float) -> Any:
    y, half = MM * frame.shape.cap_half_width, MM * frame.shape.bulkhead / 2
    section = [(-y, bottom), (y, bottom), (y, frame.crank), (-y, frame.crank)]
    return frame.along_x(section, MM * station - half, MM * station + half)


def _main_bore(frame: Frame, number: int, station: float) -> Any:
    half = MM * frame.shape.bulkhead / 2 + OVERRUN
    return frame.on_crank(f"main_{number}", MM * station - half, MM * station + half, frame.shape.main_bore)


def _caps(frame: Frame) -> Any:
    bottom = frame.crank - MM * frame.shape.cap_depth
    caps = None
    for i, station in enumerate(frame.shape.mains, start=1):
        cap = _cap_box(frame, station, bottom) - _main_bore(frame, i, station)
        caps = cap if caps is None else caps + cap
    return caps


def _sump(frame: Frame) -> Any:
    s = frame.shape
    bottom, parting, flange = MM * s.sump_z, MM * s.parting_z, MM * s.flange
    solid = frame.upright(frame.plan(0.0, *frame.outside), bottom, parting)
    solid += frame.upright(frame.plan(-flange, *frame.outside), parting - flange, parting)
    solid = with_ribs(frame, solid, "sump")
    floor = bottom + MM * s.sump_floor
    cavity = frame.upright(frame.plan(MM * s.wall, *frame.inside), floor, parting + OVERRUN)
    for station in s.mains[1:-1]:
        start, stop = MM * (station - s.sump_rib / 2), MM * (station + s.sump_rib / 2)
        cavity -= frame.upright(frame.plan(-OVERRUN, start, stop), floor - OVERRUN, MM * s.sump_rib_z)
    return with_bosses(frame, solid - cavity, "sump")


def _head(frame: Frame, side: str) -> Any:
    """A foot as wide as the bank, a wider cam box with one bevelled corner, hollow between cam walls, ports."""
    s = frame.shape
    half, foot, wall = MM * s.head_half_width, MM * s.bank_half_width, MM * s.head_wall
    deck, top, waist = MM * s.deck, MM * (s.deck + s.head_height), MM * (s.deck + s.cam_floor)
    step, cut = waist - (half - foot), MM * s.cam_chamfer
    outline = [(deck, foot), (step, foot), (waist, half), (top - cut, half), (top, half - cut)]
    outline += [(top, -half), (waist, -half), (step, -foot), (deck, -foot)]
    solid = with_ribs(frame, frame.along_bank(side, outline, frame.outside), f"head_{side}")
    # inside, the bevel is shorter: it keeps the wall's thickness
    bevel = cut - wall * (2 - math.sqrt(2))
    hollow = [(waist, half - wall), (top - wall - bevel, half - wall), (top - wall, half - wall - bevel)]
    hollow += [(top - wall, wall - half), (waist, wall - half)]
    for bay in frame.bays(s.cam_wall):
        solid -= frame.along_bank(side, hollow, bay)
    centre, tall, wide = deck + MM * s.port_at, MM * s.port_tall / 2, MM * s.port_wide / 2
    along, inner = (centre - tall, centre + tall), foot - MM * s.port_depth
    for station in s.bores(side):
        stations = (MM * station - wide, MM * station + wide)
        solid -= named(frame.in_bank(side, along, (-half - OVERRUN, -inner), stations), f"head_{side}_intake")
        solid -= named(frame.in_bank(side, along, (inner, half + OVERRUN), stations), f"head_{side}_exhaust")
    return with_bosses(frame, solid, f"head_{side}")


def _name_chambers(compound: Any, frame: Frame, side: str) -> None:
    shape = frame.shape
    area = math.pi * (MM * shape.bore / 2) ** 2
    y, z = frame.bank_point(side, MM * shape.deck, 0.0)
    for i, station in enumerate(shape.bores(side), start=1):
        centre = (frame.front - MM * station, y, z)
        for face in compound.faces:
            close = math.dist((face.center.x, face.center.y, face.center.z), centre) < 0.5
            if close and abs(face.mass / area - 1) < 1e-3:
                face.name = f"chamber_{side[0].upper()}{i}"
