"""What a missing number may do to the verdict.

A bounded input is run at both ends with everything else at its middle. Where the lowest margin changes sign
between the ends, or an end gives no margin at all, nothing is shown and nothing is ruled out: the number must be
found first. Otherwise the verdict stands, and the input is listed with how far it moves the lowest margin.
"""

from __future__ import annotations

from dataclasses import replace

from .model import Margins, Movement, Verdict


def extent(movement: Movement) -> float:
    """How far one input moves the lowest margin (infinite where an end has none)."""
    if movement.margin_low is None or movement.margin_high is None:
        return float("inf")
    return abs(movement.margin_high - movement.margin_low)


def moved(margins: Margins, movements: tuple[Movement, ...]) -> Margins:
    """Return the margins with their movements, largest first, and the verdict they leave standing."""
    ordered = tuple(sorted(movements, key=extent, reverse=True))
    return replace(margins, movements=ordered, verdict=_verdict(margins.verdict, ordered))


def _verdict(verdict: Verdict, movements: tuple[Movement, ...]) -> Verdict:
    deciding = tuple(item.key for item in movements if _decides(verdict, item))
    if not deciding:
        return verdict
    reason = "decided by a number that is missing from the case file: " + ", ".join(deciding)
    return replace(verdict, word="not shown", reasons=(*verdict.reasons, reason))


def _decides(verdict: Verdict, movement: Movement) -> bool:
    """Whether the lowest margin has the other sign, or none, at either end of the input."""
    if verdict.lowest_margin is None:
        return False
    fails = verdict.lowest_margin < 0.0
    ends = (movement.margin_low, movement.margin_high)
    return any(end is None or (end < 0.0) != fails for end in ends)
