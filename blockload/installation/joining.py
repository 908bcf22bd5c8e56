"""The connections of an installed block: front pads to the tub, rear pads to the gearbox, second load paths.

A second path is a spring along the line between two points, each fixed in a body; its tension t pulls both together.
On the engine it must enter through an attachment of the block: the nearest one, no farther away than `REACH`.
"""

from __future__ import annotations

import numpy as np
from scipy.linalg import block_diag

from ..arrays import Floats
from ..block.model import AnyBlock, Attachment
from ..case.model import Case, SecondPath
from ..errors import CaseError
from ..response.model import Library
from .compliance import pad_compliance
from .system import Connections

REACH = 0.05  # m; a path's end farther from every attachment would load the block where it does not


def pads(block: AnyBlock, case: Case, kind: str) -> tuple[Attachment, ...]:
    """Return the pads of one face in the order of its studs in the case file."""
    have = {item.name: item for item in block.attachments if item.kind == kind}
    return tuple(have[stud.name] for stud in case.faces[kind].studs if stud.name in have)


def connections(block: AnyBlock, library: Library, case: Case, *, normal: float, tangential: float) -> Connections:
    """Return what joins the block to tub and gearbox for one pad stiffness [N/m].

    A tub matrix knows the studs' three translations alone. Its pads then carry no couple of their own: held against a
    rigid ground in rotation beside a soft one in translation, they would take the face's bending off the studs.
    """
    front, rear = pads(block, case, "front"), pads(block, case, "rear")
    every = (*front, *rear)
    modes = library.rigid_modes()
    on_block = np.zeros((modes.shape[0], 6 * len(every) + len(case.paths)))
    on_gearbox = np.zeros((6, on_block.shape[1]))
    for index, pad in enumerate(every):
        rows, columns = library.rows(pad.kind, pad.name), slice(6 * index, 6 * index + 6)
        on_block[rows, columns] = np.eye(6)
        if pad.kind == "rear":
            on_gearbox[:, columns] = -modes[rows].T
    for index, path in enumerate(case.paths, start=6 * len(every)):
        on_block[:, index], on_gearbox[:, index] = path_columns(path, block, library)
    compliance = block_diag(
        *(pad_compliance(pad, normal, tangential) for pad in every), *(1.0 / path.stiffness for path in case.paths)
    )
    used = np.ones(len(compliance), dtype=bool)
    if case.installation.tub is not None:
        add_tub(compliance, case.installation.tub, len(front))
        used[: 6 * len(front)] = np.tile([True] * 3 + [False] * 3, len(front))
    holding = np.concatenate([np.tile([True] * 3 + [False] * 3, len(every)), np.ones(len(case.paths), dtype=bool)])
    return Connections(
        on_block=on_block[:, used],
        on_gearbox=on_gearbox[:, used],
        compliance=compliance[np.ix_(used, used)],
        holding=holding[used],
    )


def add_tub(compliance: Floats, tub: Floats, count: int) -> None:
    """Add the tub's own compliance at the front studs, from its (3n, 3n) stiffness in stud order, in place.

    Raises
    ------
    CaseError
        Where the matrix has another size, is not symmetric, or does not hold the block.

    """
    where = "[installation] tub"
    if tub.shape != (3 * count, 3 * count):
        raise CaseError(
            where, f"{tub.shape[0]} x {tub.shape[1]}", f"{3 * count} x {3 * count}", "three rows for each front stud"
        )
    if not np.allclose(tub, tub.T, rtol=0.0, atol=1e-6 * np.abs(tub).max()):
        raise CaseError(where, "the matrix is not symmetric", "a symmetric stiffness", "condense the tub again")
    lowest, highest = np.linalg.eigvalsh(tub)[[0, -1]]
    if lowest <= 1e-9 * highest:
        raise CaseError(
            where,
            f"its softest motion has stiffness {lowest:.3g} N/m against {highest:.3g} N/m",
            "positive in every direction, with the tub held elsewhere",
            "hold the tub before condensing it to its studs",
        )
    forces = [6 * stud + axis for stud in range(count) for axis in range(3)]
    compliance[np.ix_(forces, forces)] += np.linalg.inv(tub)


def path_columns(path: SecondPath, block: AnyBlock, library: Library) -> tuple[Floats, Floats]:
    """Return the wrenches unit tension in a path puts on the block's attachments (6A,) and on the gearbox (6,)."""
    line = path.to_at - path.from_at
    length = np.linalg.norm(line)
    where = f"[paths.{path.name}]"
    if length < 1e-6 or path.from_body == path.to_body:
        raise CaseError(where, "both ends are the same", "two points of two bodies", "correct its ends")
    if not 0.0 < path.stiffness < np.inf:
        raise CaseError(where, f"stiffness {path.stiffness:g} N/m", "positive, finite", "correct its stiffness")
    on_block, on_gearbox = np.zeros(6 * len(library.attachments)), np.zeros(6)
    for body, at, sense in ((path.from_body, path.from_at, 1.0), (path.to_body, path.to_at, -1.0)):
        force = sense * line / length
        if body == "gearbox":
            on_gearbox += np.concatenate([force, np.cross(at, force)])
        elif body == "engine":
            seat = nearest_attachment(block, at, where)
            rows = library.rows(seat.kind, seat.name)
            on_block[rows] += np.concatenate([force, np.cross(at - seat.centroid, force)])
    return on_block, on_gearbox


def nearest_attachment(block: AnyBlock, at: Floats, where: str) -> Attachment:
    """Return the attachment whose facets come nearest to a point.

    Raises
    ------
    CaseError
        Where the nearest is farther away than REACH.

    """
    gaps = [float(np.linalg.norm(block.contact(item) - at, axis=1).min()) for item in block.attachments]
    best = int(np.argmin(gaps))
    if gaps[best] > REACH:
        raise CaseError(
            where,
            f"its end on the engine is {gaps[best] * 1e3:.0f} mm from the nearest attachment "
            f"({block.attachments[best].name})",
            f"within {REACH * 1e3:.0f} mm of one",
            "name the face set it is bolted to in [block.attachments.other]",
        )
    return block.attachments[best]
