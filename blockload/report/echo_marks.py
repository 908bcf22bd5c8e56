"""What the echo picture is made of: bodies as boxes, CGs, devices as numbered bubbles, axes."""

from __future__ import annotations

import math

import numpy as np

from ..arrays import Floats
from ..case.model import Body, Case, Device
from .drawing import BODY_COLOURS, GREY, NORMAL, SMALL, Sketch, View, arrow, cg_mark, circle, line, rect, text


def box(case: Case, body: Body) -> Floats:
    """Lower and upper corner of a body's equivalent box, cut at the faces, (2, 3)."""
    xx, yy, zz = np.diag(body.inertia)
    squares = 6.0 / body.mass * np.array([yy + zz - xx, xx + zz - yy, xx + yy - zz])
    half = 0.5 * np.sqrt(np.clip(squares, 0.04, None))
    corners = np.array([body.cg - half, body.cg + half])
    front, rear = case.faces["front"].x, case.faces["rear"].x
    least, most = {"tub": (front, np.inf), "engine": (rear, front), "gearbox": (-np.inf, rear)}[body.name]
    if body.name == "engine":
        corners[:, 0] = rear, front
    corners[:, 0] = np.clip(corners[:, 0], least, most)
    return corners


def outline(sketch: Sketch, case: Case, body: Body, view: View, axes: tuple[int, int]) -> None:
    """Draw a body's box in the plane of two axes."""
    corners = box(case, body)
    a, b = (view.at(*corner[list(axes)]) for corner in corners)
    _, stroke, _ = BODY_COLOURS[body.name]
    shape = rect((*a, *b), fill=f"url(#{sketch.key}-{body.name})", stroke=stroke, width=1.4, round_=4)
    sketch.add(f"<g opacity='0.85' data-body='{body.name}'>{shape}</g>")


def marks(sketch: Sketch, case: Case, view: View, axes: tuple[int, int]) -> None:
    """CGs with names, devices as numbered bubbles in the colour of the body that carries them."""
    bodies = [(body.name, body, body.cg) for body in case.bodies.values()]
    for axle in case.axles.values():
        bodies.append(("corner", axle.corner, axle.corner.cg))
        if axes == (0, 1):
            bodies.append(("corner", axle.corner, axle.corner.cg * (1, -1, 1)))
    spots = [view.at(*cg[list(axes)]) for *_, cg in bodies]
    for (kind, _, _), (x, y) in zip(bodies, spots, strict=True):
        size = 7.0 if kind != "corner" else 5.0
        sketch.add(cg_mark((x, y), BODY_COLOURS[kind][1], size))
        sketch.take((x - size - 1, y - size - 1, x + size + 1, y + size + 1))
    bubbles = [view.at(*d.at[list(axes)]) for d in case.devices]
    if axes == (0, 2):
        for device, spot in zip(case.devices, bubbles, strict=True):
            _device_arrows(sketch, device, spot)
    for x, y in bubbles:
        sketch.take((x - 10, y - 10, x + 10, y + 10))
    for k, device in enumerate(case.devices):
        place = _clear_of(bubbles[k], bubbles[:k])
        if place != bubbles[k]:
            sketch.add(line(bubbles[k], place, stroke=GREY, width=0.8))
            bubbles[k] = place
        sketch.add(bubble(place, k + 1, device))
    for (kind, body, _), spot in zip(bodies, spots, strict=True):
        if kind != "corner":
            sketch.label(spot, (body.name,), size=NORMAL, clear=10, toward=math.pi / 2)


def _clear_of(spot: tuple[float, float], others: list[tuple[float, float]]) -> tuple[float, float]:
    """Lift a bubble until it covers none of the others."""
    x, y = spot
    while any(math.dist((x, y), other) < 19 for other in others):
        y -= 10
    return x, y


def _device_arrows(sketch: Sketch, device: Device, spot: tuple[float, float]) -> None:
    """Downforce from above, drag from ahead, ending at the device; 22 px per m² of area."""
    if device.table is not None:
        return  # a map has no one area to draw
    stroke = BODY_COLOURS[device.on][1]
    for area, (ux, uy) in ((device.downforce_area, (0, 1)), (device.drag_area, (1, 0))):
        if area:
            near, far = math.copysign(9, area), math.copysign(19, area) + 22 * area
            start, end = (spot[0] - far * ux, spot[1] - far * uy), (spot[0] - near * ux, spot[1] - near * uy)
            sketch.add(arrow(start, end, stroke=stroke, width=2.2))
            sketch.take_line(start, end)


def bubble(spot: tuple[float, float], number: int, device: Device) -> str:
    """Return a device's number in the colour of the body that carries it."""
    fill, stroke, _ = BODY_COLOURS[device.on]
    mark = circle(spot, 9, fill=fill, stroke=stroke, width=1.6)
    digits = text((spot[0], spot[1] + 4), str(number), size=SMALL, anchor="middle", weight="bold")
    return f"<g class='device' data-on='{device.on}' data-number='{number}'>{mark}{digits}</g>"


def axes_at_origin(sketch: Sketch, view: View, names: tuple[str, str]) -> None:
    """Axes at the car's origin."""
    at = view.at(0, 0)
    for name, end in ((names[0], view.at(0.22, 0)), (names[1], view.at(0, 0.22))):
        sketch.add(arrow(at, end, stroke="#a3231f", width=2.0))
        shift = (-7, -5) if name == "x" else (6, 4 if name == "z" else 8)
        sketch.add(text((end[0] + shift[0], end[1] + shift[1]), name, size=NORMAL, weight="bold", fill="#a3231f"))
        sketch.take_line(at, end, 6)


def swatch(sketch: Sketch, x: float, y: float, kind: str) -> str:
    """Return a sample of a body's colour and pattern for the list."""
    return rect((x, y - 11, x + 28, y + 3), fill=f"url(#{sketch.key}-{kind})", stroke=BODY_COLOURS[kind][1], round_=2)
