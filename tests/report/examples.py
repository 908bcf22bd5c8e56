"""Small frozen values the report's tests draw: an invented car and what might be judged of it."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from pathlib import Path

import numpy as np

from blockload.arrays import frozen
from blockload.car.balance import balance
from blockload.car.model import LoadCases
from blockload.case.model import (
    Axle,
    Body,
    Bound,
    Case,
    Check,
    Default,
    Device,
    Drive,
    Engine,
    Face,
    Installation,
    Known,
    Limits,
    Manoeuvre,
    Stud,
)
from blockload.margins.model import Cause, Margin, Margins, Verdict
from blockload.report.surface import Surface

GRAVITY = 9.80665
HOT = (-1.75, 0.05, 0.3)
FRONT = {"TL": (0.24, 0.47), "TR": (-0.24, 0.47), "BL": (0.17, 0.08), "BR": (-0.17, 0.08)}
REAR = {
    "TL": (0.25, 0.40),
    "TR": (-0.25, 0.40),
    "ML": (0.20, 0.24),
    "MR": (-0.20, 0.24),
    "BL": (0.13, 0.06),
    "BR": (-0.13, 0.06),
}


def body(name, mass, cg, inertia):
    return Body(name=name, mass=mass, cg=frozen(cg), inertia=frozen(np.diag(inertia)))


def face(name, x, studs):
    made = tuple(
        Stud(
            name=stud,
            at=frozen(at),
            size="M12",
            property_class="12.9",
            preload=60e3,
            preload_scatter=0.25,
            load_factor=0.2,
            friction=0.15,
        )
        for stud, at in studs.items()
    )
    return Face(name=name, x=x, studs=made)


def axle(name, x, track, radius, carried_by, corner):
    return Axle(
        name=name,
        x=x,
        track=track,
        loaded_radius=radius,
        roll_centre_height=0.03,
        roll_stiffness=2.4e5,
        bar_share=0.4,
        carried_by=carried_by,
        brakes="outboard",
        corner=corner,
    )


def example_case(**changes) -> Case:
    device = lambda name, on, at, down, drag: Device(  # noqa: E731
        name=name, on=on, at=frozen(at), downforce_area=down, drag_area=drag
    )
    made = Case(
        path=Path("demo.toml"),
        title="Example: invented car",
        sha256="ab" * 32,
        document={"title": "Example: invented car"},
        overrides=(),
        air_density=1.2,
        gravity=GRAVITY,
        bodies={
            "tub": body("tub", 670.0, (-1.22, 0, 0.40), (80, 420, 450)),
            "engine": body("engine", 190.0, (-1.80, 0, 0.27), (9, 11, 12)),
            "gearbox": body("gearbox", 130.0, (-2.62, 0, 0.32), (8, 22, 24)),
        },
        axles={
            "front": axle("front", 0.0, 1.66, 0.33, "tub", body("FL", 38.0, (0, 0.79, 0.33), (0.8, 1.2, 0.8))),
            "rear": axle("rear", -2.75, 1.62, 0.34, "gearbox", body("RL", 42.0, (-2.75, 0.77, 0.34), (0.9, 1.3, 0.9))),
        },
        devices=(
            device("front_wing", "tub", (0.80, 0, 0.20), 1.05, 0.12),
            device("floor", "tub", (-1.40, 0, 0.08), 2.30, 0.20),
            device("body", "tub", (-0.90, 0, 0.45), 0.0, 0.45),
            device("diffuser", "gearbox", (-2.50, 0, 0.15), 0.60, 0.13),
            device("rear_wing", "gearbox", (-3.05, 0, 0.95), 1.40, 0.45),
        ),
        aero_total=None,
        drive=Drive(axle="rear", brake_front_share=0.58, crank_direction=-1, crank_inertia=0.045),
        engine=Engine(),
        tyre_friction=1.7,
        faces={"front": face("front", -1.5, FRONT), "rear": face("rear", -2.12, REAR)},
        manoeuvres=(
            Manoeuvre(name="static", acceleration=frozen((0, 0, 0))),
            Manoeuvre(name="v_max", speed=75.0, acceleration=frozen((0, 0, 0)), overall_ratio=4.5),
            Manoeuvre(name="corner_left", speed=60.0, acceleration=frozen((0, 20, 0)), overall_ratio=5.0),
            Manoeuvre(name="downforce_only", speed=75.0, acceleration=frozen((0, 0, 0)), parts=("downforce",)),
        ),
        block=None,
        installation=Installation(pad_stiffness=(), pad_stiffness_given=False, tub=None, second_paths="none"),
        paths=(),
        limits=Limits(
            yield_factor=1.25,
            rupture_factor=1.5,
            casting_factor=1.0,
            separation_factor=1.5,
            slip_factor=1.5,
            bolt_factor=1.2,
        ),
        engine_maker_consent="not asked",
        known={
            "bodies.engine.mass": Known(key="bodies.engine.mass", basis="estimate", source="invented", band=0.05),
        },
        bounds=(Bound(key="stud preload", low="40 kN", middle="60 kN", high="70 kN", reason="size and class only"),),
        defaults=(
            Default(key="gravity", value="9.80665 m/s^2", source="ISO 80000-3:2019, standard acceleration"),
            Default(key="limits.separation_factor", value="1.5", source="common practice, unsourced"),
        ),
        checks=(Check(name="masses add up", ok=True, value=0.0, limit=1e-6),),
    )
    return replace(made, **changes)


def example_cases(case: Case | None = None) -> LoadCases:
    """The example car's load cases, balanced."""
    return balance(case or example_case())


