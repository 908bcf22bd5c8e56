"""What a run does not judge: said in every result, so that nobody reads silence as a pass."""

from __future__ import annotations

import numpy as np

from ..car.catalogue.coverage import ends
from ..car.catalogue.expanding import expansion
from ..car.model import LoadCases
from ..case.model import Case

ALWAYS = (
    "crash and occupant protection",
    "roll structures",
    "fire",
    "oil and fuel leaks",
    "a failed engine",
    "loss of an axle",
)
SOLID_LATER = (
    "assembly, gas and heat (base states)",
    "main-bearing line",
    "bore shape",
    "fatigue life",
    "joints that open or slip: prying, stud bending, threads, bearing under the head",
    "preload change by heat and embedding",
    "opening at a sharp edge or under a pad beyond the idealised load",
    "the centripetal part of the inertia inside the block (its size is in the checks)",
)
BEAM_ONLY = (
    "local stress of the block: a beam has no bosses, bores, bulkheads or fillets; nominal stress at its fibres alone",
    "faces that bend and walls that warp or breathe: a beam's faces are rigid and its sections keep their shape",
)
NO_MODULUS = "shear stress of torsion in the block: no torsion_modulus at its stations"
NO_FIBRES = "stress of the block: its stiffness alone is known"
_ROUNDING = 1e-9  # of the wheel loads: a push below it is none
KEPT_FOR_LATER = ("gauges", "heat", "duty", "scatter", "measured", "accepted")
UNUSED_LIMITS = ("life_distance", "bearing_line")
FACES_ONLY = ("stress, stiffness and shape of the block: there is none yet",)


def _kept_for_later(case: Case) -> list[str]:
    """Return what the file says and nothing uses yet, in one line."""
    kept = [f"[{name}]" for name in KEPT_FOR_LATER if name in case.document]
    kept += [f"limits.{name}" for name in UNUSED_LIMITS if name in case.document.get("limits", {})]
    return [f"read but not used yet: {', '.join(kept)}"] if kept else []


def not_judged(case: Case, cases: LoadCases, *, level: str) -> tuple[str, ...]:
    """Return what this run leaves open, the case's own gaps first."""
    gaps: list[str] = []
    if case.paths and level == "faces":
        gaps.append("second load paths: given, and not used before there is a block")
    if case.installation.second_paths is None and not case.paths:
        gaps.append("second load paths: the case does not state that nothing else joins tub, engine and gearbox")
    gaps += _kept_for_later(case)
    gaps += [f"{gap.situation}: {gap.why}" for gap in expansion(case).omissions]
    gaps += _signs_that_never_turn(cases)
    if case.laps:
        names = ", ".join(lap.name for lap in case.laps)
        gaps.append(f"laps ({names}): their loads are handed on, no margin or life is drawn from them")
    without = _without_ratio(cases)
    if without:
        gaps.append(f"crank torque without an overall ratio: {', '.join(without)}")
    if case.limits.torsion_min is None:
        gaps.append("torsional stiffness: no torsion_min in [limits]")
    if case.limits.bending_min is None:
        gaps.append("bending stiffness: no bending_min in [limits]")
    if level == "faces" and case.limits.twist_share is None:
        gaps.append("share of the car's twist: no twist_share in [limits]")
    if case.engine_maker_consent != "given":
        gaps.append(f"the engine maker's consent to chassis loads: {case.engine_maker_consent}")
    if level == "beam":
        gaps += BEAM_ONLY
        beam = case.block.beam if case.block is not None else None
        stations = beam.stations if beam is not None else ()
        if not any(item.walls or len(item.fibres) for item in stations):
            gaps.append(NO_FIBRES)
        elif any(item.torsion_modulus is None and not item.walls for item in stations):
            gaps.append(NO_MODULUS)
    scope = FACES_ONLY if level == "faces" else SOLID_LATER
    return (*gaps, *scope, *ALWAYS)


def _signs_that_never_turn(cases: LoadCases) -> list[str]:
    """One gap for section components of one sign alone, with the situations that would turn them."""
    rows = [row for row in ends(cases) if row.missing]
    if not rows:
        return []
    names = ", ".join(f"{row.face} {row.component}" for row in rows)
    groups = ", ".join(dict.fromkeys(group for row in rows for group in row.missing))
    return [f"the other sign of {names}: no load case turns it (situations that would: {groups})"]


def _without_ratio(cases: LoadCases) -> list[str]:
    """Load cases whose tyres push the car with a crank torque that is unknown."""
    push = cases.wheels[..., 0].sum(axis=1)
    weight = np.abs(cases.wheels[..., 2]).sum(axis=1)
    unknown = np.isnan(cases.crank_torque) & (push > _ROUNDING * weight)
    return [name for name, missing in zip(cases.names, unknown, strict=True) if missing]
