"""Spinning parts and the turning of the car itself: left out of the balance, and how much that is.

A part with spin s = I w resists turning with the car at the rate W by the couple -W x s, and a change of its spin by
-I dw/dt. In a steady turn W = a_y / v about z, and a wheel spins at v / R about y:
    each wheel:  I a_y / R about x, whatever the speed, on top of the load transfer m a_y h,
    the crank:   s I w a_y / v about y (s: sign of its rotation about x),
    speeding up: I a_x / R about y at each wheel, on top of the load transfer m a_x h,
    the car:     w^2 r, the centripetal part of a point's acceleration at a distance r from the car's CG.
Wheel inertia is taken as the corner's own about y: a little too much, since the upright does not spin. (Any textbook of
mechanics; J. P. Den Hartog, *Mechanics*, 1948, treats the gyroscope.)
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import Floats
from ..case.model import Case
from .bodies import AXLES, chassis, masses
from .model import LoadCases
from .torque import crank_speed, driven_radius
from .wrench import sealed


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Neglected:
    """One effect left out: its size (C,) in `unit`, and as a share (C,) of `beside` (nan where that is nothing)."""

    name: str
    size: Floats
    unit: str
    beside: str
    share: Floats


def neglected(case: Case, cases: LoadCases) -> tuple[Neglected, ...]:
    """Spinning-inertia and turning terms of every load case, sized; the crank's is nan without ratio or inertia."""
    car, frame = masses(case), chassis(case)
    acceleration = cases.acceleration.sum(axis=1)
    along, across = np.abs(acceleration[:, 0]), np.abs(acceleration[:, 1])
    inertia = np.repeat([case.axles[name].corner.inertia[1, 1] for name in AXLES], 2)
    wheels = float((inertia / frame.radius).sum())
    height = car.total * car.car_cg[2]
    turn = np.sqrt(cases.omega_squared)
    crank = (case.drive.crank_inertia or np.nan) * turn * _crank(case, cases)
    arm = float(np.abs(np.array([case.faces[name].x for name in case.faces]) - car.car_cg[0]).max())
    return (
        _one(
            "gyroscopic couple of the wheels", wheels * across, "N*m", "lateral load transfer m a_y h", height * across
        ),
        _one("spinning up of the wheels", wheels * along, "N*m", "longitudinal load transfer m a_x h", height * along),
        _one(
            "gyroscopic couple of the crank",
            crank,
            "N*m",
            "bending at the front face",
            np.abs(cases.section("front")[:, 4]),
        ),
        _one(
            "centripetal part at the farther face", cases.omega_squared * arm, "m/s^2", "lateral acceleration", across
        ),
    )


def _crank(case: Case, cases: LoadCases) -> Floats:
    return np.asarray(crank_speed(cases.speed, cases.overall_ratio, driven_radius(case)))


def _one(name: str, size: Floats, unit: str, beside: str, whole: Floats) -> Neglected:
    share = np.divide(size, whole, out=np.full_like(size, np.nan), where=whole > 0)
    return Neglected(name=name, size=sealed(size), unit=unit, beside=beside, share=sealed(share))
