"""Laws of the beam element: rigid motion free of force, symmetry, energy, turning, mass, any number of pieces."""

from __future__ import annotations

import numpy as np
import pytest

from blockload.block.sections import Section, section_mass, section_stiffness
from blockload.block.thin_walls import Wall, thin_walled
from blockload.response.timoshenko import assembled, mass, rigid_arm, shapes, spread_load, stiffness, turned

YOUNG, SHEAR, DENSITY, LENGTH = 71e9, 26.7e9, 2700.0, 0.4


def lopsided() -> Section:
    """A channel with unlike flanges off the reference line: everything couples."""
    points = np.array([(0.10, 0.05), (0.0, 0.05), (0.02, 0.25), (0.18, 0.22)])
    return thin_walled({"wall": Wall(points=points, thickness=0.006)})


def parts(length: float = LENGTH) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    section = lopsided()
    C = section_stiffness(section, YOUNG, SHEAR)[None]
    m = section_mass(section, DENSITY)[None]
    return np.array([length]), C, m


def rigid(length: float = LENGTH) -> np.ndarray:
    return np.concatenate([rigid_arm(np.zeros(3)), rigid_arm(np.array([length, 0.0, 0.0]))])


def rotation(seed: int) -> np.ndarray:
    q, _ = np.linalg.qr(np.random.default_rng(seed).normal(size=(3, 3)))
    return q * np.sign(np.linalg.det(q))


def test_rigid_motion_costs_nothing_and_nothing_else_is_free() -> None:
    length, C, _ = parts()
    k = stiffness(length, C)[0]
    scale = np.sqrt(np.diag(k))

    assert np.abs(k @ rigid()).max() < 1e-9 * np.abs(k).max()
    values = np.linalg.eigvalsh(k / np.outer(scale, scale))
    assert np.abs(values[:6]).max() < 1e-12
    assert values[6] > 1e-6


def test_stiffness_and_mass_are_symmetric() -> None:
    length, C, m = parts()
    for matrix in (stiffness(length, C)[0], mass(length, C, m)[0]):
        np.testing.assert_array_equal(matrix, matrix.T)


def test_strain_energy_is_that_of_the_section_along_the_element() -> None:
    """½ dᵀ k d equals the integral of the section's own energy over the motion between the nodes."""
    length, C, _ = parts()
    motion = np.random.default_rng(1).normal(size=12)
    at, weight = np.polynomial.legendre.leggauss(4)
    x = LENGTH * (at + 1) / 2
    step = 1e-6
    ahead, behind = (shapes(length, C, x[None] + sign * step)[0] @ motion for sign in (1, -1))
    strain = (ahead - behind) / (2 * step)
    here = shapes(length, C, x[None])[0] @ motion
    strain[:, 1] -= here[:, 5]
    strain[:, 2] += here[:, 4]

    energy = 0.5 * (weight * LENGTH / 2) @ np.einsum("qi,ij,qj->q", strain, C[0], strain)
    assert energy == pytest.approx(0.5 * motion @ stiffness(length, C)[0] @ motion, rel=1e-6)


def test_motion_between_the_nodes_meets_the_nodes() -> None:
    length, C, _ = parts()
    at_ends = shapes(length, C, np.array([[0.0, LENGTH]]))[0]

    np.testing.assert_allclose(at_ends[0], np.eye(6, 12), atol=1e-9)
    np.testing.assert_allclose(at_ends[1], np.eye(6, 12, 6), atol=1e-9)


def test_mass_moves_rigidly_as_a_bar() -> None:
    """Mass, first moment and inertia of the element are those of its prism, whatever its stiffness."""
    length, C, m = parts()
    section = lopsided()
    found = rigid().T @ mass(length, C, m)[0] @ rigid()
    total = DENSITY * section.area * LENGTH
    y, z = section.centroid

    np.testing.assert_allclose(found[:3, :3], total * np.eye(3), rtol=1e-9, atol=1e-12)
    assert found[3, 3] == pytest.approx(total * (y**2 + z**2) + DENSITY * LENGTH * np.trace(section.second))
    assert found[4, 4] == pytest.approx(total * (LENGTH**2 / 3 + z**2) + DENSITY * LENGTH * section.about_y)
    assert found[3, 4] == pytest.approx(-total * y * LENGTH / 2)


def test_two_halves_are_one_whole() -> None:
    """An element is exact, so that cutting it in two changes nothing at its ends."""
    length, C, _ = parts()
    whole = stiffness(length, C)[0]
    half = assembled([(0, 1), (1, 2)], np.tile(stiffness(length / 2, C), (2, 1, 1)), 3)
    ends, middle = [*range(6), *range(12, 18)], [*range(6, 12)]
    inner = half[np.ix_(middle, middle)]
    condensed = half[np.ix_(ends, ends)] - half[np.ix_(ends, middle)] @ np.linalg.solve(
        inner, half[np.ix_(middle, ends)]
    )

    np.testing.assert_allclose(condensed, whole, rtol=0, atol=1e-8 * np.abs(whole).max())


def test_a_turned_element_answers_as_itself() -> None:
    """Forces from motion, turned or not, are the same physical forces."""
    length, C, _ = parts()
    k, turn = stiffness(length, C), rotation(3)
    motion = np.random.default_rng(2).normal(size=(4, 3))
    local = (k[0] @ (motion @ turn.T).ravel()).reshape(4, 3) @ turn

    np.testing.assert_allclose((turned(k, turn[None])[0] @ motion.ravel()).reshape(4, 3), local, rtol=1e-9)


def test_even_loads_keep_their_resultant() -> None:
    length, C, _ = parts()
    per_length = np.random.default_rng(4).normal(size=(1, 6))
    total = rigid().T @ spread_load(length, C, per_length)[0]
    expected = LENGTH * rigid_arm(np.array([LENGTH / 2, 0.0, 0.0])).T @ per_length[0]

    np.testing.assert_allclose(total, expected, rtol=1e-9)
