"""Curved elements: the bound of det J, the shape measure, and the repair of invalid elements."""

from __future__ import annotations

import numpy as np
import pytest
from tiny import second_order

from blockload.block.curved import (
    determinant_bound,
    least_determinant,
    scaled_jacobian,
    straight_determinant,
    straightened,
)
from blockload.errors import BlockError

CORNERS = np.array([[0.0, 0, 0], [1, 0, 0], [0, 1, 0], [0, 0, 1]])
ONE = np.array([[0, 1, 2, 3]])


def test_a_straight_element_is_bounded_by_six_times_its_volume() -> None:
    points, elements = second_order(CORNERS, ONE)

    np.testing.assert_allclose(determinant_bound(points, elements), 1.0, rtol=1e-14)
    np.testing.assert_allclose(least_determinant(points, elements), 1.0, rtol=1e-14)
    np.testing.assert_allclose(straight_determinant(points, elements), 1.0, rtol=1e-14)


def test_the_bound_lies_below_det_j_everywhere_on_a_curved_element() -> None:
    """Against det J of the quadratic map sampled at 2000 points, from shape functions written out here."""
    rng = np.random.default_rng(3)
    points, elements = second_order(CORNERS, ONE)
    points[4:] += rng.uniform(-0.06, 0.06, (6, 3))
    weights = rng.dirichlet(np.ones(4), 2000)
    lowest = min(_determinant(points[elements[0]], w) for w in weights)

    assert determinant_bound(points, elements)[0] <= lowest
    assert determinant_bound(points, elements)[0] > lowest - 0.2
    assert least_determinant(points, elements)[0] == pytest.approx(
        min(_determinant(points[elements[0]], w) for w in _samples()), rel=1e-12
    )


def test_the_regular_tetrahedron_scores_one_and_a_flat_one_nearly_zero() -> None:
    regular = np.array([[1.0, 1, 1], [-1, 1, -1], [1, -1, -1], [-1, -1, 1]])
    points, elements = second_order(regular, np.array([[0, 1, 2, 3]]))
    flat, _ = second_order(CORNERS * (1, 1, 1e-3), ONE)

    assert abs(scaled_jacobian(points, elements)[0]) == pytest.approx(1.0, rel=1e-12)
    assert scaled_jacobian(flat, elements)[0] < 2e-3


def test_an_invalid_curved_element_is_pulled_straight_and_a_valid_one_left_alone() -> None:
    corners = np.vstack([CORNERS, CORNERS + np.array([5.0, 0, 0])])
    points, elements = second_order(corners, np.array([[0, 1, 2, 3], [4, 5, 6, 7]]))
    points[elements[0, 4]] += (0.0, 0.45, 0.45)  # the middle of edge 01 pushed through the element
    points[elements[1, 4]] += (0.0, -0.02, -0.02)
    assert least_determinant(points, elements)[0] < 0.0

    repaired, moved = straightened(points, elements)

    assert np.all(determinant_bound(repaired, elements) > 0.0)
    assert moved == 6
    np.testing.assert_array_equal(repaired[elements[1]], points[elements[1]])
    np.testing.assert_array_equal(repaired[:8], points[:8])


def test_an_inverted_straight_element_is_refused() -> None:
    points, elements = second_order(CORNERS, np.array([[0, 2, 1, 3]]))

    with pytest.raises(BlockError, match="1 flat or inverted"):
        straightened(points, elements)


def _samples() -> list[np.ndarray]:
    corners = list(np.eye(4))
    edges = [(corners[i] + corners[j]) / 2 for i in range(4) for j in range(i)]
    faces = [(1 - corner) / 3 for corner in corners]
    return [*corners, *edges, *faces, np.full(4, 0.25)]


def _determinant(nodes: np.ndarray, w: np.ndarray) -> float:
    """Quadratic shape functions in barycentric coordinates: N_i = w_i (2 w_i − 1), N_ij = 4 w_i w_j."""
    edges = ((0, 1), (1, 2), (0, 2), (0, 3), (1, 3), (2, 3))
    slopes = np.zeros((10, 4))
    for i in range(4):
        slopes[i, i] = 4 * w[i] - 1
    for k, (i, j) in enumerate(edges, start=4):
        slopes[k, i], slopes[k, j] = 4 * w[j], 4 * w[i]
    jacobian = nodes.T @ (slopes[:, 1:] - slopes[:, :1])
    return float(np.linalg.det(jacobian))
