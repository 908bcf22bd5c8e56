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
from .threads import one_thread, use_for

STRIP = 192


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
        with one_thread():
            for front in self.fronts:
                use_for(front.below.size * len(work))
                own = dtrsm(1.0, front.corner, work[:, front.start : front.stop].T, lower=1)
                work[:, front.start : front.stop] = own.T
                if len(front.later):
                    work[:, front.later] -= dgemm(1.0, front.below, own).T
            for front in reversed(self.fronts):
                use_for(front.below.size * len(work))
                own = np.asfortranarray(work[:, front.start : front.stop].T)
                if len(front.later):
                    far = work[:, front.later].T
                    own = dgemm(-1.0, front.below, far, beta=1.0, c=own, trans_a=1, overwrite_c=1)
                work[:, front.start : front.stop] = dtrsm(1.0, front.corner, own, lower=1, trans_a=1).T
        result = np.empty_like(columns)
        result[self.order] = work.T
        return result


def factor(matrix: Any, parts: list[Part]) -> Factor:
    """Factor a symmetric positive definite matrix of 3×3 node blocks (BSR), in the order of `parts`."""
    from scipy.linalg.blas import dsyrk, dtrsm
    from scipy.linalg.lapack import dpotrf

    nodes = np.concatenate([part.nodes for part in parts])
    position = np.empty(len(nodes), dtype=np.int64)
    position[nodes] = np.arange(len(nodes))
    local = np.empty(len(nodes), dtype=np.int64)
    waiting: dict[int, list[tuple[Ints, Floats]]] = {}
    fronts = []
    stop = 0
    with one_thread():
        for index, part in enumerate(parts):
            start, stop = stop, stop + len(part.nodes)
            entries = _Entries.of(matrix, part.nodes, position)
            children = waiting.pop(index, [])
            rest = np.unique(np.concatenate([entries.rows, *(later for later, _ in children)]))
            rest = rest[np.searchsorted(rest, stop) :]
            local[start:stop] = np.arange(stop - start)
            local[rest] = np.arange(len(rest))
            size, far = 3 * (stop - start), 3 * len(rest)
            use_for(size * (size + far) ** 2)
            corner, below = entries.assembled(stop, local, len(rest))
            remainder = np.zeros((far, far), order="F")
            for later, piece in children:
                own = 3 * int(np.searchsorted(later, stop))
                _add(piece, _unknowns(local[later]), own, corner, below, remainder)
            corner, failed = dpotrf(corner, lower=1, clean=0, overwrite_a=1)
            if failed:
                raise SolveError("factoring the block", "the stiffness is not positive definite", "", "check the mesh")
            if far:
                below = dtrsm(1.0, corner, below, side=1, lower=1, trans_a=1, overwrite_b=1)
                remainder = dsyrk(-1.0, below, beta=1.0, c=remainder, lower=1, overwrite_c=1)
                waiting.setdefault(part.parent, []).append((rest, remainder))
            fronts.append(Front(3 * start, 3 * stop, _unknowns(rest), corner, below))
    return Factor(order=_unknowns(nodes), fronts=tuple(fronts))


def _unknowns(nodes: Ints) -> Ints:
    return (3 * nodes[:, None] + np.arange(3)).ravel()


@dataclass(frozen=True, slots=True, eq=False)
class _Entries:
    """The matrix's own blocks of one front, by position in the order: rows, local columns, blocks (column, row)."""

    rows: Ints
    columns: Ints
    blocks: Floats

    @classmethod
    def of(cls, matrix: Any, nodes: Ints, position: Ints) -> _Entries:
        """Blocks on and below the diagonal in these nodes' columns, read from their rows by symmetry."""
        counts = matrix.indptr[nodes + 1] - matrix.indptr[nodes]
        ends = np.cumsum(counts)
        place = np.arange(ends[-1]) + np.repeat(matrix.indptr[nodes] - (ends - counts), counts)
        rows = position[matrix.indices[place]]
        columns = np.repeat(np.arange(len(nodes)), counts)
        lower = rows >= position[nodes[0]] + columns
        return cls(rows[lower], columns[lower], matrix.data[place[lower]])

    def assembled(self, stop: int, local: Ints, rest: int) -> tuple[Floats, Floats]:
        """The front's (s, s) lower triangle and (b, s), both by columns."""
        size = int(self.columns[-1]) + 1
        corner = np.zeros((size, 3, size, 3))
        below = np.zeros((size, 3, rest, 3))
        inside = self.rows < stop
        for target, chosen in ((corner, inside), (below, ~inside)):
            target[self.columns[chosen], :, local[self.rows[chosen]], :] = self.blocks[chosen]
        return corner.reshape(3 * size, 3 * size).T, below.reshape(3 * size, 3 * rest).T


def _add(piece: Floats, place: Ints, own: int, corner: Floats, below: Floats, remainder: Floats) -> None:
    """Add a child's remainder: its first `own` unknowns are eliminated here, the others later."""
    first, second = place[:own], place[own:]
    _add_lower(corner, first, piece[:own, :own])
    below.T[first[:, None], second] += piece.T[:own, own:]
    _add_lower(remainder, second, piece[own:, own:])


def _add_lower(target: Floats, place: Ints, piece: Floats) -> None:
    """Add the lower triangle of a piece, in strips of columns that skip most of the empty upper one."""
    across = target.T  # columns outermost, as they lie in memory
    for start in range(0, len(place), STRIP):
        columns = slice(start, start + STRIP)
        across[place[columns, None], place[start:]] += piece.T[columns, start:]
