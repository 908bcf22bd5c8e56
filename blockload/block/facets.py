"""Faces of tetrahedra by their corners: how names get onto a mesh that has just been built or read.

Building a quadratic mesh renumbers its points (corners first), so faces are looked up afterwards.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import TYPE_CHECKING

import numpy as np

from ..arrays import Floats, Ints
from ..errors import BlockError

if TYPE_CHECKING:
    from skfem import MeshTet2


def named_mesh(
    points: Floats, elements: Ints, corners: Ints, sets: Mapping[str, Ints], volumes: Mapping[str, Ints]
) -> MeshTet2:
    """Return scikit-fem's mesh with `sets` (rows of `corners`, (f, 3) node numbers) and `volumes` (element masks)."""
    from skfem import MeshTet2

    mesh = MeshTet2(np.ascontiguousarray(points.T), np.ascontiguousarray(elements.T))
    renumbered = np.full(len(points), -1)
    renumbered[elements[:, :4].T.ravel()] = mesh.t.ravel()
    facets = facet_numbers(mesh, renumbered[corners])
    return mesh.with_boundaries({name: np.sort(facets[rows]) for name, rows in sets.items()}).with_subdomains(
        {name: np.flatnonzero(mask) for name, mask in volumes.items()}
    )


def facet_numbers(mesh: MeshTet2, corners: Ints) -> Ints:
    """Return the number in mesh.facets of each facet given by its three corners, (f, 3)."""
    n = int(mesh.nvertices)

    def key(triples: Ints) -> Ints:
        a, b, c = np.sort(triples, axis=1).T.astype(np.int64)
        return np.asarray((a * n + b) * n + c)

    known = key(mesh.facets.T)
    order = np.argsort(known)
    wanted = key(corners)
    found = order[np.minimum(np.searchsorted(known, wanted, sorter=order), len(order) - 1)]
    if np.any(known[found] != wanted):
        raise BlockError("mesh", f"{int(np.sum(known[found] != wanted))} named faces are no face of any element")
    return np.asarray(found)
