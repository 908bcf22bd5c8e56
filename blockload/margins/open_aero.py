"""Margins over every way to share out whole-car aero: worst and best end, and what may still be concluded.

The load r = factor x applied / allowable of each criterion is convex in the split (a norm, or the greatest of linear
figures), so its greatest value lies at an extreme split, and the low end of a margin's band is exact. Its least value
may lie between them. With V extreme splits and m their mean, every split p lies across from another one r:
m = p/V + (1 - 1/V) r, so that by convexity r(p) >= V r(m) - (V - 1) r_max. Only where this stays above 1 does a margin
fail in every split; otherwise its band is taken up to zero.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

from ..car.model import LoadCases
from ..case.model import Case
from .judging import verdict
from .model import Margin, Margins

_NOTE = "over every split of [aero_total] that keeps total and balance"


def over_splits(case: Case, cases: LoadCases, middle: Margins, ends: Sequence[Margins]) -> Margins:
    """Return the margins of the middle split widened by those at every extreme split, and the verdict they leave."""
    place: dict[tuple[str, str], list[Margin]] = {}
    for end in ends:
        for item in end.margins:
            place.setdefault((item.criterion, item.place), []).append(item)
    found = [_widened(item, place.pop((item.criterion, item.place), []), len(ends)) for item in middle.margins]
    found += [_widened(None, items, len(ends)) for items in place.values()]
    failed = {check.name: check for end in ends for check in end.checks if not check.ok}
    checks = tuple(failed.get(check.name, check) for check in middle.checks)
    margins = tuple(found)
    said = verdict(case, cases, margins, checks, level=middle.verdict.level)
    return replace(middle, margins=margins, checks=checks, verdict=said)


def _widened(middle: Margin | None, ends: Sequence[Margin], count: int) -> Margin:
    """One margin with the band of all splits; it stands where it is worst."""
    items = [item for item in ((middle,) if middle is not None else ()) if item is not None] + list(ends)
    loaded = [item for item in items if item.margin is not None]
    if not loaded:
        return items[0]
    worst = min(loaded, key=lambda item: item.margin or 0.0)
    low = min(min(_band(item)) for item in loaded)
    high = max(max(_band(item)) for item in loaded)
    everywhere = middle is not None and len(loaded) == count + 1
    if high < 0.0:
        least = count * _ratio(max(_band(middle))) - (count - 1) * _ratio(low) if everywhere and middle else 0.0
        high = max(high, 1.0 / least - 1.0) if least > 1.0 else 0.0
    note = f"{worst.note}; {_NOTE}" if worst.note else _NOTE
    return replace(worst, margin=low, band=(low, high), note=note)


def _band(item: Margin) -> tuple[float, float]:
    return item.band if item.band is not None else (item.margin or 0.0, item.margin or 0.0)


def _ratio(margin: float) -> float:
    """Load over what may be borne; infinite where nothing may."""
    return 1.0 / (1.0 + margin) if margin > -1.0 else float("inf")
