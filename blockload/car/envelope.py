"""The grip- and power-limited boundary of what the car can do, over speed and heading in the a_x-a_y plane.

For a speed v and a heading theta the boundary is the first |a| along (cos theta, sin theta) at which
    an axle is at its grip:  hypot(F_x / mu_x, F_y / mu_y) = sum over its wheels of Fz [1 - k (Fz - Fz0)],
    the drive is at its power:  F_x v = P,
    or a second wheel leaves the ground.
Forward force is the driven axle's, braking force is shared by the brakes' balance; wheel loads are the car's own, with
a lifted wheel let go as in every load case. An axle at its grip may ask more of one of its two tyres, since drive and
brake force are shared equally and side force by load. All speeds and headings are searched at once: a coarse walk
outwards to the first point beyond a limit, then bisection. With aero maps the air is read again at the boundary until
both agree.
The picture of such a boundary over speed is usual practice (W. F. Milliken, D. L. Milliken, *Race Car Vehicle
Dynamics*, SAE 1995, ch. 9; chapter from memory).
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ..arrays import Floats, Ints, frozen
from ..case.model import Case, Manoeuvre
from ..errors import BalanceError, CaseError
from .aero_split import only_totals, splits, with_middle_split
from .bodies import chassis, masses
from .catalogue.figures import gear_at
from .chassis import elastic_split, in_series, lumps
from .lift import below_zero, first_to_lift
from .manoeuvres import DRIVEN, Inputs, read
from .ride_height import in_the_air
from .sources import elementary, source_names
from .tyres import grip_load
from .wheels import axle_loads, side_loads

LIMITS = ("front grip", "rear grip", "power", "two wheels off the ground")
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


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class _Car:
    """What the wheels answer, affine in the acceleration: wrenches on the lumps and lateral force on the corners.

    still (N, 2, 6) at each speed; per_a (2, 2, 6) and unsprung (2, 2) per unit of a_x and a_y.
    """

    case: Case
    speed: Floats
    still: Floats
    per_a: Floats
    unsprung: Floats
    power: float | None


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
    inputs = _inputs(case, speed)
    radius = np.zeros(len(speed))
    for _ in range(_ROUNDS):
        before = radius
        car = _affine(case, _at(inputs, radius[:, None] * direction), power)
        radius = _reach(car, direction)
        if all(device.table is None for device in case.devices) or np.abs(radius - before).max() < _AGREED:
            break
    else:
        where = f"{case.path}, envelope"
        raise BalanceError(
            where, "the air and the boundary do not settle on each other", "", "look for a jump in a map"
        )
    acceleration = radius[:, None] * direction
    uses, along = _uses(car, acceleration)
    shape = (len(speeds), len(headings))
    return Envelope(
        speed=frozen(speeds),
        heading=frozen(headings),
        acceleration=frozen(acceleration.reshape(*shape, 2)),
        limit=frozen(uses.argmax(axis=-1).reshape(shape), np.int64),
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


def axle_use(case: Case, along: Floats, lateral: Floats, loads: Floats) -> Floats:
    """Share of its grip that each axle uses (..., 2), from its forces (..., 2) and its wheels' loads (..., 2, 2)."""
    mu_x, mu_y = (case.tyres.mu_x or case.tyres.mu_y), (case.tyres.mu_y or case.tyres.mu_x)
    demand = np.hypot(along / (mu_x or np.nan), lateral / (mu_y or np.nan))
    grip = np.nan_to_num(grip_load(case.tyres, loads)).sum(axis=-1)
    beyond = np.where(demand > 0, np.inf, 0.0)
    result: Floats = np.divide(demand, grip, out=beyond, where=grip > 0)
    return result


def _inputs(case: Case, speed: Floats) -> Inputs:
    """Every point of the search as a driven manoeuvre, for now without any acceleration."""
    still = frozen(np.zeros(3))
    names = [f"envelope at {v:.4g} m/s" for v in speed]
    return read(
        case,
        [
            Manoeuvre(name=n, speed=float(v), acceleration=still, drive="accelerate")
            for n, v in zip(names, speed, strict=True)
        ],
    )


def _at(inputs: Inputs, acceleration: Floats) -> Inputs:
    return replace(inputs, acceleration=np.pad(acceleration, ((0, 0), (0, 1))))


def _affine(case: Case, inputs: Inputs, power: float | None) -> _Car:
    """The car at each speed in the air it meets at the accelerations of `inputs`."""
    car, frame = masses(case), chassis(case)
    inputs = in_the_air(case, inputs, car)
    names = source_names(case, inputs)
    none = replace(inputs, acceleration=np.zeros_like(inputs.acceleration))
    still = lumps(elementary(case, none, names, car, frame).loads.sum(axis=1))
    rest = _at(_inputs(case, np.zeros(3)), np.array([[0.0, 0.0], [1.0, 0.0], [0.0, 1.0]]))
    units = elementary(case, rest, names, car, frame)
    per_a = lumps(units.loads.sum(axis=1))
    return _Car(
        case=case,
        speed=inputs.speed,
        still=still,
        per_a=per_a[1:] - per_a[0],
        unsprung=units.unsprung.sum(axis=1)[1:],
        power=power,
    )


def _reach(car: _Car, direction: Floats) -> Floats:
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


def _worst(car: _Car, acceleration: Floats) -> Floats:
    worst: Floats = _uses(car, acceleration)[0].max(axis=-1)
    return worst


def _uses(car: _Car, acceleration: Floats) -> tuple[Floats, Floats]:
    """Use of every limit (..., N, 4), in the order of LIMITS, and the force along x (..., N)."""
    case = car.case
    call = car.still + np.einsum("...a,alk->...lk", acceleration, car.per_a)
    unsprung = acceleration @ car.unsprung
    along = -call[..., 0].sum(axis=-1)
    braked = np.array((case.drive.brake_front_share, 1.0 - case.drive.brake_front_share))
    shares = np.where(along[..., None] < 0.0, braked, np.array(DRIVEN[case.drive.axle]))
    front, rear = (case.axles[name].roll_stiffness for name in ("front", "rear"))
    split = elastic_split(front, rear, in_series(case.chassis_torsion))
    totals = axle_loads(case, call, unsprung, shares, split)
    lift = first_to_lift(side_loads(case, totals))
    if lift.any():
        totals = axle_loads(case, call, unsprung, shares, split, lift)
    loads = side_loads(case, totals)
    tipped = below_zero(loads).any(axis=(-2, -1)) | (totals.vertical < 0).any(axis=-1)
    grip = axle_use(case, totals.along, totals.lateral, np.maximum(loads, 0.0))
    drawn = np.zeros_like(along) if car.power is None else np.maximum(along, 0.0) * car.speed / car.power
    others = np.stack([drawn, np.where(tipped, np.inf, 0.0)], axis=-1)
    return np.concatenate([grip, others], axis=-1), along


def _refuse_speed(car: _Car, start: Floats) -> None:
    n = int(np.argmax(start))
    uses, along = _uses(car, np.zeros((len(start), 2)))
    needed = along[n] * car.speed[n] / 1e3
    raise CaseError(
        f"{car.case.path}, envelope.speeds",
        f"at {car.speed[n]:.4g} m/s the car cannot even hold its speed: it needs {needed:.4g} kW, and the limit is "
        f"{LIMITS[int(uses[n].argmax())]}",
        "speeds the power can hold against drag",
        "lower the speed, or check [performance] power and the drag of the devices",
    )
