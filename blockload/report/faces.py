"""Each face seen from behind, looking forward: the car's left is on the left of the picture.

Stud forces are discs whose area goes with the axial force - pulled hatched, pressed plain - and arrows for the shear
on the engine, one scale for both faces.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from ..arrays import Floats
from ..car.model import FaceLoads, LoadCases
from ..case.model import Face
from .drawing import GREY, INK, PALE, PRESSED, PULLED, SMALL, Box, Sketch, View, arrow, circle, line, rect, text
from .wording import figure, fixed, plain_name


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class StudForces:
    """One face in one load case: axial (n,) + pulled and shear (n, 2) = (y, z) on the engine [N]."""

    axial: Floats
    shear: Floats


def faces_svg(cases: LoadCases, case_index: int, *, key: str = "faces") -> str:
    """Return both faces from behind with the stud forces of one load case."""
    sketch = Sketch(key)
    places = {name: (face.studs, face.stud_at[:, -2:]) for name, face in cases.faces.items()}
    draw_forces(sketch, places, cases, case_index, top=0.0, left=2.0, width=588.0, height=330.0)
    name = plain_name(cases.names[case_index])
    return sketch.svg(1200, 380, f"Stud forces, {name}", describe(cases, case_index))


def describe(cases: LoadCases, index: int) -> str:
    """Return the stud forces of one load case in words, for who cannot see the picture."""
    said = []
    for name, face in cases.faces.items():
        axial = face.stud_axial[index].sum(axis=0)
        studs = ", ".join(f"{s} {fixed(a, 1, scale=1e3, sign=True)}" for s, a in zip(face.studs, axial, strict=True))
        said.append(f"{name} face, axial in kN, plus pulled: {studs}")
    return "; ".join(said) + "."


def draw_forces(
    sketch: Sketch,
    places: dict[str, tuple[tuple[str, ...], Floats]],
    cases: LoadCases,
    index: int,
    *,
    top: float,
    left: float,
    width: float,
    height: float,
) -> None:
    """Draw the force panels of all faces side by side, and their legend beneath."""
    forces = {name: stud_forces(face, index) for name, face in cases.faces.items()}
    most = max((float(np.abs(f.axial).max(initial=0.0)) for f in forces.values()), default=0.0)
    most_shear = max((float(np.hypot(*f.shear.T).max(initial=0.0)) for f in forces.values()), default=0.0)
    radius = min(_largest_disc(at, width, height) for _, at in places.values())
    for k, (name, (studs, at)) in enumerate(places.items()):
        box = (left + k * (width + 20), top, left + k * (width + 20) + width, top + height)
        title = f"{name} face from behind: {plain_name(cases.names[index])}"
        view = _panel(sketch, box, title, at)
        _discs(sketch, view, name, studs, at, forces[name], (most, radius, most_shear))
    _legend(sketch, (left, top + height + 12), most, radius, most_shear)


def stud_forces(face: FaceLoads, index: int) -> StudForces:
    """Return one face's stud forces in one load case, summed over its sources."""
    return StudForces(axial=face.stud_axial[index].sum(axis=0), shear=face.stud_shear[index].sum(axis=0))


def draw_studs(sketch: Sketch, face: Face, box: Box) -> None:
    """Draw one face's named studs with their places, to scale."""
    at = np.array([stud.at for stud in face.studs])
    view = _panel(sketch, box, f"{face.name} face from behind: x = {fixed(face.x, 3)} m", at)
    spots = [view.at(*yz) for yz in at]
    for x, y in spots:
        sketch.take((x - 7, y - 7, x + 7, y + 7))
    for stud, spot in zip(face.studs, spots, strict=True):
        sketch.add(circle(spot, 5, fill="#fff", width=1.6), circle(spot, 1.6, fill=INK))
        y, z = stud.at
        lines = (stud.name, f"{fixed(y, 3, sign=True)}, {fixed(z, 3)}")
        sketch.label(spot, lines, size=SMALL, clear=7, toward=_outward(float(y)))


def _outward(y: float) -> float:
    return 0.0 if y <= 0 else math.pi


def _fit(at: Floats, width: float, height: float) -> float:
    spread = np.ptp(at, axis=0)
    return float(min((width - 190) / max(spread[0], 0.1), (height - 0.22 * height - 44) / max(spread[1], 0.1)))


def _largest_disc(at: Floats, width: float, height: float) -> float:
    gaps = np.linalg.norm(at[:, None] - at[None], axis=-1)[np.triu_indices(len(at), 1)]
    return float(min(30.0, 0.46 * _fit(at, width, height) * gaps.min(initial=1.0)))


