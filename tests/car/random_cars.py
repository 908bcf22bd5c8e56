"""Random cars and manoeuvres without any symmetry, for the laws every car obeys; and their mirror images."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
from car.worked_car import CAR, FRONT, REAR, manoeuvre, stud
from hypothesis import strategies as st
from numpy.typing import NDArray

from blockload.case.model import Axle, Body, Case, Device, Drive, Face, Manoeuvre

SIDES = {"FL": "FR", "FR": "FL", "RL": "RR", "RR": "RL"}
MIRROR = np.array((1.0, -1.0, 1.0))


def number(low: float, high: float) -> st.SearchStrategy[float]:
    """A float of no more digits than a drawing has: rounding is not what the laws are about."""
    return st.integers(0, 1000).map(lambda k: low + (high - low) * k / 1000)


@st.composite
def vectors(draw: Any, *spans: tuple[float, float]) -> NDArray[np.float64]:
    return np.array([draw(number(*span)) for span in spans])


@st.composite
def bodies(draw: Any, name: str, x: tuple[float, float], y: tuple[float, float] = (-0.2, 0.2)) -> Body:
    """A body of four point masses' inertia: any such tensor is a possible one."""
    mass = draw(number(20.0, 900.0))
    points = np.array([draw(vectors((-0.5, 0.5), (-0.5, 0.5), (-0.5, 0.5))) for _ in range(4)])
    d = points - points.mean(axis=0)
    tensor = mass / 4 * ((d**2).sum() * np.eye(3) - d.T @ d)
    return Body(name=name, mass=mass, cg=draw(vectors(x, y, (0.1, 0.6))), inertia=tensor)


@st.composite
def axles(draw: Any, base: Axle, x: float, carrier: str) -> Axle:
    return replace(
        base,
        x=x,
        track=draw(number(1.2, 1.9)),
        loaded_radius=draw(number(0.25, 0.4)),
        roll_centre_height=draw(number(-0.05, 0.3)),
        roll_stiffness=draw(number(10e3, 900e3)),
        carried_by=carrier,
        brakes=draw(st.sampled_from(("inboard", "outboard"))),
        corner=draw(bodies(base.corner.name, (x - 0.1, x + 0.1), (0.5, 0.9))),
    )


@st.composite
def faces(draw: Any, name: str, x: float) -> Face:
    """Four to six studs, one near each corner of a rectangle so that they never fall into a line."""
    corners = [(0.2, 0.4), (-0.2, 0.4), (0.2, 0.1), (-0.2, 0.1), (0.0, 0.25), (0.0, 0.5)]
    places = [np.array(c) + draw(vectors((-0.08, 0.08), (-0.08, 0.08))) for c in corners[: draw(st.integers(4, 6))]]
    return Face(name=name, x=x, studs=tuple(stud(f"S{i}", *at) for i, at in enumerate(places)))


@st.composite
def cars(draw: Any, rear_carriers: tuple[str, ...] = ("gearbox", "engine")) -> Case:
    """A car without symmetry; the rear corners hang on the gearbox or the engine."""
    wheelbase = draw(number(2.0, 3.5))
    front, rear = draw(number(-1.8, -1.0)), draw(number(-2.6, -2.0))
    devices = tuple(
        Device(
            name=f"device_{k}",
            on=draw(st.sampled_from(("tub", "engine", "gearbox"))),
            at=draw(vectors((-3.6, 1.0), (-0.5, 0.5), (0.0, 1.2))),
            downforce_area=draw(number(-0.5, 2.5)),
            drag_area=draw(number(0.0, 0.6)),
        )
        for k in range(draw(st.integers(0, 4)))
    )
    return replace(
        CAR,
        bodies={
            "tub": draw(bodies("tub", (-1.5, -0.8))),
            "engine": draw(bodies("engine", (rear, front))),
            "gearbox": draw(bodies("gearbox", (-3.0, -2.2))),
        },
        axles={
            "front": draw(axles(FRONT, 0.0, "tub")),
            "rear": draw(axles(REAR, -wheelbase, draw(st.sampled_from(rear_carriers)))),
        },
        devices=devices,
        drive=Drive(
            axle="rear",
            brake_front_share=draw(number(0.3, 0.8)),
            crank_direction=draw(st.sampled_from((-1, 1))),
            crank_inertia=draw(number(0.0, 0.2)),
        ),
        faces={"front": draw(faces("front", front)), "rear": draw(faces("rear", rear))},
    )


@st.composite
def manoeuvres(draw: Any) -> Manoeuvre:
    """Any of the four ways to drive, with or without kicks at the wheels."""
    drive = draw(st.sampled_from(("hold_speed", "accelerate", "brake", "coast")))
    along = {"accelerate": (0.0, 15.0), "brake": (-60.0, -40.0)}.get(drive, (0.0, 0.0))
    kicked = draw(st.sets(st.sampled_from(tuple(SIDES)), max_size=2))
    kick = vectors((-5e3, 5e3), (-5e3, 5e3), (0.0, 20e3))
    return manoeuvre(
        "random",
        speed=draw(number(0.0, 60.0)),
        acceleration=draw(vectors(along, (-30.0, 30.0), (-5.0, 5.0))),
        drive=drive,
        overall_ratio=draw(st.none() | number(3.0, 15.0)),
        crank_acceleration=draw(number(-2e3, 2e3)),
        extra_wheel_force={corner: draw(kick) for corner in sorted(kicked)},
    )


def mirrored_car(case: Case) -> Case:
    """The same car seen in a mirror: y changes sign, the crank turns the other way, left and right change places."""

    def body(it: Body) -> Body:
        turn = np.diag(MIRROR)
        return replace(it, cg=it.cg * MIRROR, inertia=turn @ it.inertia @ turn)

    return replace(
        case,
        bodies={name: body(it) for name, it in case.bodies.items()},
        devices=tuple(replace(d, at=d.at * MIRROR) for d in case.devices),
        drive=replace(case.drive, crank_direction=-case.drive.crank_direction),
        faces={
            name: replace(face, studs=tuple(replace(s, at=s.at * (-1.0, 1.0)) for s in face.studs))
            for name, face in case.faces.items()
        },
    )


def mirrored_manoeuvre(it: Manoeuvre) -> Manoeuvre:
    """The same manoeuvre seen in a mirror: a right turn for a left one."""
    kicks = {SIDES[corner]: force * MIRROR for corner, force in it.extra_wheel_force.items()}
    return replace(it, acceleration=it.acceleration * MIRROR, extra_wheel_force=kicks)
