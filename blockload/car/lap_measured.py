"""Measured loads of wheels, push rods or dampers in the place of an axle's computed vertical loads.

The difference enters as vertical forces dF at the contact points of the axle's wheels. With K the change of the
measured quantities per unit of dF (1 for a wheel's own load; for a push rod or damper the tension in it, with what the
rigid car's motion leaves on the corners), measured = computed + K dF. The rigid car gives way to dF, as to a kerb.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import Floats
from ..case.model import CORNERS, LapHistory
from ..errors import CaseError
from .bodies import AXLES
from .lap_units import UnitLoads
from .links import CONDITION_LIMIT
from .suspension import corner_wrenches
from .wheels import TyreForces

_MEMBERS = {"pushrod": "pushrod", "damper": "spring"}


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class MeasuredLoads:
    """Measured loads: channel names (k,), the wheels (k,) that take the difference, and dF per unit of it (k, k)."""

    names: tuple[str, ...]
    wheels: tuple[int, ...]
    per_unit: Floats


def measured_loads(setup: UnitLoads, history: LapHistory) -> MeasuredLoads | None:
    """Which channels hold measured loads; CaseError where the car has no such member."""
    names = tuple(name for name in history.channels if "." in name)
    if not names:
        return None
    wheels = tuple(CORNERS.index(name.partition(".")[2]) for name in names)
    wrenches = corner_wrenches(setup.frame, setup.per_kick[:, 3:])
    rows = [
        np.eye(4)[wheel] if name.startswith("wheel") else _tension(setup, history, name, wrenches)
        for name, wheel in zip(names, wheels, strict=True)
    ]
    change = np.stack(rows)[:, wheels]
    size = np.abs(change).max(axis=1, keepdims=True)
    condition = float(np.linalg.cond(change / np.where(size > 0, size, 1.0)))
    if not (size.min() > 0.0 and condition < CONDITION_LIMIT):
        found = f"{', '.join(names)} hardly change with the wheels' loads (condition number {condition:.3g})"
        raise CaseError(str(history.path), found, "members that carry the wheels' loads", "check the links' points")
    return MeasuredLoads(names=names, wheels=wheels, per_unit=np.linalg.inv(change))


def _tension(setup: UnitLoads, history: LapHistory, name: str, wrenches: Floats) -> Floats:
    """Tension (n,) of the member that a channel measures, from wrenches (n, 4, 6) on the corners."""
    what, _, corner = name.partition(".")
    k, side = divmod(CORNERS.index(corner), 2)
    axle, member = setup.maps[k], _MEMBERS[what]
    if member not in axle.members:
        missing = "rocker with a spring" if what == "damper" else "links"
        raise CaseError(
            f"{history.path}, column {what}_{corner.lower()}",
            f"the {AXLES[k]} axle has no {missing} to take it",
            f"[axles.{AXLES[k]}.links] and, for a damper, its rocker",
            "give the points, or leave the column out",
        )
    row = axle.tension[side, axle.members.index(member)].reshape(12)
    tension: Floats = wrenches[:, 2 * k : 2 * k + 2].reshape(-1, 12) @ row
    return tension


def difference(
    setup: UnitLoads, measured: MeasuredLoads, history: LapHistory, part: slice, tyres: TyreForces, wrenches: Floats
) -> Floats:
    """Vertical forces (n, k) that measured loads add to the computed ones."""
    gaps = []
    for name, wheel in zip(measured.names, measured.wheels, strict=True):
        wheel_load = name.startswith("wheel")
        computed = tyres.force[:, 0, wheel, 2] if wheel_load else _tension(setup, history, name, wrenches[:, 0])
        gaps.append(history.channels[name][part] - computed)
    result: Floats = np.stack(gaps, axis=1) @ measured.per_unit.T
    return result
