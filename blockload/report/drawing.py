"""Small pieces of SVG: views to scale, text that keeps out of its neighbour's way, arrows, dimensions.

A view maps two car coordinates to the picture. Colours carry a fill pattern with them, so that a grey print still
tells the bodies, and pulled from pressed, apart.
"""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass, field
from html import escape

Point = tuple[float, float]
Box = tuple[float, float, float, float]

FONT = "font-family='Liberation Sans, Arial, Helvetica, sans-serif'"
NORMAL, SMALL = 15.0, 13.5  # text sizes: a picture 1200 wide must still be read on a page of A4
INK, GREY, PALE = "#1d2326", "#6a7276", "#d5d9da"
# Fill, stroke and pattern of each body; the fills differ in lightness as well as in hue.
BODY_COLOURS = {
    "tub": ("#a9bdd3", "#2f5379", "lines"),
    "engine": ("#f0cf8f", "#8a5a00", "cross"),
    "gearbox": ("#bcd9cc", "#2b6a55", "dots"),
    "corner": ("#e3e5e6", "#4b5356", "plain"),
}
PULLED, PRESSED = ("#e9c9a6", "#7a3e00"), ("#5d93c4", "#123f66")


@dataclass(frozen=True, slots=True)
class View:
    """Picture place of car coordinates (u, v): origin + scale · (sign_u · u, sign_v · v)."""

    origin: Point
    scale: float
    sign_u: float
    sign_v: float

    def at(self, u: float, v: float) -> Point:
        """Return the picture coordinates of (u, v)."""
        return (
            self.origin[0] + self.scale * self.sign_u * float(u),
            self.origin[1] + self.scale * self.sign_v * float(v),
        )


# Distances and directions a label tries: near and toward the preferred side first.
_TRIALS = sorted(
    ((ring, turn) for ring in range(14) for turn in range(-5, 7)), key=lambda trial: trial[0] + 1.6 * abs(trial[1])
)


@dataclass(slots=True)
class Sketch:
    """An SVG under construction: its parts and the places already taken by something that must stay readable."""

    key: str
    parts: list[str] = field(default_factory=list)
    taken: list[Box] = field(default_factory=list)
    bounds: Box = (-1e9, -1e9, 1e9, 1e9)

    def add(self, *parts: str) -> None:
        """Append parts as they are."""
        self.parts.extend(parts)

    def take(self, box: Box) -> None:
        """Keep later labels out of a box (left, top, right, bottom)."""
        self.taken.append(box)

    def take_line(self, start: Point, end: Point, half: float = 3.0) -> None:
        """Keep later labels off a line."""
        steps = max(int(math.dist(start, end) / 6), 1)
        for k in range(steps + 1):
            x, y = (a + (b - a) * k / steps for a, b in zip(start, end, strict=True))
            self.take((x - half, y - half, x + half, y + half))

    def label(
        self, anchor: Point, lines: Iterable[str], *, size: float = NORMAL, clear: float = 10, toward: float = 0.0
    ) -> None:
        """Write lines beside a place, at the nearest free spot; `toward` is the preferred side, an angle [rad]."""
        texts = list(lines)
        width = max(text_width(t, size) for t in texts)
        height = 1.2 * size * len(texts)
        centre = self._free(anchor, width, height, clear, toward)
        box = (centre[0] - width / 2, centre[1] - height / 2, centre[0] + width / 2, centre[1] + height / 2)
        self.take(box)
        gap = max(abs(anchor[0] - centre[0]) - width / 2, abs(anchor[1] - centre[1]) - height / 2)
        if gap > clear + 24:
            edge = (min(max(anchor[0], box[0]), box[2]), min(max(anchor[1], box[1]), box[3]))
            self.add(line(anchor, edge, stroke=GREY, width=0.8))
        for k, t in enumerate(texts):
            self.add(text((centre[0], box[1] + (k + 0.85) * 1.2 * size - 0.1 * size), t, size=size, anchor="middle"))

    def _free(self, anchor: Point, width: float, height: float, clear: float, toward: float) -> Point:
        best, least = anchor, math.inf
        for ring, turn in _TRIALS:
            angle = toward + turn * math.pi / 6
            reach = clear + 7 * ring
            x = anchor[0] + math.cos(angle) * (reach + width / 2)
            y = anchor[1] - math.sin(angle) * (reach + height / 2)
            box = (x - width / 2, y - height / 2, x + width / 2, y + height / 2)
            overlap = sum(_overlap(box, other) for other in self.taken) + _outside(box, self.bounds)
            if overlap < least - 1e-9:
                best, least = (x, y), overlap
            if least == 0:
                break
        return best

    def svg(self, width: float, height: float, title: str, description: str) -> str:
        """Return the finished picture."""
        return (
            f"<svg xmlns='http://www.w3.org/2000/svg' viewBox='0 0 {num(width)} {num(height)}' role='img' "
            f"aria-labelledby='{self.key}-title {self.key}-desc' {FONT}>"
            f"<title id='{self.key}-title'>{escape(title)}</title>"
            f"<desc id='{self.key}-desc'>{escape(description)}</desc>"
            f"<defs>{patterns(self.key)}</defs>" + "".join(self.parts) + "</svg>"
        )


