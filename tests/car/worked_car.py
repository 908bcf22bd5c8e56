"""The invented car whose loads are checked digit by digit, built without the reader (as cases/demo.toml)."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np

from blockload.case.model import Axle, Body, Case, Device, Drive, Engine, Face, Installation, Limits, Manoeuvre, Stud


def body(name: str, mass: float, cg: tuple[float, float, float], inertia: tuple[float, float, float]) -> Body:
    return Body(name=name, mass=mass, cg=np.array(cg), inertia=np.diag(inertia))


def device(name: str, on: str, x: float, z: float, downforce: float, drag: float) -> Device:
    return Device(name=name, on=on, at=np.array((x, 0.0, z)), downforce_area=downforce, drag_area=drag)


def stud(name: str, y: float, z: float) -> Stud:
    return Stud(
        name=name,
        at=np.array((y, z)),
        size="M12",
        property_class="12.9",
        preload=60e3,
        preload_scatter=0.25,
        load_factor=0.2,
        friction=0.15,
    )


def face(name: str, x: float, pairs: dict[str, tuple[float, float]]) -> Face:
    """A face from half widths and heights of its stud rows."""
    rows = [stud(f"{row}{side}", sign * y, z) for row, (y, z) in pairs.items() for side, sign in (("L", 1), ("R", -1))]
    return Face(name=name, x=x, studs=tuple(rows))


def manoeuvre(name: str, **given: Any) -> Manoeuvre:
    given["acceleration"] = np.array(given.get("acceleration", (0.0, 0.0, 0.0)), dtype=float)
    return Manoeuvre(name=name, **given)


FRONT = Axle(
    name="front",
    x=0.0,
    track=1.66,
    loaded_radius=0.33,
    roll_centre_height=0.03,
    roll_stiffness=260e3,
    bar_share=0.4,
    carried_by="tub",
    brakes="outboard",
    corner=body("front corner", 38.0, (0.0, 0.79, 0.33), (0.8, 1.2, 0.8)),
)
REAR = Axle(
    name="rear",
    x=-2.75,
    track=1.62,
    loaded_radius=0.34,
    roll_centre_height=0.06,
    roll_stiffness=220e3,
    bar_share=0.4,
    carried_by="gearbox",
    brakes="outboard",
    corner=body("rear corner", 42.0, (-2.75, 0.77, 0.34), (0.9, 1.3, 0.9)),
)
MANOEUVRES = (
    manoeuvre("static"),
    manoeuvre("v_max", speed=75.0, overall_ratio=4.5),
    manoeuvre("brake", speed=75.0, acceleration=(-30, 0, 0), drive="brake"),
    manoeuvre("corner_left", speed=60.0, acceleration=(0, 20, 0), overall_ratio=5.0),
    manoeuvre("kerb_rear_left", speed=40.0, drive="coast", extra_wheel_force={"RL": np.array((-2e3, 0, 10e3))}),
    manoeuvre("launch", acceleration=(8, 0, 0), drive="accelerate", overall_ratio=10.0, crank_acceleration=-1000.0),
    manoeuvre("downforce_only", speed=75.0, parts=("downforce",)),
)
CAR = Case(
    path=Path("worked_car.toml"),
    title="worked car",
    sha256="",
    document={},
    overrides=(),
    air_density=1.2,
    gravity=9.80665,
    bodies={
        "tub": body("tub", 670.0, (-1.22, 0, 0.40), (80, 420, 450)),
        "engine": body("engine", 190.0, (-1.80, 0, 0.27), (9, 11, 12)),
        "gearbox": body("gearbox", 130.0, (-2.62, 0, 0.32), (8, 22, 24)),
    },
    axles={"front": FRONT, "rear": REAR},
    devices=(
        device("front_wing", "tub", 0.80, 0.20, 1.05, 0.12),
        device("floor", "tub", -1.40, 0.08, 2.30, 0.20),
        device("body", "tub", -0.90, 0.45, 0.0, 0.45),
        device("diffuser", "gearbox", -2.50, 0.15, 0.60, 0.13),
        device("rear_wing", "gearbox", -3.05, 0.95, 1.40, 0.45),
    ),
    aero_total=None,
    drive=Drive(axle="rear", brake_front_share=0.58, crank_direction=-1, crank_inertia=0.045),
    engine=Engine(),
    tyre_friction=None,
    faces={
        "front": face("front", -1.5, {"T": (0.24, 0.47), "B": (0.17, 0.08)}),
        "rear": face("rear", -2.12, {"T": (0.25, 0.40), "M": (0.20, 0.24), "B": (0.13, 0.06)}),
    },
    manoeuvres=MANOEUVRES,
    block=None,
    installation=Installation(pad_stiffness=(), pad_stiffness_given=False, tub=None, second_paths="none"),
    paths=(),
    limits=Limits(
        yield_factor=1.25,
        rupture_factor=1.5,
        casting_factor=1.0,
        separation_factor=1.5,
        slip_factor=1.5,
        bolt_factor=1.25,
    ),
    engine_maker_consent="not asked",
    known={},
    bounds=(),
    defaults=(),
    checks=(),
)


def car(**changes: Any) -> Case:
    """The worked car with some of its fields replaced."""
    return replace(CAR, **changes)
