"""Where on the block a point is, in the words of its own named face sets and attachments."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.spatial import cKDTree

from ..arrays import Floats, Ints
from ..block.model import Attachment, Block

ON_IT = 0.5e-3  # m


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Atlas:
    """Search trees of a block: name and nodes of every named face set, and of every attachment with its reach [m]."""

    sets: tuple[tuple[str, cKDTree], ...]
    attachments: tuple[tuple[str, cKDTree, float], ...]


def atlas(block: Block) -> Atlas:
    """Gather the named places of a block."""
    boundaries = block.mesh.boundaries or {}
    return Atlas(
        sets=tuple((name, _tree(block, facets)) for name, facets in boundaries.items()),
        attachments=tuple((label(item), _tree(block, item.facets), diameter(item)) for item in block.attachments),
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
    beside = int(beside_attachments(where, at[None])[0])
    return text if beside < 0 else f"{text}, near {where.attachments[beside][0]}"


def beside_attachments(where: Atlas, points: Floats) -> Ints:
    """Return for each point (n, 3) the nearest attachment within one of its pad diameters, or −1, (n,)."""
    found = np.full(len(points), -1, dtype=np.int64)
    least = np.full(len(points), np.inf)
    for index, (_, tree, reach) in enumerate(where.attachments):
        gap = tree.query(points, distance_upper_bound=reach)[0]
        nearer = gap < least
        found[nearer], least[nearer] = index, gap[nearer]
    return found


def _tree(block: Block, facets: Ints) -> cKDTree:
    return cKDTree(block.mesh.p.T[np.unique(block.mesh.facets[:, facets])])
