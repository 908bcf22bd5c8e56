"""Strength and checks of a block known as a beam: nominal stress at its fibres.

Beam theory keeps the section's forces and spreads them smoothly; bosses, bores and fillets raise the stress above it.
So a nominal stress that fails is reason enough to rule a block out, and one that holds shows nothing. Next to a face
or another attachment the section is not yet in its smooth state (Saint-Venant's principle): there it is not believed.
An open section held from warping by its faces is never in the free state its torsion stress stands for: none of it is
believed.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from ..arrays import Floats, Ints
from ..block.beam import BeamBlock, held_torsion
from ..car.model import LoadCases
from ..case.model import Case, Check
from ..installation.model import PadLoads
from ..response.beam_library import middle_cut
from ..response.model import Library
from .load_checks import below
from .model import Margin
from .solid import strength_fields, stress_margin
from .solid_checks import FIELD, installed_checks
from .trust import Trust

APART = 0.1  # of the beam's length: places nearer to each other say the same
EVERYWHERE, CLEAR = 3, 3  # places per criterion: highest of all, and highest away from attachments
HELD = 1.25  # torsion stiffer by more than this with warping held: our choice
BESIDE = "within one pad diameter of an attachment"
WARPING = "the faces hold this open section from warping all along: its torsion stress is not the free one"
NOMINAL = "nominal stress of beam theory: bosses, bores and fillets come on top"


def beam_margins(
    case: Case, cases: LoadCases, block: BeamBlock, library: Library, pads: PadLoads
) -> tuple[Margin, ...]:
    """Return the strength margins of the most used sections; none where no fibres are known."""
    if not len(library.entry_node):
        return ()
    x = library.surface_points[:, 0]
    beside = _beside(block, x)
    warped = held_torsion(block) > HELD
    if warped:
        beside[:] = 1
    found = []
    for field in strength_fields(case, block, library, pads):
        for entry in _hot_sections(field.ratio.max(axis=1), x, beside):
            near = beside[entry]
            reason = f"{WARPING if warped else BESIDE}; {NOMINAL}" if near else NOMINAL
            trust = Trust(word="near an attachment" if near else "converged", reason=reason)
            y, z = library.surface_points[entry, 1:]
            place = f"beam at x {x[entry]:.3f} m, fibre ({y:.3f}, {z:.3f}) m"
            found.append(stress_margin(field, entry, library, cases=cases, pads=pads, place=place, trust=trust))
    return tuple(found)


def _beside(block: BeamBlock, x: Floats) -> Ints:
    """Whether each entry lies within a pad diameter of a face or another attachment along x, (m,)."""
    reach = max(np.sqrt(4 * item.area / np.pi) for item in block.attachments)
    places = np.array([item.centroid[0] for item in block.attachments])
    gap = np.abs(x[:, None] - places).min(axis=1)
    return np.asarray(gap <= reach, dtype=np.int64)


def _hot_sections(ratio: Floats, x: Floats, beside: Ints) -> list[int]:
    """Entries of the highest ratios, no two within APART of the length along x: of all, then of those in the clear."""
    apart = APART * float(np.ptp(x))
    kept: list[int] = []
    for most, allowed in ((EVERYWHERE, ratio > 0.0), (CLEAR, (ratio > 0.0) & (beside == 0))):
        room = len(kept) + most
        for entry in np.argsort(-ratio, kind="stable"):
            if len(kept) == room:
                break
            if allowed[entry] and all(abs(x[entry] - x[other]) > apart for other in kept):
                kept.append(int(entry))
    return kept


def beam_checks(case: Case, cases: LoadCases, block: BeamBlock, library: Library, pads: PadLoads) -> Iterator[Check]:
    """Yield the checks of library, installation, and the forces across mid-length in every case."""
    yield from installed_checks(case, cases, block, library, pads)
    units = len(library.flexibility)
    found, expected = middle_cut(block, pads.weights[pads.middle].sum(axis=1)[:, :units])
    arm = float(np.ptp(block.x)) / 2.0
    scale = np.array([1.0, 1.0, 1.0, *[1.0 / arm] * 3])
    gap = np.abs((found - expected) * scale).max() / max(np.abs(expected * scale).max(), np.finfo(float).tiny)
    yield below("element forces across mid-length equal the loads behind it", gap, FIELD)
