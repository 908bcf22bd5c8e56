"""Blows of the road: kerbs, landings, a sideways strike. Force mode: the rigid car gives way.

Where the case gives no force, a wheel's load rises from its static load S to n S by a factor n: n - 1 times S comes on
top of the rolling car, whose weight, inertia and real aero are there already.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import replace

import numpy as np

from ...arrays import Floats, frozen
from ...case.model import CORNERS, Case, Factor, GivenForce, Manoeuvre
from ..bodies import masses
from .factors import factor, side_force
from .figures import Omission, braking_at, fast_corner, gear_at, lateral_at, left_out, slow_corner, static_loads

MIRROR = np.array((1.0, -1.0, 1.0))
Built = Iterator[Manoeuvre | Omission]
_STILL = frozen(np.zeros(3))


def kerb(case: Case) -> Built:
    """A kerb under each wheel, under diagonal pairs, under the inner wheels of a corner, and under braking."""
    given = _given(case, "kerb")
    speed = given.speed if given is not None and given.speed is not None else fast_corner(case)
    if speed is None:
        yield left_out("kerb", "kerb", "[performance] speed, or speed under [catalogue.forces.kerb]", "the speed")
        return
    force = _blows(case, "kerb", given)
    template = _blow(case, "kerb", given, speed)
    for wheels in (*((corner,) for corner in CORNERS), ("FL", "RR"), ("FR", "RL")):
        yield replace(template, name=f"kerb_{'_'.join(wheels)}", extra_wheel_force={w: force[w] for w in wheels})
    yield from _inner_kerbs(case, template, force)
    yield from _braked_kerbs(case, template, force)


def landing(case: Case) -> Built:
    """Landing on all four wheels, on the front and on the rear axle."""
    given = _given(case, "landing")
    speed = given.speed if given is not None and given.speed is not None else fast_corner(case)
    if speed is None:
        yield left_out(
            "landing", "landing", "[performance] speed, or speed under [catalogue.forces.landing]", "the speed"
        )
        return
    force = _blows(case, "landing", given)
    template = replace(_blow(case, "landing", given, speed), kind="limit", fatigue_exempt=True)
    for name, wheels in (("landing", CORNERS), ("landing_front", CORNERS[:2]), ("landing_rear", CORNERS[2:])):
        yield replace(template, name=name, extra_wheel_force={wheel: force[wheel] for wheel in wheels})


def spin(case: Case) -> Built:
    """A rear wheel strikes something sideways: what a suspension must fail at before the casing does."""
    given, car = _given(case, "spin"), masses(case)
    front, rear = case.axles["front"], case.axles["rear"]
    if given is not None:
        force, basis, used = np.asarray(given.force, dtype=float), given.basis, None
    else:
        used = factor(case, "side")
        track = (front.track + rear.track) / 2.0
        total = side_force(car.total * case.gravity, track, float(car.car_cg[2]), used.value)
        share = (front.x - float(car.car_cg[0])) / case.wheelbase
        force = np.array((0.0, -share * total, 0.0))
        basis = f"{used.value:g} x the side force that tips the car, the rear axle's share on one wheel: {used.source}"
    speed = given.speed if given is not None and given.speed is not None else 0.0
    for corner, strike in (("RL", force), ("RR", force * MIRROR)):
        yield Manoeuvre(
            name=f"spin_{corner}",
            speed=speed,
            acceleration=_STILL,
            drive="coast",
            extra_wheel_force={corner: frozen(strike)},
            kind="limit",
            fatigue_exempt=True,
            group="spin",
            factor=used,
            basis=f"{basis}; the air on a car sideways is not known and left out" if speed == 0.0 else basis,
        )


def _inner_kerbs(case: Case, template: Manoeuvre, force: Mapping[str, Floats]) -> Built:
    lateral = lateral_at(case, template.speed)
    if lateral is None:
        yield left_out("kerb", "kerb under the inner wheels of a corner", "[performance] lateral", "the lateral figure")
        return
    for corner in CORNERS:
        side, sign = ("left", 1.0) if corner.endswith("L") else ("right", -1.0)
        yield replace(
            template,
            name=f"kerb_{corner}_in_{side}_corner",
            acceleration=frozen((0.0, sign * lateral, 0.0)),
            drive="hold_speed",
            overall_ratio=gear_at(case, template.speed),
            extra_wheel_force={corner: force[corner]},
            basis=f"{template.basis}; in a {side} corner of [performance] lateral",
        )


def _braked_kerbs(case: Case, template: Manoeuvre, force: Mapping[str, Floats]) -> Built:
    speed = slow_corner(case)
    braking = None if speed is None else braking_at(case, speed)
    if speed is None or braking is None:
        yield left_out("kerb", "kerb under braking", "[performance] braking and speed", "the deceleration")
        return
    for corner in CORNERS[:2]:
        yield replace(
            template,
            name=f"kerb_{corner}_braking",
            speed=speed,
            acceleration=frozen((-braking, 0.0, 0.0)),
            drive="brake",
            extra_wheel_force={corner: force[corner]},
            kind="limit",
            fatigue_exempt=True,
            basis=f"{template.basis}; under [performance] braking, scaled by weight plus downforce",
        )


def _blows(case: Case, name: str, given: GivenForce | None) -> dict[str, Floats]:
    """Force (3,) on each wheel."""
    if given is not None:
        force = np.asarray(given.force, dtype=float)
        return {corner: frozen(force if corner.endswith("L") else force * MIRROR) for corner in CORNERS}
    more = (_factor(case, name).value - 1.0) * static_loads(case)
    return {corner: frozen((0.0, 0.0, more[i])) for i, corner in enumerate(CORNERS)}


def _blow(case: Case, name: str, given: GivenForce | None, speed: float) -> Manoeuvre:
    """A blow without its wheels."""
    used = None if given is not None else _factor(case, name)
    basis = given.basis if given is not None else ""
    if used is not None:
        basis = f"{used.value:g} x static wheel load: {used.source}"
    return Manoeuvre(name=name, speed=speed, acceleration=_STILL, drive="coast", group=name, factor=used, basis=basis)


def _factor(case: Case, name: str) -> Factor:
    return factor(case, "kerb" if name == "kerb" else "vertical")


def _given(case: Case, name: str) -> GivenForce | None:
    return case.catalogue.forces.get(name) if case.catalogue is not None else None
