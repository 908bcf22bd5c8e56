"""Tables of one load case in full, and of the envelope: what pictures draw, for the console."""

from __future__ import annotations

import numpy as np

from ..car.envelope import Envelope, envelope
from ..car.limits import LIMITS
from ..car.model import SECTION, LoadCases
from ..car.stations import section_along, stations
from ..case.model import Case
from ..errors import CaseError, nearest
from . import tables
from .tables import Table, table
from .wording import fixed, plain_name

_GRAVITY = 9.80665


def one_case(cases: LoadCases, name: str) -> tuple[Table, ...]:
    """Return the sections along the car and the free bodies of one load case; CaseError for an unknown one."""
    if name not in cases.names:
        raise CaseError("--show", f"{name!r} is no load case", ", ".join(cases.names), nearest(name, cases.names))
    index = cases.names.index(name)
    return (_along(cases, index), *tables.free_bodies(cases, index))


def _along(cases: LoadCases, index: int) -> Table:
    """Sections at the steps along the car: two rows at a place where a load enters."""
    x = stations(cases)
    values = section_along(cases, x)[index]
    faces = {float(face.reference[0]): f"{name} face" for name, face in cases.faces.items()}
    moved = np.abs(np.diff(values, axis=0)).max(axis=1) > 1e-9 * max(float(np.abs(values).max()), 1e-9)
    kept = [0, *(int(k) + 1 for k in np.flatnonzero(moved)), *(k for k in range(len(x)) if float(x[k]) in faces)]
    rows = [
        (fixed(float(x[k]), 3), *(fixed(v, 2, scale=1e3, sign=True) for v in values[k]), faces.get(float(x[k]), ""))
        for k in sorted(set(kept))
    ]
    note = "kN and kN·m of what acts behind each place, about the line through the centroids of both faces' studs."
    title = f"Along the car: {plain_name(cases.names[index])}"
    return table(title, ("x, m", *SECTION, ""), rows, note)


def envelope_tables(case: Case) -> tuple[Table, ...]:
    """Return the ends of the boundary of grip and power at every speed, for a case that asks for it."""
    if case.envelope is None:
        return ()
    found = envelope(case)
    rows = [(fixed(float(speed), 1), *_ends(found, v)) for v, speed in enumerate(found.speed)]
    columns = ("speed, m/s", "forward, g", "limit", "braking, g", "limit ", "across, g", "limit  ")
    return (table("Envelope of grip and power", columns, rows, "Ends of the boundary; its vertices are load cases."),)


def _ends(found: Envelope, v: int) -> tuple[str, ...]:
    along, across = found.acceleration[v].T
    cells: list[str] = []
    for values in (along, -along, np.abs(across)):
        h = int(values.argmax())
        cells += [fixed(float(values[h]) / _GRAVITY, 2), LIMITS[found.limit[v, h]]]
    return tuple(cells)
