"""Six two-force members hold a corner: their tensions from the wrench on the corner.

With o_j the outboard and i_j the inboard end of member j and u_j = (i_j - o_j) / |i_j - o_j|, tension f_j pulls the
corner along u_j and the body that carries the inboard end along -u_j. Moments taken about the wheel centre c,
    sum_j f_j [u_j ; (o_j - c) x u_j] + W = 0,   W = all that acts on the corner: tyre, weight, inertia, half-shaft.
Six equations, six tensions (any statics textbook; the matrix is the Jacobian of a six-legged platform). Where the
matrix is nearly singular the wheel could move although no member changes its length: the smallest singular value says
how nearly, its right vector which members would be strained against each other, its left vector how the wheel moves.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from ..arrays import Floats, frozen
from ..case.model import Link
from ..errors import CaseError, nearest

LINKS = ("upper_fore", "upper_aft", "lower_fore", "lower_aft", "steer", "pushrod")
MIRROR = np.array((1.0, -1.0, 1.0))
"""Signs that turn a place on the left into the one on the right."""
CONDITION_LIMIT = 1e4
"""Unsourced, common practice: beyond it a corner is a near-mechanism, or its points mix units, and is refused."""
CONDITION_USUAL = 1e3
"""Unsourced: usual corners have about 20; beyond this the weakest members are pointed out."""
_TAKING_PART = 0.3  # of the largest entry of a singular vector: below it a member is not named
_SHORTEST = 1e-3  # m: shorter than this a member has no direction worth the name


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class CornerMap:
    """What a corner's members do, linear in the wrench (6,) on the corner about its wheel centre.

    tension (6, 6): tension of each member, along its own line; force (6, 3, 6): on the body at each inboard end;
    inboard (6, 3): those ends; condition: ratio of the largest to the smallest singular value of the equations, moments
    about the wheel centre in metres; weakest: members strained most against each other for the least effect.
    """

    names: tuple[str, ...]
    inboard: Floats
    tension: Floats
    force: Floats
    condition: float
    weakest: tuple[str, ...]


def directions(outboard: Floats, inboard: Floats, names: Sequence[str] = LINKS, where: str = "links") -> Floats:
    """Unit vectors (n, 3) from outboard to inboard ends (n, 3); CaseError for a member without length."""
    span = inboard - outboard
    length = np.linalg.norm(span, axis=1)
    if not np.all(length >= _SHORTEST):
        j = int(np.argmin(np.where(np.isnan(length), -1.0, length)))
        raise CaseError(
            f"{where}.{names[j]}",
            f"its two ends are {1e3 * length[j]:.3g} mm apart",
            f"a member of at least {1e3 * _SHORTEST:g} mm",
            "check outboard and inboard: one of them was probably copied from the other",
        )
    result: Floats = span / length[:, None]
    return result


def equilibrium_matrix(outboard: Floats, inboard: Floats, about: ArrayLike) -> Floats:
    """Matrix (6, n): column j is the wrench about a point that unit tension in member j puts on the corner."""
    along = directions(outboard, inboard)
    return np.concatenate([along, np.cross(outboard - np.asarray(about), along)], axis=1).T


def six_links(outboard: Floats, inboard: Floats, about: ArrayLike, *, where: str = "links") -> CornerMap:
    """Solve a corner of six two-force members in the order of LINKS, outboard and inboard (6, 3).

    Raises CaseError for a near-mechanism, naming the members that take part in it.
    """
    along = directions(outboard, inboard, LINKS, where)
    matrix = equilibrium_matrix(outboard, inboard, about)
    condition, weakest = checked_condition(matrix, LINKS, where)
    tension = -np.linalg.inv(matrix)
    force = -along[:, :, None] * tension[:, None, :]
    return CornerMap(
        names=LINKS,
        inboard=frozen(inboard),
        tension=frozen(tension),
        force=frozen(force),
        condition=condition,
        weakest=weakest,
    )


def checked_condition(matrix: Floats, unknowns: Sequence[str], where: str) -> tuple[float, tuple[str, ...]]:
    """Condition number of equilibrium equations (n, n) and the weakest members; CaseError above the limit, naming them.

    The first six rows are force and moment on the upright.
    """
    left, values, right = np.linalg.svd(matrix)
    condition = float(values[0] / values[-1]) if values[-1] > 0 else np.inf
    weight = np.abs(right[-1])
    taking = [name for name, part in zip(unknowns, weight, strict=True) if part >= _TAKING_PART * weight.max()]
    members = tuple(dict.fromkeys(taking))
    if condition <= CONDITION_LIMIT:
        return condition, members
    raise CaseError(
        where,
        f"these members hardly hold the wheel: condition number {condition:.3g}; strained against each other without "
        f"holding it: {', '.join(members)}; the wheel is free to {_motion(left[:6, -1])}",
        f"a condition number up to {CONDITION_LIMIT:g} about the wheel centre; usual corners have about 20",
        "check these points for a typing error, a wrong unit, or members that meet in one line or plane",
    )


def ends(links: Mapping[str, Link], where: str) -> tuple[Floats, Floats]:
    """Outboard and inboard ends, (6, 3) each in the order of LINKS, of a left corner's links by name."""
    for name in links:
        if name not in LINKS:
            raise CaseError(f"{where}.{name}", "no such link", ", ".join(LINKS), nearest(name, LINKS))
    missing = [name for name in LINKS if name not in links]
    if missing:
        remedy = "give all six, or none: without links the corner acts on its carrier as one wrench"
        raise CaseError(where, f"missing: {', '.join(missing)}", ", ".join(LINKS), remedy)
    chosen = [links[name] for name in LINKS]
    return np.array([link.outboard for link in chosen]), np.array([link.inboard for link in chosen])


def _motion(twist: Floats) -> str:
    """Say in words the largest part of a small motion: velocity (3,) of the wheel centre and rotation (3,)."""
    words = ("move along x", "move along y", "move along z", "turn about x", "turn about y", "turn about z")
    order = np.argsort(-np.abs(twist))
    named = [words[k] for k in order if abs(twist[k]) >= _TAKING_PART * abs(twist[order[0]])]
    return " and ".join(named)
