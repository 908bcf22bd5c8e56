"""What is measured on the car's loads on every run and can fail, with the limit each must meet."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from ..car.aero_check import factor_on_aero
from ..car.grip_notes import grip_used
from ..car.model import LoadCases
from ..case.model import Case, Check

WHEEL_CHECK = "load cases with a wheel load below zero"
GRIP_CHECK = "load cases beyond the grip of an axle"
STATE_CHECKS = (WHEEL_CHECK, GRIP_CHECK)
"""Checks that speak of single load cases, which then decide nothing, and not of the analysis."""
BALANCE = 1e-6
GRIP_SLACK = 0.02
"""Share of grip beyond its limit that still counts as rounding of friction and accelerations (unsourced)."""


def load_checks(cases: LoadCases) -> Iterator[Check]:
    """Yield the checks of the car's loads alone."""
    worst = int(np.argmax(cases.residual))
    yield below("loads in balance on every body", cases.residual[worst], BALANCE, f"worst in {cases.names[worst]}")
    yield below(
        "face wrenches equal from the front and from the rear", np.max(cases.front_rear_gap, initial=0.0), BALANCE
    )
    lifted = lifted_cases(cases)
    note = f"the ground would have to pull in {', '.join(lifted)}" if lifted else ""
    yield Check(name=WHEEL_CHECK, ok=not lifted, value=len(lifted), limit=0, note=note)


def cases_beyond_grip(case: Case, cases: LoadCases) -> tuple[str, ...]:
    """Return the load cases that ask more of an axle than its tyres hold, blows at the wheels left out."""
    used = grip_used(case, cases)
    return tuple(name for name, axles in zip(cases.names, used, strict=True) if (axles > 1.0 + GRIP_SLACK).any())


def unreal_cases(case: Case, cases: LoadCases) -> tuple[str, ...]:
    """Return the load cases that are no states of the car, or read its air beyond what is known."""
    found = {*lifted_cases(cases), *cases_at_map_edge(cases), *cases_beyond_grip(case, cases)}
    return tuple(name for name in cases.names if name in found)


def grip_checks(case: Case, cases: LoadCases) -> Iterator[Check]:
    """Yield the check of the tyres' grip, where their friction is known."""
    used = grip_used(case, cases)
    if not np.isfinite(used).any():
        return
    worst = int(np.nanargmax(np.nanmax(np.where(np.isfinite(used), used, -1.0), axis=1)))
    beyond = cases_beyond_grip(case, cases)
    note = f"of the grip used, worst in {cases.names[worst]}"
    yield Check(name=GRIP_CHECK, ok=not beyond, value=float(np.nanmax(used)), limit=1.0 + GRIP_SLACK, note=note)


def air_checks(case: Case, cases: LoadCases) -> Iterator[Check]:
    """Yield the check that no dynamic factor has been put on the air."""
    factor = factor_on_aero(case, cases)
    if not np.isfinite(factor).any():
        return
    worst = int(np.nanargmax(factor))
    note = f"downforce over dynamic pressure times area, worst in {cases.names[worst]}: factors are for masses alone"
    yield below("no factor on the air", factor[worst], 1.0 + BALANCE, note)


def lifted_cases(cases: LoadCases) -> tuple[str, ...]:
    """Return the load cases in which the ground would have to pull at a wheel."""
    return tuple(name for name, lifted in zip(cases.names, cases.wheel_lift, strict=False) if lifted)


def cases_at_map_edge(cases: LoadCases) -> tuple[str, ...]:
    """Return the load cases that read an aero map beyond its grid, where its edge was used."""
    return tuple(name for name, mark in zip(cases.names, cases.outside_map, strict=False) if mark)


def aero_doubts(cases: LoadCases) -> Iterator[str]:
    """Yield why nothing is shown while the air is not known well enough."""
    edge = cases_at_map_edge(cases)
    if edge:
        yield f"an aero map was read beyond its grid, at its edge, in {', '.join(edge)}"
    if cases.aero_bounds is not None:
        count = len(cases.aero_bounds.splits)
        yield f"only totals of the aero are known: each band spans {count} extreme splits of it"


def below(name: str, value: float, limit: float, note: str = "") -> Check:
    """Return a check that passes at or below its limit."""
    number = float(value)
    return Check(name=name, ok=bool(number <= limit), value=number, limit=limit, note=note)
