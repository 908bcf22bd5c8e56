"""What the standard situations are built from: the car's speeds, gears, grip and static loads.

Grip grows with downforce: an acceleration known at one speed is scaled to another by weight plus downforce, which is
how far friction times load reaches. A car whose air is in maps keeps the figure as it stands.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ...arrays import Floats, frozen
from ...case.factors import FAST_CORNER, SLOW_CORNER
from ...case.model import Case, Manoeuvre
from ..bodies import chassis, masses
from ..manoeuvres import read
from ..sources import elementary, source_names
from ..torque import crank_speed, driven_radius
from ..wheels import tyre_answer

DIAGONAL = 2.0**-0.5
"""Share of both limits at 45 degrees on the friction ellipse."""
_REST = frozen(np.zeros(3))


@dataclass(frozen=True, slots=True, kw_only=True)
class Omission:
    """A standard situation that is left out: of which group, which, why, and what would bring it in."""

    group: str
    situation: str
    why: str
    remedy: str


def left_out(group: str, situation: str, key: str, what: str) -> Omission:
    """The omission of a situation for want of one key of the case file."""
    return Omission(group=group, situation=situation, why=f"not given: {what}", remedy=f"add {key}")


def fast_corner(case: Case) -> float | None:
    """Speed of the fast corner [m/s], None where no speed is known."""
    return _speed(case, case.performance.fast_corner, FAST_CORNER)


def slow_corner(case: Case) -> float | None:
    """Speed of the slow corner [m/s], None where no speed is known."""
    return _speed(case, case.performance.slow_corner, SLOW_CORNER)


def scaled(case: Case, value: float, known_at: float, to: float) -> float:
    """An acceleration known at one speed, scaled to another by weight plus downforce."""
    if any(device.table is not None for device in case.devices):
        return value
    weight = masses(case).total * case.gravity
    return value * max(weight + _downforce(case, to), 0.0) / (weight + _downforce(case, known_at))


def drag(case: Case, speed: float) -> float:
    """Drag [N] of the devices with constant areas."""
    return 0.5 * case.air_density * speed**2 * sum(device.drag_area for device in case.devices)


def lateral_at(case: Case, speed: float) -> float | None:
    """Highest cornering acceleration [m/s^2] at a speed, from that of the fast corner."""
    fast = fast_corner(case)
    if case.performance.lateral is None or fast is None:
        return None
    return scaled(case, case.performance.lateral, fast, speed)


def braking_at(case: Case, speed: float) -> float | None:
    """Highest deceleration [m/s^2] at a speed, from that at the highest speed."""
    if case.performance.braking is None or case.performance.speed is None:
        return None
    return scaled(case, case.performance.braking, case.performance.speed, speed)


def gear_at(case: Case, speed: float) -> float | None:
    """Overall ratio of the lowest gear the engine can turn at a speed; None where that is not known."""
    ratios = case.performance.ratios
    if not ratios:
        return None
    if case.engine.max_speed is None:
        top = case.performance.speed
        return ratios[-1] if top is not None and speed >= top else None
    turning = crank_speed(np.full(len(ratios), speed), np.array(ratios), driven_radius(case))
    able = [ratio for ratio, crank in zip(ratios, turning, strict=True) if crank <= case.engine.max_speed * (1 + 1e-6)]
    return able[0] if able else None


def static_loads(case: Case) -> Floats:
    """Vertical loads (4,) of the wheels of the car at rest [N]."""
    inputs = read(case, (Manoeuvre(name="rest", acceleration=_REST),))
    names = source_names(case, inputs)
    loads = elementary(case, inputs, names, masses(case), chassis(case))
    result: Floats = tyre_answer(case, inputs, loads, loads).force.sum(axis=1)[0, :, 2]
    return result


def _speed(case: Case, given: float | None, share: float) -> float | None:
    top = case.performance.speed
    return given if given is not None else None if top is None else share * top


def _downforce(case: Case, speed: float) -> float:
    area = sum(device.downforce_area for device in case.devices)
    if not case.devices and case.aero_total is not None:
        total = case.aero_total
        return total.downforce * (speed / total.at_speed) ** 2
    return 0.5 * case.air_density * speed**2 * area
