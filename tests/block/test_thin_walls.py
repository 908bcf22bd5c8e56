"""Stress in a section: it sums to the forces it was asked for, whatever the shape, and moves with the axes."""

from __future__ import annotations

import numpy as np
import pytest

from blockload.block.sections import given_section, normal_moments
from blockload.block.thin_walls import Wall, thin_walled
from blockload.errors import BlockError

T = 0.006


def wall(*points: tuple[float, float], thickness: float = T, closed: bool = False) -> Wall:
    return Wall(points=np.array(points, dtype=float), thickness=thickness, closed=closed)


SHAPES = {
    "channel": {"wall": wall((0.10, 0.05), (0.0, 0.05), (0.02, 0.25), (0.18, 0.22))},
    "box": {"wall": wall((0, 0.1), (0.3, 0.05), (0.25, 0.4), (0, 0.3), closed=True)},
    "two cells and a fin": {
        "outline": wall((0, 0), (0.2, 0), (0.4, 0), (0.4, 0.2), (0.2, 0.2), (0, 0.2), closed=True),
        "web": wall((0.2, 0), (0.2, 0.2), thickness=2 * T),
        "fin": wall((0.4, 0.2), (0.45, 0.3)),
    },
}
UPRIGHT = ((-0.1, 0), (0.1, 0), (0.1, 0.3), (-0.1, 0.3))


def strips(walls: dict[str, Wall]) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Start, end and thickness of every strip in the order of the fibres."""
    start, end, thickness = [], [], []
    for item in walls.values():
        points = np.vstack([item.points, item.points[:1]]) if item.closed else item.points
        start.append(points[:-1])
        end.append(points[1:])
        thickness.append(np.full(len(points) - 1, item.thickness))
    return np.vstack(start), np.vstack(end), np.concatenate(thickness)


@pytest.mark.parametrize("name", SHAPES)
def test_stress_sums_to_the_forces(name: str) -> None:
    """N, V, M and the flow's part of T, integrated over the walls, for any forces; T about y = z = 0.

    Across its thickness an open wall carries torque besides the flow, its share of l t³/3 in the torsion constant.
    """
    walls = SHAPES[name]
    section = thin_walled(walls)
    start, end, thickness = strips(walls)
    length = np.linalg.norm(end - start, axis=1)
    each = section.recovery.reshape(len(length), 2, 3, 3, 6)
    faces = section.fibres.reshape(len(length), 2, 3, 2)
    area = np.multiply.outer(length * thickness, np.array([1, 4, 1]) / 6)
    line = each.mean(axis=1)
    y, z = np.moveaxis(faces.mean(axis=1), -1, 0)
    found = np.zeros((6, 6))
    found[:3] = np.einsum("wa,wacf->cf", area, line)
    found[3] = np.einsum("wa,waf->f", area * y, line[:, :, 2]) - np.einsum("wa,waf->f", area * z, line[:, :, 1])
    found[4] = np.einsum("wa,waf->f", area * z, line[:, :, 0])
    found[5] = -np.einsum("wa,waf->f", area * y, line[:, :, 0])
    across = (length * thickness**3).sum() / 3 / section.torsion_constant
    y_s, z_s = section.shear_centre
    expected = np.eye(6)
    expected[3] -= across * np.array([0.0, z_s, -y_s, 1.0, 0.0, 0.0])

    size = np.array([1.0, 1.0, 1.0, 0.3, 0.3, 0.3])
    scaled = (found - expected) / np.outer(size, 1 / size)
    assert np.abs(scaled).max() < 2e-3  # bending across a wall's own thickness is not in the walls' middle line
    np.testing.assert_allclose(found[1:3, 1:3], np.eye(2), atol=1e-9)


def test_bending_stress_is_moment_over_modulus() -> None:
    section = thin_walled({"box": wall(*UPRIGHT, closed=True)})
    top = section.fibres[:, 1].argmax()

    assert section.fibres[top, 1] == pytest.approx(0.3 + T / 2)
    assert section.recovery[top, 0, 4] == pytest.approx((0.15 + T / 2) / section.about_y)
    assert section.recovery[top, 0, 0] == pytest.approx(1 / section.area - 0.15 * (0.15 + T / 2) / section.about_y)


def test_closed_torsion_is_a_shear_flow_and_open_torsion_is_not() -> None:
    """Bredt: τ = T / 2At, both faces alike but for the wall's own part; open: τ = T t / J, opposite on the faces."""
    closed = thin_walled({"box": wall(*UPRIGHT, closed=True)})
    opened = thin_walled({"box": wall(*UPRIGHT)})
    shear = [np.linalg.norm(item.recovery[:, 1:, 3], axis=1) for item in (closed, opened)]

    np.testing.assert_allclose(shear[0].mean(), 1 / (2 * 0.2 * 0.3 * T), rtol=1e-3)
    np.testing.assert_allclose(shear[1], T / opened.torsion_constant, rtol=1e-9)


def test_a_given_section_carries_what_it_was_given() -> None:
    fibres = np.array([(0.2, 0.4), (-0.1, 0.1)])
    section = given_section(
        area=0.01,
        centroid=np.array([0.0, 0.25]),
        second=np.array([[9e-5, 1e-5], [1e-5, 1.2e-4]]),
        torsion_constant=8e-5,
        shear_centre=np.array([0.0, 0.2]),
        shear_area=np.eye(2) * 0.004,
        fibres=fibres,
        torsion_modulus=5e-4,
    )
    moments = normal_moments(section.area, section.centroid, section.second)
    inverse = np.linalg.inv(moments)

    np.testing.assert_allclose(
        section.recovery[:, 0][:, [0, 4, 5]], np.array([[1, 0.4, -0.2], [1, 0.1, 0.1]]) @ inverse
    )
    np.testing.assert_allclose(np.linalg.norm(section.recovery[:, 1:, 3], axis=1), 1 / 5e-4)
    through_centre = np.array([0.0, 0.0, 1.0, 0.0, 0.0, 0.0])
    np.testing.assert_allclose(section.recovery[:, 1:] @ through_centre, 0.0, atol=1e-12)


def test_a_mirrored_section_has_mirrored_properties() -> None:
    section = thin_walled(SHAPES["channel"])
    other = thin_walled({"wall": wall(*(SHAPES["channel"]["wall"].points * [-1, 1]))})

    np.testing.assert_allclose(other.shear_centre, section.shear_centre * [-1, 1], atol=1e-12)
    np.testing.assert_allclose(other.second, section.second * [[1, -1], [-1, 1]], atol=1e-15)
    assert other.torsion_constant == pytest.approx(section.torsion_constant)


def test_a_wall_without_length_is_refused() -> None:
    with pytest.raises(BlockError, match="has no length"):
        thin_walled({"wall": wall((0, 0), (0, 0.00001), (0.1, 0.1))})
