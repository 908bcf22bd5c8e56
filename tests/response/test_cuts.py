"""Section forces read off the field equal the loads behind; stress on a plane carries them as beam theory says."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from boxes import box_block

from blockload.errors import BlockError
from blockload.response.cuts import section_cut, section_stress
from blockload.response.respond import solve

RNG = np.random.default_rng(5)


def wavy(p: np.ndarray) -> np.ndarray:
    x, y, z = p
    return np.array([x, y + 0.05 * np.sin(5 * x), z + 0.1 * y * x])


@pytest.fixture(scope="module", params=[{}, {"two": True, "move": wavy}], ids=["plain", "curved, two materials"])
def solved(request):
    block = box_block(**request.param)
    return block, solve(block)


@pytest.mark.parametrize("x", [-0.1, -0.27, -0.3, -0.52])
def test_what_crosses_a_cut_balances_loads_and_inertia_behind(x: float, solved) -> None:
    block, library = solved
    weights = RNG.normal(size=(3, library.unit_count))
    cut = section_cut(block, library, weights, x, np.array([x, 0.0, 0.1]))

    np.testing.assert_allclose(cut.found, cut.expected, atol=1e-9 * np.abs(cut.expected).max())
    assert np.abs(cut.expected).max() > 0.1


def test_a_field_that_does_not_solve_the_equations_is_caught_at_the_cut(solved) -> None:
    block, library = solved
    weights = RNG.normal(size=library.unit_count)
    wrong = replace(library, motion=np.asarray(library.motion) * 1.01)
    cut = section_cut(block, wrong, weights, -0.27, np.zeros(3))

    assert np.abs(cut.found - cut.expected).max() > 0.005 * np.abs(cut.expected).max()


def test_mass_ahead_and_behind_make_the_whole() -> None:
    block = box_block()
    library = solve(block)
    cut = section_cut(block, library, np.zeros(library.unit_count), -0.3, np.zeros(3))

    assert cut.mass == pytest.approx(library.mass / 2)
    np.testing.assert_allclose(cut.cg, [-0.45, 0, 0.15], atol=1e-12)


def bending(library, couple: float) -> np.ndarray:
    """Top pads pressed, bottom pads pulled, equal and opposite at both ends: M_sag = couple."""
    weights = np.zeros(library.unit_count)
    for kind, sign in (("front", 1.0), ("rear", -1.0)):
        for name, side in (("TL", -1.0), ("TR", -1.0), ("BL", 1.0), ("BR", 1.0)):
            weights[library.rows(kind, name).start] = sign * side * couple / (2 * 0.2)
    return weights


@pytest.mark.parametrize("x", [-0.25, -0.3, -0.35])
def test_first_moment_of_the_stress_is_minus_the_sagging_moment(x: float) -> None:
    """Positive M_sag: top compressed, bottom in tension."""
    block = box_block()
    library = solve(block)
    weights = bending(library, 500.0)
    section = section_stress(block, library, weights, x)
    cut = section_cut(block, library, weights, x, np.array([x, *section.centroid]))

    assert -cut.found[0, 4] == pytest.approx(500.0)
    assert section.area == pytest.approx(0.4 * 0.3, rel=1e-3)
    np.testing.assert_allclose(section.centroid, [0, 0.15], atol=1e-3)
    assert section.about_y[0] == pytest.approx(-500.0, rel=0.005)
    assert abs(section.force[0]) < 0.005 * 500 / 0.1
    assert section.top[0] < 0 < section.bottom[0]
    top = -500 * 0.12 / (0.4 * 0.3**3 / 12)
    assert section.top[0] == pytest.approx(top, rel=0.03)
    assert section.bottom[0] == pytest.approx(-top, rel=0.03)


def test_pulling_the_block_gives_its_mean_stress() -> None:
    block = box_block()
    library = solve(block)
    weights = np.zeros(library.unit_count)
    for name in ("TL", "TR", "BL", "BR"):
        weights[library.rows("front", name).start] = 1000.0
        weights[library.rows("rear", name).start] = -1000.0
    section = section_stress(block, library, weights, -0.3)

    assert section.force[0] == pytest.approx(4000, rel=5e-3)
    assert abs(section.about_y[0]) < 0.005 * 4000 * 0.3


@pytest.mark.parametrize("x", [-0.5, -0.41234, -0.2])
def test_the_slab_has_the_area_and_centroid_of_the_section(x: float) -> None:
    block = box_block()
    library = solve(block)
    section = section_stress(block, library, np.zeros(library.unit_count), x, 0.15)

    assert section.area == pytest.approx(0.4 * 0.3, rel=0.01)
    np.testing.assert_allclose(section.centroid, [0, 0.15], atol=1e-3)


def test_a_block_held_by_nothing_feels_no_heat_on_the_section() -> None:
    block = box_block()
    library = solve(block)
    rise = np.zeros(library.unit_count)
    rise[-1] = 100.0
    section = section_stress(block, library, rise, -0.3)

    assert abs(section.force[0]) < 1e-6 * 440e6 * 0.12


@pytest.mark.parametrize("cut", [section_cut, section_stress])
def test_a_plane_beside_the_block_is_refused(cut) -> None:
    block = box_block()
    library = solve(block)
    more = (np.zeros(3),) if cut is section_cut else ()

    with pytest.raises(BlockError, match=r"0\.5 m"):
        cut(block, library, np.zeros(library.unit_count), 0.5, *more)
