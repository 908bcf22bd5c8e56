"""The block as a beam, to scale: from its left side and from above, the front of the car on the left."""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..block.beam import BeamBlock
from ..block.model import Attachment
from .drawing import GREY, INK, SMALL, Sketch, View, circle, line, text
from .wording import fixed

WIDE, MARGIN, TOP, GAP = 1200.0, 130.0, 58.0, 70.0


def beam_svg(block: BeamBlock, *, key: str = "beam") -> str:
    """Return side view and plan: fibres' reach, centroid and shear centre along x, pads and places on their arms."""
    sketch = Sketch(key)
    centroid, shear = axes_of(block)
    places = np.array([item.centroid for item in block.attachments])
    outer = np.vstack([block.outline(), places])
    low, high = outer.min(axis=0), outer.max(axis=0)
    scale = min((WIDE - 2 * MARGIN) / (2 * (high[0] - low[0]) + 0.12), 420.0 / float((high - low)[1:].max()))
    down = TOP + scale * float((high - low)[1:].max()) / 2
    for k, (axis, sign, name) in enumerate(((2, -1.0, "From the left"), (1, 1.0, "From above"))):
        left = MARGIN + k * (scale * (high[0] - low[0]) + 2 * GAP)
        middle = (high[axis] + low[axis]) / 2
        view = View((left + scale * high[0], down - sign * scale * middle), scale, -1.0, sign)
        sketch.add(text((left, 24), name, weight="bold"))
        _view(sketch, view, block, axis, (centroid[:, axis - 1], shear[:, axis - 1]))
    height = 2 * down - TOP + 62
    words = (
        "full line: centroid; dashed: shear centre; grey: rigid arms to pads and places; shaded: reach of the fibres"
    )
    sketch.add(text((MARGIN, height - 12), words, size=SMALL, fill=GREY))
    said = f"The block as a beam of {len(block.x) - 1} pieces with {len(places)} attachments."
    return sketch.svg(WIDE, height, "The block as a beam", said)


def axes_of(block: BeamBlock) -> tuple[Floats, Floats]:
    """Return centroid and shear centre (n, 2) of the pieces, from their stiffness."""
    C = block.elastic
    centroid = np.column_stack([-C[:, 0, 5], C[:, 0, 4]]) / C[:, 0, 0, None]
    lever = np.linalg.solve(C[:, 1:3, 1:3], C[:, 1:3, 3, None])[..., 0]
    return centroid, np.column_stack([lever[:, 1], -lever[:, 0]])


def _view(sketch: Sketch, view: View, block: BeamBlock, axis: int, axes: tuple[Floats, Floats]) -> None:
    if block.fibres.size:
        reach = block.fibres[..., axis - 1]
        ends = np.stack([block.x[:-1], block.x[1:]], axis=1).ravel()
        upper = [view.at(x, v) for x, v in zip(ends, reach.max(axis=2).ravel(), strict=True)]
        lower = [view.at(x, v) for x, v in zip(ends, reach.min(axis=2).ravel(), strict=True)]
        sketch.add(f"<path d='{_path([*upper, *lower[::-1]])} Z' fill='url(#{sketch.key}-engine)' stroke='{GREY}'/>")
    middle = (block.x[1:] + block.x[:-1]) / 2
    for item in block.attachments:
        start = view.at(item.centroid[0], np.interp(item.centroid[0], middle, axes[0]))
        sketch.add(line(start, view.at(item.centroid[0], item.centroid[axis]), stroke=GREY))
    for values, dash in zip(axes, ("", "7,5"), strict=True):
        curve = [view.at(x, v) for x, v in zip(middle, values, strict=True)]
        dashed = f" stroke-dasharray='{dash}'" if dash else ""
        sketch.add(f"<path d='{_path(curve)}' fill='none' stroke='{INK}' stroke-width='2'{dashed}/>")
    for item in block.attachments:
        at = view.at(item.centroid[0], item.centroid[axis])
        sketch.add(circle(at, 4.0, fill="#ffffff"))
        if axis == 2 and _hidden(block, item):
            continue
        side = {"front": np.pi, "rear": 0.0}.get(item.kind, -np.pi / 2)
        sketch.label(at, [item.name], size=SMALL, clear=6, toward=side)
    for x in (block.x[-1], block.x[0]):
        at = view.at(x, block.attachments[0].centroid[axis])
        sketch.add(text((at[0], 46), f"x {fixed(float(x), 3)} m", size=SMALL, anchor="middle", fill=GREY))


def _hidden(block: BeamBlock, item: Attachment) -> bool:
    """Whether an attachment is behind one like it on the left side."""
    twins = [other.centroid for other in block.attachments if other.kind == item.kind and other.centroid[1] > 0.0]
    gaps = [np.abs(at - item.centroid * [1.0, -1.0, 1.0]).max() for at in twins]
    return bool(item.centroid[1] < 0.0 and gaps and min(gaps) < 1e-3)


def _path(points: list[tuple[float, float]]) -> str:
    return "M" + " L".join(f"{a:.1f},{b:.1f}" for a, b in points)
