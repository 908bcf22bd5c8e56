"""Manoeuvres as arrays over the load cases C, checked for what the balance can answer.

Four ways to drive: `hold_speed` (tyres push against drag), `accelerate` and `brake` (the acceleration along x is
given), `coast` (no tyre force along x: drag slows the car). Extra wheel forces come on top of any of them.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from ..arrays import Floats, frozen
from ..case.model import CARRIERS, CORNERS, Case, Manoeuvre, PointForce, Support
from ..errors import CaseError, nearest
from .aero import Air, constant_air

DRIVEN = {"front": (1.0, 0.0), "rear": (0.0, 1.0)}  # shares of the driving force on the front and rear axle
KINDS = ("downforce", "drag", "weight", "inertia", "crank", "crank_inertia", "extra")
DRIVES = ("hold_speed", "accelerate", "brake", "coast")
_DOWN = (0.0, 0.0, -1.0)
_AT_REST = 1e-9  # m/s^2: an acceleration along x below this counts as none


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Inputs:
    """What the drivers and roads of all load cases do.

    speed, pressure (dynamic, Pa), ratio (nan: not given), crank_rate (rad/s^2), coast, brake: (C,);
    acceleration (C, 3); extra (C, 4, 3), at the contact points; yaw, steer (rad) and state (None: none named) say where
    aero maps are read, and air what they give; keep maps each kind of load to (C,) ones and zeros; down (C, 3) is the
    direction of gravity; supports hold the car instead of its wheels.
    """

    names: tuple[str, ...]
    speed: Floats
    pressure: Floats
    acceleration: Floats
    coast: NDArray[np.bool_]
    brake: NDArray[np.bool_]
    ratio: Floats
    crank_rate: Floats
    extra: Floats
    yaw: Floats
    steer: Floats
    state: tuple[str | None, ...]
    air: Air
    keep: Mapping[str, Floats]
    down: Floats
    point_forces: tuple[tuple[PointForce, ...], ...]
    supports: tuple[tuple[Support, ...], ...]

    def whole(self) -> Inputs:
        """The same manoeuvres with every kind of load kept."""
        return replace(self, keep={kind: np.ones(len(self.names)) for kind in KINDS})


def read(case: Case, manoeuvres: Sequence[Manoeuvre]) -> Inputs:
    """Gather manoeuvres into arrays; CaseError for one the balance has no meaning for."""
    if not manoeuvres:
        raise CaseError("[manoeuvres]", "none given", "at least one [manoeuvres.NAME] table", "add one")
    if case.drive.axle not in DRIVEN:
        raise CaseError("[drive] axle", repr(case.drive.axle), ", ".join(DRIVEN), nearest(case.drive.axle, DRIVEN))
    for manoeuvre in manoeuvres:
        _check(case, manoeuvre)
    speed = np.array([m.speed for m in manoeuvres], dtype=float)
    extra = np.zeros((len(manoeuvres), 4, 3))
    for c, m in enumerate(manoeuvres):
        for corner, force in m.extra_wheel_force.items():
            extra[c, CORNERS.index(corner)] = force
    kept = [_kept(m) for m in manoeuvres]
    return Inputs(
        names=tuple(m.name for m in manoeuvres),
        speed=frozen(speed),
        pressure=0.5 * case.air_density * speed**2,
        acceleration=np.array([m.acceleration for m in manoeuvres], dtype=float),
        coast=np.array([m.drive == "coast" for m in manoeuvres]),
        brake=np.array([m.drive == "brake" for m in manoeuvres]),
        ratio=np.array([np.nan if m.overall_ratio is None else m.overall_ratio for m in manoeuvres], dtype=float),
        crank_rate=np.array([m.crank_acceleration for m in manoeuvres], dtype=float),
        extra=extra,
        yaw=np.array([m.yaw for m in manoeuvres], dtype=float),
        steer=np.array([m.steer for m in manoeuvres], dtype=float),
        state=tuple(m.state for m in manoeuvres),
        air=constant_air(case, len(manoeuvres)),
        keep={kind: np.array([kind in kinds for kinds in kept], dtype=float) for kind in KINDS},
        down=np.array([_DOWN if m.down is None else m.down for m in manoeuvres], dtype=float),
        point_forces=tuple(m.point_forces for m in manoeuvres),
        supports=tuple(m.supports for m in manoeuvres),
    )


def _kept(manoeuvre: Manoeuvre) -> set[str]:
    if manoeuvre.parts is None:
        return set(KINDS)
    kinds = set(manoeuvre.parts)
    if "aero" in kinds:
        kinds |= {"downforce", "drag"}
    return kinds


def _check(case: Case, manoeuvre: Manoeuvre) -> None:
    where = f"[manoeuvres.{manoeuvre.name}]"
    if manoeuvre.drive not in DRIVES:
        hint = nearest(manoeuvre.drive, DRIVES)
        raise CaseError(f"{where} drive", repr(manoeuvre.drive), ", ".join(DRIVES), hint)
    along = float(manoeuvre.acceleration[0])
    if manoeuvre.drive in ("hold_speed", "coast") and abs(along) > _AT_REST:
        raise CaseError(
            f"{where} acceleration",
            f"{along:g} m/s^2 along x with drive = {manoeuvre.drive!r}",
            "no acceleration along x: the speed is held, or drag alone slows the car",
            'set drive = "accelerate" or "brake", or leave the x component at 0',
        )
    for kind in manoeuvre.parts or ():
        if kind not in KINDS and kind != "aero":
            allowed = ", ".join((*KINDS, "aero (downforce and drag)"))
            raise CaseError(f"{where} parts", repr(kind), allowed, nearest(kind, (*KINDS, "aero")))
    for corner in manoeuvre.extra_wheel_force:
        if corner not in CORNERS:
            raise CaseError(f"{where} extra_wheel_force", repr(corner), ", ".join(CORNERS), nearest(corner, CORNERS))
    if manoeuvre.point_forces or manoeuvre.supports:
        _check_places(manoeuvre, where)
    _check_crank(case, manoeuvre, where)


def _check_places(manoeuvre: Manoeuvre, where: str) -> None:
    for force in manoeuvre.point_forces:
        if force.on not in CARRIERS:
            found = f"{force.name} is on {force.on!r}"
            raise CaseError(f"{where} point_forces", found, ", ".join(CARRIERS), nearest(force.on, CARRIERS))
    if manoeuvre.supports and (manoeuvre.extra_wheel_force or manoeuvre.speed):
        found = "a car that is held by supports, yet rolls or is struck at a wheel"
        raise CaseError(f"{where} supports", found, "supports at rest", "use point_forces for what acts on a held car")


def _check_crank(case: Case, manoeuvre: Manoeuvre, where: str) -> None:
    if manoeuvre.overall_ratio is not None and not manoeuvre.overall_ratio > 0:
        raise CaseError(f"{where} overall_ratio", f"{manoeuvre.overall_ratio:g}", "a ratio above 0")
    if manoeuvre.overall_ratio is not None and case.drive.axle == "front":
        raise CaseError(
            f"{where} overall_ratio",
            "given for a car driven at the front",
            "the engine driving the rear axle",
            "the shaft from the gearbox to the front axle twists the engine's section and is not modelled; "
            "leave the ratio out where a motor of its own drives the front axle",
        )
    if manoeuvre.crank_acceleration and case.drive.crank_inertia is None:
        raise CaseError(
            f"{where} crank_acceleration",
            "given, but the crank's inertia is not known",
            "[drive] crank_inertia in kg*m^2",
            "give it, or leave crank_acceleration out",
        )
