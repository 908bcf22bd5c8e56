"""How stiff the block is between its faces, as a piece of the chassis would be measured.

Each face is a rigid massless plane that follows its pads' average translations; the pads' own rotations stay free. A
unit couple on the rear plane against its equal on the front plane turns one against the other with every other
component free: torsion about x, vertical bending about y, lateral bending about z. Stiffness = couple / rotation.
With the pads' compliance between block and plane it is what the car feels; without, what the block alone brings.
"""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from ..arrays import Floats
from ..block.model import AnyBlock, Attachment
from ..car.model import LoadCases
from ..case.model import Case
from ..installation.compliance import pad_stiffness, stiffness_variants
from ..installation.joining import pads as pads_of
from ..installation.model import PadLoads
from ..installation.system import Connections, solve
from ..response.model import Library
from .model import Margin

MODES = ("torsion", "bending_vertical", "bending_lateral")
UNIT = "_Nm_per_rad"


def face_to_face(block: AnyBlock, library: Library, case: Case, pads: tuple[float, float] | None = None) -> Floats:
    """Return torsional, vertical and lateral bending stiffness between the faces, (3,) [N·m/rad].

    Parameters
    ----------
    block, library, case : Block, Library, Case
        The block and the studs of its faces.
    pads : (float, float), optional
        Normal and tangential stiffness of a pad [N/m]; None for pads without compliance of their own.

    """
    joined = _planes(block, library, case, pads)
    rows = joined.on_block.shape[0]
    solution = solve(
        joined,
        library.flexibility,
        library.rigid_modes(),
        wrenches=np.zeros((rows, 3)),
        own_motion=np.zeros((rows, 3)),
        block_load=np.zeros((6, 3)),
        gearbox_load=np.eye(6)[:, 3:],
    )
    result: Floats = 1.0 / np.diag(solution.gearbox_motion[3:])
    return result


def _planes(block: AnyBlock, library: Library, case: Case, stiffness: tuple[float, float] | None) -> Connections:
    if stiffness is None and block.rigid_faces:
        return _rigid_planes(block, library, case)
    every = (*pads_of(block, case, "front"), *pads_of(block, case, "rear"))
    modes = library.rigid_modes()
    on_block = np.zeros((modes.shape[0], 3 * len(every)))
    on_gearbox = np.zeros((6, 3 * len(every)))
    compliance = np.zeros((3 * len(every), 3 * len(every)))
    for index, pad in enumerate(every):
        columns = slice(3 * index, 3 * index + 3)
        start = library.rows(pad.kind, pad.name).start
        on_block[start : start + 3, columns] = np.eye(3)
        if pad.kind == "rear":
            on_gearbox[:, columns] = -modes[start : start + 3].T
        if stiffness is not None:
            compliance[columns, columns] = _translation(pad, *stiffness)
    holding = np.ones(3 * len(every), dtype=bool)
    return Connections(on_block=on_block, on_gearbox=on_gearbox, compliance=compliance, holding=holding)


def _rigid_planes(block: AnyBlock, library: Library, case: Case) -> Connections:
    """Planes on faces that are rigid already: one pad of each carries everything, all others would say the same."""
    modes = library.rigid_modes()
    on_block = np.zeros((modes.shape[0], 12))
    on_gearbox = np.zeros((6, 12))
    for columns, kind in ((slice(0, 6), "front"), (slice(6, 12), "rear")):
        rows = library.rows(kind, pads_of(block, case, kind)[0].name)
        on_block[rows, columns] = np.eye(6)
        if kind == "rear":
            on_gearbox[:, columns] = -modes[rows].T
    return Connections(
        on_block=on_block, on_gearbox=on_gearbox, compliance=np.zeros((12, 12)), holding=np.ones(12, dtype=bool)
    )


def _translation(pad: Attachment, normal: float, tangential: float) -> Floats:
    return np.asarray(np.linalg.inv(pad_stiffness(pad, normal, tangential)[:3, :3]), dtype=np.float64)


def stiffnesses(block: AnyBlock, library: Library, case: Case) -> dict[str, float]:
    """Return the block's stiffnesses alone and with every pad stiffness, keys ending in the SI unit."""
    found = {name + UNIT: value for name, value in _named(face_to_face(block, library, case))}
    for label, normal, tangential in stiffness_variants(case.installation):
        values = face_to_face(block, library, case, (normal, tangential))
        found |= {f"{name}_with_{label}_pads{UNIT}": value for name, value in _named(values)}
    return found


def _named(values: Floats) -> list[tuple[str, float]]:
    return [(name, float(value)) for name, value in zip(MODES, values, strict=True)]


def stiffness_margins(found: Mapping[str, float], case: Case, *, held: float = 1.0) -> tuple[Margin, ...]:
    """Return the margins of the block's own stiffness against torsion_min and bending_min where the case has them.

    `held` is how much stiffer in torsion the block may be than found: the better end of the band.
    """
    limits = {
        "torsion": case.limits.torsion_min,
        "bending_vertical": case.limits.bending_min,
        "bending_lateral": case.limits.bending_min,
    }
    better = {"torsion": held}
    return tuple(
        _margin(name, found[name + UNIT], limit, better.get(name, 1.0))
        for name, limit in limits.items()
        if limit is not None
    )


def _margin(name: str, value: float, limit: float, better: float) -> Margin:
    margin = value / limit - 1.0
    return Margin(
        criterion=f"{name.replace('_', ' ')} stiffness",
        place="between the faces",
        at=(0.0, 0.0, 0.0),
        load_case="unit couple",
        applied=limit,
        allowable=value,
        unit="N·m/rad",
        factor=1.0,
        margin=margin,
        band=(margin, better * value / limit - 1.0),
        trust="converged",
        causes=(),
        method="block alone, rigid massless planes on the pads' average translations, without pad compliance",
    )


def rear_face_motion(cases: LoadCases, pads: PadLoads) -> dict[str, tuple[float, ...]]:
    """Return how far the rear face moves against the tub: translation [m] and rotation [rad] per load case.

    That of the gearbox's flange at the studs' centroid, with the middle pad stiffness.
    """
    motion = pads.gearbox_motion[pads.middle].sum(axis=1)
    moved = motion[:, :3] + np.cross(motion[:, 3:], cases.faces["rear"].reference)
    both = np.concatenate([moved, motion[:, 3:]], axis=1)
    return {name: tuple(float(value) for value in row) for name, row in zip(cases.names, both, strict=True)}
