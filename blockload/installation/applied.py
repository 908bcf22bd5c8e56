"""What the car puts on the block besides its pads: carried masses, loads with a place of their own, the crank.

d'Alembert: a mass m with inertia I about its cg c, moving with a − g at c and angular acceleration α, puts the force
−m(a − g) and the couple −Iα on what carries it. With a0 = a − g at the engine's CG e, a − g at c is
a0 + α×(c − e); the centripetal ω×(ω×r) is left out here and sized by `left_out`.
"""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..block.model import AnyBlock, Attachment
from ..car.model import LoadCases
from ..case.model import Case
from ..errors import CaseError, nearest
from ..response.model import Library


def acceleration_at(cases: LoadCases, case: Case, place: Floats) -> Floats:
    """Return a − g of a point (3,) fixed in the engine, (C, S, 3)."""
    arm = place - case.bodies["engine"].cg
    return cases.engine_acceleration + np.cross(cases.angular_acceleration, arm)


def inertia_wrench(cases: LoadCases, case: Case, *, mass: float, cg: Floats, inertia: Floats, about: Floats) -> Floats:
    """Return the d'Alembert wrench of a mass fixed in the engine, about a point, (C, S, 6)."""
    force = -mass * acceleration_at(cases, case, cg)
    moment = -cases.angular_acceleration @ inertia.T + np.cross(cg - about, force)
    return np.concatenate([force, moment], axis=-1)


def known_wrenches(cases: LoadCases, block: AnyBlock, library: Library, case: Case) -> Floats:
    """Return the wrenches that do not depend on the installation, (C, S, 6A), in the library's order.

    Raises
    ------
    CaseError
        Where a load acts on the engine and no attachment of the block is named for it.

    """
    count, sources = cases.crank_couple.shape
    wrenches = np.zeros((count, sources, 6 * len(library.attachments)))
    for item in block.carried:
        seat = find_attachment(block, item.attachment, f"carried mass {item.name}")
        wrenches[..., library.rows(seat.kind, seat.name)] += inertia_wrench(
            cases, case, mass=item.mass, cg=item.cg, inertia=item.inertia, about=seat.centroid
        )
    for load in cases.engine_loads:
        seat = find_attachment(block, load.attachment, f"load {load.name} on the engine")
        moment = load.moment + np.cross(load.at - seat.centroid, load.force)
        wrenches[..., library.rows(seat.kind, seat.name)] += np.concatenate([load.force, moment], axis=-1)
    if np.any(cases.crank_couple) and case.block is not None:
        seat = find_attachment(block, case.block.carried_on, "crank couple")
        wrenches[..., library.rows(seat.kind, seat.name).start + 3] += cases.crank_couple
    return wrenches


def find_attachment(block: AnyBlock, name: str | None, what: str) -> Attachment:
    """Return the attachment that carries something, one of kind "other" before a pad of the same name.

    Raises
    ------
    CaseError
        Where the block has none of this name.

    """
    matches = [item for item in block.attachments if item.name == name]
    if matches:
        return max(matches, key=lambda item: item.kind == "other")
    known = [item.name for item in block.attachments]
    raise CaseError(
        what,
        "no attachment of the block is named for it" if name is None else f"the block has no attachment {name!r}",
        ", ".join(known),
        "name the attachment that carries it." + (nearest(name, known) if name else ""),
    )


def left_out(cases: LoadCases, block: AnyBlock, case: Case) -> Floats:
    """Return the largest centripetal acceleration ω²r in the block that the rigid linear field leaves out, (C,)."""
    radius = np.linalg.norm(block.outline() - case.bodies["engine"].cg, axis=1).max()
    result: Floats = np.asarray(cases.omega_squared) * radius
    return result
