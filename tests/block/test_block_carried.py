"""What the mesh does not have: engine minus metal minus named parts, in mass, first moment and inertia."""

from __future__ import annotations

import numpy as np
import pytest

from blockload.block.carried import REMAINDER, carried_masses
from blockload.block.moments import MassProperties
from blockload.case.model import Body, Carried


def assembled(parts: list[tuple[float, np.ndarray, np.ndarray]]) -> tuple[float, np.ndarray, np.ndarray]:
    """Put rigid parts together: the parallel-axis theorem (Steiner), written out component by component."""
    mass = sum(m for m, _, _ in parts)
    cg = sum(m * c for m, c, _ in parts) / mass
    inertia = np.zeros((3, 3))
    for m, c, own in parts:
        x, y, z = c - cg
        inertia += own + m * np.array(
            [[y * y + z * z, -x * y, -x * z], [-x * y, x * x + z * z, -y * z], [-x * z, -y * z, x * x + y * y]]
        )
    return mass, cg, inertia


def test_metal_parts_and_remainder_add_up_to_the_engine() -> None:
    engine = Body(name="engine", mass=190.0, cg=np.array([-1.8, 0, 0.27]), inertia=np.diag([9.0, 11, 12]))
    metal = MassProperties(mass=60.0, cg=np.array([-1.82, 0.01, 0.30]), inertia=np.diag([2.5, 3.0, 3.6]))
    named = Carried(
        name="plenum", on="valley", mass=6.0, cg=np.array([-1.75, 0, 0.52]), inertia=np.diag([0.05, 0.2, 0.2])
    )
    carried = carried_masses(engine, metal, (named,), "main_bearings")
    parts = [(metal.mass, metal.cg, metal.inertia)] + [(c.mass, c.cg, c.inertia) for c in carried]
    mass, cg, inertia = assembled(parts)

    assert [(c.name, c.attachment) for c in carried] == [("plenum", "valley"), (REMAINDER, "main_bearings")]
    assert mass == pytest.approx(190.0, rel=1e-12)
    np.testing.assert_allclose(cg, engine.cg, atol=1e-12)
    np.testing.assert_allclose(inertia, engine.inertia, atol=1e-11)
