"""What happens to the car: manoeuvres, and what catalogue, envelope and laps make them from.

Frozen values in SI units and the car's axes; `case.model` explains them all and gathers them in one Case.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path

from ..arrays import Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Point:
    """A named place (3,) of a body: roll hoop, jack, towing eye, trolley, hoist, impact structure.

    lifts: what a jack takes off the ground ("front", "rear", "left", "right" or one corner); attachment: where it
    enters the block, for a point of the engine.
    """

    name: str
    on: str
    at: Floats
    lifts: str | None = None
    attachment: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Factor:
    """A dynamic factor, the one thing it multiplies (never aero), and its source or "unsourced"."""

    name: str
    value: float
    of: str
    source: str


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Support:
    """Where something other than a tyre holds the car: the components it can answer at a point (3,) of a body.

    `on` may be a corner, whose point is then its contact point. carries: of x, y, z, roll, pitch, yaw. `bolted`: it
    also pulls; otherwise a support along z only pushes up (a hook: only pulls up).
    """

    name: str
    on: str
    at: Floats
    carries: tuple[str, ...]
    bolted: bool = False
    attachment: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class PointForce:
    """A force (3,) at a point (3,) of a body. `moves`: the rigid car gives way to it; otherwise the wheels answer."""

    name: str
    on: str
    at: Floats
    force: Floats
    moves: bool = True
    attachment: str | None = None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Manoeuvre:
    """What driver and road do.

    `acceleration` (3,) is that of the car's CG; `extra_wheel_force` maps a corner to a force (3,) at its contact
    point and makes this a force-mode manoeuvre. `parts` keeps only these kinds of source (None: all).
    `yaw` and `steer` [rad] and the named `state` are where aero maps are read.
    `supports` hold the car instead of its wheels, and answer everything; `down` (3,) is the direction of gravity, None
    for straight down; kind is "service" (it recurs in use) or "limit" (it must be survived); a fatigue-exempt one is
    not counted as a cycle. `factor` is the one dynamic factor in it; `group` names the catalogue's group it is from.
    One that is not `judged` hands loads on to the neighbours (a rule's test on the tub) and takes no part in a verdict.
    """

    name: str
    speed: float = 0.0
    acceleration: Floats
    drive: str = "hold_speed"
    overall_ratio: float | None = None
    crank_acceleration: float = 0.0
    extra_wheel_force: Mapping[str, Floats] = field(default_factory=dict)
    parts: tuple[str, ...] | None = None
    basis: str | None = None
    yaw: float = 0.0
    steer: float = 0.0
    state: str | None = None
    kind: str = "service"
    fatigue_exempt: bool = False
    group: str | None = None
    factor: Factor | None = None
    point_forces: tuple[PointForce, ...] = ()
    supports: tuple[Support, ...] = ()
    down: Floats | None = None
    judged: bool = True


@dataclass(frozen=True, slots=True, kw_only=True)
class Performance:
    """What the car can do, for standard manoeuvres: m/s, W, m/s^2 (magnitudes, but for crest and compression).

    ratios: overall ratios from the first gear to the last; crest and compression: vertical acceleration of the car's
    CG, downward negative.
    """

    speed: float | None = None
    power: float | None = None
    lateral: float | None = None
    braking: float | None = None
    traction: float | None = None
    crest: float | None = None
    compression: float | None = None
    fast_corner: float | None = None
    slow_corner: float | None = None
    ratios: tuple[float, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class GivenForce:
    """A force (3,) of a standard situation as the engineer knows it, at a speed [m/s], with its basis.

    At a wheel or eye of the left or the front; mirrored to the other ones.
    """

    force: Floats
    basis: str
    speed: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class CatalogueSpec:
    """Which groups of standard situations to run, with factors and forces in place of the catalogue's own."""

    groups: tuple[str, ...]
    factors: Mapping[str, Factor] = field(default_factory=dict)
    forces: Mapping[str, GivenForce] = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True)
class EnvelopeSpec:
    """Speeds [m/s] (empty: evenly up to the highest) and number of headings of the performance envelope."""

    speeds: tuple[float, ...] = ()
    headings: int = 24


@dataclass(frozen=True, slots=True, kw_only=True)
class LapSpec:
    """A recorded or simulated lap: its file, the step [s] it is resampled at (None: as recorded), its overall ratio.

    overall_ratio stands in where the file has no such column.
    """

    name: str
    file: Path
    step: float | None = None
    overall_ratio: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class LapHistory:
    """A lap's samples (N,) in SI and the car's axes: time, distance (one of them may be None), speed.

    acceleration (N, 3) is that of the car's CG without gravity; channels holds what else is known, (N,) each by name:
    yaw, steer, ride_front, ride_rear, overall_ratio, torque (at the clutch), crank_acceleration, and measured loads
    such as "wheel.FL" (vertical, + up on the tyre), "pushrod.FL" and "damper.FL" (+ tension); state names that of the
    aero maps.
    """

    name: str
    path: Path
    time: Floats | None
    distance: Floats | None
    speed: Floats
    acceleration: Floats
    channels: Mapping[str, Floats] = field(default_factory=dict)
    state: tuple[str, ...] | None = None
