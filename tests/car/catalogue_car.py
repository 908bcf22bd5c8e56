"""The worked car with points, performance, tyres and gears, for the standard situations (invented figures)."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
from car.worked_car import CAR

from blockload.case.groups import spelled_out
from blockload.case.model import Case, CatalogueSpec, EnvelopeSpec, Manoeuvre, Performance, Point, Tyres

G = 9.80665


def point(name: str, on: str, at: tuple[float, float, float], lifts: str | None = None) -> Point:
    return Point(name=name, on=on, at=np.array(at), lifts=lifts)


POINTS = {
    item.name: item
    for item in (
        point("hoop", "tub", (-1.45, 0.0, 1.0)),
        point("impact", "gearbox", (-3.1, 0.0, 0.35)),
        point("jacks.front", "tub", (0.6, 0.0, 0.15), "front"),
        point("jacks.rear", "gearbox", (-3.05, 0.0, 0.2), "rear"),
        point("jacks.left", "tub", (-1.4, 0.75, 0.12), "left"),
        point("jacks.right", "tub", (-1.4, -0.75, 0.12), "right"),
        point("jacks.corner", "tub", (-0.3, 0.7, 0.12), "FL"),
        point("towing.front", "tub", (0.85, 0.0, 0.25)),
        point("towing.rear", "gearbox", (-3.15, 0.0, 0.3)),
        point("trolley.left", "tub", (-0.2, 0.4, 0.06)),
        point("trolley.right", "tub", (-0.2, -0.4, 0.06)),
        point("trolley.rear", "gearbox", (-2.5, 0.0, 0.1)),
    )
}
PERFORMANCE = Performance(
    speed=75.0,
    power=360e3,
    lateral=2.2 * G,
    braking=3.2 * G,
    traction=0.95 * G,
    fast_corner=60.0,
    slow_corner=26.0,
    ratios=(10.0, 7.6, 6.2, 5.2, 4.5),
)
TYRES = Tyres(mu_x=1.7, mu_y=1.7, load_sensitivity=2e-5, reference_load=4e3)


def spec(*words: str, **given: Any) -> CatalogueSpec:
    return CatalogueSpec(groups=spelled_out(words), **given)


def equipped(*words: str, **changes: Any) -> Case:
    """The worked car with every figure the catalogue can ask for, and these groups; its own manoeuvres left out."""
    base = replace(
        CAR,
        manoeuvres=(),
        points=POINTS,
        performance=PERFORMANCE,
        tyres=TYRES,
        catalogue=spec(*words) if words else None,
        drive=replace(CAR.drive, clutch_capacity=900.0),
        engine=replace(CAR.engine, bore=0.09, stroke=0.078, cylinders=8, bmep=14e5, max_speed=9800 * np.pi / 30),
    )
    return replace(base, **changes)


def with_envelope(headings: int = 24, speeds: tuple[float, ...] = (), **changes: Any) -> Case:
    return equipped(envelope=EnvelopeSpec(speeds=speeds, headings=headings), **changes)


def by_name(manoeuvres: tuple[Manoeuvre, ...]) -> dict[str, Manoeuvre]:
    return {item.name: item for item in manoeuvres}
