"""Laws of laps: a sample is the load case that its manoeuvre would be, however the lap is cut, stepped or written."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from car.aero_maps import aero_map, no_point, with_map
from car.linked_car import linked, rear
from car.random_cars import cars
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from blockload.car.balance import balance
from blockload.car.lap_model import LapLoads
from blockload.car.laps import lap_loads
from blockload.car.model import LoadCases
from blockload.car.resampling import averaged, resampled, timed
from blockload.case.model import CORNERS, Case, LapHistory, Manoeuvre

QUICK = settings(max_examples=25, deadline=None, suppress_health_check=[HealthCheck.too_slow])
SAMPLES = 60


def history(seed: int, count: int = SAMPLES, **channels: Any) -> LapHistory:
    random = np.random.default_rng(seed)
    return LapHistory(
        name="lap",
        path=Path("lap.csv"),
        time=np.arange(count) * 0.01,
        distance=None,
        speed=random.uniform(0.0, 75.0, count),
        acceleration=random.normal(size=(count, 3)) * (8.0, 12.0, 2.0),
        channels=channels,
    )


def one_by_one(case: Case, lap: LapLoads, samples: LapHistory, **more: Any) -> LoadCases:
    """The samples as manoeuvres of their own, driven or braked as the lap says."""
    push = (lap.wheel_force[..., 0].sum(axis=1) >= 0.0).tolist()
    manoeuvres = [
        Manoeuvre(
            name=str(k),
            speed=float(samples.speed[k]),
            acceleration=samples.acceleration[k],
            drive="accelerate" if push[k] else "brake",
            **{name: values[k] for name, values in more.items()},
        )
        for k in range(len(push))
    ]
    return balance(case, manoeuvres)


def assert_same(lap: LapLoads, cases: LoadCases) -> None:
    size = np.abs(cases.wheels).max()
    assert np.abs(lap.wheel_force - cases.wheels).max() < 1e-9 * size
    for name, face in lap.faces.items():
        other = cases.faces[name]
        assert np.array_equal(face.reference, other.reference)
        assert np.abs(face.wrench - other.wrench.sum(axis=1)).max() < 1e-9 * size
        assert np.abs(face.section - cases.section(name)).max() < 1e-9 * size
        assert np.abs(face.stud_axial - other.stud_axial.sum(axis=1)).max() < 1e-9 * size
        assert np.abs(face.stud_shear - other.stud_shear.sum(axis=1)).max() < 1e-9 * size
    for corner, tension in lap.links.items():
        assert lap.link_names[corner] == cases.links[corner].names
        assert np.abs(tension - cases.links[corner].tension.sum(axis=1)).max() < 1e-9 * size
    assert np.array_equal(lap.lifted, cases.lifted)
    assert np.array_equal(lap.pulled, cases.wheel_lift)
    assert np.abs(lap.acceleration - cases.acceleration.sum(axis=1)).max() < 1e-9 * np.abs(lap.acceleration).max()
    np.testing.assert_allclose(lap.crank_torque, cases.crank_torque, rtol=1e-9, atol=1e-9 * size)


@QUICK
@given(case=cars(), seed=st.integers(0, 10_000))
def test_a_sample_of_any_car_is_the_load_case_of_the_same_manoeuvre(case: Case, seed: int) -> None:
    random = np.random.default_rng(seed)
    channels = {
        "overall_ratio": random.uniform(3, 12, SAMPLES),
        "crank_acceleration": random.normal(size=SAMPLES) * 800,
    }
    samples = history(seed, **channels)
    lap = lap_loads(case, samples)

    assert_same(lap, one_by_one(case, lap, samples, **channels))
    assert lap.gap.max() < 1e-9


def test_a_sample_of_a_car_on_links_with_inboard_brakes_is_the_same_load_case() -> None:
    case = linked(rear_axle=replace(rear(), brakes="inboard"), chassis_torsion=8e5)
    samples = history(3)
    lap = lap_loads(case, samples)

    assert set(lap.links) == set(CORNERS)
    assert_same(lap, one_by_one(case, lap, samples))


def floor_map() -> Case:
    """The worked car with a floor that gains downforce as it sinks and yields a side force in yaw."""
    grid = {
        "ride_front": np.linspace(-0.05, 0.15, 5),
        "ride_rear": np.linspace(-0.05, 0.20, 5),
        "yaw": np.linspace(-0.2, 0.2, 3),
    }

    def area(front: float, rear_: float, yaw: float) -> tuple[float, ...]:
        return (-0.2, 1.5 * yaw, -2.3 + 4.0 * (front - 0.04) + 3.0 * (rear_ - 0.07), 0.0, 0.1, 0.3 * yaw, *no_point())

    table = aero_map(grid, area, states=("low", "high"), default="low")
    table = replace(table, values=table.values * np.array([1.0, 1.4]).reshape(2, 1, 1, 1, 1))
    return with_map("floor", table, outside="clamp")


def test_a_sample_reads_an_aero_map_as_the_same_manoeuvre_does() -> None:
    random, case = np.random.default_rng(4), floor_map()
    yaw, state = random.uniform(-0.25, 0.2, SAMPLES), tuple(random.choice(["low", "high"], SAMPLES).tolist())
    samples = replace(history(4, yaw=yaw), state=state)
    lap = lap_loads(case, samples, chunk=17)
    cases = one_by_one(case, lap, samples, yaw=yaw, state=state)

    assert_same(lap, cases)
    np.testing.assert_allclose(lap.ride_height, cases.ride_height, atol=1e-7)
    assert lap.outside.any()
    assert np.array_equal(lap.outside, np.array(cases.outside_map) != "")


def test_measured_ride_heights_that_equal_the_computed_ones_change_nothing() -> None:
    case, samples = floor_map(), history(4)
    plain = lap_loads(case, samples)
    ride = {f"ride_{name}": plain.ride_height[:, k] for k, name in enumerate(("front", "rear"))}
    again = lap_loads(case, replace(samples, channels=ride))
    lower = lap_loads(case, replace(samples, channels={name: values - 0.01 for name, values in ride.items()}))

    np.testing.assert_allclose(again.faces["front"].wrench, plain.faces["front"].wrench, atol=1e-6)
    fast = samples.speed > 30.0
    assert (lower.wheel_force[fast, :, 2].sum(axis=1) > plain.wheel_force[fast, :, 2].sum(axis=1)).all()


@pytest.mark.parametrize("chunk", [1, 7, 60, 1000])
def test_chunk_size_does_not_matter(chunk: int) -> None:
    samples = history(5, 60)
    whole, cut = (lap_loads(linked(), samples, chunk=size) for size in (60, chunk))

    for name in ("front", "rear"):
        assert np.abs(whole.faces[name].wrench - cut.faces[name].wrench).max() < 1e-8
    assert all(np.abs(whole.links[c] - cut.links[c]).max() < 1e-8 for c in CORNERS)


def test_measured_loads_that_equal_the_computed_ones_change_nothing() -> None:
    samples = history(6)
    plain = lap_loads(linked(), samples)
    names = plain.link_names["FL"]
    measured = {f"pushrod.{c}": plain.links[c][:, names.index("pushrod")] for c in CORNERS}
    again = lap_loads(linked(), replace(samples, channels=measured))

    assert np.abs(again.extra_load).max() < 1e-6
    assert np.abs(again.faces["front"].wrench - plain.faces["front"].wrench).max() < 1e-6


@pytest.mark.parametrize(
    ("kind", "axles"), [("wheel", CORNERS), ("pushrod", CORNERS), ("pushrod", ("RL", "RR")), ("damper", CORNERS)]
)
def test_measured_loads_come_out_as_measured_and_as_a_blow_of_that_size(kind: str, axles: tuple[str, ...]) -> None:
    random = np.random.default_rng(7)
    samples = history(7)
    channels = {f"{kind}.{corner}": random.uniform(-4e3, 12e3, SAMPLES) for corner in axles}
    lap = lap_loads(linked(), replace(samples, channels=channels))
    kicks = [dict(zip(CORNERS, np.pad(row[:, None], ((0, 0), (2, 0))), strict=True)) for row in lap.extra_load]
    cases = one_by_one(linked(), lap, samples, extra_wheel_force=kicks)

    for corner in axles:
        i = CORNERS.index(corner)
        member = {"pushrod": "pushrod", "damper": "spring"}.get(kind)
        got = lap.wheel_force[:, i, 2] if member is None else lap.links[corner][:, lap.link_names[corner].index(member)]
        np.testing.assert_allclose(got, channels[f"{kind}.{corner}"], rtol=1e-9, atol=1e-5)
    for name in ("front", "rear"):
        gap = lap.faces[name].wrench - cases.faces[name].wrench.sum(axis=1)
        assert np.abs(gap).max() < 1e-7 * np.abs(cases.faces[name].wrench).max()
    assert np.abs(lap.angular_acceleration - cases.angular_acceleration.sum(axis=1)).max() < 1e-6


def test_a_measured_torque_stands_in_for_the_computed_one_behind_the_front_face_alone() -> None:
    samples, torque = history(8), np.linspace(-50.0, 600.0, SAMPLES)
    plain = lap_loads(linked(), samples)
    lap = lap_loads(linked(), replace(samples, channels={"torque": torque}))
    sign = linked().drive.crank_direction

    np.testing.assert_allclose(lap.faces["front"].wrench, plain.faces["front"].wrench, atol=1e-8)
    change = lap.faces["rear"].section[:, 3] - plain.faces["rear"].section[:, 3]
    np.testing.assert_allclose(change, -sign * torque, atol=1e-7)


@QUICK
@given(seed=st.integers(0, 10_000), step=st.floats(0.002, 0.7), slope=st.floats(-50, 50), start=st.floats(-50, 50))
def test_resampling_a_straight_history_is_exact(seed: int, step: float, slope: float, start: float) -> None:
    time = np.cumsum(np.random.default_rng(seed).uniform(0.005, 0.05, 200))
    line = start + slope * time
    made, _ = resampled(
        LapHistory(
            name="x",
            path=Path("x"),
            time=time,
            distance=None,
            speed=line,
            acceleration=np.outer(line, (1, 2, 3)),
            channels={"yaw": line},
        ),
        step,
    )

    assert made.time is not None
    for values in (made.speed, made.acceleration[:, 0], made.channels["yaw"]):
        np.testing.assert_allclose(values, start + slope * made.time, atol=1e-7)
    assert np.allclose(np.diff(made.time), step, rtol=1e-6) or len(made.time) < 2


def test_averaging_keeps_the_integral_and_takes_away_what_is_faster_than_the_step() -> None:
    """A sine with one whole period per step vanishes: read at single points it would have become a false constant."""
    time = np.arange(0.0, 20.0 + 1e-9, 0.001)
    fast = 5.0 * np.cos(2.0 * np.pi * time / 0.1) + 2.0
    at = np.arange(1.0, 19.0, 0.1)
    means = averaged(time, fast, at, np.full(len(at), 0.05))

    assert np.abs(fast[np.rint(at / 0.001).astype(int)] - 7.0).max() < 1e-6
    assert np.abs(means - 2.0).max() < 1e-9
    whole = averaged(time, time**2, np.array([10.0]), np.array([10.0]))[0] * 20.0
    assert whole == pytest.approx(20.0**3 / 3.0, rel=1e-7)


def test_a_finer_step_reads_the_line_and_loses_no_peak() -> None:
    samples = history(9)
    made, lost = resampled(samples, 0.0025)

    assert lost == ()
    np.testing.assert_allclose(made.acceleration[::4], samples.acceleration, atol=1e-9)


def test_distance_becomes_time_exactly_under_constant_acceleration() -> None:
    """Distance v0 t + a t²/2 at speed v0 + a t, sampled at uneven places."""
    time = np.array([0.0, 0.3, 0.35, 1.0, 2.2, 4.0])
    speed, distance = 20.0 + 3.0 * time, 20.0 * time + 1.5 * time**2
    samples = replace(history(1, 6), time=None, distance=distance, speed=speed)
    made = timed(samples)

    assert made.time is not None
    np.testing.assert_allclose(made.time, time, atol=1e-12)


def test_what_a_lap_was_made_of_is_not_changed() -> None:
    samples = history(2)
    before = samples.acceleration.copy()
    lap_loads(linked(), samples)
    resampled(samples, 0.05)

    assert np.array_equal(samples.acceleration, before)
