"""The echo picture: the car as it was read, to scale, so that a swapped side or a wing on the wrong body is seen.

Seen from its left side the car drives to the left of the picture; the plan beneath has the car's left at the bottom;
faces are seen from behind. A body's outline is the homogeneous box of its mass and inertia, cut at the faces.
"""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..car.model import LoadCases
from ..case.model import Axle, Case
from .choice import governing_index
from .drawing import (
    BODY_COLOURS,
    GREY,
    PALE,
    SMALL,
    Sketch,
    View,
    arrow,
    circle,
    dimension,
    line,
    rect,
    text,
)
from .echo_marks import axes_at_origin, box, bubble, marks, outline, swatch
from .faces import describe, draw_forces, draw_studs
from .wording import fixed, plain_name, point

WIDTH = 1200.0
COLUMN = 816.0  # where the list of bodies and devices begins
TYRE_WIDTH = 0.28  # of the symbol only; the tyre's width is not an input


def echo_svg(case: Case, cases: LoadCases | None, *, index: int | None = None, key: str = "echo") -> str:
    """Return the echo picture as one SVG to scale.

    Parameters
    ----------
    case : Case
        What was read.
    cases : LoadCases or None
        With load cases, both faces are also drawn with the stud forces of one of them.
    index : int, optional
        Which load case; default the one with the greatest stud force.
    key : str
        Prefix of the picture's ids; pictures on one page need different ones.

    """
    sketch = Sketch(key)
    low, high = _extent(case)
    scale = (COLUMN - 60) / (high - low)
    left = 30 + scale * high
    top_z = max([0.9, *(d.at[2] for d in case.devices)]) + 0.36
    ground = 34 + scale * top_z
    side, heading = View((left, ground), scale, -1.0, -1.0), text((14, 22), "Seen from its left", weight="bold")
    half = max(axle.track for axle in case.axles.values()) / 2 + 0.3
    plan_y = ground + 104 + scale * half
    plan = View((left, plan_y), scale, -1.0, 1.0)
    sketch.add(heading, text((14, ground + 84), "Seen from above", weight="bold"))
    _side(sketch, case, side)
    _plan(sketch, case, plan, half)
    lists_end = _lists(sketch, case)
    bottom = max(plan_y + scale * half + 24, lists_end + 2 * 150)
    _stud_panels(sketch, case, lists_end, bottom)
    height = _force_panels(sketch, cases, bottom, index)
    said = f"{_said(case)} {describe(cases, _chosen(cases, index)) if cases is not None else ''}"
    return sketch.svg(WIDTH, height, f"The car as read: {case.title}", said)


def _chosen(cases: LoadCases, index: int | None) -> int:
    return governing_index(cases) if index is None else index


def _said(case: Case) -> str:
    devices = "; ".join(f"{plain_name(d.name)} on the {d.on} at {point(d.at)} m" for d in case.devices)
    return f"Wheelbase {fixed(case.wheelbase, 3)} m. Devices: {devices}."


def _extent(case: Case) -> tuple[float, float]:
    """Least and greatest x that must be in the picture."""
    xs = [d.at[0] for d in case.devices]
    xs += [x for axle in case.axles.values() for x in (axle.x - axle.loaded_radius, axle.x + axle.loaded_radius)]
    xs += [x for body in case.bodies.values() for x in box(case, body)[:, 0]]
    return min(xs) - 0.20, max(xs) + 0.30


