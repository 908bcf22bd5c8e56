"""Ride heights that agree with the loads they cause.

The heights at the axle lines follow from the axle loads, h_i = h_i0 - dS_i/(2 K_ride,i) - dT_i/(2 K_tyre,i), with h_i0
at the static axle loads, dT the change of the tyres' load, dS that of the springs (dT less the unsprung mass's own
inertia), and K the stiffness at one wheel; the axle loads follow from the aero, and the aero from the heights. The
loop is closed by Newton's method with halved steps, all load cases at once, until the heights agree to well within
0.1 mm. Loads that the links carry past the springs (anti-dive, anti-squat, jacking) are counted as sprung, dampers
and bump stops left out, and an extra wheel force is a blow too short to move the ride height.

A height is stable only while the air pulls the car down more slowly than the springs push back: every eigenvalue of
the loop's slope is below 1. Where it is not, the car has no height to run at and the case is refused.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import numpy as np

from ..arrays import Floats
from ..case.model import Axle, Case
from ..errors import BalanceError, CaseError
from .aero import Air, Maps, outside, read_maps
from .bodies import AXLES, Masses
from .manoeuvres import Inputs

AGREED = 1e-4  # m: heights that disagree by more are refused
_CLOSE = 1e-7  # m: where the loop ends, so that mirrored or neighbouring cases agree far beyond the promise
_STEP = 1e-5  # m, for the slope of the loop
_FLAT = 1e-6  # determinant below which the loop has no clear answer: the step is cut short instead
_ROUNDS = 60
_FURTHEST = 0.02  # m: longest step of one round

Loop = Callable[[Floats], Floats]


def in_the_air(case: Case, inputs: Inputs, car: Masses) -> Inputs:
    """The same manoeuvres with the aero maps read at the ride heights that agree with the loads.

    Raises CaseError for a map read outside its grid, or as `ride_heights` does.
    """
    maps = read_maps(
        case, {name: getattr(inputs, name) for name in ("speed", "yaw", "steer")}, inputs.state, inputs.names
    )
    if maps is None:
        return inputs
    ride = np.full((len(inputs.names), 2), np.nan)
    if maps.need_ride:
        ride = ride_heights(case, inputs, car, maps)
    marks = outside(maps, ride, inputs.pressure, inputs.names)
    area, volume = maps.at(ride)
    return replace(inputs, air=Air(area=area, volume=volume, ride_height=ride, outside=marks))


def ride_heights(case: Case, inputs: Inputs, car: Masses, maps: Maps) -> Floats:
    """Ride heights (C, 2) at the front and rear axle that agree with the axle loads.

    Raises
    ------
    CaseError
        For a missing ride height or stiffness.
    BalanceError
        Naming the load cases whose heights do not settle, or only where the air outdoes the springs.

    """
    axles = [_needed(case.axles[name]) for name in AXLES]
    start = np.tile([axle.ride_height or 0.0 for axle in axles], (len(inputs.names), 1))
    springs, tyres = (
        np.array([getattr(axle, key) for axle in axles], dtype=float) for key in ("ride_stiffness", "tyre_stiffness")
    )
    standing, moving = _weight(case, inputs, car)
    static = _axle_loads(case, standing)
    unsprung = 2.0 * np.array([axle.corner.mass for axle in axles]) * inputs.acceleration[:, 2:]
    steady = _pitch(case, maps, start) - maps.in_pitch(start)
    slowed = np.where(inputs.coast, car.car_cg[2], 0.0)  # what slows a coasting car acts at its CG

    def loop(ride: Floats) -> Floats:
        x, z, pitching = (inputs.pressure[:, None] * (steady + maps.in_pitch(ride))).T
        load = _axle_loads(case, moving + np.stack([z, pitching - slowed * x], axis=1))
        more = load - static
        result: Floats = start - (more - unsprung) / (2.0 * springs) - more / (2.0 * tyres)
        return result

    ride = _settled(loop, start)
    _refuse(loop, ride, inputs.names)
    return ride


def _needed(axle: Axle) -> Axle:
    for key, example in (("ride_height", "30 mm"), ("ride_stiffness", "200 N/mm"), ("tyre_stiffness", "250 N/mm")):
        value = getattr(axle, key)
        if value is None:
            raise CaseError(
                f"[axles.{axle.name}] {key}",
                "not given, but an aero map varies with the ride height",
                f"a length or the stiffness at one wheel, as in {key} = '{example}'",
                "give ride_height (standing, at the axle line), ride_stiffness and tyre_stiffness of both axles",
            )
        if not value > 0:
            raise CaseError(f"[axles.{axle.name}] {key}", f"{value:g}", "above 0")
    return axle


def _weight(case: Case, inputs: Inputs, car: Masses) -> tuple[Floats, Floats]:
    """Force along z and moment about y at the origin (C, 2) of the car's weight, and of its weight and inertia."""
    standing = np.tile((-car.total * case.gravity, car.total * case.gravity * car.car_cg[0]), (len(inputs.names), 1))
    along, _, up = (-car.total * inputs.acceleration).T
    inertia = np.stack([up, car.car_cg[2] * along - car.car_cg[0] * up], axis=1)
    return standing, standing + inertia


