"""The units the case file's grammar knows without asking a library, and the kinds of quantity its keys take.

Everything is SI; angles count as a dimension, so that kN·m is no torsional stiffness. A test holds every unit against
pint.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

STANDARD_GRAVITY = 9.80665
"""Standard acceleration of free fall [m/s²] (3rd CGPM, 1901; ISO 80000-3)."""

Dimension = tuple[int, int, int, int, int]
"""Exponents of kg, m, s, K and rad."""


@dataclass(frozen=True, slots=True)
class Unit:
    """SI value = factor · number + offset."""

    factor: float
    dimension: Dimension
    offset: float = 0.0


@dataclass(frozen=True, slots=True)
class Kind:
    """What a field holds: its dimension, how many numbers, the SI unit and usual units for messages."""

    name: str
    dimension: Dimension
    size: int
    si: str
    usual: tuple[str, ...]


_INCH, _FOOT, _POUND = 0.0254, 0.3048, 0.45359237
_LBF = _POUND * STANDARD_GRAVITY
_DEGREE = math.pi / 180.0
NONE: Dimension = (0, 0, 0, 0, 0)
_FORCE: Dimension = (1, 1, -2, 0, 0)
_MOMENT: Dimension = (1, 2, -2, 0, 0)
_TORSIONAL: Dimension = (1, 2, -2, 0, -1)
_STIFFNESS: Dimension = (1, 0, -2, 0, 0)
_PRESSURE: Dimension = (1, -1, -2, 0, 0)

DIMENSIONS: Mapping[str, tuple[Dimension, str, Mapping[str, float]]] = {
    "length": ((0, 1, 0, 0, 0), "m", {"m": 1, "mm": 1e-3, "cm": 1e-2, "um": 1e-6, "km": 1e3, "in": _INCH, "ft": _FOOT}),
    "area": ((0, 2, 0, 0, 0), "m^2", {"m^2": 1, "mm^2": 1e-6, "cm^2": 1e-4, "in^2": _INCH**2, "ft^2": _FOOT**2}),
    "mass": ((1, 0, 0, 0, 0), "kg", {"kg": 1, "t": 1e3, "lb": _POUND}),
    "inertia": ((1, 2, 0, 0, 0), "kg*m^2", {"kg*m^2": 1, "kg*mm^2": 1e-6, "kg*cm^2": 1e-4}),
    "second_moment": ((0, 4, 0, 0, 0), "m^4", {"m^4": 1, "mm^4": 1e-12, "cm^4": 1e-8, "in^4": _INCH**4}),
    "warping_constant": ((0, 6, 0, 0, 0), "m^6", {"m^6": 1, "mm^6": 1e-18, "cm^6": 1e-12, "in^6": _INCH**6}),
    "section_modulus": ((0, 3, 0, 0, 0), "m^3", {"m^3": 1, "mm^3": 1e-9, "cm^3": 1e-6, "in^3": _INCH**3}),
    "density": ((1, -3, 0, 0, 0), "kg/m^3", {"kg/m^3": 1, "g/cm^3": 1e3, "kg/dm^3": 1e3, "t/m^3": 1e3}),
    "force": (_FORCE, "N", {"N": 1, "kN": 1e3, "MN": 1e6, "lbf": _LBF}),
    "moment": (
        _MOMENT,
        "N*m",
        {
            "N*m": 1,
            "kN*m": 1e3,
            "MN*m": 1e6,
            "N*mm": 1e-3,
            "kN*mm": 1.0,
            "lbf*ft": _LBF * _FOOT,
            "lbf*in": _LBF * _INCH,
        },
    ),
    "torsional_stiffness": (
        _TORSIONAL,
        "N*m/rad",
        {
            "N*m/rad": 1,
            "kN*m/rad": 1e3,
            "MN*m/rad": 1e6,
            "N*m/deg": 1 / _DEGREE,
            "kN*m/deg": 1e3 / _DEGREE,
            "lbf*ft/deg": _LBF * _FOOT / _DEGREE,
        },
    ),
    "stiffness": (
        _STIFFNESS,
        "N/m",
        {"N/m": 1, "kN/m": 1e3, "N/mm": 1e3, "kN/mm": 1e6, "MN/m": 1e6, "N/um": 1e6, "lbf/in": _LBF / _INCH},
    ),
    "pressure": (
        _PRESSURE,
        "Pa",
        {"Pa": 1, "kPa": 1e3, "MPa": 1e6, "GPa": 1e9, "bar": 1e5, "N/mm^2": 1e6, "psi": _LBF / _INCH**2},
    ),
    "speed": (
        (0, 1, -1, 0, 0),
        "m/s",
        {"m/s": 1, "km/h": 1 / 3.6, "mm/s": 1e-3, "mph": 1609.344 / 3600.0, "ft/s": _FOOT},
    ),
    "acceleration": ((0, 1, -2, 0, 0), "m/s^2", {"m/s^2": 1, "mm/s^2": 1e-3, "ft/s^2": _FOOT}),
    "angle": ((0, 0, 0, 0, 1), "rad", {"rad": 1, "deg": _DEGREE, "mrad": 1e-3}),
    "angular_speed": ((0, 0, -1, 0, 1), "rad/s", {"rad/s": 1, "deg/s": _DEGREE, "rpm": math.pi / 30.0}),
    "angular_acceleration": (
        (0, 0, -2, 0, 1),
        "rad/s^2",
        {"rad/s^2": 1, "deg/s^2": _DEGREE, "rpm/s": math.pi / 30.0},
    ),
    "power": ((1, 2, -3, 0, 0), "W", {"W": 1, "kW": 1e3}),
    "time": ((0, 0, 1, 0, 0), "s", {"s": 1, "ms": 1e-3, "min": 60, "h": 3600}),
    "temperature": ((0, 0, 0, 1, 0), "K", {"K": 1, "degC": 1, "degF": 5 / 9}),
    "thermal_expansion": ((0, 0, 0, -1, 0), "1/K", {"1/K": 1, "um/m/K": 1e-6}),
    "per_force": ((-1, -1, 2, 0, 0), "1/N", {"1/N": 1, "1/kN": 1e-3}),
    "ratio": (NONE, "", {"": 1, "%": 1e-2, "1": 1}),
}
_OFFSETS = {"degC": 273.15, "degF": 459.67 * 5 / 9}

UNITS: Mapping[str, Unit] = MappingProxyType(
    {
        text: Unit(float(factor), dimension, _OFFSETS.get(text, 0.0))
        for dimension, _, units in DIMENSIONS.values()
        for text, factor in units.items()
    }
)
"""Usual units by their canonical text; a test compares every entry to pint."""


def _kinds() -> dict[str, Kind]:
    kinds: dict[str, Kind] = {}
    for name, (dimension, si, units) in DIMENSIONS.items():
        usual = tuple(text for text in units if text)
        if name == "acceleration":
            usual = (*usual, "g")
        for suffix, size in (("", 1), ("_pair", 2), ("_vector", 3)):
            kinds[name + suffix] = Kind(name + suffix, dimension, size, si, usual)
    return kinds


KINDS: Mapping[str, Kind] = MappingProxyType(_kinds())
"""Every kind of field: a dimension's name, with "_pair" for two numbers and "_vector" for three."""
