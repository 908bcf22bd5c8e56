"""The boundary of grip and power: every vertex at a limit, symmetric, and each response with its own vertex."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from car.catalogue_car import PERFORMANCE, TYRES, with_envelope
from car.worked_car import CAR

from blockload.car.balance import balance
from blockload.car.envelope import boundary, envelope, vertices
from blockload.car.governing import governing, in_group
from blockload.car.grip_notes import grip_used
from blockload.car.limits import LIMITS, axle_use
from blockload.case.model import Performance, Tyres
from blockload.errors import CaseError


def test_every_vertex_sits_on_the_limit_it_names() -> None:
    """Seen from the balanced load cases, not from the search: the axle's grip or the power is used to 1e-6."""
    case = with_envelope()
    found, cases = envelope(case), balance(case)
    wheels = cases.wheels.reshape(-1, 2, 2, 3)
    grip = axle_use(case, wheels[..., 0].sum(axis=-1), wheels[..., 1].sum(axis=-1), wheels[..., 2])
    power = np.maximum(wheels[..., 0].sum(axis=(1, 2)), 0.0) * cases.speed / PERFORMANCE.power
    uses = np.column_stack([grip, power])

    limit = found.limit.ravel()
    assert set(limit.tolist()) <= {0, 1, 2}
    np.testing.assert_allclose(uses[np.arange(len(limit)), limit], 1.0, atol=1e-6)
    assert uses.max() < 1.0 + 1e-6
    np.testing.assert_allclose(np.nanmax(grip_used(case, cases), axis=1), grip.max(axis=1))


def test_every_vertex_is_an_ordinary_balanced_load_case() -> None:
    cases = balance(with_envelope())

    assert len(cases.names) == 10 * 24
    assert cases.residual.max() < 1e-12
    assert not cases.wheel_lift.any()


def test_left_and_right_are_mirror_images() -> None:
    found = envelope(with_envelope(headings=36))
    mirrored = found.acceleration[:, (-np.arange(36)) % 36] * (1.0, -1.0)

    np.testing.assert_allclose(found.acceleration, mirrored, atol=1e-9)


def test_without_air_and_load_transfer_the_boundary_is_the_friction_ellipse() -> None:
    """CG on the ground, brakes in proportion to load, no power limit: |a| = mu g along each heading when braking."""
    low = {name: replace(body, cg=np.array((-1.375, 0.0, 0.0)), inertia=np.eye(3)) for name, body in CAR.bodies.items()}
    axles = {
        name: replace(
            axle, corner=replace(axle.corner, mass=40.0, cg=np.array((axle.x, 0.8, 0.0))), roll_centre_height=0.0
        )
        for name, axle in CAR.axles.items()
    }
    drive = replace(CAR.drive, brake_front_share=0.5)
    case = replace(CAR, bodies=low, axles=axles, devices=(), drive=drive, tyres=Tyres(mu_x=1.6, mu_y=1.2))
    angles = np.radians([90.0, 120.0, 150.0, 180.0])
    found = boundary(case, np.array([30.0]), angles, power=None).acceleration[0]

    np.testing.assert_allclose(np.hypot(found[:, 0] / 1.6, found[:, 1] / 1.2), CAR.gravity, rtol=1e-9)


def test_forward_at_the_highest_speed_only_what_power_leaves_over_drag_remains() -> None:
    """M a v = P - D v, by hand."""
    case = with_envelope(4, (75.0,))
    drag = 0.5 * 1.2 * 75.0**2 * 1.35

    ahead = envelope(case).acceleration[0, 0, 0]
    assert ahead == pytest.approx((360e3 / 75.0 - drag) / 1150.0, rel=1e-9)
    assert LIMITS[envelope(case).limit[0, 0]] == "power"


