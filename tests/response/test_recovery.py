"""Stress recovery: exact on linear fields, never averaged across volumes, on a closed surface wound outward."""

from __future__ import annotations

import numpy as np
import pytest
from boxes import STEEL, box_block

from blockload.response.elements import elements_of
from blockload.response.recovery import gradient_operator, hooke, surface_of, surface_stress


def bent(p: np.ndarray) -> np.ndarray:
    x, y, z = p
    return np.array([x + 0.3 * z * y, y + 0.2 * x * z, z + 0.02 * np.sin(6 * x)])


@pytest.mark.parametrize("move", [None, bent], ids=["straight", "curved"])
def test_a_linear_field_gives_its_own_stress_everywhere(move) -> None:
    block = box_block(move=move)
    surface = surface_of(block)
    strain = np.array([[1.0, 0.3, -0.4], [0.3, -0.5, 0.2], [-0.4, 0.2, 0.7]]) * 1e-3
    motion = (block.mesh.doflocs.T @ strain).reshape(-1, 1)
    some = elements_of(block)
    out = np.empty((len(surface.entry_node), 6, 1))
    operator = gradient_operator(some, surface, 1)
    lame, shear = np.full((2, len(out)), [[some.lame[0]], [some.shear[0]]])
    surface_stress(operator, lame, shear, motion, out)
    expected = hooke(strain[None], some.lame[:1], some.shear[:1])

    np.testing.assert_allclose(out[..., 0], np.broadcast_to(expected, out.shape[:2]), rtol=1e-9)


def test_no_stress_is_averaged_across_a_change_of_material() -> None:
    """Under one linear field, each side of the joint shows its own metal's stress at the shared nodes."""
    block = box_block(two=True)
    surface = surface_of(block)
    some = elements_of(block)
    motion = np.zeros((block.mesh.doflocs.shape[1], 3))
    motion[:, 0] = 1e-3 * block.mesh.doflocs[0]
    out = np.empty((len(surface.entry_node), 6, 1))
    young, poisson = (np.array(pair) for pair in zip((71e9, 0.33), STEEL[:2], strict=True))
    lame = (young * poisson / ((1 + poisson) * (1 - 2 * poisson)))[surface.entry_volume]
    shear = (young / (2 * (1 + poisson)))[surface.entry_volume]
    surface_stress(gradient_operator(some, surface, 2), lame, shear, motion.reshape(-1, 1), out)
    joint = np.abs(block.mesh.doflocs[0, surface.nodes[surface.entry_node]] + 0.3) < 1e-9

    assert set(surface.entry_volume[joint]) == {0, 1}
    np.testing.assert_allclose(out[:, 0, 0], (lame + 2 * shear) * 1e-3, rtol=1e-9)


@pytest.mark.parametrize("move", [None, bent], ids=["straight", "curved"])
def test_the_surface_is_closed_and_faces_outward(move) -> None:
    """Σ n dA = 0 and ⅓ Σ x·n dA is the volume (divergence theorem)."""
    block = box_block(move=move, cells=2)
    surface = surface_of(block)
    corners = block.mesh.doflocs.T[surface.nodes][surface.triangles]
    normal = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]) / 2
    volume = np.einsum("ti,ti->", corners.mean(axis=1), normal) / 3
    size = np.linalg.norm(normal, axis=1).sum()

    assert np.linalg.norm(normal.sum(axis=0)) < 1e-12 * size
    assert volume == pytest.approx(0.6 * 0.4 * 0.3, rel=1e-9 if move is None else 0.02)


def test_every_surface_node_has_an_entry_for_each_volume_it_touches() -> None:
    block = box_block(two=True)
    surface = surface_of(block)
    pairs = set(zip(surface.entry_node.tolist(), surface.entry_volume.tolist(), strict=True))

    assert len(pairs) == len(surface.entry_node)
    assert set(surface.entry_node) == set(range(len(surface.nodes)))
    place = block.mesh.doflocs[0, surface.nodes]
    for node, x in enumerate(place):
        assert ((node, 0) in pairs) == (x > -0.3 - 1e-9)
        assert ((node, 1) in pairs) == (x < -0.3 + 1e-9)
