"""How a pad gives way: stiffness spread evenly over its area, seen at the area's centroid.

A pad of area A whose normal and tangential stiffness k_n, k_t are spread evenly is k_n/A and k_t/A per unit area.
With n the normal and M = ∫ r rᵀ dA the second moment of area in the pad's plane,

    force:   k_n n nᵀ + k_t (1 − n nᵀ)
    moment:  (k_n/A) [n]× M [n]×ᵀ + (k_t/A) tr(M) n nᵀ

which in local axes is k_n, k_t, k_t, then k_t·J/A about n and k_n·I/A about the two principal axes in the plane.
"""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..block.model import Attachment
from ..case.model import Installation
from ..errors import CaseError, SolveError

SOFTER, STIFFER = 0.1, 10.0


def stiffness_variants(installation: Installation) -> tuple[tuple[str, float, float], ...]:
    """Return the pad stiffnesses to run: (label, normal, tangential) [N/m], soft to stiff.

    One given stiffness is the middle of a band from a tenth to ten times its value: the share of each stud is
    indeterminate and follows the pads, so a single value would hide how far it can move.

    Raises
    ------
    CaseError
        Where no stiffness is known or one is not positive.

    """
    entries = installation.pad_stiffness
    if not entries:
        raise CaseError(
            "[installation] pad_stiffness",
            "no stiffness and nothing to estimate one from",
            "normal and tangential stiffness of one pad",
            'add pad_stiffness = { normal = "800 kN/mm", tangential = "400 kN/mm" } with your own values',
        )
    for label, normal, tangential in entries:
        if not (0.0 < normal < np.inf and 0.0 < tangential < np.inf):
            raise CaseError(
                "[installation] pad_stiffness",
                f"{label}: normal {normal:g} N/m, tangential {tangential:g} N/m",
                "positive, finite stiffness",
                "a pad without stiffness holds nothing; leave the pad out instead",
            )
    if len(entries) > 1:
        return tuple(sorted(entries, key=lambda entry: entry[1]))
    _, normal, tangential = entries[0]
    return (
        ("soft", SOFTER * normal, SOFTER * tangential),
        ("middle", normal, tangential),
        ("stiff", STIFFER * normal, STIFFER * tangential),
    )


def pad_stiffness(pad: Attachment, normal: float, tangential: float) -> Floats:
    """Return the (6, 6) stiffness of one pad about its centroid, force rows before moment rows [N/m, N·m/rad]."""
    n = pad.normal / np.linalg.norm(pad.normal)
    along = np.outer(n, n)
    in_plane = np.eye(3) - along
    moments = in_plane @ pad.moments @ in_plane
    turn = np.cross(n, np.eye(3), axisa=0, axisb=0).T
    stiffness = np.zeros((6, 6))
    stiffness[:3, :3] = normal * along + tangential * in_plane
    stiffness[3:, 3:] = (normal * turn @ moments @ turn.T + tangential * np.trace(moments) * along) / pad.area
    return stiffness


def pad_compliance(pad: Attachment, normal: float, tangential: float) -> Floats:
    """Return the (6, 6) compliance of one pad about its centroid [m/N, rad/(N·m)].

    Raises
    ------
    SolveError
        Where the pad's facets have no extent across some axis, so that it has no rotational stiffness.

    """
    stiffness = pad_stiffness(pad, normal, tangential)
    rotation = np.linalg.eigvalsh(stiffness[3:, 3:])
    if rotation[0] <= 1e-9 * rotation[-1]:
        raise SolveError(
            f"pad {pad.kind} {pad.name}",
            "its facets lie on a line: nothing resists rotation about it",
            "a pad with area",
            f"check the face sets {', '.join(pad.sets)}",
        )
    return np.asarray(np.linalg.inv(stiffness), dtype=np.float64)
