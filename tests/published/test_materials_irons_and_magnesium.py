"""Irons against EN 1563:1997, EN 1561 and ISO 16112; magnesium against its producers' typical values.

GJV values are from memory of ISO 16112. Rm, Rp0.2 (GJL: Rp0.1) in MPa, E in GPa.
"""

from __future__ import annotations

import pytest

from blockload.block.materials import grades

ROWS = {
    "EN-GJS-400-15": (400, 250, 169),
    "EN-GJS-500-7": (500, 320, 169),
    "EN-GJS-600-3": (600, 370, 169),
    "EN-GJS-700-2": (700, 420, 169),
    "ISO-GJV-400": (400, 280, 145),
    "ISO-GJV-450": (450, 315, 145),
    "ISO-GJV-500": (500, 350, 145),
    "EN-GJL-250": (250, 165, 103),
    "AZ91D": (230, 150, 45),
    "AE44": (245, 142, 45),
}


@pytest.mark.parametrize("name", ROWS)
def test_strength_and_stiffness(name: str) -> None:
    grade = grades()[name]

    assert grade.tensile_strength == pytest.approx(ROWS[name][0] * 1e6)
    assert grade.yield_strength == pytest.approx(ROWS[name][1] * 1e6)
    assert grade.youngs_modulus == pytest.approx(ROWS[name][2] * 1e9)


def test_every_value_of_every_grade_names_its_source() -> None:
    for grade in grades().values():
        assert grade.source
        assert grade.physical_source
        assert grade.knock_down_source


def test_units_are_those_of_metals() -> None:
    for grade in grades().values():
        assert 40e9 < grade.youngs_modulus < 180e9
        assert 1700 < grade.density < 7300
        assert 9e-6 < grade.thermal_expansion < 27e-6
        assert 0 < grade.yield_strength < grade.tensile_strength
