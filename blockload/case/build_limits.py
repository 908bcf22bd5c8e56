"""Limits with their defaults, and how well numbers are known: a stated band is run at both ends."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from ..units import scaled
from .documents import split_key
from .messages import is_key, kind_of, nearest_key
from .model import Known, Limits
from .notes import Notes, key_of
from .schema import CaseTable
from .schema_block import KnownTable, LimitsTable

_FACTORS = ("yield_factor", "rupture_factor", "casting_factor", "separation_factor", "slip_factor", "bolt_factor")
_OPTIONAL = ("torsion_min", "bending_min", "twist_share", "stud_axial", "stud_shear", "face_moment")


def build_limits(table: CaseTable, notes: Notes) -> Limits:
    """Return factors, with their defaults noted, and the allowables that are given."""
    given = table.limits
    factors: dict[str, Any] = {name: notes.take(given, LimitsTable, "limits", name) for name in _FACTORS}
    factors |= {name: getattr(given, name, None) for name in _OPTIONAL}
    return Limits(**factors)


def build_known(table: CaseTable, document: Mapping[str, Any], notes: Notes) -> dict[str, Known]:
    """Return how well keys are known, by dotted key; each stated band becomes a bound."""
    known = {}
    for key, item in table.known.items():
        place = key_of("known", key)
        parts = split_key(key, notes.where(place))
        if not is_key(parts):
            notes.problem(place, f"{key!r} is not a key of a case file", "a dotted key", nearest_key(key))
            continue
        source = notes.take(item, KnownTable, place, "source")
        known[key] = Known(key=key, basis=item.basis, source=source or "unsourced", band=item.band)
        if item.band:
            _bound(key, parts, item, document, notes)
    return known


def _bound(key: str, parts: tuple[str, ...], item: KnownTable, document: Mapping[str, Any], notes: Notes) -> None:
    value: Any = document
    for part in parts:
        value = value.get(part) if isinstance(value, Mapping) else None
    kind = kind_of(parts) or ""
    if value is None:
        notes.problem(
            key_of("known", key, "band"), f"{key} has a band but no value", "a value in the file", f"add {key}"
        )
    elif kind.endswith(("_vector", "_pair")) and not kind.startswith("inertia"):
        found = f"{key} is a place or direction, and a share of it means nothing"
        notes.problem(key_of("known", key, "band"), found, "a band for single numbers and inertias", "take it out")
    elif kind:
        low, high = (scaled(value, factor) for factor in (1.0 - (item.band or 0.0), 1.0 + (item.band or 0.0)))
        notes.bound(key, (low, scaled(value, 1.0), high), f"{item.basis}, with a stated band of {item.band:.3g}")
