"""Laws that any car obeys in any manoeuvre, on random cars without symmetry.

The reference here is a second, plain computation in Python loops: d'Alembert forces, moments about a point, sums.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from car.random_cars import cars, manoeuvres, mirrored_car, mirrored_manoeuvre, number
from car.worked_car import CAR, car, manoeuvre
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from blockload.car.balance import balance
from blockload.car.manoeuvres import KINDS
from blockload.car.model import BODIES, LoadCases
from blockload.case.model import CORNERS, Case, Manoeuvre

Vector = NDArray[np.float64]
RIGHT = [1, 0, 3, 2]
LAW = settings(max_examples=25, deadline=None)
SECTION_MIRROR = np.array((1.0, -1.0, 1.0, -1.0, 1.0, -1.0))


def near(value: Vector, size: float = 1e5) -> object:
    """Equal within rounding of forces and moments as large as `size`."""
    return pytest.approx(value, rel=1e-9, abs=1e-9 * size)


def rigid_bodies(case: Case) -> dict[str, tuple[float, Vector, Vector]]:
    """Mass, cg and inertia of all seven bodies, the right corners mirrored by hand."""
    found = {name: (b.mass, b.cg, b.inertia) for name, b in case.bodies.items()}
    for axle, corners in (("front", ("FL", "FR")), ("rear", ("RL", "RR"))):
        it = case.axles[axle].corner
        signs = np.array([[1, -1, 1], [-1, 1, -1], [1, -1, 1]])
        found[corners[0]] = (it.mass, it.cg, it.inertia)
        found[corners[1]] = (it.mass, it.cg * (1, -1, 1), it.inertia * signs)
    return found


def contact_points(case: Case) -> dict[str, Vector]:
    found = {}
    for axle, corners in (("front", ("FL", "FR")), ("rear", ("RL", "RR"))):
        for corner, side in zip(corners, (0.5, -0.5), strict=True):
            found[corner] = np.array((case.axles[axle].x, side * case.axles[axle].track, 0.0))
    return found


def loads_on(case: Case, it: Manoeuvre, cases: LoadCases, body: str) -> list[tuple[Vector, Vector, Vector]]:
    """Weight, inertia, aero and tyre force on one body as (force, at, couple)."""
    masses = rigid_bodies(case)
    total = sum(m for m, _, _ in masses.values())
    centre = sum(m * r for m, r, _ in masses.values()) / total
    linear, angular = cases.acceleration[0].sum(axis=0), cases.angular_acceleration[0].sum(axis=0)
    mass, cg, inertia = masses[body]
    here = linear + np.cross(angular, cg - centre)
    loads = [(mass * (np.array((0, 0, -case.gravity)) - here), cg, -inertia @ angular)]
    pressure = 0.5 * case.air_density * it.speed**2
    loads += [
        (pressure * np.array((-d.drag_area, 0, -d.downforce_area)), d.at, np.zeros(3))
        for d in case.devices
        if d.on == body
    ]
    if body in CORNERS:
        loads.append((cases.wheels[0, CORNERS.index(body)], contact_points(case)[body], np.zeros(3)))
    return loads


def summed(case: Case, it: Manoeuvre, cases: LoadCases, names: tuple[str, ...], about: Vector) -> Vector:
    """Wrench about a point of all loads on some bodies, crank couples apart."""
    total = np.zeros(6)
    for body in names:
        for force, at, couple in loads_on(case, it, cases, body):
            total += np.concatenate([force, np.cross(at - about, force) + couple])
    return total


def crank_inertia_couple(case: Case, it: Manoeuvre) -> float:
    return -case.drive.crank_direction * (case.drive.crank_inertia or 0.0) * it.crank_acceleration


@LAW
@given(cars(), manoeuvres())
def test_every_body_is_in_equilibrium_and_both_sides_of_a_face_agree(case: Case, it: Manoeuvre) -> None:
    cases = balance(case, [it])

    assert cases.residual[0] < 1e-9
    assert cases.front_rear_gap[0] < 1e-9


@LAW
@given(cars(), manoeuvres())
def test_the_whole_car_obeys_newton_and_euler(case: Case, it: Manoeuvre) -> None:
    """All wheel, aero and inertia forces of the car, summed by plain loops, leave nothing."""
    cases = balance(case, [it])
    total = summed(case, it, cases, BODIES, np.zeros(3))
    total[3] += crank_inertia_couple(case, it)

    assert total == near(np.zeros(6))


@LAW
@given(cars(), manoeuvres())
def test_a_grounded_tub_reacts_with_the_free_cars_face_wrench(case: Case, it: Manoeuvre) -> None:
    """The reaction to everything behind the front face, with its inertia, is the face wrench from the tub's side."""
    cases = balance(case, [it])
    face = cases.faces["front"]
    behind = summed(case, it, cases, ("engine", "gearbox", "RL", "RR"), face.reference)
    behind[3] += crank_inertia_couple(case, it)

    assert face.wrench[0].sum(axis=0) == near(-behind)


