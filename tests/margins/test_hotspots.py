"""Hotspots on a flat sheet whose peaks are known, and the places where elastic stress has no value."""

from __future__ import annotations

import numpy as np
import pytest
from skfem import MeshTet, MeshTri

from blockload.margins.hotspots import APART, edges, graph, peaks_apart, sharp_inner_edges


def sheet(n: int = 41, side: float = 0.1) -> tuple[np.ndarray, np.ndarray]:
    mesh = MeshTri.init_tensor(np.linspace(0, side, n), np.linspace(0, side, n))
    return np.column_stack([mesh.p.T, np.zeros(mesh.p.shape[1])]), mesh.t.T


def bump(points: np.ndarray, at: tuple[float, float], height: float, width: float = 0.004) -> np.ndarray:
    return height * np.exp(-((points[:, :2] - at) ** 2).sum(axis=1) / width**2)


def test_peaks_are_found_highest_first() -> None:
    points, triangles = sheet()
    centres = [(0.02, 0.02), (0.08, 0.02), (0.05, 0.08)]
    values = sum(bump(points, at, height) for at, height in zip(centres, (1.0, 3.0, 2.0), strict=True))

    found = peaks_apart(values, points, triangles)

    np.testing.assert_allclose(points[found[:3], :2], [centres[1], centres[2], centres[0]], atol=1e-9)


def test_no_two_peaks_within_15_mm_along_the_surface() -> None:
    points, triangles = sheet()
    values = bump(points, (0.05, 0.05), 2.0) + bump(points, (0.06, 0.05), 1.5) + bump(points, (0.05, 0.09), 1.0)

    found = peaks_apart(values, points, triangles)

    gaps = np.linalg.norm(points[found][:, None] - points[found], axis=-1) + np.eye(len(found))
    assert gaps.min() > APART - 1e-9
    assert len(found) == 2


def test_peaks_kept_before_keep_their_distance_too() -> None:
    points, triangles = sheet()
    values = bump(points, (0.05, 0.05), 2.0) + bump(points, (0.05, 0.09), 1.0)
    first = peaks_apart(values, points, triangles, most=1)

    again = peaks_apart(np.where(np.arange(len(values)) == first[0], 0.0, values), points, triangles, known=first)

    assert np.linalg.norm(points[again] - points[first[0]], axis=1).min() > APART - 1e-9


def test_distance_is_along_the_surface_and_not_through_the_air() -> None:
    """Two sheets 5 mm apart, joined nowhere: a peak on each is kept."""
    points, triangles = sheet()
    both = np.vstack([points, points + np.array([0.0, 0.0, 0.005])])
    cells = np.vstack([triangles, triangles + len(points)])
    values = np.tile(bump(points, (0.05, 0.05), 1.0), 2)

    assert len(peaks_apart(values, both, cells)) == 2


def test_a_slope_has_one_peak_and_nothing_without_load() -> None:
    points, triangles = sheet()
    assert len(peaks_apart(points[:, 0] + 0.5 * points[:, 1], points, triangles)) == 1
    assert len(peaks_apart(np.zeros(len(points)), points, triangles)) == 0


def test_lengths_along_edges() -> None:
    points, triangles = sheet(3, 1.0)
    lengths = graph(points, triangles)
    assert lengths.max() == pytest.approx(np.sqrt(0.5))
    assert len(edges(triangles)) == 16


def brick_with_notch() -> tuple[np.ndarray, np.ndarray]:
    """An L of eight cells less one row: its inner edge lies along y at x = z = 1."""
    mesh = MeshTet.init_tensor(*[np.linspace(0, 2, 3)] * 3)
    middle = mesh.p[:, mesh.t].mean(axis=1)
    mesh = mesh.restrict(np.flatnonzero(~((middle[0] > 1) & (middle[2] > 1))))
    facets = mesh.boundary_facets()
    triangles = mesh.facets[:, facets].T
    inside = mesh.p[:, mesh.t[:, mesh.f2t[0, facets]]].mean(axis=1).T
    corner = mesh.p.T[triangles]
    normal = np.cross(corner[:, 1] - corner[:, 0], corner[:, 2] - corner[:, 0])
    inward = np.einsum("fi,fi->f", normal, corner.mean(axis=1) - inside) < 0
    triangles[inward] = triangles[inward][:, ::-1]
    return mesh.p.T, triangles


def test_only_the_inner_edge_of_an_l_is_singular() -> None:
    """Outer edges are sharp as well, yet their stress is finite."""
    points, triangles = brick_with_notch()

    found = points[sharp_inner_edges(points, triangles)]

    np.testing.assert_allclose(found[:, [0, 2]], 1.0)
    assert len(found) == 3
