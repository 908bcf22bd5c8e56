"""The stiffness rig: unit twist between the hubs of both axles, unit load between the axles. Weight is tared."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from ...arrays import frozen
from ...case.model import CORNERS, Case, Manoeuvre, PointForce, Support
from .figures import Omission

Built = Iterator[Manoeuvre | Omission]
TWIST = 1e3
"""Couple between the axles [N·m]."""
PRESS = 1e3
"""Force down between the axles [N]."""
_STILL = frozen(np.zeros(3))


def twist_rig(case: Case) -> Built:
    """A couple about x on the front hubs and its reverse on the rear ones, both ways."""
    front, rear = (case.axles[name].track for name in ("front", "rear"))
    lift = {"FL": TWIST / front, "FR": -TWIST / front, "RL": -TWIST / rear, "RR": TWIST / rear}
    for word, sign in (("left", 1.0), ("right", -1.0)):
        yield Manoeuvre(
            name=f"twist_{word}",
            acceleration=_STILL,
            drive="coast",
            extra_wheel_force={corner: frozen((0.0, 0.0, sign * force)) for corner, force in lift.items()},
            parts=("extra",),
            fatigue_exempt=True,
            group="twist_rig",
            basis=f"unit couple of {TWIST:g} N·m by vertical forces at the hubs, front {word} up; weight tared",
        )


def bending_rig(case: Case) -> Built:
    """A unit force down on a car that stands on its hubs."""
    point = case.points.get("rig_load")
    tub = case.bodies["tub"]
    on, at, where = ("tub", tub.cg, "the tub's CG") if point is None else (point.on, point.at, "[points.rig_load]")
    hubs = tuple(Support(name=c, on=c, at=_STILL, carries=("z",), bolted=True) for c in CORNERS)
    guide = Support(name="guide", on="tub", at=frozen(np.asarray(at) * (1.0, 1.0, 0.0)), carries=("x", "y", "yaw"))
    attachment = None if point is None else point.attachment
    yield Manoeuvre(
        name="bending_rig",
        acceleration=_STILL,
        drive="coast",
        point_forces=(PointForce(name="rig", on=on, at=at, force=frozen((0.0, 0.0, -PRESS)), attachment=attachment),),
        supports=(*hubs, guide),
        parts=("extra",),
        fatigue_exempt=True,
        group="bending_rig",
        basis=f"unit force of {PRESS:g} N down at {where}, the car on its hubs; weight tared",
    )
