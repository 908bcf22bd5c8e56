"""Dynamic factors: what a blow adds to the loads of a car at rest.

A factor n on a static wheel load stands for the load n S at the peak of a bump: the catalogue puts n - 1 times the
wheel's static load on top of the rolling car, so that weight and inertia are multiplied once and the air, which does
not know of the bump, never. A measured force stands in place of a factor, never beside it.
"""

from __future__ import annotations

from ...case.factors import DEFAULTS
from ...case.model import Case, Factor


def factor(case: Case, name: str) -> Factor:
    """The case's own factor, or the one that ships with its source."""
    own = case.catalogue.factors.get(name) if case.catalogue is not None else None
    return own if own is not None else DEFAULTS[name]


def side_force(weight: float, track: float, cg_height: float, value: float) -> float:
    """Side force K W B / (2 h) [N], K times what tips the car over.

    J. C. Brown, A. J. Robertson, S. T. Serpento, *Motor Vehicle Structures* (2002), p. 24; weight W [N], track B and
    CG height h [m].
    """
    return value * weight * track / (2.0 * cg_height)
