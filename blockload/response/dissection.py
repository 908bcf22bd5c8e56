"""Nested dissection: an elimination order that keeps the factor of a solid's stiffness small.

A set of nodes is cut in two by a plane at the median of its coordinates; the fewest nodes that touch every link
across the cut (a minimum vertex cover, by König's theorem from a maximum matching) separate the halves and are
eliminated after both. George, Nested Dissection of a Regular Finite Element Mesh, SIAM J. Numer. Anal. 10 (1973).
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ..arrays import Floats, Ints

LEAF = 64
_TURNS = np.array([[1, 0, 0], [0, 1, 0], [0, 0, 1]], dtype=float)


@dataclass(frozen=True, slots=True, eq=False)
class Part:
    """Nodes eliminated together, and the index of the part that separates them from the rest (-1 for the last)."""

    nodes: Ints
    parent: int


def dissect(graph: Any, points: Floats, leaf: int = LEAF) -> list[Part]:
    """Parts of a node graph (N, N) in elimination order."""
    parts: list[Part] = []
    stack: list[tuple[Any, Ints, int]] = [(graph.tocsr(), np.arange(len(points)), -1)]
    while stack:
        links, nodes, parent = stack.pop()
        side = _best_cut(links, points[nodes]) if len(nodes) > leaf else None
        if side is None:
            parts.append(Part(nodes, parent))
            continue
        parts.append(Part(nodes[side == 2], parent))
        here = len(parts) - 1
        for half in (0, 1):
            chosen = np.flatnonzero(side == half)
            if len(chosen):
                stack.append((links[chosen][:, chosen], nodes[chosen], here))
    last = len(parts) - 1
    return [Part(part.nodes, last - part.parent if part.parent >= 0 else -1) for part in reversed(parts)]


def _best_cut(links: Any, points: Floats) -> Ints | None:
    """Side of every node (0, 1, or 2 for the separator), the best of a few directions; None where none cuts."""
    spread = np.linalg.eigh(np.cov(points.T))[1].T
    best, cost = None, np.inf
    for direction in np.vstack([_TURNS, spread[-1:]]):
        along = points @ direction
        if np.ptp(along) == 0:
            continue
        side = (along > np.median(along)).astype(np.int64)
        if side.all() or not side.any():
            side = (along >= np.median(along)).astype(np.int64)
        side = _separate(links, side)
        size = float((side == 2).sum())
        lean = abs(float((side == 0).sum()) - float((side == 1).sum())) / len(side)
        if size * (1 + lean) < cost:
            best, cost = side, size * (1 + lean)
    return best


def _separate(links: Any, side: Ints) -> Ints:
    """Move the fewest nodes into a separator so that no link joins the sides."""
    from scipy import sparse
    from scipy.sparse.csgraph import maximum_bipartite_matching

    coo = links.tocoo()
    rows, columns = coo.row, coo.col
    across = (side[rows] == 0) & (side[columns] == 1)
    left, row = np.unique(rows[across], return_inverse=True)
    right, column = np.unique(columns[across], return_inverse=True)
    pairs = sparse.csr_array((np.ones(len(row)), (row, column)), shape=(len(left), len(right)))
    partner = maximum_bipartite_matching(pairs, perm_type="column")
    seen_left = partner < 0
    seen_right = np.zeros(len(right), dtype=bool)
    frontier = seen_left
    owner = np.full(len(right), -1)
    owner[partner[partner >= 0]] = np.flatnonzero(partner >= 0)
    while frontier.any():
        reached = (frontier.astype(float) @ pairs > 0) & ~seen_right
        seen_right |= reached
        back = owner[reached]
        frontier = np.zeros(len(left), dtype=bool)
        frontier[back[back >= 0]] = True
        frontier &= ~seen_left
        seen_left |= frontier
    result = side.copy()
    result[left[~seen_left]] = 2
    result[right[seen_right]] = 2
    return result