def _pitch(case: Case, maps: Maps, ride: Floats) -> Floats:
    """Force along x and z and moment about y at the origin (C, 3) of all devices, per dynamic pressure."""
    area, volume = (part.sum(axis=2) for part in maps.at(ride))
    points = np.array([device.at for device in case.devices])
    x, z = area[..., 0], area[..., 2]
    pitching = volume[..., 1] + points[:, 2] * x - points[:, 0] * z
    return np.stack([x.sum(axis=1), z.sum(axis=1), pitching.sum(axis=1)], axis=1)


def _axle_loads(case: Case, total: Floats) -> Floats:
    """Vertical load (C, 2) of the tyres of each axle under force along z and moment about y (C, 2) at the origin."""
    front, rear = (case.axles[name].x for name in AXLES)
    behind = (total[:, 1] + front * total[:, 0]) / (rear - front)
    return np.stack([-total[:, 0] - behind, behind], axis=1)


def _settled(loop: Loop, ride: Floats) -> Floats:
    """Newton's method on h = loop(h), each load case with a step of its own, halved while it does not help."""
    gap = loop(ride) - ride
    share = np.ones((len(ride), 1))
    for _ in range(_ROUNDS):
        if np.abs(gap).max() <= _CLOSE:
            break
        step = _newton(_slope(loop, ride, gap), gap)
        longest = np.abs(step).max(axis=1, keepdims=True)
        step = step * np.minimum(1.0, _FURTHEST / np.maximum(longest, _FURTHEST))
        tried = ride + share * step
        found = loop(tried) - tried
        better = np.abs(found).max(axis=1, keepdims=True) < np.abs(gap).max(axis=1, keepdims=True)
        ride, gap = np.where(better, tried, ride), np.where(better, found, gap)
        share = np.where(better, np.minimum(1.0, 2.0 * share), 0.5 * share)
    return ride


def _slope(loop: Loop, ride: Floats, gap: Floats) -> Floats:
    """Slope (C, 2, 2) of the loop, whose value at `ride` is ride + gap."""
    columns = []
    for axle in range(2):
        step = np.zeros(2)
        step[axle] = _STEP
        columns.append((loop(ride + step) - ride - gap) / _STEP)
    return np.stack(columns, axis=-1)


def _newton(slope: Floats, gap: Floats) -> Floats:
    """Step (C, 2) that closes the gap where the loop is straight: the solution of (1 - slope) step = gap."""
    a, b, c, d = 1.0 - slope[:, 0, 0], -slope[:, 0, 1], -slope[:, 1, 0], 1.0 - slope[:, 1, 1]
    determinant = a * d - b * c
    determinant = np.where(np.abs(determinant) < _FLAT, _FLAT, determinant)
    return np.stack([d * gap[:, 0] - b * gap[:, 1], a * gap[:, 1] - c * gap[:, 0]], axis=1) / determinant[:, None]


def _refuse(loop: Loop, ride: Floats, names: tuple[str, ...]) -> None:
    left = loop(ride) - ride
    gap = np.abs(left).max(axis=1)
    worst = int(np.argmax(gap))
    if not gap[worst] <= AGREED:
        lost = ", ".join(names[c] for c in np.flatnonzero(~(gap <= AGREED))[:5])
        raise BalanceError(
            f"ride heights of load case {lost}",
            f"do not settle: they still disagree by {1e3 * gap[worst]:.2g} mm with the loads they cause",
            f"{1e3 * AGREED:g} mm",
            "look for a jump in the aero map, or check ride_stiffness and tyre_stiffness",
        )
    growth = np.linalg.eigvals(_slope(loop, ride, left)).real.max(axis=1)
    worst = int(np.argmax(growth))
    if growth[worst] >= 1.0:
        lost = ", ".join(names[c] for c in np.flatnonzero(growth >= 1.0)[:5])
        raise BalanceError(
            f"ride heights of load case {lost}",
            f"are not stable: 1 mm down brings a load that pushes it down by {growth[worst]:.2g} mm more",
            "springs that outdo the growth of downforce",
            "check ride_stiffness, tyre_stiffness and the slope of the map; the real car would sit on its floor",
        )
