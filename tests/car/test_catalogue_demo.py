"""The demo with every standard situation: complete, in balance, in time."""

from __future__ import annotations

import time
from pathlib import Path

from blockload.car.balance import balance
from blockload.car.catalogue.coverage import coverage, ends
from blockload.case.model import Case
from blockload.case.reading import read
from blockload.pipeline import loads
from blockload.report.catalogue_tables import catalogue_tables
from blockload.report.results import load_results

DEMO = Path(__file__).parent.parent.parent / "cases" / "demo-catalogue.toml"


def test_the_demo_leaves_nothing_out_and_turns_every_sign() -> None:
    case, cases = loads(DEMO)

    assert {row.status for row in coverage(case)} == {"covered"}
    assert all(row.turns for row in ends(cases))
    assert not cases.wheel_lift.any()


def test_what_is_written_down_is_in_balance_again() -> None:
    """Jacks, hooks, rigs and pulls stand in the written free-body tables: summed again, every body closes."""
    case, cases = loads(DEMO)
    written = load_results(case, cases)["load_cases"]

    assert set(written) == set(cases.names)
    assert max(data["residual"] for data in written.values()) < 1e-9


def test_a_rules_test_load_is_handed_on_but_never_judged() -> None:
    _, shown = loads(DEMO)
    _, judged = loads(DEMO, judged_only=True)

    assert set(shown.names) - set(judged.names) == {"roll_structure_left", "roll_structure_right", "rear_impact"}


def test_the_full_catalogue_takes_less_than_a_second_of_computing() -> None:
    """Reading, expanding and balancing, in processor time so that a busy machine does not matter."""
    start = time.process_time()
    loads(DEMO)

    assert time.process_time() - start < 1.0


def test_tables_tell_groups_signs_and_bases() -> None:
    case, cases = loads(DEMO)
    titles = [table.title for table in catalogue_tables(case, cases)]

    assert titles[:3] == [
        "Standard situations",
        "Both ends of every section component",
        "Kind and basis of the load cases",
    ]


def test_the_envelope_joins_the_catalogue_and_shows_what_governs_each_response() -> None:
    case = with_envelope()
    cases = balance(case)
    table = catalogue_tables(case, cases)[3]

    assert sum(group == "envelope" for group in cases.group) == 2 * 12
    assert table.title == "What governs each response in the envelope"
    assert len(table.rows) == 2 * 12 + 3 * (4 + 6)


def with_envelope() -> Case:
    return read(DEMO, ("envelope.headings=12", 'envelope.speeds=["30 m/s", "70 m/s"]'))
