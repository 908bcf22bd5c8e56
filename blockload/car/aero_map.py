"""Aero maps read at the load cases: multilinear on the full grid of speed, ride heights, yaw, steer and a named state.

What is interpolated is force and moment per dynamic pressure (area, volume), because it changes slowly where the force
itself goes with the square of speed. Between grid points each axis is linear, so the map is continuous and exact at
its own points. Beyond the grid nothing is extrapolated: the edge value is used and the place is reported.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from itertools import product

import numpy as np

from ..arrays import Floats, Ints
from ..case.model import AeroMap, Device
from ..errors import CaseError, nearest

_EDGE = 1e-9  # of an axis's extent: beyond the grid by less than this is rounding
RIDE = ("ride_front", "ride_rear")
_SHOWN = {"speed": ("m/s", 1.0), "ride_front": ("mm", 1e3), "ride_rear": ("mm", 1e3)}


def interpolated(table: AeroMap, where: Mapping[str, Floats], state: Ints) -> Floats:
    """Values (C, 9) of a map: force [m²], moment [m³], reference point [m].

    Parameters
    ----------
    table : AeroMap
        The map.
    where : mapping
        Values (C,) by the name of each axis; beyond the grid its edge is used.
    state : (C,) ints
        Index of each load case's state.

    """
    low, weight = [], []
    for name, steps in zip(table.axes, table.grid, strict=True):
        inside = np.clip(where[name], steps[0], steps[-1])
        index = np.clip(np.searchsorted(steps, inside, side="right") - 1, 0, max(len(steps) - 2, 0))
        width = steps[np.minimum(index + 1, len(steps) - 1)] - steps[index]
        low.append(index)
        weight.append(np.divide(inside - steps[index], width, out=np.zeros_like(inside), where=width > 0))
    result = np.zeros((len(state), table.values.shape[-1]))
    for corner in product((0, 1), repeat=len(low)):
        if any(step and len(steps) == 1 for step, steps in zip(corner, table.grid, strict=True)):
            continue
        share = np.ones(len(state))
        for step, part in zip(corner, weight, strict=True):
            share = share * (part if step else 1.0 - part)
        place = tuple(index + step for index, step in zip(low, corner, strict=True))
        result += share[:, None] * table.values[(state, *place)]
    return result


def states_of(device: Device, asked: Sequence[str | None], names: Sequence[str]) -> Ints:
    """Index (C,) of the state in which each load case reads a device's map.

    A state that this map does not know leaves it in its default state. Raises CaseError where it has none.
    """
    table = device.table
    if table is None or not table.states:
        return np.zeros(len(asked), dtype=np.int64)
    known = {state: i for i, state in enumerate(table.states)}
    default = known.get(table.default_state or "")
    chosen = {word: known.get(word or "", default) for word in set(asked)}
    if None in chosen.values():
        c = next(i for i, word in enumerate(asked) if chosen[word] is None)
        found = "none given" if asked[c] is None else repr(asked[c])
        remedy = nearest(asked[c] or "", table.states) or "name one, or state '# default_state = ...' in the map"
        allowed = f"a state of [aero.{device.name}]: {', '.join(table.states)}"
        raise CaseError(f"[manoeuvres.{names[c]}] state", found, allowed, remedy)
    return np.array([chosen[word] for word in asked], dtype=np.int64)


def beyond(table: AeroMap, where: Mapping[str, Floats]) -> dict[str, Floats]:
    """How far (C,) each axis lies outside the grid, signed; 0 inside. Only axes that leave it anywhere."""
    result = {}
    for name, steps in zip(table.axes, table.grid, strict=True):
        value = where[name]
        over = value - np.clip(value, steps[0], steps[-1])
        over[np.abs(over) <= _EDGE * max(steps[-1] - steps[0], abs(steps[-1]))] = 0.0
        if over.any():
            result[name] = over
    return result


def place_words(axis: str, value: float, steps: Floats) -> str:
    """Say where a value lies outside an axis: "ride_front 12.0 mm, map 20 to 60 mm"."""
    unit, scale = _SHOWN.get(axis, ("deg", 180.0 / np.pi))
    return f"{axis} {value * scale:.4g} {unit}, map {steps[0] * scale:.4g} to {steps[-1] * scale:.4g} {unit}"
