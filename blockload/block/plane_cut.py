"""A plane x = const through a mesh of tetrahedra: the metal it cuts, as triangles.

Every ten-node tetrahedron is parted into eight plane ones, and each of these is cut in a triangle or a quadrilateral.
Neighbours share the crossed edges, so that the triangles hang together as the elements do.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

from ..arrays import Floats, Ints
from ..errors import BlockError
from .model import Block

if TYPE_CHECKING:
    from skfem import MeshTri

# Eight tetrahedra in one of ten nodes (mid nodes 4 to 9 on edges 01 12 02 03 13 23), alike on both sides of a face.
_PARTS = np.array(
    [[0, 4, 6, 7], [4, 1, 5, 8], [6, 5, 2, 9], [7, 8, 9, 3], [4, 9, 5, 6], [4, 9, 6, 7], [4, 9, 7, 8], [4, 9, 8, 5]]
)
CLOSE = 1e-5
"""Corners of the cut nearer than this share of its size are one: what a plane through nodes leaves behind."""


def plane_cut(block: Block, x: float) -> MeshTri:
    """Return the section of a block's mesh at x as triangles in (y, z); BlockError where the plane misses it."""
    from skfem import MeshTri

    points = block.mesh.doflocs.T
    tets = block.mesh.dofs.element_dofs.T[:, _PARTS].reshape(-1, 4)
    low, high = float(points[:, 0].min()), float(points[:, 0].max())
    if low <= x <= high:
        x = min(max(x, low + CLOSE * (high - low)), high - CLOSE * (high - low))
    ahead = points[:, 0] >= x
    count = ahead[tets].sum(axis=1)
    cut = tets[(count > 0) & (count < 4)]
    if not len(cut):
        raise BlockError("section", f"the plane x = {x:.4g} m misses the metal", f"{low:.4g} to {high:.4g} m")
    pairs, triangles = _crossed(cut, ahead)
    share = (x - points[pairs[:, 0], 0]) / (points[pairs[:, 1], 0] - points[pairs[:, 0], 0])
    corners = points[pairs[:, 0], 1:] + share[:, None] * (points[pairs[:, 1], 1:] - points[pairs[:, 0], 1:])
    corners, triangles = _merged(corners, triangles)
    return MeshTri(np.ascontiguousarray(corners.T), np.ascontiguousarray(triangles.T))


def _crossed(tets: Ints, ahead: Any) -> tuple[Ints, Ints]:
    """Return the edges crossed (k, 2), each once, and the triangles of the cut as three edges each."""
    sides = ahead[tets]
    order = np.argsort(sides, axis=1, kind="stable")
    sorted_tets = np.take_along_axis(tets, order, axis=1)
    count = sides.sum(axis=1)
    lone_ahead, two, lone_behind = (sorted_tets[count == k] for k in (1, 2, 3))
    edges = [
        lone_ahead[:, [[0, 3], [1, 3], [2, 3]]],
        lone_behind[:, [[0, 1], [0, 2], [0, 3]]],
        two[:, [[0, 2], [0, 3], [1, 3]]],
        two[:, [[0, 2], [1, 3], [1, 2]]],
    ]
    every = np.sort(np.concatenate(edges).reshape(-1, 2), axis=1)
    pairs, number = np.unique(every, axis=0, return_inverse=True)
    return pairs, number.reshape(-1, 3)


def _merged(corners: Floats, triangles: Ints) -> tuple[Floats, Ints]:
    """Make corners one that lie together, drop triangles without area, and turn all the same way round."""
    from scipy.sparse import coo_array
    from scipy.sparse.csgraph import connected_components
    from scipy.spatial import cKDTree

    near = cKDTree(corners).query_pairs(CLOSE * float(np.ptp(corners, axis=0).max()), output_type="ndarray")
    links = coo_array((np.ones(len(near)), (near[:, 0], near[:, 1])), shape=(len(corners),) * 2)
    groups, label = connected_components(links, directed=False)
    merged = np.empty((groups, 2))
    merged[label] = corners
    triangles = label[triangles].astype(np.int64)
    a, b, c = (merged[triangles[:, k]] for k in range(3))
    area = (b - a)[:, 0] * (c - a)[:, 1] - (b - a)[:, 1] * (c - a)[:, 0]
    triangles[area < 0] = triangles[area < 0][:, [0, 2, 1]]
    kept = triangles[np.abs(area) > 1e-12 * np.abs(area).sum()]
    used, again = np.unique(kept, return_inverse=True)
    return merged[used], again.reshape(kept.shape)
