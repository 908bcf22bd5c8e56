"""Validity of curved ten-node tetrahedra.

Their map from the reference element is quadratic, so its Jacobian determinant is a cubic polynomial. Written in
Bernstein form, its smallest coefficient bounds it from below everywhere in the element, not only at sampled points
(A. Johnen, J.-F. Remacle, C. Geuzaine, "Geometrical validity of curvilinear finite elements", J. Comput. Phys. 233,
2013). An element is valid when the bound is positive; where it is not, its mid nodes are pulled towards the chords.

Node order as in VTK and scikit-fem: corners 0 1 2 3, then mid nodes of 01 12 02 03 13 23.
"""

from __future__ import annotations

import itertools

import numpy as np

from ..arrays import Floats, Ints
from ..errors import BlockError

EDGES = ((0, 1), (1, 2), (0, 2), (0, 3), (1, 3), (2, 3))
SAFE_SHARE = 0.02
"""A repaired element keeps at least this share of its straight determinant everywhere (our choice)."""


def determinant_bound(points: Floats, elements: Ints) -> Floats:
    """Return each element's lower bound of det J, (e,), in the cube of the unit of `points`.

    `points` (n, 3), `elements` (e, 10). The smallest Bernstein coefficient; six times the volume if straight.
    """
    return np.asarray(_bernstein(points, elements).reshape(len(elements), -1).min(axis=1))


def least_determinant(points: Floats, elements: Ints) -> Floats:
    """Return the smallest det J found at corners, mid-edge, face and body points of each element, (e,).

    Where it is not positive the element is inverted for certain; where the bound is negative it may be.
    """
    weights = np.array(
        [
            np.bincount(group, minlength=4) / len(group)
            for n in range(1, 5)
            for group in itertools.combinations(range(4), n)
        ]
    )
    coefficients = _bernstein(points, elements)
    return np.asarray(
        np.einsum("ejlm,pj,pl,pm->ep", coefficients, weights, weights, weights, optimize=True).min(axis=1)
    )


def _bernstein(points: Floats, elements: Ints) -> Floats:
    """Return the symmetric coefficients of det J, (e, 4, 4, 4)."""
    nodes = points[elements]
    control = np.empty((len(elements), 4, 4, 3))
    for corner in range(4):
        control[:, corner, corner] = nodes[:, corner]
    for mid, (i, j) in enumerate(EDGES, start=4):
        control[:, i, j] = control[:, j, i] = 2.0 * nodes[:, mid] - 0.5 * (nodes[:, i] + nodes[:, j])
    slope = 2.0 * (control[:, 1:] - control[:, :1])  # (e, direction, corner weight, xyz)
    crossed = np.cross(slope[:, 1, :, None], slope[:, 2, None, :])
    products = np.einsum("eja,elma->ejlm", slope[:, 0], crossed)
    turns = [products.transpose(0, *(1 + axis for axis in turn)) for turn in itertools.permutations(range(3))]
    return np.asarray(sum(turns) / 6.0)


def straight_determinant(points: Floats, elements: Ints) -> Floats:
    """Return six times each corner tetrahedron's signed volume, (e,)."""
    corners = points[elements[:, :4]]
    sides = corners[:, 1:] - corners[:, :1]
    return np.asarray(np.einsum("ea,ea->e", sides[:, 0], np.cross(sides[:, 1], sides[:, 2])))


def scaled_jacobian(points: Floats, elements: Ints) -> Floats:
    """Return √2 det / (product of the edges at a corner), the worst corner of each straight element, (e,).

    One for the regular tetrahedron, zero for a flat one (P. Knupp, "Algebraic mesh quality metrics", SIAM J. Sci.
    Comput. 23, 2001).
    """
    corners = points[elements[:, :4]]
    lengths = {frozenset(e): np.linalg.norm(corners[:, e[0]] - corners[:, e[1]], axis=1) for e in EDGES}
    worst = np.max([np.prod([lengths[e] for e in lengths if corner in e], axis=0) for corner in range(4)], axis=0)
    return np.asarray(np.sqrt(2.0) * straight_determinant(points, elements) / worst)


def straightened(points: Floats, elements: Ints) -> tuple[Floats, int]:
    """Return points with mid nodes pulled towards their chords until every element is valid, and how many moved.

    Raises BlockError where even a straight element is inverted.
    """
    straight = straight_determinant(points, elements)
    if np.any(straight <= 0.0):
        at = points[elements[np.argmin(straight), :4]].mean(axis=0)
        raise BlockError("mesh", f"{int(np.sum(straight <= 0))} flat or inverted elements, the worst at {at}")
    moved = np.zeros(len(points), dtype=bool)
    points = points.copy()
    ends = np.array(EDGES)
    for step in (*[0.08] * 20, *[0.3] * 8, *[1.0] * 6):
        bad = determinant_bound(points, elements) < SAFE_SHARE * straight
        if not bad.any():
            break
        mids, first = np.unique(elements[bad, 4:], return_index=True)
        pairs = elements[bad][:, ends].reshape(-1, 2)[first]
        points[mids] += step * (points[pairs].mean(axis=1) - points[mids])
        moved[mids] = True
    if np.any(determinant_bound(points, elements) <= 0.0):
        raise BlockError("mesh", "curved elements stay inverted after straightening", remedy="change the mesh size")
    return points, int(moved.sum())
