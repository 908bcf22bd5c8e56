"""Names through files: every format, bit for bit, overlaps kept, orphan points dropped."""

from __future__ import annotations

from dataclasses import replace

import meshio
import numpy as np
import pytest
from skfem import Mesh
from tiny import Tiny, case_for, tiny, write, write_cells

from blockload.block.building import build
from blockload.block.reading import read_mesh


@pytest.mark.parametrize("suffix", [".vtu", ".vtk", ".xdmf", ".msh", ".med"])
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


def test_physical_groups_of_msh_4_are_read_with_their_overlaps(tmp_path) -> None:
    """Written here line by line: a surface may be in two groups, numbers of nodes start at one and leave gaps."""
    box = tiny()
    path = tmp_path / "groups.msh"
    path.write_text(_msh_4(box))
    block = build(case_for(path))
    sets = block.mesh.boundaries

    assert set(sets) == set(box.faces) - {"underside"} | {"saddles"}
    assert set(sets["saddles"]) == set(sets["main_1"]) | set(sets["main_2"])
    assert block.attachment("main_bearings").area == pytest.approx(0.30 * 0.42, rel=1e-12)
    assert set(block.volumes) == {"crankcase", "head"}


def test_named_families_of_a_med_file_are_read(tmp_path) -> None:
    """As a pre-processor writes them: one family number per cell, names beside the numbers."""
    box = tiny()
    box = replace(box, faces={name: rows for name, rows in box.faces.items() if name != "underside"})
    physical = _physical(box)
    tags = [-array for array in physical["cell_data"]["gmsh:physical"]]
    cells = [("triangle6", np.vstack(list(box.faces.values()))), ("tetra10", box.elements)]
    mesh = meshio.Mesh(box.points, cells, cell_data={"cell_tags": tags})
    mesh.cell_tags = {-int(entry[0]): [name] for name, entry in physical["field_data"].items()}
    mesh.write(tmp_path / "families.med")
    block = build(case_for(tmp_path / "families.med"))

    assert set(block.volumes) == {"crankcase", "head"}
    assert {name for item in block.attachments for name in item.sets} == set(box.faces)


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


def _msh_4(box: Tiny) -> str:
    """MSH 4.1 as text: mid nodes in that format's order, the last two the other way round."""
    surfaces = {name: rows for name, rows in box.faces.items() if name != "underside"}
    groups = [*surfaces, "saddles", *box.volumes]
    number = {name: i for i, name in enumerate(groups, start=1)}
    lines = ["$MeshFormat", "4.1 0 8", "$EndMeshFormat", "$PhysicalNames", str(len(groups))]
    lines += [f'{3 if name in box.volumes else 2} {number[name]} "{name}"' for name in groups]
    lines += ["$EndPhysicalNames", "$Entities", f"0 0 {len(surfaces)} {len(box.volumes)}"]
    for tag, name in enumerate(surfaces, start=1):
        tags = [number[name], *([number["saddles"]] if name.startswith("main") else [])]
        lines.append(f"{tag} 0 0 0 1 1 1 {len(tags)} {' '.join(map(str, tags))} 0")
    lines += [f"{tag} 0 0 0 1 1 1 1 {number[name]} 0" for tag, name in enumerate(box.volumes, start=1)]
    count = len(box.points)
    lines += ["$EndEntities", "$Nodes", f"1 {count} 1 {2 * count}", f"3 1 0 {count}"]
    lines += [str(2 * i + 1) for i in range(count)]
    lines += [" ".join(f"{value:.17g}" for value in point) for point in box.points]
    total = sum(map(len, surfaces.values())) + len(box.elements)
    lines += ["$EndNodes", "$Elements", f"{len(surfaces) + len(box.volumes)} {total} 1 {total}"]
    blocks = [(2, tag, 9, rows) for tag, rows in enumerate(surfaces.values(), start=1)]
    order = [0, 1, 2, 3, 4, 5, 6, 7, 9, 8]
    blocks += [(3, tag, 11, box.elements[rows][:, order]) for tag, rows in enumerate(box.volumes.values(), start=1)]
    element = 0
    for dimension, tag, kind, rows in blocks:
        lines.append(f"{dimension} {tag} {kind} {len(rows)}")
        for row in rows:
            element += 1
            lines.append(f"{element} {' '.join(str(2 * node + 1) for node in row)}")
    return "\n".join([*lines, "$EndElements", ""])
