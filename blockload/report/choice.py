"""Which margins and load cases are worth showing first."""

from __future__ import annotations

import math
from collections.abc import Iterable

import numpy as np

from ..car.model import LoadCases
from ..margins.model import Margin, Margins


def lowest(margins: Iterable[Margin], count: int | None = None) -> list[Margin]:
    """Return margins from the lowest up; those without load last."""
    ordered = sorted(margins, key=lambda item: math.inf if item.margin is None else item.margin)
    return ordered if count is None else ordered[:count]


def lowest_per_criterion(margins: Iterable[Margin]) -> list[Margin]:
    """Return the lowest margin of every criterion, from the lowest up."""
    first: dict[str, Margin] = {}
    for item in lowest(margins):
        first.setdefault(item.criterion, item)
    return list(first.values())


def extreme_indices(cases: LoadCases) -> list[int]:
    """Return the load cases that pull, press or shear some stud most, in the order of the cases."""
    found: set[int] = set()
    for face in cases.faces.values():
        axial = face.stud_axial.sum(axis=1)
        shear = np.linalg.norm(face.stud_shear.sum(axis=1), axis=-1)
        for values in (axial, -axial, shear):
            found |= {int(i) for i in values.argmax(axis=0)}
    return sorted(found)


def governing_index(cases: LoadCases, margins: Margins | None = None) -> int:
    """Return the load case to show first: that of the lowest margin, else that of the greatest stud force."""
    if margins is not None:
        for item in lowest(margins.margins):
            if item.load_case in cases.names and item.margin is not None:
                return cases.names.index(item.load_case)
    peaks = [np.abs(face.stud_axial.sum(axis=1)).max(axis=1, initial=0.0) for face in cases.faces.values()]
    return int(np.max(peaks, axis=0).argmax()) if peaks else 0
