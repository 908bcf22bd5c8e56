"""NAFEMS, The Standard NAFEMS Benchmarks, TNSB Rev 3, October 1990, test LE10: thick elliptic plate under pressure.

Target σ_yy = −5.38 MPa at D = (2, 0, 0.6). The vertical support acts on the mid-height line of the outer face only.
"""

from __future__ import annotations

import numpy as np
import pytest
from solids import elements, grid, nodal_stress, node_at, solved, traction_load, unknowns

from blockload.response.stiffness import stiffness

TOLERANCE = 0.03


@pytest.mark.parametrize("cells", [(4, 6, 2), (6, 8, 4)], ids=["coarse", "fine"])
def test_le10_thick_plate_stress_at_the_inner_edge(cells: tuple[int, int, int], published) -> None:
    radial, around, high = cells
    mesh = grid(
        np.linspace(0, 1, radial + 1) ** 1.3,
        np.linspace(0, np.pi / 2, around + 1),
        np.linspace(0, 0.6, high + 1),
        lambda s, t, z: ((2.0 + 1.25 * s) * np.cos(t), (1.0 + 1.75 * s) * np.sin(t), z),
    )
    some = elements(mesh, 210e9, 0.3)
    x, y, z = mesh.doflocs
    outer = np.abs((x / 3.25) ** 2 + (y / 2.75) ** 2 - 1) < 1e-9
    held = np.concatenate(
        [
            unknowns(mesh, np.abs(y) < 1e-9, (1,)),
            unknowns(mesh, np.abs(x) < 1e-9, (0,)),
            unknowns(mesh, outer, (0, 1)),
            unknowns(mesh, outer & (np.abs(z - 0.3) < 1e-9), (2,)),
        ]
    )
    top = mesh.facets_satisfying(lambda p: np.abs(p[2] - 0.6) < 1e-9, boundaries_only=True)
    motion = solved(stiffness(some), traction_load(mesh, top, (0.0, 0.0, -1e6)), held)
    stress = nodal_stress(some, motion, node_at(mesh, (2.0, 0.0, 0.6)))

    published(
        f"LE10 thick plate, σ_yy at D, {mesh.nelements} elements",
        "NAFEMS TNSB Rev 3 (1990), LE10",
        expected=-5.38,
        got=stress[1] / 1e6,
        unit="MPa",
        tolerance=TOLERANCE,
    )
