"""What the standard situations are built from: points, performance, catalogue and envelope."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from itertools import pairwise
from pathlib import Path
from typing import Any

from ..errors import nearest
from ..units import show
from .factors import CREST, DEFAULTS, FAST_CORNER, SLOW_CORNER, USED_BY
from .groups import BRAKING, FACTORS, FORCES, TURNING, WORDS, spelled_out
from .model import CatalogueSpec, EnvelopeSpec, Factor, GivenForce, LapSpec, Performance, Point
from .notes import Notes, key_of
from .schema import CaseTable
from .schema_situations import EnvelopeTable, JackTable, PerformanceTable, PointTable

WEIGHT_ONLY = ("static wheel load", "weight", "weight and inertia", "static load", "mass")
"""What a dynamic factor may multiply, in the words accepted."""
HEADINGS = (4, 720)


def build_points(table: CaseTable) -> dict[str, Point]:
    """Return all named places by dotted name: "hoop", "jacks.rear", "towing.front"."""
    return {name: _point(name, item) for name, item in _listed(table.points)} if table.points is not None else {}


def _listed(points: Any) -> Iterator[tuple[str, PointTable]]:
    for name in ("hoop", "impact", "rig_load"):
        item = getattr(points, name)
        if item is not None:
            yield name, item
    for kind in ("jacks", "towing", "hoist", "trolley"):
        for name, item in getattr(points, kind).items():
            yield f"{kind}.{name}", item


def _point(name: str, item: PointTable) -> Point:
    lifts = item.lifts if isinstance(item, JackTable) else None
    return Point(name=name, on=item.on, at=item.at, lifts=lifts, attachment=item.attachment)


def build_performance(given: PerformanceTable | None, notes: Notes) -> Performance:
    """Return what the car can do."""
    if given is None:
        return Performance()
    words = ("speed", "power", "lateral", "braking", "traction", "crest", "compression", "fast_corner", "slow_corner")
    values = {word: getattr(given, word) for word in words}
    for word in ("fast_corner", "slow_corner"):
        if given.speed is not None and values[word] is not None and values[word] > given.speed:
            found = f"{values[word]:.4g} m/s is above the highest speed, {given.speed:.4g} m/s"
            notes.problem(f"performance.{word}", found, "at most [performance] speed", "check both speeds")
    return Performance(**values, ratios=_ratios(given.ratios, notes))


def _ratios(given: Sequence[float] | None, notes: Notes) -> tuple[float, ...]:
    ratios = tuple(float(item) for item in given or ())
    if any(not 0.5 <= item <= 60.0 for item in ratios):
        notes.problem(
            "performance.ratios", f"{list(ratios)} holds an implausible ratio", "0.5 to 60", "crank over wheel"
        )
    if any(later >= earlier for earlier, later in pairwise(ratios)):
        found = f"{list(ratios)} does not fall from gear to gear"
        notes.problem("performance.ratios", found, "first gear first, each ratio below the one before", "sort them")
    return ratios


def build_catalogue(table: CaseTable, notes: Notes) -> CatalogueSpec | None:
    """Return the groups to run, with the factors and forces of the case's own."""
    given = table.catalogue
    if given is None:
        return None
    _known("catalogue.groups", given.groups, WORDS, notes)
    _known("catalogue.factors", list(given.factors), FACTORS, notes)
    _known("catalogue.forces", list(given.forces), FORCES, notes)
    factors = {}
    for name, item in given.factors.items():
        _refuse_factor_on_aero(name, item.applies_to, notes)
        factors[name] = Factor(name=name, value=item.value, of=item.applies_to or WEIGHT_ONLY[0], source=item.source)
    forces = {
        name: GivenForce(force=item.force, basis=item.basis, speed=item.speed) for name, item in given.forces.items()
    }
    if "kerb" in forces and "kerb" in factors:
        found, remedy = "a force and a factor are both given", "a measured force holds its dynamics already"
        notes.problem("catalogue.factors.kerb", found, "[catalogue.forces.kerb] or this factor", remedy)
    spec = CatalogueSpec(groups=spelled_out(given.groups), factors=factors, forces=forces)
    _note_defaults(spec, table.performance, notes)
    return spec


