"""A rod that meets a wishbone away from its outer joint: upright and wishbone solved as two bodies.

Six two-force members no longer hold then, because the wishbone bends. Unknown are on the upright the two legs of the
other wishbone, the steering link and the force J (3) at the outer joint; on the wishbone -J, the rod at its meeting
point, and the forces R_fore and R_aft (3 each) at its two inboard joints. Six equations for each body are twelve; the
thirteenth figure, how the thrust along the line of the inboard joints is split, is not a matter of statics. It is
chosen for the least bending of the two legs in the plane of the wishbone: with a the direction of that line, t_k the
in-plane normal of leg k and V_k = R_k . t_k the shear at its inboard end, V_fore^2 + V_aft^2 is least where
    (t_fore . a) V_fore - (t_aft . a) V_aft = 0.
A rod that meets the outer joint itself leaves V = 0: the six two-force members again. All other forces, and the sum
of the two thrusts, do not depend on the choice.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ..arrays import Floats, frozen
from ..errors import CaseError
from .links import LINKS, CornerMap, checked_condition, directions

WISHBONES = ("upper", "lower")
_SAME_POINT = 1e-4  # m: legs of one wishbone meet closer than this
_UNIT = np.eye(3)


def two_bodies(
    outboard: Floats, inboard: Floats, about: ArrayLike, *, wishbone: str, where: str = "links"
) -> CornerMap:
    """Solve a corner whose rod (its outboard end) meets the `upper` or `lower` wishbone; arrays as `six_links`.

    The tension of a leg of that wishbone is the pull at its inboard joint along the leg; its side force is in `force`.
    Raises CaseError for a near-mechanism, or legs that do not meet in one outer joint.
    """
    if wishbone not in WISHBONES:
        raise CaseError(f"{where}.pushrod", f"meets {wishbone!r}", ", ".join(WISHBONES))
    fore, aft = LINKS.index(f"{wishbone}_fore"), LINKS.index(f"{wishbone}_aft")
    joint = _outer_joint(outboard, fore, aft, f"{where}.{wishbone}")
    along = directions(outboard, inboard, LINKS, where)
    centre = np.asarray(about, dtype=float)
    upright = [j for j in range(5) if j not in (fore, aft)]
    matrix = np.zeros((13, 13))
    for column, j in enumerate(upright):
        matrix[:6, column] = _wrench(along[j], outboard[j] - centre)
    matrix[:6, 3:6] = _columns(joint - centre)
    matrix[6:12, 3:6] = -_columns(np.zeros(3))  # moments of the wishbone about its outer joint
    matrix[6:12, 6] = _wrench(along[5], outboard[5] - joint)
    matrix[6:12, 7:10] = _columns(inboard[fore] - joint)
    matrix[6:12, 10:13] = _columns(inboard[aft] - joint)
    matrix[12, 7:10], matrix[12, 10:13] = _least_bending(along[fore], along[aft], inboard[fore] - inboard[aft])
    unknowns = (*(LINKS[j] for j in upright), *(wishbone,) * 3, "pushrod", *(LINKS[fore],) * 3, *(LINKS[aft],) * 3)
    condition, weakest = checked_condition(matrix, unknowns, where)
    solved = frozen(-np.linalg.inv(matrix)[:, :6])
    tension, force = _members(solved, upright, (fore, aft), along)
    return CornerMap(
        names=LINKS,
        inboard=frozen(inboard),
        tension=frozen(tension),
        force=frozen(force),
        condition=condition,
        weakest=weakest,
    )


def _members(solved: Floats, upright: list[int], legs: tuple[int, int], along: Floats) -> tuple[Floats, Floats]:
    """Tensions (6, 6) and inboard forces (6, 3, 6) from the solution (13, 6) of the two bodies."""
    tension, force = np.zeros((6, 6)), np.zeros((6, 3, 6))
    for column, j in [*enumerate(upright), (6, 5)]:
        tension[j] = solved[column]
        force[j] = -along[j][:, None] * tension[j]
    for k, j in enumerate(legs):
        pull = solved[7 + 3 * k : 10 + 3 * k]  # of the body on the wishbone
        tension[j] = along[j] @ pull
        force[j] = -pull
    return tension, force


def _outer_joint(outboard: Floats, fore: int, aft: int, where: str) -> Floats:
    gap = float(np.linalg.norm(outboard[fore] - outboard[aft]))
    if gap > _SAME_POINT:
        raise CaseError(
            where,
            f"the outer ends of its two legs are {1e3 * gap:.3g} mm apart",
            "both legs meeting in one outer joint, for a rod that meets this wishbone",
            "give both legs the same outboard point, or let the rod meet the upright",
        )
    joint: Floats = outboard[fore]
    return joint


def _wrench(direction: Floats, arm: Floats) -> Floats:
    return np.concatenate([direction, np.cross(arm, direction)])


def _columns(arm: Floats) -> Floats:
    """Wrench matrix (6, 3) of a force at an arm."""
    return np.concatenate([_UNIT, np.cross(arm, _UNIT).T])


def _least_bending(fore: Floats, aft: Floats, line: Floats) -> tuple[Floats, Floats]:
    """Coefficients (3,), (3,) on the two inboard forces in the condition of least bending of the legs."""
    line = line / np.linalg.norm(line)
    normal = np.cross(fore, aft)
    normal = normal / np.linalg.norm(normal)
    sideways = np.cross(normal, fore), np.cross(normal, aft)
    return (sideways[0] @ line) * sideways[0], -(sideways[1] @ line) * sideways[1]
