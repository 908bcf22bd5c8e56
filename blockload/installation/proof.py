"""What must hold in every installed state, whatever the stiffness: measured, not assumed.

Pads of a face sum to what the car says crosses it, less what second paths carry past it; the acceleration that the
attachments' wrenches alone give the meshed metal is the engine's own a − g and α (anything else is inertia counted
twice or forgotten); the mass properties of the mesh are those the response library was solved with.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from ..arrays import Floats
from ..block.model import AnyBlock
from ..car.model import LoadCases
from ..case.model import Case
from ..response.model import Library
from .applied import acceleration_at
from .joining import pads
from .paths import past

TINY = np.finfo(float).tiny


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Proof:
    """relief (C, S, 6): rigid acceleration about the block's cg; the gaps and checks are shares."""

    relief: Floats
    sum_gap: float
    relief_gap: float
    checks: Mapping[str, float]


def proofs(
    weights: Floats, path_force: Floats, cases: LoadCases, block: AnyBlock, library: Library, case: Case
) -> Proof:
    """Measure the laws of the module docstring on the solved weights (P, C, S, U)."""
    gaps = {face: _face_gap(weights, path_force, cases, block, library, case, face) for face in ("front", "rear")}
    relief = rigid_acceleration(weights, library)
    wanted = np.concatenate([acceleration_at(cases, case, block.cg), cases.angular_acceleration], axis=-1)
    wanted = np.pad(wanted, ((0, 0), (0, relief.shape[2] - wanted.shape[1]), (0, 0)))
    arm = np.sqrt(np.trace(block.inertia) / (2.0 * block.mass))
    size = np.abs(wanted[..., :3]).max() + arm * np.abs(wanted[..., 3:]).max()
    off = np.abs(relief - wanted) * [1.0, 1.0, 1.0, arm, arm, arm]
    return Proof(
        relief=relief.mean(axis=0),
        sum_gap=max(gaps.values()),
        relief_gap=float(off.max() / max(size, TINY)),
        checks={
            "sum front": gaps["front"],
            "sum rear": gaps["rear"],
            "mass": abs(block.mass / library.mass - 1.0),
            "cg": float(np.abs(block.cg - library.cg).max() / arm),
            "inertia": float(np.abs(block.inertia - library.inertia).max() / np.abs(library.inertia).max()),
        },
    )


def rigid_acceleration(weights: Floats, library: Library) -> Floats:
    """Return the acceleration of the meshed metal under these weights alone, (..., 6), about its cg."""
    modes = library.rigid_modes()
    total = weights[..., : modes.shape[0]] @ modes
    force, moment = total[..., :3], total[..., 3:]
    about_cg = moment - np.cross(library.cg, force)
    return np.concatenate([force / library.mass, about_cg @ np.linalg.inv(library.inertia).T], axis=-1)


def face_sum(weights: Floats, block: AnyBlock, library: Library, case: Case, face: str, reference: Floats) -> Floats:
    """Return the sum of a face's pad wrenches about a reference point, (..., 6), on the block."""
    total = np.zeros((*weights.shape[:-1], 6))
    for pad in pads(block, case, face):
        wrench = weights[..., library.rows(face, pad.name)]
        force = wrench[..., :3]
        moment = wrench[..., 3:] + np.cross(pad.centroid - reference, force)
        total += np.concatenate([force, moment], axis=-1)
    return total


def _face_gap(
    weights: Floats,
    path_force: Floats,
    cases: LoadCases,
    block: AnyBlock,
    library: Library,
    case: Case,
    face: str,
) -> float:
    loads = cases.faces[face]
    total = face_sum(weights, block, library, case, face, loads.reference).sum(axis=2)
    for index, path in enumerate(case.paths):
        total += path_force[..., index].sum(axis=2)[..., None] * past(path, face, loads.reference)
    gap = total - loads.wrench.sum(axis=1)
    arm = float(np.linalg.norm(loads.stud_at - loads.stud_at.mean(axis=0), axis=1).mean()) or 1.0
    scale = np.array([1.0, 1.0, 1.0, *[1.0 / arm] * 3])
    size = np.abs(loads.wrench.sum(axis=1) * scale).max()
    return float(np.abs(gap * scale).max() / max(size, TINY))
