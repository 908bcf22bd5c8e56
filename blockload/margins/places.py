"""Where on the block a point is, in the words of its own named face sets, and how far a stress there may be believed.

Trust, most serious first: `singular` on a sharp re-entrant edge (the elastic stress there has no finite value);
`near an attachment` within one pad diameter of it (the spread load is an idealisation of the joint); `coarse` where
the stress of the single elements around the node differs from their average by more than `SPREAD`; `converged`
where it does not. The spread of a single mesh is an error indicator, not a refinement study, and is said so.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.spatial import cKDTree

from ..arrays import Floats, Ints
from ..block.model import Attachment, Block
from ..response.fields import element_stress
from ..response.model import Library
from .hotspots import sharp_inner_edges
from .strength import Criterion

SPREAD = 0.05
ON_IT = 1e-6  # m


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Atlas:
    """What is needed to name and judge points of one block, gathered once.

    sets: name and nodes of every named face set; attachments: with a search tree of their nodes and their reach [m];
    sharp: mask of surface nodes on re-entrant edges.
    """

    sets: tuple[tuple[str, cKDTree], ...]
    attachments: tuple[tuple[str, cKDTree, float], ...]
    sharp: NDArray[np.bool_]
    block: Block


def atlas(block: Block, library: Library) -> Atlas:
    """Gather the places of a block."""
    boundaries = block.mesh.boundaries or {}
    sharp = np.zeros(len(library.surface_nodes), dtype=bool)
    sharp[sharp_inner_edges(library.surface_points, library.surface_triangles)] = True
    return Atlas(
        sets=tuple((name, _tree(block, facets)) for name, facets in boundaries.items()),
        attachments=tuple((label(item), _tree(block, item.facets), diameter(item)) for item in block.attachments),
        sharp=sharp,
        block=block,
    )


def label(item: Attachment) -> str:
    """Return an attachment as running text: "pad front TL" or "main_bearings"."""
    return item.name if item.kind == "other" else f"pad {item.kind} {item.name}"


def diameter(item: Attachment) -> float:
    """Return the diameter of the round pad of the same area [m], of one of them where several sets are united."""
    return float(np.sqrt(4.0 * item.area / (np.pi * max(1, len(item.sets)))))


def place_name(where: Atlas, at: Floats, volume: str) -> str:
    """Return the volume, the nearest named face set with its distance, and the attachment next to it if any."""
    text = volume
    if where.sets:
        gaps = [float(tree.query(at)[0]) for _, tree in where.sets]
        best = int(np.argmin(gaps))
        name = where.sets[best][0]
        text += f", on {name}" if gaps[best] < ON_IT else f", {gaps[best] * 1e3:.0f} mm from {name}"
    beside = beside_attachment(where, at)
    return f"{text}, near {beside}" if beside is not None and beside not in text else text


def beside_attachment(where: Atlas, at: Floats) -> str | None:
    """Return the attachment within one of its pad diameters of a point, the nearest first."""
    near = [(float(tree.query(at)[0]), name, reach) for name, tree, reach in where.attachments]
    inside = [(gap, name) for gap, name, reach in near if gap <= reach]
    return min(inside)[1] if inside else None


def trust_of(
    where: Atlas, library: Library, entry: int, *, criterion: Criterion, weights: Floats, applied: float
) -> tuple[str, str]:
    """Return the trust word of a stress at one surface entry and the reason for it.

    Parameters
    ----------
    where, library : Atlas, Library
        The block.
    entry : int
        Surface entry.
    criterion : Criterion
        What the stress is reduced to.
    weights : array, shape (U,)
        The state.
    applied : float
        The reduced nodal stress [Pa].

    """
    node = int(library.entry_node[entry])
    at = library.surface_points[node]
    if where.sharp[node]:
        return "singular", "sharp re-entrant edge: the stress rises with every refinement; model the fillet"
    beside = beside_attachment(where, at)
    if beside is not None:
        return "near an attachment", f"within one pad diameter of {beside}, whose load is spread evenly"
    spread = element_spread(where.block, library, entry, criterion=criterion, weights=weights, applied=applied)
    word = "converged" if spread <= SPREAD else "coarse"
    return word, f"single elements differ by {spread:.0%} from their average (one mesh; limit {SPREAD:.0%})"


def element_spread(
    block: Block, library: Library, entry: int, *, criterion: Criterion, weights: Floats, applied: float
) -> float:
    """Return the largest difference of the single elements' reduced stress at a node from the average, as a share."""
    node = int(library.surface_nodes[library.entry_node[entry]])
    stress = element_stress(block, library, weights, node, int(library.entry_volume[entry]))
    reduced = criterion.reduce(stress[:, :, None])[:, 0]
    return float(np.abs(reduced - applied).max() / max(applied, np.finfo(float).tiny))


def _tree(block: Block, facets: Ints) -> cKDTree:
    return cKDTree(block.mesh.p.T[np.unique(block.mesh.facets[:, facets])])