@LAW
@given(cars(rear_carriers=("gearbox",)), manoeuvres())
def test_the_rear_face_carries_all_behind_it_and_the_shaft_couple(case: Case, it: Manoeuvre) -> None:
    cases = balance(case, [it])
    face = cases.faces["rear"]
    behind = summed(case, it, cases, ("gearbox", "RL", "RR"), face.reference)
    behind[3] += case.drive.crank_direction * np.nan_to_num(cases.crank_torque[0])

    assert face.wrench[0].sum(axis=0) == near(behind)


@LAW
@given(cars(), manoeuvres())
def test_every_source_alone_leaves_the_engine_in_equilibrium(case: Case, it: Manoeuvre) -> None:
    """Faces, loads of its own, crank couples and m (a - g), J alpha of the engine: source by source."""
    cases = balance(case, [it])
    engine = case.bodies["engine"]
    total = np.zeros((len(cases.sources), 6))
    for face in cases.faces.values():
        force, moment = face.wrench[0, :, :3], face.wrench[0, :, 3:]
        total += np.hstack([force, moment + np.cross(face.reference - engine.cg, force)])
    for load in cases.engine_loads:
        total += np.hstack([load.force[0], load.moment[0] + np.cross(load.at - engine.cg, load.force[0])])
    total[:, 3] += cases.crank_couple[0]
    total[:, :3] -= engine.mass * cases.engine_acceleration[0]
    total[:, 3:] -= cases.angular_acceleration[0] @ engine.inertia.T

    assert total == near(np.zeros_like(total))


@LAW
@given(cars(), manoeuvres())
def test_kinds_of_source_sum_to_the_whole_case(case: Case, it: Manoeuvre) -> None:
    """Balanced with one kind of load at a time, wheels, faces and accelerations add up to the whole."""
    whole = balance(case, [it])
    parts = balance(case, [replace(it, parts=(kind,)) for kind in KINDS])

    assert parts.wheels.sum(axis=0) == near(whole.wheels[0])
    for face in ("front", "rear"):
        assert parts.section(face).sum(axis=0) == near(whole.section(face)[0])
    assert parts.acceleration.sum(axis=(0, 1)) == near(whole.acceleration[0].sum(axis=0), 1.0)
    assert parts.engine_acceleration.sum(axis=(0, 1)) == near(whole.engine_acceleration[0].sum(axis=0), 1.0)


@LAW
@given(cars(), manoeuvres())
def test_the_mirror_image_of_car_and_manoeuvre_has_mirrored_loads(case: Case, it: Manoeuvre) -> None:
    here = balance(case, [it])
    there = balance(mirrored_car(case), [mirrored_manoeuvre(it)])

    assert there.wheels[0] == near(here.wheels[0][RIGHT] * (1, -1, 1))
    for face in ("front", "rear"):
        assert there.section(face)[0] == near(here.section(face)[0] * SECTION_MIRROR)
        studs = there.faces[face].stud_axial[0].sum(axis=0)
        assert studs == near(here.faces[face].stud_axial[0].sum(axis=0))


@pytest.mark.parametrize("name", [m.name for m in CAR.manoeuvres])
def test_a_symmetric_car_without_crank_turns_right_as_it_turns_left(name: str) -> None:
    quiet = car(drive=replace(CAR.drive, crank_inertia=0.0))
    left = replace(next(m for m in CAR.manoeuvres if m.name == name), overall_ratio=None)
    cases = balance(quiet, [left, mirrored_manoeuvre(left)])

    assert cases.wheels[1] == near(cases.wheels[0][RIGHT] * (1, -1, 1))
    for face in ("front", "rear"):
        assert cases.section(face)[1] == near(cases.section(face)[0] * SECTION_MIRROR)


@given(number(0.0, 80.0), number(0.0, 12.0))
def test_symmetric_inputs_without_crank_give_symmetric_results(speed: float, along: float) -> None:
    it = manoeuvre("straight", speed=speed, acceleration=(along, 0, 0), drive="accelerate")
    cases = balance(CAR, [it])

    assert cases.wheels[0] == near(cases.wheels[0][RIGHT] * (1, -1, 1))
    for face in cases.faces.values():
        axial = dict(zip(face.studs, face.stud_axial[0].sum(axis=0), strict=True))
        assert cases.section(face.name)[0, [1, 3, 5]] == near(np.zeros(3))
        assert axial["TL"] == near(axial["TR"])


