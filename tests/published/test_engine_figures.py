"""Engine figures.

J. B. Heywood, *Internal Combustion Engine Fundamentals*, McGraw-Hill 1988, eq. 2.19-2.20 and section 2.2 (formulas and
the rounded examples below); data of the 2.4-litre V8 formula of 2006-08 as its makers published them, from memory; the
horsepower rule and the 6.5-litre twelve-cylinder figures are common practice without a source.
"""

from __future__ import annotations

import math
from collections.abc import Callable

import pytest

from blockload.car.engine import bmep, displacement, mean_piston_speed, power, torque_at
from blockload.car.torque import PRESSURE

HEYWOOD = "Heywood 1988, eq. 2.19-2.20"
V8_DATA = "published 2.4 L V8 data 2006-08 (from memory)"
POUND_FOOT = 4.4482216152605 * 0.3048  # exact: N·m in a lbf·ft
HORSEPOWER = 550 * POUND_FOOT  # exact: W in a mechanical horsepower
RPM = 2 * math.pi / 60

Published = Callable[..., None]


def test_mean_effective_pressure_and_power_of_a_two_litre_engine(published: Published) -> None:
    """4 pi T / V of 250 N·m from 2.0 L, and T omega at 5500 rpm."""
    published(
        "BMEP of 250 N·m from 2.0 L", HEYWOOD, expected=1570.80e3, got=bmep(250.0, 2e-3), unit="Pa", tolerance=1e-5
    )
    published(
        "power at 250 N·m, 5500 rpm", HEYWOOD, expected=143.99e3, got=power(250.0, 5500 * RPM), unit="W", tolerance=1e-4
    )


def test_swept_volume_piston_speed_and_pressure_of_a_racing_v8(published: Published) -> None:
    volume = displacement(98e-3, 39.75e-3, 8)
    published("swept volume 98 x 39.75 x 8", V8_DATA, expected=2398.66e-6, got=volume, unit="m³", tolerance=1e-5)
    speed = mean_piston_speed(39.75e-3, 18000 * RPM)
    published("mean piston speed at 18 000 rpm", V8_DATA, expected=23.85, got=speed, unit="m/s", tolerance=1e-6)
    published(
        "BMEP of 290 N·m from 2.4 L", V8_DATA, expected=15.18e5, got=bmep(290.0, 2.4e-3), unit="Pa", tolerance=5e-4
    )


def test_swept_volume_of_the_six_of_the_rules(published: Published) -> None:
    """Six of 80 x 53 mm: the bore is in the FIA F1 regulations, the stroke from memory."""
    got = displacement(80e-3, 53e-3, 6)
    what = "swept volume 80 x 53 x 6"
    source = "FIA F1 regulations (bore; stroke from memory)"
    published(what, source, expected=1598.44e-6, got=got, unit="m³", tolerance=1e-5)


def test_the_pressures_warned_about_lie_at_the_top_of_the_handbooks_ranges() -> None:
    """Heywood section 2.7: charged spark engines to 17 bar, freely breathing racing ones to 15 (from memory)."""
    assert {charged: limit / 1e5 for charged, limit in PRESSURE.items()} == {False: 15.0, True: 17.0}


def test_mean_piston_speed_of_a_road_engine(published: Published) -> None:
    got = mean_piston_speed(80e-3, 6000 * RPM)
    published(
        "mean piston speed 80 mm, 6000 rpm",
        "Heywood 1988, sec. 2.2",
        expected=16.0,
        got=got,
        unit="m/s",
        tolerance=1e-9,
    )


def test_power_is_torque_times_speed() -> None:
    """509.3 N·m at 10 500 rpm is 560 kW (an identity)."""
    assert power(509.3, 10500 * RPM) == pytest.approx(560e3, rel=5e-5)


def test_torque_at_a_pressure_undoes_the_pressure_of_a_torque() -> None:
    assert torque_at(bmep(321.0, 4e-3), 4e-3) == pytest.approx(321.0)
    assert torque_at(14e5, 4.0e-3) == pytest.approx(446.0, abs=0.5)


def test_horsepower_rule() -> None:
    """Horsepower is lbf·ft x rpm / 5252: 546 lbf·ft at 7000 rpm is 728 hp (common practice)."""
    horsepower = power(546 * POUND_FOOT, 7000 * RPM) / HORSEPOWER

    assert horsepower == pytest.approx(546 * 7000 / 5252, rel=5e-5)
    assert horsepower == pytest.approx(728, abs=0.5)


def test_figures_of_a_large_racing_twelve() -> None:
    """6.5 L: 546 lbf·ft is 14.3 bar, 1000 hp at 10 500 rpm 13.1 bar; 25-26 m/s at 11 100 rpm (common practice)."""
    volume = 6.5e-3
    torque = 1000 * HORSEPOWER / (10500 * RPM)

    assert bmep(546 * POUND_FOOT, volume) == pytest.approx(14.3e5, abs=0.05e5)
    assert bmep(torque, volume) == pytest.approx(13.1e5, abs=0.05e5)
    for stroke, speed, bore in ((67.6e-3, 25.0, 101.0e-3), (70.3e-3, 26.0, 99.0e-3)):
        assert mean_piston_speed(stroke, 11100 * RPM) == pytest.approx(speed, abs=0.03)
        assert displacement(bore, stroke, 12) == pytest.approx(volume, rel=2e-3)
