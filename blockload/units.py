"""The quantity grammar of the case file: one number, or a bracket of numbers, then a unit.

The grammar is our own and strict, because a units library reads "26,5 kN" as 265 kN without a word. Only the
unit text is looked up: first in the table of `unit_table`, then, for anything rarer, in pint (imported on first need).
"""

from __future__ import annotations

import math
import re
from collections.abc import Sequence
from functools import cache
from typing import Any, NoReturn

import numpy as np

from .arrays import Floats, frozen
from .errors import CaseError, nearest
from .unit_table import DIMENSIONS, KINDS, NONE, STANDARD_GRAVITY, UNITS, Dimension, Kind, Unit

_NUMBER = r"[+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?"
_ONE = re.compile(rf"\s*({_NUMBER})\s*(.*?)\s*", re.DOTALL)
_MANY = re.compile(rf"\s*\(\s*({_NUMBER}(?:\s*,\s*{_NUMBER})*)\s*\)\s*(.*?)\s*", re.DOTALL)
_TERM_TEXT = r"\s*([+-]?)\s*([0-9]+\.?[0-9]*|\.[0-9]+)\s*([^0-9\s+-]+)\s*"
_TERM, _SUM = re.compile(_TERM_TEXT), re.compile(f"(?:{_TERM_TEXT})+")
_ATOM = r"[A-Za-z%]+(?:\^-?[0-9])?"
_UNIT_TEXT = re.compile(rf"(?:1/)?\(?{_ATOM}\)?(?:[*/]\(?{_ATOM}\)?)*")
_SPELLINGS = str.maketrans({"·": "*", "⋅": "*", "×": "*", "²": "^2", "³": "^3", "μ": "u", "µ": "u"})


def canonical(unit: str) -> str:
    """Return a unit's text in the table's spelling: "kNm/°" is "kN*m/deg"."""
    text = unit.strip().translate(_SPELLINGS).replace("**", "^").replace("°C", "degC").replace("°F", "degF")
    text = re.sub(r"\s*([*/^])\s*", r"\1", text.replace("°", "deg"))
    text = re.sub(r"(?<![A-Za-z])([kM]?N)(mm|m)(?![A-Za-z])", r"\1*\2", text)
    return {"ft*lbf": "lbf*ft", "in*lbf": "lbf*in", "kph": "km/h", "inch": "in", "1/min": "rpm"}.get(text, text)


def parse(value: Any, kind: str, where: str) -> float | Floats:
    """Read one quantity of the case file into SI.

    Parameters
    ----------
    value : number, list of numbers or text
        A bare number (or list of numbers) is SI already; text is a number or bracket of numbers, then a unit.
    kind : str
        A key of `KINDS`.
    where : str
        File, table and key, for the message.

    Returns
    -------
    float, or read-only array of shape (2,) or (3,)
        SI value.

    Raises
    ------
    CaseError
        With the corrected text where it can be guessed.

    """
    wanted = KINDS[kind]
    numbers, unit = _numbers(value, wanted, where)
    if len(numbers) != wanted.size:
        raise CaseError(where, f"{_quoted(value)} holds {_count(len(numbers))}", _form(wanted))
    if not all(math.isfinite(number) for number in numbers):
        raise CaseError(where, f"{_quoted(value)} is not a finite number", _form(wanted))
    if unit is not None:
        numbers = [number * unit.factor + unit.offset for number in numbers]
    return numbers[0] if wanted.size == 1 else frozen(numbers)


def _numbers(value: Any, kind: Kind, where: str) -> tuple[list[float], Unit | None]:
    if isinstance(value, bool) or not isinstance(value, (int, float, str, Sequence)):
        raise CaseError(where, f"{value!r} is not a quantity", _form(kind))
    if isinstance(value, (int, float)):
        return [_bare(value)], None
    if not isinstance(value, str):
        if any(isinstance(item, bool) or not isinstance(item, (int, float)) for item in value):
            _refuse_list(value, kind, where)
        return [_bare(item) for item in value], None
    match = _MANY.fullmatch(value) or _ONE.fullmatch(value)
    if match is None:
        _refuse(value, kind, where)
    numbers = [float(item) for item in match[1].split(",")]
    return numbers, _unit(match[2], value, kind, where)


def _bare(value: float) -> float:
    try:
        return float(value)
    except OverflowError:
        return math.inf


