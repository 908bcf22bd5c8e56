"""From margins and checks to a verdict.

`ruled out`: a margin fails at both ends of its band and its number may be believed. A stress at a sharp re-entrant
edge or within a pad diameter of an attachment may not: it alone cannot rule a block out, and it cannot show one
either. A coarse stress counts only if it fails with the spread of its single elements taken off as well. A margin in a
load case that lifts a wheel or asks more than its tyres hold cannot rule out, for that is not a state of the car; nor
one in a load case whose aero map was read beyond its grid. Rigid faces cannot rule out where second paths are given.
`not shown`: a check fails, a band crosses zero, a failing number is not believed, a criterion or base state is
missing, a guess may govern, or there is no solid block yet: rigid faces and a beam can rule out, never show.
`shown within scope`: none of these.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ..block.beam import BeamBlock, held_torsion
from ..block.model import AnyBlock, Block, Material
from ..car.model import LoadCases
from ..case.model import Case, Check, MaterialChoice
from ..installation.model import PadLoads
from ..response.model import Library
from .faces import face_margins
from .load_checks import (
    STATE_CHECKS,
    aero_doubts,
    air_checks,
    cases_beyond_grip,
    grip_checks,
    lifted_cases,
    load_checks,
    unreal_cases,
)
from .model import Margin, Margins, Verdict
from .requirements import requirements
from .scope import not_judged
from .studs import stud_margins
from .wording import INCREMENT


def judge(
    case: Case,
    cases: LoadCases,
    block: AnyBlock | None,
    library: Library | None,
    pads: PadLoads | None,
    *,
    grade: Material | None = None,
) -> Margins:
    """Judge a case: margins, checks and verdict.

    Parameters
    ----------
    case, cases : Case, LoadCases
        The car and its balanced load cases.
    block, library, pads : Block, Library, PadLoads, optional
        The installed block; None without a block (level `faces`).
    grade : Material, optional
        At level `faces`, what the block would be cast in, for the requirements sheet; by default that of [concept].

    """
    checks = (*load_checks(cases), *air_checks(case, cases), *grip_checks(case, cases))
    if isinstance(block, BeamBlock) and library is not None and pads is not None:
        return _beam(case, cases, block, library, pads, checks=checks)
    if isinstance(block, Block) and library is not None and pads is not None:
        return _solid(case, cases, block, library, pads, checks=checks)
    margins = (*stud_margins(case, cases), *face_margins(case, cases))
    return Margins(
        margins=margins,
        checks=checks,
        verdict=verdict(case, cases, margins, checks, level="faces"),
        requirements=requirements(case, cases, grade or concept_grade(case)),
    )


def concept_grade(case: Case) -> Material | None:
    """Return the grade the case chose in [concept] before there is a block, if any."""
    grade = case.document.get("concept", {}).get("grade")
    if grade is None:
        return None
    from ..block.materials import material

    return material(MaterialChoice(volume="concept", grade=grade, properties=None, temperature=None))


def _solid(
    case: Case, cases: LoadCases, block: Block, library: Library, pads: PadLoads, *, checks: tuple[Check, ...]
) -> Margins:
    from .solid import strength_margins
    from .solid_checks import solid_checks
    from .stiffness import rear_face_motion, stiffness_margins, stiffnesses

    stiffness = stiffnesses(block, library, case)
    strength, surface = strength_margins(case, cases, block, library, pads)
    studs = stud_margins(case, cases, pads=pads, library=library)
    margins = (*strength, *studs, *face_margins(case, cases, pads), *stiffness_margins(stiffness, case))
    checks = (*checks, *solid_checks(case, cases, block, library, pads))
    return Margins(
        margins=margins,
        checks=checks,
        verdict=verdict(case, cases, margins, checks, level="solid"),
        surface=surface,
        stiffness=stiffness,
        rear_face=rear_face_motion(cases, pads),
    )


def _beam(
    case: Case, cases: LoadCases, block: BeamBlock, library: Library, pads: PadLoads, *, checks: tuple[Check, ...]
) -> Margins:
    from .beam import beam_checks, beam_margins
    from .stiffness import rear_face_motion, stiffness_margins, stiffnesses

    stiffness = stiffnesses(block, library, case)
    strength = beam_margins(case, cases, block, library, pads)
    studs = stud_margins(case, cases, pads=pads, library=library)
    torsion = stiffness_margins(stiffness, case, held=held_torsion(block))
    margins = (*strength, *studs, *face_margins(case, cases, pads), *torsion)
    checks = (*checks, *beam_checks(case, cases, block, library, pads))
    return Margins(
        margins=margins,
        checks=checks,
        verdict=verdict(case, cases, margins, checks, level="beam"),
        stiffness=stiffness,
        rear_face=rear_face_motion(cases, pads),
    )


def verdict(case: Case, cases: LoadCases, margins: Sequence[Margin], checks: Sequence[Check], *, level: str) -> Verdict:
    """Return the verdict and every reason for it."""
    loaded = [item for item in margins if item.margin is not None]
    lowest = min(loaded, key=lambda item: item.margin or 0.0, default=None)
    lifted = lifted_cases(cases)
    failed = [item for item in (*case.checks, *checks) if not item.ok]
    broken = [item for item in failed if item.name not in STATE_CHECKS]
    beyond = cases_beyond_grip(case, cases)
    ruling = [item for item in loaded if rules_out(item, unreal_cases(case, cases))]
    if ruling and not broken and (level != "faces" or not case.paths):
        word, reasons = "ruled out", tuple(_failure(item) for item in sorted(ruling, key=_lowest_first)[:3])
    else:
        doubts = _doubts(case, loaded, failed, (lifted, beyond), level=level)
        reasons = (*doubts, *aero_doubts(cases))
        word = "not shown" if reasons else "shown within scope"
    return Verdict(
        word=word,
        level=level,
        lowest_margin=None if lowest is None else lowest.margin,
        governing="" if lowest is None else _named(lowest),
        reasons=reasons,
        not_judged=not_judged(case, cases, level=level),
    )


def rules_out(item: Margin, lifted: Sequence[str] = ()) -> bool:
    """Whether a margin fails at both ends of its band, in a state of the car, with a number that is believed."""
    if item.band is None or item.load_case in lifted:
        return False
    best = max(item.band)
    if item.trust == "coarse":
        best = np.inf if item.spread is None else (1.0 + best) / max(1.0 - item.spread, 1e-6) - 1.0
    return item.trust in ("converged", "coarse") and best < 0.0


def _doubts(
    case: Case,
    loaded: Sequence[Margin],
    failed: Sequence[Check],
    unreal: tuple[Sequence[str], Sequence[str]],
    *,
    level: str,
) -> list[str]:
    lifted, beyond = unreal
    doubts = [f"check failed: {item.name}" for item in failed if item.name not in STATE_CHECKS]
    if lifted:
        doubts.append(f"wheel load below zero in {', '.join(lifted)}: the ground cannot pull")
    if beyond:
        doubts.append(f"more grip asked than the tyres have in {', '.join(beyond)}: the car cannot do this")
    failing = [item for item in loaded if item.band is not None and min(item.band) < 0.0]
    doubts += [_doubt(item, (*lifted, *beyond)) for item in sorted(failing, key=_lowest_first)]
    if level == "faces":
        doubts.append("no block yet: rigid faces and studs can rule out, never show")
    else:
        if level == "beam":
            doubts.append("a beam between rigid faces can rule out, never show: it has no bosses, bores or fillets")
        doubts.append(INCREMENT)
        coarse = [item for item in loaded if item.trust == "coarse"]
        if coarse:
            doubts.append(f"{len(coarse)} hotspots on a mesh too coarse for them")
    guesses = [known.key for known in case.known.values() if known.basis == "guess"]
    if guesses:
        doubts.append(f"a guess may govern: {', '.join(guesses)}")
    return doubts


def _doubt(item: Margin, lifted: Sequence[str]) -> str:
    low, high = item.band or (0.0, 0.0)
    if high >= 0.0:
        return f"band crosses zero, {_ends(low, high)}: {_named(item)}"
    if rules_out(item, lifted):
        return f"fails at both ends of its band, but a check failed: {_named(item)}"
    why = "no state of the car" if item.load_case in lifted else item.trust
    return f"fails, but the number is not believed ({why}): {_named(item)}"


def _failure(item: Margin) -> str:
    low, high = item.band or (0.0, 0.0)
    return f"fails at both ends of its band, {_ends(low, high)}: {_named(item)}"


def _ends(low: float, high: float) -> str:
    """A band in words, with a true minus; one number where it has no width."""
    texts = [f"{value:.2f}".replace("-", "\N{MINUS SIGN}") for value in (low, high)]
    return texts[0] if texts[0] == texts[1] else " to ".join(texts)


def _named(item: Margin) -> str:
    return f"{item.criterion} at {item.place}, {item.load_case.replace('_', ' ')}"


def _lowest_first(item: Margin) -> float:
    return item.margin if item.margin is not None else float("inf")
