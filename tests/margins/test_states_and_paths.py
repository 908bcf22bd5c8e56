"""What second load paths, load cases beyond grip and a tub's own softness may and may not change."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from installation import solid_car
from installation import synthetic_car as car

from blockload.case.model import SecondPath
from blockload.installation.install import install
from blockload.installation.joining import pads as pads_of
from blockload.installation.proof import face_sum
from blockload.margins import judging
from blockload.margins.faces import _less_paths, face_margins
from blockload.margins.judging import verdict
from blockload.margins.load_checks import GRIP_CHECK, grip_checks
from blockload.margins.model import Margin
from blockload.margins.scope import not_judged

FAILING = Margin(
    criterion="yield",
    place="wall",
    at=(0.0, 0.0, 0.0),
    load_case="case 0",
    applied=1.0,
    allowable=1.0,
    unit="Pa",
    factor=1.0,
    margin=-0.5,
    band=(-0.5, -0.4),
    trust="converged",
    causes=(),
)


def strut() -> SecondPath:
    return SecondPath(
        name="strut",
        from_body="tub",
        from_at=np.array([-1.4, 0.5, 0.3]),
        to_body="gearbox",
        to_at=np.array([-2.3, 0.3, 0.25]),
        stiffness=2e8,
    )


def test_face_slip_takes_what_the_studs_carry_and_not_what_a_strut_takes_past_them() -> None:
    block, library = solid_car.solved()
    case = solid_car.case(paths=(strut(),))
    cases = car.random_cases(case)
    pads = install(cases, block, library, case)

    for variant in range(len(pads.variants)):
        for name, loads in _less_paths(case, cases, pads, variant).items():
            summed = face_sum(pads.weights[variant], block, library, case, name, loads.reference)
            size = np.abs(summed).max()
            np.testing.assert_allclose(np.abs(loads.wrench), np.abs(summed), atol=1e-7 * size)
    whole, studs = face_margins(case, cases), face_margins(case, cases, pads)
    assert any(a.applied != pytest.approx(b.applied, rel=1e-3) for a, b in zip(whole, studs, strict=True))
    assert all(item.band is not None and item.margin == min(item.band) for item in studs)


def test_rigid_faces_with_a_second_path_rule_nothing_out_and_say_so() -> None:
    case = car.case(paths=(strut(),))
    cases = car.random_cases(case)
    found = verdict(case, cases, [FAILING], (), level="faces")
    assert found.word == "not shown"
    assert "second load paths: given, and not used" in " ".join(found.not_judged)


def test_a_load_case_beyond_grip_rules_nothing_out(monkeypatch: pytest.MonkeyPatch) -> None:
    """The case at 1.1 of its grip is no state of the car; the one at exactly its grip is."""
    case = car.case()
    cases = car.random_cases(case)
    used = np.zeros((len(cases.names), 2))
    used[0, 1], used[1, 0] = 1.1, 1.0 + 1e-6
    monkeypatch.setattr("blockload.margins.load_checks.grip_used", lambda *_: used)
    (check,) = grip_checks(case, cases)
    assert check.name == GRIP_CHECK
    assert not check.ok
    assert check.value == pytest.approx(1.1)
    found = verdict(case, cases, [FAILING], (check,), level="solid")
    assert found.word == "not shown"
    assert any("not believed (no state of the car)" in reason for reason in found.reasons)
    assert any("more grip asked than the tyres have in case 0" in reason for reason in found.reasons)
    real = replace(FAILING, load_case="case 1")
    assert judging.verdict(case, cases, [real], (check,), level="solid").word == "ruled out"


def test_pads_on_a_soft_tub_carry_no_couples() -> None:
    """A tub matrix softens the studs' translations; couples of the pads would take the bending off the studs."""
    block, library = solid_car.solved()
    count = len(pads_of(block, solid_car.case(), "front"))
    case = replace(solid_car.case(), installation=replace(solid_car.case().installation, tub=np.eye(3 * count) * 2e7))
    cases = car.random_cases(case)
    pads = install(cases, block, library, case)
    for pad in pads_of(block, case, "front"):
        columns = library.rows("front", pad.name)
        force, couple = np.split(pads.weights[..., columns], 2, axis=-1)
        assert np.abs(force).max() > 0.0
        assert np.abs(couple).max() < 1e-9 * np.abs(force).max()
    assert pads.sum_gap < 1e-9


def test_keys_kept_for_later_are_listed_and_not_passed_over_in_silence() -> None:
    case = car.case()
    wordy = replace(case, document={**case.document, "heat": {"block": "90 degC"}, "limits": {"life_distance": "1 km"}})
    gaps = not_judged(wordy, car.random_cases(case), level="solid")

    assert "read but not used yet: [heat], limits.life_distance" in gaps
    assert not any("not used yet" in gap for gap in not_judged(case, car.random_cases(case), level="solid"))
