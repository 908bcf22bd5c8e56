"""Beams for tests: made of a box's own section, or from sections given outright."""

from __future__ import annotations

from types import MappingProxyType

import numpy as np
from boxes import material

from blockload.block.beam import BeamBlock, weighed
from blockload.block.model import Attachment
from blockload.block.sections import Section, section_mass, section_stiffness


def beam_of(x: np.ndarray, sections: list[Section], points: list[tuple[str, str, tuple]]) -> BeamBlock:
    """A beam with one section to each piece and points (name, kind, place) on rigid arms."""
    metal = material()
    shear = metal.youngs_modulus / (2 * (1 + metal.poissons_ratio))
    per_length = np.array([section_mass(item, metal.density) for item in sections])
    metal_of = weighed(x, per_length)
    return BeamBlock(
        x=x,
        elastic=np.array([section_stiffness(item, metal.youngs_modulus, shear) for item in sections]),
        per_length=per_length,
        fibres=np.array([[item.fibres] * 2 for item in sections]),
        recovery=np.array([[item.recovery] * 2 for item in sections]),
        warping=np.array([metal.youngs_modulus * item.warping_constant for item in sections]),
        volumes=("beam",),
        materials=MappingProxyType({"beam": metal}),
        attachments=tuple(_point(*item) for item in points),
        sha256="0" * 64,
        mass=metal_of.mass,
        cg=metal_of.cg,
        inertia=metal_of.inertia,
        metadata=MappingProxyType({}),
    )


def _point(name: str, kind: str, at: tuple) -> Attachment:
    return Attachment(
        name=name,
        kind=kind,
        sets=(),
        facets=np.zeros(0, dtype=np.int64),
        area=1e-3,
        centroid=np.array(at, dtype=float),
        normal=np.array([1.0, 0.0, 0.0]),
        moments=np.diag([0.0, 1e-7, 1e-7]),
    )
