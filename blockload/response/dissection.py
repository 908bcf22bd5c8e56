"""Nested dissection: an elimination order that keeps the factor of a solid's stiffness small.

A set of nodes is cut in two by a plane; the nodes on one side with a link across separate the halves and are
eliminated after both (George, Nested Dissection of a Regular Finite Element Mesh, SIAM J. Numer. Anal. 10 (1973)).
How many nodes a plane at t separates is known for every t at once: those with place ≤ t less those whose farthest
neighbour is ≤ t. Several directions are swept this way and the thinnest section near the middle is taken, so a block
is cut between its bulkheads; sets of fewer than FEW nodes are swept along their own principal axes only. The
separator of larger sets is then thinned to a minimum vertex cover of the links across, by König's theorem from a
maximum matching.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ..arrays import Floats, Ints
from .elements import Bools

LEAF = 64
COVER_FROM = 100
FEW = 300
SHARES = np.linspace(0.3, 0.7, 41)
_DIRECTIONS = np.array(
    [[1, 0, 0], [0, 1, 0], [0, 0, 1], [0, 1, 1], [0, 1, -1], [1, 0, 1], [1, 0, -1], [1, 1, 0], [1, -1, 0]], dtype=float
)


@dataclass(frozen=True, slots=True, eq=False)
class Part:
    """Nodes eliminated together, and the index of the part that separates them from the rest (-1 for the last)."""

    nodes: Ints
    parent: int


@dataclass(frozen=True, slots=True, eq=False)
class _Links:
    """Links within a set of nodes, by local number: those of node i are targets[starts[i]:starts[i + 1]]."""

    starts: Ints
    targets: Ints

    @property
    def sources(self) -> Ints:
        return np.repeat(np.arange(len(self.starts) - 1), np.diff(self.starts))


def dissect(graph: Any, points: Floats, leaf: int = LEAF) -> list[Part]:
    """Parts of a node graph (N, N), every node linked to itself, in elimination order."""
    graph = graph.tocsr()
    whole = _Links(graph.indptr.astype(np.int64), graph.indices.astype(np.int64))
    local = np.full(len(points), -1, dtype=np.int64)
    parts: list[Part] = []
    stack: list[tuple[Ints, int]] = [(np.arange(len(points)), -1)]
    while stack:
        nodes, parent = stack.pop()
        side = _cut(_within(whole, nodes, local), points[nodes]) if len(nodes) > leaf else None
        if side is None:
            parts.append(Part(nodes, parent))
            continue
        separator = nodes[side == 2]
        if len(separator):
            parts.append(Part(separator, parent))
            parent = len(parts) - 1
        stack += [(nodes[side == half], parent) for half in (0, 1) if (side == half).any()]
    last = len(parts) - 1
    return [Part(part.nodes, last - part.parent if part.parent >= 0 else -1) for part in reversed(parts)]


def _within(whole: _Links, nodes: Ints, local: Ints) -> _Links:
    """Links of a set of nodes to itself; `local` is scratch, -1 everywhere before and after."""
    local[nodes] = np.arange(len(nodes))
    counts = whole.starts[nodes + 1] - whole.starts[nodes]
    ends = np.cumsum(counts)
    place = np.arange(ends[-1]) + np.repeat(whole.starts[nodes] - (ends - counts), counts)
    targets = local[whole.targets[place]]
    local[nodes] = -1
    kept = targets >= 0
    starts = np.append(0, np.cumsum(kept))[np.append(0, ends)]
    return _Links(starts, targets[kept])


def _cut(links: _Links, points: Floats) -> Ints | None:
    """Side of every node: 0, 1, or 2 for the separator; None where no plane cuts the set."""
    principal = np.linalg.eigh(np.cov(points.T))[1].T
    best, cost = None, np.inf
    for direction in principal if len(points) < FEW else np.vstack([_DIRECTIONS, principal]):
        along = points @ direction
        if np.ptp(along) <= 1e-12 * np.abs(along).max():
            continue
        place, size = _thinnest(links, along)
        if size < cost:
            best, cost = along <= place, size
    if best is None:
        return None
    return _separate(links, best)


def _thinnest(links: _Links, along: Floats) -> tuple[float, float]:
    """Best place of a plane along one direction, and its cost: separator size, dearer the more it leans."""
    farthest = np.sort(np.maximum.reduceat(along[links.targets], links.starts[:-1]))
    nearest = np.sort(np.minimum.reduceat(along[links.targets], links.starts[:-1]))
    ordered = np.sort(along)
    places = ordered[(SHARES * (len(along) - 1)).astype(np.int64)]
    below = np.searchsorted(ordered, places, side="right")
    first = below - np.searchsorted(farthest, places, side="right")
    second = np.searchsorted(nearest, places, side="right") - below
    share = below / len(along)
    balance = np.maximum(share * (1 - share), np.finfo(float).tiny)
    cost = np.where(below < len(along), np.minimum(first, second) / balance, np.inf)
    choice = int(np.argmin(cost))
    return float(places[choice]), float(cost[choice])


def _separate(links: _Links, below: Bools) -> Ints:
    """Sides 0 and 1, with the fewest nodes moved to 2 so that no link joins them."""
    sources = links.sources
    across = below[sources] & ~below[links.targets]
    sources, targets = sources[across], links.targets[across]
    first, second = np.unique(sources), np.unique(targets)
    side = np.where(below, 0, 1)
    if len(below) < COVER_FROM or not len(sources):
        side[first if len(first) <= len(second) else second] = 2
        return side
    side[_cover(first, second, sources, targets)] = 2
    return side


def _cover(first: Ints, second: Ints, sources: Ints, targets: Ints) -> Ints:
    """Fewest nodes that touch every link between two sets."""
    from scipy import sparse
    from scipy.sparse.csgraph import maximum_bipartite_matching

    row, column = np.searchsorted(first, sources), np.searchsorted(second, targets)
    pairs = sparse.csr_array((np.ones(len(row)), (row, column)), shape=(len(first), len(second)))
    partner = maximum_bipartite_matching(pairs, perm_type="column")
    owner = np.full(len(second), -1)
    owner[partner[partner >= 0]] = np.flatnonzero(partner >= 0)
    seen, reached = partner < 0, np.zeros(len(second), dtype=np.bool_)
    fresh = seen.copy()
    while fresh.any():
        new = np.zeros(len(second), dtype=np.bool_)
        new[column[fresh[row]]] = True
        new &= ~reached
        reached |= new
        fresh = np.zeros(len(first), dtype=np.bool_)
        fresh[owner[new & (owner >= 0)]] = True
        fresh &= ~seen
        seen |= fresh
    return np.concatenate([first[~seen], second[reached]])
