"""What crosses the front and the rear face, and what each stud carries of it.

Tub, engine and gearbox touch only at the two faces, so each face wrench follows from statics alone: the front one is
the sum of all loads on the tub's side, the rear one the sum of all on the gearbox's side with the input shaft's
couple among them. The same two wrenches from the opposite sides are the proof.
"""

from __future__ import annotations

from collections.abc import Mapping
from types import MappingProxyType

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import FACES, Case
from ..errors import CaseError
from .bodies import Chassis
from .corners import CornerLoads
from .model import FaceLoads
from .studs import pattern, rigid_face
from .wrench import moved, sealed

_ROUNDING = 1e-9  # of the larger of force [N] and moment [N·m]


def chain_loads(loads: Floats, frame: Chassis, corners: CornerLoads, handed: Floats, shaft: Floats) -> Floats:
    """Loads (C, S, 3, 6) on tub, engine and gearbox about the origin, with all that corners and shafts hand on.

    `loads` (C, S, B, 6) act on the bodies themselves; `handed` (C, S, 3, 6) is what the corners hand on;
    `shaft` (C, S) is the input shaft's couple on the engine.
    """
    chain = loads[:, :, :3] + handed
    for i in range(len(frame.casing)):
        chain[:, :, frame.casing[i], 4] -= corners.shaft[:, :, i]
    chain[:, :, 1, 3] += shaft
    chain[:, :, 2, 3] -= shaft
    return chain


def face_loads(case: Case, chain: Floats) -> Mapping[str, FaceLoads]:
    """Both faces from the loads (C, S, 3, 6) on tub, engine and gearbox about the origin, corners included."""
    if not case.faces["front"].x > case.faces["rear"].x:
        found = f"front face at x = {case.faces['front'].x:g} m, rear face at {case.faces['rear'].x:g} m"
        remedy = "x points forward: the front face (tub to engine) has the larger x"
        raise CaseError("[faces]", found, "the front face ahead of the rear face", remedy)
    sides = {"front": chain[:, :, 0], "rear": chain[:, :, 2]}
    return MappingProxyType({name: _face(case, name, sides[name]) for name in FACES})


def front_rear_gap(chain: Floats) -> Floats:
    """Disagreement (C,) of a face wrench summed from the front and from the rear, as a share of what is summed."""
    total = chain.sum(axis=1)
    gaps, sizes = [], []
    for part in (slice(0, 3), slice(3, 6)):
        gaps.append(np.linalg.norm(total[..., part].sum(axis=1), axis=-1))
        sizes.append(np.linalg.norm(total[..., part], axis=-1).sum(axis=1))
    gap, size = np.stack(gaps), np.stack(sizes)
    size = np.maximum(size, _ROUNDING * size.max(axis=0))  # a pure couple leaves forces that are rounding alone
    worst: Floats = np.divide(gap, size, out=np.zeros_like(gap), where=size > 0).max(axis=0)
    return worst


def _face(case: Case, name: str, side: Floats) -> FaceLoads:
    face = case.faces[name]
    at = pattern(face)
    reference = np.array([face.x, *at.mean(axis=0)])
    wrench = moved(side, reference)
    axial, shear = rigid_face(at, wrench)
    tension = axial if name == "front" else -axial  # on the engine, the gearbox pulls rearward
    return FaceLoads(
        name=name,
        reference=frozen(reference),
        studs=tuple(stud.name for stud in face.studs),
        stud_at=at,
        wrench=sealed(wrench),
        stud_axial=sealed(tension),
        stud_shear=sealed(shear),
    )