def _overlap(a: Box, b: Box) -> float:
    wide = min(a[2], b[2]) - max(a[0], b[0])
    high = min(a[3], b[3]) - max(a[1], b[1])
    return wide * high if wide > 0 and high > 0 else 0.0


def _outside(a: Box, bounds: Box) -> float:
    return 50.0 * sum(max(0.0, x) for x in (bounds[0] - a[0], bounds[1] - a[1], a[2] - bounds[2], a[3] - bounds[3]))


def num(value: float) -> str:
    """Return a picture coordinate, short."""
    return f"{value:.2f}".rstrip("0").rstrip(".")


def text_width(content: str, size: float) -> float:
    """Estimate the width of a text [px], on the wide side."""
    return 0.56 * size * len(content)


def text(
    at: Point,
    content: str,
    *,
    size: float = NORMAL,
    anchor: str = "start",
    weight: str = "normal",
    fill: str = INK,
    turn: float = 0.0,
) -> str:
    """Return one line of escaped text with a white halo that keeps it readable over lines."""
    x, y = num(at[0]), num(at[1])
    turned = f" transform='rotate({num(turn)} {x} {y})'" if turn else ""
    bold = f" font-weight='{weight}'" if weight != "normal" else ""
    return (
        f"<text x='{x}' y='{y}' font-size='{num(size)}' text-anchor='{anchor}' fill='{fill}'{bold}{turned} "
        f"stroke='#fff' stroke-width='2.5' stroke-linejoin='round' paint-order='stroke'>{escape(content)}</text>"
    )


def line(start: Point, end: Point, *, stroke: str = INK, width: float = 1.0, dash: str = "") -> str:
    """Return a straight line."""
    dashed = f" stroke-dasharray='{dash}'" if dash else ""
    return (
        f"<line x1='{num(start[0])}' y1='{num(start[1])}' x2='{num(end[0])}' y2='{num(end[1])}' "
        f"stroke='{stroke}' stroke-width='{num(width)}'{dashed}/>"
    )


def circle(at: Point, radius: float, *, fill: str = "none", stroke: str = INK, width: float = 1.0) -> str:
    """Return a circle."""
    return (
        f"<circle cx='{num(at[0])}' cy='{num(at[1])}' r='{radius:.4f}' fill='{fill}' stroke='{stroke}' "
        f"stroke-width='{num(width)}'/>"
    )


def rect(
    box: Box, *, fill: str = "none", stroke: str = INK, width: float = 1.0, dash: str = "", round_: float = 0
) -> str:
    """Return a rectangle from (left, top, right, bottom)."""
    left, right = sorted((box[0], box[2]))
    top, bottom = sorted((box[1], box[3]))
    dashed = f" stroke-dasharray='{dash}'" if dash else ""
    return (
        f"<rect x='{num(left)}' y='{num(top)}' width='{num(right - left)}' height='{num(bottom - top)}' "
        f"rx='{num(round_)}' fill='{fill}' stroke='{stroke}' stroke-width='{num(width)}'{dashed}/>"
    )


