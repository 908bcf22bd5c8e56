"""Elementary loads, source by source: what acts on each body before the wheels answer.

A source is one device, one body's weight and inertia, the crank's inertia couple, or one extra wheel force. What a
source calls for in acceleration comes with it: coasting, a device's drag slows the whole car; an extra wheel force
moves the rigid car. The inertia of body b under a motion (a0 of the car's CG, alpha) is, by d'Alembert,
    F_b = -m_b (a0 + alpha x (r_b - r_car)),   M_b = -J_b alpha about its own cg;
the term omega x (omega x r) is left out.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..arrays import Floats
from ..case.model import CARRIERS, CORNERS, Case
from .aero import device_load
from .bodies import BODY_SOURCES, Chassis, Masses
from .crank import inertia_couple
from .manoeuvres import Inputs
from .model import BODIES
from .point_forces import add_points, point_names
from .wrench import wrench

ENGINE = BODIES.index("engine")


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Elementary:
    """Loads before the wheels answer.

    loads (C, S, B, 6) about the origin; motion (C, S, 6): acceleration of the car's CG and angular acceleration that
    belong to the source; engine_motion (C, S, 6): a - g and alpha of the engine as far as the source contains it;
    contact (C, S, 4, 3): extra wheel forces; unsprung (C, S, 2): lateral d'Alembert force on each axle's corners;
    moving (C, S): sources that move the rigid car instead of being answered by the wheels.
    """

    loads: Floats
    motion: Floats
    engine_motion: Floats
    contact: Floats
    unsprung: Floats
    moving: NDArray[np.bool_]

    @property
    def answered(self) -> Floats:
        """Loads (C, S, B, 6) that the wheels answer: those of extra forces move the rigid car instead."""
        result: Floats = self.loads * ~self.moving[..., None, None]
        return result


def source_names(case: Case, inputs: Inputs) -> tuple[str, ...]:
    """Names of the sources, in the order of axis S."""
    used = np.abs(inputs.extra).max(axis=(0, 2)) > 0
    extras = (f"extra.{corner}" for corner, there in zip(CORNERS, used, strict=True) if there)
    devices = (f"aero.{device.name}" for device in case.devices)
    return (*devices, *BODY_SOURCES, "crank", "crank_inertia", *extras, *point_names(inputs))


def elementary(case: Case, inputs: Inputs, names: tuple[str, ...], car: Masses, frame: Chassis) -> Elementary:
    """Elementary loads of every source but the input shaft's couple, which the wheels do not answer."""
    cases, count = len(inputs.names), len(names)
    result = Elementary(
        loads=np.zeros((cases, count, len(BODIES), 6)),
        motion=np.zeros((cases, count, 6)),
        engine_motion=np.zeros((cases, count, 6)),
        contact=np.zeros((cases, count, 4, 3)),
        unsprung=np.zeros((cases, count, 2)),
        moving=np.tile([name.startswith("extra.") for name in names], (cases, 1)),
    )
    _add_devices(result, case, inputs, car)
    _add_bodies(result, case, inputs, names, car)
    result.loads[:, names.index("crank_inertia"), ENGINE, 3] = inertia_couple(case, inputs)
    _add_extras(result, inputs, names, car, frame)
    add_points(result, inputs, names, car, inertia_matrices(car))
    return result


def inertia_matrices(car: Masses) -> Floats:
    """Matrices (B, 6, 6) from (a0 of the car's CG, alpha) to each body's m a and J alpha, about the origin."""
    offset = _cross(car.cg - car.car_cg)
    arm = _cross(car.cg)
    result = np.zeros((len(BODIES), 6, 6))
    result[:, :3, :3] = np.eye(3)
    result[:, :3, 3:] = -offset
    result[:, :3] *= car.mass[:, None, None]
    result[:, 3:] = arm @ result[:, :3]
    result[:, 3:, 3:] += car.inertia
    return result


def _cross(vectors: Floats) -> Floats:
    """Matrices (n, 3, 3) of the product v x ."""
    x, y, z = vectors.T
    zero = np.zeros_like(x)
    return np.array([[zero, -z, y], [z, zero, -x], [-y, x, zero]]).transpose(2, 0, 1)


def _add_devices(result: Elementary, case: Case, inputs: Inputs, car: Masses) -> None:
    for k, device in enumerate(case.devices):
        force, moment = device_load(k, inputs.air, inputs.pressure, inputs.keep)
        body = result.loads[:, k, CARRIERS.index(device.on)]
        body[:] = wrench(force, device.at)
        body[:, 3:] += moment
        slowing = np.where(inputs.coast, force[:, 0] / car.total, 0.0)
        result.motion[:, k, 0] = result.engine_motion[:, k, 0] = slowing
        # no rotation: the wheels answer the pitching couple of the drag
        inertia = np.einsum("bi,c->cbi", inertia_matrices(car)[:, :, 0], slowing)
        result.loads[:, k] -= inertia


def _add_bodies(result: Elementary, case: Case, inputs: Inputs, names: tuple[str, ...], car: Masses) -> None:
    own = inputs.acceleration * inputs.keep["inertia"][:, None]
    gravity = case.gravity * inputs.keep["weight"][:, None] * inputs.down
    for name, bodies in BODY_SOURCES.items():
        s = names.index(name)
        for b in bodies:
            result.loads[:, s, b] = wrench(car.mass[b] * (gravity - own), car.cg[b])
            result.motion[:, s, :3] += own * car.mass[b] / car.total
    result.engine_motion[:, names.index("body.engine"), :3] = own - gravity
    for axle, name in enumerate(("body.front_corners", "body.rear_corners")):
        result.unsprung[:, names.index(name), axle] = -2 * car.mass[3 + 2 * axle] * own[:, 1]


def _add_extras(result: Elementary, inputs: Inputs, names: tuple[str, ...], car: Masses, frame: Chassis) -> None:
    inverse = np.linalg.inv(car.car_inertia)
    matrices = inertia_matrices(car)
    for i, corner in enumerate(CORNERS):
        if f"extra.{corner}" not in names:
            continue
        s = names.index(f"extra.{corner}")
        force = inputs.extra[:, i] * inputs.keep["extra"][:, None]
        spin = wrench(force, frame.contact[i], car.car_cg)[:, 3:] @ inverse.T
        motion = np.concatenate([force / car.total, spin], axis=1)
        result.contact[:, s, i] = force
        result.motion[:, s] = result.engine_motion[:, s] = motion
        result.engine_motion[:, s, :3] += np.cross(spin, car.cg[ENGINE] - car.car_cg)
        result.loads[:, s] -= np.einsum("bij,cj->cbi", matrices, motion)
        result.loads[:, s, 3 + i] += wrench(force, frame.contact[i])
