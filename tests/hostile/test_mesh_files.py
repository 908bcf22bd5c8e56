"""Mesh files that cannot be used: each is refused with its own reason, and nothing ends the process."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from tiny import Tiny, case_for, tiny, write, write_cells

from blockload.block.building import build
from blockload.errors import BlockError


def refusal(path: Path, **changes: object) -> BlockError:
    with pytest.raises(BlockError) as caught:
        build(case_for(path, **changes))
    return caught.value


def moved(box: Tiny, points: np.ndarray) -> Tiny:
    return replace(box, points=points)


def test_a_missing_file(tmp_path) -> None:
    error = refusal(tmp_path / "no.vtu")

    assert "no such file" in error.found
    assert "relative to the case file" in error.remedy


def test_a_foreign_format_lists_what_can_be_read(tmp_path) -> None:
    error = refusal(tmp_path / "block.stl")

    assert error.allowed == ".vtu, .vtk, .msh, .xdmf, .med"


@pytest.mark.parametrize("suffix", [".vtu", ".msh", ".vtk", ".xdmf", ".med"])
@pytest.mark.parametrize("share", [0.0, 0.3, 0.9])
def test_a_truncated_file(tmp_path, capsys, suffix: str, share: float) -> None:
    """The reader's own printing and leaving of the process stay inside."""
    path = write(tiny(), tmp_path / f"whole{suffix}")
    content = path.read_bytes()
    path.write_bytes(content[: int(share * len(content))])
    error = refusal(path)

    assert path.name in error.where
    assert "cannot be read" in error.found or "no cells" in error.found or "no volume names" in error.found
    assert capsys.readouterr() == ("", "")


def test_words_in_place_of_a_mesh(tmp_path) -> None:
    path = tmp_path / "words.vtu"
    path.write_text("this is no mesh")

    assert "cannot be read" in refusal(path).found


def test_linear_tetrahedra_and_how_to_raise_them(tmp_path) -> None:
    box = tiny()
    path = write_cells(tmp_path / "linear.vtu", box.points, {"tetra": box.elements[:, :4]})
    error = refusal(path)

    assert f"{len(box.elements)} linear" in error.found
    assert "second order" in error.remedy


def test_cells_that_are_no_tetrahedra(tmp_path) -> None:
    cube = np.array([[0, 0, 0], [1, 0, 0], [1, 1, 0], [0, 1, 0], [0, 0, 1], [1, 0, 1], [1, 1, 1], [0, 1, 1.0]])
    path = write_cells(tmp_path / "cube.vtu", cube, {"hexahedron": np.arange(8)[None]})

    assert "1 hexahedron" in refusal(path).found


def test_a_surface_without_volume_elements(tmp_path) -> None:
    box = tiny()
    path = write_cells(tmp_path / "skin.vtu", box.points, {"triangle6": box.faces["underside"]})

    assert "no volume elements" in refusal(path).found


def test_points_that_are_not_finite(tmp_path) -> None:
    box = tiny()
    points = box.points.copy()
    points[3, 1] = np.nan
    path = write_cells(tmp_path / "nan.vtu", points, {"tetra10": box.elements})

    assert "not finite" in refusal(path).found


def test_a_mesh_without_volume_names(tmp_path) -> None:
    error = refusal(write(replace(tiny(), volumes={}), tmp_path / "nameless.vtu"))

    assert "no volume names" in error.found
    assert "name the solids" in error.remedy


def test_an_element_in_two_volumes_and_one_in_none(tmp_path) -> None:
    box = tiny()
    rows = box.volumes["crankcase"]
    both = replace(box, volumes={"crankcase": rows, "head": np.append(box.volumes["head"], rows[0])})
    none = replace(box, volumes={"crankcase": rows[1:], "head": box.volumes["head"]})

    assert "1 elements are both in 'crankcase' and in 'head'" in refusal(write(both, tmp_path / "both.vtu")).found
    error = refusal(write(none, tmp_path / "none.vtu"))
    assert f"1 of {len(box.elements)} elements are in no volume" in error.found
    assert "crankcase, head" in error.remedy


def test_one_inverted_element_and_where_it_is(tmp_path) -> None:
    box = tiny()
    elements = box.elements.copy()
    elements[40] = elements[40][[0, 2, 1, 3, 6, 5, 4, 7, 9, 8]]
    centre = box.points[box.elements[40, :4]].mean(axis=0)
    error = refusal(write(replace(box, elements=elements), tmp_path / "inverted.vtu"))

    assert f"1 of {len(elements)} elements are inverted" in error.found
    assert ", ".join(f"{value:.3f}" for value in centre) in error.found


def test_a_curved_element_inverted_by_one_mid_node(tmp_path) -> None:
    """Its corners are sound: only the curved edge turns it inside out."""
    box = tiny()
    points = box.points.copy()
    corners = points[box.elements[0, :4]]
    points[box.elements[0, 4]] += 0.42 * (corners[3] - corners[:2].mean(axis=0))
    error = refusal(write(moved(box, points), tmp_path / "curved.vtu"))

    assert "inverted" in error.found or "mid nodes" in error.found


def test_a_mirrored_mesh(tmp_path) -> None:
    box = tiny()
    error = refusal(write(moved(box, box.points * (1, -1, 1)), tmp_path / "mirrored.vtu"))

    assert f"{len(box.elements)} of {len(box.elements)} elements" in error.found
    assert "mirrored" in error.remedy


def test_mid_nodes_in_another_order(tmp_path) -> None:
    """The last two mid nodes exchanged, as one mesher's own order has them."""
    box = tiny()
    path = write_cells(tmp_path / "order.vtu", box.points, {"tetra10": box.elements[:, [0, 1, 2, 3, 4, 5, 6, 7, 9, 8]]})
    error = refusal(path)

    assert "mid nodes away from the middle" in error.found
    assert "node order" in error.remedy


def test_a_block_below_the_ground(tmp_path) -> None:
    error = refusal(write(tiny(), tmp_path / "tiny.vtu"), place=np.array([0.0, 0.0, -0.105]))

    assert "5.0 mm below the ground" in error.found
    assert "block.place" in error.remedy


@pytest.mark.parametrize(
    ("scale", "unit", "said"),
    [(1e3, 1.0, 'probably "mm"'), (1.0, 1e-3, 'probably "m"'), (1e2, 1.0, 'probably "cm"')],
)
def test_the_wrong_unit_names_the_right_one(tmp_path, scale: float, unit: float, said: str) -> None:
    error = refusal(write(tiny(), tmp_path / "unit.vtu", scale=scale), mesh_unit=unit)

    assert said in error.remedy
    assert f"{0.62 * scale * unit:.4g} m long" in error.found
