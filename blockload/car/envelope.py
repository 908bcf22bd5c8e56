"""The grip- and power-limited boundary of what the car can do, over speed and heading in the a_x-a_y plane.

For a speed v and a heading theta the boundary is the first |a| along (cos theta, sin theta) at which one of the car's
`limits` is reached. All speeds and headings are searched at once: a coarse walk outwards to the first point beyond a
limit, then bisection. With aero maps the air is read again at the boundary until both agree.
The picture of such a boundary over speed is usual practice (W. F. Milliken, D. L. Milliken, *Race Car Vehicle
Dynamics*, SAE 1995, ch. 9; chapter from memory).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import Floats, Ints, frozen
from ..case.model import Case, Manoeuvre
from ..errors import BalanceError, CaseError
from .aero_split import only_totals, splits, with_middle_split
from .catalogue.figures import gear_at
from .limits import LIMITS, LimitedCar, accelerated, driven, limited, uses

GROUP = "envelope"
_STEPS = 48
_HALVINGS = 60
_FIRST = 5.0  # m/s^2
_FURTHEST = 1e3  # m/s^2
_ROUNDS = 40
_AGREED = 1e-9  # m/s^2
_SLACK = 1e-9


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Envelope:
    """The boundary at every speed and heading.

    speed (V,) [m/s], heading (H,) [rad, from straight ahead to the left]; acceleration (V, H, 2) [m/s^2];
    limit (V, H) indexes LIMITS; along (V, H): the tyres' force along x together [N].
    """

    speed: Floats
    heading: Floats
    acceleration: Floats
    limit: Ints
    along: Floats


def envelope(case: Case) -> Envelope:
    """The boundary at the speeds and headings of [envelope].

    Raises CaseError where friction or a speed is not known, or the power does not hold a speed.
    """
    count = case.envelope.headings if case.envelope is not None else 24
    headings = frozen(np.arange(count) * (2.0 * np.pi / count))
    return boundary(case, speeds_of(case), headings, power=case.performance.power)


def speeds_of(case: Case) -> Floats:
    """The speeds of [envelope], or ten even steps up to the highest."""
    if case.envelope is not None and case.envelope.speeds:
        return frozen(case.envelope.speeds)
    top = case.performance.speed
    if top is None:
        raise CaseError(
            f"{case.path}, envelope.speeds", "not given", "speeds, or [performance] speed", "add one of them"
        )
    return frozen(top * np.arange(1, 11) / 10)


def boundary(case: Case, speeds: Floats, headings: Floats, *, power: float | None) -> Envelope:
    """The boundary at speeds (V,) and headings (H,), with `power` [W] at the wheels or None for no limit of it."""
    if case.tyres.mu_x is None and case.tyres.mu_y is None:
        remedy = "add mu_x and mu_y under [tyres]"
        raise CaseError(f"{case.path}, tyres.mu_y", "not given", "the tyres' friction", remedy)
    if only_totals(case):
        case = with_middle_split(case, splits(case))
    speed = np.repeat(speeds, len(headings))
    direction = np.tile(np.stack([np.cos(headings), np.sin(headings)], axis=1), (len(speeds), 1))
    inputs = driven(case, speed)
    radius = np.zeros(len(speed))
    for _ in range(_ROUNDS):
        before = radius
        car = limited(case, accelerated(inputs, radius[:, None] * direction), power)
        radius = _reach(car, direction)
        if all(device.table is None for device in case.devices) or np.abs(radius - before).max() < _AGREED:
            break
    else:
        where = f"{case.path}, envelope"
        raise BalanceError(
            where, "the air and the boundary do not settle on each other", "", "look for a jump in a map"
        )
    acceleration = radius[:, None] * direction
    used, along = uses(car, acceleration)
    shape = (len(speeds), len(headings))
    return Envelope(
        speed=frozen(speeds),
        heading=frozen(headings),
        acceleration=frozen(acceleration.reshape(*shape, 2)),
        limit=frozen(used.argmax(axis=-1).reshape(shape), np.int64),
        along=frozen(along.reshape(shape)),
    )


def vertices(case: Case) -> tuple[Manoeuvre, ...]:
    """Every vertex of the boundary as a manoeuvre."""
    found = envelope(case)
    result = []
    for v, speed in enumerate(found.speed.tolist()):
        for h, heading in enumerate(np.degrees(found.heading).tolist()):
            pushed = found.along[v, h] >= 0.0
            result.append(
                Manoeuvre(
                    name=f"envelope_{speed:.4g}mps_{heading:.4g}deg",
                    speed=speed,
                    acceleration=frozen((*found.acceleration[v, h], 0.0)),
                    drive="accelerate" if pushed else "brake",
                    overall_ratio=gear_at(case, speed) if pushed else None,
                    group=GROUP,
                    basis=f"boundary of grip and power: {LIMITS[found.limit[v, h]]}",
                )
            )
    return tuple(result)


def _reach(car: LimitedCar, direction: Floats) -> Floats:
    """First |a| (N,) beyond which a limit is passed along each direction (N, 2)."""
    start = _worst(car, np.zeros_like(direction))
    if np.any(start > 1.0 + _SLACK):
        _refuse_speed(car, start)
    far = np.full(len(direction), _FIRST)
    while np.any(inside := _worst(car, far[:, None] * direction) <= 1.0):
        far = np.where(inside, 2.0 * far, far)
        if far.max() > _FURTHEST:
            where = f"{car.case.path}, envelope"
            raise CaseError(
                where, "no limit was found", "a car that grip or power limits", "check [tyres] and the aero"
            )
    steps = np.linspace(0.0, 1.0, _STEPS + 1)[1:]
    walk = _worst(car, (steps[:, None] * far)[..., None] * direction) > 1.0
    first = walk.argmax(axis=0)
    low, high = first / _STEPS * far, (first + 1) / _STEPS * far
    for _ in range(_HALVINGS):
        middle = (low + high) / 2.0
        beyond = _worst(car, middle[:, None] * direction) > 1.0
        low, high = np.where(beyond, low, middle), np.where(beyond, middle, high)
    reached: Floats = low
    return reached


def _worst(car: LimitedCar, acceleration: Floats) -> Floats:
    worst: Floats = uses(car, acceleration)[0].max(axis=-1)
    return worst


def _refuse_speed(car: LimitedCar, start: Floats) -> None:
    n = int(np.argmax(start))
    used, along = uses(car, np.zeros((len(start), 2)))
    needed = along[n] * car.speed[n] / 1e3
    raise CaseError(
        f"{car.case.path}, envelope.speeds",
        f"at {car.speed[n]:.4g} m/s the car cannot even hold its speed: it needs {needed:.4g} kW, and the limit is "
        f"{LIMITS[int(used[n].argmax())]}",
        "speeds the power can hold against drag",
        "lower the speed, or check [performance] power and the drag of the devices",
    )
