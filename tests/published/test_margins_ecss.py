"""Margin of safety as ECSS-E-ST-32C and ECSS-E-ST-32-10C Rev. 1 define it: allowable / (limit × factor) − 1.

Formula as printed in public extracts of the standards; the factors 1.1 (yield) and 1.25 (ultimate) of metallic parts
from second-hand tables and memory. NASA-STD-5001B, ultimate 1.4: from memory.
"""

from __future__ import annotations

import numpy as np
import pytest

from blockload.margins.strength import largest_principal, von_mises
from blockload.margins.wording import margin_at

# A bar at 120 MPa of a metal with Rp0.2 210 MPa and Rm 290 MPa.
BAR = np.array([120e6, 0.0, 0.0, 0.0, 0.0, 0.0])[:, None]


@pytest.mark.parametrize(
    ("name", "measure", "strength", "factor", "expected"),
    [
        ("ECSS-E-ST-32-10C yield", von_mises, 210e6, 1.1, 0.5909),
        ("ECSS-E-ST-32-10C ultimate", largest_principal, 290e6, 1.25, 0.9333),
        ("NASA-STD-5001B ultimate", largest_principal, 290e6, 1.4, 0.7262),
    ],
)
def test_margin_of_safety_of_a_bar(published, name, measure, strength, factor, expected) -> None:
    got = margin_at(strength, factor, float(measure(BAR)[0]))
    published("margin of safety of a bar at 120 MPa", name, expected=expected, got=got, unit="1", tolerance=1e-4)
