"""The swap test of the brakes: outboard or inboard, the faces see the same and the links do not.

Outboard, the caliper sits on the upright and the links carry the whole couple R Fx of the braking force at the ground.
Inboard, the half-shaft takes it to the casing and the links see Fx at hub height. Where links and casing are one body a
change of a face wrench would mean a wrong torque path; a link on another body carries its own change across the face.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ..case.model import FACES, Case
from .balance import balance


@dataclass(frozen=True, slots=True, kw_only=True)
class BrakeSwap:
    """Brakes of one axle moved `to` the other place, over the braking manoeuvres.

    face_change [N, N·m]: largest change of any face component; link_change [N] and link: largest change of a tension.
    """

    to: str
    face_change: float
    link_change: float
    link: str


def brake_swap(case: Case, axle: str) -> BrakeSwap | None:
    """Swap the brakes of an axle; None without braking manoeuvres."""
    braking = [item for item in case.manoeuvres if item.drive == "brake"]
    if not braking:
        return None
    to = "inboard" if case.axles[axle].brakes == "outboard" else "outboard"
    axles = {**case.axles, axle: replace(case.axles[axle], brakes=to)}
    here, there = balance(case, braking), balance(replace(case, axles=axles), braking)
    faces = [np.abs(there.section(name) - here.section(name)).max() for name in FACES]
    change, link = 0.0, ""
    for corner, loads in here.links.items():
        moved = np.abs((there.links[corner].tension - loads.tension).sum(axis=1)).max(axis=0)
        if moved.max() > change:
            change, link = float(moved.max()), f"{corner} {loads.names[int(moved.argmax())].replace('_', ' ')}"
    return BrakeSwap(to=to, face_change=float(max(faces)), link_change=change, link=link)
