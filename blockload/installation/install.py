"""Install the block in the car: the wrench on every attachment, for every load case, source and pad stiffness.

Front pads sit on the tub (ground), rear pads on the gearbox, a rigid body that carries what the car says crosses the
rear face, the shaft couple included. The block itself is held by nothing: its pads, its carried masses and its own
inertia are in balance. See `system` for the equations and `compliance` for the pads.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from ..arrays import Floats, frozen
from ..block.model import AnyBlock
from ..car.model import LoadCases
from ..case.model import Case
from ..errors import CaseError, nearest
from ..response.model import Library
from .applied import inertia_wrench, known_wrenches, left_out
from .compliance import stiffness_variants
from .joining import connections
from .model import PadLoads
from .proof import proofs
from .system import Solution, solve

ORIGIN = np.zeros(3)


def install(
    cases: LoadCases,
    block: AnyBlock,
    library: Library,
    case: Case,
    *,
    temperatures: Mapping[str, float] | None = None,
) -> PadLoads:
    """Solve the installed block for every load case, source and pad stiffness.

    Parameters
    ----------
    cases, block : LoadCases, Block
        The balanced car, and the block with its attachments and carried masses.
    library : Library
        The unit responses of this block.
    case : Case
        For the installation, the second paths, the studs and the engine's CG.
    temperatures : mapping, optional
        Temperature rise of each volume [K]; adds a source "heat" to every load case.

    Raises
    ------
    SolveError
        Where the pads leave a rigid motion free; the message names it.
    CaseError
        Where a load has no attachment, a pad no stiffness, or a volume is not in the block.

    """
    wrenches = known_wrenches(cases, block, library, case)
    inertia = inertia_wrench(cases, case, mass=block.mass, cg=block.cg, inertia=block.inertia, about=ORIGIN)
    gearbox = about_origin(cases.faces["rear"].wrench, cases.faces["rear"].reference)
    rises = _rises(library, temperatures)
    sources = cases.sources
    if temperatures is not None:
        sources = (*sources, "heat")
        wrenches, inertia, gearbox = (np.pad(item, ((0, 0), (0, 1), (0, 0))) for item in (wrenches, inertia, gearbox))
    heat = np.zeros((*wrenches.shape[:2], rises.size))
    if temperatures is not None:
        heat[:, -1] = rises

    variants = stiffness_variants(case.installation)
    solved: list[Solution] = []
    weights = []
    for _label, normal, tangential in variants:
        joined = connections(block, library, case, normal=normal, tangential=tangential)
        solution = solve(
            joined,
            library.flexibility,
            library.rigid_modes(),
            wrenches=_columns(wrenches),
            own_motion=library.thermal_motion @ _columns(heat),
            block_load=_columns(inertia),
            gearbox_load=_columns(gearbox),
        )
        solved.append(solution)
        total = wrenches + _cases(joined.on_block @ solution.forces, wrenches.shape[:2])
        weights.append(np.concatenate([total, heat], axis=-1))

    shape = wrenches.shape[:2]
    path_force = np.stack([_cases(item.forces[item.forces.shape[0] - len(case.paths) :], shape) for item in solved])
    weights_array = np.stack(weights)
    proof = proofs(weights_array, path_force, cases, block, library, case)
    return PadLoads(
        variants=tuple(label for label, _, _ in variants),
        middle=len(variants) // 2,
        weights=frozen(weights_array),
        block_motion=frozen(np.stack([_cases(item.block_motion, shape) for item in solved])),
        gearbox_motion=frozen(np.stack([_cases(item.gearbox_motion, shape) for item in solved])),
        path_force=frozen(path_force),
        relief=frozen(proof.relief),
        sum_gap=proof.sum_gap,
        relief_gap=proof.relief_gap,
        left_out=frozen(left_out(cases, block, case)),
        sources=sources,
        checks={**proof.checks, "residual": max(item.residual for item in solved)},
    )


def about_origin(wrench: Floats, reference: Floats) -> Floats:
    """Move wrenches (..., 6) from a reference point to the car's origin."""
    force, moment = wrench[..., :3], wrench[..., 3:]
    return np.concatenate([force, moment + np.cross(reference, force)], axis=-1)


def _rises(library: Library, temperatures: Mapping[str, float] | None) -> Floats:
    rises = np.zeros(len(library.volumes))
    for name, rise in (temperatures or {}).items():
        if name not in library.volumes:
            raise CaseError(
                "temperatures", f"no volume {name!r}", ", ".join(library.volumes), nearest(name, library.volumes)
            )
        rises[library.volumes.index(name)] = rise
    return rises


def _columns(array: Floats) -> Floats:
    """(C, S, n) to (n, C·S)."""
    return array.reshape(-1, array.shape[-1]).T


def _cases(columns: Floats, shape: tuple[int, ...]) -> Floats:
    """(n, C·S) to (C, S, n)."""
    return columns.T.reshape(*shape, columns.shape[0])
