"""Aero maps built in memory for the worked car, and files of aero figures written for a test."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import numpy as np
from car.worked_car import CAR, FRONT, REAR
from numpy.typing import NDArray

from blockload.case.model import AeroMap, Case

Array = NDArray[np.float64]
HEAD = "# axes = x forward, y left, z up\n# sign = air on car\n"
SPRUNG_FRONT = replace(FRONT, ride_height=0.046, ride_stiffness=420e3, tyre_stiffness=320e3)
SPRUNG_REAR = replace(REAR, ride_height=0.078, ride_stiffness=360e3, tyre_stiffness=320e3)


def aero_map(
    grid: dict[str, Array], area: Callable[..., tuple[float, ...]], *, states: tuple[str, ...] = (), default: str = ""
) -> AeroMap:
    """A map from a function of its axes to nine values: force, moment, reference point (nan: the device's)."""
    axes = np.meshgrid(*grid.values(), indexing="ij")
    rows = [area(*place) for place in zip(*(a.ravel() for a in axes), strict=True)] if grid else [area()]
    values = np.array(rows, dtype=float).reshape(*(len(g) for g in grid.values()), 9)
    return AeroMap(
        source="in memory",
        axes=tuple(grid),
        grid=tuple(np.asarray(g, dtype=float) for g in grid.values()),
        states=states,
        default_state=default or None,
        values=np.stack([values] * max(len(states), 1)),
    )


def with_map(name: str, table: AeroMap, *, outside: str = "refuse", case: Case = CAR) -> Case:
    """The worked car on springs, with one device read from a map."""
    devices = tuple(replace(d, table=table, outside=outside) if d.name == name else d for d in case.devices)
    return replace(case, devices=devices, axles={"front": SPRUNG_FRONT, "rear": SPRUNG_REAR})


def no_point() -> tuple[float, float, float]:
    return (float("nan"),) * 3


def write(folder: Path, text: str, *, head: str = HEAD, name: str = "aero.csv") -> Path:
    path = folder / name
    path.write_bytes((head + text).encode())
    return path
