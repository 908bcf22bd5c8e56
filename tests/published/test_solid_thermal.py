"""Uniform heating, free and held: textbook thermoelasticity (Timoshenko & Goodier, Theory of Elasticity, art. 148).

E = 71 GPa, ν = 0.33, α = 21e-6/K, +100 K: free strain 2.1e-3 and no stress; held in one, two or three directions
−149.10, −222.54, −438.53 MPa.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest
from solids import elements, grid, solved, unknowns

from blockload.response.recovery import gradients, hooke
from blockload.response.respond import solve
from blockload.response.stiffness import heat_loads, stiffness

sys.path.append(str(Path(__file__).parents[1] / "response"))
from boxes import box_block

RISE = 100.0
TOLERANCE = 1e-6


def test_a_free_block_grows_and_feels_no_stress(published) -> None:
    library = solve(box_block())
    place = library.surface_points
    motion = library.motion[:, -1].reshape(-1, 3)[library.surface_nodes] * RISE
    ends = [motion[np.abs(place[:, 0] - x) < 1e-9, 0].mean() for x in (0.0, -0.6)]

    published(
        "free thermal strain", "αΔT", expected=2.1e-3, got=(ends[0] - ends[1]) / 0.6, unit="-", tolerance=TOLERANCE
    )
    assert np.abs(library.stress[..., -1]).max() * RISE < TOLERANCE * 438.53e6


@pytest.mark.parametrize(("directions", "expected"), [(1, -149.1), (2, -222.537313), (3, -438.529412)])
def test_a_held_block_is_pressed(directions: int, expected: float, published) -> None:
    """Opposite faces held along one, two or three axes."""
    ends = np.linspace(0, 0.1, 3)
    mesh = grid(ends, ends, ends, lambda x, y, z: (x, y, z))
    some = elements(mesh, 71e9, 0.33, expansion=21e-6)
    place = mesh.doflocs
    held = [unknowns(mesh, place[axis] < 1e-12, (axis,)) for axis in range(3)]
    held += [unknowns(mesh, place[axis] > 0.1 - 1e-12, (axis,)) for axis in range(directions)]
    motion = solved(stiffness(some), heat_loads(some, 1)[:, 0] * RISE, np.concatenate(held))
    nodal, _ = gradients(some)
    stress = hooke(
        np.einsum("etad,eac->etdc", nodal, motion.reshape(-1, 3)[some.nodes]), some.lame[:, None], some.shear[:, None]
    )
    stress[..., :3] -= ((3 * some.lame + 2 * some.shear) * some.expansion)[:, None, None] * RISE
    stress /= 1e6

    np.testing.assert_allclose(stress[..., :directions], expected, rtol=TOLERANCE)
    np.testing.assert_allclose(stress[..., directions:], 0, atol=TOLERANCE * abs(expected))
    published(
        f"thermal stress, held in {directions} directions",
        "Timoshenko & Goodier, art. 148",
        expected=expected,
        got=stress[..., 0].mean(),
        unit="MPa",
        tolerance=TOLERANCE,
    )
