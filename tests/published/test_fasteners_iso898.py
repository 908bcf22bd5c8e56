"""Proof and breaking loads of coarse threads by ISO 898-1:2013, tables 4 to 6.

Proof stresses of 8.8 seen in a public extract, the other classes and the rounded table loads from memory; every load
is the product of the stress area of clause 9.1.6.1 and the class's stress, to the rounding of the table.
"""

from __future__ import annotations

import pytest

from blockload.case.fasteners import fastener

# size: A_s mm², then (proof, break) kN of 8.8, 10.9, 12.9
TABLE = {
    "M6": (20.1, (11.7, 16.1), (16.7, 20.9), (19.5, 24.5)),
    "M8": (36.6, (21.2, 29.3), (30.4, 38.1), (35.5, 44.7)),
    "M10": (58.0, (33.6, 46.4), (48.1, 60.3), (56.3, 70.8)),
    "M12": (84.3, (48.9, 67.4), (70.0, 87.7), (81.8, 102.8)),
    "M14": (115.0, (66.7, 92.0), (95.5, 119.6), (111.5, 140.3)),
    "M16": (157.0, (91.1, 125.6), (130.3, 163.3), (152.3, 191.5)),
}
CLASSES = ("8.8", "10.9", "12.9")
ROUNDING = 5e-3  # three figures, and loads taken from the rounded area


@pytest.mark.parametrize("size", TABLE)
def test_stress_area_and_loads(published, size) -> None:
    area, *loads = TABLE[size]
    got = fastener(size, "12.9").area * 1e6
    published(f"stress area of {size}", "ISO 898-1", expected=area, got=got, unit="mm²", tolerance=ROUNDING)
    for grade, (proof, breaking) in zip(CLASSES, loads, strict=True):
        found = fastener(size, grade)
        assert found.proof_load / 1e3 == pytest.approx(proof, rel=ROUNDING)
        assert found.breaking_load / 1e3 == pytest.approx(breaking, rel=ROUNDING)


def test_8_8_above_16_mm_is_the_stronger_row() -> None:
    assert fastener("M16", "8.8").tensile_strength == 800e6
    assert fastener("M20", "8.8").tensile_strength == 830e6
    assert fastener("M20", "8.8").proof_stress == 600e6


def test_100_kn_studs_of_m12(published) -> None:
    """FIA F1 technical regulations 2026, art. C5.4.17, ask each stud for more than 100 kN: 12.9 has it, 10.9 not."""
    strong, weak = (fastener("M12", grade).breaking_load / 1e3 for grade in ("12.9", "10.9"))
    published("M12 12.9 breaking load", "ISO 898-1", expected=102.8, got=strong, unit="kN", tolerance=ROUNDING)
    assert weak < 100.0 < strong
