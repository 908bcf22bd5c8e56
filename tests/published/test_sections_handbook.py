"""Properties of box, tube, tee, angle, channel and slit tube against handbook formulas (from memory).

Areas and second moments: any handbook (Roark's Formulas for Stress and Strain, 7th ed. 2002, table A.1). Torsion:
Bredt's J = 4A²/∮ds/t and Σ b t³/3 for open walls (Roark, chapter 10), J = π(R⁴ − r⁴)/2 for the tube. Shear centres:
where the walls meet for tee and angle; e = 3b²/(h + 6b) behind the web of a channel of even thickness, 2r from the
centre of a slit tube (Roark, table 9.2; Timoshenko, Strength of Materials, part II, 3rd ed. 1956). Warping constant of
the channel: t b³ h² (3b + 2h) / (12 (6b + h)) (Roark, table 10.2).
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest

from blockload.block.mesh_section import MeshSection, mesh_section
from blockload.block.sections import Section
from blockload.block.thin_walls import Wall, thin_walled

sys.path.append(str(Path(__file__).parents[1] / "block"))
from extrusions import rectangles, ring

SOURCE = "Roark (2002), sections"


def walls(**given: tuple) -> Section:
    return thin_walled(
        {name: Wall(points=np.array(points), thickness=t, closed=closed) for name, (points, t, closed) in given.items()}
    )


def test_thin_box_with_unlike_walls(published) -> None:
    b, h, t, s = 0.3, 0.2, 0.004, 0.008
    corners = [(0, 0), (b, 0), (b, h), (0, h)]
    side = {"left": ([corners[0], corners[3]], s, False), "right": ([corners[1], corners[2]], s, False)}
    found = walls(bottom=(corners[:2], t, False), top=(corners[2:], t, False), **side)

    published("thin box: area", SOURCE, expected=2 * b * t + 2 * h * s, got=found.area, unit="m²", tolerance=1e-9)
    about_y = 2 * s * h**3 / 12 + 2 * b * t * (h / 2) ** 2 + 2 * b * t**3 / 12
    published("thin box: I", SOURCE, expected=about_y, got=found.about_y, unit="m⁴", tolerance=1e-9)
    cell = 4 * (b * h) ** 2 / (2 * b / t + 2 * h / s)
    J = cell + 2 * (b * t**3 + h * s**3) / 3
    published("thin box: J", "Bredt (1896)", expected=J, got=found.torsion_constant, unit="m⁴", tolerance=1e-9)
    np.testing.assert_allclose(found.shear_centre, [b / 2, h / 2], atol=1e-9)


def test_two_cells_share_a_wall(published) -> None:
    """Two equal square cells: the wall between them carries no flow and adds nothing, J = 8 a³ t / 3."""
    a, t = 0.2, 0.004
    outline = [(0, 0), (2 * a, 0), (2 * a, a), (0, a)]
    middle = [(a, 0), (a, a)]
    outer = walls(outline=([(0, 0), (a, 0), (2 * a, 0), (2 * a, a), (a, a), (0, a)], t, True), web=(middle, t, False))
    plain = walls(outline=(outline, t, True))

    expected = 4 * (2 * a * a) ** 2 / (6 * a / t)
    published("two cells: J", "Bredt (1896)", expected=expected, got=outer.torsion_constant, unit="m⁴", tolerance=1e-3)
    assert outer.torsion_constant == pytest.approx(plain.torsion_constant, rel=1e-3)


def test_tube(published) -> None:
    inner, outer = 0.04, 0.05
    found = mesh_section(ring(inner, outer, around=64), 0.03)
    I = np.pi / 4 * (outer**4 - inner**4)  # noqa: E741
    section = found.section

    published("tube: area", SOURCE, expected=np.pi * (outer**2 - inner**2), got=section.area, unit="m²", tolerance=1e-3)
    published("tube: I", SOURCE, expected=I, got=section.about_y, unit="m⁴", tolerance=2e-3)
    published("tube: J", SOURCE, expected=2 * I, got=section.torsion_constant, unit="m⁴", tolerance=2e-3)
    np.testing.assert_allclose(section.shear_centre, 0.0, atol=1e-5)


def test_box_of_solid_walls(published) -> None:
    b, h, t = 0.4, 0.3, 0.01
    block = rectangles((0, b, 0, t), (0, b, h - t, h), (0, t, 0, h), (b - t, b, 0, h), pieces=2)
    section = mesh_section(block, 0.03).section

    about_y = (b * h**3 - (b - 2 * t) * (h - 2 * t) ** 3) / 12
    published("box: I", SOURCE, expected=about_y, got=section.about_y, unit="m⁴", tolerance=1e-9)
    bredt = 2 * t * ((b - t) * (h - t)) ** 2 / ((b - t) + (h - t))
    published("box: J", "Bredt (1896)", expected=bredt, got=section.torsion_constant, unit="m⁴", tolerance=0.02)
    np.testing.assert_allclose(section.shear_centre, [b / 2, h / 2], atol=1e-4 * b)  # the triangles lean one way


FLANGE, WEB, T = 0.20, 0.24, 0.008


def tee_walls() -> Section:
    top = ([(-FLANGE / 2, WEB), (0, WEB), (FLANGE / 2, WEB)], T, False)
    return walls(flange=top, web=([(0, 0), (0, WEB)], T, False))


def tee_mesh() -> MeshSection:
    flange = (-FLANGE / 2, FLANGE / 2, WEB - T / 2, WEB + T / 2)
    return mesh_section(rectangles(flange, (-T / 2, T / 2, 0, WEB - T / 2), pieces=2), 0.03)


@pytest.mark.parametrize(("kind", "near"), [("walls", 1e-9), ("mesh", 0.03)])
def test_tee(kind: str, near: float, published) -> None:
    found = tee_walls() if kind == "walls" else tee_mesh().section
    web = WEB if kind == "walls" else WEB - T / 2
    area = T * (FLANGE + web)
    height = (FLANGE * T * WEB + web * T * web / 2) / area
    about_y = (
        FLANGE * T**3 / 12 + FLANGE * T * (WEB - height) ** 2 + T * web**3 / 12 + T * web * (web / 2 - height) ** 2
    )

    published(f"tee of {kind}: area", SOURCE, expected=area, got=found.area, unit="m²", tolerance=1e-9)
    published(f"tee of {kind}: centroid", SOURCE, expected=height, got=found.centroid[1], unit="m", tolerance=1e-9)
    published(f"tee of {kind}: I", SOURCE, expected=about_y, got=found.about_y, unit="m⁴", tolerance=1e-9)
    strips = (FLANGE + WEB) * T**3 / 3
    published(f"tee of {kind}: J", SOURCE, expected=strips, got=found.torsion_constant, unit="m⁴", tolerance=near)
    published(f"tee of {kind}: shear centre", SOURCE, expected=WEB, got=found.shear_centre[1], unit="m", tolerance=near)
    assert found.shear_centre[0] == pytest.approx(0.0, abs=1e-6)


LEG = 0.15


@pytest.mark.parametrize(("kind", "near"), [("walls", 1e-9), ("mesh", 0.03)])
def test_equal_angle(kind: str, near: float, published) -> None:
    """Corner of the centre lines at the origin, legs along +y and +z."""
    if kind == "walls":
        found = walls(legs=([(LEG, 0), (0, 0), (0, LEG)], T, False))
        area, product = 2 * LEG * T, -(LEG**3) * T / 8
    else:
        half = T / 2
        block = rectangles((-half, LEG, -half, half), (-half, half, -half, LEG), pieces=2)
        found = mesh_section(block, 0.03).section
        area = (LEG + half) * T + (LEG - half) * T
        product = None

    published(f"angle of {kind}: area", SOURCE, expected=area, got=found.area, unit="m²", tolerance=1e-9)
    if product is not None:
        published(f"angle of {kind}: I_yz", SOURCE, expected=product, got=found.second[0, 1], unit="m⁴", tolerance=1e-9)
    strips = 2 * LEG * T**3 / 3
    published(f"angle of {kind}: J", SOURCE, expected=strips, got=found.torsion_constant, unit="m⁴", tolerance=near)
    np.testing.assert_allclose(found.shear_centre, 0.0, atol=max(1e-9, near * LEG))


@pytest.mark.parametrize("kind", ["walls", "mesh"])
def test_channel(kind: str, published) -> None:
    b, h, t = 0.1, 0.2, 0.004
    if kind == "walls":
        found = walls(channel=([(b, -h / 2), (0, -h / 2), (0, h / 2), (b, h / 2)], t, False))
    else:
        web = (-t / 2, t / 2, -h / 2 - t / 2, h / 2 + t / 2)
        flanges = [(-t / 2, b, sign * h / 2 - t / 2, sign * h / 2 + t / 2) for sign in (-1, 1)]
        found = mesh_section(rectangles(web, *flanges, pieces=2), 0.03).section
    e = 3 * b**2 / (h + 6 * b)

    tolerance = 1e-3 if kind == "walls" else 0.03
    got = -found.shear_centre[0]
    published(f"channel of {kind}: shear centre", SOURCE, expected=e, got=got, unit="m", tolerance=tolerance)
    assert found.shear_centre[1] == pytest.approx(0.0, abs=1e-6)
    expected = t * b**3 * h**2 / 12 * (3 * b + 2 * h) / (6 * b + h)
    tolerance = 1e-3 if kind == "walls" else 0.05
    got = found.warping_constant
    published(
        f"channel of {kind}: warping constant", SOURCE, expected=expected, got=got, unit="m⁶", tolerance=tolerance
    )


def test_slit_tube(published) -> None:
    r, t = 0.1, 0.002
    angle = np.linspace(0, 2 * np.pi, 181)
    points = r * np.column_stack([np.cos(angle), np.sin(angle)])
    points[0, 1], points[-1, 1] = 2e-4, -2e-4  # the slit, wide enough not to be one point
    found = walls(tube=(points, t, False))

    got = -found.shear_centre[0]
    published("slit tube: shear centre", SOURCE, expected=2 * r, got=got, unit="m", tolerance=0.005)
    J = 2 * np.pi * r * t**3 / 3
    published("slit tube: J", SOURCE, expected=J, got=found.torsion_constant, unit="m⁴", tolerance=1e-3)
