"""What is measured on every installed block and can fail: library, installation and the field inside the block.

Each check has a limit that a right analysis meets by orders of magnitude: identities of the dense algebra 1e-9, those
of the field 1e-6. What is left out by choice is sized against two per cent of the engine's own acceleration.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from ..block.model import AnyBlock, Block
from ..car.model import LoadCases
from ..case.model import Case, Check
from ..installation.joining import pads as front_pads
from ..installation.model import PadLoads
from ..installation.proof import face_sum
from ..response.cuts import section_cut
from ..response.model import Library
from ..response.spreading import unit_wrenches
from .load_checks import below

IDENTITY, FIELD = 1e-9, 1e-6
LEFT_OUT = 0.02

# Name in Library.checks: what it says, and its limit.
LIBRARY_CHECKS = {
    "residual": ("unit loads solved: residual of K u = f", FIELD),
    "reaction": ("auxiliary constraints carry nothing", FIELD),
    "relief": ("unit loads balanced by the block's own inertia", IDENTITY),
    "spread": ("spread tractions integrate to the wrench asked", FIELD),
    "symmetry": ("flexibility symmetric", FIELD),
    "unit energy": ("work of unit loads equals strain energy", FIELD),
    "heat reciprocity": ("heat and wrenches reciprocal", FIELD),
}


def solid_checks(case: Case, cases: LoadCases, block: Block, library: Library, pads: PadLoads) -> Iterator[Check]:
    """Yield the checks of library, installation and field."""
    yield from installed_checks(case, cases, block, library, pads)
    yield below(
        "flexibility is the average motion of the attachments", flexibility_gap(block, library), FIELD, "recomputed"
    )
    yield _cut(cases, block, library, pads)


def installed_checks(
    case: Case, cases: LoadCases, block: AnyBlock, library: Library, pads: PadLoads
) -> Iterator[Check]:
    """Yield the checks of library and installation, which hold for any block."""
    for name, value in library.checks.items():
        text, limit = LIBRARY_CHECKS.get(name, (name, FIELD))
        yield below(text, value, limit)
    yield from _installed(case, cases, block, library, pads)
    yield from _sign(case, cases, block, library, pads)
    yield _left_out(cases, pads)
    yield from _metal(case, block, pads)


def flexibility_gap(block: Block, library: Library) -> float:
    """Return the largest difference between the flexibility and Pᵀu of the stored motion, as a share."""
    F = library.flexibility
    size = np.sqrt(np.diag(F))
    worst = 0.0
    for item in block.attachments:
        rows = library.rows(item.kind, item.name)
        loads, nodes, _ = unit_wrenches(block, item)
        unknowns = (3 * nodes[:, None] + np.arange(3)).ravel()
        motion = np.asarray(library.motion[unknowns])[:, : len(F)]
        gap = np.abs(loads.reshape(-1, 6).T @ motion - F[rows]) / np.outer(size[rows], size)
        worst = max(worst, float(gap.max()))
    return worst


def _installed(case: Case, cases: LoadCases, block: AnyBlock, library: Library, pads: PadLoads) -> Iterator[Check]:
    yield below("installed system solved: residual", pads.checks["residual"], IDENTITY)
    for face in ("front", "rear"):
        loads = cases.faces[face]
        state = pads.weights[pads.middle].sum(axis=1)
        reaction = face_sum(state, block, library, case, face, loads.reference)
        worst = int(np.abs(reaction[:, :3]).max(axis=1).argmax())
        force = np.linalg.norm(reaction[worst, :3])
        statics = np.linalg.norm(loads.wrench[worst].sum(axis=0)[:3])
        note = f"{cases.names[worst]}: pads {force / 1e3:.4g} kN, statics {statics / 1e3:.4g} kN"
        if case.paths:
            note += ", less what the second paths carry"
        yield below(f"{face} pads sum to the face wrench", pads.checks[f"sum {face}"], IDENTITY, note)
    yield below(
        "inertia counted once: relief acceleration is the engine's own a - g and alpha", pads.relief_gap, IDENTITY
    )


def _sign(case: Case, cases: LoadCases, block: AnyBlock, library: Library, pads: PadLoads) -> Iterator[Check]:
    """The trade's sign, read off the installed pads: where the front face sags most, the upper row is pressed more."""
    sag = cases.section("front")[:, 4]
    worst = int(np.argmax(sag))
    front = front_pads(block, case, "front")
    height = np.array([pad.centroid[2] for pad in front])
    upper = height > height.mean()
    if sag[worst] <= 0.0 or upper.all() or not upper.any():
        return
    state = pads.weights[pads.middle, worst].sum(axis=0)
    axial = np.array([state[library.rows("front", pad.name)][0] for pad in front])
    gap = float(axial[upper].mean() - axial[~upper].mean())
    note = f"N per pad in {cases.names[worst]}, where M_sag is {sag[worst] / 1e3:.3g} kN·m"
    yield below("sagging presses the upper pads against the lower ones", gap, 0.0, note)


def _left_out(cases: LoadCases, pads: PadLoads) -> Check:
    """Size of ω×(ω×r) in the block, which is no rigid linear field, against the engine's own acceleration."""
    own = np.linalg.norm(cases.engine_acceleration.sum(axis=1), axis=1)
    share = pads.left_out / np.maximum(own, 1e-3)  # m/s²: a block in free fall has no acceleration to compare with
    worst = int(np.argmax(share))
    note = f"{pads.left_out[worst]:.2g} m/s² in {cases.names[worst]}, as a share of the engine's own"
    return below("centripetal acceleration left out inside the block is small", share[worst], LEFT_OUT, note)


def _metal(case: Case, block: AnyBlock, pads: PadLoads) -> Iterator[Check]:
    for name in ("mass", "cg", "inertia"):
        yield below(f"mesh {name} as the library was solved with", pads.checks[name], IDENTITY)
    engine = case.bodies["engine"]
    total = block.mass + sum(item.mass for item in block.carried)
    yield below(
        "mesh and carried masses add up to the engine",
        abs(total / engine.mass - 1.0),
        IDENTITY,
        f"{block.mass:.4g} kg meshed of {engine.mass:.4g} kg",
    )
    moment = block.mass * block.cg + sum((item.mass * item.cg for item in block.carried), np.zeros(3))
    gap = np.abs(moment / total - engine.cg).max()
    yield Check(name="mesh and carried masses keep the engine's CG", ok=bool(gap <= 1e-6), value=float(gap), limit=1e-6)


def _cut(cases: LoadCases, block: Block, library: Library, pads: PadLoads) -> Check:
    """Element forces across mid-length against the loads behind it, in every case at the middle stiffness."""
    front, rear = cases.faces["front"].reference, cases.faces["rear"].reference
    middle = (front + rear) / 2.0
    cut = section_cut(block, library, pads.weights[pads.middle].sum(axis=1), float(middle[0]), middle)
    arm = np.linalg.norm(front - rear) / 2.0
    scale = np.array([1.0, 1.0, 1.0, *[1.0 / arm] * 3])
    gap = np.abs((cut.found - cut.expected) * scale).max() / max(np.abs(cut.expected * scale).max(), 1e-300)
    return below("element forces across mid-length equal the section wrench", gap, FIELD)
