"""Margins over every split of whole-car aero: the worst end exact, and nothing ruled out that some split could bear."""

from __future__ import annotations

from dataclasses import replace
from functools import cache
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from blockload import pipeline
from blockload.car.aero_split import extreme_cases, splits
from blockload.car.balance import balance
from blockload.case.model import Case
from blockload.case.reading import read
from blockload.margins.judging import judge, verdict
from blockload.margins.load_checks import air_checks
from blockload.margins.model import Margin, Margins
from blockload.margins.open_aero import over_splits

CASE = read(Path(__file__).parents[2] / "cases" / "demo-totals.toml")
FAST = settings(max_examples=15, deadline=None)


def judged(case: Case) -> Margins:
    return judge(case, balance(case), None, None, None)


def loads(margins: Margins) -> dict[tuple[str, str], float]:
    return {(m.criterion, m.place): min(m.band) for m in margins.margins if m.band is not None}


def test_a_check_of_totals_alone_spans_every_split_and_shows_nothing() -> None:
    run = pipeline.check(CASE.path)
    ends = [loads(judged(other)) for _, other in extreme_cases(CASE)]

    assert run.margins.verdict.word == "not shown"
    assert any("only totals of the aero" in reason for reason in run.margins.verdict.reasons)
    for key, low in loads(run.margins).items():
        assert low == pytest.approx(min(end.get(key, np.inf) for end in ends))


@cache
def whole_band() -> dict[tuple[str, str], float]:
    return loads(over_splits(CASE, balance(CASE), judged(CASE), [judged(c) for _, c in extreme_cases(CASE)]))


@FAST
@given(st.integers(0, 10_000))
def test_no_mixture_of_splits_is_worse_than_the_band_says(seed: int) -> None:
    """A random split judged as a car with devices: no margin below the band's low end."""
    found = splits(CASE)
    weights = np.random.default_rng(seed).dirichlet(0.2 * np.ones(len(found.area)))
    mixed = replace(CASE, devices=found.devices(weights @ found.area), aero_total=None, aero_split=())
    low_ends = whole_band()

    for key, low in loads(judged(mixed)).items():
        assert low >= low_ends[key] - 1e-9


def margin(value: float, place: str = "front stud TL") -> Margin:
    return Margin(
        criterion="stud tension",
        place=place,
        at=(0.0, 0.0, 0.0),
        load_case="v_max",
        applied=1.0,
        allowable=1.0,
        unit="N",
        factor=1.0,
        margin=value,
        band=(value, value),
        trust="converged",
        causes=(),
    )


def spanned(middle: float, *ends: float) -> Margins:
    base = judged(CASE)
    made = [replace(base, margins=(margin(value),)) for value in (middle, *ends)]
    return over_splits(CASE, balance(CASE), made[0], made[1:])


def test_a_failure_in_every_split_rules_out() -> None:
    found = spanned(-0.5, -0.5, -0.51)

    assert max(found.margins[0].band) < 0.0
    assert found.verdict.word == "ruled out"


def test_failures_that_a_split_between_them_might_cure_do_not_rule_out() -> None:
    """Loads of +1.1 and -1.1 at the two extremes: the mean of both carries nothing at all."""
    found = spanned(-0.02, -0.1, -0.6)

    assert max(found.margins[0].band) == 0.0
    assert found.verdict.word == "not shown"


def test_the_worst_split_gives_the_margin_and_its_load_case() -> None:
    found = spanned(0.4, 0.2, 0.9)

    assert found.margins[0].margin == 0.2
    assert found.margins[0].band == (0.2, 0.9)
    assert "every split" in found.margins[0].note


def test_a_place_that_only_an_extreme_split_brings_up_is_kept() -> None:
    base = judged(CASE)
    middle, end = (replace(base, margins=items) for items in ((margin(0.4),), (margin(0.3), margin(-0.2, "elsewhere"))))
    found = over_splits(CASE, balance(CASE), middle, [end])

    assert [m.place for m in found.margins] == ["front stud TL", "elsewhere"]
    assert found.verdict.word == "not shown"


def test_an_aero_map_read_at_its_edge_neither_shows_nor_rules_out() -> None:
    cases = replace(balance(CASE), aero_bounds=None, outside_map=("floor: beyond",) * len(CASE.manoeuvres))
    failing = replace(judged(CASE), margins=())
    said = verdict(CASE, cases, [margin(-0.9)], failing.checks, level="faces")

    assert said.word == "not shown"
    assert any("read beyond its grid" in reason for reason in said.reasons)


def test_a_factor_on_the_air_fails_its_check() -> None:
    """Mistake: aero scaled by a bump factor."""
    cases = balance(CASE)
    scaled = replace(cases, downforce=1.5 * cases.downforce)
    good, bad = (next(air_checks(CASE, it)) for it in (cases, scaled))

    assert good.ok
    assert not bad.ok
    assert bad.value == pytest.approx(1.5)
    assert any(item.name == "no factor on the air" for item in judged(CASE).checks)
