"""The free-body tables: every force on every body, one line each, summed over the sources.

Each line is built from the numbers the load case hands on (wheel forces, accelerations, face wrenches, corner
resultants), not from the equations that closed it, so that summing a body's lines is a test of what is written.
"""

from __future__ import annotations

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import CORNERS, Case
from .aero import device_load
from .bodies import Chassis, Masses
from .manoeuvres import Inputs
from .model import BODIES, FaceLoads, Term
from .suspension import AxleMap, pickup_load
from .wrench import sealed

FACE_LABELS = ("front face", "rear face")
CRANK_LABELS = ("input shaft", "crank inertia")


def body_terms(case: Case, inputs: Inputs, car: Masses, motion: Floats) -> list[Term]:
    """Weight, inertia and aero forces, from the car's motion (C, 6)."""
    result = []
    for b, body in enumerate(BODIES):
        weight = car.mass[b] * case.gravity * inputs.keep["weight"][:, None] * inputs.down
        arm = np.broadcast_to(car.cg[b] - car.car_cg, weight.shape)
        inertia = -car.mass[b] * (motion[:, :3] + np.cross(motion[:, 3:], arm))
        result.append(_term(body, "weight", car.cg[b], weight))
        result.append(_term(body, "inertia", car.cg[b], inertia, -motion[:, 3:] @ car.inertia[b].T))
    for k, device in enumerate(case.devices):
        load = device_load(k, inputs.air, inputs.pressure, inputs.keep)
        result.append(_term(device.on, f"aero.{device.name}", device.at, *load))
    return result


def wheel_terms(frame: Chassis, wheel_force: Floats, shaft: Floats) -> list[Term]:
    """Tyre forces, from those by source (C, S, 4, 3), and half-shaft couples (C, 4) on corner and casing."""
    result = []
    tyre = wheel_force.sum(axis=1)
    for i, corner in enumerate(CORNERS):
        result.append(_term(corner, "tyre", frame.contact[i], tyre[:, i]))
        if shaft[:, i].any():
            casing, centre = BODIES[frame.casing[i]], frame.wheel_centre[i]
            couple = np.zeros_like(tyre[:, i])
            couple[:, 1] = shaft[:, i]
            result.append(_term(corner, "half-shaft", centre, np.zeros_like(couple), couple))
            result.append(_term(casing, f"half-shaft {corner}", centre, np.zeros_like(couple), -couple))
    return result


def pickup_terms(maps: tuple[AxleMap, AxleMap], wrenches: Floats) -> list[Term]:
    """Links (or the one resultant) on each corner, pick-up loads on the bodies, from `corner_wrenches` (C, 4, 6)."""
    result = []
    for k, axle in enumerate(maps):
        for side, corner in enumerate(axle.sides):
            for j, name in enumerate(corner.names):
                force = wrenches[:, 2 * k + side] @ corner.force[j].T
                result.append(_term(CORNERS[2 * k + side], name, corner.inboard[j], -force))
        for pickup in axle.pickups:
            load = pickup_load(pickup, wrenches)
            body, force, moment = BODIES[pickup.body], load[:, :3], load[:, 3:]
            result.append(_term(body, pickup.name, pickup.at, force, moment))
            if not axle.sides:
                result.append(_term(CORNERS[pickup.corner], body, pickup.at, -force, -moment))
    return result


def face_terms(front: FaceLoads, rear: FaceLoads) -> list[Term]:
    """Each face on both bodies it joins."""
    result = []
    for face, other, label in zip((front, rear), ("tub", "gearbox"), FACE_LABELS, strict=True):
        wrench = face.wrench.sum(axis=1)
        result.append(_term("engine", label, face.reference, wrench[:, :3], wrench[:, 3:]))
        result.append(_term(other, label, face.reference, -wrench[:, :3], -wrench[:, 3:]))
    return result


def crank_terms(car: Masses, shaft: Floats, inertia: Floats) -> list[Term]:
    """Couples (C,) about x: the input shaft's on the engine and its reverse on the gearbox; the crank's inertia."""
    none = np.zeros((len(shaft), 3))

    def about_x(couple: Floats) -> Floats:
        return couple[:, None] * (1.0, 0.0, 0.0)

    torque, rate = CRANK_LABELS
    return [
        _term("engine", torque, car.cg[1], none, about_x(shaft)),
        _term("gearbox", torque, car.cg[2], none, about_x(-shaft)),
        _term("engine", rate, car.cg[1], none, about_x(inertia)),
    ]


def _term(body: str, label: str, at: Floats, force: Floats, moment: Floats | None = None) -> Term:
    couple = np.zeros_like(force) if moment is None else moment
    return Term(body=body, label=label, at=frozen(at), force=sealed(force), moment=sealed(couple))
