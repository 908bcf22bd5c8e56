"""Words and tables: signs said in words, and the figures of a table those of the load cases."""

from __future__ import annotations

import math

import numpy as np
import pytest
from report.examples import example_case, example_cases, example_margins, margin
from rich.console import Console

from blockload.margins.model import Verdict
from blockload.report import judged_tables, tables
from blockload.report.choice import governing_index, lowest, lowest_per_criterion
from blockload.report.console import loads_tables, render, summary
from blockload.report.wording import ABSENT, band, figure, fixed, quantity, section_words


@pytest.mark.parametrize(
    ("value", "said"),
    [
        (6688.1, "+6.69 kN·m: top pressed, bottom pulled"),
        (-120.0, "−0.120 kN·m: top pulled, bottom pressed"),
        (0.0, "0 kN·m"),
    ],
)
def test_sagging_is_said_in_words(value: float, said: str) -> None:
    assert section_words("M_sag", value) == said


@pytest.mark.parametrize(
    ("value", "shown"),
    [(0.0, "0"), (1234.5, "1230"), (0.0123456, "0.0123"), (-9.996, "−10.0"), (math.nan, ABSENT), (None, ABSENT)],
)
def test_figures_have_three_significant_digits_and_nothing_for_nan(value: float | None, shown: str) -> None:
    assert figure(value) == shown


def test_a_band_is_said_as_two_ends_and_as_one_number_where_they_agree() -> None:
    assert band((0.1234, 0.4051)) == "0.12 to 0.41"
    assert band((0.121, 0.119)) == "0.12"
    assert band(None, None) == ABSENT
    assert band((0.11, 999.0)) == "0.11 to >99"


def test_a_rounded_zero_carries_no_sign() -> None:
    assert fixed(-1e-9, 2, sign=True) == "0.00"


def test_stresses_are_shown_in_megapascal() -> None:
    assert quantity(147.3e6, "Pa") == "147\N{NO-BREAK SPACE}MPa"


def test_section_table_holds_the_section_wrenches_of_the_cases() -> None:
    cases = example_cases()
    made = tables.section_wrenches(cases)
    row = next(row for row in made.rows if row[:2] == ("v max", "front"))
    shown = [float(cell.replace("−", "-")) for cell in row[2:]]

    assert shown == pytest.approx(cases.section("front")[1] / 1e3, abs=5.1e-4)


def test_free_body_tables_close_for_every_body() -> None:
    for made in tables.free_bodies(example_cases(), 2):
        assert made.rows[-1][0].startswith("sum")
        assert set(made.rows[-1][2:]) == {"0.000"}


def test_a_stud_that_is_never_pressed_says_so() -> None:
    made = tables.stud_extremes(example_cases())
    row = next(row for row in made.rows if row[0] == "rear BL")

    assert row[3] == "never"


def test_columns_of_numbers_are_recognised() -> None:
    made = tables.table("t", ("a", "b", "c"), [("x", "−1.5", "0.12 to 0.41"), ("y", ABSENT, "0.11 to >99")])

    assert [made.numeric(k) for k in range(3)] == [False, True, True]


def test_every_default_without_source_is_listed() -> None:
    assert judged_tables.unsourced(example_case()) == ("limits.separation_factor",)


def test_lowest_margins_come_first_and_once_per_criterion() -> None:
    items = (margin("a", "1", 0.5), margin("a", "2", 0.1), margin("b", "3", 0.3), margin("c", "4", None, band=None))

    assert [item.place for item in lowest(items)] == ["2", "3", "1", "4"]
    assert [item.place for item in lowest_per_criterion(items)] == ["2", "3", "4"]


def test_the_governing_case_is_that_of_the_lowest_margin_else_of_the_greatest_stud_force() -> None:
    cases = example_cases()

    assert cases.names[governing_index(cases, example_margins(margins=(margin(load_case="v_max"),)))] == "v_max"
    assert cases.names[governing_index(cases)] == "corner_left"


def _printed(parts: list[object]) -> list[str]:
    console = Console(width=100, highlight=False)
    with console.capture() as caught:
        for part in parts:
            console.print(part)
    return caught.get().splitlines()


def test_the_summary_fits_one_screen_with_verdict_faces_margins_and_what_is_not_judged() -> None:
    many = tuple(
        margin(f"criterion number {k}", f"a rather long name of a place on the block, {k}", 0.1 * k) for k in range(14)
    )
    verdict = Verdict(
        word="not shown",
        level="solid",
        lowest_margin=0.0,
        governing="criterion number 0 " * 8,
        reasons=tuple(f"reason {k}: " + "words " * 20 for k in range(9)),
        not_judged=tuple(f"thing {k} that nobody judged in this run" for k in range(20)),
    )
    lines = _printed(summary(example_case(), example_cases(), example_margins(margins=many, verdict=verdict)))

    assert len(lines) <= 40
    assert max(map(len, lines)) <= 100
    text = "\n".join(lines)
    for words in ("NOT SHOWN", "level solid", "M_sag", "criterion number 0", "not judged", "Not permission to drive"):
        assert words in text


def test_load_tables_fit_one_hundred_columns() -> None:
    lines = _printed(loads_tables(example_case(), example_cases()))

    assert max(map(len, lines)) <= 100
    assert any("M_sag" in line for line in lines)


def test_text_with_square_brackets_is_printed_as_it_stands() -> None:
    """A case may be called anything; it must not act as markup of the terminal."""
    lines = _printed(render([tables.table("t [red]", ("a",), [("[bold]x[/bold]",), ("[/]",)])]))

    assert any("[bold]x[/bold]" in line for line in lines)


def test_shares_of_causes_are_written_largest_first() -> None:
    made = judged_tables.cause_table([margin()])

    assert made.rows[0][2] == "rear wing +70 %, weight and inertia +30 %"


def test_peaks_of_studs_are_found_over_all_cases() -> None:
    cases = example_cases()
    axial = cases.faces["front"].stud_axial.sum(axis=1)
    made = tables.stud_extremes(cases)
    pressed = float(made.rows[0][3].split()[0].replace("−", "-"))

    assert pressed == pytest.approx(float(np.min(axial[:, 0])) / 1e3, abs=5e-3)
