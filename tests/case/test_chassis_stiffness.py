"""[chassis]: the torsional stiffness between the axles, with or without the block in it, reaches the wheel loads."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from blockload import pipeline
from blockload.car.balance import balance
from blockload.case.reading import read
from blockload.errors import CaseError
from blockload.margins import stiffness

DEMO = Path(__file__).parents[2] / "cases" / "demo.toml"
DEGREE = np.pi / 180


def test_a_soft_chassis_moves_the_roll_split_and_a_missing_one_is_rigid() -> None:
    rigid, soft = read(DEMO), read(DEMO, ["chassis.torsion_stiffness=5 kNm/deg"])
    turn = [m.name for m in rigid.manoeuvres].index("corner_left")

    assert rigid.chassis_torsion is None
    assert soft.chassis_torsion == pytest.approx(5e3 / DEGREE)
    front = [balance(case).wheels[turn, :2, 2] for case in (rigid, soft)]
    assert front[1][1] - front[1][0] > front[0][1] - front[0][0] + 100.0, "the front axle takes more of the roll"


def test_the_block_joins_in_series_where_the_figure_is_without_it(monkeypatch: pytest.MonkeyPatch) -> None:
    """10 kN·m/deg of tub and gearbox and 10 of the block make 5."""
    case = read(DEMO, ["chassis.torsion_stiffness=10 kNm/deg", "chassis.without_block=true"])
    monkeypatch.setattr(stiffness, "face_to_face", lambda *_: np.array((10e3 / DEGREE, 1.0, 1.0)))
    known = pipeline._with_block_twist(case, object(), object())  # type: ignore[arg-type]

    assert known.chassis_torsion == pytest.approx(5e3 / DEGREE)
    assert pipeline._with_block_twist(case, None, None) is case
    included = read(DEMO, ["chassis.torsion_stiffness=10 kNm/deg"])
    assert pipeline._with_block_twist(included, object(), object()) is included  # type: ignore[arg-type]


def test_a_figure_of_another_dimension_is_refused() -> None:
    with pytest.raises(CaseError, match="torsion_stiffness"):
        read(DEMO, ["chassis.torsion_stiffness=10 kN/mm"])
