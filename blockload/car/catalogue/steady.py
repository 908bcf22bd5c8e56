"""Steady situations: highest speed, corners, braking, power, crest and compression, from [performance]."""

from __future__ import annotations

from collections.abc import Iterator

from ...arrays import frozen
from ...case.factors import CREST
from ...case.model import Case, Manoeuvre
from ..bodies import masses
from .factors import factor
from .figures import (
    DIAGONAL,
    Omission,
    braking_at,
    drag,
    fast_corner,
    gear_at,
    lateral_at,
    left_out,
    scaled,
    slow_corner,
)

SIDES = {"left": 1.0, "right": -1.0}
Built = Iterator[Manoeuvre | Omission]


def v_max(case: Case) -> Built:
    """Highest speed, straight, drag met by drive; once for every named state of the aero maps."""
    speed = case.performance.speed
    if speed is None:
        yield left_out("v_max", "v_max", '[performance] speed = "75 m/s"', "the highest speed")
        return
    states = dict.fromkeys(
        state for device in case.devices if device.table is not None for state in device.table.states
    )
    for state in (None, *states):
        yield Manoeuvre(
            name="v_max" if state is None else f"v_max_{state}",
            speed=speed,
            acceleration=frozen((0.0, 0.0, 0.0)),
            overall_ratio=gear_at(case, speed),
            state=state,
            group="v_max",
            basis="[performance] speed; drive equals drag",
        )


def corner(case: Case) -> Built:
    """Fast and slow corner, left and right, at constant speed."""
    for word, speed in (("fast", fast_corner(case)), ("slow", slow_corner(case))):
        lateral = None if speed is None else lateral_at(case, speed)
        if speed is None or lateral is None:
            key = '[performance] lateral = "2.4 g" and speed'
            yield left_out("corner", f"corner_{word}", key, "the cornering acceleration or the speed")
            continue
        basis = "[performance] lateral" + ("" if word == "fast" else ", scaled by weight plus downforce")
        for side, sign in SIDES.items():
            yield Manoeuvre(
                name=f"corner_{word}_{side}",
                speed=speed,
                acceleration=frozen((0.0, sign * lateral, 0.0)),
                overall_ratio=gear_at(case, speed),
                group="corner",
                basis=basis,
            )


def brake(case: Case) -> Built:
    """Braking from the highest speed."""
    speed, braking = case.performance.speed, case.performance.braking
    if speed is None or braking is None:
        yield left_out("brake", "brake", '[performance] braking = "3 g" and speed', "the deceleration or the speed")
        return
    yield Manoeuvre(
        name="brake",
        speed=speed,
        acceleration=frozen((-braking, 0.0, 0.0)),
        drive="brake",
        group="brake",
        basis="[performance] braking, drag included",
    )


def brake_in_corner(case: Case) -> Built:
    """Braking into the fast corner: 45 degrees on the friction ellipse."""
    speed = fast_corner(case)
    braking = None if speed is None else braking_at(case, speed)
    lateral = None if speed is None else lateral_at(case, speed)
    if speed is None or braking is None or lateral is None:
        key = "[performance] braking, lateral and speed"
        yield left_out("brake_in_corner", "brake_in_corner", key, "deceleration, cornering acceleration or speed")
        return
    for side, sign in SIDES.items():
        yield Manoeuvre(
            name=f"brake_in_corner_{side}",
            speed=speed,
            acceleration=frozen((-DIAGONAL * braking, sign * DIAGONAL * lateral, 0.0)),
            drive="brake",
            group="brake_in_corner",
            basis="friction ellipse through [performance] braking (scaled by grip) and lateral, at 45°",
        )


def power_in_corner(case: Case) -> Built:
    """Power out of the slow corner: 45 degrees on the friction ellipse, or less where power is short."""
    speed, traction = slow_corner(case), case.performance.traction
    lateral = None if speed is None else lateral_at(case, speed)
    if speed is None or traction is None or lateral is None:
        key = "[performance] traction, lateral and speed"
        yield left_out("power_in_corner", "power_in_corner", key, "traction, cornering acceleration or speed")
        return
    most = scaled(case, traction, 0.0, speed)
    along, basis = DIAGONAL * most, "friction ellipse through [performance] traction and lateral, at 45°"
    if case.performance.power is not None:
        left = (case.performance.power / speed - drag(case, speed)) / masses(case).total
        if left < along:
            along, basis = max(left, 0.0), "friction ellipse, as far as [performance] power goes"
    lateral *= (1.0 - (along / most) ** 2) ** 0.5
    for side, sign in SIDES.items():
        yield Manoeuvre(
            name=f"power_in_corner_{side}",
            speed=speed,
            acceleration=frozen((along, sign * lateral, 0.0)),
            drive="accelerate",
            overall_ratio=gear_at(case, speed),
            group="power_in_corner",
            basis=basis,
        )


def crest(case: Case) -> Built:
    """A crest and a compression at the highest speed: weight and inertia change, the air does not."""
    speed, gravity = case.performance.speed, case.gravity
    if speed is None:
        yield left_out("crest", "crest and compression", '[performance] speed = "75 m/s"', "the highest speed")
        return
    vertical = factor(case, "vertical")
    down, up = case.performance.crest, case.performance.compression
    lifted = CREST * gravity if down is None else down
    pressed = (vertical.value - 1.0) * gravity if up is None else up
    crest_basis = "[performance] crest" if down is not None else f"{CREST:g} g: common practice, unsourced"
    basis = "[performance] compression" if up is not None else f"{vertical.value:g} x weight: {vertical.source}"
    for name, a_z, why, used in (
        ("crest", lifted, crest_basis, None),
        ("compression", pressed, basis, vertical if up is None else None),
    ):
        yield Manoeuvre(
            name=name,
            speed=speed,
            acceleration=frozen((0.0, 0.0, a_z)),
            overall_ratio=gear_at(case, speed),
            group="crest",
            factor=used,
            basis=f"{why}; aero as it is at this speed",
        )
