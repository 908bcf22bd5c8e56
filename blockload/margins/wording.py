"""What every margin says alike: its stamp, and its causes in order."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ..arrays import Floats
from .model import Cause

LARGEST = 999.0  # margins are cut here: beyond it an end of a band has practically no load
INCREMENT = "chassis load only: no assembly, gas or heat"


def margin_at(allowable: float, factor: float, applied: float) -> float:
    """Return allowable / (factor × applied) − 1, cut at LARGEST; an allowable used up already fails by one."""
    if allowable <= 0.0:
        return -1.0
    return float(allowable / max(factor * applied, allowable / (1.0 + LARGEST)) - 1.0)


def causes(sources: Sequence[str], split: Floats) -> tuple[Cause, ...]:
    """Return the causes of a margin, largest first; sources without a share are left out."""
    order = np.argsort(-np.abs(split), kind="stable")
    return tuple(Cause(source=sources[i], share=float(split[i])) for i in order if split[i] != 0.0)
