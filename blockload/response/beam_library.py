"""The response library of a beam: unit wrenches through rigid arms on a free chain of Timoshenko elements.

The same steps as for a solid, dense and small: unit loads P at the nodes, balanced by the beam's own inertia,
f̂ = P − MΦ(ΦᵀMΦ)⁻¹ΦᵀP, K u = f̂ with one node held (its reactions must vanish), rigid part of u removed, flexibility
F = Pᵀu. Forces at the ends of an element, k u + m a, are those of its sections exactly, d'Alembert's load along it
included; stress there follows from the section. A uniform rise of temperature makes a free beam grow by α r and stays
without stress.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import Floats, frozen
from ..block.beam import BeamBlock
from .model import Library
from .timoshenko import assembled, mass, rigid_arm, stiffness


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Chain:
    """The elements (n, 12, 12), their sums (6N, 6N), rigid modes (6N, 6) about the cg and ΦᵀMΦ (6, 6)."""

    k: Floats
    m: Floats
    K: Floats
    M: Floats
    modes: Floats
    inertia: Floats


def respond_beam(block: BeamBlock) -> Library:
    """Return the response library of a beam; it takes milliseconds, so nothing is cached."""
    chain = _chain(block)
    P = _at_nodes(block)
    acceleration, balanced, motion = _solved(chain, P)
    gap = chain.K @ motion - balanced
    motion -= chain.modes @ np.linalg.solve(chain.inertia, chain.modes.T @ chain.M @ motion)
    raw = P.T @ motion
    return _library(block, chain, motion, acceleration, raw, _checks(chain, motion, balanced, gap, raw))


def _solved(chain: Chain, P: Floats) -> tuple[Floats, Floats, Floats]:
    """Rigid acceleration (6, k), balanced loads and motion (6N, k), the first node held."""
    acceleration = np.asarray(np.linalg.solve(chain.inertia, chain.modes.T @ P), dtype=np.float64)
    balanced: Floats = P - chain.M @ chain.modes @ acceleration
    motion = np.zeros_like(P)
    motion[6:] = np.linalg.solve(chain.K[6:, 6:], balanced[6:])
    return acceleration, balanced, motion


def middle_cut(block: BeamBlock, wrenches: Floats) -> tuple[Floats, Floats]:
    """Return what the front part exerts on the rear part at mid-length about y = z = 0 there, (k, 6) twice.

    For wrenches (k, 6A) on the attachments: from the element's forces, and from loads and inertia behind it.
    """
    chain = _chain(block)
    P = _at_nodes(block) @ wrenches.T
    acceleration, _, motion = _solved(chain, P)
    node = len(block.x) // 2
    found = _forces(chain, motion, acceleration)[node - 1, 1]
    rows = 6 * np.arange(node)[:, None] + np.arange(12)
    inertia = chain.m[:node] @ (chain.modes @ acceleration)[rows]
    arms = np.zeros((len(block.x), 3))
    arms[:, 0] = block.x - block.x[node]
    to_cut = rigid_arm(arms).reshape(-1, 6)
    expected = np.einsum("nri,nrk->ik", to_cut[rows], inertia) - to_cut[: 6 * node].T @ P[: 6 * node]
    return found.T, expected.T


def _chain(block: BeamBlock) -> Chain:
    length = np.diff(block.x)
    ends = np.column_stack([np.arange(len(length)), np.arange(1, len(length) + 1)])
    k = stiffness(length, block.elastic)
    m = mass(length, block.elastic, block.per_length)
    places = np.zeros((len(block.x), 3))
    places[:, 0] = block.x
    modes = rigid_arm(places - block.cg).reshape(-1, 6)
    M = assembled(ends, m, len(block.x))
    return Chain(k=k, m=m, K=assembled(ends, k, len(block.x)), M=M, modes=modes, inertia=modes.T @ M @ modes)


def nodes_of(block: BeamBlock) -> list[int]:
    """Return the node each attachment's arm starts from: the face's, or for a place the nearest along x."""
    ends = {"rear": 0, "front": len(block.x) - 1}
    return [ends.get(item.kind, int(np.abs(block.x - item.centroid[0]).argmin())) for item in block.attachments]


def _at_nodes(block: BeamBlock) -> Floats:
    """Nodal loads (6N, 6A) of the unit wrenches."""
    P = np.zeros((len(block.x), 6, len(block.attachments), 6))
    for index, (item, node) in enumerate(zip(block.attachments, nodes_of(block), strict=True)):
        P[node, :, index] = rigid_arm(item.centroid - np.array([block.x[node], 0.0, 0.0])).T
    return P.reshape(6 * len(block.x), -1)


def _checks(chain: Chain, motion: Floats, balanced: Floats, gap: Floats, raw: Floats) -> dict[str, float]:
    tiny = np.finfo(float).tiny
    size = np.maximum(np.abs(balanced).max(axis=0), tiny)
    energy = np.einsum("ij,ij->j", motion, chain.K @ motion)
    scale = np.sqrt(np.outer(np.diag(raw), np.diag(raw)))
    relief = np.abs(chain.modes.T @ balanced) / np.outer(np.abs(chain.modes).sum(axis=0), size)
    return {
        "residual": float((np.abs(gap[6:]).max(axis=0) / size).max()),
        "reaction": float((np.abs(gap[:6]).max(axis=0) / size).max()),
        "relief": float(relief.max()),
        "symmetry": float((np.abs(raw - raw.T) / scale).max()),
        "unit energy": float(np.abs(energy / np.diag(raw) - 1.0).max()),
    }


def _forces(chain: Chain, motion: Floats, acceleration: Floats) -> Floats:
    count = len(chain.k)
    rows = 6 * np.arange(count)[:, None] + np.arange(12)
    force: Floats = chain.k @ motion[rows] + chain.m @ (chain.modes @ acceleration)[rows]
    force[:, :6] *= -1.0
    return force.reshape(count, 2, 6, -1)


def _library(
    block: BeamBlock, chain: Chain, motion: Floats, acceleration: Floats, raw: Floats, checks: dict[str, float]
) -> Library:
    arms = np.array([item.centroid for item in block.attachments]) - block.cg
    growth = block.materials[block.volumes[0]].thermal_expansion
    thermal = np.zeros((len(arms), 6))
    thermal[:, :3] = growth * arms
    points, moved = _fibres(block, motion)
    heat = growth * (points - block.cg)
    stress = block.recovery @ _forces(chain, motion, acceleration)[:, :, None]
    full = np.zeros((len(points), 6, motion.shape[1] + 1))
    full[:, [0, 3, 5], :-1] = stress.reshape(len(points), 3, motion.shape[1])
    count = np.arange(len(points))
    return Library(
        key="beam",
        attachments=tuple((item.kind, item.name) for item in block.attachments),
        volumes=block.volumes,
        centroids=frozen([item.centroid for item in block.attachments]),
        mass=float(chain.inertia[0, 0]),
        cg=block.cg,
        inertia=frozen(chain.inertia[3:, 3:]),
        flexibility=frozen((raw + raw.T) / 2),
        thermal_motion=frozen(thermal.reshape(-1, 1)),
        motion=frozen(np.hstack([moved, heat.reshape(-1, 1)])),
        surface_nodes=frozen(count, np.int64),
        surface_points=frozen(points),
        surface_triangles=frozen(np.zeros((0, 3)), np.int64),
        triangle_volume=frozen(np.zeros(0), np.int64),
        entry_node=frozen(count, np.int64),
        entry_volume=frozen(np.zeros(len(points)), np.int64),
        stress=frozen(full),
        checks=checks,
        solver="beam",
        from_cache=False,
    )


def _fibres(block: BeamBlock, motion: Floats) -> tuple[Floats, Floats]:
    """Places (m, 3) of the fibres at both ends of every element, and their motion (3m, U) with their sections."""
    count, _, each, _ = block.fibres.shape
    node = np.arange(count)[:, None, None] + np.arange(2)[:, None]
    node = np.broadcast_to(node, (count, 2, each)).reshape(-1)
    arm = np.column_stack([np.zeros(len(node)), block.fibres.reshape(-1, 2)])
    points = arm + np.column_stack([block.x[node], np.zeros((len(node), 2))])
    moved = rigid_arm(arm)[:, :3] @ motion.reshape(len(block.x), 6, -1)[node]
    return points, moved.reshape(3 * len(node), motion.shape[1])
