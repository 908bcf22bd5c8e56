"""How much of its limits a car uses at a speed and an acceleration in the plane of the road.

    an axle's grip:   hypot(F_x / mu_x, F_y / mu_y) over the sum of its wheels' Fz [1 - k (Fz - Fz0)],
    the power:        F_x v / P,
    tipping:          1 - (load of the next wheel to lift) / (mean wheel load), one wheel being let go.
Each is 1 at the limit. Forward force is the driven axle's, braking force is shared by the brakes' balance; wheel loads
are the car's own, with a lifted wheel let go as in every load case. An axle at its grip may ask more of one of its two
tyres, since drive and brake force are shared equally and side force by load.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import Case, Manoeuvre
from .bodies import chassis, masses
from .chassis import elastic_split, in_series, lumps
from .lift import first_to_lift
from .manoeuvres import DRIVEN, Inputs, read
from .ride_height import in_the_air
from .sources import elementary, source_names
from .tyres import grip_load
from .wheels import axle_loads, side_loads

LIMITS = ("front grip", "rear grip", "power", "two wheels off the ground")


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class LimitedCar:
    """What the wheels answer, affine in the acceleration: wrenches on the lumps and lateral force on the corners.

    still (N, 2, 6) at each speed; per_a (2, 2, 6) and unsprung (2, 2) per unit of a_x and a_y; power [W] at the wheels,
    None for no limit of it.
    """

    case: Case
    speed: Floats
    still: Floats
    per_a: Floats
    unsprung: Floats
    power: float | None


def driven(case: Case, speed: Floats) -> Inputs:
    """Driven manoeuvres at speeds (N,), for now without any acceleration."""
    still = frozen(np.zeros(3))
    return read(
        case,
        [
            Manoeuvre(name=f"envelope at {v:.4g} m/s", speed=v, acceleration=still, drive="accelerate")
            for v in np.asarray(speed).tolist()
        ],
    )


def accelerated(inputs: Inputs, acceleration: Floats) -> Inputs:
    """The same manoeuvres with accelerations (N, 2)."""
    return replace(inputs, acceleration=np.pad(acceleration, ((0, 0), (0, 1))))


def limited(case: Case, inputs: Inputs, power: float | None) -> LimitedCar:
    """The car at each speed, in the air it meets at the accelerations of `inputs`."""
    car, frame = masses(case), chassis(case)
    inputs = in_the_air(case, inputs, car)
    names = source_names(case, inputs)
    none = replace(inputs, acceleration=np.zeros_like(inputs.acceleration))
    still = lumps(elementary(case, none, names, car, frame).loads.sum(axis=1))
    rest = accelerated(driven(case, np.zeros(3)), np.array([[0.0, 0.0], [1.0, 0.0], [0.0, 1.0]]))
    units = elementary(case, rest, names, car, frame)
    per_a = lumps(units.loads.sum(axis=1))
    return LimitedCar(
        case=case,
        speed=inputs.speed,
        still=still,
        per_a=per_a[1:] - per_a[0],
        unsprung=units.unsprung.sum(axis=1)[1:],
        power=power,
    )


def uses(car: LimitedCar, acceleration: Floats) -> tuple[Floats, Floats]:
    """Use of every limit (..., N, 4), in the order of LIMITS, and the tyres' force along x (..., N) [N]."""
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
    grip = axle_use(case, totals.along, totals.lateral, np.maximum(loads, 0.0))
    drawn = np.zeros_like(along) if car.power is None else np.maximum(along, 0.0) * car.speed / car.power
    return np.concatenate([grip, np.stack([drawn, _tipping(loads, lift)], axis=-1)], axis=-1), along


def axle_use(case: Case, along: Floats, lateral: Floats, loads: Floats) -> Floats:
    """Share of its grip that each axle uses (..., 2), from its forces (..., 2) and its wheels' loads (..., 2, 2)."""
    mu_x, mu_y = (case.tyres.mu_x or case.tyres.mu_y), (case.tyres.mu_y or case.tyres.mu_x)
    demand = np.hypot(along / (mu_x or np.nan), lateral / (mu_y or np.nan))
    grip = np.nan_to_num(grip_load(case.tyres, loads)).sum(axis=-1)
    beyond = np.where(demand > 0, np.inf, 0.0)
    result: Floats = np.divide(demand, grip, out=beyond, where=grip > 0)
    return result


def _tipping(loads: Floats, lift: Floats) -> Floats:
    """How near the second wheel is to lifting, (...,), from loads (..., 2, 2) with the wheels of `lift` let go."""
    flat = loads.reshape(*loads.shape[:-2], 4)
    free = np.stack([lift > 0, lift < 0], axis=-1).reshape(flat.shape)
    ordered = np.sort(np.where(free, -np.inf, flat), axis=-1)
    mean = flat.sum(axis=-1) / 4.0
    result: Floats = np.where(
        mean > 0, 1.0 - np.divide(ordered[..., 1], mean, out=np.zeros_like(mean), where=mean > 0), np.inf
    )
    return result
