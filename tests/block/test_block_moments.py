"""Integrals over elements and faces against formulas, and the signs of normals."""

from __future__ import annotations

import numpy as np
import pytest
from skfem import MeshTet, MeshTet2
from tiny import STUDS, case_for, tiny, write

from blockload.block.building import build
from blockload.block.moments import face_moments, facet_nodes, mass_properties, volumes


@pytest.fixture(scope="module")
def block(tmp_path_factory):
    return build(case_for(write(tiny(), tmp_path_factory.mktemp("tiny") / "tiny.vtu")))


def test_a_box_has_the_mass_cg_and_inertia_of_the_formula(block) -> None:
    a, b, c, mass = 0.62, 0.30, 0.20, 2680.0 * 0.62 * 0.30 * 0.20

    assert block.mass == pytest.approx(mass, rel=1e-12)
    np.testing.assert_allclose(block.cg, (-1.81, 0.0, 0.20), atol=1e-12)
    expected = mass / 12 * np.diag([b * b + c * c, a * a + c * c, a * a + b * b])
    np.testing.assert_allclose(block.inertia, expected, atol=1e-12)


def test_a_square_pad_has_the_area_centroid_normal_and_moments_of_the_formula(block) -> None:
    for kind, x, sign in (("front", -1.50, 1.0), ("rear", -2.12, -1.0)):
        for name, (y, z) in STUDS.items():
            pad = block.attachment(name, kind)
            assert pad.area == pytest.approx(0.05**2, rel=1e-12)
            np.testing.assert_allclose(pad.centroid, (x, y, z), atol=1e-12)
            np.testing.assert_allclose(pad.normal, (sign, 0, 0), atol=1e-12)
            np.testing.assert_allclose(pad.moments, np.diag([0, 1, 1]) * 0.05**4 / 12, atol=1e-18)


def test_a_pad_far_larger_than_its_washer_face_is_pointed_out(block) -> None:
    """2500 mm² under an M12 stud whose washer face (ISO 7089, 24 over 13 mm) is 320 mm²."""
    notes = block.metadata["pads_of_unusual_area"]

    assert [note["pad"] for note in notes] == [f"{face} {name}" for face in ("front", "rear") for name in STUDS]
    assert notes[0]["ratio"] == pytest.approx(2500 / (np.pi / 4 * (24**2 - 13**2)), rel=1e-12)


def test_several_sets_are_united_and_listed(block) -> None:
    saddles = block.attachment("main_bearings")

    assert saddles.sets == ("main_1", "main_2")
    assert saddles.area == pytest.approx(0.30 * (0.20 + 0.22), rel=1e-12)


def test_normals_of_a_closed_surface_sum_to_zero_and_point_outward(block) -> None:
    """∮ n dA = 0 and ∮ x·n dA = 3 V, the divergence theorem."""
    mesh = block.mesh
    closed = face_moments(mesh, mesh.boundary_facets())
    nodes = mesh.doflocs[:, facet_nodes(mesh, mesh.boundary_facets())[:, :3]]
    vector = 0.5 * np.cross(nodes[:, :, 1] - nodes[:, :, 0], nodes[:, :, 2] - nodes[:, :, 0], axis=0)

    np.testing.assert_allclose(closed.normal, 0.0)
    np.testing.assert_allclose(vector.sum(axis=1), 0.0, atol=1e-15)
    assert np.sum(nodes.mean(axis=2) * vector) / 3.0 == pytest.approx(0.0372, rel=1e-12)


def test_a_curved_ball_comes_near_the_sphere_and_finer_comes_nearer() -> None:
    """Volume 4/3 π, area 4 π: the error falls by more than eight where the size halves (order above three)."""
    errors = []
    for refinements in (1, 2, 3):
        ball = MeshTet2.init_ball(refinements)
        content = volumes(ball, np.zeros(ball.nelements, dtype=np.int64), 1)[0]
        area = face_moments(ball, ball.boundary_facets()).area
        errors.append([abs(content / (4 / 3 * np.pi) - 1), abs(area / (4 * np.pi) - 1)])
    ratios = np.array(errors[:-1]) / np.array(errors[1:])

    assert np.all(ratios > 8.0)
    assert np.all(np.array(errors[-1]) < 2e-4)


def test_inertia_of_a_curved_ball_is_two_fifths_m_r_squared() -> None:
    ball = MeshTet2.init_ball(3)
    found = mass_properties(ball, np.full(ball.nelements, 1000.0))

    np.testing.assert_allclose(found.inertia, 0.4 * found.mass * np.eye(3), rtol=3e-4, atol=1e-3 * found.mass)


def test_normals_are_outward_however_the_elements_are_numbered() -> None:
    box = MeshTet2.from_mesh(MeshTet.init_tensor(*(np.linspace(0, 1, 3),) * 3)).with_boundaries(
        {"top": lambda x: x[2] == 1.0}
    )

    np.testing.assert_allclose(face_moments(box, box.boundaries["top"]).normal, (0, 0, 1), atol=1e-12)