def _side(sketch: Sketch, case: Case, view: View) -> None:
    right = view.at(_extent(case)[0], 0)
    sketch.bounds = (8, 30, COLUMN - 10, right[1] - 2)
    sketch.add(line((20, view.origin[1]), (right[0], right[1]), stroke=GREY, width=1.4))
    for axle in case.axles.values():
        _wheel_side(sketch, axle, view)
    for body in case.bodies.values():
        outline(sketch, case, body, view, (0, 2))
    studs_top = max(s.at[1] for f in case.faces.values() for s in f.studs)
    for face in case.faces.values():
        foot, head = view.at(face.x, 0.0), view.at(face.x, studs_top + 0.16)
        sketch.add(line((foot[0], foot[1] + 8), head, width=1.6, dash="7 4"))
        sketch.take_line(foot, head)
        for stud in face.studs:
            x, y = view.at(face.x, stud.at[1])
            sketch.add(line((x - 5, y), (x + 5, y), width=3))
        front = face.name == "front"
        shift, anchor = (-4, "end") if front else (4, "start")
        sketch.add(text((head[0] + shift, head[1] + 4), f"{face.name} face", size=SMALL, anchor=anchor))
        width = 80
        sketch.take((head[0] - (width if front else 0), head[1] - 10, head[0] + (0 if front else width), head[1] + 6))
        words = f"x = {fixed(face.x, 3)} m"
        sketch.add(text((foot[0] + shift, foot[1] + 20), words, size=SMALL, anchor=anchor))
    axes_at_origin(sketch, view, ("x", "z"))
    marks(sketch, case, view, (0, 2))
    _travel(sketch, (150, 18))
    y = view.origin[1] + 44
    ends = [(view.at(case.axles[name].x, 0)[0], y) for name in ("front", "rear")]
    for x, _ in ends:
        sketch.add(line((x, view.origin[1]), (x, y + 5), stroke=PALE))
    sketch.add(dimension(ends[0], ends[1], f"wheelbase {fixed(case.wheelbase, 3)} m", along=0.25))


def _wheel_side(sketch: Sketch, axle: Axle, view: View) -> None:
    centre = view.at(axle.x, axle.loaded_radius)
    fill, stroke, _ = BODY_COLOURS["corner"]
    sketch.add(
        circle(centre, view.scale * axle.loaded_radius, fill=fill, stroke=stroke, width=1.4),
        circle(centre, view.scale * axle.loaded_radius * 0.6, stroke=stroke, width=0.8),
    )


def _plan(sketch: Sketch, case: Case, view: View, half: float) -> None:
    low, high = _extent(case)
    start, end = view.at(high, 0), view.at(low, 0)
    sketch.bounds = (8, view.at(0, -half)[1] - 4, COLUMN - 10, view.at(0, half)[1] + 8)
    sketch.add(line(start, end, stroke=GREY, width=0.9, dash="12 4 3 4"))
    fill, stroke, _ = BODY_COLOURS["corner"]
    for axle in case.axles.values():
        for side in (1, -1):
            a = view.at(axle.x + axle.loaded_radius, side * axle.track / 2 - TYRE_WIDTH / 2)
            b = view.at(axle.x - axle.loaded_radius, side * axle.track / 2 + TYRE_WIDTH / 2)
            sketch.add(rect((*a, *b), fill=fill, stroke=stroke, width=1.4, round_=6))
        ahead = axle.x + axle.loaded_radius + 0.10 if axle.name == "front" else low + 0.07
        ends = [view.at(ahead, y * axle.track / 2) for y in (-1, 1)]
        sketch.add(dimension(ends[0], ends[1], f"track {fixed(axle.track, 3)} m", along=0.25))
        for tip, edge in zip(ends, (-1, 1), strict=True):
            sketch.add(line(view.at(axle.x, edge * axle.track / 2), tip, stroke=GREY, width=0.6, dash="3 3"))
    for body in case.bodies.values():
        outline(sketch, case, body, view, (0, 1))
    for face in case.faces.values():
        reach = max(abs(s.at[0]) for s in face.studs) + 0.12
        a, b = view.at(face.x, -reach), view.at(face.x, reach)
        sketch.add(line(a, b, width=1.6, dash="7 4"))
        sketch.take_line(a, b)
        for stud in face.studs:
            x, y = view.at(face.x, stud.at[0])
            sketch.add(line((x - 5, y), (x + 5, y), width=3))
    axes_at_origin(sketch, view, ("x", "y"))
    marks(sketch, case, view, (0, 1))
    middle = 0.5 * (case.faces["front"].x + case.faces["rear"].x)
    for y_at, words in ((-half + 0.1, "car's right (−y)"), (half - 0.06, "car's left (+y)")):
        sketch.add(text(view.at(middle, y_at), words, size=SMALL, anchor="middle", fill=GREY))


