"""Where the block comes from, what it is made of, and how it is held.

Frozen values in SI units and the car's axes; `case.model` explains them all and gathers them in one Case.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from ..arrays import Floats


@dataclass(frozen=True, slots=True, kw_only=True)
class MaterialChoice:
    """A volume (name or fnmatch pattern), the grade it is made of or its own properties, its temperature [K]."""

    volume: str
    grade: str | None
    properties: Mapping[str, Any] | None
    temperature: float | None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Carried:
    """A mass the mesh does not have, carried by a named attachment; inertia (3, 3) about its own cg."""

    name: str
    on: str
    mass: float
    cg: Floats
    inertia: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BeamWall:
    """A wall of a thin-walled section: centre line through points (n, 2) = (y, z), thickness, closed on itself."""

    points: Floats
    thickness: float
    closed: bool = False


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BeamStation:
    """The section at x, by its walls or else by its properties [m², m⁴, m³, m⁶], (2,) in the order y, z.

    second_moments are (about y, about z), product ∫yz dA, all at the centroid; fibres (p, 2).
    """

    name: str
    x: float
    walls: Mapping[str, BeamWall]
    area: float | None = None
    centroid: Floats | None = None
    second_moments: Floats | None = None
    product: float = 0.0
    torsion_constant: float | None = None
    shear_areas: Floats | None = None
    shear_centre: Floats | None = None
    torsion_modulus: float | None = None
    warping_constant: float = 0.0
    fibres: Floats


@dataclass(frozen=True, slots=True, kw_only=True)
class MeasuredStiffness:
    """What a supplier measured between the faces [N·m/rad], with its source."""

    torsion: float
    bending_vertical: float
    bending_lateral: float
    source: str


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BeamSpec:
    """The block as a beam: stations in order of x or measured stiffness, mass of the metal, places (3,) by name."""

    stations: tuple[BeamStation, ...]
    stiffness: MeasuredStiffness | None
    mass: float | None
    places: Mapping[str, Floats]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BlockSpec:
    """Where the block comes from and how its names meet the car's.

    `use` says which description is judged; mesh and beam are None where not given, but for the one used.
    """

    use: str = "mesh"
    beam: BeamSpec | None = None
    mesh: Path | None
    mesh_unit: float
    turn: Floats
    place: Floats
    carried_on: str
    carried: tuple[Carried, ...]
    materials: tuple[MaterialChoice, ...]
    front: Mapping[str, str]
    rear: Mapping[str, str]
    other: Mapping[str, str]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Installation:
    """How the block is held.

    `pad_stiffness` lists (label, normal, tangential) [N/m] per pad: one entry where the user gave it, three
    (soft, middle, stiff) where it is bounded; empty without any base for an estimate.
    `tub` is None for a rigid tub, else a (3n, 3n) stiffness in stud order. `second_paths` is the user's own
    statement ("none" or None when unstated).
    """

    pad_stiffness: tuple[tuple[str, float, float], ...]
    pad_stiffness_given: bool
    tub: Floats | None
    second_paths: str | None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class SecondPath:
    """A spring [N/m] along the line between a point (3,) of one body and a point (3,) of another."""

    name: str
    from_body: str
    from_at: Floats
    to_body: str
    to_at: Floats
    stiffness: float
