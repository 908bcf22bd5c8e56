"""What a case file says, as frozen values in SI units and the car's axes (ISO 8855).

No parsing lives here: the reader builds these, every later room only reads them, and takes all of them from here.
Lengths m, masses kg, forces N, moments N·m, stiffness N/m and N·m/rad, angles rad, stress Pa.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from .aero_model import AeroMap, AeroTotal, Device
from .block_model import (
    BeamSpec,
    BeamStation,
    BeamWall,
    BlockSpec,
    Carried,
    Installation,
    MaterialChoice,
    MeasuredStiffness,
    SecondPath,
)
from .car_model import Axle, Body, Drive, Engine, Face, Link, Rocker, Stud, Tyres
from .situation_model import (
    CatalogueSpec,
    EnvelopeSpec,
    Factor,
    GivenForce,
    LapHistory,
    LapSpec,
    Manoeuvre,
    Performance,
    Point,
    PointForce,
    Support,
)

CORNERS = ("FL", "FR", "RL", "RR")
CARRIERS = ("tub", "engine", "gearbox")
FACES = ("front", "rear")

__all__ = [
    "CARRIERS",
    "CORNERS",
    "FACES",
    "AeroMap",
    "AeroTotal",
    "Axle",
    "BeamSpec",
    "BeamStation",
    "BeamWall",
    "BlockSpec",
    "Body",
    "Bound",
    "Carried",
    "Case",
    "CatalogueSpec",
    "Check",
    "Default",
    "Device",
    "Drive",
    "Engine",
    "EnvelopeSpec",
    "Face",
    "Factor",
    "GivenForce",
    "Installation",
    "Known",
    "LapHistory",
    "LapSpec",
    "Limits",
    "Link",
    "Manoeuvre",
    "MaterialChoice",
    "MeasuredStiffness",
    "Performance",
    "Point",
    "PointForce",
    "Rocker",
    "SecondPath",
    "Stud",
    "Support",
    "Tyres",
]


@dataclass(frozen=True, slots=True, kw_only=True)
class Limits:
    """Factors and allowables; None where the user gave none and no default exists."""

    yield_factor: float
    rupture_factor: float
    casting_factor: float
    separation_factor: float
    slip_factor: float
    bolt_factor: float
    torsion_min: float | None = None
    bending_min: float | None = None
    twist_share: float | None = None
    stud_axial: float | None = None
    stud_shear: float | None = None
    face_moment: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Known:
    """How well one key is known: basis "measured", "drawing", "estimate" or "guess"; band is a ratio or None."""

    key: str
    basis: str
    source: str
    band: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Bound:
    """A missing number run at both ends: texts as they would stand in the case file."""

    key: str
    low: str
    middle: str
    high: str
    reason: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Default:
    """A missing number that has a default, with its source ("unsourced" is said plainly)."""

    key: str
    value: str
    source: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Check:
    """One thing that can fail: value against limit, both in the unit named."""

    name: str
    ok: bool
    value: float
    limit: float
    note: str = ""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Case:
    """A case file, read, checked and converted. `document` is the merged TOML it was built from.

    chassis_torsion [N·m/rad] is the torsional stiffness between the axles, None for a rigid chassis;
    chassis_without_block says that the block's own is not in it and comes in series once known.
    """

    path: Path
    title: str
    sha256: str
    document: Mapping[str, Any]
    overrides: tuple[str, ...]
    air_density: float
    gravity: float
    bodies: Mapping[str, Body]
    axles: Mapping[str, Axle]
    devices: tuple[Device, ...]
    aero_total: AeroTotal | None
    drive: Drive
    engine: Engine
    tyre_friction: float | None
    faces: Mapping[str, Face]
    manoeuvres: tuple[Manoeuvre, ...]
    block: BlockSpec | None
    installation: Installation
    paths: tuple[SecondPath, ...]
    limits: Limits
    engine_maker_consent: str
    known: Mapping[str, Known]
    bounds: tuple[Bound, ...]
    defaults: tuple[Default, ...]
    checks: tuple[Check, ...]
    aero_split: tuple[Device, ...] = ()
    concept_grade: str | None = None
    tyres: Tyres = field(default_factory=Tyres)
    chassis_torsion: float | None = None
    chassis_without_block: bool = False
    points: Mapping[str, Point] = field(default_factory=dict)
    performance: Performance = field(default_factory=Performance)
    catalogue: CatalogueSpec | None = None
    envelope: EnvelopeSpec | None = None
    laps: tuple[LapSpec, ...] = ()

    @property
    def wheelbase(self) -> float:
        """Distance between the axles [m]."""
        return self.axles["front"].x - self.axles["rear"].x
