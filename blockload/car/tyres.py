"""How much of its grip each tyre uses, with friction that falls with load.

A wheel at vertical load Fz holds while
    sqrt((Fx / mu_x)^2 + (Fy / mu_y)^2) <= Fz [1 - k (Fz - Fz0)],
the friction ellipse with a linear loss of friction k about the reference load Fz0 (W. F. Milliken, D. L. Milliken,
*Race Car Vehicle Dynamics*, SAE 1995, ch. 2, describes both; chapter from memory). Use is the left side over the right.
"""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..case.model import Tyres
from ..errors import CaseError


def grip_load(tyres: Tyres, load: Floats) -> Floats:
    """Load [N] (...) that counts for grip, Fz [1 - k (Fz - Fz0)], from vertical loads (...); nan where none is left."""
    factor: Floats = np.ones_like(load)
    if tyres.load_sensitivity:
        if tyres.reference_load is None:
            remedy = "give the wheel load at which mu_x and mu_y were measured"
            raise CaseError("[tyres] reference_load", "not given, with a load_sensitivity", "a wheel load", remedy)
        factor = 1.0 - tyres.load_sensitivity * (load - tyres.reference_load)
    left = load * factor
    result: Floats = np.where((load > 0) & (factor > 0), left, np.nan)
    return result


def tyre_use(tyres: Tyres, force: Floats) -> Floats:
    """Share of its grip that each tyre uses, (...), from road forces (..., 3).

    nan where friction is unknown, or a loaded wheel has no grip left; 0 on a wheel without load or force.
    """
    x, y, z = np.moveaxis(force, -1, 0)
    along, across = (tyres.mu_x or tyres.mu_y), (tyres.mu_y or tyres.mu_x)
    if along is None or across is None:
        return np.full_like(z, np.nan)
    demand = np.hypot(x / along, y / across)
    free = (z == 0) & (demand == 0)
    result: Floats = np.where(free, 0.0, demand / grip_load(tyres, np.where(free, np.nan, z)))
    return result
