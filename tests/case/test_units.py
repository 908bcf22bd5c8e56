"""The quantity grammar: what it takes, what it refuses with the corrected text, and its table against pint."""

from __future__ import annotations

import math
import subprocess
import sys

import numpy as np
import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

from blockload.errors import CaseError
from blockload.unit_table import KINDS, UNITS
from blockload.units import canonical, exact, parse, show, significant

REGISTRY = pint.UnitRegistry()
FINITE = st.floats(min_value=-1e12, max_value=1e12, allow_nan=False)


@pytest.mark.parametrize("text", [text for text in UNITS if text not in ("", "%", "1")])
def test_every_unit_of_the_table_agrees_with_pint(text: str) -> None:
    """Factor, offset and dimension of the short table are pint's (angles counted as a dimension)."""
    unit = UNITS[text]
    zero, one = (REGISTRY.Quantity(number, text).to_base_units() for number in (0.0, 1.0))
    bases = {str(base): power for base, power in one.unit_items()}
    dimension = tuple(bases.pop(name, 0) for name in ("kilogram", "meter", "second", "kelvin", "radian"))

    assert not bases
    assert dimension == unit.dimension
    assert zero.magnitude == pytest.approx(unit.offset, rel=1e-14)
    assert one.magnitude - zero.magnitude == pytest.approx(unit.factor, rel=1e-12)


@pytest.mark.parametrize(
    ("text", "kind", "value"),
    [
        ("26.5 kN", "force", 26500.0),
        ("26.5kN", "force", 26500.0),
        ("+1.5e3 N", "force", 1500.0),
        (".5 m", "length", 0.5),
        ("5. m", "length", 5.0),
        (3, "length", 3.0),
        ("450 Nm", "moment", 450.0),
        ("450 N·m", "moment", 450.0),
        ("450 N*m", "moment", 450.0),
        ("0.45 kNm", "moment", 450.0),
        ("100 lbf·ft", "moment", 135.5817948331400),
        ("100 ft*lbf", "moment", 135.5817948331400),
        ("1 kNm/deg", "torsional_stiffness", 1000.0 * 180.0 / math.pi),
        ("1 kNm/°", "torsional_stiffness", 1000.0 * 180.0 / math.pi),
        ("260 kNm/rad", "torsional_stiffness", 260e3),
        ("800 kN/mm", "stiffness", 800e6),
        ("20 °C", "temperature", 293.15),
        ("20 degC", "temperature", 293.15),
        ("212 °F", "temperature", 373.15),
        ("9000 rpm", "angular_speed", 300.0 * math.pi),
        ("250 km/h", "speed", 250.0 / 3.6),
        ("100 lbf", "force", 444.82216152605),
        ("15 %", "ratio", 0.15),
        ("0.4", "ratio", 0.4),
        ("2.5 g", "acceleration", 24.516625),
        ("2.68 g/cm^3", "density", 2680.0),
        ("9 kg·m²", "inertia", 9.0),
        ("9 kg*m**2", "inertia", 9.0),
        ("1.2 kg/m³", "density", 1.2),
        ("12 µm", "length", 12e-6),
    ],
)
def test_reads(text: str | int, kind: str, value: float) -> None:
    """Usual spellings come out in SI."""
    assert parse(text, kind, "w") == pytest.approx(value, rel=1e-12)


def test_reads_a_unit_outside_the_table_through_pint() -> None:
    """A rarer unit still reads, and only then is pint asked."""
    assert parse("5 kgf", "force", "w") == pytest.approx(49.03325)
    assert parse("1 yard", "length", "w") == pytest.approx(0.9144)


def test_reads_brackets_and_lists() -> None:
    """A bracket of numbers with one unit, or a list of bare SI numbers, is a vector; it cannot be changed."""
    vector = parse("(-1.22, 0, 400e-3) m", "length_vector", "w")

    np.testing.assert_allclose(vector, [-1.22, 0.0, 0.4])
    np.testing.assert_allclose(parse([1, 2.5, -3], "length_vector", "w"), [1.0, 2.5, -3.0])
    np.testing.assert_allclose(parse("(240, 470) mm", "length_pair", "w"), [0.24, 0.47])
    with pytest.raises(ValueError, match="read-only"):
        vector[0] = 0.0  # type: ignore[index]


