"""Small frames of beam elements for tests: members between points, supports, loads, end forces."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from blockload.block.sections import given_section, section_stiffness
from blockload.response.timoshenko import assembled, spread_load, stiffness, turned

STIFF = 1e9  # axial and shear stiffness of slender members, over what bending needs


def stiffness_of_section(bending: float, *, shear: float | None = None, length: float = 1.0) -> np.ndarray:
    """C of a symmetric section: EI both ways, GJ alike, no stretch; no shear unless GA_s is given."""
    firm = STIFF * bending / length**2
    section = given_section(
        area=firm,
        centroid=np.zeros(2),
        second=np.eye(2) * bending,
        torsion_constant=bending,
        shear_centre=np.zeros(2),
        shear_area=np.eye(2) * (firm if shear is None else shear),
        fibres=np.zeros((0, 2)),
    )
    return section_stiffness(section, 1.0, 1.0)


class Frame:
    """Members (start, end) between points (n, 3) with their C; local y is the frame's y wherever that can be."""

    def __init__(self, points: Sequence, members: Sequence[tuple[int, int]], sections: Sequence[np.ndarray]) -> None:
        self.points = np.asarray(points, dtype=float)
        self.ends = np.asarray(members)
        self.C = np.asarray(sections)
        span = self.points[self.ends[:, 1]] - self.points[self.ends[:, 0]]
        self.length = np.linalg.norm(span, axis=1)
        self.axes = np.array([_axes(direction) for direction in span / self.length[:, None]])
        self.k = turned(stiffness(self.length, self.C), self.axes)
        self.even = np.zeros((len(self.ends), 12))

    def load_evenly(self, member: int, force: Sequence[float]) -> None:
        """Spread a force per length, in the frame's axes, over a member."""
        local = np.concatenate([self.axes[member] @ np.asarray(force, dtype=float), np.zeros(3)])
        one = slice(member, member + 1)
        nodal = spread_load(self.length[one], self.C[one], local[None])
        self.even[member] += turned(nodal, self.axes[one])[0]

    def solve(self, held: Sequence[int], loads: Mapping[int, float]) -> tuple[np.ndarray, np.ndarray]:
        """Motion (n, 6) and end forces (members, 2, 6) in the frame's axes, on each member at each end."""
        count = len(self.points)
        K = assembled(self.ends, self.k, count)
        right = assembled(self.ends, self.even, count)
        for unknown, value in loads.items():
            right[unknown] += value
        free = np.setdiff1d(np.arange(6 * count), held)
        motion = np.zeros(6 * count)
        motion[free] = np.linalg.solve(K[np.ix_(free, free)], right[free])
        rows = (6 * self.ends[:, :, None] + np.arange(6)).reshape(-1, 12)
        force = np.einsum("nij,nj->ni", self.k, motion[rows]) - self.even
        return motion.reshape(-1, 6), force.reshape(-1, 2, 6)


def _axes(direction: np.ndarray) -> np.ndarray:
    across = np.array([0.0, 1.0, 0.0]) if abs(direction[1]) < 0.9 else np.array([0.0, 0.0, 1.0])
    up = np.cross(direction, across)
    up /= np.linalg.norm(up)
    return np.array([direction, np.cross(up, direction), up])


def line(length: float, pieces: int, section: np.ndarray) -> Frame:
    """A straight beam along x."""
    points = np.zeros((pieces + 1, 3))
    points[:, 0] = np.linspace(0.0, length, pieces + 1)
    return Frame(points, [(k, k + 1) for k in range(pieces)], [section] * pieces)
