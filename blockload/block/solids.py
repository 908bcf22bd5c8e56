"""The solids of a vee engine block, with their names, on netgen's geometry kernel [mm].

Only the meshing child process imports this. Everything is a prism along x, a prism in the bank's section, or a body of
revolution, so that surfaces either coincide exactly or stand well apart. Cutters carry the names of the faces they
leave; faces that are shared between solids are named after gluing.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from typing import Any

from netgen.occ import Axes, Axis, Cylinder, Dir, Glue, Pnt, Vec, WorkPlane

from .shape import SIDES, PadShape, VeeShape

MM = 1e3
Point = tuple[float, float]


class VeeSolids:
    """Builds the named solids of one shape; all methods take and return millimetres."""

    def __init__(self, shape: VeeShape) -> None:
        self.shape = shape
        self.front = MM * shape.front_x
        self.length = MM * shape.length
        self.crank = MM * shape.crank_z
        self.inner_front = MM * (shape.recess + shape.end_wall)
        self.inner_rear = self.length - self.inner_front
        self.outer_front = MM * shape.recess
        self.outer_rear = self.length - self.outer_front

    def build(self) -> dict[str, Any]:
        """Return the solids by volume name."""
        solids = {"block": self._block(), "sump": self._sump(), "caps": self._caps()}
        for side in SIDES:
            solids[f"head_{side}"] = self._head(side)
        for name, solid in solids.items():
            solid.mat(name)
        return solids

    # --- prisms -----------------------------------------------------------------------------------------------

    def along_x(self, section: Sequence[Point], start: float, stop: float) -> Any:
        """Return a (y, z) polygon extruded from one station to another."""
        plane = WorkPlane(Axes((self.front - start, 0, 0), n=Dir(-1, 0, 0), h=Dir(0, 1, 0)))
        return _face(plane, [(y, -z) for y, z in section]).Extrude(Vec(start - stop, 0, 0))

    def upright(self, plan: Sequence[Point], bottom: float, top: float) -> Any:
        """Return a (station, y) polygon extruded from one height to another."""
        plane = WorkPlane(Axes((0, 0, bottom), n=Dir(0, 0, 1), h=Dir(1, 0, 0)))
        return _face(plane, [(self.front - s, y) for s, y in plan]).Extrude(Vec(0, 0, top - bottom))

    def in_bank(self, side: str, along: Point, across: Point, stations: Point) -> Any:
        """Return a box in a bank's own axes."""
        corners = [(along[0], across[0]), (along[1], across[0]), (along[1], across[1]), (along[0], across[1])]
        return self.along_x([self.bank_point(side, a, c) for a, c in corners], *stations)

    def bank_point(self, side: str, along: float, across: float) -> Point:
        """Return (y, z) of a point given in a bank's axes."""
        (ay, az), (cy, cz) = self.shape.bank_axes(side)
        return along * ay + across * cy, self.crank + along * az + across * cz

    def bore_cylinder(self, name: str, side: str, station: float, along: Point) -> Any:
        """Return a cylinder on a bore's axis, its round face named."""
        (ay, az), _ = self.shape.bank_axes(side)
        y, z = self.bank_point(side, along[0], 0.0)
        start = (self.front - station, y, z)
        return _tube(name, start, (0.0, ay, az), MM * self.shape.bore / 2, along[1] - along[0])

    def crank_cylinder(self, name: str, start: float, stop: float, diameter: float) -> Any:
        """Return a cylinder on the crank axis between two stations, its round face named."""
        return _tube(name, (self.front - start, 0.0, self.crank), (-1.0, 0.0, 0.0), MM * diameter / 2, stop - start)

    def trapezoid(self, inset: float, start: float, stop: float) -> list[Point]:
        """Return the plan of crankcase and sump, moved inward by `inset`."""
        widths = [MM * self.shape.skirt(station / MM) - inset for station in (start, stop)]
        return [(start, widths[0]), (stop, widths[1]), (stop, -widths[1]), (start, -widths[0])]

    # --- volumes ----------------------------------------------------------------------------------------------

    def _block(self) -> Any:
        s = self.shape
        parting, shoulder, valley = MM * s.parting_z, MM * s.shoulder_z, MM * s.valley_z
        half, deck, wall = MM * s.bank_half_width, MM * s.deck, MM * s.wall
        front, rear = self.outer_front, self.outer_rear
        solid = self.upright(self.trapezoid(0.0, front, rear), parting, shoulder)
        solid += self.upright(self.trapezoid(-MM * s.flange, front, rear), parting, parting + MM * s.flange)
        for station in s.mains:
            start, stop = MM * (station - s.bulkhead / 2), MM * (station + s.bulkhead / 2)
            solid += self.upright(self.trapezoid(-MM * s.side_rib, start, stop), parting, shoulder)
        for side in SIDES:
            solid += self.in_bank(side, (0.1 * deck, deck), (-half, half), (front, rear))
        inside = half - 6.0
        (y0, z0), (y1, z1) = (self.bank_point("left", a, -inside) for a in (0.5 * deck, 0.9 * deck))
        width = y0 + (y1 - y0) * (valley - z0) / (z1 - z0)
        solid += self.along_x([(-width, shoulder), (width, shoulder), (width, valley), (-width, valley)], front, rear)
        solid = self._with_ribs(solid, "block")
        for cavity in self._crank_chambers():
            solid -= cavity
        for side in SIDES:
            for bay in (0, -1):
                chest = self._bays(MM * s.bulkhead)[bay]
                solid -= self.in_bank(side, (MM * s.bore_end, deck - 12), (wall - half, half - wall), chest)
            for i, station in enumerate(s.bores(side), start=1):
                name = f"bore_{side[0].upper()}{i}"
                solid -= self.bore_cylinder(name, side, MM * station, (MM * s.bore_end, deck + 5))
        solid = self._with_bosses(solid, "block")
        for i, station in enumerate(s.mains, start=1):
            solid -= self._cap_box(station, MM * s.parting_z - 5.0)
            solid -= self._main_bore(i, station)
        solid -= self.crank_cylinder("nose_bore", front - 5, self.inner_front + 5, s.nose_bore)
        return solid - self.crank_cylinder("tail_bore", self.inner_rear - 5, rear + 5, s.tail_bore)

    def _caps(self) -> Any:
        caps = None
        for i, station in enumerate(self.shape.mains, start=1):
            bottom = self.crank - MM * self.shape.cap_depth
            cap = self._cap_box(station, bottom) - self._main_bore(i, station)
            caps = cap if caps is None else caps + cap
        return caps

    def _sump(self) -> Any:
        s = self.shape
        bottom, parting, wall = MM * s.sump_z, MM * s.parting_z, MM * s.wall
        front, rear = self.outer_front, self.outer_rear
        solid = self.upright(self.trapezoid(0.0, front, rear), bottom, parting)
        solid += self.upright(self.trapezoid(-MM * s.flange, front, rear), parting - MM * s.flange, parting)
        solid = self._with_ribs(solid, "sump")
        floor = bottom + MM * s.sump_floor
        cavity = self.upright(self.trapezoid(wall, self.inner_front, self.inner_rear), floor, parting + 5)
        for station in s.mains[1:-1]:
            start, stop = MM * (station - s.sump_rib / 2), MM * (station + s.sump_rib / 2)
            cavity -= self.upright(self.trapezoid(-5.0, start, stop), floor - 5, MM * s.sump_rib_z)
        return self._with_bosses(solid - cavity, "sump")

    def _head(self, side: str) -> Any:
        s = self.shape
        half, deck, top = MM * s.head_half_width, MM * s.deck, MM * (s.deck + s.head_height)
        wall = MM * s.head_wall
        foot = MM * s.bank_half_width
        waist = deck + MM * s.cam_floor
        step = waist - (half - foot)
        cut = MM * s.cam_chamfer
        outline = [(deck, foot), (step, foot), (waist, half), (top - cut, half), (top, half - cut)]
        outline += [(top, -half), (waist, -half), (step, -foot), (deck, -foot)]
        solid = self.along_x([self.bank_point(side, *p) for p in outline], self.outer_front, self.outer_rear)
        solid = self._with_ribs(solid, f"head_{side}")
        # the chamfer keeps the wall's thickness: its offset moves its ends by wall (√2 − 1)
        bevel = cut - wall * (2 - math.sqrt(2))
        hollow = [(waist, half - wall), (top - wall - bevel, half - wall), (top - wall, half - wall - bevel)]
        hollow += [(top - wall, wall - half), (waist, wall - half)]
        for stations in self._between_cam_walls():
            solid -= self.along_x([self.bank_point(side, *p) for p in hollow], *stations)
        centre, tall, wide = deck + MM * s.port_at, MM * s.port_tall / 2, MM * s.port_wide / 2
        inner = foot - MM * s.port_depth
        for station in s.bores(side):
            along, stations = (centre - tall, centre + tall), (MM * station - wide, MM * station + wide)
            solid -= _named(self.in_bank(side, along, (-half - 5, -inner), stations), f"head_{side}_intake")
            solid -= _named(self.in_bank(side, along, (inner, half + 5), stations), f"head_{side}_exhaust")
        return self._with_bosses(solid, f"head_{side}")

    # --- parts ------------------------------------------------------------------------------------------------

    def _bays(self, thickness: float) -> list[Point]:
        """Return the station ranges between the end walls and cross walls of this thickness at the mains."""
        edges = [self.inner_front]
        for main in self.shape.mains:
            edges += [MM * main - thickness / 2, MM * main + thickness / 2]
        edges.append(self.inner_rear)
        return list(zip(edges[::2], edges[1::2], strict=True))

    def _between_cam_walls(self) -> list[Point]:
        return self._bays(MM * self.shape.cam_wall)

    def _crank_chambers(self) -> list[Any]:
        s = self.shape
        wall, parting = MM * s.wall, MM * s.parting_z
        eave, top = MM * s.shoulder_z - wall, MM * s.chamber_top_z
        (y0, z0), (y1, z1) = (self.bank_point("left", MM * s.chamber_roof, c) for c in (0.0, 10.0))
        slope = (y1 - y0) / (z1 - z0)
        outer, inner = y0 + slope * (eave - z0), y0 + slope * (top - z0)
        wide = MM * max(s.skirt_front, s.skirt_rear)
        half = [(wide, parting - 5), (wide, eave), (outer, eave), (inner, top)]
        section = half + [(-y, z) for y, z in reversed(half)]
        plan = self.upright(self.trapezoid(wall, 0.0, self.length), parting - 10, top + 10)
        return [self.along_x(section, *bay) * plan for bay in self._bays(MM * s.bulkhead)]

    def _cap_box(self, station: float, bottom: float) -> Any:
        s = self.shape
        y, half = MM * s.cap_half_width, MM * s.bulkhead / 2
        section = [(-y, bottom), (y, bottom), (y, self.crank), (-y, self.crank)]
        return self.along_x(section, MM * station - half, MM * station + half)

    def _main_bore(self, number: int, station: float) -> Any:
        half = MM * self.shape.bulkhead / 2 + 5.0
        start, stop = MM * station - half, MM * station + half
        return self.crank_cylinder(f"main_{number}", start, stop, self.shape.main_bore)

    def _with_ribs(self, solid: Any, volume: str) -> Any:
        for pad in self.shape.pads:
            if pad.volume == volume and pad.rib is not None:
                solid += self._rib(pad)
        return solid

    def _with_bosses(self, solid: Any, volume: str) -> Any:
        for pad in self.shape.pads:
            if pad.volume == volume:
                solid += self._boss(pad)
        return solid

    def _inward(self, pad: PadShape) -> tuple[float, float]:
        """Return x of the pad's face plane and the sign of the way into the block."""
        return (self.front, -1.0) if pad.face == "front" else (self.front - self.length, 1.0)

    def _boss(self, pad: PadShape) -> Any:
        x, into = self._inward(pad)
        y, z = (MM * value for value in pad.at)
        profile = [(0.0, 0.0), (0.0, pad.radius), (pad.column, pad.boss), (pad.depth, pad.tail), (pad.depth, 0.0)]
        plane = WorkPlane(Axes((x, y, z), n=Dir(0, 0, -into), h=Dir(into, 0, 0)))
        boss = _face(plane, [(MM * d, MM * r) for d, r in profile]).Revolve(Axis((x, y, z), Dir(1, 0, 0)), 360)
        for face in boss.faces:
            on_plane = abs(face.center.x - x) < 1e-6
            face.name = f"pad_{pad.face}_{pad.name}" if on_plane else f"boss_{pad.face}_{pad.name}"
        return boss

    def _rib(self, pad: PadShape) -> Any:
        rib = pad.rib
        if rib is None:
            raise ValueError("a pad without a rib")
        x, into = self._inward(pad)
        size = math.hypot(*rib.toward)
        ty, tz = (value / size for value in rib.toward)
        y, z = (MM * value for value in pad.at)
        half = MM * rib.thickness / 2
        normal = (0.0, -tz, ty)
        start = Pnt(x, y - half * normal[1], z - half * normal[2])
        plane = WorkPlane(Axes(start, n=Dir(*normal), h=Dir(into, 0, 0)))
        begin = self.outer_front + 6.0
        corners = [(begin, -MM * rib.above), (begin, MM * rib.reach), (MM * rib.length, MM * rib.reach)]
        # the plane's second axis, normal × h, is `toward` times `into`
        face = _face(plane, [(d, into * r) for d, r in corners])
        return face.Extrude(Vec(0.0, 2 * half * normal[1], 2 * half * normal[2]))


