"""Spread wrenches: resultants, symmetry of the idea, and refusal of attachments that cannot carry one."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from boxes import box_block

from blockload.block.model import Attachment, Block
from blockload.errors import BlockError
from blockload.response.spreading import facet_nodes, unit_wrenches


def resultant(block: Block, loads: np.ndarray, nodes: np.ndarray, centre: np.ndarray) -> np.ndarray:
    arm = block.mesh.doflocs.T[nodes] - centre
    moment = np.cross(arm[:, :, None], loads, axisa=1, axisb=1, axisc=1)
    return np.concatenate([loads.sum(axis=0), moment.sum(axis=0)])


def wavy(p: np.ndarray) -> np.ndarray:
    x, y, z = p
    return np.array([x + 0.1 * np.cos(4 * y), y, z + 0.05 * np.sin(8 * x)])


@pytest.mark.parametrize("move", [None, wavy], ids=["flat", "curved"])
def test_nodal_loads_have_the_wrench_asked_about_the_centroid(move) -> None:
    block = box_block(move=move)
    for item in block.attachments:
        loads, nodes, _ = unit_wrenches(block, item)
        found = resultant(block, loads, nodes, item.centroid)

        np.testing.assert_allclose(found, np.eye(6), atol=1e-12)


def test_another_quadrature_finds_the_same_wrench() -> None:
    for move, limit in ((None, 1e-12), (wavy, 1e-4)):
        block = box_block(move=move)
        for item in block.attachments:
            again = unit_wrenches(block, item)[2]
            scale = np.array([1.0] * 3 + [np.sqrt(item.area)] * 3)

            assert np.abs((again - np.eye(6)) / scale[:, None] * scale).max() < limit


def test_parts_of_an_attachment_add_up_to_the_whole() -> None:
    block = box_block()
    item = block.attachments[0]
    first = np.arange(len(item.facets)) % 2 == 0
    total = np.zeros((6, 6))
    for part in (first, ~first):
        loads, nodes, _ = unit_wrenches(block, item, part)
        total += resultant(block, loads, nodes, item.centroid)

    np.testing.assert_allclose(total, np.eye(6), atol=1e-12)


def test_an_axial_force_on_a_flat_pad_is_an_even_pressure() -> None:
    """Facets of equal area carry equal shares, and corners of a straight 6-node facet carry none."""
    block = box_block()
    item = block.attachments[0]
    loads, nodes, _ = unit_wrenches(block, item)
    corners = np.isin(nodes, facet_nodes(block, item.facets)[:, :3])

    np.testing.assert_allclose(loads[corners, 0, 0], 0, atol=1e-12)
    assert loads[~corners, 0, 0].min() > 0


def test_facet_nodes_put_middles_between_their_corners() -> None:
    block = box_block()
    six = facet_nodes(block, block.mesh.boundary_facets())
    points = block.mesh.doflocs.T

    for k, (i, j) in enumerate(((0, 1), (1, 2), (0, 2))):
        np.testing.assert_allclose(points[six[:, 3 + k]], (points[six[:, i]] + points[six[:, j]]) / 2, atol=1e-15)


def test_an_attachment_without_facets_is_refused() -> None:
    block = box_block()
    empty: Attachment = replace(block.attachments[0], facets=np.array([], dtype=np.int64))

    with pytest.raises(BlockError, match="cannot carry a wrench"):
        unit_wrenches(block, empty)
