"""Wheel loads, section loads and stud forces against published vehicles and patterns.

T. D. Gillespie, *Fundamentals of Vehicle Dynamics*, SAE 1992, ch. 1, examples 1 and 2 (from memory).
Council of Engineers Thailand, mechanical engineering examination, "Dynamics of Vehicles", questions 3 and 4 (from a
secondary copy; the options are rounded).
G. Perantoni, D. J. N. Limebeer, "Optimal control for a Formula One car with variable parameters", *Vehicle System
Dynamics* 52 (2014) 653-678, tables (aerodynamic figures partly from memory; the loads follow from them by statics).
R. Limpert, *Brake Design and Safety*, SAE: brakes in proportion to the axle loads use the same grip (identity).
FIA, *2014 Formula One Technical Regulations*, art. 5.3.5: stud patterns of the power unit (read in a quotation). The
article gives the places only; the forces on them are statics of a rigid flange on equal studs.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from car.worked_car import FRONT, REAR, body, car, device, manoeuvre, stud

from blockload.car.balance import balance
from blockload.car.model import LoadCases
from blockload.car.studs import rigid_face
from blockload.case.model import Case, Face

POUND = 4.4482216152605
INCH = 0.0254
FOOT = 0.3048
Published = Callable[..., None]

RULE_FRONT = np.array([(0.215, 0.015), (-0.215, 0.015), (0.34, 0.26), (-0.34, 0.26), (0.175, 0.42), (-0.175, 0.42)])
RULE_REAR = np.array([(0.1, 0.015), (-0.1, 0.015), (0.15, 0.14), (-0.15, 0.14), (0.255, 0.345), (-0.255, 0.345)])
RULES = "pattern: FIA F1 Technical Regulations 2014, art. 5.3.5; forces: statics of a rigid flange"
ROWS = ("lower", "middle", "upper")


def point_car(mass: float, wheelbase: float, behind_front: float, height: float, **changes: Any) -> Case:
    """A car whose whole mass sits at its CG, so that only totals matter; corners without mass, roll centres at 0."""
    cg = (-behind_front, 0.0, height)
    none = body("corner", 0.0, (0.0, 0.7, 0.3), (0, 0, 0))
    rear_none = body("corner", 0.0, (-wheelbase, 0.7, 0.3), (0, 0, 0))
    front = replace(FRONT, corner=none, roll_centre_height=0.0)
    rear = replace(REAR, x=-wheelbase, corner=rear_none, roll_centre_height=0.0)
    shares = {"tub": 0.6, "engine": 0.3, "gearbox": 0.1}
    bodies = {name: body(name, share * mass, cg, (10, 10, 10)) for name, share in shares.items()}
    return car(**{"bodies": bodies, "axles": {"front": front, "rear": rear}, "devices": (), "gravity": 9.81, **changes})


def axle_loads(cases: LoadCases) -> tuple[float, float]:
    front, rear = cases.wheels[0].reshape(2, 2, 3)[..., 2].sum(axis=1)
    return float(front), float(rear)


def test_centre_of_gravity_from_axle_weights(published: Published) -> None:
    """A CG 39.64 in behind the front axle of 109 in puts 2313 lb and 1322 lb on the axles, to the inch's last digit."""
    weights, wheelbase = np.array((2313.0, 1322.0)) * POUND, 109 * INCH
    source = "Gillespie 1992, ch. 1, ex. 1 (from memory)"
    car = point_car(weights.sum() / 9.81, wheelbase, 39.64 * INCH, 0.5)
    front, rear = axle_loads(balance(car, [manoeuvre("stand")]))
    published("front axle weight", source, expected=weights[0], got=front, unit="N", tolerance=1e-4)
    published("rear axle weight", source, expected=weights[1], got=rear, unit="N", tolerance=2e-4)


def test_acceleration_up_a_slope(published: Published) -> None:
    """6 ft/s^2 on 6 %: gravity leans back, which is the same as accelerating harder under less weight."""
    g, slope = 32.2 * FOOT, np.arctan(0.06)
    mass, wheelbase = 3246 * POUND / g, 106 * INCH
    case = point_car(mass, wheelbase, wheelbase * 1199 / 3246, 20 * INCH, gravity=g * np.cos(slope))
    climb = manoeuvre("climb", acceleration=(6 * FOOT + g * np.sin(slope), 0, 0), drive="accelerate")
    front, rear = axle_loads(balance(case, [climb]))
    source = "Gillespie 1992, ch. 1, ex. 2 (from memory)"
    published("front axle on 6 %, 6 ft/s²", source, expected=1892 * POUND, got=front, unit="N", tolerance=5e-4)
    published("rear axle on 6 %, 6 ft/s²", source, expected=1348 * POUND, got=rear, unit="N", tolerance=5e-4)


