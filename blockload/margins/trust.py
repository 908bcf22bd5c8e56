"""How far a stress may be believed.

`singular` within `FILLET` of a sharp re-entrant edge: the elastic stress there has no finite value. `near an
attachment` within one pad diameter of it: the evenly spread load is an idealisation of the joint. `coarse` where the
stress of single elements around the place differs from their mean by more than `SPREAD` of the applied stress;
`converged` where it does not. The spread on one mesh is an error indicator and no refinement study, and is said so.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.spatial import cKDTree

from ..arrays import Floats, Ints
from ..block.model import Block
from ..response.fields import element_stress
from ..response.model import Library
from .hotspots import sharp_inner_edges
from .places import Atlas, beside_attachments
from .strength import Criterion

SPREAD = 0.05
FILLET = 0.005  # m; about a casting's fillet radius: common practice, no source
SINGULAR = "at a sharp re-entrant edge: the stress rises with every refinement; model the fillet"


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Zones:
    """Surface nodes whose stress is not to be taken at its word.

    singular (n,): within FILLET of a sharp re-entrant edge; beside (n,): index of the attachment next to it or −1.
    """

    singular: NDArray[np.bool_]
    beside: Ints

    @property
    def clear(self) -> NDArray[np.bool_]:
        """Surface nodes in neither zone."""
        result: NDArray[np.bool_] = ~self.singular & (self.beside < 0)
        return result


def zones(where: Atlas, library: Library) -> Zones:
    """Mark the surface nodes in each zone."""
    points = library.surface_points
    sharp = sharp_inner_edges(points, library.surface_triangles)
    singular = np.zeros(len(points), dtype=bool)
    if len(sharp):
        singular = np.isfinite(cKDTree(points[sharp]).query(points, distance_upper_bound=FILLET)[0])
    return Zones(singular=singular, beside=beside_attachments(where, points))


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class State:
    """What a stress was reduced from: criterion, weights (U,) and the reduced nodal stress [Pa]."""

    criterion: Criterion
    weights: Floats
    applied: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Trust:
    """A trust word, the reason for it, and the spread of single elements where it was looked at."""

    word: str
    reason: str
    spread: float | None = None


def trust_of(where: Atlas, marked: Zones, block: Block, library: Library, entry: int, state: State) -> Trust:
    """Return how far the stress at one surface entry may be believed."""
    node = int(library.entry_node[entry])
    if marked.singular[node]:
        return Trust(word="singular", reason=SINGULAR)
    beside = int(marked.beside[node])
    if beside >= 0:
        name = where.attachments[beside][0]
        reason = f"within one pad diameter of {name}, whose load is spread evenly"
        return Trust(word="near an attachment", reason=reason)
    spread = element_spread(block, library, entry, state)
    if not np.isfinite(spread):
        return Trust(word="coarse", reason="a single element reaches this place: nothing to compare it with")
    word = "converged" if spread <= SPREAD else "coarse"
    reason = f"single elements differ by {spread:.0%} from their mean (one mesh; limit {SPREAD:.0%})"
    return Trust(word=word, reason=reason, spread=spread)


def element_spread(block: Block, library: Library, entry: int, state: State) -> float:
    """Return how far the single elements' reduced stress lies from their mean, as a share of the applied stress.

    Looked at in the corner of an element nearest to the entry: a node in the middle of an edge may belong to one
    element alone and would agree with itself. Infinite where even the corner has one element only.
    """
    node = int(library.surface_nodes[library.entry_node[entry]])
    volume = int(library.entry_volume[entry])
    corner = _nearest_corner(block, node, volume)
    stress = element_stress(block, library, state.weights, corner, volume)
    if len(stress) < 2:
        return np.inf
    mean = state.criterion.reduce(stress.mean(axis=0)[:, None])[0]
    reduced = state.criterion.reduce(stress[:, :, None])[:, 0]
    return float(np.abs(reduced - mean).max() / max(state.applied, np.finfo(float).tiny))


def _nearest_corner(block: Block, node: int, volume: int) -> int:
    """Return the corner node, of the elements of one volume that touch a node, nearest to it."""
    touching = (block.mesh.dofs.element_dofs == node).any(axis=0) & (np.asarray(block.volume_of) == volume)
    corners = np.unique(block.mesh.t[:, touching])
    gaps = np.linalg.norm(block.mesh.p[:, corners] - block.mesh.doflocs[:, [node]], axis=0)
    return int(corners[gaps.argmin()])
