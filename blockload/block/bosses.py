"""Bosses under the stud pads, and the ribs that fair them into the casting [mm]; for the meshing child process."""

from __future__ import annotations

import math
from typing import Any

from netgen.occ import Axes, Dir, Pnt, Vec, WorkPlane

from .prisms import MM, Frame, polygon, turned
from .shape import PadShape, Rib

_RIB_START = 6.0
"""Ribs begin this far behind the end wall's outside."""


def with_ribs(frame: Frame, solid: Any, volume: str) -> Any:
    """Return the solid with the ribs of its pads; before it is hollowed, so that none stands in a cavity."""
    for pad in frame.shape.pads:
        if pad.volume == volume and pad.rib is not None:
            solid += _rib(frame, pad, pad.rib)
    return solid


def with_bosses(frame: Frame, solid: Any, volume: str) -> Any:
    """Return the solid with the bosses of its pads; after it is hollowed, so that they run on through cavities."""
    for pad in frame.shape.pads:
        if pad.volume == volume:
            solid += _boss(frame, pad)
    return solid


def _way(frame: Frame, pad: PadShape) -> tuple[float, float]:
    """Return x of the pad's face plane and the sign of the way into the block."""
    return (frame.front, -1.0) if pad.face == "front" else (frame.front - frame.length, 1.0)


def _boss(frame: Frame, pad: PadShape) -> Any:
    x, into = _way(frame, pad)
    y, z = (MM * value for value in pad.at)
    profile = [(0.0, 0.0), (0.0, pad.radius), (pad.column, pad.boss), (pad.depth, pad.tail), (pad.depth, 0.0)]
    boss = turned([(MM * d, MM * r) for d, r in profile], (x, y, z), into)
    for face in boss.faces:
        on_plane = abs(face.center.x - x) < 1e-6
        face.name = f"pad_{pad.face}_{pad.name}" if on_plane else f"boss_{pad.face}_{pad.name}"
    return boss


def _rib(frame: Frame, pad: PadShape, rib: Rib) -> Any:
    x, into = _way(frame, pad)
    size = math.hypot(*rib.toward)
    ty, tz = (value / size for value in rib.toward)
    y, z = (MM * value for value in pad.at)
    normal = (0.0, -tz, ty)
    half = MM * rib.thickness / 2
    start = Pnt(x, y - half * normal[1], z - half * normal[2])
    plane = WorkPlane(Axes(start, n=Dir(*normal), h=Dir(into, 0, 0)))
    begin = frame.outside[0] + _RIB_START
    corners = [(begin, -MM * rib.above), (begin, MM * rib.reach), (MM * rib.length, MM * rib.reach)]
    # the plane's second axis, normal × h, is `toward` times `into`
    face = polygon(plane, [(depth, into * down) for depth, down in corners])
    return face.Extrude(Vec(0.0, 2 * half * normal[1], 2 * half * normal[2]))