@pytest.mark.parametrize(
    ("text", "kind", "word", "offer"),
    [
        ("26,5 kN", "force", "decimal comma", "'26.5 kN'"),
        ("1,200 kg", "mass", "decimal comma", "'1200 kg'"),
        ("4 000 lbf", "force", "space", "'4000 lbf'"),
        ("4\u202f000 lbf", "force", "space", "'4000 lbf'"),
        ("1_000 kg", "mass", "space or mark", "'1000 kg'"),
        ("1 234 567 N", "force", "space", "'1234567 N'"),
        ("3 kN + 2 kN", "force", "sum", "'5 kN'"),
        ("3 kN - 1 kN", "force", "sum", "'2 kN'"),
        ("3 kN + 1 N", "force", "calculation", "one number"),
        ("3*4 m", "length", "calculation", "one number"),
        ("kN", "force", "no number", "before the unit"),
        ("", "force", "no number", "before the unit"),
        ("−1.5 m", "length", "minus", "'-1.5 m'"),
        ("(1, , 2) m", "length_vector", "lacks a number", "three numbers"),
        ("(1,5; 2; 3) m", "length_vector", "semicolons", "'(1.5, 2, 3) m'"),
        ("(1 m, 2 m, 3 m)", "length_vector", "inside its bracket", "'(1, 2, 3) m'"),
        ("12", "length", "no unit", "'12 m'"),
        ("(1, 2, 3)", "length_vector", "no unit", "'(1, 2, 3) m'"),
        ("260 kNm", "torsional_stiffness", "a moment", "per radian"),
        ("190 g", "mass", "uses g", "'0.5 kg'"),
        ("3 g", "force", "uses g", "accelerations"),
        ("5 m5", "length", "not one number", ""),
        ("5 kN 3", "force", "not one number", ""),
        ("5 frob", "force", "not a known unit", "allowed"),
        ("5 kM", "length", "not a known unit", "'km'"),
        ("5 kn", "force", "a speed", ""),
        ("0x10 N", "force", "", ""),
        ("nan N", "force", "no number", ""),
        ("inf N", "force", "no number", ""),
        ("1e999 N", "force", "finite", ""),
        ("5 kN; import os", "force", "", ""),
    ],
)
def test_refuses_with_the_corrected_text(text: str, kind: str, word: str, offer: str) -> None:
    """What the grammar does not take is named, and the corrected text offered."""
    with pytest.raises(CaseError) as caught:
        parse(text, kind, "file, key")

    assert caught.value.where == "file, key"
    assert repr(text) in caught.value.found
    assert word in caught.value.found
    assert offer in caught.value.remedy
    assert caught.value.allowed


@pytest.mark.parametrize(
    "value", [True, None, {}, [1, "2 m", 3], [True, 1, 2], float("nan"), float("inf"), 10**400, b"1 m"]
)
def test_refuses_what_is_no_quantity(value: object) -> None:
    """Switches, tables, mixed lists and non-finite numbers are no quantities."""
    with pytest.raises(CaseError):
        parse(value, "length_vector" if isinstance(value, list) else "length", "w")


def test_refuses_another_count_of_numbers() -> None:
    """A pair is no vector, a number is no pair."""
    for text, kind in (("(1, 2) m", "length_vector"), ("1 m", "length_pair"), ("(1, 2, 3) m", "length")):
        with pytest.raises(CaseError, match="holds"):
            parse(text, kind, "w")


@given(FINITE, st.sampled_from([text for text in UNITS if text]))
def test_what_is_printed_reads_back(value: float, unit: str) -> None:
    """Exact text of any value in any unit reads back to that value within rounding."""
    kind = next(kind for kind in KINDS.values() if kind.size == 1 and kind.dimension == UNITS[unit].dimension)
    offset = UNITS[unit].offset

    assert parse(exact(value, unit), kind.name, "w") == pytest.approx(value, rel=1e-14, abs=1e-12 * (1.0 + offset))


@given(st.floats(min_value=1e-30, max_value=1e30) | st.floats(min_value=-1e30, max_value=-1e-30))
def test_three_figures_are_within_half_a_unit(value: float) -> None:
    """A number shown to three figures is within half a unit of the third figure."""
    assert float(significant(value)) == pytest.approx(value, rel=5.0001e-3)


@given(st.text(max_size=20))
def test_any_text_reads_or_is_refused(text: str) -> None:
    """No text makes anything but a finite number or a refusal."""
    try:
        value = parse(text, "force", "w")
    except CaseError:
        return

    assert math.isfinite(value)


@given(
    st.tuples(FINITE, FINITE, FINITE),
    st.sampled_from(["m", "mm", "in", "ft"]),
    st.sampled_from([", ", ",", " , "]),
)
def test_bracketed_vectors_read_back(numbers: tuple[float, float, float], unit: str, comma: str) -> None:
    """A bracket of printed numbers reads back, whatever the spacing round its commas."""
    text = f"({comma.join(map(repr, numbers))}) {unit}"

    np.testing.assert_array_equal(parse(text, "length_vector", "w"), np.array(numbers) * UNITS[unit].factor)


def test_shown_values() -> None:
    """Three significant figures, no exponent in the usual range."""
    assert show(26500.0, "kN") == "26.5 kN"
    assert show(0.0123456, "mm") == "12.3 mm"
    assert show(1150.0, "kg") == "1150 kg"
    assert show(0.0, "kN") == "0 kN"
    assert significant(-0.00012345) == "-0.000123"


def test_canonical_spellings_meet() -> None:
    """Different spellings of a unit come to one text."""
    assert {canonical(text) for text in ("kNm/deg", "kN*m/deg", "kN·m/°", "kN * m / deg")} == {"kN*m/deg"}


def test_a_usual_case_never_imports_pint() -> None:
    """Reading the demo case leaves pint alone."""
    code = "import sys; from blockload.case.reading import read; read('cases/demo.toml'); print('pint' in sys.modules)"
    out = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)

    assert out.stdout.strip() == "False"
