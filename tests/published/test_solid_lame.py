"""Lamé's thick cylinder: Timoshenko & Goodier, Theory of Elasticity, 3rd ed. 1970, art. 28.

r_i = 50 mm, r_o = 100 mm, 100 MPa inside, E = 210 GPa, ν = 0.3, plane strain: hoop stress 166.667, 92.593, 66.667 MPa
and radial stress −100, −25.926, 0 MPa at r = 50, 75, 100 mm; u(50) = 0.045397 mm.
"""

from __future__ import annotations

import numpy as np
from solids import elements, grid, nodal_stress, node_at, solved, traction_load, unknowns

from blockload.response.stiffness import stiffness

TOLERANCE = 0.01
SOURCE = "Timoshenko & Goodier (1970), art. 28"


def test_stress_and_growth_of_a_thick_cylinder(published) -> None:
    mesh = grid(
        np.linspace(0.05, 0.1, 7),
        np.linspace(0, np.pi / 2, 9),
        np.array([0.0, 0.01]),
        lambda r, t, z: (r * np.cos(t), r * np.sin(t), z),
    )
    some = elements(mesh, 210e9, 0.3)
    x, y, z = mesh.doflocs
    held = np.concatenate(
        [
            unknowns(mesh, np.abs(y) < 1e-12, (1,)),
            unknowns(mesh, np.abs(x) < 1e-12, (0,)),
            unknowns(mesh, (z < 1e-12) | (z > 0.01 - 1e-12), (2,)),
        ]
    )
    corner_radius = np.hypot(*mesh.p[:2, mesh.facets])
    inside = np.flatnonzero((np.abs(corner_radius - 0.05) < 1e-9).all(axis=0))
    load = traction_load(mesh, inside, None, pressure=100e6)
    motion = solved(stiffness(some), load, held)

    for radius, hoop, radial in ((0.05, 166.667, -100.0), (0.075, 92.593, -25.926), (0.1, 66.667, 0.0)):
        stress = nodal_stress(some, motion, node_at(mesh, (radius, 0.0, 0.0))) / 1e6
        place = f"r = {radius * 1e3:.0f} mm"
        published(f"Lamé hoop stress at {place}", SOURCE, expected=hoop, got=stress[1], unit="MPa", tolerance=TOLERANCE)
        assert abs(stress[0] - radial) < TOLERANCE * 166.667
    growth = motion.reshape(-1, 3)[node_at(mesh, (0.05, 0.0, 0.0)), 0]
    published("Lamé growth at r = 50 mm", SOURCE, expected=0.045397, got=growth * 1e3, unit="mm", tolerance=TOLERANCE)


def test_pressure_pushes_a_bore_open() -> None:
    """The integral of a pressure over the bore of a quarter cylinder is its projected area times the pressure."""
    mesh = grid(
        np.linspace(0.05, 0.1, 3),
        np.linspace(0, np.pi / 2, 9),
        np.array([0.0, 0.01]),
        lambda r, t, z: (r * np.cos(t), r * np.sin(t), z),
    )
    corner_radius = np.hypot(*mesh.p[:2, mesh.facets])
    inside = np.flatnonzero((np.abs(corner_radius - 0.05) < 1e-9).all(axis=0))
    total = traction_load(mesh, inside, None, pressure=1.0).reshape(-1, 3).sum(axis=0)

    np.testing.assert_allclose(total[:2], 0.05 * 0.01, rtol=1e-4)
