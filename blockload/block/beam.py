"""The block as a beam between its faces: uniform pieces along x, pads on rigid arms at the studs, one material.

Sections are perpendicular to the car's x and may lie anywhere in y and z; between two stations every property (or
every wall's points and thickness) runs linearly, beyond the outermost it stays. Two stations at one x make a step.
Each piece takes the section at its middle; stress is known at both of its ends with the section there. Rigid faces
make a beam stiffer than a block, walls that breathe or warp make it softer: it can rule a block out, never show it.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from itertools import pairwise
from types import MappingProxyType

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import FACES, BeamSpec, BeamStation, Case, Face
from ..errors import BlockError
from .beam_pads import beam_attachments, walls_of
from .model import AnyBlock, Attachment, Material
from .moments import MassProperties
from .sections import Section, given_section, mass_per_length, section_stiffness
from .thin_walls import between, thin_walled
from .volumes import assign

VOLUME = "beam"
PIECES = 48
"""Pieces between the faces; the error falls with their square, and halving them moves the demo beam by 2e-3."""
_APART = 1e-3
"""Nodes nearer than this to that of an attachment make way for it [m]."""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BeamBlock(AnyBlock):
    """Nodes x (N,) on the line y = z = 0 from the rear face to the front one, a uniform piece between each two.

    elastic and per_length (N − 1, 6, 6): stiffness and mass of each piece's section about that line. fibres
    (N − 1, 2, p, 2) and recovery (N − 1, 2, p, 3, 6): where at both ends of each piece stress xx, xy, xz is known, and
    for which forces (p = 0 for a measured stiffness). warping (N − 1,): Young's modulus times the warping constant of
    each piece's section [N·m⁴], 0 where it is not known.
    """

    x: Floats
    elastic: Floats
    per_length: Floats
    fibres: Floats
    recovery: Floats
    warping: Floats

    def outline(self) -> Floats:
        """Return the fibres, or without any the attachments (n, 3)."""
        ends = np.stack([self.x[:-1], self.x[1:]], axis=1)
        along = np.broadcast_to(ends[:, :, None, None], (*self.fibres.shape[:3], 1))
        fibres = np.concatenate([along, self.fibres], axis=3).reshape(-1, 3)
        return np.concatenate([fibres, [item.centroid for item in self.attachments]])

    def contact(self, item: Attachment) -> Floats:
        """Return an attachment's centre (1, 3)."""
        return item.centroid[None]

    @property
    def counts(self) -> tuple[int, int]:
        """Number of nodes and of elements."""
        return len(self.x), len(self.x) - 1

    @property
    def rigid_faces(self) -> bool:
        """True: pads sit on rigid arms from the end of the beam."""
        return True


def build_beam(case: Case) -> BeamBlock:
    """Return the block of a case as a beam in car axes, without carried masses.

    Raises BlockError for a beam that cannot be used.
    """
    spec = case.block
    if spec is None or spec.beam is None:
        raise BlockError("block.beam", "the case describes no beam", "a [block.beam] table")
    material = assign((VOLUME,), spec.materials)[VOLUME]
    beam, faces = spec.beam, case.faces
    if beam.stiffness is not None:
        x, elastic, per_length = _measured(beam, faces)
        fibres, recovery = np.zeros((len(x) - 1, 2, 0, 2)), np.zeros((len(x) - 1, 2, 0, 3, 6))
        warping = np.zeros(len(x) - 1)
    else:
        x, elastic, per_length, fibres, recovery, warping = _sectioned(beam, faces, material)
    metal = weighed(x, per_length)
    return BeamBlock(
        x=frozen(x),
        elastic=frozen(elastic),
        per_length=frozen(per_length),
        fibres=frozen(fibres),
        recovery=frozen(recovery),
        warping=frozen(warping),
        volumes=(VOLUME,),
        materials=MappingProxyType({VOLUME: material}),
        attachments=tuple(beam_attachments(spec, beam, faces)),
        sha256="",
        mass=metal.mass,
        cg=metal.cg,
        inertia=metal.inertia,
        metadata=MappingProxyType({"stations": [item.name for item in beam.stations]}),
    )


