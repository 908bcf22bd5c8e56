"""The installed block as one small symmetric system.

Connections (pads, second paths) carry forces x. H (6A, c) gives the wrench each puts on the block's attachments,
H_g (6, c) the wrench about the car's origin it puts on the gearbox; the tub is ground. By virtual work the opening
of the connections is Hᵀd + H_gᵀq_g, with d = F(Hx + w) + Φq + d_T the motion of the attachments. Closing every
connection over its own compliance C, with both bodies in balance, is

    [ HᵀFH + C   HᵀΦ   H_gᵀ ] [ x   ]     [ Hᵀ(F w + d_T)        ]
    [ ΦᵀH        0     0    ] [ q   ] = − [ Φᵀw + block's own    ]
    [ H_g        0     0    ] [ q_g ]     [ gearbox's own        ]

factored once per stiffness, all load cases and sources as columns.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.linalg import lu_factor, lu_solve

from ..arrays import Floats
from ..errors import SolveError

MECHANISM = 1e-4  # smallest over largest singular value of the rigid motions seen by the connections


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Connections:
    """What joins the block to tub and gearbox: axes c (forces), A (attachments).

    on_block (6A, c), on_gearbox (6, c): H and H_g of the module docstring; compliance (c, c);
    holding (c,): True for a component that may be counted on to hold a body (a force, not a pad's own bending).
    """

    on_block: Floats
    on_gearbox: Floats
    compliance: Floats
    holding: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Solution:
    """Forces (c, k), motion of block and gearbox (6, k) about the car's origin, and the relative residual."""

    forces: Floats
    block_motion: Floats
    gearbox_motion: Floats
    residual: float


def solve(
    connections: Connections,
    flexibility: Floats,
    modes: Floats,
    *,
    wrenches: Floats,
    own_motion: Floats,
    block_load: Floats,
    gearbox_load: Floats,
) -> Solution:
    """Solve the installed system for k columns at once.

    Parameters
    ----------
    connections : Connections
        What joins the block to tub and gearbox.
    flexibility, modes : array, shape (6A, 6A) and (6A, 6)
        F and Φ of the block's attachments.
    wrenches : array, shape (6A, k)
        Known wrenches on the attachments.
    own_motion : array, shape (6A, k)
        Free motion of the attachments (heat).
    block_load, gearbox_load : array, shape (6, k)
        What else acts on block and gearbox, about the car's origin.

    """
    H, Hg, c = connections.on_block, connections.on_gearbox, connections.compliance.shape[0]
    refuse_mechanism(connections, modes)
    size = c + 12
    matrix = np.zeros((size, size))
    matrix[:c, :c] = H.T @ flexibility @ H + connections.compliance
    matrix[c : c + 6, :c] = modes.T @ H
    matrix[c + 6 :, :c] = Hg
    matrix[:c, c:] = matrix[c:, :c].T
    right = -np.vstack([H.T @ (flexibility @ wrenches + own_motion), modes.T @ wrenches + block_load, gearbox_load])
    scale = _scale(matrix, c)
    scaled = matrix * np.outer(scale, scale)
    scaled_right = right * scale[:, None]
    factors = lu_factor(scaled)
    unknown = lu_solve(factors, scaled_right)
    unknown += lu_solve(factors, scaled_right - scaled @ unknown)
    residual = _residual(scaled, unknown, scaled_right)
    unknown *= scale[:, None]
    return Solution(
        forces=unknown[:c], block_motion=unknown[c : c + 6], gearbox_motion=unknown[c + 6 :], residual=residual
    )


def _scale(matrix: Floats, c: int) -> Floats:
    """Return the symmetric scaling that brings compliances and lever arms to order one."""
    scale = np.ones(matrix.shape[0])
    scale[:c] = 1.0 / np.sqrt(np.diag(matrix)[:c])
    levers = np.linalg.norm(matrix[c:, :c] * scale[:c], axis=1)
    scale[c:] = 1.0 / levers
    return scale


def _residual(matrix: Floats, unknown: Floats, right: Floats) -> float:
    size = np.abs(matrix) @ np.abs(unknown) + np.abs(right)
    worst = np.abs(matrix @ unknown - right).max(initial=0.0)
    return float(worst / max(size.max(initial=0.0), np.finfo(float).tiny))


def refuse_mechanism(connections: Connections, modes: Floats) -> None:
    """Refuse an installation that leaves a rigid motion of block or gearbox free, and name the motion.

    Only forces count: a motion resisted by nothing but the bending of single pads is refused as well.

    Raises
    ------
    SolveError
        With the motion that nothing holds.

    """
    held = connections.holding.astype(bool)
    seen = np.hstack([connections.on_block.T @ modes, connections.on_gearbox.T])[held]
    centre, length = _centre(connections, modes)
    to_centre = np.kron(np.eye(2), _shift(centre))
    seen = seen @ to_centre * np.tile([1.0, 1.0, 1.0, *[1.0 / length] * 3], 2)
    _, sizes, motions = np.linalg.svd(seen, full_matrices=True)
    sizes = np.pad(sizes, (0, 12 - sizes.size))
    free = int((sizes <= MECHANISM * sizes[0]).sum())
    if free:
        more = f" (and {free - 1} more motions)" if free > 1 else ""
        raise SolveError(
            "installation",
            f"nothing holds {_named(motions[-1], centre, length)}{more}",
            "pads and paths that hold block and gearbox in all six directions",
            "at least three studs not in one line on each face, or a second load path that holds this motion",
        )


def _centre(connections: Connections, modes: Floats) -> tuple[Floats, float]:
    """Return the mean place of the connected attachments and their spread."""
    rows = np.abs(connections.on_block).sum(axis=1).reshape(-1, 6).any(axis=1)
    blocks = modes.reshape(-1, 6, 6)[rows]
    if not len(blocks):
        return np.zeros(3), 1.0
    places = np.stack([blocks[:, 1, 5], blocks[:, 2, 3], blocks[:, 0, 4]], axis=1)
    centre = places.mean(axis=0)
    spread = float(np.sqrt(((places - centre) ** 2).sum(axis=1).mean()))
    return centre, spread or 1.0


def _shift(centre: Floats) -> Floats:
    """Return the (6, 6) map from motion about `centre` to motion about the origin."""
    x, y, z = centre
    shift = np.eye(6)
    shift[:3, 3:] = [[0.0, -z, y], [z, 0.0, -x], [-y, x, 0.0]]
    return shift


def _named(motion: Floats, centre: Floats, length: float) -> str:
    parts = []
    for body, six in (("the engine", motion[:6]), ("the gearbox", motion[6:])):
        moving, turning = six[:3], six[3:]
        if np.linalg.norm(six) < 0.05 * np.linalg.norm(motion):
            continue
        rotates = np.linalg.norm(turning) > 1e-3 * np.linalg.norm(moving)
        axis = turning if rotates else moving
        axis = axis / np.linalg.norm(axis)
        text = f"{'rotation of' if rotates else 'movement of'} {body} {'about' if rotates else 'along'} {_text(axis)}"
        if rotates:
            rate = turning / length
            place = centre + np.cross(rate, moving) / (rate @ rate)
            text += f" through {_text(place)} m"
        parts.append(text)
    return " with ".join(parts)


def _text(values: Floats) -> str:
    return "(" + ", ".join(f"{value + 0.0:.3f}" for value in np.round(values, 3)) + ")"