def arrow(start: Point, end: Point, *, stroke: str = INK, width: float = 1.6, head: float = 7.0) -> str:
    """Return an arrow; nothing where it has no length."""
    length = math.dist(start, end)
    if length < 1e-6:
        return ""
    head = min(head, 0.6 * length + 2)
    ux, uy = (end[0] - start[0]) / length, (end[1] - start[1]) / length
    neck = (end[0] - head * ux, end[1] - head * uy)
    side = 0.42 * head
    tips = (end, (neck[0] - side * uy, neck[1] + side * ux), (neck[0] + side * uy, neck[1] - side * ux))
    points = " ".join(f"{num(x)},{num(y)}" for x, y in tips)
    return line(start, neck, stroke=stroke, width=width) + f"<polygon points='{points}' fill='{stroke}'/>"


def dimension(start: Point, end: Point, label: str, *, size: float = NORMAL, along: float = 0.5) -> str:
    """Return a dimension line with end ticks, its text beside it at a share of its length."""
    level = abs(start[1] - end[1]) < abs(start[0] - end[0])
    tick = (0.0, 5.0) if level else (5.0, 0.0)
    ticks = "".join(line((x - tick[0], y - tick[1]), (x + tick[0], y + tick[1]), width=1.2) for x, y in (start, end))
    middle = tuple(a + (b - a) * along for a, b in zip(start, end, strict=True))
    at = (middle[0], middle[1] - 4) if level else (middle[0] - 5, middle[1])
    return line(start, end, width=0.9) + ticks + text(at, label, size=size, anchor="middle", turn=0 if level else -90)


def cg_mark(at: Point, stroke: str, radius: float = 7.0) -> str:
    """Return the usual quartered circle of a centre of gravity."""
    x, y = at
    quarters = "".join(
        f"<path d='M{num(x)},{num(y)} L{num(x + a * radius)},{num(y)} A{num(radius)},{num(radius)} 0 0 {s} "
        f"{num(x)},{num(y + b * radius)} Z' fill='{stroke}'/>"
        for a, b, s in ((1, -1, 0), (-1, 1, 0))
    )
    return circle(at, radius, fill="#fff", stroke=stroke, width=1.4) + quarters


def patterns(key: str) -> str:
    """Return the fill patterns, their names made unique by `key` so that several pictures can share a page."""
    made = []
    for name, (fill, stroke, kind) in BODY_COLOURS.items():
        made.append(_pattern(f"{key}-{name}", fill, stroke, kind))
    made.append(_pattern(f"{key}-below", "#f8efe2", "#d9b483", "hatch"))
    made.append(_pattern(f"{key}-pulled", *PULLED, "hatch"))
    made.append(_pattern(f"{key}-pressed", PRESSED[0], PRESSED[0], "plain"))
    return "".join(made)


def _pattern(name: str, fill: str, stroke: str, kind: str) -> str:
    faint = f"stroke='{stroke}' stroke-opacity='0.35' stroke-width='0.8' fill='none'"
    marks = {
        "plain": "",
        "lines": f"<path d='M0,5 H10' {faint}/>",
        "cross": f"<path d='M0,0 L10,10 M10,0 L0,10' {faint}/>",
        "dots": f"<circle cx='5' cy='5' r='1.1' fill='{stroke}' fill-opacity='0.45'/>",
        "hatch": f"<path d='M-2.5,2.5 L2.5,-2.5 M0,5 L5,0 M2.5,7.5 L7.5,2.5' stroke='{stroke}' stroke-width='1.3'/>",
    }[kind]
    side = 5 if kind == "hatch" else 10
    return (
        f"<pattern id='{name}' width='{side}' height='{side}' patternUnits='userSpaceOnUse'>"
        f"<rect width='{side}' height='{side}' fill='{fill}'/>{marks}</pattern>"
    )
