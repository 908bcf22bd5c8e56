"""Shear factors: G. R. Cowper, The Shear Coefficient in Timoshenko's Beam Theory, J. Appl. Mech. 33 (1966) 335-340.

Rectangle 10(1+ν)/(12+11ν), round 6(1+ν)/(7+6ν), thin round tube 2(1+ν)/(4+3ν), thin square tube 20(1+ν)/(48+39ν),
hollow round 6(1+ν)(1+m²)²/[(7+6ν)(1+m²)² + (20+12ν)m²] with m = inner over outer radius (formulas from memory).
Other authors differ: Hutchinson (2001) has 5(1+ν)/(6+5ν) for the rectangle.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest

from blockload.block.beam import square_tube_shear
from blockload.block.mesh_section import mesh_section
from blockload.block.model import Block
from blockload.block.thin_walls import Wall, thin_walled

sys.path.append(str(Path(__file__).parents[1] / "block"))
from extrusions import rectangles, ring

SOURCE = "Cowper (1966)"


def square_tube(thickness: float) -> Block:
    t = thickness
    return rectangles((0, 1, 0, t), (0, 1, 1 - t, 1), (0, t, 0, 1), (1 - t, 1, 0, 1), pieces=2)


SOLIDS = {
    "rectangle": (lambda: rectangles((0, 0.06, 0, 0.1), pieces=6), 0.84967, 0.85093, 1e-4),
    "solid round": (lambda: ring(5e-4, 0.05), 0.88636, 0.88864, 2e-3),
    "hollow round, m = 0.5": (lambda: ring(0.05, 0.1), 0.62023, None, 2e-3),
    "thin round tube": (lambda: ring(0.098, 0.1, around=96, through=2), 0.53061, 0.53307, 3e-3),
    "thin square tube": (lambda: square_tube(0.01), 0.43551, 0.43700, 0.01),
}


@pytest.mark.parametrize("name", SOLIDS)
def test_factors_of_a_mesh(name: str, published) -> None:
    make, at_30, at_33, tolerance = SOLIDS[name]
    block = make()
    for poisson, expected in ((0.30, at_30), (0.33, at_33)):
        if expected is not None:
            for got in mesh_section(block, 0.03, poisson).shear_factors:
                what = f"shear factor, {name}, ν = {poisson:g}"
                published(what, SOURCE, expected=expected, got=got, unit="1", tolerance=tolerance)


def test_the_default_of_a_beam_is_the_thin_square_tube(published) -> None:
    for poisson, expected in ((0.30, 0.43551), (0.33, 0.43700)):
        what = f"default shear factor, ν = {poisson:g}"
        published(what, SOURCE, expected=expected, got=square_tube_shear(poisson), unit="1", tolerance=2e-5)


def test_thin_walls_follow_it_without_lateral_strain(published) -> None:
    """Shear areas from the walls' own shear flow are Cowper's at ν = 0: 5/12 for the square, 1/2 for the round tube."""
    square = Wall(points=np.array([[0, 0], [1, 0], [1, 1], [0, 1]]) * 0.3, thickness=0.003, closed=True)
    angle = np.linspace(0, 2 * np.pi, 97)[:-1]
    round_tube = Wall(points=0.2 * np.column_stack([np.cos(angle), np.sin(angle)]), thickness=0.003, closed=True)
    for what, wall, expected in (("square", square, 5 / 12), ("round", round_tube, 1 / 2)):
        section = thin_walled({"wall": wall})
        for got in np.diag(section.shear_area) / section.area:
            published(f"thin {what} tube, ν = 0", SOURCE, expected=expected, got=got, unit="1", tolerance=1e-3)
