"""What a missing number may do to the verdict.

A bounded input is run at both ends with everything else at its middle. Where the verdict is another one at either
end, nothing is shown and nothing is ruled out: the number must be found first. Otherwise the verdict stands, and the
input is listed with how far it moves the lowest margin. Inputs are moved one at a time.
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
    deciding = [item.key for item in movements if {item.word_low, item.word_high} != {verdict.word}]
    if not deciding:
        return verdict
    reason = f"missing from the case file, and the verdict turns on it: {', '.join(deciding)}"
    return replace(verdict, word="not shown", reasons=(reason, *verdict.reasons))
