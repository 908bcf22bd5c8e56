"""All unit loads of a block: spread wrenches of every attachment, and heat in every volume."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ..arrays import Floats
from ..block.model import Block
from .elements import Elements
from .spreading import unit_wrenches
from .stiffness import heat_loads


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class UnitLoads:
    """Spread wrenches P (3N, 6A) as a sparse matrix, heat loads (3N, V), and how well the spreads re-integrate."""

    wrenches: Any
    heat: Floats
    spread: float

    @property
    def units(self) -> int:
        """Number of unit wrenches, 6A."""
        return int(self.wrenches.shape[1])

    @property
    def count(self) -> int:
        """Number of unit loads U."""
        return self.units + int(self.heat.shape[1])

    def columns(self, part: slice) -> Floats:
        """Unit loads `part` as dense columns (3N, k)."""
        split, indices = self.units, np.arange(self.count)[part]
        left = self.wrenches[:, indices[indices < split]].toarray()
        return np.hstack([left, self.heat[:, indices[indices >= split] - split]])


def unit_loads(block: Block, elements: Elements) -> UnitLoads:
    """Spread every attachment's unit wrenches and the heat of every volume."""
    from scipy import sparse

    rows, columns, values, gap = [], [], [], 0.0
    for index, attachment in enumerate(block.attachments):
        loads, nodes, again = unit_wrenches(block, attachment)
        rows.append(np.repeat((3 * nodes[:, None] + np.arange(3)).ravel(), 6))
        columns.append(np.tile(6 * index + np.arange(6), 3 * len(nodes)))
        values.append(loads.ravel())
        radius = np.sqrt(attachment.area)
        scale = np.array([1.0] * 3 + [radius] * 3)
        gap = max(gap, float(np.abs((again - np.eye(6)) / scale[:, None] * scale).max()))
    shape = (3 * len(elements.points), 6 * len(block.attachments))
    if not rows:
        return UnitLoads(wrenches=sparse.csc_array(shape), heat=heat_loads(elements, len(block.volumes)), spread=0.0)
    wrenches = sparse.coo_array((np.concatenate(values), (np.concatenate(rows), np.concatenate(columns))), shape=shape)
    return UnitLoads(wrenches=wrenches.tocsc(), heat=heat_loads(elements, len(block.volumes)), spread=gap)
