"""Driveline events: a dumped clutch, and an engine that revs freely.

When the clutch bites, it passes T = T_gas + I |d omega/dt|: gas torque and what the slowing crank gives up. The block
feels the full T through the input shaft, and I |d omega/dt| back from the crank. T cannot exceed what the clutch holds
nor what the driven tyres hold, mu Fz R / i, whichever is less in this gear. The tyres' own load rises with the
acceleration they cause, F h / L, which is solved with them. Spinning wheels and shafts are left out.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import frozen
from ..case.model import Case, Manoeuvre
from ..errors import CaseError
from .bodies import masses
from .torque import driven_radius
from .tyres import grip_load

FREE_REV = 3000.0
"""Crank acceleration [rad/s^2] of an engine without a flywheel; common practice, unsourced."""
_STEPS = 60


@dataclass(frozen=True, slots=True, kw_only=True)
class ClutchDump:
    """A clutch dump in one gear.

    torque [N·m] at the clutch and what limits it ("clutch capacity" or "tyre grip"); wheel_force [N] of all driven
    wheels; acceleration [m/s^2] of the car; crank_rate [rad/s^2], negative.
    """

    overall_ratio: float
    torque: float
    limited_by: str
    wheel_force: float
    acceleration: float
    crank_rate: float


def clutch_dump(case: Case, overall_ratio: float, gas_torque: float = 0.0) -> ClutchDump:
    """Torque of a dumped clutch at rest; `gas_torque` [N·m] is what the cylinders give meanwhile.

    Raises CaseError where friction or the crank's inertia is not known.
    """
    if case.drive.crank_inertia is None or not case.drive.crank_inertia > 0:
        raise CaseError("[drive] crank_inertia", "not given", "above 0 kg*m^2", "a clutch dump slows the crank")
    if not overall_ratio > 0:
        raise CaseError("overall_ratio", f"{overall_ratio:g}", "a ratio above 0")
    lever = driven_radius(case) / overall_ratio
    grip = driven_grip(case) * lever
    capacity = case.drive.clutch_capacity
    held = capacity is not None and capacity < grip
    torque = float(capacity) if held and capacity is not None else grip
    force = torque / lever
    return ClutchDump(
        overall_ratio=overall_ratio,
        torque=torque,
        limited_by="clutch capacity" if held else "tyre grip",
        wheel_force=force,
        acceleration=force / masses(case).total,
        crank_rate=-max(torque - gas_torque, 0.0) / case.drive.crank_inertia,
    )


def dump_manoeuvre(dump: ClutchDump, name: str = "clutch_dump") -> Manoeuvre:
    """The load case of a clutch dump."""
    return Manoeuvre(
        name=name,
        acceleration=frozen((dump.acceleration, 0.0, 0.0)),
        drive="accelerate",
        overall_ratio=dump.overall_ratio,
        crank_acceleration=dump.crank_rate,
        basis=f"clutch dump at rest, limited by {dump.limited_by}",
    )


def free_revs(case: Case) -> tuple[Manoeuvre, ...]:
    """Revving up and down at rest, for an engine without a flywheel; none for an engine with one."""
    if case.engine.flywheel or case.drive.crank_inertia is None:
        return ()
    basis = f"no flywheel: {FREE_REV:g} rad/s^2 of crank acceleration, common practice (unsourced)"
    return tuple(
        Manoeuvre(name=f"free_rev_{word}", acceleration=frozen(np.zeros(3)), crank_acceleration=rate, basis=basis)
        for word, rate in (("up", FREE_REV), ("down", -FREE_REV))
    )


def driven_grip(case: Case) -> float:
    """Force [N] along x that all driven wheels can hold at rest, with the load that this force itself moves."""
    friction = case.tyres.mu_x or case.tyres.mu_y or case.tyre_friction
    if friction is None:
        raise CaseError("[tyres] mu_x", "not given", "the tyres' friction", "a clutch dump is limited by grip")
    car = masses(case)
    front, rear = case.axles["front"].x, case.axles["rear"].x
    weight = car.total * case.gravity
    moved = car.car_cg[2] / (front - rear)
    axles = {
        "front": [(weight * (car.car_cg[0] - rear) / (front - rear), -moved)],
        "rear": [(weight * (front - car.car_cg[0]) / (front - rear), moved)],
    }
    axles["all"] = axles["front"] + axles["rear"]
    force = 0.0
    for _ in range(_STEPS):  # a contraction while friction times height over wheelbase is below 1
        loads = np.array([still + per_newton * force for still, per_newton in axles[case.drive.axle]])
        one_wheel = np.clip(loads, 0.0, weight) / 2  # an axle carries the whole car at most
        force = float(np.nansum(2 * friction * grip_load(case.tyres, one_wheel)))
    return force
