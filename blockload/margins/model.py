"""A margin, what may be concluded from all of them, and why."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from ..arrays import Floats, Ints
from ..case.model import Check

TRUST = ("converged", "coarse", "singular", "near an attachment")
VERDICTS = ("ruled out", "not shown", "shown within scope")


@dataclass(frozen=True, slots=True, kw_only=True)
class Cause:
    """One source's share of an applied value; the shares of a margin sum to 1 and may be negative."""

    source: str
    share: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Margin:
    """allowable / (factor × applied) − 1 for one criterion at one place, governing case first.

    `margin` is the worse end of `band` (None without load); `second` is the second-worst case and its margin;
    `spread` is how far the stress of single elements lies from its mean, as a share, where that was looked at.
    """

    criterion: str
    place: str
    at: tuple[float, float, float]
    load_case: str
    applied: float
    allowable: float
    unit: str
    factor: float
    margin: float | None
    band: tuple[float, float] | None
    trust: str
    causes: tuple[Cause, ...]
    second: tuple[str, float] | None = None
    method: str = ""
    note: str = ""
    spread: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Verdict:
    """The word, how far the block is known, the lowest margin and what was not judged."""

    word: str
    level: str
    lowest_margin: float | None
    governing: str
    reasons: tuple[str, ...]
    not_judged: tuple[str, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Movement:
    """How far one bounded input moves the lowest margin: margin and verdict with the input at its low and high end."""

    key: str
    low: str
    high: str
    margin_low: float | None
    margin_high: float | None
    word_low: str
    word_high: str


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class SurfaceMargins:
    """Margin field over the library's surface entries: worst over criteria and cases at the middle stiffness.

    ratio (m,) is factor × applied / allowable (1 fails); case (m,) indexes the load cases.
    """

    ratio: Floats
    case: Ints
    criterion: Ints


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Margins:
    """Everything judged in one run.

    rear_face: how far the gearbox's flange moves against the tub per load case, translation [m] then rotation [rad].
    """

    margins: tuple[Margin, ...]
    checks: tuple[Check, ...]
    verdict: Verdict
    surface: SurfaceMargins | None = None
    stiffness: Mapping[str, float] = field(default_factory=dict)
    requirements: Mapping[str, Mapping[str, float]] = field(default_factory=dict)
    movements: tuple[Movement, ...] = ()
    rear_face: Mapping[str, tuple[float, ...]] = field(default_factory=dict)