def curved_radii(shape: VeeShape) -> dict[str, float]:
    """Return the radius that sets the element size of each curved face and pad, by the start of its name [mm]."""
    radii = {"bore_": shape.bore, "main_": shape.main_bore, "nose_": shape.nose_bore, "tail_": shape.tail_bore}
    bosses = {f"boss_{pad.face}_{pad.name}": 2.0 * min(1.8 * pad.boss, 8.0 * shape.wall) for pad in shape.pads}
    pads = {f"pad_{pad.face}_{pad.name}": 3.0 * pad.radius for pad in shape.pads}
    return {name: MM * diameter / 2 for name, diameter in {**radii, **bosses, **pads}.items()}


def glued(solids: dict[str, Any], shape: VeeShape) -> Any:
    """Return the solids as one compound with conformal, named interfaces."""
    compound = Glue(list(solids.values()))
    for side in SIDES:
        _name_chambers(compound, VeeSolids(shape), side)
    return compound


def _name_chambers(compound: Any, builder: VeeSolids, side: str) -> None:
    shape = builder.shape
    for i, station in enumerate(shape.bores(side), start=1):
        y, z = builder.bank_point(side, MM * shape.deck, 0.0)
        centre = (builder.front - MM * station, y, z)
        for face in compound.faces:
            close = math.dist((face.center.x, face.center.y, face.center.z), centre) < 0.5
            if close and abs(face.mass / (math.pi * (MM * shape.bore / 2) ** 2) - 1) < 1e-3:
                face.name = f"chamber_{side[0].upper()}{i}"


def _face(plane: Any, points: Sequence[Point]) -> Any:
    area = sum(p[0] * q[1] - q[0] * p[1] for p, q in zip(points, [*points[1:], points[0]], strict=True))
    ordered = list(points) if area > 0 else list(reversed(points))
    plane.MoveTo(*ordered[0])
    for point in ordered[1:]:
        plane.LineTo(*point)
    return plane.Close().Face()


def _tube(
    name: str, start: tuple[float, float, float], way: tuple[float, float, float], radius: float, h: float
) -> Any:
    """Return a cylinder whose round face alone has the name: its ends may stay behind as floors of pockets."""
    solid = Cylinder(Pnt(*start), Dir(*way), radius, h)
    for face in solid.faces:
        centre = (face.center.x, face.center.y, face.center.z)
        height = sum((c - s) * w for c, s, w in zip(centre, start, way, strict=True))
        if 0.25 * h < height < 0.75 * h:
            face.name = name
    return solid


def _named(solid: Any, name: str) -> Any:
    for face in solid.faces:
        face.name = name
    return solid
