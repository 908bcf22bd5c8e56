"""From rows of aero figures to full grids: each device's values over its axes and states, without holes or doubles."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

import numpy as np

from ..arrays import Floats, Ints, frozen
from ..errors import CaseError, nearest
from ..units import parse, significant
from .aero_words import ANY, AXES
from .csv_text import Sheet
from .model import AeroMap


def lay_out(sheet: Sheet, data: Mapping[str, Floats], values: Floats, rows: Ints, device: str) -> AeroMap:
    """Lay some rows of values (n, 9) out over the full grid of their axes and states, in the file's own sense.

    `data` maps an axis to its values (n,) in SI, nan for any. Raises CaseError for holes, or for doubles with lines.
    """
    names = [head.name for head in sheet.heads]
    axes, grid, place = [], [], []
    for name in AXES:
        if name in data:
            steps, index = np.unique(data[name][rows], return_inverse=True)
            _refuse_mixed(sheet, name, data[name][rows], device)
            if np.isnan(steps).all() or (name == "speed" and len(steps) == 1):
                continue  # one speed says nothing of how the coefficients change with it
            axes.append(name)
            grid.append(frozen(steps))
            place.append(index.reshape(-1))
    words = np.array(sheet.words(names.index("state")) if "state" in names else [""] * len(sheet.lines))[rows]
    states = tuple(dict.fromkeys(str(word) for word in words))
    shape = (len(states), *(len(steps) for steps in grid))
    flat = np.ravel_multi_index((np.array([states.index(word) for word in words]), *place), shape)
    _refuse_doubles(sheet, rows, flat, device)
    _refuse_holes(sheet, flat, shape, (states, axes, grid), device)
    laid = np.empty((int(np.prod(shape)), 9))
    laid[flat] = values[rows]
    return AeroMap(
        source=str(sheet.path),
        axes=tuple(axes),
        grid=tuple(grid),
        states=states if states not in (("",), (ANY,)) else (),
        default_state=_default_state(sheet, states),
        values=frozen(laid.reshape(*shape, 9)),
    )


def turned(found: AeroMap, axis: str) -> AeroMap:
    """Return a map with one axis counted the other way round."""
    if axis not in found.axes:
        return found
    place = found.axes.index(axis)
    grid = tuple(frozen(-steps[::-1]) if i == place else steps for i, steps in enumerate(found.grid))
    return replace(found, grid=grid, values=frozen(np.flip(found.values, axis=place + 1)))


def _default_state(sheet: Sheet, states: tuple[str, ...]) -> str | None:
    stated = sheet.statements.get("default_state")
    if states in (("",), (ANY,)) and "device" in [head.name for head in sheet.heads]:
        return None
    if stated is not None and stated not in states:
        where = f"{sheet.path}, # default_state"
        raise CaseError(where, repr(stated), ", ".join(states) or "a column 'state'", nearest(stated, states))
    if stated is None and len(states) == 1 and states[0] not in ("", ANY):
        return states[0]
    return stated


def _refuse_mixed(sheet: Sheet, axis: str, values: Floats, device: str) -> None:
    open_ones = np.isnan(values)
    if open_ones.any() and not open_ones.all():
        found = f"{_of(device)}{axis} is {ANY!r} in some lines and a figure in others"
        raise CaseError(str(sheet.path), found, f"{ANY!r} in all lines of a device, or in none")


def _refuse_doubles(sheet: Sheet, rows: Ints, flat: Ints, device: str) -> None:
    order = np.argsort(flat, kind="stable")
    same = np.flatnonzero(np.diff(flat[order]) == 0)
    if len(same):
        first, second = (sheet.lines[int(rows[order[same[0] + k]])] for k in (0, 1))
        found = f"lines {first} and {second} give {_of(device)}the same point twice"
        raise CaseError(str(sheet.path), found, "each point of the grid once", "delete one of the two")


def _refuse_holes(
    sheet: Sheet,
    flat: Ints,
    shape: tuple[int, ...],
    names: tuple[tuple[str, ...], list[str], list[Floats]],
    device: str,
) -> None:
    missing = np.setdiff1d(np.arange(int(np.prod(shape))), flat)
    if not len(missing):
        return
    states, axes, grid = names
    place = np.unravel_index(int(missing[0]), shape)
    parts = [f"state {states[place[0]]}"] if states != ("",) else []
    for name, steps, index in zip(axes, grid, place[1:], strict=True):
        unit = next(head.unit for head in sheet.heads if head.name == name)
        factor = float(parse(f"1 {unit}", AXES[name], str(sheet.path)))
        parts.append(f"{name} {significant(steps[index] / factor)} {unit}")
    total = int(np.prod(shape))
    raise CaseError(
        str(sheet.path),
        f"{_of(device)}the grid has {len(missing)} holes of {total} points, the first at {', '.join(parts)}",
        "one line for every combination of the values that stand in its columns",
        "fill the holes, or resample scattered points onto a full grid; nothing is interpolated over a hole",
    )


def _of(device: str) -> str:
    return f"device {device}: " if device else ""