def _unit(text: str, value: str, kind: Kind, where: str) -> Unit:
    name = canonical(text)
    if re.search(r"(?<![A-Za-z])g(?![A-Za-z])", name) and name != "g/cm^3":
        if kind.dimension == DIMENSIONS["acceleration"][0] and name == "g":
            return Unit(STANDARD_GRAVITY, kind.dimension)
        remedy = "g is standard gravity and belongs to accelerations; write a mass of 500 grams as '0.5 kg'"
        raise CaseError(where, f"{value!r} uses g", _form(kind), remedy)
    unit = UNITS.get(name)
    if unit is None:
        if not _UNIT_TEXT.fullmatch(name) and re.search(r"[0-9,;.+()]", name):
            _refuse(value, kind, where)
        unit = _rare_unit(name)
    if not name and kind.dimension != NONE:
        remedy = f"write '{value.strip()} {kind.si}', or the bare number for SI"
        raise CaseError(where, f"{value!r} has no unit", _form(kind), remedy)
    if unit is None:
        remedy = nearest(name, [*kind.usual, *UNITS]) or "write the unit as one of those allowed"
        raise CaseError(where, f"{value!r}: {text!r} is not a known unit", _form(kind), remedy)
    if unit.dimension != kind.dimension:
        what = _what(unit.dimension)
        remedy = "write it per radian or per degree" if kind.name == "torsional_stiffness" else "check key and unit"
        raise CaseError(where, f"{value!r} is {what}, not {_article(kind.name)}", _form(kind), remedy)
    return unit


@cache
def _rare_unit(name: str) -> Unit | None:
    """Ask pint about a unit the table lacks; only the unit's own text ever goes there."""
    if not _UNIT_TEXT.fullmatch(name):
        return None
    import pint

    registry: Any = pint.application_registry
    try:
        zero, one = (registry.Quantity(number, name).to_base_units() for number in (0.0, 1.0))
        exponents = dict(one._units)
    except (pint.errors.PintError, AttributeError, TypeError, ValueError, SyntaxError, ArithmeticError):
        return None
    except Exception as error:  # pint lets its tokenizer's own errors through
        if type(error).__module__.startswith(("pint", "tokenize", "flexparser")):
            return None
        raise
    bases = ("kilogram", "meter", "second", "kelvin", "radian")
    dimension = tuple(int(exponents.pop(base, 0)) for base in bases)
    if exponents:
        return None
    offset = float(zero.magnitude)
    return Unit(float(one.magnitude) - offset, dimension, offset)  # type: ignore[arg-type]


def _refuse(value: str, kind: Kind, where: str) -> NoReturn:
    """Refuse a text outside the grammar, offering what was probably meant."""
    found, offer = _diagnosis(value, kind)
    remedy = f"write {offer}" if offer else "write one number (or a bracket of numbers) and its unit"
    raise CaseError(where, f"{value!r} {found}", _form(kind), remedy)


def _diagnosis(value: str, kind: Kind) -> tuple[str, str]:
    text = value.strip().replace("−", "-").replace("–", "-")
    if not re.search(r"[0-9]", text):
        return "has no number", f"the number before the unit, as in '1 {kind.si}'".replace(" '", " '")
    if text != value.strip() and (_ONE.fullmatch(text) or _MANY.fullmatch(text)):
        return "uses a typographic minus sign", f"'{text}'"
    bracket = re.fullmatch(r"\((.*)\)\s*(.*)", text, re.DOTALL)
    if bracket:
        return _bracket_diagnosis(bracket[1], bracket[2], kind)
    joined = re.sub(r"(?<=[0-9])[\s_'\u00a0\u202f](?=[0-9]{3}(?![0-9]))", "", text)
    if joined != text and _ONE.fullmatch(joined):
        return "has a space or mark inside its number", f"'{joined}'"
    comma = re.fullmatch(r"([+-]?)([0-9]+),([0-9]+)(.*)", joined)
    if comma:
        sign, whole, part, rest = comma.groups()
        point = f"'{sign}{whole}.{part}{rest}'"
        return "has a decimal comma", f"{point} or '{sign}{whole}{part}{rest}'" if len(part) == 3 else point
    terms = _TERM.findall(text)
    if len(terms) > 1 and _SUM.fullmatch(text) and len({unit for _, _, unit in terms}) == 1:
        total = sum(-float(number) if sign == "-" else float(number) for sign, number, _ in terms)
        return "is a sum", f"its result, '{total:.12g} {terms[0][2]}'"
    if re.search(r"[+*/-]\s*[0-9]", text.lstrip("+-")):
        return "is a calculation", "its result as one number and a unit"
    return "is not one number and a unit", ""