def _note_defaults(spec: CatalogueSpec, performance: PerformanceTable | None, notes: Notes) -> None:
    """Note every factor and speed that the groups use and the case does not give."""
    for name, factor in DEFAULTS.items():
        using = set(USED_BY[name]) & set(spec.groups) - set(spec.forces)
        if "crest" in using and performance is not None and performance.compression is not None:
            using -= {"crest"}
        if using and name not in spec.factors:
            notes.default(f"catalogue.factors.{name}", f"{factor.value:g}", f"of {factor.of}: {factor.source}")
    if performance is None or performance.speed is None:
        return
    if {"corner", "kerb", "landing", "brake_in_corner"} & set(spec.groups) and performance.fast_corner is None:
        value = show(FAST_CORNER * performance.speed, "m/s")
        notes.default("performance.fast_corner", value, f"{FAST_CORNER:g} times the highest speed; unsourced")
    if {"corner", "power_in_corner", "kerb", "shift"} & set(spec.groups) and performance.slow_corner is None:
        value = show(SLOW_CORNER * performance.speed, "m/s")
        notes.default("performance.slow_corner", value, f"{SLOW_CORNER:g} times the highest speed; unsourced")
    if "crest" in spec.groups and performance.crest is None:
        notes.default("performance.crest", f"{CREST:g} g", "the weight just lifted off: common practice, unsourced")


def _refuse_factor_on_aero(name: str, applies_to: str | None, notes: Notes) -> None:
    if applies_to is None or applies_to in WEIGHT_ONLY:
        return
    remedy = (
        "a bump does not change what the air does: the factor goes on weight and inertia, and the real aero at that "
        "speed is added"
    )
    found = f"{applies_to!r} is more than weight and inertia"
    notes.problem(f"{key_of('catalogue', 'factors', name)}.applies_to", found, ", ".join(WEIGHT_ONLY), remedy)


def _known(key: str, names: Sequence[str], known: Sequence[str], notes: Notes) -> None:
    for name in names:
        if name not in known:
            notes.problem(key, f"{name!r} is not known", ", ".join(known), nearest(name, known))


def build_envelope(given: EnvelopeTable | None, notes: Notes) -> EnvelopeSpec | None:
    """Return speeds and headings of the performance envelope."""
    if given is None:
        return None
    headings = notes.take(given, EnvelopeTable, "envelope", "headings")
    if not HEADINGS[0] <= headings <= HEADINGS[1]:
        notes.problem(
            "envelope.headings", f"{headings} headings", f"{HEADINGS[0]} to {HEADINGS[1]}", "24 to 36 is usual"
        )
    speeds = tuple(sorted(float(item) for item in given.speeds or ()))
    return EnvelopeSpec(speeds=speeds, headings=headings)


def build_laps(table: CaseTable, folder: Path, notes: Notes) -> tuple[LapSpec, ...]:
    """Return where the laps are; their files are read when their loads are asked for."""
    for name in table.laps:
        if not re.fullmatch(r"[A-Za-z0-9_-]+", name):
            found = f"{name!r} cannot name the lap's files"
            notes.problem(key_of("laps", name), found, "letters, digits, _ and -", "rename it")
    return tuple(
        LapSpec(name=name, file=folder / item.file, step=item.step, overall_ratio=item.overall_ratio)
        for name, item in table.laps.items()
    )


def turns(table: CaseTable) -> bool:
    """Whether any manoeuvre of the case lets the car turn as a rigid body."""
    own = any(item.extra_wheel_force is not None for item in table.manoeuvres.values())
    return own or bool(set(TURNING) & set(_groups(table)))


def brakes(table: CaseTable) -> bool:
    """Whether any manoeuvre of the case brakes."""
    own = any(item.drive == "brake" for item in table.manoeuvres.values())
    return own or table.envelope is not None or bool(set(BRAKING) & set(_groups(table)))


def has_situations(table: CaseTable) -> bool:
    """Whether standard situations stand in for manoeuvres of the case's own."""
    return table.envelope is not None or bool(_groups(table))


def _groups(table: CaseTable) -> tuple[str, ...]:
    return spelled_out(table.catalogue.groups) if table.catalogue is not None else ()
