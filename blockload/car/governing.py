"""Which load case governs each response: no two need have the same one.

Forces on the faces and studs are linear in the loads, so each has its own extreme somewhere among the vertices of the
envelope or the situations of the catalogue; the worst car-level acceleration is not where a given stud is worst.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np

from ..arrays import Floats, Ints
from ..case.model import FACES
from .model import SECTION, LoadCases


@dataclass(frozen=True, slots=True, kw_only=True)
class Governing:
    """The extreme of one response: section component, or a stud's tension, compression or shear [N, N·m].

    `second` is the next load case and its value, None where there is only one.
    """

    face: str
    place: str
    response: str
    value: float
    load_case: str
    second: tuple[str, float] | None


def in_group(cases: LoadCases, group: str | None) -> Ints:
    """Indices (K,) of the load cases of one group, such as "envelope"; None for the case file's own."""
    return np.array([c for c, name in enumerate(cases.group) if name == group], dtype=np.int64)


def governing(cases: LoadCases, chosen: Sequence[int] | Ints | None = None) -> tuple[Governing, ...]:
    """The governing load case of every section component (both ends) and every stud, among all or the chosen ones."""
    index = np.arange(len(cases.names)) if chosen is None else np.asarray(chosen, dtype=np.int64)
    if not len(index):
        return ()
    return tuple(row for face in FACES for row in (*_section(cases, face, index), *_studs(cases, face, index)))


def _section(cases: LoadCases, face: str, index: Ints) -> Iterator[Governing]:
    values = cases.section(face)[index]
    for k, component in enumerate(SECTION):
        yield _extreme(cases, index, values[:, k], 1.0, (face, component, "greatest"))
        yield _extreme(cases, index, values[:, k], -1.0, (face, component, "least"))


def _studs(cases: LoadCases, face: str, index: Ints) -> Iterator[Governing]:
    loads = cases.faces[face]
    axial = loads.stud_axial.sum(axis=1)[index]
    shear = np.linalg.norm(loads.stud_shear.sum(axis=1)[index], axis=-1)
    for k, stud in enumerate(loads.studs):
        yield _extreme(cases, index, axial[:, k], 1.0, (face, stud, "tension"))
        yield _extreme(cases, index, axial[:, k], -1.0, (face, stud, "compression"))
        yield _extreme(cases, index, shear[:, k], 1.0, (face, stud, "shear"))


def _extreme(cases: LoadCases, index: Ints, values: Floats, sign: float, what: tuple[str, str, str]) -> Governing:
    order = np.argsort(-sign * values, kind="stable")[:2]
    face, place, response = what
    second = None if len(order) < 2 else (cases.names[index[order[1]]], float(values[order[1]]))
    return Governing(
        face=face,
        place=place,
        response=response,
        value=float(values[order[0]]),
        load_case=cases.names[index[order[0]]],
        second=second,
    )
