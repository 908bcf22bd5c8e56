"""The air as a case file knows it: devices, maps of their coefficients, totals of the whole car.

Frozen values in SI units and the car's axes; `case.model` explains them all and gathers them in one Case.
"""

from __future__ import annotations

from dataclasses import dataclass
from pathlib import Path

from ..arrays import Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class AeroMap:
    """One device's aero over a full grid, per dynamic pressure: force [m²] and moment [m³] of the air on the car.

    `grid` holds the rising values of each of `axes` that the map varies over: speed m/s, ride heights m, yaw and
    steer rad; an axis left out makes no difference. `values` (K, n_1, ..., n_k, 9) holds, for each named state,
    force, moment about the reference point, and reference point [m] ("nan" where the file gives none and the
    device's own `at` stands), in the car's axes. `default_state` is the state of a manoeuvre that names none.
    """

    source: str
    axes: tuple[str, ...]
    grid: tuple[Floats, ...]
    states: tuple[str, ...]
    default_state: str | None
    values: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Device:
    """An aero element acting at a point (3,) of one body; areas are Cz·A (+ down) and Cx·A (+ drag) in m².

    With `table` the areas stand unused: its values over ride height, yaw and so on count instead, and `outside`
    says what happens beyond its grid: "refuse", or "clamp" to its edge and mark the load case.
    """

    name: str
    on: str
    at: Floats
    downforce_area: float
    drag_area: float
    attachment: str | None = None
    map: Path | None = None
    table: AeroMap | None = None
    outside: str = "refuse"


@dataclass(frozen=True, slots=True, kw_only=True)
class AeroTotal:
    """The whole car's downforce and drag [N] at a speed [m/s], and the front share by a stated convention."""

    downforce: float
    at_speed: float
    front_share: float
    share_includes_drag_moment: bool
    drag: float | None = None
