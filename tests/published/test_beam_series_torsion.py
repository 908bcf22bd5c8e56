"""Torsional stiffness in series, 1/K = Σ 1/K_i: the identity of springs in a row, here as four beams end to end.

Tub, block, gearbox case and joints of 12, 30, 20 and 15 kN·m/deg make 4.28571 kN·m/deg; the block's share of the
twist at 5 kN·m is 5/30 deg.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np

from blockload.car.chassis import in_series

sys.path.append(str(Path(__file__).parents[1] / "response"))
from frames import Frame, stiffness_of_section

SOURCE = "identity of springs in series"
PER_DEGREE = 180e3 / np.pi  # N·m/rad of 1 kN·m/deg
PARTS = np.array([12.0, 30.0, 20.0, 15.0])
LENGTHS = np.array([1.2, 0.62, 0.5, 0.3])


def test_four_parts_end_to_end(published) -> None:
    points = np.zeros((5, 3))
    points[1:, 0] = np.cumsum(LENGTHS)
    sections = [stiffness_of_section(value * PER_DEGREE * length) for value, length in zip(PARTS, LENGTHS, strict=True)]
    frame = Frame(points, [(k, k + 1) for k in range(4)], sections)
    motion, _ = frame.solve(range(6), {6 * 4 + 3: 5000.0})
    twist = np.degrees(motion[:, 3])

    got = 5.0 / twist[-1]
    published("four parts in series", SOURCE, expected=4.28571, got=got, unit="kN·m/deg", tolerance=2e-6)
    got = twist[2] - twist[1]
    published("the block's share of the twist", SOURCE, expected=5 / 30, got=got, unit="deg", tolerance=1e-6)


def test_the_chassis_adds_its_block_alike(published) -> None:
    rest = 1 / (1 / 12 + 1 / 20 + 1 / 15)
    got = in_series(rest * PER_DEGREE, 30 * PER_DEGREE) / PER_DEGREE
    published("block in series with the chassis", SOURCE, expected=4.28571, got=got, unit="kN·m/deg", tolerance=2e-6)
