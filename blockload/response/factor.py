"""Direct solvers behind one signature: factorise(matrix, ...) gives solve(columns).

The matrix is symmetric positive definite and sparse. "fronts" is the Cholesky of this room on scipy's LAPACK and is
always there, as is "scipy", its general sparse LU in the same order; "ngsolve" brings an independent sparse Cholesky;
"pypardiso" (proprietary, free of charge, the extra `fast`) uses many cores best. "auto" takes the first of pypardiso
and fronts that imports; the one taken is part of the result. None of them may change a result: whoever solves checks
the residual of every column.
"""

from __future__ import annotations

import weakref
from collections.abc import Callable
from importlib import import_module
from typing import Any

import numpy as np

from ..arrays import Floats
from ..errors import SolveError
from .dissection import dissect

Solve = Callable[[Floats], Floats]
SOLVERS = ("pypardiso", "fronts", "ngsolve", "scipy")
OURS = ("fronts", "scipy")
# Entries (1-based) of the control array that differ from 0: values set by hand, parallel nested dissection; no
# refinement, scaling or matching, which a positive definite matrix does not need.
CONTROL = {1: 1, 2: 3}


def choose(solver: str) -> str:
    """Name of the solver that will be used: the first one installed for "auto"."""
    if solver == "auto":
        return next(name for name in SOLVERS if installed(name))
    if solver not in SOLVERS:
        raise SolveError("solver", f"{solver!r}", f"auto, {', '.join(SOLVERS)}")
    if not installed(solver):
        raise SolveError("solver", f"{solver} is not installed", "", f"install {solver}, or choose fronts")
    return solver


def installed(solver: str) -> bool:
    """Whether a solver can be used here: found, and with the libraries it needs."""
    if solver in OURS:
        return True
    try:
        import_module(solver)
    except (ImportError, OSError):
        return False
    return True


def factorise(matrix: Any, solver: str, points: Floats) -> Solve:
    """Factor a symmetric positive definite matrix of 3×3 node blocks (BSR) on points (N, 3)."""
    makers = {"fronts": _fronts, "scipy": _scipy, "ngsolve": _ngsolve, "pypardiso": _pypardiso}
    return makers[choose(solver)](matrix, points)


def node_graph(matrix: Any) -> Any:
    """Graph (N, N) of a matrix of node blocks."""
    from scipy import sparse

    count = matrix.shape[0] // 3
    ones = np.ones(len(matrix.indices), dtype=np.int8)
    return sparse.csr_array((ones, matrix.indices, matrix.indptr), shape=(count, count))


def _fronts(matrix: Any, points: Floats) -> Solve:
    from .cholesky import factor

    return factor(matrix, dissect(node_graph(matrix), points)).solve


def _scipy(matrix: Any, points: Floats) -> Solve:
    from scipy.sparse.linalg import splu

    parts = dissect(node_graph(matrix), points)
    nodes = np.concatenate([part.nodes for part in parts])
    order = (3 * nodes[:, None] + np.arange(3)).ravel()
    permuted = matrix.tocsr()[order][:, order].tocsc()
    options = {"SymmetricMode": True}
    factor = splu(permuted, permc_spec="NATURAL", diag_pivot_thresh=0.0, options=options)

    def solve(columns: Floats) -> Floats:
        result = np.empty_like(columns)
        result[order] = factor.solve(columns[order])
        return result

    return solve


def _ngsolve(matrix: Any, points: Floats) -> Solve:
    from ngsolve import TaskManager
    from ngsolve.la import SparseMatrixd
    from scipy import sparse

    lower = sparse.tril(matrix.tocsr()).tocoo()
    size = matrix.shape[0]
    with TaskManager():
        entries = SparseMatrixd.CreateFromCOO(
            lower.coords[0].astype(np.int32), lower.coords[1].astype(np.int32), lower.data, size, size
        )
        inverse = entries.Inverse(inverse="sparsecholesky")
    right, left = entries.CreateColVector(), entries.CreateRowVector()

    def solve(columns: Floats) -> Floats:
        result = np.empty_like(columns)
        with TaskManager():
            for k in range(columns.shape[1]):
                right.FV().NumPy()[:] = columns[:, k]
                left.data = inverse * right
                result[:, k] = left.FV().NumPy()
        return result

    return solve


def _pypardiso(matrix: Any, points: Floats) -> Solve:
    from pypardiso import PyPardisoSolver
    from pypardiso.pardiso_wrapper import PyPardisoError
    from scipy import sparse

    solver = PyPardisoSolver(mtype=2)
    for entry, value in CONTROL.items():
        solver.set_iparm(entry, value)
    upper = sparse.csr_matrix(sparse.triu(matrix.tocsr(), format="csr"))
    try:
        solver.factorize(upper)
    except PyPardisoError as trouble:
        raise SolveError("factoring the block", f"pypardiso: {trouble}", "", "check the mesh") from trouble

    def solve(columns: Floats) -> Floats:
        result: Floats = solver.solve(upper, np.asfortranarray(columns))
        return result

    weakref.finalize(solve, solver.free_memory, everything=True)
    return solve