def _sectioned(
    beam: BeamSpec, faces: Mapping[str, Face], material: Material
) -> tuple[Floats, Floats, Floats, Floats, Floats, Floats]:
    """Nodes, stiffness and mass of each piece, fibres and recovery at both its ends, warping stiffness."""
    shear = material.youngs_modulus / (2 * (1 + material.poissons_ratio))
    x, middles = [faces["rear"].x], []
    ends: list[tuple[Section, Section]] = []
    places = np.array([at[0] for at in beam.places.values()])
    for first, last, left, right in _bays(beam.stations, faces["rear"].x, faces["front"].x):
        count = max(1, round(PIECES * (right - left) / (faces["front"].x - faces["rear"].x)))
        nodes = _nodes(left, right, count, places)
        at = [_section(first, last, place, material) for place in nodes]
        middles += [_section(first, last, place, material) for place in (nodes[1:] + nodes[:-1]) / 2]
        ends += pairwise(at)
        x += nodes[1:].tolist()
    nodes = np.array(x)
    elastic = np.array([section_stiffness(item, material.youngs_modulus, shear) for item in middles])
    weight = np.array([material.density * item.area for item in middles])
    share = 1.0 if beam.mass is None else beam.mass / float(weight @ np.diff(nodes))
    per_length = [
        mass_per_length(share * mass, item.centroid, share * mass * item.second / item.area)
        for mass, item in zip(weight, middles, strict=True)
    ]
    fibres = np.array([[item.fibres for item in pair] for pair in ends])
    recovery = np.array([[item.recovery for item in pair] for pair in ends])
    warping = material.youngs_modulus * np.array([item.warping_constant for item in middles])
    return nodes, elastic, np.array(per_length), fibres, recovery, warping


def _nodes(left: float, right: float, count: int, places: Floats) -> Floats:
    """Even nodes from left to right, with one at every place between them instead of those within 1 mm of it."""
    inside = places[(places > left + _APART) & (places < right - _APART)]
    even = np.linspace(left, right, count + 1)
    if not len(inside):
        return even
    clear = np.abs(even[:, None] - inside).min(axis=1) > _APART
    return np.unique(np.concatenate([even[clear], inside]))


def _bays(
    stations: tuple[BeamStation, ...], rear: float, front: float
) -> Iterator[tuple[BeamStation, BeamStation, float, float]]:
    """Yield (rear station, front station, from x, to x) of every bay, those beyond the outermost stations included."""
    if not stations:
        raise BlockError("block.beam", "no station", "at least one section")
    bays = [(stations[0], stations[0], rear, stations[0].x)]
    bays += [(a, b, a.x, b.x) for a, b in pairwise(stations)]
    bays.append((stations[-1], stations[-1], stations[-1].x, front))
    yield from (bay for bay in bays if bay[3] - bay[2] > 1e-6)


def _section(first: BeamStation, last: BeamStation, x: float, material: Material) -> Section:
    share = 0.0 if last.x == first.x else (x - first.x) / (last.x - first.x)
    if first.walls:
        walls = between(walls_of(first), walls_of(last), share)
        return thin_walled(walls, f"block.beam.stations.{first.name}.walls")

    def mixed(name: str) -> Floats:
        a, b = (np.asarray(_property(item, name, material), dtype=float) for item in (first, last))
        return (1 - share) * a + share * b

    about_y, about_z = mixed("second_moments")
    product = float(mixed("product"))
    return given_section(
        area=float(mixed("area")),
        centroid=mixed("centroid"),
        second=np.array([[about_z, product], [product, about_y]]),
        torsion_constant=float(mixed("torsion_constant")),
        shear_centre=mixed("shear_centre"),
        shear_area=np.diag(mixed("shear_areas")),
        fibres=mixed("fibres"),
        warping_constant=float(mixed("warping_constant")),
        torsion_modulus=None if first.torsion_modulus is None else float(mixed("torsion_modulus")),
    )


