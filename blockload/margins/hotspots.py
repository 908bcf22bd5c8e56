"""Where a field over the surface peaks: local maxima, no two within 15 mm along the surface.

The surface is a graph: nodes joined by the edges of its triangles, each as long as it is. A node is a peak where no
neighbour is higher; from the highest down, each peak kept silences what lies within `APART` of it along the edges
(E. W. Dijkstra, Numerische Mathematik 1 (1959) 269).
"""

from __future__ import annotations

from typing import Any

import numpy as np
from scipy.sparse import coo_array
from scipy.sparse.csgraph import dijkstra

from ..arrays import Floats, Ints

APART = 0.015  # m
MOST = 12


def edges(triangles: Ints) -> Ints:
    """Return the edges (e, 2) of triangles (t, 3), each once, lower node first."""
    pairs = np.concatenate([triangles[:, [0, 1]], triangles[:, [1, 2]], triangles[:, [2, 0]]])
    result: Ints = np.unique(np.sort(pairs, axis=1), axis=0)
    return result


def graph(points: Floats, triangles: Ints) -> Any:
    """Return the surface as a symmetric sparse matrix of edge lengths [m]."""
    pairs = edges(triangles)
    length = np.linalg.norm(points[pairs[:, 0]] - points[pairs[:, 1]], axis=1)
    size = (len(points), len(points))
    return coo_array(
        (np.tile(length, 2), (np.concatenate(pairs.T), np.concatenate(pairs[:, ::-1].T))), shape=size
    ).tocsr()


def peaks_apart(
    values: Floats,
    points: Floats,
    triangles: Ints,
    *,
    most: int = MOST,
    known: Ints | None = None,
) -> Ints:
    """Return the nodes of the highest local maxima, highest first.

    Parameters
    ----------
    values : array, shape (n,)
        The field at the surface nodes; nothing at or below zero is a peak.
    points, triangles : array, shape (n, 3) and (t, 3)
        The surface [m].
    most : int
        How many to keep.
    known : array, shape (k,), optional
        Nodes of peaks kept before; none is found within APART of them.

    """
    pairs = edges(triangles)
    neighbour = np.full(len(values), -np.inf)
    np.maximum.at(neighbour, pairs[:, 0], values[pairs[:, 1]])
    np.maximum.at(neighbour, pairs[:, 1], values[pairs[:, 0]])
    candidates = np.flatnonzero((values >= neighbour) & (values > 0.0))
    lengths = graph(points, triangles)
    silent = np.zeros(len(values), dtype=bool)
    if known is not None and len(known):
        silent = np.isfinite(dijkstra(lengths, directed=False, indices=known, limit=APART)).any(axis=0)
    kept: list[int] = []
    for node in candidates[np.argsort(-values[candidates], kind="stable")]:
        if silent[node]:
            continue
        kept.append(int(node))
        if len(kept) == most:
            break
        silent |= np.isfinite(dijkstra(lengths, directed=False, indices=int(node), limit=APART))
    return np.array(kept, dtype=np.int64)


def sharp_inner_edges(points: Floats, triangles: Ints, *, angle: float = np.deg2rad(40.0)) -> Ints:
    """Return the nodes on re-entrant edges, where an elastic stress grows without end as the mesh is refined.

    An edge counts where its two triangles, wound outward, fold toward each other by more than `angle`.
    """
    corners = points[triangles]
    normal = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    normal /= np.maximum(np.linalg.norm(normal, axis=1, keepdims=True), np.finfo(float).tiny)
    ends = np.concatenate([triangles[:, [0, 1]], triangles[:, [1, 2]], triangles[:, [2, 0]]])
    opposite = np.concatenate([triangles[:, 2], triangles[:, 0], triangles[:, 1]])
    owner = np.tile(np.arange(len(triangles)), 3)
    ends = np.sort(ends, axis=1)
    order = np.lexsort(ends.T)
    ends, opposite, owner = ends[order], opposite[order], owner[order]
    twin = np.flatnonzero((ends[1:] == ends[:-1]).all(axis=1))
    first, other = owner[twin], owner[twin + 1]
    folds = np.einsum("ei,ei->e", normal[first], normal[other]) < np.cos(angle)
    rise = np.einsum("ei,ei->e", points[opposite[twin + 1]] - points[ends[twin, 0]], normal[first])
    return np.unique(ends[twin[folds & (rise > 0.0)]])
