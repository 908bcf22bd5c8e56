"""Six M12 studs as published in the FIA F1 technical regulations 2014, art. 5.3.5 (to the survival cell).

(Y, Z) = (±215, 15), (±340, 260), (±175, 420) mm. Forces of a rigid flange by the bolt-group rule (Shigley eq. 8-56 and
8-57): M_y = 10 kN·m gives 13018.2, 1702.4 and 11315.8 N, T = 5 kN·m gives 2768.2, 3094.1 and 2331.5 N, worked from
the published pattern. Here the same split comes from stud springs, and margins follow from it.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from installation import synthetic_car as car

from blockload.margins.splits import rigid_splits, spring_split
from blockload.margins.studs import stud_margins

SOURCE = "pattern: FIA F1 Technical Regulations 2014, art. 5.3.5; forces: statics of a rigid flange"
PATTERN = {
    "BL": (0.215, 0.015),
    "BR": (-0.215, 0.015),
    "ML": (0.340, 0.260),
    "MR": (-0.340, 0.260),
    "TL": (0.175, 0.420),
    "TR": (-0.175, 0.420),
}
AXIAL = {"BL": 13018.2, "ML": -1702.4, "TL": -11315.8}
SHEAR = {"BL": 2768.2, "ML": 3094.1, "TL": 2331.5}


def face(wrench: list[float]):
    """The pattern as the rear face, loaded by one wrench about the studs' centroid."""
    case = car.case(rear=PATTERN)
    return case, car.load_cases(case, rear=np.array([[wrench]]))


@pytest.mark.parametrize("name", AXIAL)
def test_bending_on_stud_springs(published, name) -> None:
    """Springs all alike; tension at the bottom for sagging."""
    _, cases = face([0.0, 0.0, 0.0, 0.0, 10e3, 0.0])
    force = spring_split(cases.faces["rear"], 1e9 * np.eye(18))[0, 0]
    got = force[list(PATTERN).index(name), 0]
    published(f"axial force of stud {name}", SOURCE, expected=AXIAL[name], got=got, unit="N", tolerance=1e-4)


@pytest.mark.parametrize("name", SHEAR)
def test_torsion_on_stud_springs(published, name) -> None:
    _, cases = face([0.0, 0.0, 0.0, 5e3, 0.0, 0.0])
    force = spring_split(cases.faces["rear"], 1e9 * np.eye(18))[0, 0]
    got = float(np.linalg.norm(force[list(PATTERN).index(name), 1:]))
    published(f"shear of stud {name}", SOURCE, expected=SHEAR[name], got=got, unit="N", tolerance=1e-4)


def test_margins_of_the_published_pattern_by_hand() -> None:
    """M12 12.9 with 60 kN ± 25 %, Φ 0.2, factor 1.5: the lower studs part at 45/(1.5 · 0.8 · 13.018) − 1 = 1.881."""
    case, cases = face([0.0, 0.0, 0.0, 0.0, 10e3, 0.0])
    case = replace(case, limits=car.LIMITS)
    rigid = rigid_splits(cases.faces["rear"], case)[0].force[0, 0]
    assert rigid[0, 0] == pytest.approx(13018.2, rel=1e-4)
    found = {
        item.place: item.band
        for item in stud_margins(case, cases)
        if item.criterion == "separation" and item.place == "rear stud BL"
    }
    low, high = found["rear stud BL"]
    assert low <= 45 / (1.5 * 0.8 * 13.0182) - 1 + 1e-4
    assert high >= 45 / (1.5 * 0.8 * 13.0182) - 1 - 1e-4
