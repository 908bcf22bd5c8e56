"""Small frozen values the report's tests draw: an invented car in rigid balance, margins, a block of two tetrahedra."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np

from blockload.arrays import frozen
from blockload.car.model import FaceLoads, LoadCases, Term
from blockload.case.model import (
    CORNERS,
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

GRAVITY = 9.80665
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
        manoeuvres=(Manoeuvre(name="static", acceleration=frozen((0, 0, 0))),),
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


CASES = (
    ("static", 0.0, (0.0, 0.0, 0.0)),
    ("v_max", 75.0, (0.0, 0.0, 0.0)),
    ("corner_left", 60.0, (0.0, 20.0, 0.0)),
)


def example_cases(case: Case | None = None) -> LoadCases:
    """The example car in rigid balance, worked here in a few lines so that every body closes by itself."""
    case = case or example_case()
    count = len(CASES)
    corners = {
        name: (
            case.axles[end].corner.mass,
            case.axles[end].corner.cg * (1, side, 1),
            np.array([case.axles[end].x, side * case.axles[end].track / 2, 0.0]),
            case.axles[end].carried_by,
        )
        for name, end, side in (("FL", "front", 1), ("FR", "front", -1), ("RL", "rear", 1), ("RR", "rear", -1))
    }
    masses = {name: (item.mass, item.cg) for name, item in case.bodies.items()}
    masses |= {name: item[:2] for name, item in corners.items()}
    wheels = np.zeros((count, 4, 3))
    terms: list[Term] = []
    aero = {}
    for item in case.devices:
        force = np.array(
            [[-0.5 * 1.2 * v**2 * item.drag_area, 0, -0.5 * 1.2 * v**2 * item.downforce_area] for _, v, _ in CASES]
        )
        aero[item.name] = (item.on, item.at, force)
    for i, (_, _, acceleration) in enumerate(CASES):
        wheels[i] = _wheels(masses, corners, aero, np.array(acceleration), i)

    def add(name, label, at, force, moment=None):
        moment = np.zeros((count, 3)) if moment is None else moment
        at, force = frozen(at), np.broadcast_to(np.asarray(force, float), (count, 3))
        terms.append(Term(body=name, label=label, at=at, force=frozen(force.copy()), moment=frozen(moment)))

    accelerations = np.array([a for *_, a in CASES])
    for name, (mass, cg) in masses.items():
        add(name, "weight", cg, (0, 0, -mass * GRAVITY))
        add(name, "inertia", cg, -mass * accelerations)
    for name, (on, at, force) in aero.items():
        add(on, name, at, force)
    for k, (name, (_, cg, contact, carrier)) in enumerate(corners.items()):
        add(name, "road on tyre", contact, wheels[:, k])
        force, moment = _sums(terms, name, cg)
        add(name, f"from the {carrier}", cg, -force, -moment)
        add(carrier, f"corner {name}", cg, force, moment)
    faces = {}
    # An open differential's drive goes through the corners, so the studs close each body in turn from behind.
    for label, behind, ahead in (("rear", "gearbox", "engine"), ("front", "engine", "tub")):
        spec = case.faces[label]
        at = np.array([[spec.x, *stud.at] for stud in spec.studs])
        centroid = at.mean(axis=0)
        force, moment = _sums(terms, behind, centroid)
        add(behind, f"studs of the {label} face", centroid, -force, -moment)
        add(ahead, f"studs of the {label} face", centroid, force, moment)
        on_engine = np.concatenate([force, moment], axis=1) * (1.0 if label == "rear" else -1.0)
        axial, shear = _studs(at - centroid, on_engine, 1.0 if label == "front" else -1.0)
        faces[label] = FaceLoads(
            name=label,
            reference=frozen(centroid),
            studs=tuple(stud.name for stud in spec.studs),
            stud_at=frozen(at),
            wrench=_split(on_engine),
            stud_axial=_split(axial),
            stud_shear=_split(shear),
        )
    q = np.array([0.5 * 1.2 * v**2 for _, v, _ in CASES])
    zeros = np.zeros((count, 2, 3))
    return LoadCases(
        names=tuple(name for name, *_ in CASES),
        sources=("aero", "weight and inertia"),
        speed=frozen([v for _, v, _ in CASES]),
        downforce=frozen(q * sum(d.downforce_area for d in case.devices)),
        drag=frozen(q * sum(d.drag_area for d in case.devices)),
        acceleration=_split(accelerations),
        angular_acceleration=frozen(zeros),
        engine_acceleration=_split(accelerations + np.array([0, 0, GRAVITY])),
        wheel_force=_split(wheels),
        crank_torque=frozen([np.nan] * count),
        crank_couple=frozen(np.zeros((count, 2))),
        faces={"front": faces["front"], "rear": faces["rear"]},
        engine_loads=(),
        terms=tuple(terms),
        residual=frozen([1e-16] * count),
        front_rear_gap=frozen([1e-15] * count),
        omega_squared=frozen([0.0, 0.0, 0.11]),
    )


def _wheels(masses, corners, aero, acceleration, index):
    """Vertical loads with half the couple at each axle; lateral by load at each axle; drag taken by the rear tyres."""
    contacts = np.array([corners[name][2] for name in CORNERS])
    force, moment = np.zeros(3), np.zeros(3)
    for mass, cg in masses.values():
        load = -mass * (acceleration + np.array([0, 0, GRAVITY]))
        force, moment = force + load, moment + np.cross(cg, load)
    for _, at, load in aero.values():
        force, moment = force + load[index], moment + np.cross(at, load[index])
    rear_x = contacts[2, 0]
    rear = moment[1] / rear_x
    front = -force[2] - rear
    couple = -moment[0] / 2
    wheels = np.zeros((4, 3))
    for pair, load in ((slice(0, 2), front), (slice(2, 4), rear)):
        track = contacts[pair][0, 1] - contacts[pair][1, 1]
        wheels[pair, 2] = load / 2 + np.array([1, -1]) * couple / track
    side_rear = -moment[2] / rear_x
    yaw_drag = -force[0] / 2
    wheels[2:, 0] = yaw_drag
    for pair, side in ((slice(0, 2), -force[1] - side_rear), (slice(2, 4), side_rear)):
        wheels[pair, 1] = side * wheels[pair, 2] / wheels[pair, 2].sum()
    return wheels


def _sums(terms, name, about):
    mine = [term for term in terms if term.body == name]
    force = sum(term.force for term in mine)
    moment = sum(term.moment + np.cross(term.at - about, term.force) for term in mine)
    return force, moment


def _studs(offset, wrench, sign):
    y, z = offset[:, 1], offset[:, 2]
    matrix = np.array([[(z * z).sum(), (y * z).sum()], [(y * z).sum(), (y * y).sum()]])
    slopes = np.linalg.solve(matrix, np.stack([wrench[:, 4], -wrench[:, 5]]))
    axial = wrench[:, :1] / len(y) + slopes[0][:, None] * z + slopes[1][:, None] * y
    turn = wrench[:, 3] / (y @ y + z @ z)
    shear = wrench[:, None, 1:3] / len(y) + turn[:, None, None] * np.stack([-z, y], axis=1)
    return sign * axial, shear


def _split(values):
    """Share a value over the two sources of the example."""
    return frozen(np.stack([0.25 * values, 0.75 * values], axis=1))


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
        "band": (value, value + 0.2),
        "trust": "converged",
        "causes": (Cause(source="rear_wing", share=0.7), Cause(source="weight and inertia", share=0.3)),
        "second": ("v_max", value + 0.4),
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
