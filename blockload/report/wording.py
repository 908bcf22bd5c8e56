"""How numbers are said: three significant figures, the trade's units, and every sign in words.

Values arrive in SI. A sign alone tells nobody what happens to the casting, so each component of a section wrench
has its two sentences here, written for ISO 8855 axes (x forward, y left, z up) and the stated signs: N + tension,
V and T of the front part on the rear part, M_sag + top compressed, M_lat + left side in tension.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence

MINUS = "\N{MINUS SIGN}"
ABSENT = "\N{EN DASH}"
NO_BREAK = "\N{NO-BREAK SPACE}"
CORNER_NAMES = {"FL": "front left", "FR": "front right", "RL": "rear left", "RR": "rear right"}

# Component: unit, divisor, words for plus, words for minus.
SECTION_WORDS = {
    "N": ("kN", 1e3, "pulled apart", "pressed together"),
    "V_y": ("kN", 1e3, "rear part pushed left", "rear part pushed right"),
    "V_z": ("kN", 1e3, "rear part pushed up", "rear part pushed down"),
    "T": ("kN·m", 1e3, "rear part's left side lifted", "rear part's right side lifted"),
    "M_sag": ("kN·m", 1e3, "top pressed, bottom pulled", "top pulled, bottom pressed"),
    "M_lat": ("kN·m", 1e3, "left pulled, right pressed", "left pressed, right pulled"),
}


_MOST = 99  # a margin beyond this is as good as no load: its digits say nothing


def figure(value: float | None, *, scale: float = 1.0, digits: int = 3, sign: bool = False) -> str:
    """Return value / scale with this many significant figures; a dash where there is no finite value."""
    if value is None or not math.isfinite(value):
        return ABSENT
    number = value / scale
    if number == 0.0:
        return "0"
    exponent = math.floor(math.log10(abs(number)))
    rounded = round(number, digits - 1 - exponent)
    exponent = math.floor(math.log10(abs(rounded)))
    if -4 <= exponent < 6:
        text = f"{abs(rounded):.{max(digits - 1 - exponent, 0)}f}"
    else:
        text = f"{abs(rounded):.{digits - 1}e}"
    if rounded < 0:
        return MINUS + text
    return f"+{text}" if sign else text


def fixed(value: float | None, places: int, *, scale: float = 1.0, sign: bool = False) -> str:
    """Return value / scale with this many decimals: for columns whose figures should stand beneath each other."""
    if value is None or not math.isfinite(value):
        return ABSENT
    text = f"{abs(value / scale):.{places}f}"
    if value < 0 and float(text) != 0.0:
        return MINUS + text
    return f"+{text}" if sign and float(text) != 0.0 else text


def point(at: Iterable[float], places: int = 3) -> str:
    """Return a place of the car as "(−1.500, 0.240, 0.470)"; metres."""
    return f"({', '.join(fixed(float(x), places) for x in at)})"


def band(values: Sequence[float] | None, value: float | None = None) -> str:
    """Return "0.12 to 0.41", one number where both ends agree to the digits shown, ">99" beyond that."""
    ends = [value] if values is None else list(values)
    texts = [f">{_MOST}" if x is not None and x > _MOST else fixed(x, 2) for x in ends]
    return texts[0] if len(set(texts)) == 1 else " to ".join(texts)


def section_words(component: str, value: float) -> str:
    """Return one section component with its sign in words: "+6.7 kN·m: top pressed, bottom pulled"."""
    unit, scale, plus, minus = SECTION_WORDS[component]
    shown = figure(value, scale=scale, sign=True)
    if abs(value) / scale < 5e-4:
        return f"0 {unit}"
    return f"{shown} {unit}: {plus if value > 0 else minus}"


def axial_words(value: float) -> str:
    """Return a stud's axial force in kN with "pulled" or "pressed"."""
    word = "pulled" if value > 0 else "pressed"
    return f"{figure(value, scale=1e3, sign=True)} kN {word}" if abs(value) >= 0.5 else "0 kN"


UNIT_SCALES = {"Pa": ("MPa", 1e6), "N": ("kN", 1e3), "N·m": ("kN·m", 1e3), "N*m": ("kN·m", 1e3), "m": ("mm", 1e-3)}


def quantity(value: float | None, unit: str, *, sign: bool = False) -> str:
    """Return an SI value in the report's unit, with the unit."""
    shown, scale = UNIT_SCALES.get(unit, (unit, 1.0))
    return f"{figure(value, scale=scale, sign=sign)}{NO_BREAK}{shown}".rstrip() if value is not None else ABSENT


def plain_name(name: str) -> str:
    """Return a name of the case file as running text (underscores become spaces)."""
    return name.replace("_", " ")
