"""Names of the catalogue's groups of standard situations, and of what a case file may give for them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from types import MappingProxyType

COLLECTIONS: Mapping[str, tuple[str, ...]] = MappingProxyType(
    {
        "steady": ("v_max", "corner", "brake", "brake_in_corner", "power_in_corner", "crest"),
        "transient": ("kerb", "landing", "launch", "shift", "spin"),
        "handling": ("jack", "crane", "trolley", "towing"),
        "regulation": ("roll_structure", "rear_impact"),
        "rig": ("twist_rig", "bending_rig"),
    }
)
GROUPS: tuple[str, ...] = tuple(group for groups in COLLECTIONS.values() for group in groups)
WORDS: tuple[str, ...] = ("all", *COLLECTIONS, *GROUPS)

FACTORS = ("vertical", "kerb", "side", "towing")
"""Dynamic factors a case file may replace."""
FORCES = ("kerb", "landing", "spin", "towing", "roll_structure", "rear_impact")
"""Situations whose force a case file may give."""
TURNING = ("kerb", "landing", "spin", "rear_impact")
"""Groups in which the car turns as a rigid body, so that inertias count."""
BRAKING = ("brake", "brake_in_corner", "kerb")
"""Groups in which the car brakes."""


def spelled_out(words: Sequence[str]) -> tuple[str, ...]:
    """Return single groups, each once and in the catalogue's order, for "all", collections and group names."""
    wanted: set[str] = set()
    for word in words:
        wanted |= set(GROUPS if word == "all" else COLLECTIONS.get(word, (word,)))
    return tuple(group for group in GROUPS if group in wanted)
