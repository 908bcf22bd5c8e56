"""The worked car, row by row: wheel loads and section wrenches worked out apart from this code, to the digits given."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from car.worked_car import CAR, car, manoeuvre

from blockload.car.balance import balance
from blockload.car.model import SECTION, LoadCases
from blockload.car.sensitivity import per_downforce, per_drag

ROWS: dict[str, dict[str, list[float]]] = {
    "static": {"FL": [2552.40], "FR": [2552.40], "RL": [3086.42], "RR": [3086.42]},
    "v_max": {"FL": [6156.29], "FR": [6156.29], "RL": [8510.66], "RR": [8510.66]},
    "brake": {"RL": [6249.5], "RR": [6249.5]},
    "corner_left": {"FL": [2341.39], "FR": [7376.39], "RL": [4019.82], "RR": [9096.05]},
    "kerb_rear_left": {"FL": [3662.45], "FR": [3662.45], "RL": [14544.38], "RR": [4544.38]},
    "launch": {"FL": [1964.12], "FR": [1934.75], "RL": [3702.12], "RR": [3676.66]},
}
# kN and kN·m, each with the digits it was given with
SECTIONS = {
    ("static", "front"): {"V_z": "-2.21", "M_sag": "4.70", "N": "0.00"},
    ("static", "rear"): {"V_z": "-4.07", "M_sag": "2.73"},
    ("v_max", "front"): {"N": "-2.60", "V_z": "-6.31", "M_sag": "6.69", "T": "0.000"},
    ("v_max", "rear"): {"N": "-2.60", "V_z": "-8.17", "T": "0.344", "M_sag": "2.29"},
    ("brake", "front"): {"N": "2.41", "V_z": "-1.79", "M_sag": "6.06"},
    ("brake", "rear"): {"N": "8.11", "V_z": "-3.65", "M_sag": "4.04"},
    ("corner_left", "front"): {
        "N": "-1.6632",
        "V_y": "-4.5091",
        "V_z": "-4.8340",
        "T": "0.4425",
        "M_sag": "5.9722",
        "M_lat": "-9.5844",
    },
    ("corner_left", "rear"): {"V_y": "-8.3091", "T": "0.9680", "M_sag": "2.4482", "M_lat": "-5.5727"},
    ("kerb_rear_left", "front"): {"T": "-5.3009", "M_sag": "11.2499", "M_lat": "1.335"},
    ("kerb_rear_left", "rear"): {"T": "-5.6592", "M_sag": "6.4546"},
    ("launch", "front"): {"N": "-5.968", "T": "0.0244", "M_sag": "3.594"},
    ("launch", "rear"): {"T": "0.2922", "M_sag": "1.184"},
}


@pytest.fixture(scope="module")
def cases() -> LoadCases:
    return balance(CAR)


def half_digit(text: str) -> float:
    """Half a unit in the last place of a number as written."""
    return 0.5 * 10.0 ** -len(text.partition(".")[2]) * (1 + 1e-9)


@pytest.mark.parametrize("name", ROWS)
def test_wheel_loads(cases: LoadCases, name: str) -> None:
    loads = dict(zip(("FL", "FR", "RL", "RR"), cases.wheels[cases.names.index(name), :, 2], strict=True))

    for corner, (expected,) in ROWS[name].items():
        digits = half_digit(str(expected)) if name == "brake" else 0.00501
        assert loads[corner] == pytest.approx(expected, abs=digits), corner


@pytest.mark.parametrize(("name", "face"), SECTIONS)
def test_section_wrenches(cases: LoadCases, name: str, face: str) -> None:
    section = dict(zip(SECTION, cases.section(face)[cases.names.index(name)] / 1e3, strict=True))

    for component, text in SECTIONS[name, face].items():
        assert section[component] == pytest.approx(float(text), abs=half_digit(text)), component


def test_stud_centroids(cases: LoadCases) -> None:
    assert cases.faces["front"].reference == pytest.approx([-1.5, 0.0, 0.275])
    assert cases.faces["rear"].reference == pytest.approx([-2.12, 0.0, 0.2333], abs=5e-5)


def test_drive_force_and_crank_torque(cases: LoadCases) -> None:
    v_max, launch = cases.names.index("v_max"), cases.names.index("launch")

    assert cases.wheels[v_max, 2:, 0] == pytest.approx(2278.125)
    assert cases.crank_torque[v_max] == pytest.approx(344.25)
    assert cases.crank_torque[launch] == pytest.approx(312.8)
    assert np.isnan(cases.crank_torque[cases.names.index("brake")]), "no ratio given, so not judged"


def test_a_kerb_moves_the_rigid_car(cases: LoadCases) -> None:
    kerb = cases.names.index("kerb_rear_left")

    assert cases.acceleration[kerb].sum(axis=0) == pytest.approx([-2.8661, 0.0, 8.6957], abs=5e-5)
    assert cases.angular_acceleration[kerb].sum(axis=0) == pytest.approx([40.564, 13.224, 2.064], abs=5e-4)


def test_rear_axle_under_braking_by_hand(cases: LoadCases) -> None:
    """Weight, downforce and drag height less the transfer m a h / wheelbase."""
    by_hand = 6172.8 + 10002.3 + 846.2 - 1150 * 30 * 0.36047 / 2.75

    assert cases.wheels[cases.names.index("brake"), 2:, 2].sum() == pytest.approx(by_hand, abs=0.2)


def test_front_sagging_by_hand(cases: LoadCases) -> None:
    """Static and downforce by the device table give 7.85 kN·m, of which drag and drive take 1.2 away."""
    sag = cases.section("front")[:, 4] / 1e3
    downforce = sag[cases.names.index("downforce_only")]

    assert downforce == pytest.approx(3.15, abs=0.005)
    assert sag[cases.names.index("static")] + downforce == pytest.approx(7.85, abs=0.005)
    assert sag[cases.names.index("v_max")] - 7.85 == pytest.approx(-1.2, abs=0.05)


@pytest.mark.parametrize(
    ("name", "front", "rear"),
    [
        ("front_wing", -0.364, -0.183),
        ("floor", 0.636, 0.321),
        ("diffuser", 0.136, 0.193),
        ("rear_wing", -0.164, -0.231),
    ],
)
def test_sagging_per_downforce_of_each_device(name: str, front: float, rear: float) -> None:
    """Closed form (-x_a/WB)(x_c + WB) - [behind the cut](x_c - x_a), and its three digits."""
    table = per_downforce(CAR)
    k = table.devices.index(name)
    x = CAR.devices[k].at[0]
    for f, (cut, digits) in enumerate(((-1.5, front), (-2.12, rear))):
        closed_form = (-x / 2.75) * (cut + 2.75) - (cut - x if x < cut else 0.0)
        assert table.section[k, f, 4] == pytest.approx(closed_form, abs=1e-12)
        assert table.section[k, f, 4] == pytest.approx(digits, abs=5.1e-4)


def test_a_driven_rear_axle_takes_drag_of_the_tub_through_the_engine_as_compression() -> None:
    table = per_drag(CAR)

    assert table.section[table.devices.index("body"), :, 0] == pytest.approx([-1.0, -1.0])
    assert table.section[table.devices.index("rear_wing"), :, 0] == pytest.approx([0.0, 0.0], abs=1e-12)


def test_downforce_presses_the_top_studs_and_pulls_the_bottom_ones() -> None:
    cases = balance(car(manoeuvres=(manoeuvre("down", speed=75.0, parts=("downforce",)),)))
    for face in cases.faces.values():
        axial = dict(zip(face.studs, face.stud_axial[0].sum(axis=0), strict=True))

        assert max(axial["TL"], axial["TR"]) < 0 < min(axial["BL"], axial["BR"])


def test_a_left_turn_presses_the_left_side_and_loads_the_right_wheels(cases: LoadCases) -> None:
    turn = cases.names.index("corner_left")
    face = cases.faces["front"]
    axial = dict(zip(face.studs, face.stud_axial[turn].sum(axis=0), strict=True))

    assert axial["TL"] < axial["TR"]
    assert axial["BL"] < axial["BR"]
    assert np.all(cases.wheels[turn, 1::2, 2] > cases.wheels[turn, ::2, 2])


def test_moving_the_rear_wing_to_the_tub_is_seen_at_both_faces() -> None:
    """The engine then no longer carries the wing: sagging changes by its closed form, 4725 N at 1.55 m behind."""
    wing = replace(CAR.devices[-1], on="tub")
    moved = balance(car(devices=(*CAR.devices[:-1], wing)))
    here = balance(CAR)
    down = here.names.index("downforce_only")
    change = (moved.section("front") - here.section("front"))[down]

    assert change[4] == pytest.approx(0.5 * 1.2 * 75**2 * 1.40 * (3.05 - 1.5))
    assert change[2] == pytest.approx(-0.5 * 1.2 * 75**2 * 1.40)
    assert moved.wheels[down] == pytest.approx(here.wheels[down])


def test_swapping_left_and_right_studs_is_seen_in_a_turn() -> None:
    studs = CAR.faces["front"].studs
    names = {"TL": "TR", "TR": "TL", "BL": "BR", "BR": "BL"}
    swapped = replace(CAR.faces["front"], studs=tuple(replace(s, name=names[s.name]) for s in studs))
    here, there = balance(CAR), balance(car(faces={**CAR.faces, "front": swapped}))
    turn = here.names.index("corner_left")
    force = [
        dict(zip(c.faces["front"].studs, c.faces["front"].stud_axial[turn].sum(axis=0), strict=True))
        for c in (here, there)
    ]

    assert abs(force[0]["TL"] - force[1]["TL"]) > 10e3


def test_a_lifted_wheel_is_flagged_and_its_grip_is_not_a_number() -> None:
    hard = manoeuvre("too fast", speed=30.0, acceleration=(0, 28, 0))
    cases = balance(CAR, [hard, CAR.manoeuvres[0]])

    assert cases.wheels[0, 0, 2] < 0
    assert list(cases.wheel_lift) == [True, False]
    assert np.isnan(cases.friction_used[0, 0])
    assert cases.friction_used[0, 3] > 0
    assert cases.wheels[0, 0, 1] == 0.0, "a lifted wheel takes no side force"


def test_grip_used_in_the_turn_is_side_and_drive_force_over_load(cases: LoadCases) -> None:
    turn = cases.names.index("corner_left")
    x, y, z = cases.wheels[turn, 3]

    assert cases.friction_used[turn, 3] == pytest.approx(np.sqrt(x**2 + y**2) / z)


def test_the_neglected_turning_term_is_sized_by_the_yaw_rate(cases: LoadCases) -> None:
    assert cases.omega_squared[cases.names.index("corner_left")] == pytest.approx((20 / 60) ** 2)
    assert cases.omega_squared[cases.names.index("static")] == 0.0
