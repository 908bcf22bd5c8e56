"""Is the block one body? Volumes that touch without sharing nodes fall apart, and no solver says so by itself."""

from __future__ import annotations

from typing import Any

import numpy as np

from ..block.model import Block
from ..errors import BlockError
from .factor import node_graph


def require_one_body(matrix: Any, block: Block) -> None:
    """Refuse a mesh of several unconnected pieces or with nodes of no element; `matrix` is its stiffness."""
    from scipy.sparse.csgraph import connected_components

    count, label = connected_components(node_graph(matrix), directed=False)
    if count == 1:
        return
    loose = np.diff(matrix.indptr) == 0
    if loose.any():
        raise BlockError(
            "the block's mesh",
            f"{int(loose.sum())} nodes belong to no element",
            "a mesh without loose nodes",
            "remove the unused points",
        )
    sizes = np.bincount(label)
    smallest = np.flatnonzero(label == sizes.argmin())
    owner = np.flatnonzero(np.isin(block.mesh.dofs.element_dofs, smallest).any(axis=0))
    volumes = sorted({block.volumes[int(index)] for index in np.asarray(block.volume_of)[owner]})
    at = block.mesh.doflocs[:, smallest[0]]
    raise BlockError(
        "the block's mesh",
        f"{count} separate pieces; the smallest, {len(smallest)} nodes of {', '.join(volumes)}, is at "
        f"({at[0]:.3f}, {at[1]:.3f}, {at[2]:.3f}) m",
        "one connected body",
        "let touching volumes share their nodes (glue them before meshing)",
    )
