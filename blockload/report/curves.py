"""What diagrams and free-body tables show, as CSV: sections along the car, free bodies, the envelope's boundary."""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable

import numpy as np

from ..arrays import Floats
from ..car.envelope import Envelope
from ..car.limits import LIMITS
from ..car.model import BODIES, SECTION, LoadCases, Term
from ..car.stations import reference_line, section_along, stations

_WRENCH = ("F_x [N]", "F_y [N]", "F_z [N]", "M_x [N*m]", "M_y [N*m]", "M_z [N*m]")
_UNITS = ("N", "N", "N", "N*m", "N*m", "N*m")


def along_csv(cases: LoadCases) -> str:
    """Return section wrenches along the car: a row per load case and station, two stations at every step."""
    x = stations(cases)
    values, line = section_along(cases, x), reference_line(cases, x)
    faces = {float(face.reference[0]): f"{name} face" for name, face in cases.faces.items()}
    heads = ("load case", "x [m]", "about y [m]", "about z [m]", *_heads(), "face")
    rows = (
        (name, *(f"{c:.6g}" for c in line[k]), *(f"{v + 0.0:.6g}" for v in values[i, k]), faces.get(float(x[k]), ""))
        for i, name in enumerate(cases.names)
        for k in range(len(x))
    )
    return _csv(heads, rows)


def free_bodies_csv(cases: LoadCases) -> str:
    """Return every force on every body of every load case: a row per load case and line that is not nothing."""
    heads = ("load case", "body", "line", "x [m]", "y [m]", "z [m]", *_WRENCH)
    rows = (
        (name, term.body, term.label, *(f"{v + 0.0:.9g}" for v in (*at[i], *term.force[i], *term.moment[i])))
        for i, name in enumerate(cases.names)
        for body in BODIES
        for term, at in _lines(cases, body)
        if term.force[i].any() or term.moment[i].any()
    )
    return _csv(heads, rows)


def _lines(cases: LoadCases, body: str) -> Iterable[tuple[Term, Floats]]:
    return ((term, np.broadcast_to(term.at, term.force.shape)) for term in cases.terms if term.body == body)


def envelope_csv(found: Envelope) -> str:
    """Return the boundary of grip and power: a row per speed and heading."""
    heads = ("speed [m/s]", "heading from straight ahead to the left [deg]", "a_x [m/s^2]", "a_y [m/s^2]", "limit")
    rows = (
        (
            f"{speed:.6g}",
            f"{np.degrees(heading):.6g}",
            *(f"{a + 0.0:.6g}" for a in found.acceleration[v, h]),
            LIMITS[found.limit[v, h]],
        )
        for v, speed in enumerate(found.speed)
        for h, heading in enumerate(found.heading)
    )
    return _csv(heads, rows)


def _heads() -> Iterable[str]:
    return (f"{component} [{unit}]" for component, unit in zip(SECTION, _UNITS, strict=True))


def _csv(heads: Iterable[str], rows: Iterable[Iterable[str]]) -> str:
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(tuple(heads))
    writer.writerows(rows)
    return text.getvalue()
