"""Unit loads on a free block, solved once: the response library.

Six unit wrenches per attachment are spread over its facets, one uniform rise of 1 K is put on every volume, each
load is balanced by the block's own inertia, and all are solved as blocks of columns with one factorisation.
Flexibility is d = Pᵀu; stress at the surface follows from one sparse operator. Everything measured on the way
(residual, reactions, energy, symmetry) is kept in `Library.checks`.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

import numpy as np

from ..arrays import Floats, Ints, frozen
from ..block.model import Block
from .elements import Elements, elements_of
from .energy import relative_gap, strain_energy
from .factor import choose, factorise, residual
from .model import Library
from .recovery import Surface, gradient_operator, surface_of, surface_stress
from .relief import FreeBody, free_body
from .spreading import unit_wrenches
from .stiffness import heat_loads, mass, stiffness
from .store import cache_folder, fingerprint, load, save
from .threads import one_thread

Progress = Callable[[str, float], None]
BLOCK_OF_COLUMNS = 24


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


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class UnitLoads:
    """Spread wrenches P (3N, 6A) as a sparse matrix, heat loads (3N, V), and how well the spreads re-integrate."""

    wrenches: Any
    heat: Floats
    spread: float

    def columns(self, part: slice) -> Floats:
        """Unit loads `part` as dense columns (3N, k)."""
        split = self.wrenches.shape[1]
        indices = np.arange(split + self.heat.shape[1])[part]
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
    body = free_body(elements.points, mass(elements))
    loads = unit_loads(block, elements)
    held = body.held() if held is None else held
    report("factoring the stiffness", 0.05)
    solver_of = factorise(hold(matrix, held), solver, elements.points)
    motion, checks = _columns(matrix, solver_of, body, loads, held, report)
    del solver_of
    report("recovering stress", 0.85)
    surface = surface_of(block)
    stress = _stress(elements, surface, block, motion, loads.wrenches.shape[1])
    return _library(block, solver, body, loads, matrix, motion, stress, surface, checks)


def hold(matrix: Any, held: Ints) -> Any:
    """The matrix with rows and columns of the held unknowns emptied, their diagonal kept; symmetric still."""
    result = matrix.copy()
    for node, component in zip(*np.divmod(held, 3), strict=True):
        own = slice(matrix.indptr[node], matrix.indptr[node + 1])
        neighbours = matrix.indices[own]
        stiff = result.data[own][neighbours == node][0, component, component]
        result.data[own, component, :] = 0.0
        for other in neighbours:
            start, stop = matrix.indptr[other], matrix.indptr[other + 1]
            place = start + np.searchsorted(matrix.indices[start:stop], node)
            result.data[place, :, component] = 0.0
        place = own.start + np.searchsorted(neighbours, node)
        result.data[place, component, component] = stiff
    return result


def _columns(
    matrix: Any,
    solver_of: Callable[[Floats], Floats],
    body: FreeBody,
    loads: UnitLoads,
    held: Ints,
    report: Progress,
) -> tuple[Floats, dict[str, float]]:
    """Motion (3N, U) of all unit loads, and the largest residual, reaction and imbalance met."""
    total = loads.wrenches.shape[1] + loads.heat.shape[1]
    motion = np.empty((matrix.shape[0], total))
    checks = {"residual": 0.0, "reaction": 0.0, "relief": 0.0}
    for start in range(0, total, BLOCK_OF_COLUMNS):
        part = slice(start, min(start + BLOCK_OF_COLUMNS, total))
        raw = loads.columns(part)
        columns = body.balance(raw)
        size = np.linalg.norm(columns, axis=0)
        size[size == 0] = 1.0
        scale = np.outer(np.linalg.norm(body.modes, axis=0), size)
        grounded = columns.copy()
        grounded[held] = 0.0
        found = solver_of(grounded)
        gap = matrix @ found - columns
        motion[:, part] = body.strip(found)
        _raise(checks, "residual", residual(matrix, motion[:, part], columns))
        _raise(checks, "reaction", np.abs(gap[held]) / size)
        _raise(checks, "relief", np.abs(body.modes.T @ columns) / scale)
        report("solving unit loads", 0.5 + 0.35 * part.stop / total)
    return motion, checks


def _raise(checks: dict[str, float], name: str, value: Any) -> None:
    checks[name] = max(checks[name], float(np.max(value)))


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
    matrix: Any,
    motion: Floats,
    stress: Floats,
    surface: Surface,
    checks: dict[str, float],
) -> Library:
    units = loads.wrenches.shape[1]
    averaged = loads.wrenches.T @ motion
    raw, thermal = averaged[:, :units], averaged[:, units:]
    energy = strain_energy(matrix, motion)
    scale = np.sqrt(np.outer(np.diag(raw), np.diag(raw)))
    mutual = np.sqrt(np.outer(np.diag(raw), np.maximum(2 * energy[units:], np.finfo(float).tiny)))
    flexibility = (raw + raw.T) / 2
    checks |= {
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
