"""What class rules ask of the joint between tub and engine: the roll structure's test and a rear impact.

Roll structures and crash are not judged here: these load cases hand the reactions on to whoever designs the tub's
inserts and the structure behind, and take no part in a verdict on the block.
"""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from ...arrays import frozen
from ...case.model import Case, GivenForce, Manoeuvre, PointForce, Support
from .figures import Omission, left_out

Built = Iterator[Manoeuvre | Omission]
ROLL_TEST = frozen((-60e3, 50e3, -90e3))
"""Rearward, sideways and down at the top of the roll structure [N]."""
ROLL_SOURCE = (
    "FIA Formula One technical regulations 2017, roll-structure test: 60 kN rearward, 50 kN lateral, 90 kN down "
    "(from notes on the text; the rules of the car's own class count)"
)
_STILL = frozen(np.zeros(3))
_ALL = ("x", "y", "z", "roll", "pitch", "yaw")


def roll_structure(case: Case) -> Built:
    """The roll structure's test load on a tub held by its engine mounts, from both sides; without weight."""
    hoop, given = case.points.get("hoop"), _given(case, "roll_structure")
    if hoop is None:
        key = "[points.hoop] with at and on"
        yield left_out("roll_structure", "roll_structure", key, "the top of the roll hoop")
        return
    force = ROLL_TEST if given is None else np.asarray(given.force, dtype=float)
    basis = ROLL_SOURCE if given is None else given.basis
    sides = {"left": 1.0, "right": -1.0} if force[1] else {"straight": 1.0}
    held = _held(case)
    for side, sign in sides.items():
        acting = frozen(force * (1.0, sign, 1.0))
        yield Manoeuvre(
            name=f"roll_structure_{side}",
            acceleration=_STILL,
            drive="coast",
            parts=("extra",),
            point_forces=(PointForce(name="hoop", on=hoop.on, at=hoop.at, force=acting, attachment=hoop.attachment),),
            supports=(held,),
            kind="limit",
            fatigue_exempt=True,
            judged=False,
            group="roll_structure",
            basis=f"{basis}; the engine is held fast, so the front face carries what the test rig would",
        )


def rear_impact(case: Case) -> Built:
    """The force of a rear impact structure on the free rigid car: what the class says, never a default."""
    point, given = case.points.get("impact"), _given(case, "rear_impact")
    if point is None or given is None:
        key = "[points.impact] with at and on, and [catalogue.forces.rear_impact] with force and basis"
        yield left_out("rear_impact", "rear_impact", key, "the impact structure's place or its crush force")
        return
    force = PointForce(name="impact", on=point.on, at=point.at, force=frozen(given.force), attachment=point.attachment)
    yield Manoeuvre(
        name="rear_impact",
        speed=given.speed or 0.0,
        acceleration=_STILL,
        drive="coast",
        point_forces=(force,),
        kind="limit",
        fatigue_exempt=True,
        judged=False,
        group="rear_impact",
        basis=given.basis,
    )


def _held(case: Case) -> Support:
    rear = case.faces["rear"]
    y, z = np.mean([stud.at for stud in rear.studs], axis=0)
    carried_on = case.block.carried_on if case.block is not None else None
    at = frozen((rear.x, y, z))
    return Support(name="engine held", on="engine", at=at, carries=_ALL, bolted=True, attachment=carried_on)


def _given(case: Case, name: str) -> GivenForce | None:
    return case.catalogue.forces.get(name) if case.catalogue is not None else None