def _panel(sketch: Sketch, box: Box, title: str, at: Floats) -> View:
    left, top, right, bottom = box
    sketch.bounds = (left + 4, top + 24, right - 4, bottom - 20)
    sketch.add(rect(box, fill="#fff", stroke=PALE, round_=3), text((left + 10, top + 20), title, weight="bold"))
    scale = _fit(at, right - left, bottom - top)
    middle = (at.max(axis=0) + at.min(axis=0)) / 2
    origin = ((left + right) / 2 + scale * middle[0], (top + bottom) / 2 + 4 + scale * middle[1])
    view = View(origin, scale, -1.0, -1.0)
    centre = view.at(0.0, middle[1])[0]
    sketch.add(line((centre, top + 28), (centre, bottom - 22), stroke=PALE, dash="8 3 2 3"))
    x, y = view.at(*at.mean(axis=0))
    sketch.add(line((x - 6, y), (x + 6, y), stroke=GREY), line((x, y - 6), (x, y + 6), stroke=GREY))
    sketch.take((x - 6, y - 6, x + 6, y + 6))
    sketch.add(text((left + 10, bottom - 8), "car's left", size=SMALL, fill=GREY))
    sketch.add(text((right - 10, bottom - 8), "car's right", size=SMALL, anchor="end", fill=GREY))
    return view


def _discs(
    sketch: Sketch,
    view: View,
    name: str,
    studs: tuple[str, ...],
    at: Floats,
    forces: StudForces,
    scales: tuple[float, float, float],
) -> None:
    most, radius, most_shear = scales
    spots = [view.at(*yz) for yz in at]
    tips = []
    for k, (x, y) in enumerate(spots):
        size = disc_radius(float(forces.axial[k]), most, radius)
        sy, sz = (42.0 * forces.shear[k] / most_shear) if most_shear > 0 else (0.0, 0.0)
        tips.append((x - float(sy), y - float(sz)))
        sketch.take((x - size - 2, y - size - 2, x + size + 2, y + size + 2))
        sketch.take_line((x, y), tips[-1], 4.0)
    for k, spot in enumerate(spots):
        axial, shear = float(forces.axial[k]), float(np.hypot(*forces.shear[k]))
        kind, (_, edge) = ("pulled", PULLED) if axial > 0 else ("pressed", PRESSED)
        sketch.add(
            f"<g class='stud' data-face='{name}' data-index='{k}' data-axial='{axial:.6g}' data-shear='{shear:.6g}'>",
            circle(spot, disc_radius(axial, most, radius), fill=f"url(#{sketch.key}-{kind})", stroke=edge, width=1.2),
            circle(spot, 1.8, fill=INK),
            arrow(spot, tips[k], width=2.0, head=8),
            "</g>",
        )
    for k, (stud, spot) in enumerate(zip(studs, spots, strict=True)):
        axial, shear = float(forces.axial[k]), float(np.hypot(*forces.shear[k]))
        lines = (f"{stud}  {figure(axial, scale=1e3, sign=True)} kN", f"shear {figure(shear, scale=1e3)} kN")
        clear = disc_radius(axial, most, radius) + 5
        sketch.label(spot, lines, size=SMALL, clear=clear, toward=_outward(float(at[k, 0])))


def disc_radius(axial: float, most: float, radius: float) -> float:
    """Return the radius of a stud's disc, its area in proportion to the force."""
    return radius * math.sqrt(abs(axial) / most) if most > 0 else 0.0


def _legend(sketch: Sketch, at: tuple[float, float], most: float, radius: float, most_shear: float) -> None:
    x, y = at[0] + 14, at[1] + 12
    for kind, (_, edge), words in (
        ("pulled", PULLED, "pulled (+)"),
        ("pressed", PRESSED, "pressed (−)"),
    ):
        sketch.add(circle((x, y), 9, fill=f"url(#{sketch.key}-{kind})", stroke=edge), text((x + 15, y + 4), words))
        x += 130
    size = _round_force(0.25 * most)
    if size > 0:
        reach = disc_radius(size, most, radius)
        sketch.add(circle((x + reach, y), reach))
        words = f"{figure(size, scale=1e3, digits=1)} kN; the area goes with the axial force"
        sketch.add(text((x + 2 * reach + 6, y + 4), words))
        x += 2 * reach + 350
    size = _round_force(0.7 * most_shear)
    if size > 0:
        end = (x + 42.0 * size / most_shear, y)
        sketch.add(arrow((x, y), end, width=2.0, head=8))
        sketch.add(text((end[0] + 6, y + 4), f"shear on the engine, {figure(size, scale=1e3, digits=1)} kN"))


def _round_force(force: float) -> float:
    """Return the nearest of 1, 2, 5 times a power of ten at or below a force."""
    if force <= 0:
        return 0.0
    power: float = 10.0 ** math.floor(math.log10(force))
    return max(k * power for k in (1.0, 2.0, 5.0) if k * power <= force)
