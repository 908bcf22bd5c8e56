"""Laws of a beam's library, and the beam beside a solid of the same section."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from beams import beam_of
from boxes import attachment, block_of, near, tetrahedra
from scipy.spatial.transform import Rotation

from blockload.block.mesh_section import mesh_section
from blockload.block.sections import Section, given_section
from blockload.block.thin_walls import Wall, thin_walled
from blockload.response.beam_library import middle_cut, respond_beam
from blockload.response.fields import field
from blockload.response.respond import solve

WIDTH, HEIGHT, SPAN = 0.10, 0.14, 0.60
POINTS = [
    ("TL", "front", (0.0, 0.10, 0.30)),
    ("BR", "front", (0.0, -0.10, 0.05)),
    ("TL", "rear", (-SPAN, 0.12, 0.30)),
    ("BR", "rear", (-SPAN, -0.08, 0.10)),
    ("saddle", "other", (-0.30, 0.02, 0.11)),
]


def lopsided(size: float) -> Section:
    points = size * np.array([(0.10, 0.05), (0.0, 0.05), (0.02, 0.25), (0.18, 0.22)])
    return thin_walled({"wall": Wall(points=points, thickness=0.006)})


def tapered(pieces: int = 12):
    x = np.linspace(-SPAN, 0.0, pieces + 1)
    return beam_of(x, [lopsided(1.0 + 0.5 * (k + 0.5) / pieces) for k in range(pieces)], POINTS)


def test_flexibility_is_symmetric_and_never_negative() -> None:
    F = respond_beam(tapered()).flexibility
    scale = np.sqrt(np.diag(F))

    np.testing.assert_array_equal(F, F.T)
    assert np.linalg.eigvalsh(F / np.outer(scale, scale))[0] > -1e-9


def test_everything_measured_while_solving_is_rounding() -> None:
    """Residual, reactions of the held node, relief, symmetry and work against energy."""
    checks = respond_beam(tapered()).checks

    assert set(checks) == {"residual", "reaction", "relief", "symmetry", "unit energy"}
    assert max(checks.values()) < 1e-9


def test_mass_is_the_blocks_own() -> None:
    block = tapered()
    library = respond_beam(block)

    assert library.mass == pytest.approx(block.mass, rel=1e-12)
    np.testing.assert_allclose(library.inertia, block.inertia, atol=1e-9 * np.abs(block.inertia).max())


def test_a_rigid_push_makes_no_stress() -> None:
    """Forces that accelerate every slice alike need nothing of the sections: here, none at all."""
    block = tapered()
    library = respond_beam(block)
    modes = library.rigid_modes()
    balanced = np.random.default_rng(5).normal(size=len(modes))
    same_face = np.zeros(len(modes))  # equal and opposite forces between two pads of one rigid face
    arm = block.attachments[1].centroid - block.attachments[0].centroid
    same_face[0:3], same_face[6:9] = arm, -arm

    assert np.abs(modes.T @ same_face).max() < 1e-12
    largest = np.abs(library.stress[:, :, :-1] @ balanced).max()
    assert np.abs(library.stress[:, :, :-1] @ same_face).max() < 1e-9 * largest


def test_forces_across_a_section_balance_what_is_behind() -> None:
    block = tapered()
    wrenches = np.random.default_rng(6).normal(size=(5, 6 * len(POINTS)))
    found, expected = middle_cut(block, wrenches)

    np.testing.assert_allclose(found, expected, atol=1e-9 * np.abs(expected).max())


def test_where_the_reference_line_runs_makes_no_difference() -> None:
    """The same beam turned about x answers with the same flexibility, turned."""
    angle = 0.7
    turn = Rotation.from_euler("x", angle).as_matrix()
    first = lopsided(1.0)

    def walls(by: np.ndarray) -> Section:
        points = np.array([(0.10, 0.05), (0.0, 0.05), (0.02, 0.25), (0.18, 0.22)]) @ by[1:, 1:].T
        return thin_walled({"wall": Wall(points=points, thickness=0.006)})

    x = np.linspace(-SPAN, 0.0, 9)
    plain = respond_beam(beam_of(x, [first] * 8, POINTS)).flexibility
    moved = [(name, kind, tuple(turn @ np.array(at))) for name, kind, at in POINTS]
    turned = respond_beam(beam_of(x, [walls(turn)] * 8, moved)).flexibility
    both = np.kron(np.eye(2 * len(POINTS)), turn)

    np.testing.assert_allclose(turned, both @ plain @ both.T, atol=1e-8 * np.abs(plain).max())


def test_a_taper_converges_with_the_square_of_the_pieces() -> None:
    fine = respond_beam(tapered(192)).flexibility
    gaps = [np.abs(respond_beam(tapered(n)).flexibility - fine).max() for n in (12, 24)]

    assert 3.0 < gaps[0] / gaps[1] < 5.0


def test_heat_moves_pads_apart_and_stresses_nothing() -> None:
    block = tapered()
    library = respond_beam(block)
    growth = block.materials["beam"].thermal_expansion
    gap = library.thermal_motion.reshape(-1, 6)[2, :3] - library.thermal_motion.reshape(-1, 6)[0, :3]

    np.testing.assert_allclose(gap, growth * (library.centroids[2] - library.centroids[0]), rtol=1e-9)
    assert not library.stress[:, :, -1].any()


def brick():
    """A box of quadratic tetrahedra loaded over its whole end faces."""
    y, z = np.linspace(-WIDTH / 2, WIDTH / 2, 5), np.linspace(0.0, HEIGHT, 6)
    mesh = tetrahedra(np.linspace(-SPAN, 0.0, 25), y, z)
    ends = [
        attachment(mesh, "A", "front", near(mesh, 0, 0.0, (0, 0), 10.0)),
        attachment(mesh, "B", "rear", near(mesh, 0, -SPAN, (0, 0), 10.0)),
    ]
    return block_of(mesh, ends)


def test_a_long_box_as_beam_and_as_solid() -> None:
    """Section from the mesh's own cut; stretch, bending, twist and stress between the ends agree within 2 per cent."""
    solid = brick()
    cut = mesh_section(solid, -0.31)
    middle = np.array([0.0, HEIGHT / 2])
    section = given_section(
        area=cut.section.area,
        centroid=cut.section.centroid,
        second=cut.section.second,
        torsion_constant=cut.section.torsion_constant,
        shear_centre=cut.section.shear_centre,
        shear_area=np.diag(cut.shear_factors * cut.section.area),
        fibres=np.array([(WIDTH / 2, HEIGHT), (WIDTH / 2, 0.0)]),
    )
    points = [("A", "front", (0.0, *middle)), ("B", "rear", (-SPAN, *middle))]
    beam = respond_beam(beam_of(np.linspace(-SPAN, 0.0, 25), [section] * 24, points))
    library = solve(solid)

    for component in range(6):
        weights = np.zeros(12)  # the ends pull or turn against each other, which moves nothing as a whole
        weights[component], weights[component + 6] = 1.0, -1.0
        if component in (1, 2):
            other, sign = (5, -1.0) if component == 1 else (4, 1.0)
            weights[[other, other + 6]] = sign * SPAN / 2
        got, expected = (weights @ F @ weights for F in (beam.flexibility, library.flexibility))
        assert got == pytest.approx(expected, rel=0.02), component
        motion = field(library, np.append(weights, 0.0))
        assert np.isfinite(motion).all()

    bending = np.zeros(12)
    bending[4], bending[10] = 1.0, -1.0
    at = np.array([-0.30, WIDTH / 2, HEIGHT])
    stress = [
        (item.stress[np.linalg.norm(item.surface_points[item.entry_node] - at, axis=1).argmin(), 0, :12] @ bending)
        for item in (beam, library)
    ]
    assert stress[0] == pytest.approx(stress[1], rel=0.01)
    assert stress[0] == pytest.approx((HEIGHT / 2) / cut.section.about_y, rel=1e-6)


def test_a_wrong_stiffness_is_caught_by_the_cut() -> None:
    """The check of forces across mid-length can fail: loads of another state do not balance."""
    block = tapered()
    wrenches = np.random.default_rng(8).normal(size=(1, 6 * len(POINTS)))
    heavier = replace(block, per_length=1.5 * block.per_length[::-1])
    found, _ = middle_cut(block, wrenches)
    _, expected = middle_cut(heavier, wrenches)

    assert np.abs(found - expected).max() > 1e-3 * np.abs(found).max()
