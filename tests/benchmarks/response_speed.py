"""How long the response library takes, step by step: `python tests/benchmarks/response_speed.py [MESH.vtu ...]`.

Prints one table per mesh (the demo's by default): assembly beside scikit-fem's own, factor and 24 columns for every
solver installed, the size of the residual and the largest difference between solvers. Times are wall-clock medians
of REPEATS runs on whatever else the machine is doing; compare ratios within one table only.
"""

from __future__ import annotations

import sys
import time
from collections.abc import Callable
from pathlib import Path
from statistics import median
from typing import Any

import numpy as np
from skfem import Basis, BilinearForm, ElementTetP2, ElementVector, MeshTet2
from skfem.helpers import ddot, div, sym_grad

from blockload.response.elements import Elements
from blockload.response.factor import SOLVERS, factorise, installed
from blockload.response.relief import free_body, hold
from blockload.response.stiffness import CURVED_ORDER, mass, stiffness
from blockload.response.threads import one_thread

DEMO = Path(__file__).parents[2] / "meshes" / "demo-v8.vtu"
REPEATS, COLUMNS = 3, 24
LAME, SHEAR = 51e9, 26e9


def timed(action: Callable[[], Any], repeats: int = REPEATS) -> tuple[Any, float]:
    """Result and median seconds."""
    seconds = []
    for _ in range(repeats):
        start = time.perf_counter()
        result = action()
        seconds.append(time.perf_counter() - start)
    return result, median(seconds)


def elements_of(mesh: MeshTet2) -> Elements:
    count = mesh.nelements
    return Elements(
        points=np.ascontiguousarray(mesh.doflocs.T),
        nodes=mesh.dofs.element_dofs.T.astype(np.int64),
        volume_of=np.zeros(count, dtype=np.int64),
        lame=np.full(count, LAME),
        shear=np.full(count, SHEAR),
        density=np.full(count, 2700.0),
        expansion=np.zeros(count),
    )


def theirs(mesh: MeshTet2) -> Any:
    @BilinearForm
    def elasticity(u, v, w):
        return LAME * div(u) * div(v) + 2 * SHEAR * ddot(sym_grad(u), sym_grad(v))

    return elasticity.assemble(Basis(mesh, ElementVector(ElementTetP2()), intorder=CURVED_ORDER))


def benchmark(path: Path) -> None:
    loaded = MeshTet2.load(path)
    mesh = MeshTet2(loaded.doflocs * 1e-3, loaded.t)
    some = elements_of(mesh)
    with one_thread():
        matrix, ours = timed(lambda: stiffness(some))
    reference, slow = timed(lambda: theirs(mesh), repeats=1)
    gap = abs(matrix - reference).max() / abs(reference).max()
    print(f"\n{path.name}: {mesh.nelements} elements, {matrix.shape[0]} unknowns")
    print(f"assembly       {ours:8.2f} s   scikit-fem {slow:8.2f} s   ratio {slow / ours:5.1f}   difference {gap:.1e}")
    body = free_body(some.points, mass(some))
    held = body.held()
    columns = body.balance(np.random.default_rng(0).normal(size=(matrix.shape[0], COLUMNS)))
    columns[held] = 0.0
    grounded = hold(matrix, held)
    print(f"{'solver':<12}{'factor s':>10}{f'{COLUMNS} columns s':>16}{'residual':>12}{'difference':>12}")
    first: np.ndarray | None = None
    for solver in filter(installed, ("fronts", *(name for name in SOLVERS if name != "fronts"))):
        solve, factor = timed(lambda name=solver: factorise(grounded, name, some.points), repeats=1)
        found, columns_time = timed(lambda solve=solve: solve(columns))
        first = found if first is None else first
        residual = np.linalg.norm(grounded @ found - columns) / np.linalg.norm(columns)
        off = np.abs(found - first).max() / np.abs(first).max()
        print(f"{solver:<12}{factor:>10.2f}{columns_time:>16.2f}{residual:>12.1e}{off:>12.1e}")
        del solve


if __name__ == "__main__":
    for name in sys.argv[1:] or [str(DEMO)]:
        benchmark(Path(name))
