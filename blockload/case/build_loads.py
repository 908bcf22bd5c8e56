"""Aero devices and their cross-check, drive, and manoeuvres."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import Any

import numpy as np

from ..arrays import Floats, frozen
from ..errors import CaseError
from ..units import parse, show
from .build_situations import brakes, has_situations
from .model import AeroMap, AeroTotal, Axle, Check, Device, Drive, Engine, Manoeuvre, Tyres
from .notes import Notes, key_of
from .schema import CaseTable
from .schema_car import DriveTable, EngineTable, TyresTable
from .schema_loads import DeviceTable, ManoeuvreTable

FORCE_TOLERANCE = 0.005
SHARE_TOLERANCE = 0.005


def build_devices(table: CaseTable, folder: Path, air_density: float, notes: Notes) -> tuple[Device, ...]:
    """Return the aero devices with their areas; a force at a speed is turned into an area."""
    return tuple(_device(name, item, folder, air_density, notes) for name, item in table.aero.items())


def _device(name: str, item: DeviceTable, folder: Path, air_density: float, notes: Notes) -> Device:
    key = key_of("aero", name)
    areas = {"downforce": 0.0, "drag": 0.0}
    for word in ("downforce", "drag"):
        area, force = getattr(item, f"{word}_area"), getattr(item, word)
        if area is not None and force is not None:
            found = f"both {word}_area and {word} are given"
            notes.problem(f"{key}.{word}", found, "one of them", "take one of them out")
        if force is not None and item.at_speed is None:
            remedy = f'add at_speed = "75 m/s" under [{key}], with the speed it holds at'
            notes.problem(f"{key}.at_speed", f"{word} is given without the speed it holds at", "at_speed", remedy)
        elif force is not None and item.at_speed is not None:
            area = force / (0.5 * air_density * item.at_speed**2)
        areas[word] = area if area is not None else 0.0
    if item.map is None and not any(areas.values()) and item.downforce is None and item.drag is None:
        remedy = f'add downforce_area = "1.3 m^2" or drag_area under [{key}]'
        notes.problem(key, "the device has neither downforce nor drag", "an area, a force at a speed, or a map", remedy)
    if item.map is not None and any(areas.values()):
        notes.default(f"{key}.downforce_area", "not used", "the map's figures stand in its place")
    if item.attachment is not None and item.on != "engine":
        found = f"attachment names a place on the block, but the device is on the {item.on}"
        notes.problem(f"{key}.attachment", found, 'on = "engine"', "take it out, or set on")
    return Device(
        name=name,
        on=item.on,
        at=item.at,
        attachment=item.attachment,
        map=folder / item.map if item.map is not None else None,
        outside=item.outside or "refuse",
        downforce_area=areas["downforce"],
        drag_area=areas["drag"],
        table=_map(folder / item.map, name, notes.where(f"{key}.map")) if item.map is not None else None,
    )


def _map(path: Path, device: str, where: str) -> AeroMap:
    from .aero_csv import read_map

    return read_map(path, device, where)


def build_aero_split(table: CaseTable) -> tuple[Device, ...]:
    """Return the possible carriers of [aero_total], as devices without areas."""
    return tuple(
        Device(name=name, on=item.on, at=item.at, downforce_area=0.0, drag_area=0.0)
        for name, item in table.aero_split.items()
    )


def build_aero_total(
    table: CaseTable, devices: tuple[Device, ...], axles: Mapping[str, Axle], air_density: float, notes: Notes
) -> AeroTotal | None:
    """Return the whole car's aero, after comparing the devices with it."""
    item = table.aero_total
    if item is None:
        return None
    total = AeroTotal(
        downforce=item.downforce,
        at_speed=item.at_speed,
        front_share=item.front_share,
        share_includes_drag_moment=item.share_includes_drag_moment,
        drag=item.drag,
    )
    if not devices and table.aero_split and item.drag is None:
        notes.default("aero_total.drag", "0 kN", "unsourced: not given, so that no drag acts on the car")
    if devices and table.aero_split:
        notes.default("aero_split", "not used", "devices are given, so that nothing is left to split")
    if devices and all(device.map is None for device in devices):
        _compare(total, devices, axles, 0.5 * air_density * item.at_speed**2, notes)
    return total


