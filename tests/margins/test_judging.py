"""What may be concluded: every way to `ruled out`, `not shown` and `shown within scope`."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from installation import solid_car
from installation import synthetic_car as car

from blockload.case.model import Check, Known
from blockload.installation.install import install
from blockload.margins.judging import judge, rules_out, verdict
from blockload.margins.model import Margin
from blockload.margins.solid import strength_margins
from blockload.margins.wording import INCREMENT

CASE = car.case()
CASES = car.random_cases(CASE)


def margin(low: float, high: float, trust: str = "converged", load_case: str = "case 0") -> Margin:
    return Margin(
        criterion="yield",
        place="wall",
        at=(0.0, 0.0, 0.0),
        load_case=load_case,
        applied=1.0,
        allowable=1.0,
        unit="Pa",
        factor=1.0,
        margin=low,
        band=(low, high),
        trust=trust,
        causes=(),
    )


def word(*margins: Margin, case=CASE, cases=CASES, checks=(), level="solid"):
    return verdict(case, cases, margins, checks, level=level)


def test_a_margin_that_fails_at_both_ends_rules_out() -> None:
    found = word(margin(-0.3, -0.1), margin(0.5, 0.6))
    assert found.word == "ruled out"
    assert found.lowest_margin == -0.3
    assert found.governing == "yield at wall, case 0"


def test_a_band_that_crosses_zero_is_not_shown() -> None:
    found = word(margin(-0.3, 0.1))
    assert found.word == "not shown"
    assert "band crosses zero" in found.reasons[0]


@pytest.mark.parametrize("trust", ["singular", "near an attachment"])
def test_a_number_that_is_not_believed_rules_nothing_out(trust) -> None:
    found = word(margin(-0.9, -0.8, trust))
    assert found.word == "not shown"
    assert trust in found.reasons[0]


def test_a_coarse_stress_rules_out_only_by_more_than_its_own_spread() -> None:
    """Failing by a third with elements 20 % apart is a failure; with elements 50 % apart, or unlooked at, it is not."""
    failing = margin(-0.4, -1 / 3, "coarse")
    assert word(replace(failing, spread=0.2)).word == "ruled out"
    assert word(replace(failing, spread=0.5)).word == "not shown"
    assert word(failing).word == "not shown"


def test_a_wheel_in_the_air_rules_nothing_out_and_shows_nothing() -> None:
    lifted = replace(CASES, wheel_lift=np.array([True, False, False, False, False]))
    assert word(margin(-0.5, -0.4), cases=lifted).word == "not shown"
    assert any("wheel load below zero in case 0" in reason for reason in word(margin(1, 2), cases=lifted).reasons)
    assert word(margin(-0.5, -0.4, load_case="case 1"), cases=lifted).word == "ruled out"


def test_a_failed_check_concludes_nothing() -> None:
    broken = Check(name="loads in balance on every body", ok=False, value=1.0, limit=1e-6)
    found = word(margin(-0.5, -0.4), checks=[broken])
    assert found.word == "not shown"
    assert "check failed: loads in balance" in found.reasons[0]


def test_a_good_solid_is_not_shown_while_base_states_are_missing() -> None:
    """Mistake 28: chassis load judged alone is stamped, and the stamp is the reason."""
    found = word(margin(0.4, 0.6))
    assert found.word == "not shown"
    assert found.reasons == (INCREMENT,)


def test_a_guess_is_named() -> None:
    guessed = replace(
        CASE, known={"bodies.engine.mass": Known(key="bodies.engine.mass", basis="guess", source="", band=None)}
    )
    assert any(
        "guess may govern: bodies.engine.mass" in reason for reason in word(margin(0.4, 0.6), case=guessed).reasons
    )


def test_faces_alone_can_rule_out_and_never_show() -> None:
    assert word(margin(-0.5, -0.4), level="faces").word == "ruled out"
    found = word(margin(0.5, 0.6), level="faces")
    assert found.word == "not shown"
    assert "no block yet" in found.reasons[-1]


def test_no_margin_at_all_is_not_shown() -> None:
    found = word()
    assert found.word == "not shown"
    assert found.lowest_margin is None


def test_what_is_not_judged_is_said() -> None:
    unstated = car.case(second_paths=None)
    said = " ".join(word(margin(0.5, 0.6), case=unstated).not_judged)
    for part in ("second load paths", "crash", "roll structures", "fire", "main-bearing line", "bore shape", "life"):
        assert part in said
    assert "second load paths" not in " ".join(word(margin(0.5, 0.6)).not_judged)


def test_crank_torque_without_a_ratio_is_said() -> None:
    case = car.case(manoeuvres=("case 0",))
    case = replace(case, manoeuvres=(replace(case.manoeuvres[0], drive="accelerate"),))
    unknown = replace(CASES, crank_torque=np.array([np.nan, 0.0, 0.0, 0.0, 0.0]))
    assert any("crank torque" in item and "case 0" in item for item in word(case=case, cases=unknown).not_judged)


def test_faces_level_gives_studs_faces_and_a_requirements_sheet() -> None:
    found = judge(CASE, CASES, None, None, None)
    assert {item.criterion for item in found.margins} == {"stud tension", "separation", "slip", "face slip"}
    assert found.verdict.level == "faces"
    assert set(found.requirements) == {"front face", "rear face", "front studs", "rear studs"}


def test_the_grade_of_the_concept_fills_the_sheet() -> None:
    case = replace(CASE, document={"concept": {"grade": "EN AC-42100 KT6"}})
    found = judge(case, CASES, None, None, None)
    assert found.requirements["front face"]["section_modulus_lateral_bending_m3"] > 0.0


def solid(strength: float = 147e6, **changes):
    block, library = solid_car.solved()
    metal = replace(block.materials["block"], yield_strength=strength, tensile_strength=1.4 * strength)
    block = replace(block, materials={"block": metal})
    case = solid_car.case(**changes)
    cases = car.random_cases(case)
    return case, cases, block, library, install(cases, block, library, case)


def test_every_solid_margin_of_strength_and_studs_is_stamped() -> None:
    found = judge(*solid())
    stamped = [item for item in found.margins if "stiffness" not in item.criterion]
    assert all(INCREMENT in item.note for item in stamped)
    assert found.verdict.level == "solid"
    assert all(check.ok for check in found.checks)


def test_weak_metal_is_ruled_out_by_a_place_that_can_be_believed() -> None:
    found = judge(*solid(strength=0.2e6))
    ruling = [item for item in found.margins if rules_out(item)]
    assert found.verdict.word == "ruled out"
    assert {"yield", "tensile rupture"} <= {item.criterion for item in ruling}


def test_strength_margins_are_consistent_with_their_field() -> None:
    """Applied, allowable, factor, margin and band agree; causes sum to one; the field holds the worst ratio."""
    case, cases, block, library, pads = solid()
    margins, surface = strength_margins(case, cases, block, library, pads)

    for item in margins:
        assert item.margin == pytest.approx(item.allowable / (item.factor * item.applied) - 1)
        assert item.band[0] == item.margin <= item.band[1]
        assert sum(cause.share for cause in item.causes) == pytest.approx(1.0)
        assert item.second[1] >= item.margin
    middle = max(surface.ratio)
    worst = min(item.margin for item in margins)
    assert 1 / middle - 1 >= worst - 1e-12
    assert surface.ratio.shape == library.entry_node.shape


def test_hotspots_are_in_the_clear_as_well_as_at_the_pads() -> None:
    margins, _ = strength_margins(*solid())
    assert {item.trust for item in margins} >= {"near an attachment"}
    assert any(item.trust in ("coarse", "converged") for item in margins)


def test_the_place_of_a_hotspot_names_volume_face_set_and_pad() -> None:
    margins, _ = strength_margins(*solid())
    near = [item.place for item in margins if item.trust == "near an attachment"]
    assert any(place.startswith("block, ") and "near pad front" in place for place in near)
