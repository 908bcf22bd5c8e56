"""Stud forces over a lap: speed and side acceleration above, then the axial forces of every stud of each face.

Studs are told apart by height (from dark, the highest, to ochre, the lowest) and side (left solid, right dashed); the
most pulled and the most pressed of each face are marked with stud, force and time. Long laps are drawn as the span of
the samples that fall into one step of the picture, so that no peak is lost.
"""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise

import numpy as np

from ..arrays import Floats
from ..car.lap_model import LapFace, LapLoads
from .drawing import GREY, INK, PALE, SMALL, Point, Sketch, circle, line, rect, text
from .wording import figure, fixed, plain_name

LEFT, RIGHT, WIDE = 96.0, 1050.0, 1200.0
_SHADES = ((20, 48, 92), (46, 122, 150), (190, 120, 20))
_STEPS = 900
_GRAVITY = 9.80665


def lap_svg(lap: LapLoads, *, key: str = "lap") -> str:
    """Return the stud forces of both faces over a lap as an SVG."""
    sketch = Sketch(key)
    name = plain_name(lap.name)
    sketch.add(text((8, 22), f"Stud forces over {name}", weight="bold"))
    top = 40.0
    _strip(sketch, lap, (top, 70.0), [(lap.speed, INK, "")], "speed, m/s")
    top += 84.0
    across = lap.acceleration[:, 1] / _GRAVITY
    _strip(sketch, lap, (top, 70.0), [(across, INK, "")], "a_y, g")
    top += 84.0
    for face in lap.faces.values():
        lines = [(face.stud_axial[:, k] / 1e3, colour, dash) for k, colour, dash in _looks(face)]
        scale = _strip(sketch, lap, (top, 190.0), lines, f"{face.name} face, kN")
        _names(sketch, face, top)
        _peaks(sketch, lap, face, scale)
        top += 210.0
    _times(sketch, lap, top - 6)
    said = (
        f"Axial force of every stud over {len(lap.time)} samples; + pulled; rigid face on equal studs, before preload."
    )
    return sketch.svg(WIDE, top + 30, f"Stud forces over {name}", said)


class _Scale:
    """Places of a strip: time across, values up."""

    def __init__(self, lap: LapLoads, box: tuple[float, float], low: float, high: float) -> None:
        self.start, self.span = float(lap.time[0]), max(float(lap.time[-1] - lap.time[0]), 1e-9)
        self.top, self.high = box
        self.low, self.reach = low, max(high - low, 1e-9)

    def at(self, time: float, value: float) -> Point:
        """Place of a value at a time."""
        across = LEFT + (RIGHT - LEFT) * (time - self.start) / self.span
        return across, self.top + self.high * (1.0 - (value - self.low) / self.reach)


def _strip(
    sketch: Sketch, lap: LapLoads, box: tuple[float, float], lines: list[tuple[Floats, str, str]], title: str
) -> _Scale:
    low = min(0.0, *(float(values.min()) for values, _, _ in lines))
    high = max(0.0, *(float(values.max()) for values, _, _ in lines))
    room = 0.06 * max(high - low, 1e-9)
    scale = _Scale(lap, box, low - (room if low < 0 else 0.0), high + room)
    sketch.add(rect((LEFT, box[0], RIGHT, box[0] + box[1]), stroke=PALE))
    zero = scale.at(scale.start, 0.0)[1]
    sketch.add(line((LEFT, zero), (RIGHT, zero), stroke=GREY, width=0.8))
    for end in dict.fromkeys((low, high)):
        if abs(end) > 1e-9:
            at = (LEFT - 6, scale.at(scale.start, end)[1] + 5)
            sketch.add(text(at, figure(end, digits=2, sign=low < 0), size=SMALL, anchor="end", fill=GREY))
    sketch.add(text((8, box[0] + box[1] / 2 + 5), title, size=SMALL))
    for values, colour, dash in lines:
        points = " L".join(f"{x:.1f},{y:.1f}" for x, y in _thinned(scale, lap.time, values))
        style = f" stroke-dasharray='{dash}'" if dash else ""
        sketch.add(f"<path d='M{points}' fill='none' stroke='{colour}' stroke-width='1.3'{style}/>")
    return scale


def _thinned(scale: _Scale, time: Floats, values: Floats) -> Iterator[Point]:
    """Places of a line; of many samples the first least and greatest of each step of the picture, in their order."""
    if len(time) <= 2 * _STEPS:
        chosen = np.arange(len(time))
    else:
        edges = np.linspace(0, len(time), _STEPS + 1).astype(int)
        pairs = [sorted((a + int(values[a:b].argmin()), a + int(values[a:b].argmax()))) for a, b in pairwise(edges)]
        chosen = np.array(pairs).ravel()
    return (scale.at(float(time[k]), float(values[k])) for k in chosen)


def _looks(face: LapFace) -> Iterator[tuple[int, str, str]]:
    """Colour by height and dash by side of every stud."""
    low, high = face.stud_at[:, 1].min(), face.stud_at[:, 1].max()
    for k, (y, z) in enumerate(face.stud_at):
        share = 2.0 * float((high - z) / max(high - low, 1e-9))
        first = min(int(share), 1)
        a, b = _SHADES[first], _SHADES[first + 1]
        colour = "#" + "".join(f"{round(p + (q - p) * (share - first)):02x}" for p, q in zip(a, b, strict=True))
        yield k, colour, "6 3" if y < 0 else ""


def _names(sketch: Sketch, face: LapFace, top: float) -> None:
    for row, (k, colour, dash) in enumerate(_looks(face)):
        y = top + 16 + 20 * row
        dashed = f" stroke-dasharray='{dash}'" if dash else ""
        sketch.add(
            f"<path d='M{RIGHT + 12:.0f},{y - 5:.0f} h36' stroke='{colour}' stroke-width='2.4' fill='none'{dashed}/>",
            text((RIGHT + 56, y), face.studs[k], size=SMALL),
        )


def _peaks(sketch: Sketch, lap: LapLoads, face: LapFace, scale: _Scale) -> None:
    for pick, word in ((np.argmax, "pulled"), (np.argmin, "pressed")):
        sample, stud = (int(i) for i in np.unravel_index(int(pick(face.stud_axial)), face.stud_axial.shape))
        value = float(face.stud_axial[sample, stud]) / 1e3
        at = scale.at(float(lap.time[sample]), value)
        said = f"{face.studs[stud]} {fixed(value, 1, sign=True)} kN {word}, {fixed(float(lap.time[sample]), 1)} s"
        near_end = at[0] > (LEFT + RIGHT) / 2
        inward = 5.0 + (10.0 if word == "pulled" else -2.0)
        sketch.add(circle(at, 4.5, stroke=INK, width=1.6))
        place = (at[0] + (-10 if near_end else 10), at[1] + inward)
        sketch.add(text(place, said, size=SMALL, anchor="end" if near_end else "start"))


def _times(sketch: Sketch, lap: LapLoads, y: float) -> None:
    start, end = float(lap.time[0]), float(lap.time[-1])
    step = 10.0 ** np.floor(np.log10(max(end - start, 1e-9) / 2))
    step = next(step * k for k in (1.0, 2.0, 5.0, 10.0) if (end - start) / (step * k) <= 10)
    for tick in np.arange(np.ceil(start / step) * step, end + 1e-9 * step, step):
        at = LEFT + (RIGHT - LEFT) * (float(tick) - start) / max(end - start, 1e-9)
        sketch.add(line((at, y), (at, y - 4), stroke=GREY))
        sketch.add(text((at, y + 13), f"{tick:g} s", size=SMALL, anchor="middle", fill=GREY))