def _compare(
    total: AeroTotal, devices: tuple[Device, ...], axles: Mapping[str, Axle], pressure: float, notes: Notes
) -> None:
    lift = np.array([device.downforce_area for device in devices])
    drag = np.array([device.drag_area for device in devices])
    at = np.array([device.at for device in devices])
    summed = float(pressure * lift.sum())
    gap = abs(summed - total.downforce) / max(abs(total.downforce), 1e-9)
    _check("aero_total downforce", gap, FORCE_TOLERANCE, "share of the stated total", notes)
    listed = ", ".join(f"{item.name} {show(pressure * item.downforce_area, 'kN')}" for item in devices)
    if gap > FORCE_TOLERANCE:
        found = f"{show(total.downforce, 'kN', 4)} is stated, but the devices sum to {show(summed, 'kN', 4)} ({listed})"
        remedy = "look for a device counted twice, or inside another's figure, or left out"
        notes.problem("aero_total.downforce", found, "agreement within 0.5 %", remedy)
    if total.drag is not None:
        dragged = float(pressure * drag.sum())
        if abs(dragged - total.drag) > FORCE_TOLERANCE * max(total.drag, 1e-9):
            found = f"{show(total.drag, 'kN', 4)} is stated, but the devices sum to {show(dragged, 'kN', 4)}"
            notes.problem(
                "aero_total.drag", found, "agreement within 0.5 %", "look for a drag counted twice or left out"
            )
    front, rear = axles["front"].x, axles["rear"].x
    if lift.sum() == 0.0 or front <= rear:
        return
    without = float(lift @ (at[:, 0] - rear) / (front - rear) / lift.sum())
    including = without - float(drag @ at[:, 2] / (front - rear) / lift.sum())
    share = including if total.share_includes_drag_moment else without
    miss = abs(share - total.front_share)
    _check("aero_total front share", miss, SHARE_TOLERANCE, "of the whole downforce", notes)
    if miss > SHARE_TOLERANCE:
        said = "with" if total.share_includes_drag_moment else "without"
        found = (
            f"{total.front_share:.4g} is stated {said} the drag moment, but the devices give {including:.4f} with it "
            f"and {without:.4f} without it"
        )
        remedy = "check share_includes_drag_moment first, then where the devices act"
        notes.problem("aero_total.front_share", found, "agreement within 0.005", remedy)


def _check(name: str, value: float, limit: float, note: str, notes: Notes) -> None:
    notes.checks.append(Check(name=name, ok=value <= limit, value=value, limit=limit, note=note))


def build_drive(table: CaseTable, notes: Notes) -> Drive:
    """Return how the car is driven and braked."""
    given = table.drive
    braked = brakes(table)
    share = given.brake_front_share if given is not None else None
    if share is None:
        share = notes.take(given, DriveTable, "drive", "brake_front_share") if braked else 0.58
    direction = notes.take(given, DriveTable, "drive", "crank_direction")
    if direction not in (1, -1):
        notes.problem(
            "drive.crank_direction", f"{direction!r} is no direction", "1 or -1", "seen along x, right-hand rule"
        )
    return Drive(
        axle=notes.take(given, DriveTable, "drive", "axle"),
        brake_front_share=share,
        crank_direction=direction,
        crank_inertia=given.crank_inertia if given is not None else None,
        clutch_capacity=given.clutch_capacity if given is not None else None,
    )


def build_tyres(given: TyresTable | None, notes: Notes) -> Tyres:
    """Return the tyres' friction; unknown where the case says nothing."""
    if given is None:
        return Tyres()
    if given.load_sensitivity and given.reference_load is None:
        remedy = "add the wheel load at which mu_x and mu_y were measured"
        notes.problem("tyres.reference_load", "not given, with a load_sensitivity", "a wheel load", remedy)
    return Tyres(
        mu_x=given.mu_x,
        mu_y=given.mu_y,
        load_sensitivity=given.load_sensitivity or 0.0,
        reference_load=given.reference_load,
    )


def build_engine(given: EngineTable | None, notes: Notes) -> Engine:
    """Return the engine's figures."""
    if given is None:
        return Engine()
    return Engine(
        bore=given.bore,
        stroke=given.stroke,
        cylinders=given.cylinders,
        peak_torque=given.peak_torque,
        max_speed=given.max_speed,
        torque_curve=_torque_curve(given.torque_curve, notes),
        bmep=given.bmep,
        flywheel=given.flywheel is not False,
        charged=given.charged,
    )


