"""Section wrenches along the car, for diagrams: everything behind a station, about a reference line.

With S = sum F and Q = sum (r - r_ref) x F + M of all that acts behind the station,
    N = -S_x, V_y = -S_y, V_z = -S_z, T = -Q_x, M_sag = Q_y, M_lat = Q_z.
A load enters at its own x, but never outside the part of the car that its body spans: the tub ahead of the front
face, the engine between the faces, the gearbox behind the rear face. The reference line joins the centroids of the two
stud patterns and stays level with them beyond. At a face the values are therefore the face's own section wrench.
The crank's couples enter the block evenly from the front to the rear face, as the mean over the cylinders does.
"""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from .model import LoadCases, Term
from .terms import CRANK_LABELS, FACE_LABELS

_CHAIN = ("tub", "engine", "gearbox")


def section_along(cases: LoadCases, x: Floats) -> Floats:
    """Section wrenches (C, X, 6) of all load cases at stations x (X,) [m], in the order of SECTION."""
    x = np.asarray(x, dtype=float)
    reference = reference_line(cases, x)
    behind = np.zeros((len(cases.names), len(x), 6))
    for term in cases.terms:
        if term.body not in _CHAIN or term.label in FACE_LABELS:
            continue
        share = _share_behind(cases, term, x)
        at = np.broadcast_to(term.at, term.force.shape)[:, None]
        force = np.broadcast_to(term.force[:, None], (*behind.shape[:2], 3))
        moment = term.moment[:, None] + np.cross(at - reference, force)
        behind += share[..., None] * np.concatenate([force, moment], axis=-1)
    return behind * (-1.0, -1.0, -1.0, -1.0, 1.0, 1.0)


def reference_line(cases: LoadCases, x: Floats) -> Floats:
    """Points (X, 3) that the moments of a section are taken about."""
    rear, front = cases.faces["rear"].reference, cases.faces["front"].reference
    line = [np.interp(x, (rear[0], front[0]), (rear[k], front[k])) for k in (1, 2)]
    return np.column_stack([x, *line])


def stations(cases: LoadCases, margin: float = 0.05) -> Floats:
    """Stations (X,) on both sides of every step of the diagrams, in falling order.

    `margin` [m] is how far they go beyond the first and the last load.
    """
    ends = [cases.faces[name].reference[0] for name in ("front", "rear")]
    steps = {float(end) for end in ends}
    for term in cases.terms:
        if term.body in _CHAIN and term.label not in FACE_LABELS:
            steps |= set(np.unique(_entry(cases, term)).tolist())
    steps |= {max(steps) + margin, min(steps) - margin}
    here = np.array(sorted(steps, reverse=True))
    return np.sort(np.concatenate([here, np.nextafter(here, np.inf)]))[::-1]


def _share_behind(cases: LoadCases, term: Term, x: Floats) -> Floats:
    """Share (C or 1, X) of a load that acts behind each station."""
    front, rear = cases.faces["front"].reference[0], cases.faces["rear"].reference[0]
    if term.body == "engine" and term.label in CRANK_LABELS:
        ramp: Floats = np.clip((x - rear) / (front - rear), 0.0, 1.0)
        return ramp[None]
    return np.where(_entry(cases, term)[:, None] < x, 1.0, 0.0)


def _entry(cases: LoadCases, term: Term) -> Floats:
    """Where a load enters the chain of bodies, (C or 1,); a body's part ends just short of the face ahead of it."""
    front, rear = cases.faces["front"].reference[0], cases.faces["rear"].reference[0]
    span = {
        "tub": (front, np.inf),
        "engine": (rear, np.nextafter(front, -np.inf)),
        "gearbox": (-np.inf, np.nextafter(rear, -np.inf)),
    }
    entry: Floats = np.clip(np.atleast_2d(term.at)[:, 0], *span[term.body])
    return entry
