"""The ways a face's wrench may fall on its studs: rigid face, isostatic extremes, stud springs, installed block.

The wrench is settled by statics; its split is not. Studs on independent springs with a rigid flange between them,
f = k G (Gᵀ k G)⁻¹ W with G the motion of the studs for unit motion of the flange, give the rigid face where all studs
are alike and something else where the tub behind them is softer at some (a 3n × 3n stiffness in series with the pads).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import Floats
from ..car.model import FaceLoads
from ..car.studs import GROUPS, extremes
from ..case.model import Case
from ..installation.compliance import stiffness_variants
from ..installation.model import PadLoads
from ..response.model import Library

SIGN = {"front": 1.0, "rear": -1.0}  # stud tension pulls the engine forward at the front, rearward at the rear


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Split:
    """One way a face's wrench falls on its studs: force (C, S, n, 3) as tension, then shear along y and z."""

    label: str
    force: Floats


def rigid_splits(loads: FaceLoads, case: Case) -> tuple[Split, ...]:
    """Return the rigid face on equal studs, its isostatic extremes, and stud springs where a tub matrix is given."""
    rigid = np.concatenate([loads.stud_axial[..., None], loads.stud_shear], axis=-1)
    found = [Split(label="rigid face", force=rigid)]
    ends = extremes(_places(loads)[:, 1:], loads.wrench)
    for upper_axial in (0, 1):
        for upper_shear in (0, 1):
            axial = SIGN[loads.name] * ends.axial[upper_axial][..., None]
            force = np.concatenate([axial, ends.shear[upper_shear]], axis=-1)
            if np.isfinite(force).all():
                label = f"lateral bending on the {GROUPS[upper_axial]} studs, shear on the {GROUPS[upper_shear]}"
                found.append(Split(label=label, force=force))
    if loads.name == "front" and case.installation.tub is not None:
        for label, normal, tangential in stiffness_variants(case.installation):
            stiffness = series(case.installation.tub, normal, tangential)
            found.append(Split(label=f"{label} stud springs on the tub", force=spring_split(loads, stiffness)))
    return tuple(found)


def series(tub: Floats, normal: float, tangential: float) -> Floats:
    """Return the (3n, 3n) stiffness of pads in series with a tub matrix [N/m]."""
    pads = np.tile([1.0 / normal, 1.0 / tangential, 1.0 / tangential], tub.shape[0] // 3)
    result: Floats = np.linalg.inv(np.linalg.inv(tub) + np.diag(pads))
    return result


def spring_split(loads: FaceLoads, stiffness: Floats) -> Floats:
    """Return stud forces (C, S, n, 3), tension then shear, of a rigid flange on a (3n, 3n) stud stiffness."""
    arms = _places(loads) - loads.reference
    motion = np.zeros((len(arms), 3, 6))
    motion[:, :, :3] = np.eye(3)
    motion[:, :, 3:] = -np.cross(arms[:, None, :], np.eye(3)).transpose(0, 2, 1)
    flat = motion.reshape(-1, 6)
    to_studs = stiffness @ flat @ np.linalg.inv(flat.T @ stiffness @ flat)
    force = (loads.wrench @ to_studs.T).reshape(*loads.wrench.shape[:-1], -1, 3)
    return force * [SIGN[loads.name], 1.0, 1.0]


def installed_splits(pads: PadLoads, library: Library, loads: FaceLoads) -> tuple[Split, ...]:
    """Return the stud forces of the installed block, one split per pad stiffness."""
    found = []
    for index, label in enumerate(pads.variants):
        rows = [library.rows(loads.name, name).start for name in loads.studs]
        force = np.stack([pads.weights[index][..., start : start + 3] for start in rows], axis=2)
        found.append(Split(label=f"{label} pads", force=force * [SIGN[loads.name], 1.0, 1.0]))
    return tuple(found)


def _places(loads: FaceLoads) -> Floats:
    """Stud places (n, 3)."""
    return np.column_stack([np.full(len(loads.stud_at), loads.reference[0]), loads.stud_at[:, -2:]])