def test_examination_questions_on_acceleration(published: Published) -> None:
    """Front axle of 1000 kg at 5 m/s^2 (option 4600 N) and rear axle of 1200 kg at 4 m/s^2 (option 5330 N)."""
    source = "Council of Engineers Thailand, Dynamics of Vehicles, Q3 and Q4"
    third = balance(
        point_car(1000, 2.5, 0.45 * 2.5, 0.4), [manoeuvre("go", acceleration=(5, 0, 0), drive="accelerate")]
    )
    published("front axle at 5 m/s²", source, expected=4595.5, got=axle_loads(third)[0], unit="N", tolerance=1e-5)
    assert axle_loads(third)[0] == pytest.approx(4600, rel=1e-3), "the option printed"
    fourth = balance(
        point_car(1200, 2.7, 0.40 * 2.7, 0.35), [manoeuvre("go", acceleration=(4, 0, 0), drive="accelerate")]
    )
    published("rear axle at 4 m/s²", source, expected=5331.0, got=axle_loads(fourth)[1], unit="N", tolerance=2e-5)
    assert axle_loads(fourth)[1] == pytest.approx(5330, rel=1e-3), "the option printed"


@pytest.mark.parametrize(
    ("speed", "front", "rear"), [(0.0, 3046.9, 3427.7), (50.0, 6024.8, 7199.8), (80.0, 10670.4, 13084.2)]
)
def test_axle_loads_of_a_published_single_seater(published: Published, speed: float, front: float, rear: float) -> None:
    """660 kg, 3.4 m, CG 1.8 m behind the front axle; C_L 3.0, C_D 0.9 on 1.5 m^2, 1.9 m behind, drag at the ground."""
    aero = (device("body", "tub", -1.9, 0.0, 3.0 * 1.5, 0.9 * 1.5),)
    cases = balance(point_car(660, 3.4, 1.8, 0.3, devices=aero), [manoeuvre("steady", speed=speed)])
    got = axle_loads(cases)
    source = "Perantoni & Limebeer 2014, tables (aero from memory)"
    published(f"front axle at {speed:g} m/s", source, expected=front, got=got[0], unit="N", tolerance=2e-5)
    published(f"rear axle at {speed:g} m/s", source, expected=rear, got=got[1], unit="N", tolerance=2e-5)
    assert (cases.downforce[0], cases.drag[0]) == pytest.approx((2.7 * speed**2, 0.81 * speed**2))


@pytest.mark.parametrize("behind", [-0.8, 0.0, 1.3, 3.4, 4.1])
def test_downforce_splits_by_its_lever(behind: float) -> None:
    """Front L (1 - x/wb), rear L x/wb, wherever the device is."""
    aero = (device("any", "tub", -behind, 0.4, 1.0, 0.0),)
    cases = balance(point_car(660, 3.4, 1.8, 0.3, devices=aero), [manoeuvre("v", speed=60.0, parts=("downforce",))])
    total = 0.5 * 1.2 * 60.0**2

    assert axle_loads(cases) == pytest.approx((total * (1 - behind / 3.4), total * behind / 3.4), abs=1e-9)


def test_brakes_in_proportion_to_axle_loads_use_equal_grip(published: Published) -> None:
    """At 1 g the front axle of the single-seater carries 55.882 %, and all four tyres then use mu = 1."""
    source = "Limpert, Brake Design and Safety (identity)"
    base = point_car(660, 3.4, 1.8, 0.3)
    stop = manoeuvre("stop", acceleration=(-9.81, 0, 0), drive="brake")
    front, rear = axle_loads(balance(base, [stop]))
    published("front axle at 1 g braking", source, expected=3618.2, got=front, unit="N", tolerance=2e-5)
    published("rear axle at 1 g braking", source, expected=2856.4, got=rear, unit="N", tolerance=2e-5)
    share = front / (front + rear)
    published("front brake share", source, expected=0.55882, got=share, unit="1", tolerance=1e-5)
    even = replace(base, drive=replace(base.drive, brake_front_share=share))

    assert balance(even, [stop]).friction_used[0] == pytest.approx(np.ones(4))


def test_drive_torque_at_the_ground(published: Published) -> None:
    """290 N·m through 12:1 is 3480 N·m at the axle and 10 545 N at 0.33 m."""
    force = 290 * 3.0 * 4.0 / 0.33
    base = point_car(700, 3.0, 1.6, 0.3)
    case = replace(base, axles={**base.axles, "rear": replace(base.axles["rear"], loaded_radius=0.33)})
    go = manoeuvre("go", acceleration=(force / 700, 0, 0), drive="accelerate", overall_ratio=12.0)
    cases = balance(case, [go])
    published(
        "ground force of 290 N·m, 12:1",
        "identity",
        expected=10545,
        got=cases.wheels[0, 2:, 0].sum(),
        unit="N",
        tolerance=5e-5,
    )
    published(
        "crank torque back again", "identity", expected=290.0, got=cases.crank_torque[0], unit="N·m", tolerance=1e-12
    )


