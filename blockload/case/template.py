"""A commented case file written from the schema: every key with its meaning, unit, default and source.

What a case is asked for stands live, with invented values; the rest is commented out. The text reads as a case.
"""

from __future__ import annotations

import textwrap
from collections.abc import Iterator
from typing import Any

from ..unit_table import KINDS
from .documents import join_key
from .tables import Meta, Table, fields, inner, words_of

_LIVE = {
    "title",
    "car",
    "bodies.engine.mass",
    "axles.rear.x",
    "faces.front.stud",
    "faces.front.stud.size",
    "faces.front.stud.property_class",
    "faces.front.mirrored",
    "faces.rear.mirrored",
    "faces.front.studs",
    "faces.rear.studs",
    "bodies.engine",
    "manoeuvres",
    "manoeuvres.v_max.speed",
}
"""Keys that stand live though the schema itself can do without them."""

_NAMES = {
    "aero": "rear_wing",
    "aero_split": "floor",
    "manoeuvres": "v_max",
    "paths": "strut_left",
    "known": "bodies.engine.mass",
    "block.carried": "plenum",
    "block.beam.stations": "middle",
    "block.beam.stations.middle.walls": "casing",
    "points.jacks": "rear",
    "points.towing": "front",
    "points.hoist": "front_left",
    "points.trolley": "front",
    "catalogue.factors": "kerb",
    "catalogue.forces": "landing",
    "laps": "test_day",
}

_NAMED = {
    "faces.front.studs": {"TL": '"(0.24, 0.45) m"', "BL": '"(0.17, 0.08) m"'},
    "faces.rear.studs": {"TL": '"(0.24, 0.40) m"', "BL": '"(0.14, 0.06) m"'},
    "block.materials": {"block": '"EN AC-42100 KT6"'},
    "block.beam.places": {"main_bearings": '"(-1.81, 0, 0.22) m"'},
    "block.attachments.front": {"TL": '"pad_front_TL"'},
    "block.attachments.rear": {"TL": '"pad_rear_TL"'},
    "block.attachments.other": {"main_bearings": '"main_*"'},
}

_EXAMPLES = {
    "axles.front.x": '"0 m"',
    "bodies.tub.mass": '"680 kg"',
    "bodies.tub.cg": '"(-1.25, 0, 0.40) m"',
    "bodies.gearbox.mass": '"125 kg"',
    "bodies.gearbox.cg": '"(-2.50, 0, 0.32) m"',
    "axles.rear.corner.cg": '"(-2.70, 0.80, 0.33) m"',
    "axles.front.carried_by": '"tub"',
    "faces.rear.x": '"-2.12 m"',
    "paths.strut_left.to.body": '"gearbox"',
    "paths.strut_left.to.at": '"(-2.4, 0.3, 0.5) m"',
}

_HEAD = """\
# A blockload case file (TOML). Every quantity is a bare SI number, or text: one number, or a bracket of numbers,
# then a unit. Axes: x forward, y left, z up, from the ground under the front axle; L is always the car's left.
# All values here are invented. Lines that start with "# " and hold a key may be uncommented.
"""


def template() -> str:
    """Return the text of a commented case file."""
    from .schema import CaseTable

    return _HEAD + "\n" + "\n".join(_table(CaseTable, (), True)) + "\n"


def _table(table: type[Table], path: tuple[str, ...], live: bool) -> Iterator[str]:
    """Yield the lines of a table: its own keys first, then the tables below it."""
    below = []
    for name, info, meta in fields(table):
        inside, many = inner(info.annotation)
        if inside is not None or many:
            below.append((name, info, meta, inside))
        else:
            yield from _key(name, info, meta, path, live)
    for name, info, meta, inside in below:
        yield from _below(name, info, meta, inside, path, live)


def _below(
    name: str, info: Any, meta: Meta, inside: type[Table] | None, path: tuple[str, ...], live: bool
) -> Iterator[str]:
    place = (*path, name)
    key = ".".join(place)
    here = live and (info.is_required() or key in _LIVE)
    if key in _NAMED:
        yield from _header(place, info, here)
        yield from (_line(f"{entry} = {value}", here) for entry, value in _NAMED[key].items())
        if inside is not None and meta.short is not None:
            yield from _choices(inside, meta.short)
    elif inside is not None:
        place = (*place, _NAMES[key]) if key in _NAMES else place
        if any(inner(field.annotation) == (None, False) for _, field, _ in fields(inside)):
            yield from _header(place, info, here)
        yield from _table(inside, place, here)


def _choices(inside: type[Table], short: str) -> Iterator[str]:
    """Yield what may stand in a table of its own instead of the bare text."""
    words = [name for name, _, _ in fields(inside) if name != short]
    yield from _comment(f"or NAME = {{ {short} = ..., and any of: {', '.join(words)} }}")


def _header(place: tuple[str, ...], info: Any, live: bool) -> Iterator[str]:
    yield ""
    yield from _comment(info.description)
    yield _line(f"[{join_key(place)}]", live)


def _key(name: str, info: Any, meta: Meta, path: tuple[str, ...], live: bool) -> Iterator[str]:
    key = ".".join((*path, name))
    example = _EXAMPLES.get(key, meta.example)
    yield from _comment(f"{name}: {_meaning(info, meta)}")
    if example:
        yield _line(f"{name} = {example}", live and (info.is_required() or key in _LIVE))


def _meaning(info: Any, meta: Meta) -> str:
    parts = [info.description]
    if choices := words_of(info.annotation):
        parts.append(f"one of {', '.join(choices)}")
    if meta.kind is not None:
        kind = KINDS[meta.kind]
        parts.append(f"{kind.name.replace('_', ' ')} [{kind.si or '1'}]")
    if meta.default is not None:
        parts.append(f"default {meta.default or 'empty'} ({meta.source})")
    if meta.bound is not None:
        parts.append(f"when absent run from {meta.bound[0]} over {meta.bound[1]} to {meta.bound[2]} ({meta.source})")
    if meta.band is not None:
        parts.append(f"accepted from {meta.band[0]} to {meta.band[1]}")
    return "; ".join(parts)


def _comment(text: str) -> list[str]:
    return textwrap.wrap(text, width=116, initial_indent="#   ", subsequent_indent="#     ")


def _line(text: str, live: bool) -> str:
    return text if live else f"# {text}"
