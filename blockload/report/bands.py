"""The lowest margins as bands on one axis: a bar from the worse to the better end, zero as a hard line."""

from __future__ import annotations

from collections.abc import Sequence

from ..margins.model import Margin
from .drawing import GREY, INK, PALE, SMALL, Sketch, circle, line, rect, text
from .wording import band, fixed, plain_name

LEFT, RIGHT, ROW = 470.0, 930.0, 28.0
LEAST, MOST = -0.6, 2.0
BELOW, ABOVE = "#8a4b08", "#246596"


def bands_svg(margins: Sequence[Margin], *, key: str = "bands") -> str:
    """Return the margins as bands, in the order given; ends beyond the axis are cut, with their numbers beside."""
    sketch = Sketch(key)
    bottom = 34 + ROW * len(margins)
    sketch.add(rect((_x(LEAST), 26, _x(0), bottom), fill=f"url(#{key}-below)", stroke="none"))
    for tick in (-0.5, 0.0, 0.5, 1.0, 1.5, 2.0):
        x = _x(tick)
        sketch.add(line((x, 26), (x, bottom), stroke=INK if tick == 0 else PALE, width=2.2 if tick == 0 else 1))
        sketch.add(text((x, 20), fixed(tick, 1, sign=True) if tick else "0", size=SMALL, anchor="middle"))
    sketch.add(text((8, 20), "below zero fails", size=SMALL, fill=GREY))
    for k, item in enumerate(margins):
        _row(sketch, item, 26 + ROW * (k + 0.5) + 4)
    said = "; ".join(f"{m.criterion} at {plain_name(m.place)} {band(m.band, m.margin)}" for m in margins)
    return sketch.svg(1200, bottom + 6, "Lowest margins as bands", said)


def _row(sketch: Sketch, item: Margin, y: float) -> None:
    name = f"{item.criterion}, {plain_name(item.place)}"
    sketch.add(text((8, y + 1), _cut(name, 34), size=SMALL))
    sketch.add(text((LEFT - 14, y + 1), _cut(plain_name(item.load_case), 20), size=SMALL, anchor="end", fill=GREY))
    ends = item.band if item.band is not None else (item.margin, item.margin)
    low, high = (None if end is None else float(end) for end in ends)
    shown = band(item.band, item.margin)
    if low is not None and high is not None:
        _bar(sketch, _x(low), _x(high), y - 3)
    trust = "" if item.trust == "converged" else f" ({item.trust})"
    sketch.add(text((RIGHT + 14, y + 1), _cut(f"{shown}{trust}", 34), size=SMALL))


def _bar(sketch: Sketch, start: float, end: float, y: float) -> None:
    """A bar in two parts, brown below zero margin and blue above it, its worse end a ring."""
    zero = _x(0.0)
    for fill, a, b in ((BELOW, start, min(end, zero)), (ABOVE, max(start, zero), end)):
        if b > a:
            sketch.add(rect((a, y - 6, b, y + 6), fill=fill, stroke="none"))
    sketch.add(circle((start, y), 5.5, fill="#fff", stroke=BELOW if start < zero else ABOVE, width=3))


def _x(margin: float) -> float:
    share = (min(max(margin, LEAST), MOST) - LEAST) / (MOST - LEAST)
    return LEFT + share * (RIGHT - LEFT)


def _cut(words: str, length: int) -> str:
    return words if len(words) <= length else words[: length - 1] + "…"
