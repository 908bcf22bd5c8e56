"""The worked car with invented links and rockers on both axles (the geometry of cases/demo-links.toml)."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from typing import Any

import numpy as np
from car.worked_car import CAR, FRONT, REAR

from blockload.car.links import LINKS
from blockload.case.model import Axle, Case, Link, Rocker

Point = tuple[float, float, float]

FRONT_ENDS: Mapping[str, tuple[Point, Point]] = {
    "upper_fore": ((-0.015, 0.72, 0.46), (0.20, 0.30, 0.43)),
    "upper_aft": ((-0.015, 0.72, 0.46), (-0.22, 0.31, 0.43)),
    "lower_fore": ((0.010, 0.74, 0.19), (0.23, 0.22, 0.16)),
    "lower_aft": ((0.010, 0.74, 0.19), (-0.24, 0.23, 0.16)),
    "steer": ((0.120, 0.71, 0.26), (0.13, 0.25, 0.23)),
    "pushrod": ((0.005, 0.70, 0.21), (0.00, 0.33, 0.50)),
}
REAR_ENDS: Mapping[str, tuple[Point, Point]] = {
    "upper_fore": ((-2.740, 0.70, 0.47), (-2.50, 0.28, 0.43)),
    "upper_aft": ((-2.740, 0.70, 0.47), (-2.90, 0.27, 0.43)),
    "lower_fore": ((-2.765, 0.715, 0.20), (-2.42, 0.20, 0.17)),
    "lower_aft": ((-2.765, 0.715, 0.20), (-2.92, 0.19, 0.17)),
    "steer": ((-2.900, 0.70, 0.30), (-2.93, 0.24, 0.27)),
    "pushrod": ((-2.765, 0.69, 0.22), (-2.70, 0.26, 0.50)),
}
FRONT_ROCKER = Rocker(
    pivot=np.array((0.0, 0.27, 0.49)),
    axis=np.array((1.0, 0.0, 0.0)),
    spring=(np.array((0.0, 0.26, 0.56)), np.array((0.0, 0.03, 0.58))),
    bar_link=(np.array((0.0, 0.22, 0.50)), np.array((0.0, 0.22, 0.38))),
    bar_bearing_y=0.16,
)
REAR_ROCKER = Rocker(
    pivot=np.array((-2.69, 0.20, 0.49)),
    axis=np.array((1.0, 0.12, 0.05)),
    spring=(np.array((-2.68, 0.19, 0.56)), np.array((-2.50, 0.06, 0.55))),
    bar_link=(np.array((-2.70, 0.15, 0.51)), np.array((-2.69, 0.16, 0.38))),
    bar_bearing_y=0.12,
    heave=np.array((-2.70, 0.195, 0.57)),
    heave_share=0.3,
)


def links(ends: Mapping[str, tuple[Point, Point]], carrier: str, **changes: Any) -> dict[str, Link]:
    """Six links on one carrier; a change such as steer={"carried_by": "engine"} overrides one of them."""
    result = {}
    for name in LINKS:
        outboard, inboard = ends[name]
        link = Link(name=name, outboard=np.array(outboard), inboard=np.array(inboard), carried_by=carrier)
        result[name] = replace(link, **changes.get(name, {}))
    return result


def front(rocker: Rocker | None = FRONT_ROCKER, **changes: Any) -> Axle:
    return replace(FRONT, links=links(FRONT_ENDS, "tub", **changes), rocker=rocker)


def rear(rocker: Rocker | None = REAR_ROCKER, **changes: Any) -> Axle:
    return replace(REAR, links=links(REAR_ENDS, "gearbox", **changes), rocker=rocker)


def linked(front_axle: Axle | None = None, rear_axle: Axle | None = None, **changes: Any) -> Case:
    """The worked car on links; each axle may be replaced."""
    axles = {"front": front_axle or front(), "rear": rear_axle or rear()}
    return replace(CAR, axles=axles, **changes)