def _bracket_diagnosis(inside: str, unit: str, kind: Kind) -> tuple[str, str]:
    separator = ";" if ";" in inside else ","
    parts = [part.strip().replace(",", ".") for part in inside.split(separator)]
    if any(not part for part in parts):
        return "lacks a number inside its bracket", f"{_count(kind.size)} in the bracket"
    split = [re.fullmatch(rf"({_NUMBER})\s*(.*)", part) for part in parts]
    if any(item is None for item in split):
        return "has something other than numbers in its bracket", f"{_count(kind.size)} in the bracket"
    found = [item for item in split if item]
    unit = unit or found[-1][2] or kind.si
    corrected = f"'({', '.join(item[1] for item in found)}) {unit}'"
    if separator == ";":
        return "separates its numbers with semicolons", corrected
    return "has units inside its bracket", corrected


def _refuse_list(value: Sequence[Any], kind: Kind, where: str) -> NoReturn:
    remedy = f"write bare SI numbers in the list, or one text such as '{_example(kind)}'"
    raise CaseError(where, f"{list(value)!r} is not a list of numbers", _form(kind), remedy)


def _form(kind: Kind) -> str:
    units = ", ".join(kind.usual)
    bare = "a bare number" if kind.dimension == NONE else f"a bare SI number ({kind.si})"
    if kind.size > 1:
        bare = f"a list of {_count(kind.size)} in {kind.si}"
    return f"{_article(kind.name)}: '{_example(kind)}' or {bare}" + (f"; units: {units}" if units else "")


def _example(kind: Kind) -> str:
    numbers = "1.5" if kind.size == 1 else "(" + ", ".join(("1.5", "0", "0.2")[: kind.size]) + ")"
    return f"{numbers} {kind.si}".strip()


def _article(name: str) -> str:
    words = name.replace("_", " ")
    return f"{'an' if words[0] in 'aeiou' else 'a'} {words}"


def _what(dimension: Dimension) -> str:
    names = [name for name, (known, _, _) in DIMENSIONS.items() if known == dimension]
    return " or ".join(_article(name) for name in names) if names else "another dimension"


def _count(size: int) -> str:
    return ("no number", "one number", "two numbers", "three numbers")[size] if size < 4 else f"{size} numbers"


def _quoted(value: Any) -> str:
    return repr(value if isinstance(value, (str, int, float)) else list(value))


def scaled(value: Any, factor: float) -> str:
    """Return a quantity of the case file, as it would stand there, with its numbers multiplied (six figures)."""
    match = (_MANY.fullmatch(value) or _ONE.fullmatch(value)) if isinstance(value, str) else None
    if isinstance(value, str) and match is None:
        raise CaseError(repr(value), "is no quantity", "one number, or a bracket of numbers, and a unit")
    numbers = [float(item) for item in match[1].split(",")] if match else np.atleast_1d(value).tolist()
    texts = ", ".join(f"{number * factor:.6g}" for number in numbers)
    if match:
        return f"({texts}) {match[2]}" if "(" in value else f"{texts} {match[2]}".rstrip()
    return f"[{texts}]" if isinstance(value, list) else texts


def show(value: float, unit: str, digits: int = 3) -> str:
    """Return an SI value as text in the given unit, to some significant figures: 26500 in "kN" is "26.5 kN"."""
    return f"{significant(_from_si(value, unit), digits)} {unit}".rstrip()


def exact(value: float, unit: str) -> str:
    """Return an SI value as text that reads back to the same value within rounding."""
    return f"{_from_si(value, unit)!r} {unit}".rstrip()


def _from_si(value: float, unit: str) -> float:
    known = UNITS[canonical(unit)]
    return (float(value) - known.offset) / known.factor


def significant(number: float, digits: int = 3) -> str:
    """Return a number to some significant figures, without an exponent between 1e-4 and 1e7."""
    if number == 0 or not math.isfinite(number):
        return "0" if number == 0 else str(number)
    places = digits - 1 - math.floor(math.log10(abs(number)))
    rounded = round(number, places)
    if 1e-4 <= abs(rounded) < 1e7:
        return f"{rounded:.{max(places, 0)}f}"
    return f"{rounded:.{digits - 1}e}"
