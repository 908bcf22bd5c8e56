"""Grades of castings: what the block is made of, and where each value comes from.

The list ships in data/materials.toml. Strengths in a Material are those of the casting itself: the standard's minimum
of the separately cast bar, times the casting knock-down, times the ratio of hot to cold strength at the metal's
temperature. All three are kept, none is hidden in a factor. A material of the user's own is taken as given: its
strengths are already those in the casting at its temperature.
"""

from __future__ import annotations

import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from importlib import resources
from types import MappingProxyType
from typing import Any

from ..case.model import MaterialChoice
from ..errors import BlockError, nearest
from .model import Material

ROOM_TEMPERATURE = 293.15
_ZERO_CELSIUS = 273.15
_OWN = (
    "youngs_modulus",
    "poissons_ratio",
    "density",
    "thermal_expansion",
    "yield_strength",
    "tensile_strength",
    "source",
)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class HotStrength:
    """Strength at temperature [K] as a share of that at 20 °C; linear between, refused outside."""

    temperatures: tuple[float, ...]
    yield_ratio: tuple[float, ...]
    tensile_ratio: tuple[float, ...]
    source: str


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Grade:
    """One row of the list; Pa, kg/m³, 1/K, elongation in %. Strengths are the separately cast bar's at 20 °C."""

    name: str
    alloy: str
    process: str
    temper: str
    youngs_modulus: float
    poissons_ratio: float
    density: float
    thermal_expansion: float
    tensile_strength: float
    yield_strength: float
    elongation: float
    casting_knock_down: float
    hot: HotStrength | None
    source: str
    physical_source: str
    knock_down_source: str


@dataclass(frozen=True, slots=True, kw_only=True)
class GradesTable:
    """The grades as texts: title, columns, rows, note; the first column names the row."""

    title: str
    columns: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    note: str = ""


@cache
def grades() -> Mapping[str, Grade]:
    """Return the shipped grades by name."""
    text = resources.files("blockload").joinpath("data/materials.toml").read_text(encoding="utf-8")
    data = tomllib.loads(text)
    hot = {name: _hot_strength(row) for name, row in data["hot"].items()}
    return MappingProxyType({row["name"]: _grade(row, data["sets"], hot) for row in data["grade"]})


def material(choice: MaterialChoice) -> Material:
    """Return what a volume is made of.

    Raises BlockError for an unknown grade, an incomplete material of the user's own, or a temperature the grade has
    no strengths for.
    """
    where = f"block.materials.{choice.volume}"
    if choice.grade is None:
        return _own(choice, where)
    known = grades()
    if choice.grade not in known:
        hint = nearest(choice.grade, known)
        raise BlockError(
            where, f"no grade {choice.grade!r}. {hint}".strip(), ", ".join(known), "see: blockload materials"
        )
    return _graded(known[choice.grade], choice.temperature, where)


def grades_table() -> GradesTable:
    """Return the list for printing: one row per grade; its sources are numbered in the note."""
    shipped = tuple(grades().values())
    sources = list(dict.fromkeys(text for g in shipped for text in (g.source, g.physical_source, g.knock_down_source)))
    hot = dict.fromkeys(g.hot.source for g in shipped if g.hot is not None)
    number = {text: str(index) for index, text in enumerate(sources, start=1)}
    rows = tuple(
        (
            g.name,
            g.process if g.process.endswith(g.temper) else f"{g.process}, {g.temper}",
            f"{g.tensile_strength / 1e6:.0f}",
            f"{g.yield_strength / 1e6:.0f}",
            f"{g.elongation:g}",
            f"{g.casting_knock_down:.2f}",
            f"{g.youngs_modulus / 1e9:.0f}",
            f"{g.poissons_ratio:g}",
            f"{g.density:.0f}",
            f"{g.thermal_expansion * 1e6:g}",
            " ".join(number[text] for text in (g.source, g.physical_source, g.knock_down_source)),
        )
        for g in shipped
    )
    note = "\n".join(
        (
            "Rm, Rp0.2 in MPa: minima of a separately cast bar at 20 °C; cast: share of that allowed in the casting;",
            "E in GPa, ν, ρ in kg/m³, α in 1e-6/K. Sources of strength, of physical values, of the casting's share:",
            *(f"  {index}  {text}" for text, index in number.items()),
            *(f"Hot strength of the AlSi7Mg grades: {text}" for text in hot),
        )
    )
    columns = ("grade", "process, temper", "Rm", "Rp0.2", "A %", "cast", "E", "ν", "ρ", "α", "sources")
    return GradesTable(title="Grades", columns=columns, rows=rows, note=note)


