"""What every margin says alike: its stamp, and its causes in order."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ..arrays import Floats
from .model import Cause

INCREMENT = "chassis load only: no assembly, gas or heat"


def causes(sources: Sequence[str], split: Floats) -> tuple[Cause, ...]:
    """Return the causes of a margin, largest first; sources without a share are left out."""
    order = np.argsort(-np.abs(split), kind="stable")
    return tuple(Cause(source=sources[i], share=float(split[i])) for i in order if split[i] != 0.0)
