"""The wrench at each face by several routes: summed ahead of the cut, summed behind it, and off the block's own pads.

Touching at two faces only, the three bodies make each face wrench statically determinate, so the routes must agree;
where they do not, something else carries load or a number is wrong. Both values are printed with their difference.
"""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..car.model import SECTION, LoadCases
from ..car.terms import FACE_LABELS
from ..installation.model import PadLoads
from ..response.model import Library
from .tables import Table, table
from .wording import ABSENT, fixed, plain_name, point

CHAIN = ("tub", "engine", "gearbox")
_SIGNS = np.array((1.0, 1.0, 1.0, 1.0, -1.0, -1.0))


def routes(cases: LoadCases, index: int, library: Library | None = None, pads: PadLoads | None = None) -> Table:
    """Return the section wrench of both faces by every route there is, in one load case."""
    rows = []
    for cut, (name, face) in enumerate(cases.faces.items()):
        ahead = summed(cases, index, CHAIN[: cut + 1], face.reference, FACE_LABELS[cut]) * _SIGNS
        behind = -summed(cases, index, CHAIN[cut + 1 :], face.reference, FACE_LABELS[cut]) * _SIGNS
        block = None
        if library is not None and pads is not None:
            block = pad_sum(library, pads, name, index, face.reference) * _SIGNS * (1.0 if cut == 0 else -1.0)
        for k, component in enumerate(SECTION):
            gap = max(abs(ahead[k] - behind[k]), 0.0 if block is None else abs(ahead[k] - block[k]))
            rows.append(
                (
                    f"{name} {component}",
                    fixed(ahead[k], 4, scale=1e3, sign=True),
                    fixed(behind[k], 4, scale=1e3, sign=True),
                    ABSENT if block is None else fixed(block[k], 4, scale=1e3, sign=True),
                    f"{gap / 1e3:.1e}",
                )
            )
    places = "; ".join(f"{name} {point(face.reference)} m" for name, face in cases.faces.items())
    columns = ("", "summed ahead of the cut", "summed behind it", "off the block's pads", "largest difference")
    note = f"kN and kN·m about {places}."
    return table(f"Face wrenches by their routes: {plain_name(cases.names[index])}", columns, rows, note)


def summed(cases: LoadCases, index: int, bodies: tuple[str, ...], about: Floats, without: str) -> Floats:
    """Sum the free-body lines of some bodies about a point, the cut face left out; force and moment (6,)."""
    total = np.zeros(6)
    for term in cases.terms:
        if term.body in bodies and term.label != without:
            at = np.broadcast_to(term.at, term.force.shape)[index]
            force = term.force[index]
            total += np.concatenate([force, term.moment[index] + np.cross(at - about, force)])
    return total


def pad_sum(library: Library, pads: PadLoads, face: str, index: int, about: Floats) -> Floats:
    """Sum the pad wrenches of one face of the installed block about a point; on the engine, (6,)."""
    weights = pads.weights[pads.middle, index].sum(axis=0)
    total = np.zeros(6)
    for k, (kind, name) in enumerate(library.attachments):
        if kind == face:
            force, moment = weights[library.rows(kind, name)].reshape(2, 3)
            total += np.concatenate([force, moment + np.cross(library.centroids[k] - about, force)])
    return total


def pad_table(cases: LoadCases, library: Library, pads: PadLoads, index: int) -> Table:
    """Return the installed pad forces beside those of a rigid face, in one load case."""
    rows = []
    for name, face in cases.faces.items():
        rigid = face.stud_axial[index].sum(axis=0)
        sign = 1.0 if name == "front" else -1.0
        for k, stud in enumerate(face.studs):
            values = []
            for weights in pads.weights[:, index].sum(axis=1):
                force = weights[library.rows(name, stud)][:3]
                values.append((sign * force[0], float(np.hypot(force[1], force[2]))))
            axial = " / ".join(fixed(a, 2, scale=1e3, sign=True) for a, _ in values)
            shear = " / ".join(fixed(s, 2, scale=1e3) for _, s in values)
            rows.append((f"{name} {stud}", fixed(rigid[k], 2, scale=1e3, sign=True), axial, shear))
    variants = " / ".join(pads.variants)
    note = f"kN; axial + pulled. Installed: {variants} pads."
    columns = ("pad", "axial, rigid face", "axial, installed", "shear, installed")
    return table(f"Pads: {plain_name(cases.names[index])}", columns, rows, note)
