"""Hot strength of A356-T6 castings: Modern Casting, July 2018, table 2 (cylinder-head deck, aged at temperature).

Yield 269, 235, 163, 84, 39 MPa and tensile 323, 254, 175, 95, 44 MPa at 20, 150, 200, 250, 300 °C.
"""

from __future__ import annotations

import pytest

from blockload.block.materials import grades, material
from blockload.case.model import MaterialChoice
from blockload.errors import BlockError

ROWS = (
    (20, 1.0, 1.0),
    (150, 0.874, 254 / 323),
    (200, 0.606, 175 / 323),
    (250, 0.312, 95 / 323),
    (300, 0.145, 44 / 323),
)


def at(celsius: float, grade: str = "EN AC-42100 KT6") -> MaterialChoice:
    return MaterialChoice(volume="head", grade=grade, properties=None, temperature=celsius + 273.15)


@pytest.mark.parametrize(("celsius", "yielding", "tensile"), ROWS)
def test_ratios_of_the_table(celsius: float, yielding: float, tensile: float) -> None:
    found = material(at(celsius))

    assert found.temperature_factor == pytest.approx(yielding, abs=5e-4)
    assert found.tensile_temperature_factor == pytest.approx(tensile, abs=1e-12)
    assert found.yield_strength == pytest.approx(147e6 * found.temperature_factor)
    assert found.tensile_strength == pytest.approx(203e6 * found.tensile_temperature_factor)


def test_linear_between_rows(published) -> None:
    published(
        "A356-T6 yield ratio at 175 °C, linear",
        "Modern Casting, July 2018, table 2",
        expected=0.740,
        got=material(at(175)).temperature_factor,
        unit="",
        tolerance=5e-4,
    )


@pytest.mark.parametrize("celsius", [-10, 19, 301])
def test_outside_the_table_is_refused(celsius: float) -> None:
    with pytest.raises(BlockError, match="20 to 300 °C"):
        material(at(celsius))


def test_a_grade_without_hot_strengths_is_taken_at_20_degrees_only() -> None:
    assert material(at(20, "EN-GJS-500-7")).temperature_factor == 1.0
    with pytest.raises(BlockError, match="no hot strengths"):
        material(at(120, "EN-GJS-500-7"))


def test_the_table_is_used_for_the_alsi7mg_grades_only() -> None:
    hot = {name for name, grade in grades().items() if grade.hot is not None}

    assert hot == {name for name in grades() if name.startswith(("EN AC-421", "EN AC-422"))}