def _torque_curve(given: Any, notes: Notes) -> Floats | None:
    """Return pairs of speed and torque (n, 2), speeds rising; a file's name is kept for later use."""
    if given is None or isinstance(given, str):
        return None
    key = "engine.torque_curve"
    where = notes.where(key)
    if not isinstance(given, list) or not all(isinstance(pair, list) and len(pair) == 2 for pair in given):
        notes.problem(key, f"{str(given)[:60]!r} is no torque curve", 'pairs such as ["3000 rpm", "350 Nm"]')
        return None
    try:
        curve = np.array([[parse(s, "angular_speed", where), parse(t, "moment", where)] for s, t in given], dtype=float)
    except CaseError as error:
        notes.problems.append(error)
        return None
    if len(curve) < 2 or np.any(np.diff(curve[:, 0]) <= 0.0):
        notes.problem(key, "the speeds do not rise from pair to pair", "two or more pairs, speeds rising")
        return None
    return frozen(curve)


def build_manoeuvres(table: CaseTable, drive: Drive, notes: Notes) -> tuple[Manoeuvre, ...]:
    """Return the manoeuvres in file order."""
    if not table.manoeuvres and not has_situations(table):
        remedy = 'add for example [manoeuvres.v_max] with speed = "75 m/s"'
        notes.problem("manoeuvres", "no manoeuvre is given", "at least one [manoeuvres.NAME]", remedy)
    return tuple(_manoeuvre(name, item, drive, notes) for name, item in table.manoeuvres.items())


def _manoeuvre(name: str, item: ManoeuvreTable, drive: Drive, notes: Notes) -> Manoeuvre:
    key = key_of("manoeuvres", name)
    wheels = item.extra_wheel_force
    extra = {
        corner: force for corner in ("FL", "FR", "RL", "RR") if (force := getattr(wheels, corner, None)) is not None
    }
    acceleration = item.acceleration if item.acceleration is not None else frozen(np.zeros(3))
    driven = item.drive or ("coast" if extra else "hold_speed")
    _check_drive(key, driven, float(acceleration[0]), bool(extra), notes)
    if item.crank_acceleration and drive.crank_inertia is None:
        found = "crank_acceleration is given, but not the inertia it acts on"
        remedy = 'add crank_inertia = "0.05 kg*m^2" under [drive], with the real figure'
        notes.problem(
            "drive.crank_inertia", f"{key}: {found}", "crank, flywheel and clutch about the crank axis", remedy
        )
    if extra and item.basis is None:
        notes.default(f"{key}.basis", "not stated", "unsourced: where the wheel force comes from is not said")
    return Manoeuvre(
        name=name,
        speed=item.speed or 0.0,
        acceleration=acceleration,
        drive=driven,
        overall_ratio=item.overall_ratio,
        crank_acceleration=item.crank_acceleration or 0.0,
        extra_wheel_force=extra,
        parts=tuple(item.parts) if item.parts is not None else None,
        basis=item.basis,
        yaw=item.yaw or 0.0,
        steer=item.steer or 0.0,
        state=item.state,
    )


def _check_drive(key: str, drive: str, along: float, force_mode: bool, notes: Notes) -> None:
    key = f"{key}.acceleration"
    found = f"{along:.4g} m/s^2 along x does not go with drive = '{drive}'"
    if drive == "coast" and along:
        remedy = "leave x at 0 (drag alone slows the car), or use accelerate or brake"
        notes.problem(key, found, "no acceleration along x", remedy)
    elif drive == "hold_speed" and along:
        notes.problem(key, found, "no acceleration along x", "use drive = 'accelerate', or 'brake' to slow down")
    elif drive == "brake" and along > 0.0:
        notes.problem(key, found, "an acceleration against x, negative", "check the sign, or use drive = 'accelerate'")
    elif drive == "accelerate" and along < 0.0:
        notes.problem(key, found, "an acceleration along x, positive", "check the sign, or use drive = 'brake'")
    if force_mode and drive != "coast":
        found = f"drive = '{drive}' does not go with an extra wheel force"
        remedy = "use drive = 'coast': the force acts on top of the coasting car's wheel loads"
        notes.problem(key.replace(".acceleration", ".drive"), found, "coast", remedy)
