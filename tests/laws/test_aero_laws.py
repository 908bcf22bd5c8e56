"""Laws of aero: ride heights agree with the loads they cause, and no split of a total leaves its bounds.

The reference for the bounds is scipy's linear programming (HiGHS) on the same equations, written a second time here;
the reference for the ride heights is the wheel loads that come out.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from car.aero_maps import SPRUNG_FRONT, SPRUNG_REAR, aero_map, no_point, with_map
from car.random_cars import cars, number
from car.worked_car import CAR, manoeuvre
from hypothesis import assume, given, settings
from hypothesis import strategies as st
from scipy.optimize import linprog

from blockload.car.aero_split import bounds, corners, extreme_cases, least_norm, splits, with_middle_split
from blockload.car.balance import balance
from blockload.car.bodies import masses
from blockload.case.model import AeroTotal, Case
from blockload.errors import BalanceError, CaseError

LAW = settings(max_examples=20, deadline=None)
SEED = st.integers(0, 10_000)
RIDE = {"ride_front": np.linspace(0.0, 0.1, 6), "ride_rear": np.linspace(0.0, 0.15, 5)}


def floor_map(seed: int) -> Case:
    """The worked car with a floor that varies with both ride heights, its centre of pressure too."""
    rng = np.random.default_rng(seed)
    slope, shift = rng.uniform(-12, 6, 2), rng.uniform(-2, 2, 2)

    def values(front: float, rear: float) -> tuple[float, ...]:
        ride = np.array([front, rear])
        return (-0.2, 0, -2.3 - slope @ (ride - 0.03), 0, 0, 0, -1.4 + shift @ ride, 0.0, 0.08)

    return with_map("floor", aero_map(RIDE, values), outside="clamp")


STATES = [
    manoeuvre("static"),
    manoeuvre("v_max", speed=75.0),
    manoeuvre("brake", speed=70.0, acceleration=(-25, 0, 0), drive="brake"),
    manoeuvre("corner", speed=55.0, acceleration=(0, 18, 0)),
    manoeuvre("crest", speed=60.0, acceleration=(0, 0, -3)),
    manoeuvre("coast", speed=60.0, drive="coast"),
]


@LAW
@given(SEED)
def test_ride_heights_are_those_of_the_wheel_loads_that_come_out(seed: int) -> None:
    case = floor_map(seed)
    try:
        cases = balance(case, STATES)
    except BalanceError:
        assume(False)
    axle = cases.wheels[:, :, 2].reshape(-1, 2, 2).sum(axis=2)
    expected = np.empty_like(cases.ride_height)
    for i, it in enumerate((SPRUNG_FRONT, SPRUNG_REAR)):
        more = axle[:, i] - axle[0, i]
        sprung = more - 2 * it.corner.mass * np.array([m.acceleration[2] for m in STATES])
        expected[:, i] = it.ride_height - sprung / (2 * it.ride_stiffness) - more / (2 * it.tyre_stiffness)

    assert cases.ride_height == pytest.approx(expected, abs=1e-6)
    assert cases.residual.max() < 1e-9


@LAW
@given(SEED)
def test_mirrored_turns_run_at_the_same_ride_heights(seed: int) -> None:
    turns = [manoeuvre(f"{a}", speed=60.0, acceleration=(0, a, 0)) for a in (15.0, -15.0)]
    cases = balance(floor_map(seed), turns)

    assert cases.ride_height[0] == pytest.approx(cases.ride_height[1], abs=1e-9)
    assert cases.section("front")[0] == pytest.approx(cases.section("front")[1] * (1, -1, 1, -1, 1, -1), abs=1e-4)


def test_a_kick_at_a_wheel_does_not_move_the_ride_height() -> None:
    kick = {"RL": np.array([-2e3, 0, 10e3])}
    still, kicked = (manoeuvre("coast", speed=50.0, drive="coast", extra_wheel_force=extra) for extra in ({}, kick))
    cases = balance(floor_map(1), [still, replace(kicked, name="kicked")])

    assert cases.ride_height[0] == pytest.approx(cases.ride_height[1], abs=1e-9)


def test_a_softer_car_runs_lower() -> None:
    case = floor_map(4)
    soft = {name: replace(axle, ride_stiffness=0.8 * axle.ride_stiffness) for name, axle in case.axles.items()}
    heights = [balance(c, STATES).ride_height for c in (case, replace(case, axles=soft))]

    assert (heights[1][1] < heights[0][1] - 1e-3).all()
    assert heights[1][0] == pytest.approx(heights[0][0])


def test_ten_thousand_coupled_load_cases_settle_in_seconds() -> None:
    """Vectorised: ten thousand manoeuvres at once give what each gives alone."""
    rng = np.random.default_rng(0)
    many = [
        manoeuvre(f"m{i}", speed=v, acceleration=(0, a, 0))
        for i, (v, a) in enumerate(zip(rng.uniform(10, 75, 10_000), rng.uniform(-20, 20, 10_000), strict=True))
    ]
    case = floor_map(2)
    together = balance(case, many)
    alone = balance(case, many[17:18])

    assert together.ride_height[17] == pytest.approx(alone.ride_height[0], abs=1e-6)


def totals_of(case: Case, *, includes: bool, drag: bool) -> Case:
    """The same car known by its totals alone, its own devices the possible carriers."""
    rear, span = case.axles["rear"].x, case.wheelbase
    down = np.array([d.downforce_area for d in case.devices])
    pull = np.array([d.drag_area for d in case.devices])
    at = np.array([d.at for d in case.devices])
    counted = (pull if drag else 0 * pull) if includes else 0 * pull
    share = (down @ (at[:, 0] - rear) - counted @ at[:, 2]) / span / down.sum()
    pressure = 0.5 * case.air_density * 50.0**2
    total = AeroTotal(
        downforce=pressure * float(down.sum()),
        at_speed=50.0,
        front_share=float(share),
        share_includes_drag_moment=includes,
        drag=pressure * float(pull.sum()) if drag else None,
    )
    return replace(case, devices=(), aero_total=total, aero_split=case.devices)


FREE = st.booleans()
TURN = [
    manoeuvre("turn", speed=55.0, acceleration=(0, 12, 0), overall_ratio=5.0),
    manoeuvre("brake", speed=60.0, acceleration=(-20, 0, 0), drive="brake"),
    manoeuvre("kick", speed=40.0, drive="coast", extra_wheel_force={"RL": np.array([-2e3, 0, 1e4])}),
]


def open_car(case: Case, *, includes: bool, drag: bool) -> Case:
    devices = tuple(replace(d, downforce_area=abs(d.downforce_area) + 0.1) for d in case.devices)
    assume(len(devices) >= 2)
    return totals_of(replace(case, devices=devices), includes=includes, drag=drag)


@LAW
@given(cars(rear_carriers=("gearbox",)), FREE, FREE)
def test_bounds_are_those_of_linear_programming(case: Case, includes: bool, drag: bool) -> None:
    open_one = open_car(case, includes=includes, drag=drag)
    found = splits(open_one)
    cases = balance(open_one, TURN)
    matrix, right = equations(open_one, includes=includes, drag=drag)
    for c in range(len(TURN)):
        sources = cases.faces["front"].wrench[c, : len(found.columns), 4] * -1.0
        unit = np.divide(sources, found.middle, out=np.zeros_like(sources), where=found.middle > 0)
        rest = -cases.faces["front"].wrench[c, :, 4].sum() - sources.sum()
        for sign, end in ((1.0, 0), (-1.0, 1)):
            best = linprog(sign * unit, A_eq=matrix, b_eq=right, bounds=(0, None), method="highs")

            assert best.success
            got = cases.aero_bounds.section["front"][end, c, 4]
            assert got == pytest.approx(rest + sign * best.fun, rel=1e-6, abs=1e-2)


def equations(case: Case, *, includes: bool, drag: bool) -> tuple[np.ndarray, np.ndarray]:
    """The equations of the totals, written out plainly: downforce of each carrier first, then drag of each."""
    total, rear, span = case.aero_total, case.axles["rear"].x, case.wheelbase
    pressure = 0.5 * case.air_density * total.at_speed**2
    down = [1.0 for _ in case.aero_split]
    lever = [(d.at[0] - rear) / span for d in case.aero_split]
    height = [-d.at[2] / span if includes else 0.0 for d in case.aero_split]
    none = [0.0 for _ in case.aero_split]
    whole = total.downforce / pressure
    if not drag or not total.drag:
        return np.array([down, lever]), np.array([whole, total.front_share * whole])
    rows = [down + none, lever + height, none + down]
    return np.array(rows), np.array([whole, total.front_share * whole, total.drag / pressure])


@LAW
@given(cars(rear_carriers=("gearbox",)), FREE, FREE, SEED)
def test_every_split_lies_within_the_bounds_and_the_extremes_reach_them(
    case: Case, includes: bool, drag: bool, seed: int
) -> None:
    """Balanced anew as a car with devices: at each extreme split, and at a random mixture of them, on four wheels."""
    open_one = open_car(case, includes=includes, drag=drag)
    found, cases = splits(open_one), balance(open_one, TURN)
    assume(cases.aero_bounds is not None and not cases.aero_bounds.lifts.any())
    weights = np.random.default_rng(seed).dirichlet(np.ones(len(found.area)))
    mixed = replace(open_one, devices=found.devices(weights @ found.area), aero_total=None, aero_split=())
    every = [balance(c, TURN) for _, c in extreme_cases(open_one)]
    for face in ("front", "rear"):
        ends = cases.aero_bounds.section[face]
        reached = np.stack([c.section(face) for c in every])
        inside, size = balance(mixed, TURN).section(face), 1e-9 * np.abs(reached).max() + 1e-6

        assert reached.min(axis=0) == pytest.approx(ends[0], abs=size)
        assert reached.max(axis=0) == pytest.approx(ends[1], abs=size)
        assert (inside >= ends[0] - size).all()
        assert (inside <= ends[1] + size).all()
        axial = np.stack([c.faces[face].stud_axial.sum(axis=1) for c in every])
        shear = np.linalg.norm(np.stack([c.faces[face].stud_shear.sum(axis=1) for c in every]), axis=-1)
        assert axial.max(axis=0) == pytest.approx(cases.aero_bounds.stud_axial[face][1], abs=size)
        assert shear.max(axis=0) == pytest.approx(cases.aero_bounds.stud_shear_resultant[face][1], abs=size)
        own = np.linalg.norm(balance(mixed, TURN).faces[face].stud_shear.sum(axis=1), axis=-1)
        assert (own >= cases.aero_bounds.stud_shear_resultant[face][0] - size).all()


def test_an_extreme_split_has_no_more_carriers_than_equations() -> None:
    for drag, most in ((False, 2), (True, 3)):
        found = splits(totals_of(CAR, includes=True, drag=drag))

        assert ((found.area > 1e-12).sum(axis=1) <= most).all()
        assert len(found.area) > 1


def test_the_worked_car_has_the_band_worked_out_by_hand() -> None:
    """18.06 kN at a front share of 0.446 without drag moment, over the closed form of M_sag per kN of each device.

    M(x) = (-x/WB)(x_c + WB) - [behind the cut](x_c - x): front wing -0.364, floor +0.636, diffuser +0.136, rear wing
    -0.164 kN·m per kN. Least: wings alone, at 0.3965 and 0.6035; greatest: floor and diffuser, 0.8879 and 0.1121.
    The car's own split gives 3.15 kN·m.
    """
    wings = tuple(d for d in CAR.devices if d.downforce_area)
    open_one = totals_of(replace(CAR, devices=wings), includes=False, drag=False)
    only = [manoeuvre("downforce_only", speed=75.0, parts=("downforce",))]
    low, high = balance(open_one, only).aero_bounds.section["front"][:, 0, 4]

    assert low == pytest.approx(18056.25 * (0.3965 * -0.3636 + 0.6035 * -0.1636), rel=1e-3)
    assert high == pytest.approx(18056.25 * (0.8879 * 0.6364 + 0.1121 * 0.1364), rel=1e-3)
    assert (round(low / 1e3, 1), round(high / 1e3, 1)) == (-4.4, 10.5)
    assert balance(CAR, only).section("front")[0, 4] == pytest.approx(3154.0, abs=1.0)


def test_wheel_loads_do_not_depend_on_the_split_where_the_share_is_that_of_the_axles() -> None:
    open_one = totals_of(CAR, includes=True, drag=True)
    every = np.stack([balance(c, TURN).wheels[..., 2] for _, c in extreme_cases(open_one)])

    assert np.ptp(every, axis=0).max() < 1e-6


def test_the_middle_split_keeps_total_and_balance() -> None:
    open_one = totals_of(CAR, includes=True, drag=True)
    it = [manoeuvre("v", speed=50.0)]
    middle, own = balance(open_one, it), balance(CAR, it)

    assert middle.downforce == pytest.approx(own.downforce)
    assert middle.drag == pytest.approx(own.drag)
    assert middle.wheels == pytest.approx(own.wheels)


def test_one_carrier_at_the_centre_of_pressure_is_the_only_split() -> None:
    floor = next(d for d in CAR.devices if d.name == "floor")
    open_one = totals_of(replace(CAR, devices=(floor,)), includes=False, drag=False)

    assert splits(open_one).area == pytest.approx(np.array([[2.3]]))
    with pytest.raises(CaseError):
        splits(replace(open_one, aero_total=replace(open_one.aero_total, front_share=0.3)))


@LAW
@given(SEED)
def test_corners_of_a_random_polytope_bound_every_linear_function(seed: int) -> None:
    rng = np.random.default_rng(seed)
    matrix, inside = rng.uniform(0, 1, (3, 7)), rng.uniform(0, 1, 7)
    found = corners(matrix, matrix @ inside)
    slope = rng.normal(size=7)
    least = linprog(slope, A_eq=matrix, b_eq=matrix @ inside, bounds=(0, None), method="highs")

    assert found @ matrix.T == pytest.approx(np.tile(matrix @ inside, (len(found), 1)))
    assert (found @ slope).min() == pytest.approx(least.fun, abs=1e-8)


@LAW
@given(SEED, number(-3, 3), number(-3, 3))
def test_distance_to_a_polygon_is_that_of_its_nearest_point(seed: int, x: float, y: float) -> None:
    """Against a fine sampling of the hull by mixtures of its points."""
    rng = np.random.default_rng(seed)
    points = rng.normal(size=(5, 2)) + np.array((x, y))
    mixtures = np.concatenate([rng.dirichlet(0.3 * np.ones(5), 20_000), edges(5)]) @ points
    found = float(least_norm(points[:, None])[0])

    assert found <= np.linalg.norm(mixtures, axis=1).min() + 1e-9
    assert found >= np.linalg.norm(mixtures, axis=1).min() - 0.05


def edges(count: int) -> np.ndarray:
    share = np.linspace(0, 1, 400)[:, None]
    unit = np.eye(count)
    return np.concatenate([share * unit[i] + (1 - share) * unit[j] for i in range(count) for j in range(i)])


def test_bounds_of_a_case_at_rest_are_no_band() -> None:
    cases = balance(totals_of(CAR, includes=True, drag=True), [manoeuvre("static")])

    assert np.ptp(cases.aero_bounds.section["front"], axis=0).max() == 0.0


def test_bounds_follow_from_the_faces_alone() -> None:
    open_one = totals_of(CAR, includes=True, drag=True)
    found = splits(open_one)
    cases = balance(replace(with_middle_split(open_one, found), aero_total=None, aero_split=()), TURN)

    assert bounds(found, cases.faces, cases.wheel_force).section["rear"] == pytest.approx(
        balance(open_one, TURN).aero_bounds.section["rear"]
    )


def test_aero_is_never_multiplied_by_what_multiplies_masses() -> None:
    """Mistake: a bump factor on the air as well. Whatever the accelerations, the devices' own forces stay q A."""
    shaken = [manoeuvre(f"{a}", speed=50.0, acceleration=(0, a / 2, a)) for a in (0.0, 10.0, -5.0, 30.0)]
    cases = balance(CAR, shaken)
    terms = [t for t in cases.terms if t.label.startswith("aero.")]

    assert sum(t.force for t in terms)[:, 2] == pytest.approx(-8025.0)
    assert sum(t.force for t in terms)[:, 0] == pytest.approx(-2025.0)


def test_masses_and_air_are_counted_once() -> None:
    """Mistake: sprung CG for the whole car, or unsprung masses twice. Wheel loads sum to all weight and downforce."""
    cases = balance(CAR, [manoeuvre("corner", speed=60.0, acceleration=(0, 15, 0))])
    car = masses(CAR)
    moment = (cases.wheels[0, :, 2] * (0.83, -0.83, 0.81, -0.81)).sum()

    assert cases.wheels[0, :, 2].sum() == pytest.approx(1150 * 9.80665 + cases.downforce[0])
    assert moment == pytest.approx(-1150 * 15 * car.car_cg[2])


def test_a_point_given_as_nan_leaves_the_device_where_it_is() -> None:
    table = aero_map({}, lambda: (-0.45, 0, -1.40, 0, 0, 0, *no_point()))

    assert balance(with_map("rear_wing", table)).section("rear") == pytest.approx(balance(CAR).section("rear"))