def stressed_engine() -> LoadCases:
    """540, 150, 110 kg at 1.35, 2.14, 3.0 m behind the front axle, 9 and 6 kN down at 0.9 and 3.9 m."""
    none = body("corner", 0.0, (0.0, 0.7, 0.3), (0, 0, 0))
    case = car(
        gravity=9.81,
        air_density=2.0,
        bodies={
            "tub": body("tub", 540, (-1.35, 0, 0.3), (80, 420, 450)),
            "engine": body("engine", 150, (-2.14, 0, 0.3), (9, 11, 12)),
            "gearbox": body("gearbox", 110, (-3.0, 0, 0.3), (8, 22, 24)),
        },
        axles={
            "front": replace(FRONT, corner=none),
            "rear": replace(REAR, x=-3.4, corner=body("corner", 0.0, (-3.4, 0.7, 0.3), (0, 0, 0))),
        },
        devices=(device("ahead", "tub", -0.9, 0.2, 9000.0, 0), device("wing", "gearbox", -3.9, 0.9, 6000.0, 0)),
        faces={
            name: Face(name=name, x=x, studs=tuple(stud(f"S{i}", y, z) for i, (y, z) in enumerate(pattern)))
            for name, x, pattern in (("front", -1.90, RULE_FRONT), ("rear", -2.38, RULE_REAR))
        },
    )
    return balance(case, [manoeuvre("level", speed=1.0)])


def test_section_loads_of_a_stressed_engine(published: Published) -> None:
    """Shear and bending at both planes by hand, M positive where the lower studs are pulled (V there is -V_z)."""
    cases = stressed_engine()
    source = "own example, statics by hand from both sides"
    front, rear = axle_loads(cases)
    published("front axle reaction", source, expected=9601.59, got=front, unit="N", tolerance=1e-6)
    published("rear axle reaction", source, expected=13246.41, got=rear, unit="N", tolerance=1e-6)
    for face, shear, bending in (("front", 4695.81, 6329.45), ("rear", 6167.31, 3722.30)):
        section = cases.section(face)[0]
        published(f"shear at the {face} plane", source, expected=shear, got=-section[2], unit="N", tolerance=2e-6)
        published(f"bending at the {face} plane", source, expected=bending, got=section[4], unit="N·m", tolerance=2e-6)


def test_stud_forces_of_the_stressed_engine_on_the_rules_pattern(published: Published) -> None:
    """Lower studs pulled with 8239.8 N each, the middle pair pressed a little, the top pair with 7162.3 N."""
    axial = stressed_engine().faces["front"].stud_axial[0].sum(axis=0)
    for row, (level, expected) in enumerate((("lower", 8239.8), ("middle", -1077.5), ("upper", -7162.3))):
        for column, side in enumerate(("left", "right")):
            what, got = f"own example's bending, {level} {side} stud", axial[2 * row + column]
            published(what, RULES + " + statics", expected=expected, got=got, unit="N", tolerance=1e-4)


@pytest.mark.parametrize(
    ("name", "at", "height", "axial", "shear"),
    [
        ("front", RULE_FRONT, 0.231667, (13018.2, 1702.4, 11315.8), (2768.2, 3094.1, 2331.5)),
        ("rear", RULE_REAR, 0.166667, (13659.6, 2401.7, 16061.2), (2967.6, 2488.7, 5083.1)),
    ],
)
def test_bending_and_torsion_on_the_rules_patterns(
    published: Published,
    name: str,
    at: np.ndarray,
    height: float,
    axial: tuple[float, ...],
    shear: tuple[float, ...],
) -> None:
    """10 kN·m of bending and 5 kN·m of torsion on the six studs of each plane, as a rigid-flange group."""
    published(
        f"{name} centroid height",
        RULES.partition(";")[0],
        expected=height,
        got=at[:, 1].mean(),
        unit="m",
        tolerance=3e-6,
    )
    pulled, _ = rigid_face(at, np.array([0, 0, 0, 0, 10e3, 0]))
    _, turned = rigid_face(at, np.array([0, 0, 0, 5e3, 0, 0]))
    for row in range(3):
        size, across = abs(pulled[2 * row]), np.linalg.norm(turned[2 * row])
        published(
            f"{name} {ROWS[row]} studs, 10 kN·m bending", RULES, expected=axial[row], got=size, unit="N", tolerance=2e-5
        )
        published(
            f"{name} {ROWS[row]} studs, 5 kN·m torsion",
            RULES,
            expected=shear[row],
            got=across,
            unit="N",
            tolerance=2e-5,
        )
    signs = np.sign(pulled[::2])
    assert signs[0] == -signs[2], "the lower and the upper rows pull against each other"
    assert signs[1] == (signs[2] if name == "front" else signs[0])
