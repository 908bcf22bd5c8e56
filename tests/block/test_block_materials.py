"""Materials of the user's own, and the printed list."""

from __future__ import annotations

from typing import Any

import pytest

from blockload.block.materials import grades, grades_table, material
from blockload.case.model import MaterialChoice
from blockload.errors import BlockError

OWN: dict[str, Any] = {
    "youngs_modulus": 70e9,
    "poissons_ratio": 0.33,
    "density": 2700.0,
    "thermal_expansion": 21e-6,
    "yield_strength": 180e6,
    "tensile_strength": 240e6,
    "source": "coupons cut from the block, 2024",
}


def own(**changes: Any) -> MaterialChoice:
    return MaterialChoice(volume="block", grade=None, properties={**OWN, **changes}, temperature=None)


def test_a_material_of_ones_own_is_taken_as_given_with_its_source() -> None:
    found = material(own())

    assert (found.yield_strength, found.tensile_strength, found.casting_knock_down) == (180e6, 240e6, 1.0)
    assert found.sources["youngs_modulus"] == OWN["source"]


@pytest.mark.parametrize("key", OWN)
def test_each_missing_property_is_named(key: str) -> None:
    with pytest.raises(BlockError, match=f"no {key}"):
        material(own(**{key: None}))


def test_an_empty_source_is_refused() -> None:
    with pytest.raises(BlockError, match="where the values come from"):
        material(own(source=" "))


def test_the_list_has_a_row_per_grade_with_its_source() -> None:
    table = grades_table()

    assert [row[0] for row in table.rows] == list(grades())
    assert {len(row) for row in table.rows} == {len(table.columns)}
    assert all(row[-1] for row in table.rows)
    assert "EN 1706: in the casting itself" in table.note
