"""What results.json adds to a load case about its aero: ride heights, a map read beyond its grid, and open bounds."""

from __future__ import annotations

from typing import Any

import numpy as np

from ..arrays import Floats
from ..car.model import SECTION, AeroBounds, LoadCases


def aero_written(cases: LoadCases, index: int) -> dict[str, Any]:
    """Return the key "aero" of one load case, or nothing where there is nothing to add.

    ride_height [front, rear] in m; beyond_map: which map was read at its edge, null for none; bounds: least and
    greatest of every section component and stud force over all splits of whole-car aero.
    """
    found: dict[str, Any] = {}
    if len(cases.ride_height) and np.isfinite(cases.ride_height[index]).all():
        found["ride_height"] = cases.ride_height[index]
    if any(cases.outside_map):
        found["beyond_map"] = cases.outside_map[index] or None
    if cases.aero_bounds is not None:
        found["bounds"] = {name: _bounds(cases, cases.aero_bounds, name, index) for name in cases.faces}
    return {"aero": found} if found else {}


def _bounds(cases: LoadCases, bounds: AeroBounds, face: str, index: int) -> dict[str, Any]:
    studs = cases.faces[face].studs
    return {
        "section": _pairs(SECTION, bounds.section[face][:, index]),
        "axial": _pairs(studs, bounds.stud_axial[face][:, index]),
        "shear": _pairs(studs, bounds.stud_shear_resultant[face][:, index]),
    }


def _pairs(names: tuple[str, ...], ends: Floats) -> dict[str, Floats]:
    return dict(zip(names, ends.T, strict=True))
