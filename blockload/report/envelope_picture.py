"""The boundary of grip and power in the plane of accelerations: one closed line per speed, seen from above.

Forward is up and left is left, as the driver feels it. Lines darken with speed; the mark at a vertex says what limits
it there. Load cases and lap samples may stand in it as dots.
"""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from ..arrays import Floats
from ..car.envelope import Envelope
from ..car.lap_model import LapLoads
from ..car.limits import LIMITS
from .drawing import GREY, INK, PALE, SMALL, Sketch, View, circle, line, rect, text
from .wording import figure

WIDE, HIGH, SIDE = 1200.0, 700.0, 640.0
_GRAVITY = 9.80665
_MOST = 4000  # dots of laps


def envelope_svg(found: Envelope, laps: Sequence[LapLoads] = (), *, key: str = "envelope") -> str:
    """Return the envelope as an SVG, with the samples of laps in it."""
    reach = float(np.abs(found.acceleration).max(initial=1.0))
    for lap in laps:
        reach = max(reach, float(np.abs(lap.acceleration[:, :2]).max()))
    view = View((SIDE / 2 + 20, HIGH / 2 + 10), 0.47 * SIDE / reach, -1.0, -1.0)
    sketch = Sketch(key)
    sketch.add(text((8, 22), "What the car can do: boundary of grip and power", weight="bold"))
    _grid(sketch, view, reach)
    for lap in laps:
        _cloud(sketch, view, lap)
    for v in range(len(found.speed)):
        _line(sketch, view, found, v)
    _legend(sketch, found, laps)
    said = f"Boundary at {len(found.speed)} speeds and {len(found.heading)} headings; numbers stand in envelope.csv."
    return sketch.svg(WIDE, HIGH + 20, "Envelope of accelerations", said)


def _grid(sketch: Sketch, view: View, reach: float) -> None:
    step = _GRAVITY if reach < 6 * _GRAVITY else 2 * _GRAVITY
    for k in range(1, int(reach / step) + 1):
        sketch.add(circle(view.at(0, 0), k * step * view.scale, stroke=PALE))
        sketch.add(
            text(
                (view.at(0, 0)[0] + 4, view.at(0, k * step)[1] - 3),
                f"{k * step / _GRAVITY:g} g",
                size=SMALL,
                fill=GREY,
            )
        )
    far = 1.03 * reach
    sketch.add(
        line(view.at(-far, 0), view.at(far, 0), stroke=GREY), line(view.at(0, -far), view.at(0, far), stroke=GREY)
    )
    x, y = view.at(0, 0)
    half = far * view.scale
    sketch.add(
        text((x, y - half - 4), "speeding up, a_x +", size=SMALL, anchor="middle"),
        text((x, y + half + 14), "braking, a_x −", size=SMALL, anchor="middle"),
        text((x - half, y - 6), "left turn, a_y +", size=SMALL),
        text((x + half, y - 6), "right turn", size=SMALL, anchor="end"),
    )


def _line(sketch: Sketch, view: View, found: Envelope, v: int) -> None:
    colour = _shade(found, v)
    points = [view.at(float(a[1]), float(a[0])) for a in found.acceleration[v]]
    path = "M" + " L".join(f"{a:.1f},{b:.1f}" for a, b in points) + " Z"
    sketch.add(f"<path d='{path}' fill='none' stroke='{colour}' stroke-width='1.8'/>")
    for h, at in enumerate(points):
        sketch.add(_mark(at, int(found.limit[v, h]), colour))


def _shade(found: Envelope, v: int) -> str:
    """From a pale to a dark blue with speed."""
    share = v / max(len(found.speed) - 1, 1)
    low, high = (150, 190, 220), (12, 44, 84)
    return "#" + "".join(f"{round(a + (b - a) * share):02x}" for a, b in zip(low, high, strict=True))


def _mark(at: tuple[float, float], limit: int, colour: str, size: float = 3.2) -> str:
    """A dot, ring, square or cross for the four limits."""
    x, y = at
    if limit == 0:
        return circle(at, size, fill=colour, stroke=colour)
    if limit == 1:
        return circle(at, size, fill="#fff", stroke=colour, width=1.4)
    if limit == 2:
        return rect((x - size, y - size, x + size, y + size), fill="#fff", stroke=colour, width=1.4)
    return line((x - size, y - size), (x + size, y + size), stroke=colour, width=1.6) + line(
        (x - size, y + size), (x + size, y - size), stroke=colour, width=1.6
    )


def _cloud(sketch: Sketch, view: View, lap: LapLoads) -> None:
    pace = max(math.ceil(len(lap.time) / _MOST), 1)
    dots: Floats = lap.acceleration[::pace, :2]
    marks = (f"M{x:.1f},{y:.1f}h0" for x, y in (view.at(float(a[1]), float(a[0])) for a in dots))
    sketch.add(
        f"<path d='{''.join(marks)}' stroke='#b5651d' stroke-width='4' stroke-linecap='round' stroke-opacity='0.55'/>"
    )


def _legend(sketch: Sketch, found: Envelope, laps: Sequence[LapLoads]) -> None:
    left, top = SIDE + 90.0, 60.0
    sketch.add(text((left, top), "speed", weight="bold"))
    for v, speed in enumerate(found.speed):
        y = top + 24 + 21 * v
        sketch.add(line((left, y - 5), (left + 34, y - 5), stroke=_shade(found, v), width=3))
        sketch.add(text((left + 44, y), f"{figure(float(speed))} m/s, {_reach(found, v)}", size=SMALL))
    top += 24 + 21 * len(found.speed) + 26
    sketch.add(text((left, top), "what limits it", weight="bold"))
    for k, name in enumerate(LIMITS):
        y = top + 24 + 21 * k
        sketch.add(_mark((left + 17, y - 5), k, INK, 4.5), text((left + 44, y), name, size=SMALL))
    for k, lap in enumerate(laps):
        y = top + 24 + 21 * (len(LIMITS) + k)
        sketch.add(circle((left + 17, y - 5), 3, fill="#b5651d", stroke="#b5651d"))
        sketch.add(text((left + 44, y), f"samples of lap {lap.name.replace('_', ' ')}", size=SMALL))


def _reach(found: Envelope, v: int) -> str:
    """The ends of one line in words."""
    along, across = found.acceleration[v].T / _GRAVITY
    ends = (along.max(), -along.min(), np.abs(across).max())
    return "{} g forward, {} g braking, {} g across".format(*(figure(float(e), digits=2) for e in ends))
