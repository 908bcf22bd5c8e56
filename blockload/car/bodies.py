"""The seven rigid bodies of the car as arrays, in the order of `BODIES`.

The right-hand corner is the mirror image of the left one in the centre plane y = 0: its CG changes sign in y and its
inertia tensor is S J S with S = diag(1, -1, 1).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import CARRIERS, CORNERS, Axle, Case
from ..errors import CaseError

BODY_SOURCES = {
    "body.tub": (0,),
    "body.engine": (1,),
    "body.gearbox": (2,),
    "body.front_corners": (3, 4),
    "body.rear_corners": (5, 6),
}
AXLES = ("front", "rear")
_MIRROR = np.diag([1.0, -1.0, 1.0])


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Masses:
    """mass (7,), cg (7, 3), inertia (7, 3, 3) of each body about its own cg; the same of the whole car."""

    mass: Floats
    cg: Floats
    inertia: Floats
    total: float
    car_cg: Floats
    car_inertia: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Chassis:
    """Where wheels touch the ground and what carries them, corners in the order FL FR RL RR.

    contact (4, 3), wheel_centre (4, 3), radius (4,); carrier and casing (4,) index the body that takes the corner's
    forces where no links say otherwise, and the body whose casing takes the half-shaft's couple.
    """

    contact: Floats
    wheel_centre: Floats
    radius: Floats
    carrier: tuple[int, ...]
    casing: tuple[int, ...]


def masses(case: Case) -> Masses:
    """Mass, CG and inertia of the seven bodies and of the car."""
    bodies = [case.bodies[name] for name in ("tub", "engine", "gearbox")]
    mass = [body.mass for body in bodies]
    cg = [np.asarray(body.cg, dtype=float) for body in bodies]
    inertia = [np.asarray(body.inertia, dtype=float) for body in bodies]
    for name in AXLES:
        corner = case.axles[name].corner
        mass += [corner.mass, corner.mass]
        cg += [np.asarray(corner.cg), _MIRROR @ corner.cg]
        inertia += [np.asarray(corner.inertia), _MIRROR @ corner.inertia @ _MIRROR]
    m, r, J = np.array(mass), np.array(cg), np.array(inertia)
    total = float(m.sum())
    car_cg = m @ r / total
    d = r - car_cg
    steiner = np.einsum("b,bk,bk->b", m, d, d)[:, None, None] * np.eye(3) - np.einsum("b,bi,bj->bij", m, d, d)
    return Masses(
        mass=frozen(m),
        cg=frozen(r),
        inertia=frozen(J),
        total=total,
        car_cg=frozen(car_cg),
        car_inertia=frozen((J + steiner).sum(axis=0)),
    )


def chassis(case: Case) -> Chassis:
    """Contact points, wheel centres and carriers of the four corners."""
    contact, centre, radius, carrier, casing = [], [], [], [], []
    for name in AXLES:
        axle = case.axles[name]
        body = _carrier(axle)
        for side in (1.0, -1.0):
            contact.append((axle.x, side * axle.track / 2, 0.0))
            centre.append((axle.x, side * axle.track / 2, axle.loaded_radius))
            radius.append(axle.loaded_radius)
            carrier.append(body)
            casing.append(CARRIERS.index("gearbox") if name == "rear" else body)
    return Chassis(
        contact=frozen(contact),
        wheel_centre=frozen(centre),
        radius=frozen(radius),
        carrier=tuple(carrier),
        casing=tuple(casing),
    )


def corner_body(corner: str) -> int:
    """Index of a corner in `BODIES`."""
    return 3 + CORNERS.index(corner)


def _carrier(axle: Axle) -> int:
    if axle.carried_by not in CARRIERS:
        raise CaseError(f"[axles.{axle.name}] carried_by", repr(axle.carried_by), ", ".join(CARRIERS))
    return CARRIERS.index(axle.carried_by)
