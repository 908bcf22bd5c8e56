"""Red lines: what a new set of aero figures looks like when it was read, or measured, in another sense than the old.

Ratios tell: -1 a sign turned round; 2 or 1/2 a half model; the share of one axle a figure per axle where the whole car
was meant; the reference area, or its inverse, coefficients taken for areas. A ratio that fits downforce and drag alike
is no change of the car.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from ..car.aero_totals import Totals
from ..case.aero_csv import AeroFile
from .wording import figure, plain_name

_FITS = 0.03
_SMALL = 0.01  # of the whole: below it a device's sign says nothing
_TOTAL = "the whole car"


def alarms(file: AeroFile, old: Totals, new: Totals) -> Iterator[str]:
    """Yield a sentence for each suspicion, worst first; both totals are at the same speeds."""
    yield from _signs(old, new)
    down = _ratio(new.downforce.sum(axis=1), old.downforce.sum(axis=1))
    drag = _ratio(new.drag.sum(axis=1), old.drag.sum(axis=1))
    yield from _model(down, drag)
    yield from _per_axle(old, new, down)
    yield from _area(file, down, drag)
    for i, words in enumerate(new.outside):
        if words:
            yield f"at {figure(new.speed[i])} m/s the new map is read beyond its grid, at its edge: {words}"


def _signs(old: Totals, new: Totals) -> Iterator[str]:
    for kind in ("downforce", "drag"):
        before, after = getattr(old, kind)[-1], getattr(new, kind)[-1]
        pairs = [(_TOTAL, float(before.sum()), float(after.sum()))]
        known = dict(zip(new.devices, after, strict=True))
        pairs += [(n, float(f), float(known[n])) for n, f in zip(old.devices, before, strict=True) if n in known]
        least = _SMALL * max(np.abs(before).sum(), np.abs(after).sum())
        for name, a, b in pairs:
            if a * b < 0 and min(abs(a), abs(b)) > least:
                yield (
                    f"SIGN FLIP: {kind} of {plain_name(name)} goes from {figure(a, scale=1e3, sign=True)} to "
                    f"{figure(b, scale=1e3, sign=True)} kN: does the file count it the other way (lift, or the force "
                    "on the balance)?"
                )


def _model(down: float, drag: float) -> Iterator[str]:
    for ratio, words in ((2.0, "twice"), (0.5, "half")):
        both = _near(down, ratio) and (_near(drag, ratio) or not np.isfinite(drag))
        if both:
            yield (
                f"HALF MODEL: the new figures are {words} the old: is one of the two from a half model? State "
                "'# model = half' in the file whose figures are of one side"
            )


def _per_axle(old: Totals, new: Totals, down: float) -> Iterator[str]:
    share = float(old.share_with[-1])
    for axle, part in (("front", share), ("rear", 1.0 - share)):
        if _near(down, part):
            yield (
                f"PER AXLE: the new downforce is {figure(down)} of the old, the {axle} axle's share of it: are these "
                f"the {axle} axle's figures, not the whole car's?"
            )
        elif part > 0 and _near(down, 1.0 / part):
            yield (
                f"PER AXLE: the old downforce is {figure(1 / down)} of the new, the {axle} axle's share: were the old "
                f"figures the {axle} axle's alone?"
            )


def _area(file: AeroFile, down: float, drag: float) -> Iterator[str]:
    area = file.reference_area
    if area is None or not np.isfinite(down) or down <= 0:
        return
    alike = _near(drag, down) or not np.isfinite(drag)
    if alike and abs(down - 1.0) > _FITS:
        likely = area / down
        known = "; that is 1 m²: are the coefficients areas already?" if _near(likely, 1.0) else ""
        yield (
            f"REFERENCE AREA: downforce and drag both come out {figure(down)} times the old; with a reference area of "
            f"{figure(likely)} m² instead of {figure(area)} m² they would agree{known}"
        )


def _ratio(new: np.ndarray, old: np.ndarray) -> float:
    """Ratio of two totals at the highest speed, nan where one is nothing."""
    return float(new[-1] / old[-1]) if old[-1] and new[-1] else float("nan")


def _near(value: float, target: float) -> bool:
    return bool(np.isfinite(value) and abs(value / target - 1.0) <= _FITS)
