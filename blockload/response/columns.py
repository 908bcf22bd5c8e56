"""Unit loads solved as blocks of columns with one factorisation, each block checked as it comes out.

One product K u per block gives the residual, the reactions of the auxiliary constraints and the strain energy ½ uᵀKu.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..arrays import Floats, Ints
from ..errors import SolveError
from .factor import Solve
from .loads import UnitLoads
from .relief import FreeBody

Progress = Callable[[str, float], None]
BLOCK_OF_COLUMNS = 32
RESIDUAL_LIMIT = 1e-8


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Solved:
    """Motion (3N, U) of all unit loads, strain energy (U,) and the largest residual, reaction and imbalance met."""

    motion: Floats
    energy: Floats
    checks: dict[str, float]


def solve_columns(
    matrix: Any, solver_of: Solve, body: FreeBody, loads: UnitLoads, held: Ints, report: Progress
) -> Solved:
    """Solve every unit load, balanced by the body's own inertia; refuse a residual above RESIDUAL_LIMIT.

    matrix is the stiffness of the free body; solver_of solves it with the unknowns `held` at zero.
    """
    motion, energy = np.empty((matrix.shape[0], loads.count)), np.empty(loads.count)
    checks = {"residual": 0.0, "reaction": 0.0, "relief": 0.0}
    reach = np.linalg.norm(body.modes, axis=0)
    for start in range(0, loads.count, BLOCK_OF_COLUMNS):
        part = slice(start, min(start + BLOCK_OF_COLUMNS, loads.count))
        columns = body.balance(loads.columns(part))
        size = np.linalg.norm(columns, axis=0)
        size[size == 0] = 1.0
        grounded = columns.copy()
        grounded[held] = 0.0
        found = body.strip(solver_of(grounded))
        force = matrix @ found
        motion[:, part] = found
        energy[part] = 0.5 * np.einsum("ij,ij->j", found, force)
        force -= columns
        measured = {
            "residual": np.linalg.norm(force, axis=0) / size,
            "reaction": np.abs(force[held]) / size,
            "relief": np.abs(body.modes.T @ columns) / np.outer(reach, size),
        }
        # np.maximum passes nan on, where max() would hide it
        checks = {name: float(np.maximum(checks[name], np.max(values))) for name, values in measured.items()}
        if not checks["residual"] <= RESIDUAL_LIMIT:
            found_text = f"the residual of a unit load is {checks['residual']:.2g}"
            allowed = f"at most {RESIDUAL_LIMIT:g}"
            raise SolveError("solving the block", found_text, allowed, "check the mesh for slivers")
        report("solving unit loads", 0.5 + 0.35 * part.stop / loads.count)
    return Solved(motion=motion, energy=energy, checks=checks)
