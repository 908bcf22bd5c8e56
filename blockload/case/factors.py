"""What standard situations use where the case gives nothing of its own: factors and speeds, each with its source.

Published dynamic factors are those of road vehicles, by authors who do not agree with each other: J. C. Brown,
A. J. Robertson, S. T. Serpento, *Motor Vehicle Structures* (2002), table 2.4 p. 20 and p. 24; D. Barton,
J. D. Fieldhouse, *Automotive Chassis Engineering* (2018), p. 225. No printed set for racing cars was found.
"""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

from .model import Factor

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
"""Dynamic factors where the case gives none."""

USED_BY: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {"vertical": ("crest", "landing"), "kerb": ("kerb",), "side": ("spin",), "towing": ("towing",)}
)
"""Groups of the catalogue that use each factor."""

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
"""Published decelerations in g, to compare with: a car's own braking is asked, never taken from here."""

FAST_CORNER, SLOW_CORNER = 0.8, 0.35
"""Corner speeds as shares of the highest speed; unsourced."""
CREST = -1.0
"""Vertical acceleration over a crest in g, the weight just lifted off; common practice, unsourced."""
