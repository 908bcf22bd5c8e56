"""Cross-checks of the car as built: sums, order along the car, and [car] against the bodies."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from ..units import show
from .model import Axle, Body, Check, Face
from .notes import Notes
from .schema_car import CarTable

WHEELBASE = (1.5, 4.0)
MASS = (300.0, 3000.0)
CG_HEIGHT = (0.1, 1.2)
# Wide bands of our own (unsourced): they catch slips of unit and sign, not unusual cars.
CORNER_OFF_AXLE = 0.3
CORNER_OFF_TRACK = 0.4
GYRATION = {"body": 1.5, "corner": 0.5}
STUD_SPACING = 0.02


def check_car(
    bodies: Mapping[str, Body], axles: Mapping[str, Axle], faces: Mapping[str, Face], car: CarTable | None, notes: Notes
) -> None:
    """Refuse a car whose sums are beyond the plausible or whose parts stand in an impossible order.

    `car` is [car] where the tub is given too, so that the two can be compared.
    """
    front, rear = axles["front"].x, axles["rear"].x
    wheelbase = front - rear
    remedy = "check the sign (x points forward, so the rear axle is at minus the wheelbase) and the unit"
    if not WHEELBASE[0] <= wheelbase <= WHEELBASE[1]:
        notes.problem("axles.rear.x", f"the wheelbase comes to {wheelbase:.4g} m", "1.5 m to 4 m", remedy)
        return
    if rear >= bodies["engine"].cg[0]:
        found = f"the rear axle (x = {show(rear, 'm')}) is not behind the engine"
        notes.problem("axles.rear.x", found, "x more negative than the engine's CG", remedy)
    if faces["front"].x >= front + 0.5:
        found = f"the front face (x = {show(faces['front'].x, 'm')}) is ahead of the front axle"
        notes.problem("faces.front.x", found, "an engine behind the front axle", "check the sign and the frame")
    masses = np.array([body.mass for body in bodies.values()] + [2.0 * axle.corner.mass for axle in axles.values()])
    places = np.array(
        [body.cg for body in bodies.values()] + [axle.corner.cg * (1.0, 0.0, 1.0) for axle in axles.values()]
    )
    mass = float(masses.sum())
    cg = masses @ places / mass
    if not MASS[0] <= mass <= MASS[1]:
        notes.problem("bodies", f"the car's mass comes to {mass:.4g} kg", "300 kg to 3000 kg", "check masses and units")
    if not CG_HEIGHT[0] <= cg[2] <= CG_HEIGHT[1]:
        found = f"the car's CG comes to {cg[2]:.4g} m over the ground"
        notes.problem("bodies", found, "0.1 m to 1.2 m", "check the heights and the frame")
    if not rear < cg[0] < front:
        found = f"the car's CG (x = {cg[0]:.4g} m) is not between the axles"
        notes.problem("bodies", found, f"{rear:.4g} to {front:.4g} m", "check the signs of the CGs")
    _check_places(bodies, axles, faces, notes)
    _check_inertias(bodies, axles, notes)
    _check_studs(faces, notes)
    if car is not None:
        _compare(car, mass, 1.0 + float(cg[0] - front) / wheelbase if wheelbase else 0.0, float(cg[2]), notes)


def _check_places(
    bodies: Mapping[str, Body], axles: Mapping[str, Axle], faces: Mapping[str, Face], notes: Notes
) -> None:
    """Refuse a body off the road's reach, a gearbox ahead of the engine, a corner away from its wheel."""
    for name, body in bodies.items():
        if not CG_HEIGHT[0] <= body.cg[2] <= CG_HEIGHT[1]:
            found = f"the CG is {show(body.cg[2], 'm')} over the ground"
            notes.problem(f"bodies.{name}.cg", found, "0.1 m to 1.2 m", "check the unit and the frame")
    if bodies["gearbox"].cg[0] >= faces["front"].x:
        found = f"the gearbox (x = {show(bodies['gearbox'].cg[0], 'm')}) is ahead of the engine's front face"
        notes.problem("bodies.gearbox.cg", found, "behind the engine", "check the sign: x points forward")
    for name, axle in axles.items():
        x, y = axle.corner.cg[0] - axle.x, axle.corner.cg[1] - axle.track / 2.0
        if abs(x) > CORNER_OFF_AXLE or abs(y) > CORNER_OFF_TRACK:
            found = f"the left corner's CG is {show(x, 'm')} ahead of its axle and {show(y, 'm')} outside its wheel"
            allowed = f"within {CORNER_OFF_AXLE:g} m and {CORNER_OFF_TRACK:g} m"
            notes.problem(f"axles.{name}.corner.cg", found, allowed, "give it in the car's own frame")


def _check_inertias(bodies: Mapping[str, Body], axles: Mapping[str, Axle], notes: Notes) -> None:
    """Refuse a radius of gyration no car's part has."""
    parts = [(f"bodies.{name}", "body", body) for name, body in bodies.items()]
    parts += [(f"axles.{name}.corner", "corner", axle.corner) for name, axle in axles.items()]
    for key, kind, part in parts:
        radius = float(np.sqrt(max(np.linalg.eigvalsh(part.inertia)[-1], 0.0) / part.mass))
        if radius > GYRATION[kind]:
            found = f"its radius of gyration comes to {show(radius, 'm')}"
            notes.problem(f"{key}.inertia", found, f"at most {GYRATION[kind]:g} m", "check the unit: kg*m^2")


def _check_studs(faces: Mapping[str, Face], notes: Notes) -> None:
    """Refuse studs that sit below the road or on top of each other's bosses."""
    for name, face in faces.items():
        at = np.array([stud.at for stud in face.studs])
        for stud in face.studs:
            others = np.linalg.norm(at - stud.at, axis=1)
            nearest_other = float(np.sort(others)[1]) if len(at) > 1 else np.inf
            if stud.at[1] < STUD_SPACING or nearest_other < STUD_SPACING:
                found = f"{stud.name} is at y = {show(stud.at[0], 'm')}, z = {show(stud.at[1], 'm')}"
                allowed = f"above the ground and at least {show(STUD_SPACING, 'm')} from every other stud"
                notes.problem(f"faces.{name}.studs.{stud.name}", found, allowed, "check the unit")


def _compare(car: CarTable, mass: float, share: float, height: float, notes: Notes) -> None:
    """Compare [car] with the sum of the bodies."""
    rows = (
        ("mass", car.mass, mass, 0.005 * car.mass, "kg"),
        ("front_weight_share", car.front_weight_share, share, 0.005, ""),
        ("cg_height", car.cg_height, height, 0.01, "m"),
    )
    for name, stated, summed, limit, unit in rows:
        gap = abs(stated - summed)
        note = f"[car] against the sum of the bodies{', ' + unit if unit else ''}"
        notes.checks.append(
            Check(name=f"car {name.replace('_', ' ')}", ok=gap <= limit, value=gap, limit=limit, note=note)
        )
        if gap > limit:
            found = f"{stated:.5g} {unit} is stated, but the bodies give {summed:.5g} {unit}".replace("  ", " ")
            remedy = "correct one of them, or take [bodies.tub] out: the tub is then what [car] leaves"
            notes.problem(f"car.{name}", found, f"agreement within {limit:.3g} {unit}".rstrip(), remedy)
