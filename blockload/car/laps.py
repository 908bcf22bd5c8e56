"""A load case per sample of a lap, all samples at once.

What acts on the bodies before the wheels answer is linear in a few numbers per sample: one for the weight, the three
accelerations, the crank's, force and moment of each device. Their unit loads are worked out once, by the same rules as
those of single load cases; from there on the wheels, corners, faces, studs and links are computed for a whole chunk of
samples, the sources of each sample taken together. A sample is the load case that the same manoeuvre would be.

Where the tyres push forward the driven axle does it, where they hold back the brakes do, by their balance: an engine
that brakes is counted among the brakes. Measured loads stand in for computed vertical ones as `lap_measured` says;
side forces are shared as computed. A measured torque stands in for the one that the tyres' force and the ratio give.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace
from types import MappingProxyType
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ..arrays import Floats, frozen
from ..case.model import CORNERS, Case, LapHistory
from ..errors import CaseError
from .aero import Air, constant_air, outside, read_maps
from .corners import CornerLoads, corner_loads
from .crank import crank_torque
from .faces import chain_loads, face_loads, front_rear_gap
from .lap_measured import MeasuredLoads, difference, measured_loads
from .lap_model import LapFace, LapLoads
from .lap_units import UnitLoads, unit_loads
from .lift import below_zero
from .limits import axle_use
from .manoeuvres import KINDS, Inputs
from .model import BODIES
from .resampling import Lost, timed
from .ride_height import in_the_air
from .sources import Elementary
from .suspension import body_wrenches, corner_wrenches, link_loads
from .tyres import tyre_use
from .wheels import TyreForces, tyre_answer

CHUNK = 4096
_MEMBERS = {"pushrod": "pushrod", "damper": "spring"}
_DOWN = (0.0, 0.0, -1.0)


def lap_loads(
    case: Case,
    history: LapHistory,
    *,
    overall_ratio: float | None = None,
    block_torsion: float | None = None,
    chunk: int = CHUNK,
    lost: tuple[Lost, ...] = (),
) -> LapLoads:
    """Balanced loads of every sample of a lap.

    Parameters
    ----------
    case : Case
        The car; where only totals of its aero are known, it stands at the mean of the extreme splits.
    history : LapHistory
        The samples (N,), resampled or as recorded.
    overall_ratio : float, optional
        Stands in where the history has none.
    block_torsion : float, optional
        The block's own torsional stiffness [N·m/rad], as for `balance`.
    chunk : int
        Samples worked on together: memory grows with it, results do not change.
    lost : tuple of Lost
        What resampling has taken from the peaks, handed on.

    Raises
    ------
    CaseError
        For a measured load that the car has no place for, or an aero map read outside its grid.

    """
    history = timed(history)
    setup = unit_loads(case, block_torsion)
    measured = measured_loads(setup, history)
    count = len(history.speed)
    whole: dict[str, Any] = {}
    for first in range(0, count, chunk):
        part = slice(first, min(first + chunk, count))
        for name, values in _samples(setup, measured, history, part, overall_ratio):
            if name not in whole:
                whole[name] = np.empty((count, *values.shape[1:]), dtype=values.dtype)
            whole[name][part] = values
    return _gathered(setup, history, whole, measured, lost)


Values = NDArray[np.float64] | NDArray[np.bool_]


def _samples(
    setup: UnitLoads, measured: MeasuredLoads | None, history: LapHistory, part: slice, ratio: float | None
) -> Iterator[tuple[str, Values]]:
    """Names and values (n, ...) of everything a lap keeps, for some of its samples."""
    case, frame = setup.case, setup.frame
    inputs = _air(setup, _inputs(setup, history, part, ratio), history, part)
    own = _loads(setup, inputs)
    inputs = replace(inputs, brake=-own[..., 0].sum(axis=1) < 0.0)
    kick = np.zeros((len(own), 4))
    tyres, corners, wrenches = _answer(setup, inputs, own, kick)
    if measured is not None:
        kick[:, measured.wheels] = difference(setup, measured, history, part, tyres, wrenches)
        own = own + np.tensordot(kick, setup.per_kick, axes=1)
        corners, wrenches = _corners(setup, inputs, own, tyres)
    torque = crank_torque(case, inputs, frame, tyres.along)
    if "torque" in history.channels:
        torque = history.channels["torque"][part]
    couple = -case.drive.crank_direction * np.nan_to_num(torque)
    handed = body_wrenches(setup.maps, wrenches)
    chain = chain_loads(own[:, None], frame, corners, handed, couple[:, None])
    force = tyres.force[:, 0].copy()
    force[..., 2] += kick
    motion = kick @ setup.kick_motion
    yield "acceleration", inputs.acceleration + motion[:, :3]
    yield "angular_acceleration", motion[:, 3:]
    yield "wheel_force", force
    yield "extra_load", kick
    yield "crank_torque", torque
    yield "tyre_use", tyre_use(case.tyres, force)
    yield "axle_use", _axle_use(case, force)
    yield "ride_height", inputs.air.ride_height
    yield "outside", np.array([mark != "" for mark in inputs.air.outside])
    yield "lifted", tyres.lifted
    yield "pulled", _pulled(force)
    yield "gap", np.where(np.isfinite(chain).all(axis=(1, 2, 3)), front_rear_gap(chain), np.nan)
    for name, face in face_loads(case, chain).items():
        yield f"wrench.{name}", face.wrench[:, 0]
        yield f"axial.{name}", face.stud_axial[:, 0]
        yield f"shear.{name}", face.stud_shear[:, 0]
    for corner, links in link_loads(setup.maps, wrenches).items():
        yield f"links.{corner}", links.tension[:, 0]


def _inputs(setup: UnitLoads, history: LapHistory, part: slice, ratio: float | None) -> Inputs:
    """The samples as manoeuvres; whether a sample brakes is filled in once its loads are known."""
    case, speed = setup.case, history.speed[part]
    count = len(speed)

    def channel(name: str, otherwise: float) -> Floats:
        values = history.channels.get(name)
        return np.full(count, otherwise) if values is None else values[part]

    none = np.zeros(count, dtype=bool)
    rate = channel("crank_acceleration", 0.0)
    if rate.any() and case.drive.crank_inertia is None:
        remedy = "give it, or leave the column crank_acceleration out"
        raise CaseError("[drive] crank_inertia", "not given", "above 0 kg*m^2", remedy)
    return Inputs(
        names=_names(case, history, part),
        speed=speed,
        pressure=0.5 * case.air_density * speed**2,
        acceleration=history.acceleration[part],
        coast=none,
        brake=none,
        ratio=channel("overall_ratio", np.nan if ratio is None else ratio),
        crank_rate=rate,
        extra=np.zeros((count, 4, 3)),
        yaw=channel("yaw", 0.0),
        steer=channel("steer", 0.0),
        state=(None,) * count if history.state is None else history.state[part],
        air=constant_air(case, count),
        keep=dict.fromkeys(KINDS, np.ones(count)),
        down=np.broadcast_to(_DOWN, (count, 3)),
        point_forces=((),) * count,
        supports=((),) * count,
    )


def _names(case: Case, history: LapHistory, part: slice) -> tuple[str, ...]:
    """Names of the samples for messages; only aero maps have any to give."""
    count = len(history.speed[part])
    if history.time is None or all(device.table is None for device in case.devices):
        return ("",) * count
    return tuple(f"{history.name} at {time:.6g} s" for time in history.time[part].tolist())


def _air(setup: UnitLoads, inputs: Inputs, history: LapHistory, part: slice) -> Inputs:
    """The air that each sample meets, at ride heights measured or worked out."""
    if "ride_front" not in history.channels:
        return in_the_air(setup.case, inputs, setup.car)
    where = {"speed": inputs.speed, "yaw": inputs.yaw, "steer": inputs.steer}
    maps = read_maps(setup.case, where, inputs.state, inputs.names)
    ride = np.stack([history.channels[name][part] for name in ("ride_front", "ride_rear")], axis=1)
    if maps is None:
        return inputs
    marks = outside(maps, ride, inputs.pressure, inputs.names)
    area, volume = maps.at(ride)
    return replace(inputs, air=Air(area=area, volume=volume, ride_height=ride, outside=marks))


def _loads(setup: UnitLoads, inputs: Inputs) -> Floats:
    """Loads (n, 7, 6) on the bodies before the wheels answer."""
    air = inputs.air
    device = np.concatenate([air.area.sum(axis=2), air.volume.sum(axis=2)], axis=-1) * inputs.pressure[:, None, None]
    per = np.concatenate([setup.per_a, setup.per_rate[None], setup.per_device]).reshape(-1, 6 * len(BODIES))
    given = np.concatenate([inputs.acceleration, inputs.crank_rate[:, None], device.reshape(len(device), -1)], axis=1)
    result: Floats = setup.still + (given @ per).reshape(-1, len(BODIES), 6)
    return result


def _answer(setup: UnitLoads, inputs: Inputs, own: Floats, kick: Floats) -> tuple[TyreForces, CornerLoads, Floats]:
    """What the tyres answer, and the corners' loads with their wrenches (n, 1, 4, 6) about the wheel centres."""
    count = len(own)
    masses_of = setup.car.mass[3:].reshape(2, 2).sum(axis=1)
    contact = np.zeros((count, 1, 4, 3))
    contact[:, 0, :, 2] = kick
    loads = Elementary(
        loads=own[:, None],
        motion=np.zeros((count, 1, 6)),
        engine_motion=np.zeros((count, 1, 6)),
        contact=contact,
        unsprung=-inputs.acceleration[:, None, 1:2] * masses_of,
        moving=np.zeros((count, 1), dtype=bool),
    )
    tyres = tyre_answer(setup.case, inputs, loads, loads, setup.block_torsion)
    return (tyres, *_corners(setup, inputs, own, tyres))