def _graded(grade: Grade, temperature: float | None, where: str) -> Material:
    kelvin = ROOM_TEMPERATURE if temperature is None else temperature
    yield_ratio, tensile_ratio = _hot_ratios(grade, kelvin, where)
    hot_source = grade.hot.source if grade.hot is not None else "at 20 °C"
    return Material(
        name=grade.name,
        youngs_modulus=grade.youngs_modulus,
        poissons_ratio=grade.poissons_ratio,
        density=grade.density,
        thermal_expansion=grade.thermal_expansion,
        yield_strength=grade.yield_strength * grade.casting_knock_down * yield_ratio,
        tensile_strength=grade.tensile_strength * grade.casting_knock_down * tensile_ratio,
        bar_yield_strength=grade.yield_strength,
        bar_tensile_strength=grade.tensile_strength,
        casting_knock_down=grade.casting_knock_down,
        temperature=kelvin,
        temperature_factor=yield_ratio,
        tensile_temperature_factor=tensile_ratio,
        cast=True,
        sources=MappingProxyType(
            {
                **dict.fromkeys(("youngs_modulus", "poissons_ratio", "density"), grade.physical_source),
                "thermal_expansion": grade.physical_source,
                "yield_strength": grade.source,
                "tensile_strength": grade.source,
                "casting_knock_down": grade.knock_down_source,
                "temperature_factor": hot_source,
            }
        ),
    )


def _hot_ratios(grade: Grade, kelvin: float, where: str) -> tuple[float, float]:
    import numpy as np

    if abs(kelvin - ROOM_TEMPERATURE) < 1e-6:
        return 1.0, 1.0
    found = f"{kelvin - _ZERO_CELSIUS:.0f} °C for {grade.name}"
    if grade.hot is None:
        remedy = "leave the temperature out, or give your own properties at temperature"
        raise BlockError(f"{where}.temperature", found, "20 °C: this list has no hot strengths of the grade", remedy)
    low, high = grade.hot.temperatures[0], grade.hot.temperatures[-1]
    if not low <= kelvin <= high:
        allowed = f"{low - _ZERO_CELSIUS:.0f} to {high - _ZERO_CELSIUS:.0f} °C"
        raise BlockError(f"{where}.temperature", found, allowed, "give your own properties at temperature")
    ratios = (grade.hot.yield_ratio, grade.hot.tensile_ratio)
    yielding, tensile = (float(np.interp(kelvin, grade.hot.temperatures, row)) for row in ratios)
    return yielding, tensile


def _own(choice: MaterialChoice, where: str) -> Material:
    given = dict(choice.properties or {})
    missing = [key for key in _OWN if given.get(key) is None]
    if missing:
        raise BlockError(where, f"no {', '.join(missing)}", ", ".join(_OWN), "give them all, or name a grade")
    if not str(given["source"]).strip():
        raise BlockError(f"{where}.source", "empty", "where the values come from")
    source = str(given["source"])
    return Material(
        name=f"{choice.volume} (own)",
        **{key: float(given[key]) for key in _OWN if key != "source"},
        bar_yield_strength=float(given["yield_strength"]),
        bar_tensile_strength=float(given["tensile_strength"]),
        casting_knock_down=1.0,
        temperature=ROOM_TEMPERATURE if choice.temperature is None else choice.temperature,
        temperature_factor=1.0,
        cast=True,
        sources=MappingProxyType(
            {
                **dict.fromkeys(_OWN[:-1], source),
                "casting_knock_down": "taken as strengths in the casting itself",
                "temperature_factor": "taken as strengths at temperature",
            }
        ),
    )


def _grade(row: Mapping[str, Any], sets: Mapping[str, Any], hot: Mapping[str, HotStrength]) -> Grade:
    shared = dict(sets[row["set"]])
    if "extends" in shared:
        shared = {**sets[shared["extends"]], **shared}
    values = {**shared, **row}
    return Grade(
        name=values["name"],
        alloy=values["alloy"],
        process=values["process"],
        temper=values["temper"],
        youngs_modulus=values["youngs_modulus"] * 1e9,
        poissons_ratio=values["poissons_ratio"],
        density=values["density"],
        thermal_expansion=values["thermal_expansion"] * 1e-6,
        tensile_strength=values["tensile_strength"] * 1e6,
        yield_strength=values["yield_strength"] * 1e6,
        elongation=values["elongation"],
        casting_knock_down=values["knock_down"],
        hot=hot[values["hot"]] if "hot" in values else None,
        source=values["source"],
        physical_source=values["physical_source"],
        knock_down_source=values["knock_down_source"],
    )


def _hot_strength(row: Mapping[str, Any]) -> HotStrength:
    return HotStrength(
        temperatures=tuple(t + _ZERO_CELSIUS for t in row["celsius"]),
        yield_ratio=tuple(value / row["yield_strength"][0] for value in row["yield_strength"]),
        tensile_ratio=tuple(value / row["tensile_strength"][0] for value in row["tensile_strength"]),
        source=row["source"],
    )
