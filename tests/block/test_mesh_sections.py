"""Sections cut from meshes: laws that hold whatever the shape, and the table for printing."""

from __future__ import annotations

import numpy as np
import pytest
from extrusions import LENGTH, rectangles, ring

from blockload.block.mesh_section import mesh_section, section_table
from blockload.block.plane_cut import CLOSE, plane_cut
from blockload.block.thin_walls import Wall, thin_walled
from blockload.errors import BlockError


def tee(size: float = 1.0, shift: float = 0.0):
    parts = [(-0.10, 0.10, 0.09, 0.11), (-0.01, 0.01, -0.10, 0.09)]
    return rectangles(*(tuple(size * value + (shift if k > 1 else 0.0) for k, value in enumerate(p)) for p in parts))


@pytest.mark.parametrize("x", [0.0, 0.02, 0.049999, 0.05, 0.050001, LENGTH])
def test_a_prism_has_one_section_everywhere(x: float) -> None:
    """At the ends, through nodes, beside and between them: the same but for corners of the cut that are made one."""
    block = tee()
    reference, found = mesh_section(block, 0.031).section, mesh_section(block, x).section

    assert found.area == pytest.approx(reference.area, rel=2 * CLOSE)
    np.testing.assert_allclose(found.second, reference.second, rtol=4 * CLOSE, atol=1e-12)
    assert found.torsion_constant == pytest.approx(reference.torsion_constant, rel=5e-3)
    np.testing.assert_allclose(found.shear_centre, reference.shear_centre, atol=1e-4)


def test_properties_scale_and_move_with_the_section() -> None:
    """Twice the size: area by 4, moments by 16; a shift moves centroid and shear centre alone."""
    one, two = mesh_section(tee(), 0.03), mesh_section(tee(2.0), 0.03)
    moved = mesh_section(tee(shift=0.3), 0.03)

    assert two.section.area == pytest.approx(4 * one.section.area)
    assert two.section.torsion_constant == pytest.approx(16 * one.section.torsion_constant, rel=1e-6)
    np.testing.assert_allclose(two.section.second, 16 * one.section.second, rtol=1e-6, atol=1e-12)
    np.testing.assert_allclose(moved.section.second, one.section.second, atol=1e-12)
    assert moved.section.torsion_constant == pytest.approx(one.section.torsion_constant, rel=1e-6)
    np.testing.assert_allclose(moved.section.shear_centre - one.section.shear_centre, [0.0, 0.3], atol=1e-8)
    np.testing.assert_allclose(moved.shear_factors, one.shear_factors, rtol=1e-6)


def test_a_round_bar_twists_about_itself_without_warping() -> None:
    """J of a ring is its polar second moment, whatever the polygon that stands for it."""
    section = mesh_section(ring(0.03, 0.05), 0.03).section

    assert section.torsion_constant == pytest.approx(np.trace(section.second), rel=2e-3)
    assert section.torsion_constant < np.trace(section.second)


def test_thin_walls_and_mesh_agree() -> None:
    """A casing open at the bottom, as an engine without its sump: the shear centre lies above the metal."""
    b, h, t = 0.30, 0.24, 0.006
    walls = thin_walled({"wall": Wall(points=np.array([(b, 0), (b, h), (0, h), (0, 0)]), thickness=t)})
    half = t / 2
    parts = [(-half, half, 0, h + half), (b - half, b + half, 0, h + half), (-half, b + half, h - half, h + half)]
    found = mesh_section(rectangles(*parts, pieces=2), 0.03).section

    np.testing.assert_allclose(found.shear_centre, walls.shear_centre, atol=0.02 * h)
    assert walls.shear_centre[1] > h
    assert found.torsion_constant == pytest.approx(walls.torsion_constant, rel=0.03)
    np.testing.assert_allclose(found.second, walls.second, rtol=0.02, atol=1e-9)
    np.testing.assert_allclose(np.diag(found.shear_area), np.diag(walls.shear_area), rtol=0.05)


def test_separate_pieces_have_no_shear_centre() -> None:
    """Two bars side by side: their torsion constants add, and nothing says where shear acts."""
    one = mesh_section(rectangles((0, 0.02, 0, 0.03)), 0.03)
    two = mesh_section(rectangles((0, 0.02, 0, 0.03), (0.08, 0.10, 0, 0.03)), 0.03)

    assert (one.pieces, two.pieces) == (1, 2)
    assert two.section.torsion_constant == pytest.approx(2 * one.section.torsion_constant, rel=1e-3)
    assert np.isnan(two.section.shear_centre).all()
    assert np.isnan(two.shear_factors).all()
    assert section_table(rectangles((0, 0.02, 0, 0.03), (0.08, 0.10, 0, 0.03)), 0.03).rows[0][-1] == "2"


def test_the_table_has_a_row_for_each_x() -> None:
    table = section_table(tee(), [0.02, 0.04])

    assert len(table.rows) == 2
    assert all(len(row) == len(table.columns) for row in table.rows)
    assert table.rows[0][0] == "20"
    assert float(table.rows[0][1]) == pytest.approx(1e4 * (0.2 * 0.02 + 0.02 * 0.19), rel=1e-3)


def test_triangles_of_a_cut_cover_it_once() -> None:
    """Every inner edge belongs to two triangles, every other to one: the cut hangs together as the elements do."""
    mesh = plane_cut(ring(0.03, 0.05), 0.031)
    shared = (mesh.f2t[1] >= 0).sum()

    assert 2 * shared + (mesh.f2t[1] < 0).sum() == 3 * mesh.t.shape[1]
    assert len(mesh.boundary_facets()) < 0.2 * mesh.facets.shape[1]


def test_a_plane_beside_the_metal_is_refused() -> None:
    with pytest.raises(BlockError, match="misses the metal"):
        mesh_section(tee(), 2 * LENGTH)