def margin(criterion="stud separation", place="front TL", value=0.26, **changes) -> Margin:
    made = {
        "criterion": criterion,
        "place": place,
        "at": (-1.5, 0.24, 0.47),
        "load_case": "corner_left",
        "applied": 12.5e3,
        "allowable": 27e3,
        "unit": "N",
        "factor": 1.5,
        "margin": value,
        "band": None if value is None else (value, value + 0.2),
        "trust": "converged",
        "causes": (Cause(source="rear_wing", share=0.7), Cause(source="weight and inertia", share=0.3)),
        "second": None if value is None else ("v_max", value + 0.4),
        "method": "rigid face, equal studs",
    }
    return Margin(**(made | changes))


def example_margins(**changes) -> Margins:
    made = {
        "margins": (margin(), margin("stud slip", "rear BR", -0.11), margin("stud tension", "rear TL", 1.9)),
        "checks": (Check(name="residual", ok=True, value=1e-16, limit=1e-6),),
        "verdict": Verdict(
            word="ruled out",
            level="faces",
            lowest_margin=-0.11,
            governing="stud slip at rear BR in corner_left",
            reasons=("stud slip fails at both ends of its band",),
            not_judged=("assembly, gas and heat: chassis load only", "bores", "bearing line"),
        ),
        "stiffness": {},
        "requirements": {"front": {"section_modulus_vertical_m3": 6.2e-5, "torsion_constant_m4": 2.4e-6}},
    }
    return Margins(**(made | changes))


@dataclass(frozen=True)
class ExampleRun:
    """A finished check as the report sees it, at level `faces`."""

    run_id: str = "0123456789ab"
    case: Case = field(default_factory=example_case)
    cases: LoadCases = field(default_factory=example_cases)
    block: None = None
    library: None = None
    pads: None = None
    margins: Margins = field(default_factory=example_margins)
    laps: tuple = ()


def example_surface() -> Surface:
    """A cube of 100 mm on the engine's place, the middle of its top used beyond its strength."""
    edge = np.linspace(0.0, 0.1, 5)
    sheet = np.array([(a, b) for a in edge for b in edge])
    corners = np.array([5 * i + j for i in range(4) for j in range(4)])
    halves = np.concatenate([corners[:, None] + np.array([0, 1, 6]), corners[:, None] + np.array([0, 6, 5])])
    sides = [(axis, level) for axis in range(3) for level in (0.0, 0.1)]
    points = np.concatenate([np.insert(sheet, axis, level, axis=1) for axis, level in sides])
    outward = [halves if (level > 0) != (axis == 1) else halves[:, ::-1] for axis, level in sides]
    triangles = np.concatenate([25 * k + half for k, half in enumerate(outward)])
    at = points + np.array([-1.8, 0.0, 0.2])
    use = 0.3 + 0.9 * np.exp(-((np.linalg.norm(at - np.array(HOT), axis=1) / 0.03) ** 2))
    count = len(at)
    return Surface(
        load_case="corner_left",
        cases=("static", "corner_left"),
        volumes=("block",),
        points=frozen(at),
        triangles=frozen(triangles, dtype=np.int64),
        volume=frozen(np.zeros(count), dtype=np.int64),
        stress=frozen(np.outer(use, [1e8, 0, 0, 2e7, 0, 0])),
        displacement=frozen(np.outer(at[:, 0] + 1.8, [0, 0, 1e-3])),
        ratio=frozen(use),
        case=frozen(np.ones(count), dtype=np.int64),
        criterion=frozen(np.zeros(count), dtype=np.int64),
    )
