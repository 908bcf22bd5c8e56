"""Stud forces of a face from the wrench that crosses it.

Rigid face on n equal studs at (y_i, z_i), d_i measured from their centroid, wrench F, M about the centroid: axial
force on the engine a_i = F_x/n + B d_z + C d_y, where B and C solve the two bendings together, and shear
s_i = (F_y, F_z)/n + M_x (-d_z, d_y) / sum |d|^2: the elastic bolt group of the textbooks (for instance J. E. Shigley,
C. R. Mischke, *Mechanical Engineering Design*, 5th ed. 1989, ch. 8, eccentric joints; chapter from memory).

A rigid face is one answer of many. Four studs leave one axial pattern free (the warp), and shear goes where the
plates are stiff. The extremes put lateral bending, or shear and torsion, into the upper or the lower studs alone.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import Face
from ..errors import CaseError

GROUPS = ("upper", "lower")
_SLENDER = 1e-6  # a pattern whose narrow side is below this share of its wide side counts as a line


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Extremes:
    """Stud forces on the engine when one group alone takes a share of the work; the group axis is `GROUPS`.

    axial (2, ..., n): lateral bending in this group alone; shear (2, ..., n, 2): shear and torsion in this group
    alone. nan where a group cannot carry it (a single stud, or studs above one another).
    """

    axial: Floats
    shear: Floats


def pattern(face: Face) -> Floats:
    """Stud places (n, 2) of a face, refused where a face could not be carried by them."""
    at = np.array([stud.at for stud in face.studs], dtype=float).reshape(-1, 2)
    where = f"[faces.{face.name}.studs]"
    if len(at) < 3:
        raise CaseError(where, f"{len(at)} studs", "at least 3, not in one line", "add the missing studs")
    gaps = np.linalg.norm(at[:, None] - at, axis=-1) + np.diag(np.full(len(at), np.inf))
    i, j = (int(k) for k in np.unravel_index(int(gaps.argmin()), gaps.shape))
    size = np.linalg.svd(at - at.mean(axis=0), compute_uv=False)
    if gaps[i, j] <= _SLENDER * size[0]:
        pair = f"{face.studs[i].name} and {face.studs[j].name} at the same place"
        raise CaseError(where, pair, "studs at different places", "correct one of the two")
    if size[1] <= _SLENDER * size[0]:
        remedy = "a line of studs carries no bending about itself: check the (y, z) of each"
        raise CaseError(where, "all studs in one line", "at least 3 studs, not in one line", remedy)
    return frozen(at)


def rigid_face(at: Floats, wrench: Floats) -> tuple[Floats, Floats]:
    """Axial (..., n) and shear (..., n, 2) forces on the engine from a wrench (..., 6) about the centroid of `at`."""
    d = at - at.mean(axis=0)
    return _axial(d, wrench), _shear(d, wrench)


def extremes(at: Floats, wrench: Floats) -> Extremes:
    """The isostatic extremes of a face from a wrench (..., 6) about the centroid of its studs at (n, 2)."""
    d = at - at.mean(axis=0)
    above = d[:, 1] > 0
    groups = (above, ~above)
    return Extremes(
        axial=np.stack([_bending_in(d, group, wrench) for group in groups]),
        shear=np.stack([_shear_in(d, group, wrench) for group in groups]),
    )


def warp(at: Floats) -> Floats | None:
    """The axial pattern (4,) of a four-stud face without force or moment, largest entry 1; None for other counts."""
    if len(at) != 4:
        return None
    vector = np.linalg.svd(np.column_stack([np.ones(4), at]).T)[2][-1]
    return frozen(vector / vector[np.argmax(np.abs(vector))])


def _axial(d: Floats, wrench: Floats) -> Floats:
    y, z = d.T
    bendings = np.linalg.solve([[z @ z, y @ z], [y @ z, y @ y]], np.array([z, y]))
    moments = np.stack([wrench[..., 4], -wrench[..., 5]], axis=-1)
    result: Floats = wrench[..., :1] / len(d) + moments @ bendings
    return result


def _shear(d: Floats, wrench: Floats) -> Floats:
    around = np.column_stack([-d[:, 1], d[:, 0]]) / (d**2).sum()
    result: Floats = wrench[..., None, 1:3] / len(d) + wrench[..., 3, None, None] * around
    return result


def _bending_in(d: Floats, group: np.ndarray, wrench: Floats) -> Floats:
    """Axial forces with the lateral bending in one group; the rest as a rigid face carries it."""
    width = np.where(group, d[:, 0] - d[group, 0].mean(), 0.0) if group.any() else np.zeros(len(d))
    if width @ width <= _SLENDER**2 * (d**2).sum():
        return np.full((*wrench.shape[:-1], len(d)), np.nan)
    own = -wrench[..., 5:] * width / (width @ width)
    rest = wrench.copy()
    rest[..., 4] -= own @ d[:, 1]
    rest[..., 5] = 0.0
    return own + _axial(d, rest)


def _shear_in(d: Floats, group: np.ndarray, wrench: Floats) -> Floats:
    """Shear forces with the shear and torsion in one group of studs."""
    result = np.zeros((*wrench.shape[:-1], len(d), 2))
    own = d[group]
    centre = own.mean(axis=0) if group.any() else np.zeros(2)
    if ((own - centre) ** 2).sum() <= _SLENDER**2 * (d**2).sum():
        return np.full_like(result, np.nan)
    about = wrench.copy()
    about[..., 3] -= centre[0] * wrench[..., 2] - centre[1] * wrench[..., 1]
    result[..., group, :] = _shear(own - centre, about)
    return result
