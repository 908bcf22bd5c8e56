"""Driveline events: launch, clutch dump, gear shifts, a spinning wheel that grips again.

At the peak of a shift or a snatch the clutch passes what it holds or what the driven tyres hold, whichever is less; the
crank gives up what its gas torque does not cover. A measured driveline transient is a better figure than any of these.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from itertools import pairwise

import numpy as np

from ...arrays import frozen
from ...case.model import Case, Manoeuvre
from ...errors import CaseError
from ..bodies import masses
from ..clutch import clutch_dump, dump_manoeuvre, free_revs
from ..envelope import boundary
from ..torque import driven_radius, full_load_torque
from .figures import Omission, gear_at, left_out, slow_corner

Built = Iterator[Manoeuvre | Omission]
_AHEAD = frozen(np.zeros(1))


def launch(case: Case) -> Built:
    """Acceleration from rest, and the clutch let go at once."""
    traction, ratios = case.performance.traction, case.performance.ratios
    if traction is None:
        yield left_out("launch", "launch", '[performance] traction = "1 g"', "the acceleration from rest")
    else:
        yield Manoeuvre(
            name="launch",
            acceleration=frozen((traction, 0.0, 0.0)),
            drive="accelerate",
            overall_ratio=ratios[0] if ratios else None,
            group="launch",
            basis="[performance] traction, clutch home",
        )
    if not ratios:
        yield left_out("launch", "clutch_dump", "[performance] ratios = [10.0, ...]", "the first gear's ratio")
        return
    try:
        dump = clutch_dump(case, ratios[0])
    except CaseError as error:
        yield Omission(
            group="launch", situation="clutch_dump", why=f"{error.where}: {error.found}", remedy=error.remedy
        )
        return
    yield replace(dump_manoeuvre(dump), group="launch")


def shift(case: Case) -> Built:
    """Every upshift at the engine's highest speed, a wheel that grips again, and free revving."""
    yield from (replace(manoeuvre, group="shift") for manoeuvre in free_revs(case))
    ratios, top = case.performance.ratios, case.engine.max_speed
    wanting = [
        (len(ratios) < 2, "[performance] ratios of two gears or more", "the gears"),
        (top is None, '[engine] max_speed = "9000 rpm"', "the engine's highest speed"),
        (not case.drive.crank_inertia, "[drive] crank_inertia", "the crank's inertia"),
        (case.tyres.mu_x is None and case.tyres.mu_y is None, "[tyres] mu_x", "the tyres' friction"),
    ]
    for absent, key, what in wanting:
        if absent:
            yield left_out("shift", "gear shifts", key, what)
            return
    if top is None:
        return
    radius = driven_radius(case)
    for k, (before, after) in enumerate(pairwise(ratios), start=1):
        yield _shock(case, f"shift_{k}_{k + 1}", top * radius / before, after)
    speed = slow_corner(case)
    ratio = None if speed is None else gear_at(case, speed)
    if speed is None or ratio is None:
        yield left_out("shift", "snatch", "[performance] speed", "the speed at which a spinning wheel grips again")
        return
    yield _shock(case, "snatch", speed, ratio)


def _shock(case: Case, name: str, speed: float, ratio: float) -> Manoeuvre:
    """The peak of a driveline shock at a speed in a gear."""
    found = boundary(case, frozen([speed]), _AHEAD, power=None)
    lever = driven_radius(case) / ratio
    force, limited = float(found.along[0, 0]), "tyre grip"
    acceleration, total = float(found.acceleration[0, 0, 0]), masses(case).total
    capacity = case.drive.clutch_capacity
    if capacity is not None and capacity < force * lever:
        acceleration -= (force - capacity / lever) / total
        force, limited = capacity / lever, "clutch capacity"
    gas = float(np.nan_to_num(full_load_torque(case.engine, np.asarray(speed / lever))))
    slowing = max(force * lever - gas, 0.0) / (case.drive.crank_inertia or np.inf)
    return Manoeuvre(
        name=name,
        speed=speed,
        acceleration=frozen((acceleration, 0.0, 0.0)),
        drive="accelerate",
        overall_ratio=ratio,
        crank_acceleration=-slowing,
        group="shift",
        basis=f"{force * lever:.0f} N·m at the clutch, limited by {limited}; gas torque {gas:.0f} N·m of it",
    )
