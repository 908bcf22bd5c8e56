"""What changed a face wrench or a stud between two results, source by source.

A face wrench is the sum of its sources (a device, a body's weight and inertia, the crank, ...), each with the wheel
forces and accelerations it calls for, and a rigid face shares each out to its studs. The change of the sum is therefore
the sum of the changes, in one load case that both results have: the one in which the response is largest in either.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np

from ..arrays import Floats
from ..car.model import SECTION
from ..car.studs import rigid_face
from .tables import Table, table
from .wording import SECTION_WORDS, fixed, plain_name

Data = Mapping[str, Any]

_SIGNS = np.array((1.0, 1.0, 1.0, 1.0, -1.0, -1.0))
_NAMED = 5
SHEAR = " shear"
_ROUNDING = 1e-9  # of the response itself


@dataclass(frozen=True, slots=True, kw_only=True)
class Change:
    """The change of one response in one load case, first to second, and the part of each source in it [N, N·m]."""

    face: str
    response: str
    load_case: str
    first: float
    second: float
    parts: Mapping[str, float]


def changes(first: Data, second: Data) -> tuple[Change, ...]:
    """Changes of every section component and every stud's axial and shear force between two results documents."""
    found = []
    for face in ("front", "rear"):
        sides = [_responses(data, face) for data in (first, second)]
        for response in dict.fromkeys(name for name in sides[0] if name in sides[1]):
            change = _governing(face, response, sides[0][response], sides[1][response])
            if change is not None:
                found.append(change)
        found += _shear_changes(face, first, second)
    return tuple(found)


def change_table(first: Data, second: Data) -> Table | None:
    """Return the largest parts of every change; None where nothing changed, or no sources were written."""
    rows = []
    for change in changes(first, second):
        unit = SECTION_WORDS[change.response][0] if change.response in SECTION else "kN"
        plain = change.response in SECTION or change.response.endswith(SHEAR)
        where = change.response if plain else f"{plain_name(change.response)} axial"
        rows.append(
            (
                f"{change.face} {where}",
                plain_name(change.load_case),
                f"{fixed(change.second - change.first, 2, scale=1e3, sign=True)} {unit}",
                _said(change),
            )
        )
    note = (
        "kN and kN·m, B − A, in the load case of both in which the response is largest in either. Parts sum to the "
        "change; each source brings the wheel forces and accelerations that balance it. Studs as on a rigid face."
    )
    columns = ("response", "load case", "B − A", "of that")
    return table("What changed it", columns, rows, note) if rows else None


def _said(change: Change) -> str:
    """The largest parts in words, and what the rest adds up to."""
    ordered = sorted(change.parts.items(), key=lambda item: -abs(item[1]))
    shown = [item for item in ordered[:_NAMED] if abs(item[1]) >= 5.0]  # 0.01 kN as it is printed
    rest = change.second - change.first - sum(value for _, value in shown)
    words = [f"{plain_name(name)} {fixed(value, 2, scale=1e3, sign=True)}" for name, value in shown]
    if abs(rest) >= 5.0:
        words.append(f"others {fixed(rest, 2, scale=1e3, sign=True)}")
    return ", ".join(words)


def _governing(
    face: str, response: str, first: Mapping[str, Mapping[str, float]], second: Mapping[str, Mapping[str, float]]
) -> Change | None:
    """The change in the load case of both where the response is largest in either."""
    sums = {name: (sum(first[name].values()), sum(second[name].values())) for name in first if name in second}
    if not sums:
        return None
    name = max(sums, key=lambda case: max(abs(value) for value in sums[case]))
    before, after = sums[name]
    size = sum(abs(value) for side in (first[name], second[name]) for value in side.values())
    if abs(after - before) <= _ROUNDING * size:
        return None
    a, b = first[name], second[name]
    parts = {source: b.get(source, 0.0) - a.get(source, 0.0) for source in dict.fromkeys((*a, *b))}
    return Change(face=face, response=response, load_case=name, first=before, second=after, parts=parts)


def _responses(data: Data, face: str) -> dict[str, dict[str, dict[str, float]]]:
    """Value by response, load case and source of one face."""
    found: dict[str, dict[str, dict[str, float]]] = {}
    for name, case in data["load_cases"].items():
        written = case.get("faces", {}).get(face, {})
        if not written.get("sources"):
            continue
        wrenches = np.array(list(written["sources"].values()), dtype=float)
        for response, values in _values(face, written, wrenches):
            found.setdefault(response, {})[name] = dict(zip(written["sources"], values.tolist(), strict=True))
    return found


def _shear_changes(face: str, first: Data, second: Data) -> Iterator[Change]:
    """Changes of every stud's resultant shear, in the load case of both in which it is largest.

    A length is not linear in its parts, but |b| − |a| = (b − a)·(a + b) / (|a| + |b|) is exact, and linear in b − a.
    """
    sides = [_shears(data, face) for data in (first, second)]
    for stud in (name for name in sides[0] if name in sides[1]):
        a, b = sides[0][stud], sides[1][stud]
        sums = {case: (sum(a[case].values()), sum(b[case].values())) for case in a if case in b}
        sizes = {case: [float(np.linalg.norm(total)) for total in pair] for case, pair in sums.items()}
        name = max(sizes, key=lambda case: max(sizes[case]), default=None)
        if name is None or abs(sizes[name][1] - sizes[name][0]) <= _ROUNDING * max(sizes[name]):
            continue
        along = (sums[name][0] + sums[name][1]) / sum(sizes[name])
        none = np.zeros(2)
        parts = {
            source: float((b[name].get(source, none) - a[name].get(source, none)) @ along)
            for source in dict.fromkeys((*a[name], *b[name]))
        }
        before, after = sizes[name]
        yield Change(face=face, response=stud + SHEAR, load_case=name, first=before, second=after, parts=parts)


def _shears(data: Data, face: str) -> dict[str, dict[str, dict[str, Floats]]]:
    """Shear (2,) of every stud by load case and source."""
    found: dict[str, dict[str, dict[str, Floats]]] = {}
    for name, case in data["load_cases"].items():
        written = case.get("faces", {}).get(face, {})
        if not written.get("sources"):
            continue
        at = np.array([stud["at"] for stud in written["studs"].values()], dtype=float)
        shear = rigid_face(at, np.array(list(written["sources"].values()), dtype=float))[1]
        for stud, values in zip(written["studs"], shear.transpose(1, 0, 2), strict=True):
            found.setdefault(stud, {})[name] = dict(zip(written["sources"], values, strict=True))
    return found


def _values(face: str, written: Data, wrenches: Floats) -> Iterator[tuple[str, Floats]]:
    """Every response with its value for each source (S,), from wrenches (S, 6) on the engine."""
    pull = 1.0 if face == "front" else -1.0
    for component, values in zip(SECTION, (wrenches * _SIGNS * pull).T, strict=True):
        yield component, values
    at = np.array([stud["at"] for stud in written["studs"].values()], dtype=float)
    for stud, values in zip(written["studs"], pull * rigid_face(at, wrenches)[0].T, strict=True):
        yield stud, values