def _travel(sketch: Sketch, at: tuple[float, float]) -> None:
    x, y = at[0] + 30, at[1]
    sketch.add(arrow((x + 66, y), (x, y), width=3.2, head=13), text((x + 74, y + 4), "direction of travel"))
    sketch.take((x, y - 8, x + 210, y + 10))


def _lists(sketch: Sketch, case: Case) -> float:
    """The column on the right: bodies, devices, the whole car; returns where it ends."""
    x = COLUMN + 10
    y: float = 22
    sketch.add(text((x, y), "Bodies: mass, CG in m (corners: left)", weight="bold"))
    rows = [(body.name, body.name, body) for body in case.bodies.values()]
    rows += [("corner", f"{axle.name} corner", axle.corner) for axle in case.axles.values()]
    for kind, name, body in rows:
        y += 24
        sketch.add(swatch(sketch, x, y, kind), text((x + 36, y), f"{name}, {body.mass:.4g} kg"))
        sketch.add(text((WIDTH - 8, y), point(body.cg), size=SMALL, anchor="end", fill=GREY))
    y += 24
    mass, cg = _whole(case)
    sketch.add(text((x, y), f"whole car, {fixed(mass, 0)} kg", weight="bold"))
    sketch.add(text((WIDTH - 8, y), point(cg), size=SMALL, anchor="end", fill=GREY))
    y += 34
    sketch.add(text((x, y), "Devices: carried by; area down, drag", weight="bold"))
    for k, device in enumerate(case.devices):
        y += 26
        sketch.add(bubble((x + 10, y - 4), k + 1, device), swatch(sketch, x + 26, y, device.on))
        sketch.add(text((x + 60, y), f"{plain_name(device.name)}: {device.on}"))
        areas = f"{fixed(device.downforce_area, 2)}, {fixed(device.drag_area, 2)} m²"
        areas = "from a map" if device.table is not None else areas
        sketch.add(text((WIDTH - 8, y), areas, size=SMALL, anchor="end", fill=GREY))
    y += 30
    for words in (
        "Outlines: boxes of the same mass and inertia, cut",
        "at the faces; tyre width is a symbol. All else stands",
        "where the case file puts it. Studs: y, z in m.",
    ):
        sketch.add(text((x, y), words, size=SMALL, fill=GREY))
        y += 17
    return y


def _whole(case: Case) -> tuple[float, Floats]:
    """Mass and CG of the whole car."""
    parts = [(body.mass, body.cg) for body in case.bodies.values()]
    for axle in case.axles.values():
        parts += [(axle.corner.mass, axle.corner.cg * (1, side, 1)) for side in (1, -1)]
    mass = sum(m for m, _ in parts)
    cg: Floats = sum((m * c for m, c in parts), np.zeros(3)) / mass
    return mass, cg


def _stud_panels(sketch: Sketch, case: Case, top: float, bottom: float) -> None:
    """Both faces with their named studs, stacked at the foot of the right column."""
    height = (bottom - top) / 2 - 8
    for k, face in enumerate(case.faces.values()):
        start = top + k * (height + 8)
        draw_studs(sketch, face, (COLUMN, start, WIDTH - 2, start + height))


def _force_panels(sketch: Sketch, cases: LoadCases | None, top: float, index: int | None) -> float:
    """The row of faces with stud forces; returns the picture's height."""
    if cases is None:
        return top
    places = {name: (face.studs, face.stud_at[:, -2:]) for name, face in cases.faces.items()}
    draw_forces(sketch, places, cases, _chosen(cases, index), top=top, left=2, width=588, height=330)
    return top + 376
