"""Section wrenches along the car: one strip per component, the governing case over the envelope of all cases.

Drawn like the echo picture, the front of the car on the left; the engine is the shaded part between the faces.
"""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..car.model import SECTION, LoadCases
from ..car.stations import section_along, stations
from .drawing import GREY, INK, PALE, SMALL, Sketch, View, line, rect, text
from .wording import SECTION_WORDS, figure, fixed, plain_name

STRIPS = ("V_z", "M_sag", "M_lat", "T")
LEFT, RIGHT, HIGH = 150.0, 1180.0, 84.0


def diagram_svg(cases: LoadCases, index: int, *, key: str = "diagram") -> str:
    """Return shear, sagging, lateral bending and torsion along the car for one load case, over the envelope of all."""
    x = stations(cases)
    values = section_along(cases, x)
    faces = {name: float(face.reference[0]) for name, face in cases.faces.items()}
    sketch = Sketch(key)
    for k, component in enumerate(STRIPS):
        unit, scale, *_ = SECTION_WORDS[component]
        column = values[:, :, SECTION.index(component)] / scale
        _strip(sketch, 34 + k * (HIGH + 14), x, column, index, (component, unit), faces)
    bottom = 34 + len(STRIPS) * (HIGH + 14)
    name = plain_name(cases.names[index])
    sketch.add(text((8, 20), f"Along the car: {name}", weight="bold"))
    sketch.add(text((RIGHT, 20), "line: this case; grey: all cases", size=SMALL, anchor="end", fill=GREY))
    for face, at in faces.items():
        words = f"{face} face, x = {fixed(at, 3)} m"
        shift, anchor = (-4, "end") if face == "front" else (4, "start")
        sketch.add(text((_across(x, at) + shift, bottom + 4), words, size=SMALL, anchor=anchor))
    said = f"Shear and moments along the car in {name}; values at the faces stand in the section table."
    return sketch.svg(1200, bottom + 14, f"Section along the car, {name}", said)


def _across(x: Floats, at: float) -> float:
    return float(LEFT + (RIGHT - LEFT) * (x.max() - at) / (x.max() - x.min()))


def _strip(
    sketch: Sketch,
    top: float,
    x: Floats,
    values: Floats,
    index: int,
    names: tuple[str, str],
    faces: dict[str, float],
) -> None:
    most = max(float(np.abs(values).max(initial=0.0)), 1e-9)
    view = View((_across(x, 0.0), top + HIGH / 2), 1.0, 1.0, -0.46 * HIGH / most)
    places = [_across(x, float(at)) for at in x]
    ends = sorted(_across(x, at) for at in faces.values())
    sketch.add(rect((ends[0], top, ends[-1], top + HIGH), fill=f"url(#{sketch.key}-engine)", stroke="none"))
    sketch.add(rect((LEFT, top, RIGHT, top + HIGH), stroke=PALE))
    upper = [(p, view.at(0, v)[1]) for p, v in zip(places, values.max(axis=0), strict=True)]
    lower = [(p, view.at(0, v)[1]) for p, v in zip(places, values.min(axis=0), strict=True)]
    sketch.add(f"<path d='{_path([*upper, *lower[::-1]])} Z' fill='#8d979b' fill-opacity='0.38'/>")
    sketch.add(line((LEFT, view.at(0, 0)[1]), (RIGHT, view.at(0, 0)[1]), stroke=GREY))
    curve = [(p, view.at(0, v)[1]) for p, v in zip(places, values[index], strict=True)]
    sketch.add(f"<path d='{_path(curve)}' fill='none' stroke='{INK}' stroke-width='2.4'/>")
    component, unit = names
    sketch.add(
        text((8, top + HIGH / 2 - 6), component, weight="bold"), text((8, top + HIGH / 2 + 14), unit, size=SMALL)
    )
    for sign in (1, -1):
        at = (LEFT - 6, view.at(0, sign * most)[1] + 5)
        sketch.add(text(at, figure(sign * most, digits=2, sign=True), size=SMALL, anchor="end", fill=GREY))


def _path(points: list[tuple[float, float]]) -> str:
    return "M" + " L".join(f"{a:.1f},{b:.1f}" for a, b in points)
