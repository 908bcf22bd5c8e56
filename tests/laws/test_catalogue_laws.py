"""Laws of a car that does not stand on four wheels, and of the catalogue's symmetric pairs."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from car.catalogue_car import POINTS, by_name, equipped, point
from car.linked_car import linked
from car.random_cars import cars, number, vectors
from car.worked_car import CAR, manoeuvre
from hypothesis import given, settings

from blockload.car.balance import balance
from blockload.car.bodies import masses
from blockload.car.catalogue.expanding import expand
from blockload.car.model import BODIES, LoadCases
from blockload.case.groups import GROUPS
from blockload.case.model import PointForce, Support

SMALL = settings(max_examples=25, deadline=None)


def section(cases: LoadCases, face: str, name: str) -> np.ndarray:
    return cases.section(face)[cases.names.index(name)]


def test_hanging_from_the_roll_hoop_turns_the_sagging_round() -> None:
    """By hand on a level car: engine 190 kg 0.30 m behind the face, gearbox 130 kg 1.12 m, corners 84 kg 1.25 m."""
    by_hand = -9.80665 * (190 * 0.30 + 130 * 1.12 + 84 * 1.25)
    cases = balance(equipped("crane", points={"hoop": point("hoop", "tub", (masses(CAR).car_cg[0], 0.0, 1.0))}))

    assert section(cases, "front", "crane_hoop")[4] == pytest.approx(by_hand, rel=1e-9)
    assert by_hand == pytest.approx(-3.0e3, rel=0.01)
    standing = balance(CAR, (manoeuvre("static"),))
    assert standing.section("front")[0, 4] > 0 > section(cases, "front", "crane_hoop")[4]


def test_a_hook_carries_the_whole_weight_and_no_couple() -> None:
    """The car hangs with its CG below the hook, so that one force along gravity is all the hook needs."""
    case = equipped("crane", points={"hoop": point("hoop", "tub", (-1.2, 0.1, 1.1))})
    cases = balance(case)
    (hook,) = (term for term in cases.terms if term.label == "support hoop")
    (hanging,) = expand(case)

    weight = masses(CAR).total * CAR.gravity
    assert hanging.down is not None
    np.testing.assert_allclose(hook.force[0], -weight * hanging.down, rtol=1e-12)
    assert np.abs(hook.moment[0]).max() < 1e-9 * weight


def test_wheels_that_hang_carry_nothing() -> None:
    cases = balance(equipped("crane", "trolley"))

    assert not cases.wheels.any()


def test_a_twist_rig_puts_pure_torsion_through_both_faces() -> None:
    """One kN·m in at the hubs is one kN·m of T at each face and nothing else."""
    cases = balance(equipped("twist_rig"))
    for face in ("front", "rear"):
        for name, couple in (("twist_left", 1e3), ("twist_right", -1e3)):
            np.testing.assert_allclose(section(cases, face, name), (0, 0, 0, couple, 0, 0), atol=1e-9)


def test_a_bending_rig_is_a_beam_on_two_supports() -> None:
    """M_sag = R (x - x_rear): simple beam of the wheelbase, one kN at the tub's CG."""
    cases = balance(equipped("bending_rig"))
    rear = 1e3 * 1.22 / 2.75

    expected = (0, 0, -rear, 0, rear * (2.75 - 1.5), 0)
    np.testing.assert_allclose(section(cases, "front", "bending_rig"), expected, atol=1e-9)
    np.testing.assert_allclose(cases.wheels[0, :, 2].sum(), 1e3, rtol=1e-12)


def test_pull_and_push_at_a_towing_eye_mirror_each_other_about_the_car_at_rest() -> None:
    cases = balance(equipped("towing", manoeuvres=(manoeuvre("static"),)))
    for face in ("front", "rear"):
        still = section(cases, face, "static")
        for eye in ("front", "rear"):
            pull, push = (section(cases, face, f"tow_{eye}_{word}") - still for word in ("pull", "push"))
            np.testing.assert_allclose(pull, -push, atol=1e-9)
            assert np.abs(pull).max() > 100.0


def test_a_towed_car_needs_no_tyre_force_along_x() -> None:
    cases = balance(equipped("towing"))

    assert np.abs(cases.wheels[..., 0]).max() < 1e-9


def test_left_and_right_situations_are_mirror_images_on_a_symmetric_car() -> None:
    """N, V_z, M_sag equal; V_y, T, M_lat opposite. The crank's direction is taken out by leaving out its torque."""
    performance = replace(equipped().performance, ratios=())
    cases = balance(
        equipped(
            "corner",
            "brake_in_corner",
            "power_in_corner",
            "kerb",
            "jack",
            "roll_structure",
            "spin",
            performance=performance,
        )
    )
    swap = {"left": "right", "FL": "FR", "RL": "RR", "FL_RR": "FR_RL"}
    pairs = [(name, other) for name in cases.names if (other := _other(name, swap)) in cases.names and other != name]

    assert len(pairs) > 10
    for face in ("front", "rear"):
        for left, right in pairs:
            mirrored = section(cases, face, right) * (1, -1, 1, -1, 1, -1)
            np.testing.assert_allclose(section(cases, face, left), mirrored, atol=1e-6, err_msg=f"{left} {right}")