def test_braking_at_the_limit_is_what_brake_balance_and_axle_loads_allow() -> None:
    """Rear axle at its grip: 0.42 of the tyre force = mu times the rear load that drag, weight and transfer leave."""
    case = with_envelope(4, (40.0,), tyres=Tyres(mu_x=1.5))
    found = envelope(case)
    cases = balance(case)
    wheels = cases.wheels[2]

    assert found.limit[0, 2] == 1
    assert -wheels[2:, 0].sum() == pytest.approx(1.5 * wheels[2:, 2].sum(), rel=1e-9)
    assert wheels[2:, 0].sum() / wheels[:, 0].sum() == pytest.approx(0.42, rel=1e-9)


def test_more_downforce_and_more_friction_never_shrink_the_boundary() -> None:
    base = np.linalg.norm(envelope(with_envelope(performance=replace(PERFORMANCE, power=None))).acceleration, axis=-1)
    grippy = with_envelope(tyres=replace(TYRES, mu_x=1.9, mu_y=1.9), performance=replace(PERFORMANCE, power=None))

    assert np.all(np.linalg.norm(envelope(grippy).acceleration, axis=-1) > base)


def test_each_response_has_its_own_governing_vertex_and_no_vertex_exceeds_it() -> None:
    cases = balance(with_envelope())
    rows = governing(cases, in_group(cases, "envelope"))
    section = cases.section("front")

    value = {(row.face, row.place, row.response): row for row in rows}
    assert value["front", "M_sag", "greatest"].value == section[:, 4].max()
    assert value["front", "M_lat", "least"].value == section[:, 5].min()
    studs = len(CAR.faces["front"].studs) + len(CAR.faces["rear"].studs)
    assert len(rows) == 2 * 12 + 3 * studs
    assert len({row.load_case for row in rows}) > 4
    for row in rows:
        sign = -1.0 if row.response in ("least", "compression") else 1.0
        assert row.second is not None
        assert sign * row.second[1] <= sign * row.value


def test_a_speed_the_power_cannot_hold_is_refused_with_the_power_it_needs() -> None:
    case = with_envelope(performance=replace(PERFORMANCE, power=200e3))
    with pytest.raises(CaseError, match=r"cannot even hold its speed: it needs .* kW, and the limit is power"):
        envelope(case)


def test_unknown_friction_or_speed_is_asked_for() -> None:
    with pytest.raises(CaseError, match=r"tyres\.mu_y"):
        envelope(with_envelope(tyres=Tyres()))
    with pytest.raises(CaseError, match=r"envelope\.speeds"):
        envelope(with_envelope(performance=Performance()))


def test_a_stiff_load_sensitivity_lowers_cornering() -> None:
    free = envelope(with_envelope(tyres=replace(TYRES, load_sensitivity=0.0)))
    loaded = envelope(with_envelope(tyres=replace(TYRES, load_sensitivity=4e-5)))

    assert np.abs(loaded.acceleration[-1, 6, 1]) < np.abs(free.acceleration[-1, 6, 1])


def test_vertices_push_or_brake_as_the_tyres_must() -> None:
    """Between no acceleration and what drag takes, the tyres still push although the car slows."""
    for item in vertices(with_envelope()):
        assert item.drive in ("accelerate", "brake")
        assert item.group == "envelope"
        assert "boundary of grip and power" in (item.basis or "")


def test_a_tall_car_is_limited_by_tipping_before_grip() -> None:
    """The vertex names it, and a second wheel is at the point of lifting there."""
    bodies = {name: replace(body, cg=body.cg + np.array((0.0, 0.0, 0.9))) for name, body in CAR.bodies.items()}
    case = with_envelope(4, (5.0,), bodies=bodies)
    found, cases = envelope(case), balance(case)

    assert LIMITS[found.limit[0, 1]] == "two wheels off the ground"
    loads = np.sort(cases.wheels[1, :, 2])
    assert abs(loads[1]) < 1e-6 * loads.sum()
    assert not cases.wheel_lift[1]
