"""Stud forces of a rigid face and the extremes beside it."""

from __future__ import annotations

import numpy as np
import pytest
from car.worked_car import CAR, face, stud
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from blockload.car.studs import extremes, pattern, rigid_face, warp
from blockload.case.model import Face
from blockload.errors import CaseError

FRONT = pattern(CAR.faces["front"])


def summed(at: np.ndarray, axial: np.ndarray, shear: np.ndarray) -> np.ndarray:
    """Wrench about the centroid of stud forces on the engine."""
    d = at - at.mean(axis=0)
    force = np.concatenate([axial[:, None], shear], axis=1)
    arm = np.column_stack([np.zeros(len(at)), d])
    return np.concatenate([force.sum(axis=0), np.cross(arm, force).sum(axis=0)])


def faces() -> st.SearchStrategy[np.ndarray]:
    """Random unsymmetric patterns of 3 to 8 studs that are not nearly in a line."""
    wide = st.integers(3, 8).flatmap(lambda n: arrays(float, (n, 2), elements=st.floats(-0.5, 0.5)))
    return wide.filter(lambda at: np.linalg.svd(at - at.mean(axis=0), compute_uv=False)[1] > 0.05)


wrenches = arrays(float, 6, elements=st.floats(-1e4, 1e4))


@given(faces(), wrenches)
def test_stud_forces_sum_to_the_face_wrench(at: np.ndarray, wrench: np.ndarray) -> None:
    assert summed(at, *rigid_face(at, wrench)) == pytest.approx(wrench, abs=1e-7)


@given(faces(), wrenches)
def test_extremes_sum_to_the_face_wrench_wherever_they_exist(at: np.ndarray, wrench: np.ndarray) -> None:
    found = extremes(at, wrench)
    for group in range(2):
        axial, shear = found.axial[group], found.shear[group]
        if not np.isnan(axial).any():
            total = summed(at, axial, np.zeros((len(at), 2)))
            assert total[[0, 4, 5]] == pytest.approx(wrench[[0, 4, 5]], abs=1e-9 * (1 + np.abs(axial).max()))
        if not np.isnan(shear).any():
            total = summed(at, np.zeros(len(at)), shear)
            assert total[1:4] == pytest.approx(wrench[1:4], abs=1e-9 * (1 + np.abs(shear).max()))


@given(faces(), wrenches)
def test_the_rigid_face_has_the_least_sum_of_squares(at: np.ndarray, wrench: np.ndarray) -> None:
    """Equal springs store the least energy: the pseudo-inverse solution of the axial equations."""
    d = at - at.mean(axis=0)
    rows = np.array([np.ones(len(at)), d[:, 1], -d[:, 0]])
    least = np.linalg.pinv(rows) @ wrench[[0, 4, 5]]

    assert rigid_face(at, wrench)[0] == pytest.approx(least, abs=1e-6)


def test_extremes_of_lateral_bending_on_four_studs() -> None:
    """12.2 kN·m on the worked front face: 17.0/12.0 kN shared, 25.5 or 35.9 kN with one pair alone."""
    wrench = np.array([0, 0, 0, 0, 0, 12.2e3])
    shared, _ = rigid_face(FRONT, wrench)
    alone = extremes(FRONT, wrench).axial

    assert np.abs(shared) / 1e3 == pytest.approx([17.0, 17.0, 12.0, 12.0], abs=0.1)
    assert np.abs(alone[0]) / 1e3 == pytest.approx([25.5, 25.5, 0, 0], abs=0.1)
    assert np.abs(alone[1]) / 1e3 == pytest.approx([0, 0, 35.9, 35.9], abs=0.1)


def test_shear_in_the_bottom_pair_alone() -> None:
    """Side force at the centroid reaches the bottom pair with its couple about them: F z / (2 y)."""
    found = extremes(FRONT, np.array([0, 1000.0, 0, 0, 0, 0])).shear[1]

    assert found[:2] == pytest.approx(np.zeros((2, 2)))
    assert found[2:, 0] == pytest.approx([500.0, 500.0])
    assert found[2:, 1] == pytest.approx([-573.53, 573.53], abs=0.01), "1000 N x 0.195 m over 0.34 m"


def test_a_group_that_cannot_carry_it_is_not_a_number() -> None:
    """One stud alone takes no torsion, and three studs leave nothing free."""
    at = np.array([(0.0, 0.3), (0.2, 0.0), (-0.2, 0.0)])
    found = extremes(at, np.array([0, 0, 0, 1e3, 0, 1e3]))

    assert np.isnan(found.axial[0]).all()
    assert np.isnan(found.shear[0]).all()
    assert found.axial[1] == pytest.approx(rigid_face(at, np.array([0, 0, 0, 0, 0, 1e3]))[0])


def test_warp_of_a_four_stud_face() -> None:
    """(1, -1, -y_t/y_b, +y_t/y_b): the pattern no statics can see."""
    free = warp(FRONT)

    assert free is not None
    assert free / free[0] == pytest.approx([1.0, -1.0, -0.24 / 0.17, 0.24 / 0.17])
    assert warp(pattern(CAR.faces["rear"])) is None


@pytest.mark.parametrize(
    ("studs", "found"),
    [
        ([("A", 0.1, 0.1), ("B", -0.1, 0.1)], "2 studs"),
        ([("A", 0.1, 0.1), ("B", -0.1, 0.1), ("C", 0.3, 0.1)], "in one line"),
        ([("A", 0.0, 0.1), ("B", 0.1, 0.2), ("C", 0.3, 0.4), ("D", 0.2, 0.3)], "in one line"),
        ([("A", 0.1, 0.1), ("B", -0.1, 0.1), ("C", 0.0, 0.4), ("D", 0.1, 0.1)], "A and D at the same place"),
        ([], "0 studs"),
    ],
)
def test_a_pattern_that_cannot_carry_a_face_is_refused(studs: list[tuple[str, float, float]], found: str) -> None:
    with pytest.raises(CaseError) as caught:
        pattern(Face(name="front", x=-1.5, studs=tuple(stud(*s) for s in studs)))

    assert caught.value.where == "[faces.front.studs]"
    assert found in caught.value.found


def test_a_six_stud_pattern_is_accepted() -> None:
    assert pattern(face("rear", -2.0, {"T": (0.2, 0.4), "M": (0.2, 0.2), "B": (0.1, 0.0)})).shape == (6, 2)
