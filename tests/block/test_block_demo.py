"""The demo meshes as committed: named, valid, in place, of the mass of their geometry, one casting."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from scipy import sparse

from blockload.block.attachments import washer_face
from blockload.block.building import build
from blockload.block.curved import determinant_bound
from blockload.block.moments import face_moments
from blockload.case.reading import read

ROOT = Path(__file__).parents[2]
NAMES = ("demo-v8", "demo-v8-thin")


@pytest.fixture(scope="module", params=NAMES)
def demo(request):
    case = read(ROOT / "cases" / "demo.toml")
    mesh = ROOT / "meshes" / f"{request.param}.vtu"
    case = replace(case, block=replace(case.block, mesh=mesh))
    return case, build(case), json.loads(mesh.with_suffix(".json").read_text())


def test_four_volumes_and_thirty_sets_or_more(demo) -> None:
    _, block, _ = demo

    assert set(block.volumes) == {"block", "caps", "head_left", "head_right", "sump"}
    assert len(block.mesh.boundaries) >= 30
    assert all(len(facets) for facets in block.mesh.boundaries.values())
    assert 20_000 <= block.mesh.doflocs.shape[1] <= 40_000


def test_every_element_is_proved_valid(demo) -> None:
    _, block, _ = demo
    elements = block.mesh.dofs.element_dofs.T

    assert np.all(determinant_bound(block.mesh.doflocs.T, elements) > 0.0)


def test_mass_is_cad_volume_times_density_within_a_thousandth(demo) -> None:
    _, block, report = demo
    expected = sum(volume * block.materials[name].density for name, volume in report["cad_volume_m3"].items())

    assert block.mass == pytest.approx(expected, rel=1e-3)
    assert 40.0 < block.mass < 75.0


def test_each_pad_is_a_disc_in_the_face_plane_at_its_stud(demo) -> None:
    """Centroid within 0.5 mm, normal along x, flat within a micrometre, one to four washer faces in area."""
    case, block, report = demo
    radii = {(p["face"], p["name"]): p["radius"] for p in report["shape"]["pads"]}
    for kind, face in case.faces.items():
        for stud in face.studs:
            pad = block.attachment(stud.name, kind)
            np.testing.assert_allclose(pad.centroid, (face.x, *stud.at), atol=5e-4)
            assert pad.normal[0] == pytest.approx(1.0 if kind == "front" else -1.0, abs=1e-9)
            assert np.ptp(block.mesh.p[0, block.mesh.facets[:, pad.facets]]) < 1e-6
            assert pad.area == pytest.approx(np.pi * radii[kind, stud.name] ** 2, rel=0.002)
            assert 1.0 <= pad.area / washer_face(stud.size) <= 4.0
    assert block.metadata["pads_of_unusual_area"] == []


def test_saddles_and_caps_make_full_circles(demo) -> None:
    """Area 2 π r b, no mean normal, centroid on the crank axis."""
    _, block, report = demo
    shape = report["shape"]
    for number in range(1, 6):
        facets = block.mesh.boundaries[f"main_{number}"]
        found = face_moments(block.mesh, facets)
        width = np.ptp(block.mesh.p[0, block.mesh.facets[:, facets]])
        assert found.area == pytest.approx(np.pi * shape["main_bore"] * width, rel=2e-3)
        assert width == pytest.approx(shape["bulkhead"], abs=1e-9)
        np.testing.assert_allclose(found.normal, 0.0)
        np.testing.assert_allclose(found.centroid[1:], (0.0, shape["crank_z"]), atol=5e-4)


def test_bores_have_their_radius_and_stand_at_the_vee_angle(demo) -> None:
    _, block, report = demo
    shape = report["shape"]
    for bank, sign in (("L", 1.0), ("R", -1.0)):
        half = shape["vee_angle"] / 2
        axis = np.array([0.0, sign * np.sin(half), np.cos(half)])
        for number in range(1, 5):
            facets = block.mesh.boundaries[f"bore_{bank}{number}"]
            corners = block.mesh.p[:, np.unique(block.mesh.facets[:, facets])].T
            middle = np.array([face_moments(block.mesh, block.mesh.boundaries[f"chamber_{bank}{number}"]).centroid])
            arm = corners - middle
            radius = np.linalg.norm(arm - np.outer(arm @ axis, axis), axis=1)
            np.testing.assert_allclose(radius, shape["bore"] / 2, atol=5e-4)


def test_the_surface_is_closed(demo) -> None:
    """∮ n dA = 0 over the whole skin: no hole, no face turned inward."""
    _, block, _ = demo
    skin = block.mesh.boundary_facets()

    np.testing.assert_allclose(face_moments(block.mesh, skin).normal, 0.0)


def test_it_is_one_casting(demo) -> None:
    """Every volume hangs together with the others through shared faces."""
    _, block, _ = demo
    inner = block.mesh.f2t[:, block.mesh.f2t[1] >= 0]
    n = block.mesh.nelements
    graph = sparse.coo_array((np.ones(inner.shape[1]), (inner[0], inner[1])), shape=(n, n))

    assert sparse.csgraph.connected_components(graph, directed=False)[0] == 1
    for name in ("deck_left", "deck_right", "joint_sump", "joint_caps"):
        assert np.all(block.mesh.f2t[1, block.mesh.boundaries[name]] >= 0)


def test_it_clears_the_ground_and_leaves_a_possible_rest_of_the_engine(demo) -> None:
    case, block, _ = demo
    rest = block.carried[-1]
    small, middle, large = np.linalg.eigvalsh(rest.inertia)

    assert block.mesh.doflocs[2].min() > 0.02
    assert rest.mass + block.mass == pytest.approx(case.bodies["engine"].mass)
    assert small > 0
    assert large < small + middle


def test_left_and_right_are_the_cars(demo) -> None:
    _, block, _ = demo

    for name in ("head_left", "bore_L1", "deck_left", "head_left_top"):
        corners = block.mesh.t[:, block.mesh.subdomains[name]] if name == "head_left" else (
            block.mesh.facets[:, block.mesh.boundaries[name]]
        )  # fmt: skip
        assert block.mesh.p[1, corners].mean() > 0.05


def test_files_are_small() -> None:
    for name in NAMES:
        assert (ROOT / "meshes" / f"{name}.vtu").stat().st_size < 6e6
