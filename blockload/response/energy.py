"""The energy check: work done by a unit load equals strain energy stored, by two different roads.

For every unit wrench ½ wᵀFw must equal ½ uᵀKu (Clapeyron's theorem). F comes from averaging motions over an
attachment, uᵀKu from the whole field, so a wrong spread, relief, solve or storage shows as a gap.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from ..arrays import Floats
from ..block.model import Block
from .elements import elements_of
from .model import Library
from .stiffness import stiffness

BLOCK_OF_COLUMNS = 24
ENERGY_LIMIT = 1e-6


def strain_energy(matrix: Any, motion: Floats) -> Floats:
    """½ uᵀKu of every column of a motion (3N, k) [J]."""
    result = np.empty(motion.shape[1])
    for start in range(0, motion.shape[1], BLOCK_OF_COLUMNS):
        columns = np.ascontiguousarray(motion[:, start : start + BLOCK_OF_COLUMNS])
        result[start : start + BLOCK_OF_COLUMNS] = 0.5 * np.einsum("ij,ij->j", columns, matrix @ columns)
    return result


def relative_gap(flexibility: Floats, energy: Floats) -> float:
    """Largest relative gap between ½ F_ii and the strain energies (6A,) of the unit wrenches."""
    return float(np.max(np.abs(0.5 * np.diag(flexibility) - energy) / energy, initial=0.0))


def energy_gap(library: Library, block: Block) -> float:
    """Recompute ½ uᵀKu from the library's motion and compare with its flexibility; a share, above 1e-6 is wrong."""
    units = len(library.flexibility)
    matrix = stiffness(elements_of(block))
    return relative_gap(library.flexibility, strain_energy(matrix, library.motion[:, :units]))