def _property(station: BeamStation, name: str, material: Material) -> object:
    """Return a property; the shear centre is by default the centroid, shear areas those of a thin square tube."""
    value = getattr(station, name)
    if value is None and name == "shear_centre":
        return station.centroid
    if value is None and name == "shear_areas":
        return square_tube_shear(material.poissons_ratio) * np.full(2, station.area)
    return value


def square_tube_shear(poisson: float) -> float:
    """Return shear area over area of a thin square tube (G. R. Cowper, J. Appl. Mech. 33 (1966) 335-340)."""
    return 20 * (1 + poisson) / (48 + 39 * poisson)


def _measured(beam: BeamSpec, faces: Mapping[str, Face]) -> tuple[Floats, Floats, Floats]:
    """One thin round tube through the studs with the measured bending and torsion: A = 2I/r², A_s = J/2r²."""
    given = beam.stiffness
    if given is None or beam.mass is None:
        raise BlockError("block.beam", "no measured stiffness with its mass", "stiffness and mass")
    rear, front = faces["rear"].x, faces["front"].x
    length = front - rear
    at = [np.array([stud.at for stud in faces[name].studs]) for name in FACES]
    centroid = np.mean([places.mean(axis=0) for places in at], axis=0)
    radius = np.sqrt(np.mean([((places - places.mean(axis=0)) ** 2).sum(axis=1).mean() for places in at]))
    bending = np.array([given.bending_lateral, given.bending_vertical]) * length
    torsion = given.torsion * length
    tube = Section(
        area=float(2 * bending.mean() / radius**2),
        centroid=centroid,
        second=np.diag(bending),
        torsion_constant=torsion,
        shear_centre=centroid,
        shear_area=np.eye(2) * torsion / (2 * radius**2),
        fibres=np.zeros((0, 2)),
        recovery=np.zeros((0, 3, 6)),
    )
    x = _nodes(rear, front, PIECES, np.array([place[0] for place in beam.places.values()]))
    weight = mass_per_length(beam.mass / length, centroid, np.eye(2) * beam.mass / length * radius**2 / 2)
    elastic = section_stiffness(tube, 1.0, 1.0)
    return x, np.tile(elastic, (len(x) - 1, 1, 1)), np.tile(weight, (len(x) - 1, 1, 1))


def weighed(x: Floats, per_length: Floats) -> MassProperties:
    """Return the mass properties of the pieces: each its slice's, plus that of its own length along x."""
    length, middle = np.diff(x), (x[1:] + x[:-1]) / 2
    slices = length[:, None, None] * per_length
    each = slices[:, 0, 0]
    mass = float(each.sum())
    first = np.column_stack([each * middle, slices[:, 2, 3], slices[:, 0, 4]])
    cg = first.sum(axis=0) / mass
    about_origin = slices[:, 3:, 3:].sum(axis=0)
    along = float((each * (middle**2 + length**2 / 12)).sum())
    about_origin[1, 1] += along
    about_origin[2, 2] += along
    mixed = middle @ first[:, 1:]
    about_origin[0, 1:] -= mixed
    about_origin[1:, 0] -= mixed
    inertia = about_origin - mass * (cg @ cg * np.eye(3) - np.outer(cg, cg))
    return MassProperties(mass=mass, cg=frozen(cg), inertia=frozen(inertia))


def held_torsion(block: BeamBlock) -> float:
    """Return how much stiffer in torsion the beam is with warping held at both faces than free: 1 or more.

    1 / (1 − tanh(a)/a) with a = (L/2) √(GJ / EΓ) of the mean section (V. Z. Vlasov, Thin-Walled Elastic Beams, 2nd ed.
    1961): large for a short open section, little for a closed one.
    """
    shear, couple = block.elastic[:, 1:3, 1:3], block.elastic[:, 1:3, 3]
    free = block.elastic[:, 3, 3] - np.einsum("ni,ni->n", couple, np.linalg.solve(shear, couple[..., None])[..., 0])
    length = np.diff(block.x)
    stiff, warping = free @ length, block.warping @ length
    if warping <= 0.0:
        return 1.0
    a = float(np.ptp(block.x)) / 2 * np.sqrt(stiff / warping)
    return float(1.0 / (1.0 - np.tanh(a) / a))
