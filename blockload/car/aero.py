"""Aero devices: forces and moments at each device's own point on its own body, per dynamic pressure q = rho v²/2.

A device has constant areas, F = q (-Cx A, 0, -Cz A), or a map. What a map gives is kept in two parts, so that a
manoeuvre may keep one alone: "drag" is the force along x with its arm to the device's point; "downforce" is all else
(the force along z, a side force, the map's own moments).
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from ..arrays import Floats, Ints
from ..case.model import CARRIERS, Case, Device
from ..errors import CaseError, nearest
from .aero_map import RIDE, beyond, interpolated, place_words, states_of

PARTS = ("downforce", "drag")


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Air:
    """What the air does per dynamic pressure.

    area [m²] and volume [m³] (C, D, 2, 3) are force and moment about each device's point, over the parts "downforce"
    and "drag"; ride_height (C, 2) front and rear [m], nan where no map asks for it; outside (C,) says which map was
    read beyond its grid, and where ("" for none).
    """

    area: Floats
    volume: Floats
    ride_height: Floats
    outside: tuple[str, ...]


def constant_air(case: Case, count: int) -> Air:
    """Devices with constant areas in `count` load cases; devices with a map are still empty."""
    area = np.zeros((len(case.devices), 2, 3))
    for k, device in enumerate(case.devices):
        if device.table is None:
            area[k, 0, 2], area[k, 1, 0] = -device.downforce_area, -device.drag_area
    shape = (count, *area.shape)
    return Air(
        area=np.broadcast_to(area, shape),
        volume=np.broadcast_to(0.0, shape),
        ride_height=np.broadcast_to(np.nan, (count, 2)),
        outside=("",) * count,
    )


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Maps:
    """The devices of a car that have maps, ready to be read at ride heights.

    where maps each axis but the ride heights to (C,) values; states holds one (C,) index for each map; `base` are the
    constant devices.
    """

    devices: tuple[Device, ...]
    index: tuple[int, ...]
    states: tuple[Ints, ...]
    where: Mapping[str, Floats]
    base: Air

    @property
    def need_ride(self) -> bool:
        """Whether any map varies with a ride height."""
        return any(axis in RIDE for device in self.devices for axis in _axes(device))

    def at(self, ride: Floats) -> tuple[Floats, Floats]:
        """Area and volume (C, D, 2, 3) of all devices at ride heights (C, 2)."""
        area, volume = self.base.area.copy(), np.zeros(self.base.area.shape)
        where = self.places(ride)
        for k, device, state in zip(self.index, self.devices, self.states, strict=True):
            if device.table is None:
                continue
            value = interpolated(device.table, where, state)
            point = np.where(np.isnan(value[:, 6:]), 0.0, value[:, 6:] - device.at)
            area[:, k, 1, 0], area[:, k, 0, 1:] = value[:, 0], value[:, 1:3]
            volume[:, k] = np.cross(point[:, None], area[:, k])
            volume[:, k, 0] += value[:, 3:6]
        return area, volume

    def in_pitch(self, ride: Floats) -> Floats:
        """Force along x and z and moment about y at the origin (C, 3), of the maps that vary with a ride height."""
        result = np.zeros((len(ride), 3))
        where = self.places(ride)
        for device, state in zip(self.devices, self.states, strict=True):
            if device.table is None or not any(axis in RIDE for axis in device.table.axes):
                continue
            value = interpolated(device.table, where, state)
            x, z = (np.where(np.isnan(value[:, 6 + k]), device.at[k], value[:, 6 + k]) for k in (0, 2))
            result[:, 0] += value[:, 0]
            result[:, 1] += value[:, 2]
            result[:, 2] += value[:, 4] + z * value[:, 0] - x * value[:, 2]
        return result

    def places(self, ride: Floats) -> dict[str, Floats]:
        """Values (C,) of every axis."""
        return {**self.where, "ride_front": ride[:, 0], "ride_rear": ride[:, 1]}


def read_maps(
    case: Case, where: Mapping[str, Floats], states: Sequence[str | None], names: Sequence[str]
) -> Maps | None:
    """Make the maps of a car ready for the load cases, or return None for a car with constant devices alone."""
    index = tuple(k for k, device in enumerate(case.devices) if device.table is not None)
    devices = tuple(case.devices[k] for k in index)
    _refuse_unknown_states(devices, states, names)
    if not devices:
        return None
    return Maps(
        devices=devices,
        index=index,
        states=tuple(states_of(device, states, names) for device in devices),
        where=where,
        base=constant_air(case, len(names)),
    )


def outside(maps: Maps, ride: Floats, live: Floats, names: Sequence[str]) -> tuple[str, ...]:
    """Where each load case reads a map beyond its grid, "" for nowhere; CaseError for a device that refuses it.

    `live` (C,) is the dynamic pressure: at rest there is no force to get wrong.
    """
    where = maps.places(ride)
    marks: list[list[str]] = [[] for _ in names]
    for device in maps.devices:
        if device.table is None:
            continue
        for axis, over in beyond(device.table, where).items():
            steps = device.table.grid[device.table.axes.index(axis)]
            for c in np.flatnonzero((over != 0) & (live > 0)).tolist():
                words = place_words(axis, float(where[axis][c]), steps)
                if device.outside != "clamp":
                    raise _outside_refused(device, names[c], words)
                marks[c].append(f"{device.name}: {words}")
    return tuple("; ".join(mark) for mark in marks)


def device_load(device: int, air: Air, pressure: Floats, keep: Mapping[str, Floats]) -> tuple[Floats, Floats]:
    """Force and moment (C, 3) of one device about its own point, as far as the cases keep its downforce and drag."""
    kept = pressure[:, None, None] * np.stack([keep[part] for part in PARTS], axis=1)[:, :, None]
    force: Floats = (air.area[:, device] * kept).sum(axis=1)
    moment: Floats = (air.volume[:, device] * kept).sum(axis=1)
    return force, moment


def check_devices(case: Case) -> None:
    """Refuse aero that would be left out silently."""
    if case.aero_total is not None and not case.devices:
        raise CaseError(
            "[aero_total]",
            "given without any [aero.NAME] device or [aero_split.NAME] carrier",
            "one table per device, or the places that may carry the total",
            "list them: the same downforce on the floor or on a wing loads the engine differently",
        )
    for device in case.devices:
        where = f"[aero.{device.name}]"
        if device.on not in CARRIERS:
            raise CaseError(f"{where} on", repr(device.on), ", ".join(CARRIERS), nearest(device.on, CARRIERS))
        if device.outside not in ("refuse", "clamp"):
            raise CaseError(f"{where} outside", repr(device.outside), "refuse, clamp")
        if device.map is not None and device.table is None:
            raise CaseError(f"{where} map", f"{device.map} was not read", "a map read with the case")


def _axes(device: Device) -> tuple[str, ...]:
    return () if device.table is None else device.table.axes


def _refuse_unknown_states(devices: Sequence[Device], states: Sequence[str | None], names: Sequence[str]) -> None:
    known = dict.fromkeys(state for device in devices if device.table is not None for state in device.table.states)
    for word in dict.fromkeys(states):
        if word is not None and word not in known:
            where = f"[manoeuvres.{names[list(states).index(word)]}] state"
            allowed = ", ".join(known) or "none: no aero map has named states"
            raise CaseError(where, repr(word), allowed, nearest(word, known))


def _outside_refused(device: Device, name: str, words: str) -> CaseError:
    return CaseError(
        f"[manoeuvres.{name}], map of [aero.{device.name}]",
        f"is read outside its grid: {words}",
        "a point within the map; nothing is extrapolated",
        f'extend the map, change the manoeuvre or the ride heights, or set [aero.{device.name}] outside = "clamp" to '
        "use the edge of the map and have the load case marked",
    )
