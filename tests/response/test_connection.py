"""A mesh that is not one body is refused by name and place, before anything is solved."""

from __future__ import annotations

import numpy as np
import pytest
from boxes import attachment, block_of, box_block, material, near
from skfem import MeshTet2

from blockload.errors import BlockError
from blockload.response.respond import solve


def test_two_volumes_that_touch_without_sharing_nodes_are_refused() -> None:
    whole = box_block()
    points, cells = whole.mesh.doflocs, whole.mesh.dofs.element_dofs
    behind = points[:, cells[:4]].mean(axis=1)[0] < -0.3
    apart = cells.copy()
    apart[:, behind] += points.shape[1]
    used, inverse = np.unique(apart, return_inverse=True)
    mesh = MeshTet2(np.hstack([points, points])[:, used], inverse.reshape(cells.shape))
    pads = [attachment(mesh, "A", "front", near(mesh, 0, 0.0, (0, 0.15), 1.0))]
    block = block_of(mesh, pads, volume_of=behind.astype(np.int64), materials=[material(), material()])

    with pytest.raises(BlockError, match=r"2 separate pieces; the smallest, \d+ nodes of part_[01], is at"):
        solve(block)


def test_a_block_without_attachments_still_has_its_heat() -> None:
    block = block_of(box_block().mesh, [])
    library = solve(block)

    assert library.unit_count == 1
    assert library.flexibility.shape == (0, 0)
    assert library.checks["unit energy"] == 0
