"""Aero maps: what is read from a file, how it is interpolated, and how it reaches the faces."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from car.aero_maps import HEAD, aero_map, no_point, with_map, write
from car.worked_car import CAR, manoeuvre

from blockload.car.aero_map import interpolated
from blockload.car.balance import balance
from blockload.case.aero_csv import read_aero, read_map
from blockload.errors import CaseError

ZERO = (0.0, 0.0, 0.0)


def test_interpolation_is_exact_for_a_function_linear_in_each_axis() -> None:
    """Any product of linear functions of five axes is what a multilinear rule must give back."""
    rng = np.random.default_rng(3)
    names = ("speed", "ride_front", "ride_rear", "yaw", "steer")
    grid = {name: np.sort(rng.uniform(-1, 1, n)) for name, n in zip(names, (2, 3, 4, 2, 3), strict=True)}
    slope = rng.uniform(-1, 1, (9, 5))
    table = aero_map(grid, lambda *x: tuple(np.prod(1.0 + slope * np.array(x), axis=1)))
    at = {name: rng.uniform(steps[0], steps[-1], 50) for name, steps in grid.items()}
    expected = np.prod(1.0 + slope * np.stack(list(at.values()), axis=1)[:, None], axis=2)

    assert interpolated(table, at, np.zeros(50, dtype=int)) == pytest.approx(expected, rel=1e-12)


def test_interpolation_gives_back_every_point_of_the_grid_and_the_edge_beyond_it() -> None:
    steps = np.array([10.0, 20.0, 50.0])
    table = aero_map({"speed": steps}, lambda v: (*ZERO, v**2, 0, 0, *ZERO))
    at = np.array([5.0, 10.0, 20.0, 35.0, 50.0, 90.0])
    found = interpolated(table, {"speed": at}, np.zeros(6, dtype=int))[:, 3]

    assert found == pytest.approx([100.0, 100.0, 400.0, 1450.0, 2500.0, 2500.0])


def test_a_constant_map_loads_the_car_as_constant_areas_do() -> None:
    wing = next(d for d in CAR.devices if d.name == "rear_wing")
    table = aero_map({"yaw": np.array([-0.1, 0.1])}, lambda _: (-0.45, 0, -1.40, *ZERO, *no_point()))
    constant, mapped = balance(CAR), balance(with_map(wing.name, table))

    for face in ("front", "rear"):
        assert mapped.section(face) == pytest.approx(constant.section(face), abs=1e-7)
    assert mapped.downforce == pytest.approx(constant.downforce)
    assert mapped.drag == pytest.approx(constant.drag)


def test_a_moment_of_the_map_is_a_moved_reference_point() -> None:
    """Force at a point of its own, and the same force at the device's point with the moment of the shift."""
    wing = next(d for d in CAR.devices if d.name == "rear_wing")
    force, point = np.array([-0.45, 0.05, -1.40]), np.array([-3.2, 0.1, 0.9])
    moved = aero_map({}, lambda: (*force, *ZERO, *point))
    with_moment = aero_map({}, lambda: (*force, *np.cross(point - wing.at, force), *no_point()))
    kept_whole = [m for m in CAR.manoeuvres if m.parts is None]
    first, second = (balance(with_map("rear_wing", table), kept_whole) for table in (moved, with_moment))

    for face in ("front", "rear"):
        assert first.section(face) == pytest.approx(second.section(face), abs=1e-7)
    assert first.residual.max() < 1e-9


def test_parts_of_a_map_sum_to_the_whole() -> None:
    table = aero_map({}, lambda: (-0.45, 0.1, -1.40, 0.02, 0.3, 0.05, -3.2, 0.1, 0.9))
    car = with_map("rear_wing", table)
    kinds = (("downforce",), ("drag",), ("downforce", "drag"))
    cases = balance(car, [manoeuvre(f"{k}", speed=60.0, parts=parts) for k, parts in enumerate(kinds)])
    wrench = cases.faces["front"].wrench.sum(axis=1)

    assert wrench[0] + wrench[1] == pytest.approx(wrench[2], abs=1e-7)


def test_each_state_is_read_where_its_manoeuvre_names_it() -> None:
    closed = aero_map({}, lambda: (-0.45, 0, -1.40, *ZERO, *no_point()), states=("shut", "open"), default="shut")
    values = closed.values.copy()
    values[1, 2] = -0.6
    car = with_map("rear_wing", replace(closed, values=values))
    named = [
        manoeuvre("a", speed=50.0),
        manoeuvre("b", speed=50.0, state="open"),
        manoeuvre("c", speed=50, state="shut"),
    ]
    lost = 0.5 * 1.2 * 50**2 * 0.8

    assert np.diff(balance(car, named).downforce) == pytest.approx([-lost, lost])


