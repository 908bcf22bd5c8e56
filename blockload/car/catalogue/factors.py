"""Dynamic factors: what a blow adds to the loads of a car at rest, each with its source.

A factor n on a static wheel load stands for the load n S at the peak of a bump: the catalogue puts n - 1 times the
wheel's static load on top of the rolling car, so that weight and inertia are multiplied once and the air, which does
not know of the bump, never. A measured force stands in place of a factor, never beside it.

Published values for road vehicles, of authors who do not agree with each other: J. C. Brown, A. J. Robertson,
S. T. Serpento, *Motor Vehicle Structures* (2002), table 2.4 p. 20 and p. 24; P. C. Brooks, D. Barton, J. D. Fieldhouse,
*Automotive Chassis Engineering* (2018), p. 225. No printed set for racing cars was found.
"""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

from ...case.model import Case, Factor

STATIC = "static wheel load"
WEIGHT = "weight of the car"
_BROWN = "Brown, Robertson & Serpento, Motor Vehicle Structures (2002)"
_BARTON = "Barton & Fieldhouse, Automotive Chassis Engineering (2018), p. 225: 2 to 3 x static"

DEFAULTS: Mapping[str, Factor] = MappingProxyType(
    {
        "vertical": Factor(name="vertical", value=3.0, of=STATIC, source=f"{_BARTON}, its upper end"),
        "kerb": Factor(name="kerb", value=3.0, of=STATIC, source=f"{_BARTON}; its use on a single wheel is unsourced"),
        "side": Factor(name="side", value=1.75, of="tip-over side force", source=f"Garrett (1953), in {_BROWN}, p. 24"),
        "towing": Factor(
            name="towing",
            value=0.5,
            of=WEIGHT,
            source="Commission Regulation (EU) 1005/2010: half the laden mass, pull and push",
        ),
    }
)
"""What the catalogue uses where the case gives nothing of its own."""

BRAKING: Mapping[str, Factor] = MappingProxyType(
    {
        author: Factor(name="braking", value=value, of=WEIGHT, source=f"{author}, in {_BROWN}, table 2.4 p. 20")
        for author, value in {
            "Pawlowski (1969)": 1.75,
            "Cranfield tests": 1.1,
            "Garrett (1953)": 0.75,
            "Tidbury (1966), trucks": 1.84,
        }.items()
    }
)
"""Published decelerations in g, for comparison: a car's own braking is asked, never taken from here."""


def factor(case: Case, name: str) -> Factor:
    """The case's own factor, or the catalogue's."""
    own = case.catalogue.factors.get(name) if case.catalogue is not None else None
    return own if own is not None else DEFAULTS[name]


def side_force(weight: float, track: float, cg_height: float, value: float) -> float:
    """Side force K W B / (2 h) [N]: K times what tips the car over (Brown, Robertson, Serpento 2002, p. 24)."""
    return value * weight * track / (2.0 * cg_height)