def _other(name: str, swap: dict[str, str]) -> str:
    for left in sorted(swap, key=len, reverse=True):
        words = name.split("_")
        if left in ("FL_RR",) and name.endswith(left):
            return name.replace(left, swap[left])
        if left in words:
            return "_".join(swap.get(word, word) for word in words)
    return name


def test_jacks_and_standing_wheels_share_the_weight_by_statics() -> None:
    """Rear jack 0.30 m behind the rear axle: moments about the front axle, by hand."""
    cases = balance(equipped("jack"))
    c = cases.names.index("jack_rear")
    car = masses(CAR)
    jack = car.total * CAR.gravity * -car.car_cg[0] / 3.05

    (term,) = (term for term in cases.terms if term.label == "support jacks.rear")
    assert term.force[c, 2] == pytest.approx(jack, rel=1e-12)
    assert cases.wheels[c, :2, 2].sum() == pytest.approx(car.total * CAR.gravity - jack, rel=1e-12)
    assert not cases.wheels[c, 2:].any()


def test_all_groups_are_in_balance_on_a_car_with_links_and_rockers() -> None:
    """Hanging wheels pull on their links; every body still closes."""
    base = equipped(*(group for group in GROUPS if group != "rear_impact"))
    case = replace(base, axles=linked().axles)
    cases = balance(case)

    assert cases.links
    pure = np.isin(cases.group, "twist_rig")  # its couples leave forces that are rounding alone: a share of nothing
    assert cases.residual[~pure].max() < 1e-9
    assert cases.front_rear_gap[~pure].max() < 1e-9
    assert max(cases.residual.max(), cases.front_rear_gap.max()) < 1e-6


def test_equal_supports_share_a_redundant_load_symmetrically() -> None:
    """Four trolley heads, two a side, under a symmetric car: left equals right."""
    heads = {
        f"trolley.{k}": point(f"trolley.{k}", "tub" if x > -1.5 else "gearbox", (x, y, 0.1))
        for k, (x, y) in enumerate(((-0.2, 0.4), (-0.2, -0.4), (-2.5, 0.2), (-2.5, -0.2)))
    }
    cases = balance(equipped("trolley", points=heads))
    pushed = [t.force[0, 2] for t in cases.terms if t.label.startswith("support trolley")]

    assert pushed[0] == pytest.approx(pushed[1], rel=1e-12)
    assert pushed[2] == pytest.approx(pushed[3], rel=1e-12)
    assert sum(pushed) == pytest.approx(masses(CAR).total * CAR.gravity, rel=1e-12)


@SMALL
@given(
    case=cars(), at=vectors((-2.5, 0.5), (-0.4, 0.4), (0.2, 1.2)), force=vectors((-5e4, 5e4), (-5e4, 5e4), (-5e4, 5e4))
)
def test_any_force_at_any_point_of_any_car_leaves_all_bodies_in_balance(case, at, force) -> None:  # type: ignore[no-untyped-def]
    """Free car, held car: residuals vanish and the faces agree from both sides."""
    for body in BODIES[:3]:
        push = PointForce(name="push", on=body, at=at, force=force)
        held = Support(
            name="held", on="engine", at=at + 0.3, carries=("x", "y", "z", "roll", "pitch", "yaw"), bolted=True
        )
        runs = (
            manoeuvre("free", speed=30.0, drive="coast", point_forces=(push,)),
            manoeuvre("held", drive="coast", point_forces=(push,), supports=(held,)),
        )
        cases = balance(case, runs)

        assert cases.residual.max() < 1e-9
        assert cases.front_rear_gap.max() < 1e-9


@SMALL
@given(case=cars(), height=number(0.6, 1.5), offset=vectors((-0.4, 0.4), (-0.3, 0.3)))
def test_any_car_hangs_with_its_weight_below_the_hook(case, height, offset) -> None:  # type: ignore[no-untyped-def]
    hook = masses(case).car_cg + np.array((*offset, height))
    lifted = equipped("crane", points={"hoop": point("hoop", "tub", tuple(hook))})
    case = replace(case, manoeuvres=(), points=lifted.points, catalogue=lifted.catalogue)
    cases = balance(case)

    assert cases.residual.max() < 1e-9
    assert not cases.wheel_lift.any()


def test_the_roll_structure_load_reaches_the_front_face_whole_and_the_rear_face_not_at_all() -> None:
    """The test wrench about the centroid of the studs, by hand; nothing behind the held engine is loaded."""
    cases = balance(equipped("roll_structure"))
    force, arm = np.array((-60e3, 50e3, -90e3)), POINTS["hoop"].at - np.array((-1.5, 0.0, 0.275))

    wrench = cases.faces["front"].wrench[cases.names.index("roll_structure_left")].sum(axis=0)
    np.testing.assert_allclose(wrench, [*force, *np.cross(arm, force)], rtol=1e-12, atol=1e-6)
    assert np.abs(cases.faces["rear"].wrench[:2].sum(axis=1)).max() < 1e-6


def test_a_situation_does_not_depend_on_the_others_in_the_run() -> None:
    """Every load case of the full catalogue is the one its group gives alone."""
    whole = balance(equipped("all"))
    alone = balance(equipped("crane", "kerb"))
    for name in alone.names:
        for face in ("front", "rear"):
            np.testing.assert_allclose(section(whole, face, name), section(alone, face, name), atol=1e-9)
    assert set(by_name(expand(equipped("crane")))) <= set(whole.names)
