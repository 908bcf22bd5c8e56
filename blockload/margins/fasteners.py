"""Studs and bolts: what a size and a property class carry, from data/fasteners.toml.

Stress area A_s = π/4 (d − 0.9382 P)² (ISO 898-1, 9.1.6.1); the proof load is the proof stress times A_s.
"""

from __future__ import annotations

import re
import tomllib
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any

import numpy as np

from ..errors import CaseError, nearest


@dataclass(frozen=True, slots=True, kw_only=True)
class Fastener:
    """One size and class: diameters and pitch m, area m², strengths Pa; minima of the standard."""

    size: str
    property_class: str
    diameter: float
    pitch: float
    area: float
    tensile_strength: float
    yield_strength: float
    proof_stress: float
    source: str

    @property
    def proof_load(self) -> float:
        """Load the standard lets it carry without set [N]."""
        return self.proof_stress * self.area

    @property
    def breaking_load(self) -> float:
        """Least load at rupture [N]."""
        return self.tensile_strength * self.area


@cache
def fastener(size: str, property_class: str) -> Fastener:
    """Return a fastener by size ("M12", or "M12x1.25" for a fine thread) and property class ("12.9").

    Raises
    ------
    CaseError
        For a size or class that is not in the table.

    """
    diameter, pitch = _thread(size)
    row = _class_row(property_class, diameter)
    return Fastener(
        size=size,
        property_class=property_class,
        diameter=diameter,
        pitch=pitch,
        area=float(np.pi / 4.0 * (diameter - 0.9382 * pitch) ** 2),
        tensile_strength=row["tensile_strength"],
        yield_strength=row["yield_strength"],
        proof_stress=row["proof_stress"],
        source=row["source"],
    )


@cache
def _table() -> dict[str, Any]:
    return tomllib.loads(files("blockload.data").joinpath("fasteners.toml").read_text(encoding="utf-8"))


def _thread(size: str) -> tuple[float, float]:
    match = re.fullmatch(r"(M(\d+(?:\.\d+)?))(?:\s?[x×]\s?(\d+(?:\.\d+)?))?", size.strip())
    pitches = {name: value for name, value in _table()["pitch"].items() if name != "source"}
    if match is None or (match[3] is None and match[1] not in pitches):
        raise CaseError(
            "stud size",
            repr(size),
            ", ".join(pitches) + ", or a fine thread such as M12x1.25",
            "give an ISO metric thread." + nearest(size, pitches),
        )
    diameter = float(match[2]) * 1e-3
    pitch = float(match[3]) * 1e-3 if match[3] else pitches[match[1]]
    if not 0.0 < pitch < 0.5 * diameter:
        raise CaseError("stud size", f"{size!r}: pitch {pitch * 1e3:g} mm", "less than half the diameter")
    return diameter, pitch


def _class_row(property_class: str, diameter: float) -> dict[str, Any]:
    rows: list[dict[str, Any]] = _table()["class"]
    for row in rows:
        if row["name"] == property_class and diameter <= row.get("up_to", np.inf) * (1.0 + 1e-9):
            return row
    known = sorted({row["name"] for row in rows}, key=float)
    raise CaseError(
        "stud property_class",
        f"{property_class!r} at {diameter * 1e3:g} mm",
        ", ".join(known) + " (9.8 up to 16 mm)",
        "give a property class of ISO 898-1." + nearest(property_class, known),
    )
