"""Unit loads on a free block, solved once: the response library.

Six unit wrenches per attachment are spread over its facets, one uniform rise of 1 K is put on every volume, each
load is balanced by the block's own inertia, and all are solved as blocks of columns with one factorisation.
Flexibility is d = Pᵀu; stress at the surface follows from one sparse operator. Everything measured on the way
(residual, reactions, energy, symmetry) is kept in `Library.checks`.
"""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np

from ..arrays import Floats, Ints, frozen
from ..block.model import Block
from .columns import BLOCK_OF_COLUMNS, Progress, Solved, solve_columns
from .connection import require_one_body
from .elements import Elements, elements_of
from .energy import relative_gap
from .factor import choose, factorise
from .loads import UnitLoads, unit_loads
from .model import Library
from .recovery import Surface, gradient_operator, surface_of, surface_stress
from .relief import FreeBody, free_body, hold
from .stiffness import mass, stiffness
from .store import cache_folder, fingerprint, load, save
from .threads import one_thread


def respond(
    block: Block,
    *,
    solver: str = "auto",
    cache: Path | None = None,
    progress: Progress | None = None,
) -> Library:
    """Return the response library of a block, from the cache where it is there already.

    `solver` is "auto", "fronts", "scipy", "ngsolve" or "pypardiso", and the one used is `Library.solver`; `cache` is
    the folder of the cache, by default BLOCKLOAD_CACHE or the user's cache folder; `progress` is called with a stage
    and the share done, 0 to 1.
    """
    report = progress or (lambda stage, share: None)
    chosen = choose(solver)
    folder = cache_folder(cache)
    key = fingerprint(block, chosen)
    found = load(folder, key)
    if found is not None:
        report("library read from the cache", 1.0)
        return found
    library = replace(solve(block, solver=chosen, report=report), key=key)
    try:
        save(folder, library)
    except OSError as trouble:
        report(f"library not kept on disk: {trouble}", 1.0)
    return library


def solve(
    block: Block, *, solver: str = "fronts", report: Progress = lambda stage, share: None, held: Ints | None = None
) -> Library:
    """Solve all unit loads, nothing read or written. `held` overrides the six auxiliary constraints."""
    with one_thread():
        return _solve(block, solver, report, held)


def _solve(block: Block, solver: str, report: Progress, held: Ints | None) -> Library:
    elements = elements_of(block)
    report("assembling the stiffness", 0.0)
    matrix = stiffness(elements)
    require_one_body(matrix, block)
    body = free_body(elements.points, mass(elements))
    loads = unit_loads(block, elements)
    held = body.held() if held is None else held
    report("factoring the stiffness", 0.05)
    solved = solve_columns(matrix, factorise(hold(matrix, held), solver, elements.points), body, loads, held, report)
    del matrix
    report("recovering stress", 0.85)
    surface = surface_of(block)
    stress = _stress(elements, surface, block, solved.motion, loads.units)
    return _library(block, solver, body, loads, solved, stress, surface)


def _stress(elements: Elements, surface: Surface, block: Block, motion: Floats, wrenches: int) -> Floats:
    """Stress (m, 6, U) at the surface entries; a heated volume loses its free thermal stress."""
    operator = gradient_operator(elements, surface, len(block.volumes))
    materials = [block.materials[name] for name in block.volumes]
    young = np.array([item.youngs_modulus for item in materials])
    poisson = np.array([item.poissons_ratio for item in materials])
    lame = young * poisson / ((1 + poisson) * (1 - 2 * poisson))
    shear = young / (2 * (1 + poisson))
    volume = surface.entry_volume
    stress = np.empty((len(volume), 6, motion.shape[1]))
    for start in range(0, motion.shape[1], BLOCK_OF_COLUMNS):
        part = slice(start, start + BLOCK_OF_COLUMNS)
        surface_stress(operator, lame[volume], shear[volume], np.ascontiguousarray(motion[:, part]), stress[:, :, part])
    for index, item in enumerate(materials):
        free = (3 * lame[index] + 2 * shear[index]) * item.thermal_expansion
        stress[volume == index, :3, wrenches + index] -= free
    return stress


def _library(
    block: Block,
    solver: str,
    body: FreeBody,
    loads: UnitLoads,
    solved: Solved,
    stress: Floats,
    surface: Surface,
) -> Library:
    units, motion, energy = loads.units, solved.motion, solved.energy
    averaged = loads.wrenches.T @ motion
    raw, thermal = averaged[:, :units], averaged[:, units:]
    scale = np.sqrt(np.outer(np.diag(raw), np.diag(raw)))
    mutual = np.sqrt(np.outer(np.diag(raw), np.maximum(2 * energy[units:], np.finfo(float).tiny)))
    flexibility = (raw + raw.T) / 2
    checks = dict(solved.checks) | {
        "spread": loads.spread,
        "symmetry": float(np.max(np.abs(raw - raw.T) / scale, initial=0.0)),
        "heat reciprocity": float(np.max(np.abs(motion[:, :units].T @ loads.heat - thermal) / mutual, initial=0.0)),
        "unit energy": relative_gap(flexibility, energy[:units]),
    }
    return Library(
        key="",
        attachments=tuple((item.kind, item.name) for item in block.attachments),
        volumes=tuple(block.volumes),
        centroids=frozen([item.centroid for item in block.attachments]),
        mass=body.mass,
        cg=frozen(body.cg),
        inertia=frozen(body.inertia),
        flexibility=frozen(flexibility),
        thermal_motion=frozen(thermal),
        motion=_locked(motion),
        surface_nodes=frozen(surface.nodes, np.int64),
        surface_points=frozen(block.mesh.doflocs.T[surface.nodes]),
        surface_triangles=frozen(surface.triangles, np.int64),
        triangle_volume=frozen(surface.triangle_volume, np.int64),
        entry_node=frozen(surface.entry_node, np.int64),
        entry_volume=frozen(surface.entry_volume, np.int64),
        stress=_locked(stress),
        checks=checks,
        solver=solver,
        from_cache=False,
    )


def _locked(array: Floats) -> Floats:
    """The same large array, no copy, read-only from now on."""
    array.flags.writeable = False
    return array
