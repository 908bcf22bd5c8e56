"""Sparse Cholesky by fronts: dense LAPACK on the separators of a nested dissection.

Every part of the dissection is one front: its own unknowns s and the later ones b that it, or a part below it, touches.
Assembling the matrix and the children's remainders gives [F₁₁ ·; F₂₁ F₂₂]; then L₁₁ = chol F₁₁, L₂₁ = F₂₁L₁₁⁻ᵀ, and
the remainder F₂₂ − L₂₁L₂₁ᵀ goes to the parent. Duff & Reid, The multifrontal solution of indefinite sparse symmetric
linear equations, ACM Trans. Math. Softw. 9 (1983) 302-325. Only lower triangles are filled or read; unknowns of a
front stand in elimination order, so the lower triangle of a child lands in the lower triangle of its parent.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ..arrays import Floats, Ints
from ..errors import SolveError
from .dissection import Part


@dataclass(frozen=True, slots=True, eq=False)
class Front:
    """One part's share of the factor: unknowns start..stop (in elimination order), later ones it touches."""

    start: int
    stop: int
    later: Ints
    corner: Floats
    below: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Factor:
    """L of P A Pᵀ = L Lᵀ as fronts in elimination order; `order` (n,) lists the unknowns as they are eliminated."""

    order: Ints
    fronts: tuple[Front, ...]

    @property
    def bytes(self) -> int:
        """Memory of the factor."""
        return sum(front.corner.nbytes + front.below.nbytes for front in self.fronts)

    def solve(self, columns: Floats) -> Floats:
        """Solve for columns (n, k)."""
        from scipy.linalg.blas import dgemm, dtrsm

        work = np.ascontiguousarray(columns[self.order].T)
        for front in self.fronts:
            own = dtrsm(1.0, front.corner, work[:, front.start : front.stop].T, lower=1)
            work[:, front.start : front.stop] = own.T
            if len(front.later):
                work[:, front.later] -= dgemm(1.0, front.below, own).T
        for front in reversed(self.fronts):
            own = np.asfortranarray(work[:, front.start : front.stop].T)
            if len(front.later):
                far = work[:, front.later].T
                own = dgemm(-1.0, front.below, far, beta=1.0, c=own, trans_a=1, overwrite_c=1)
            work[:, front.start : front.stop] = dtrsm(1.0, front.corner, own, lower=1, trans_a=1).T
        result = np.empty_like(columns)
        result[self.order] = work.T
        return result


def factor(matrix: Any, parts: list[Part]) -> Factor:
    """Factor a symmetric positive definite CSR matrix with three unknowns per node, in the order of `parts`."""
    from scipy.linalg.blas import dsyrk, dtrsm
    from scipy.linalg.lapack import dpotrf

    order, lower, later = _symbolic(matrix, parts)
    local = np.empty(len(order), dtype=np.int64)
    waiting: dict[int, list[tuple[Ints, Floats]]] = {}
    fronts = []
    stop = 0
    for index, part in enumerate(parts):
        start, stop = stop, stop + 3 * len(part.nodes)
        size, rest = stop - start, later[index]
        local[start:stop] = np.arange(size)
        local[rest] = np.arange(len(rest))
        corner, below = _assemble(lower, start, stop, local, len(rest))
        remainder = np.zeros((len(rest), len(rest)), order="F")
        for unknowns, piece in waiting.pop(index, ()):
            _add(piece, local[unknowns], int(np.searchsorted(unknowns, stop)), corner, below, remainder)
        corner, failed = dpotrf(corner, lower=1, clean=0, overwrite_a=1)
        if failed:
            raise SolveError("factoring the block", "the stiffness is not positive definite", "", "check the mesh")
        if len(rest):
            below = dtrsm(1.0, corner, below, side=1, lower=1, trans_a=1, overwrite_b=1)
            remainder = dsyrk(-1.0, below, beta=1.0, c=remainder, lower=1, overwrite_c=1)
            waiting.setdefault(part.parent, []).append((rest, remainder))
        fronts.append(Front(start, stop, rest, corner, below))
    return Factor(order=order, fronts=tuple(fronts))


def _symbolic(matrix: Any, parts: list[Part]) -> tuple[Ints, Any, list[Ints]]:
    """Elimination order of unknowns, the reordered lower triangle (CSC), and the later unknowns of every front."""
    from scipy import sparse

    nodes = np.concatenate([part.nodes for part in parts])
    order = (3 * nodes[:, None] + np.arange(3)).ravel()
    lower = sparse.tril(matrix[order][:, order], format="csc")
    lower.sort_indices()
    later: list[Ints] = []
    below: dict[int, list[Ints]] = {}
    stop = 0
    for index, part in enumerate(parts):
        start, stop = stop, stop + len(part.nodes)
        touched = lower.indices[lower.indptr[3 * start] : lower.indptr[3 * stop]] // 3
        reach = np.unique(np.concatenate([touched, *below.pop(index, ())]))
        reach = reach[np.searchsorted(reach, stop) :]
        below.setdefault(part.parent, []).append(reach)
        later.append((3 * reach[:, None] + np.arange(3)).ravel())
    return order, lower, later


def _assemble(lower: Any, start: int, stop: int, local: Ints, rest: int) -> tuple[Floats, Floats]:
    """The matrix's own entries of one front: (s, s) lower triangle and (b, s)."""
    entries = slice(lower.indptr[start], lower.indptr[stop])
    rows, values = lower.indices[entries], lower.data[entries]
    columns = np.repeat(np.arange(stop - start), np.diff(lower.indptr[start : stop + 1]))
    inside = rows < stop
    corner = np.zeros((stop - start, stop - start), order="F")
    corner[local[rows[inside]], columns[inside]] = values[inside]
    below = np.zeros((rest, stop - start), order="F")
    below[local[rows[~inside]], columns[~inside]] = values[~inside]
    return corner, below


def _add(piece: Floats, place: Ints, own: int, corner: Floats, below: Floats, remainder: Floats) -> None:
    """Add a child's remainder: its first `own` unknowns are eliminated here, the others later."""
    first, second = place[:own], place[own:]
    corner[np.ix_(first, first)] += piece[:own, :own]
    below[np.ix_(second, first)] += piece[own:, :own]
    remainder[np.ix_(second, second)] += piece[own:, own:]