def _corners(setup: UnitLoads, inputs: Inputs, own: Floats, tyres: TyreForces) -> tuple[CornerLoads, Floats]:
    corners = corner_loads(setup.case, inputs, setup.frame, own[:, None, 3:], tyres.force)
    return corners, corner_wrenches(setup.frame, corners.resultant)


def _pulled(force: Floats) -> NDArray[np.bool_]:
    """Whether the ground would have to pull at some wheel, (n,)."""
    result: NDArray[np.bool_] = np.any(below_zero(force[..., 2].reshape(-1, 2, 2)), axis=(1, 2))
    return result


def _axle_use(case: Case, force: Floats) -> Floats:
    """Share of its grip that each axle uses, (n, 2); nan where friction is unknown."""
    if case.tyres.mu_x is None and case.tyres.mu_y is None:
        return np.full((len(force), 2), np.nan)
    pairs = force.reshape(-1, 2, 2, 3)
    along, lateral = pairs[..., 0].sum(axis=-1), pairs[..., 1].sum(axis=-1)
    used: Floats = axle_use(case, along, lateral, np.maximum(pairs[..., 2], 0.0))
    return used


def _gathered(
    setup: UnitLoads,
    history: LapHistory,
    whole: dict[str, Any],
    measured: MeasuredLoads | None,
    lost: tuple[Lost, ...],
) -> LapLoads:
    for values in whole.values():
        values.flags.writeable = False
    count = len(history.speed)
    nothing = np.zeros((1, 1, 3, 6))
    faces = {
        name: LapFace(
            name=name,
            reference=face.reference,
            studs=face.studs,
            stud_at=face.stud_at,
            wrench=whole[f"wrench.{name}"],
            stud_axial=whole[f"axial.{name}"],
            stud_shear=whole[f"shear.{name}"],
        )
        for name, face in face_loads(setup.case, nothing).items()
    }
    corners = [corner for corner in CORNERS if f"links.{corner}" in whole]
    kept = {name: values for name, values in whole.items() if "." not in name}
    return LapLoads(
        name=history.name,
        time=frozen(np.zeros(count)) if history.time is None else history.time,
        distance=frozen(np.full(count, np.nan)) if history.distance is None else history.distance,
        speed=history.speed,
        faces=MappingProxyType(faces),
        link_names=MappingProxyType({c: setup.maps[CORNERS.index(c) // 2].members for c in corners}),
        links=MappingProxyType({c: whole[f"links.{c}"] for c in corners}),
        measured=() if measured is None else measured.names,
        lost=lost,
        **kept,
    )
