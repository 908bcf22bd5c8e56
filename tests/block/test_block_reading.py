"""Names through files: every format, bit for bit, overlaps kept, orphan points dropped."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from skfem import Mesh
from tiny import Tiny, case_for, tiny, write, write_cells

from blockload.block.building import build
from blockload.block.reading import read_mesh


@pytest.mark.parametrize("suffix", [".vtu", ".vtk", ".xdmf", ".msh"])
def test_names_come_back_bit_for_bit_with_their_overlaps(tmp_path, suffix: str) -> None:
    """Underside holds main_1 and main_2: the set that overlaps survives beside the others."""
    path = write(tiny(), tmp_path / f"tiny{suffix}")
    saved = Mesh.load(tmp_path / f"tiny{suffix}") if suffix == ".vtu" else Mesh.load(write(tiny(), tmp_path / "t.vtu"))
    block = build(case_for(path))

    assert set(block.mesh.boundaries) == set(tiny().faces)
    for name, facets in saved.boundaries.items():
        np.testing.assert_array_equal(np.sort(block.mesh.boundaries[name]), np.sort(facets))
    for name, elements in saved.subdomains.items():
        np.testing.assert_array_equal(block.mesh.subdomains[name], elements)
    under, first = block.mesh.boundaries["underside"], block.mesh.boundaries["main_1"]
    assert set(first) < set(under)


def test_coordinates_come_back_bit_for_bit(tmp_path) -> None:
    raw = read_mesh(write(tiny(), tmp_path / "tiny.vtu"))

    np.testing.assert_array_equal(np.unique(raw.points, axis=0), np.unique(tiny().points, axis=0))


def test_named_cell_sets_of_faces_and_elements_are_read_by_their_corners(tmp_path) -> None:
    """As a mesher writes them: six-node faces beside the elements, names on both (MSH 2.2)."""
    box = tiny()
    box = replace(box, faces={name: rows for name, rows in box.faces.items() if name != "underside"})
    faces = {"triangle6": np.vstack(list(box.faces.values())), "tetra10": box.elements}
    path = write_cells(tmp_path / "sets.msh", box.points, faces, file_format="gmsh22", **_physical(box))
    block = build(case_for(path))
    direct = build(case_for(write(box, tmp_path / "direct.vtu")))

    for one, other in zip(block.attachments, direct.attachments, strict=True):
        assert one.sets == other.sets
        np.testing.assert_allclose(one.centroid, other.centroid, atol=1e-12)
        assert one.area == pytest.approx(other.area, rel=1e-12)
    assert block.volumes == direct.volumes


def test_orphan_points_are_dropped_and_counted(tmp_path) -> None:
    box = tiny()
    loose = np.array([[0.0, 0.0, -5.0], [9.0, 9.0, 9.0]])
    shifted = Tiny(np.vstack([loose, box.points]), box.elements + 2, {}, box.volumes)
    path = write_cells(tmp_path / "loose.vtu", shifted.points, {"tetra10": shifted.elements})
    raw = read_mesh(path)

    assert raw.orphans == 2
    assert raw.points[:, 2].min() == pytest.approx(0.10)
    assert len(raw.points) == len(box.points)


def test_a_set_of_all_elements_beside_the_volumes_is_left_out(tmp_path) -> None:
    box = tiny()
    whole = replace(box, volumes={**box.volumes, "everything": np.arange(len(box.elements))})
    block = build(case_for(write(whole, tmp_path / "whole.vtu")))

    assert block.volumes == ("crankcase", "head")
    assert block.metadata["sets_left_out"] == ("everything",)


def test_a_single_volume_of_all_elements_is_the_volume(tmp_path) -> None:
    box = replace(tiny(), volumes={"casting": np.arange(len(tiny().elements))})

    assert build(case_for(write(box, tmp_path / "one.vtu"))).volumes == ("casting",)


def _physical(box: Tiny) -> dict:
    """Physical groups: one number per name, as tags per cell and in field data (MSH 2.2 and 4.1 alike)."""
    names = [*box.faces, *box.volumes]
    faces = np.concatenate([np.full(len(rows), i + 1) for i, rows in enumerate(box.faces.values())])
    solid = np.zeros(len(box.elements), dtype=int)
    for name, rows in box.volumes.items():
        solid[rows] = names.index(name) + 1
    return {
        "cell_data": {"gmsh:physical": [faces, solid], "gmsh:geometrical": [faces, solid]},
        "field_data": {name: np.array([i + 1, 2 if name in box.faces else 3]) for i, name in enumerate(names)},
    }