@pytest.mark.parametrize(
    ("table", "needs"),
    [
        ("downforce [m^2], drag [m^2]\n2.0, 0.5", ""),
        ("downforce [1], drag [1]\n1.0, 0.25", "# reference_area = 2 m^2\n"),
        ("downforce [%], drag [%]\n100, 25", "# reference_area = 2 m^2\n"),
        ("speed [km/h], downforce [kN], drag [N]\n180, 3, 750", "# air_density = 1.2 kg/m^3\n"),
        ("lift [m^2], drag [m^2]\n-2.0, 0.5", ""),
        ("force_z [m^2], force_x [m^2]\n-2.0, -0.5", ""),
        ("downforce [m^2], drag [m^2]\n1.0, 0.25", "# model = half\n"),
    ],
)
def test_areas_coefficients_forces_and_half_models_say_the_same(tmp_path: Path, table: str, needs: str) -> None:
    found = read_map(write(tmp_path, table, head=HEAD + needs), "wing", "[aero.wing] map")

    assert found.values[0, :6] == pytest.approx([-0.5, 0, -2.0, 0, 0, 0])
    assert np.isnan(found.values[0, 6:]).all()


def test_axes_turn_forces_moments_points_and_yaw_into_the_car(tmp_path: Path) -> None:
    """With x rearward, y left, z down: a half turn about y, so that yaw counts the other way round too."""
    head = "# axes = x rearward, y left, z down\n# sign = air on car\n# forces_along = car\n# origin = (0, 0, 0.1) m\n"
    table = "yaw [deg], force_x [m^2], force_z [m^2], moment_x [m^3], x [m], y [m], z [m]\n"
    rows = "0, 0.5, 2.0, 0.3, 3.0, 0, -0.8\n10, 0.6, 2.2, 0.4, 3.0, 0, -0.8\n"
    found = read_map(write(tmp_path, table + rows, head=head), "wing", "map")

    assert found.grid[0] == pytest.approx(np.radians([-10.0, 0.0]))
    assert found.values[0, 1] == pytest.approx([-0.5, 0, -2.0, -0.3, 0, 0, -3.0, 0, 0.9])
    assert found.values[0, 0, :3] == pytest.approx([-0.6, 0, -2.2])


def test_readings_of_a_balance_are_turned_round(tmp_path: Path) -> None:
    head = HEAD.replace("air on car", "car on balance")
    found = read_map(write(tmp_path, "force_z [m^2], moment_y [m^3]\n2.0, 0.3", head=head), "wing", "map")

    assert found.values[0, :6] == pytest.approx([0, 0, -2.0, 0, -0.3, 0])


def test_several_devices_in_one_file_each_have_their_own_axes(tmp_path: Path) -> None:
    text = (
        "device,ride_front [mm],yaw [deg],downforce [m^2]\nfloor,20,any,2\nfloor,40,any,1\nwing,any,0,1\nwing,any,5,2\n"
    )
    found = read_aero(write(tmp_path, text)).maps

    assert {name: m.axes for name, m in found.items()} == {"floor": ("ride_front",), "wing": ("yaw",)}


def test_byte_order_mark_semicolons_and_quotes_of_a_spreadsheet_are_read(tmp_path: Path) -> None:
    path = tmp_path / "aero.csv"
    lines = ['"# axes = x forward, y left, z up";;', "# sign = air on car;;", "speed [km/h];downforce [m^2];drag [m^2]"]
    path.write_bytes(b"\xef\xbb\xbf" + "\r\n".join([*lines, "100;2.5;0.5;", ";;", ""]).encode())

    assert read_map(path, "wing", "map").values[0, 2] == pytest.approx(-2.5)


def test_outside_is_refused_or_clamped_and_marked() -> None:
    table = aero_map({"yaw": np.radians([-5.0, 5.0])}, lambda y: (-0.45, y, -1.40 + y, *ZERO, *no_point()))
    sideways = [
        manoeuvre("spin", speed=40.0, yaw=0.2),
        manoeuvre("straight", speed=40.0),
        manoeuvre("at_rest", yaw=0.2),
    ]

    with pytest.raises(CaseError, match=r"yaw 11.46 deg, map -5 to 5 deg") as refusal:
        balance(with_map("rear_wing", table), sideways)
    cases = balance(with_map("rear_wing", table, outside="clamp"), sideways)

    assert "spin" in refusal.value.where
    assert "clamp" in refusal.value.remedy
    assert [bool(mark) for mark in cases.outside_map] == [True, False, False]
    edge = balance(with_map("rear_wing", table), [manoeuvre("edge", speed=40.0, yaw=np.radians(5.0))])
    assert cases.section("front")[0] == pytest.approx(edge.section("front")[0])