@LAW
@given(cars(rear_carriers=("gearbox",)), manoeuvres())
def test_inboard_or_outboard_brakes_leave_both_faces_and_change_the_corners(case: Case, it: Manoeuvre) -> None:
    stop = replace(it, drive="brake", acceleration=np.array((-45.0, 5.0, 0.0)))
    inboard, outboard = (
        balance(replace(case, axles={n: replace(a, brakes=where) for n, a in case.axles.items()}), [stop])
        for where in ("inboard", "outboard")
    )
    for face in ("front", "rear"):
        assert inboard.section(face) == near(outboard.section(face))
    hub = [next(t for t in c.terms if (t.body, t.label) == ("FL", "tub")).moment[0, 1] for c in (inboard, outboard)]
    torque = case.axles["front"].loaded_radius * inboard.wheel_force[0, :, 0, 0].sum()
    kick = it.extra_wheel_force.get("FL", np.zeros(3))[0] * case.axles["front"].loaded_radius

    assert hub[1] - hub[0] == near(torque - kick)
    assert abs(hub[1] - hub[0]) > 100.0


@LAW
@given(cars(), manoeuvres())
def test_crank_torque_is_absent_in_front_and_exactly_its_reverse_behind(case: Case, it: Manoeuvre) -> None:
    cases = balance(case, [replace(it, overall_ratio=4.0)])
    crank = cases.sources.index("crank")
    rear = np.zeros(6)
    rear[3] = case.drive.crank_direction * cases.crank_torque[0]

    assert cases.faces["front"].wrench[0, crank] == near(np.zeros(6))
    assert cases.faces["rear"].wrench[0, crank] == near(rear)
    assert not cases.wheel_force[0, crank].any()
    assert cases.crank_couple[0, crank] == near(-rear[3])


@LAW
@given(cars(), number(0, 60), number(0, 15), number(0, 60), number(0, 15))
def test_faces_superpose_in_speed_squared_and_acceleration(
    case: Case, v1: float, a1: float, v2: float, a2: float
) -> None:
    """Straight on, with all wheels on the ground, the faces are linear: twice the middle of two states is their sum."""
    middle = (np.sqrt((v1**2 + v2**2) / 2), (a1 + a2) / 2)
    states = [
        manoeuvre(f"{k}", speed=float(v), acceleration=(a, 0, 0), drive="accelerate", overall_ratio=5.0)
        for k, (v, a) in enumerate(((v1, a1), (v2, a2), middle))
    ]
    cases = balance(case, states)
    assume(cases.wheels[..., 2].min() > 0)

    for face in ("front", "rear"):
        first, second, between = cases.section(face)
        assert 2 * between == near(first + second)


@LAW
@given(cars(), manoeuvres(), number(-3, 3))
def test_nothing_depends_on_where_x_is_counted_from(case: Case, it: Manoeuvre, shift: float) -> None:
    by = np.array((shift, 0.0, 0.0))
    moved = replace(
        case,
        bodies={n: replace(b, cg=b.cg + by) for n, b in case.bodies.items()},
        axles={
            n: replace(a, x=a.x + shift, corner=replace(a.corner, cg=a.corner.cg + by)) for n, a in case.axles.items()
        },
        devices=tuple(replace(d, at=d.at + by) for d in case.devices),
        faces={n: replace(f, x=f.x + shift) for n, f in case.faces.items()},
    )
    here, there = balance(case, [it]), balance(moved, [it])

    assert there.wheels == near(here.wheels)
    for face in ("front", "rear"):
        assert there.section(face) == near(here.section(face))


@LAW
@given(cars(), st.lists(manoeuvres(), min_size=2, max_size=4))
def test_load_cases_do_not_see_each_other(case: Case, several: list[Manoeuvre]) -> None:
    together = balance(case, several)
    for c, it in enumerate(several):
        alone = balance(case, [it])
        assert together.wheels[c] == near(alone.wheels[0])
        for face in ("front", "rear"):
            assert together.section(face)[c] == near(alone.section(face)[0])


@given(cars(), manoeuvres())
@settings(max_examples=10, deadline=None)
def test_the_car_given_is_left_as_it_was_and_results_are_read_only(case: Case, it: Manoeuvre) -> None:
    before = case.bodies["engine"].cg.copy()
    cases = balance(case, [it])

    assert np.array_equal(case.bodies["engine"].cg, before)
    for array in (cases.wheel_force, cases.acceleration, cases.faces["rear"].wrench, cases.terms[0].force):
        with pytest.raises(ValueError, match="read-only"):
            array[...] = 0.0
