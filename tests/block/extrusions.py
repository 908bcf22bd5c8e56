"""Prisms along x for tests of sections: rectangles put together, and rings."""

from __future__ import annotations

import sys
from collections.abc import Sequence
from itertools import pairwise
from pathlib import Path

import numpy as np
from skfem import MeshTet, MeshTet2

from blockload.block.model import Block

sys.path.append(str(Path(__file__).parents[1] / "response"))
from boxes import block_of, tetrahedra, warped

LENGTH = 0.1


def rectangles(*parts: Sequence[float], pieces: int = 4) -> Block:
    """A prism over the union of rectangles (y from, y to, z from, z to), `pieces` elements over each shortest gap."""
    lines = [_lines({value for part in parts for value in part[k : k + 2]}, pieces) for k in (0, 2)]
    mesh = MeshTet.init_tensor(np.linspace(0.0, LENGTH, 3), *lines)
    middle = mesh.p[:, mesh.t].mean(axis=1)
    inside = np.zeros(middle.shape[1], dtype=bool)
    for low_y, high_y, low_z, high_z in parts:
        inside |= (low_y < middle[1]) & (middle[1] < high_y) & (low_z < middle[2]) & (middle[2] < high_z)
    return block_of(MeshTet2.from_mesh(mesh.remove_elements(np.flatnonzero(~inside))), [])


def _lines(edges: set[float], pieces: int) -> np.ndarray:
    ordered = sorted(edges)
    step = min(b - a for a, b in pairwise(ordered)) / pieces
    parts = [np.linspace(a, b, max(pieces, min(40, round((b - a) / step))) + 1) for a, b in pairwise(ordered)]
    return np.unique(np.concatenate(parts).round(12))


def ring(inner: float, outer: float, *, around: int = 48, through: int = 6) -> Block:
    """A tube along x."""
    angles = np.linspace(0.0, 2 * np.pi, around + 1)
    mesh = tetrahedra(np.linspace(0.0, LENGTH, 3), angles, np.linspace(inner, outer, through + 1))

    def bent(points: np.ndarray) -> np.ndarray:
        x, angle, radius = points
        return np.stack([x, radius * np.cos(angle), radius * np.sin(angle)])

    return block_of(warped(mesh, bent), [])
