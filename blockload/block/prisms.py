"""Prisms, tubes and bodies of revolution in an engine's own axes, on netgen's geometry kernel [mm].

Only the meshing child process imports this. Stations run rearward from the front face plane; a bank's axes are `along`
the bores and `across`, outward from the valley.
"""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

from netgen.occ import Axes, Axis, Cylinder, Dir, Pnt, Vec, WorkPlane

from .shape import VeeShape

MM = 1e3
OVERRUN = 5.0
"""Cutters run this far past what they cut."""
Point = tuple[float, float]
Vector = tuple[float, float, float]


class Frame:
    """The axes of one shape, and what can be drawn in them."""

    def __init__(self, shape: VeeShape) -> None:
        self.shape = shape
        self.front = MM * shape.front_x
        self.length = MM * shape.length
        self.crank = MM * shape.crank_z
        self.outside = (MM * shape.recess, self.length - MM * shape.recess)
        end = MM * (shape.recess + shape.end_wall)
        self.inside = (end, self.length - end)

    def along_x(self, section: Sequence[Point], start: float, stop: float) -> Any:
        """Return a (y, z) polygon extruded from one station to another."""
        plane = WorkPlane(Axes((self.front - start, 0, 0), n=Dir(-1, 0, 0), h=Dir(0, 1, 0)))
        return polygon(plane, [(y, -z) for y, z in section]).Extrude(Vec(start - stop, 0, 0))

    def upright(self, plan: Sequence[Point], bottom: float, top: float) -> Any:
        """Return a (station, y) polygon extruded from one height to another."""
        plane = WorkPlane(Axes((0, 0, bottom), n=Dir(0, 0, 1), h=Dir(1, 0, 0)))
        return polygon(plane, [(self.front - s, y) for s, y in plan]).Extrude(Vec(0, 0, top - bottom))

    def along_bank(self, side: str, outline: Sequence[Point], stations: Point) -> Any:
        """Return an (along, across) polygon of a bank extruded between stations."""
        return self.along_x([self.bank_point(side, a, c) for a, c in outline], *stations)

    def in_bank(self, side: str, along: Point, across: Point, stations: Point) -> Any:
        """Return a box in a bank's own axes."""
        corners = [(along[0], across[0]), (along[1], across[0]), (along[1], across[1]), (along[0], across[1])]
        return self.along_bank(side, corners, stations)

    def bank_point(self, side: str, along: float, across: float) -> Point:
        """Return (y, z) of a point given in a bank's axes."""
        (ay, az), (cy, cz) = self.shape.bank_axes(side)
        return along * ay + across * cy, self.crank + along * az + across * cz

    def bore(self, name: str, side: str, station: float, along: Point) -> Any:
        """Return a cylinder on a bore's axis, its round face named."""
        (ay, az), _ = self.shape.bank_axes(side)
        y, z = self.bank_point(side, along[0], 0.0)
        return tube(name, (self.front - station, y, z), (0.0, ay, az), MM * self.shape.bore / 2, along[1] - along[0])

    def on_crank(self, name: str, start: float, stop: float, diameter: float) -> Any:
        """Return a cylinder on the crank axis between two stations, its round face named; diameter in m."""
        return tube(name, (self.front - start, 0.0, self.crank), (-1.0, 0.0, 0.0), MM * diameter / 2, stop - start)

    def plan(self, inset: float, start: float, stop: float) -> list[Point]:
        """Return the plan of crankcase and sump between two stations, moved inward by `inset`."""
        widths = [MM * self.shape.skirt(station / MM) - inset for station in (start, stop)]
        return [(start, widths[0]), (stop, widths[1]), (stop, -widths[1]), (start, -widths[0])]

    def bays(self, thickness: float) -> list[Point]:
        """Return the station ranges between the end walls and cross walls of this thickness [m] at the mains."""
        edges = [self.inside[0]]
        for main in self.shape.mains:
            edges += [MM * (main - thickness / 2), MM * (main + thickness / 2)]
        edges.append(self.inside[1])
        return list(zip(edges[::2], edges[1::2], strict=True))


def polygon(plane: Any, points: Sequence[Point]) -> Any:
    """Return a plane face whose normal is the plane's, whichever way round the points run."""
    area = sum(p[0] * q[1] - q[0] * p[1] for p, q in zip(points, [*points[1:], points[0]], strict=True))
    ordered = list(points) if area > 0 else list(reversed(points))
    plane.MoveTo(*ordered[0])
    for point in ordered[1:]:
        plane.LineTo(*point)
    return plane.Close().Face()


def tube(name: str, start: Vector, way: Vector, radius: float, height: float) -> Any:
    """Return a cylinder whose round face alone has the name: its ends may stay behind as floors of pockets."""
    solid = Cylinder(Pnt(*start), Dir(*way), radius, height)
    for face in solid.faces:
        centre = (face.center.x, face.center.y, face.center.z)
        above = sum((c - s) * w for c, s, w in zip(centre, start, way, strict=True))
        if 0.25 * height < above < 0.75 * height:
            face.name = name
    return solid


def turned(profile: Sequence[Point], start: Vector, into: float) -> Any:
    """Return a body of revolution about the line along x through `start`; profile as (depth, radius)."""
    plane = WorkPlane(Axes(start, n=Dir(0, 0, -into), h=Dir(into, 0, 0)))
    return polygon(plane, profile).Revolve(Axis(start, Dir(1, 0, 0)), 360)


def named(solid: Any, name: str) -> Any:
    """Return the solid with all its faces named."""
    for face in solid.faces:
        face.name = name
    return solid
