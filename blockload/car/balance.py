"""From the car's figures and manoeuvres to balanced loads on seven bodies.

The order of work: elementary loads of every source; the total of each case, for the fractions that make sharing
non-linear (lateral force within an axle) and for the drive torque; every source with those fractions; corners, faces,
studs; the free-body tables and their residuals. With the fractions frozen a case is exactly the sum of its sources.
A case that keeps only some `parts` shares as the whole manoeuvre does.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import CORNERS, Case, Manoeuvre
from .aero import check_devices, device_force
from .bodies import Chassis, chassis, masses
from .corners import CornerLoads, corner_loads, drive_torque
from .faces import face_loads, front_rear_gap
from .manoeuvres import Inputs, read
from .model import LoadCases, LocalLoad
from .residual import refuse, residuals
from .sources import ENGINE, GEARBOX, elementary, source_names
from .terms import body_terms, crank_terms, face_terms, wheel_terms
from .wheels import axle_loads, axle_shares, left_shares, wheel_forces
from .wrench import moved


def balance(case: Case, manoeuvres: Sequence[Manoeuvre] | None = None) -> LoadCases:
    """Balanced load cases of a car: its own manoeuvres, or those given.

    Raises CaseError for a manoeuvre or a car that has no meaning, BalanceError for a residual above 1e-6.
    """
    check_devices(case)
    inputs = read(case, case.manoeuvres if manoeuvres is None else manoeuvres)
    car, frame = masses(case), chassis(case)
    names = source_names(case, inputs)
    loads = elementary(case, inputs, names, car, frame)
    whole = loads
    if not all(kept.all() for kept in inputs.keep.values()):
        whole = elementary(case, inputs.whole(), names, car, frame)

    shares = axle_shares(case, inputs)
    totals = axle_loads(case, whole.loads.sum(axis=(1, 2)), whole.unsprung.sum(axis=1), shares)
    left = left_shares(case, totals)
    answer = axle_loads(case, loads.loads.sum(axis=2), loads.unsprung, shares[:, None])
    tyre = wheel_forces(case, answer, left[:, None])

    torque = drive_torque(case, inputs, frame, totals.along) / inputs.ratio * inputs.keep["crank"]
    shaft = case.drive.crank_direction * np.nan_to_num(torque)
    loads.loads[:, names.index("crank"), ENGINE, 3] = -shaft
    loads.loads[:, names.index("crank"), GEARBOX, 3] = shaft

    corners = corner_loads(case, inputs, frame, loads.loads[:, :, 3:], tyre)
    chain = _chain(loads.loads, frame, corners)
    faces = face_loads(case, chain)
    wheel_force = tyre + loads.contact
    motion = loads.motion.sum(axis=1)
    crank_inertia = loads.loads[:, names.index("crank_inertia"), ENGINE, 3]
    terms = (
        *body_terms(case, inputs, car, motion),
        *crank_terms(car, shaft, crank_inertia),
        *wheel_terms(frame, wheel_force, corners),
        *face_terms(faces["front"], faces["rear"]),
    )
    residual = residuals(terms, car, len(inputs.names))
    refuse(residual, inputs.names)
    lifted = (wheel_forces(case, totals, left) + whole.contact.sum(axis=1))[..., 2] < 0
    return LoadCases(
        names=inputs.names,
        sources=names,
        speed=frozen(inputs.speed),
        downforce=_aero(case, inputs, "downforce"),
        drag=_aero(case, inputs, "drag"),
        acceleration=frozen(loads.motion[..., :3]),
        angular_acceleration=frozen(loads.motion[..., 3:]),
        engine_acceleration=frozen(loads.engine_motion[..., :3]),
        wheel_force=frozen(wheel_force),
        crank_torque=frozen(torque),
        crank_couple=frozen(loads.loads[:, :, ENGINE, 3] * _crank_only(names)),
        faces=faces,
        engine_loads=_engine_loads(case, inputs, frame, corners),
        terms=terms,
        residual=frozen(residual.max(axis=1)),
        front_rear_gap=frozen(front_rear_gap(chain)),
        omega_squared=frozen(_turning(inputs)),
        wheel_lift=frozen(lifted.any(axis=1), bool),
    )


def _chain(loads: Floats, frame: Chassis, corners: CornerLoads) -> Floats:
    """Loads (C, S, 3, 6) on tub, engine and gearbox about the origin, with what the corners hand on."""
    chain = loads[:, :, :3].copy()
    for i in range(len(CORNERS)):
        chain[:, :, frame.carrier[i]] += corners.resultant[:, :, i]
        chain[:, :, frame.casing[i], 4] -= corners.shaft[:, :, i]
    return chain


def _aero(case: Case, inputs: Inputs, kind: str) -> Floats:
    area = sum(getattr(device, f"{kind}_area") for device in case.devices)
    return frozen(inputs.pressure * area * inputs.keep[kind])


def _crank_only(names: tuple[str, ...]) -> Floats:
    return np.array([name in ("crank", "crank_inertia") for name in names], dtype=float)


def _turning(inputs: Inputs) -> Floats:
    """Square of the yaw rate a_y / v (C,) of a steady turn."""
    rate = np.divide(inputs.acceleration[:, 1], inputs.speed, out=np.zeros_like(inputs.speed), where=inputs.speed > 0)
    result: Floats = rate**2
    return result


def _engine_loads(case: Case, inputs: Inputs, frame: Chassis, corners: CornerLoads) -> tuple[LocalLoad, ...]:
    """Devices, and corners without links, that the engine itself carries."""
    result = []
    for k, device in enumerate(case.devices):
        if device.on == "engine":
            load = np.zeros((*corners.shaft.shape[:2], 6))
            load[:, k, :3] = device_force(device, inputs)
            result.append(_local(f"aero.{device.name}", device.attachment, device.at, load))
    for i, corner in enumerate(CORNERS):
        if frame.carrier[i] == ENGINE:
            centre = frame.wheel_centre[i]
            result.append(_local(f"corner.{corner}", None, centre, moved(corners.resultant[:, :, i], centre)))
            if frame.casing[i] == ENGINE:
                couple = np.zeros((*corners.shaft.shape[:2], 6))
                couple[:, :, 4] = -corners.shaft[:, :, i]
                result.append(_local(f"half-shaft.{corner}", None, centre, couple))
    return tuple(result)


def _local(name: str, attachment: str | None, at: Floats, load: Floats) -> LocalLoad:
    force, moment = frozen(load[..., :3]), frozen(load[..., 3:])
    return LocalLoad(name=name, attachment=attachment, at=at, force=force, moment=moment)
