"""A block with names: volumes of one material each, and attachments through which wrenches enter."""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np

from ..arrays import Floats, Ints

if TYPE_CHECKING:
    from skfem import MeshTet2


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Material:
    """Isotropic, linear elastic; Pa, kg/m³, 1/K. Strengths are those of the casting at its temperature.

    `yield_strength` and `tensile_strength` already carry the knock-down for the casting itself (EN 1706) and for
    temperature, both kept beside them (`temperature_factor` is the yield strength's); `sources` gives the source of
    every value.
    """

    name: str
    youngs_modulus: float
    poissons_ratio: float
    density: float
    thermal_expansion: float
    yield_strength: float
    tensile_strength: float
    bar_yield_strength: float
    bar_tensile_strength: float
    casting_knock_down: float
    temperature: float
    temperature_factor: float
    cast: bool
    sources: Mapping[str, str]
    tensile_temperature_factor: float = 1.0


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Attachment:
    """A named set of boundary facets (indices into mesh.facets) through which one wrench enters.

    kind is "front", "rear" or "other"; `sets` the face sets united in it; centroid (3,) and normal (3,) (outward,
    area mean) in car axes; `moments` (3, 3) is the second moment of area about the centroid, ∫ r rᵀ dA.
    """

    name: str
    kind: str
    sets: tuple[str, ...]
    facets: Ints
    area: float
    centroid: Floats
    normal: Floats
    moments: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class CarriedMass:
    """A mass the mesh does not have, on a named attachment: kg, cg (3,) in the car, inertia (3, 3) about its cg."""

    name: str
    attachment: str
    mass: float
    cg: Floats
    inertia: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class AnyBlock(ABC):
    """What every block has, however far it is known, in car axes [m].

    `materials` maps a volume to what it is made of. mass [kg], cg (3,) and inertia (3, 3) about cg are those of the
    metal that is modelled; `carried` are the masses it does not have, the remainder of the engine included; sha256 is
    that of the mesh file, empty without one.
    """

    volumes: tuple[str, ...]
    materials: Mapping[str, Material]
    attachments: tuple[Attachment, ...]
    sha256: str
    mass: float
    cg: Floats
    inertia: Floats
    metadata: Mapping[str, Any]
    carried: tuple[CarriedMass, ...] = ()

    def attachment(self, name: str, kind: str | None = None) -> Attachment:
        """Return the attachment of this name (and kind, where a stud name occurs on both faces)."""
        for item in self.attachments:
            if item.name == name and (kind is None or item.kind == kind):
                return item
        raise KeyError(name)

    @abstractmethod
    def outline(self) -> Floats:
        """Return points (n, 3) that span the metal."""

    @abstractmethod
    def contact(self, item: Attachment) -> Floats:
        """Return points (n, 3) of an attachment."""

    @property
    @abstractmethod
    def counts(self) -> tuple[int, int]:
        """Number of nodes and of elements."""

    @property
    @abstractmethod
    def rigid_faces(self) -> bool:
        """Whether the pads of a face are joined rigidly to each other."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Block(AnyBlock):
    """A 10-node tetrahedral mesh with its names.

    `mesh` is scikit-fem's MeshTet2 with `boundaries` (named facet sets) and `subdomains` (named volumes);
    `volume_of` (n_elements,) indexes `volumes`.
    """

    mesh: MeshTet2
    volume_of: Ints

    def outline(self) -> Floats:
        """Return the corners of all elements (n, 3)."""
        return np.asarray(self.mesh.p.T)

    def contact(self, item: Attachment) -> Floats:
        """Return the corners of an attachment's facets (n, 3)."""
        return np.asarray(self.mesh.p.T[np.unique(self.mesh.facets[:, item.facets])])

    @property
    def counts(self) -> tuple[int, int]:
        """Number of nodes and of elements."""
        return int(self.mesh.doflocs.shape[1]), int(self.mesh.t.shape[1])

    @property
    def rigid_faces(self) -> bool:
        """False: metal lies between the pads."""
        return False
