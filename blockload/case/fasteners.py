"""Metric studs: what a size and a property class carry, and a first estimate of the clamped boss's stiffness.

Stress area A_s = π/4 (d − 0.9382 P)² (ISO 898-1, 9.1.6.1); the proof load is the proof stress times A_s. The numbers
and their sources stand in data/fasteners.toml.
"""

from __future__ import annotations

import math
import re
import tomllib
from dataclasses import dataclass
from functools import cache
from importlib.resources import files
from typing import Any

from ..errors import CaseError, nearest

ALUMINIUM_E = 70e9
ALUMINIUM_G = 27e9
"""Young's and shear modulus of aluminium [Pa] (EN 1999-1-1, 3.2.5)."""


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
def _table() -> dict[str, Any]:
    return tomllib.loads(files("blockload.data").joinpath("fasteners.toml").read_text(encoding="utf-8"))


@cache
def fastener(size: str, property_class: str, where: str = "stud") -> Fastener:
    """Return a fastener by size ("M12", or "M12x1.25" for a fine thread) and property class ("12.9").

    Raises
    ------
    CaseError
        For a size or class that is not in the table.

    """
    diameter, pitch = dimensions(size, where)
    row = _class_row(property_class, diameter, where)
    return Fastener(
        size=size,
        property_class=property_class,
        diameter=diameter,
        pitch=pitch,
        area=math.pi / 4.0 * (diameter - 0.9382 * pitch) ** 2,
        tensile_strength=row["tensile_strength"],
        yield_strength=row["yield_strength"],
        proof_stress=row["proof_stress"],
        source=row["source"],
    )


def dimensions(size: str, where: str) -> tuple[float, float]:
    """Return diameter and pitch [m] of "M12" or "M12x1.25".

    Raises
    ------
    CaseError
        If the size is none, or has no coarse pitch here.

    """
    pitches = {name: value for name, value in _table()["pitch"].items() if name != "source"}
    match = re.fullmatch(r"(M(\d+(?:\.\d+)?))(?:\s?[x×]\s?(\d+(?:\.\d+)?))?", size.strip())
    allowed = ", ".join(pitches) + ", or a fine thread such as M12x1.25"
    if match is None or (match[3] is None and match[1] not in pitches):
        raise CaseError(where, f"{size!r} is no metric thread known here", allowed, nearest(size, pitches))
    diameter = float(match[2]) * 1e-3
    pitch = float(match[3]) * 1e-3 if match[3] else float(pitches[match[1]])
    if not 0.0 < pitch < 0.5 * diameter:
        raise CaseError(where, f"{size!r} has a pitch of {pitch * 1e3:g} mm", "less than half the diameter")
    return diameter, pitch


def proof_load(size: str, property_class: str, where: str) -> float:
    """Return the proof load [N] of a stud; raises CaseError for an unknown size or property class."""
    return fastener(size, property_class, where).proof_load


def _class_row(property_class: str, diameter: float, where: str) -> dict[str, Any]:
    rows: list[dict[str, Any]] = _table()["class"]
    for row in rows:
        if row["name"] == property_class and diameter <= row.get("up_to", math.inf) * (1.0 + 1e-9):
            return row
    known = sorted({row["name"] for row in rows}, key=float)
    found = f"{property_class!r} at {diameter * 1e3:g} mm is no property class known here"
    raise CaseError(where, found, ", ".join(known) + " (9.8 up to 16 mm)", nearest(property_class, known))


def boss_stiffness(size: str, grip: float | None, where: str) -> tuple[float, float]:
    """Return normal and tangential stiffness [N/m] of the boss a stud clamps: E A / l and G A / l.

    A is the ring between a clearance hole of 1.1 d and a boss of 2.5 d, l the clamped length (3 d when unknown), the
    metal aluminium. An order of magnitude only: it is run at a tenth and at ten times this.
    """
    diameter, _ = dimensions(size, where)
    area = math.pi / 4.0 * ((2.5 * diameter) ** 2 - (1.1 * diameter) ** 2)
    length = grip if grip is not None else 3.0 * diameter
    return ALUMINIUM_E * area / length, ALUMINIUM_G * area / length
