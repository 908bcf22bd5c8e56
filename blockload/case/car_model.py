"""The car a case file describes: bodies, axles and their links, drive, engine, faces and studs.

Frozen values in SI units and the car's axes; `case.model` explains them all and gathers them in one Case.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from ..arrays import Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Body:
    """A rigid mass: cg (3,) in the car, inertia (3, 3) about its own cg."""

    name: str
    mass: float
    cg: Floats
    inertia: Floats
    inertia_estimated: bool = False


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Link:
    """One two-force member of the left corner: outboard and inboard ends (3,), the body of its inboard end.

    meets: "upright", or the wishbone ("upper", "lower") that a push or pull rod works on away from its outer joint;
    attachments: where the left and the right link enter the block, for a link that the engine carries.
    """

    name: str
    outboard: Floats
    inboard: Floats
    carried_by: str
    meets: str = "upright"
    attachments: tuple[str, str] | None = None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Rocker:
    """What the left pushrod works on; pairs are (rocker end, far end), each (3,).

    heave (3,) is the left rocker's end of an element across the two rockers, heave_share its part of their mean
    torque; attachments: where the left and the right rocker's loads enter the block when the engine carries them.
    """

    pivot: Floats
    axis: Floats
    spring: tuple[Floats, Floats] | None
    bar_link: tuple[Floats, Floats] | None
    bar_bearing_y: float | None
    heave: Floats | None = None
    heave_share: float = 0.0
    attachments: tuple[str, str] | None = None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Axle:
    """One axle; `corner` is the left unsprung mass, mirrored to the right."""

    name: str
    x: float
    track: float
    loaded_radius: float
    roll_centre_height: float
    roll_stiffness: float
    bar_share: float
    carried_by: str
    brakes: str
    corner: Body
    links: Mapping[str, Link] = field(default_factory=dict)
    rocker: Rocker | None = None
    ride_height: float | None = None
    ride_stiffness: float | None = None
    tyre_stiffness: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Tyres:
    """Grip: peak friction mu_x, mu_y at the reference load [N]; load_sensitivity [1/N] is its loss per newton more.

    A wheel at load Fz grips by mu [1 - load_sensitivity (Fz - reference_load)].
    """

    mu_x: float | None = None
    mu_y: float | None = None
    load_sensitivity: float = 0.0
    reference_load: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Drive:
    """How the car is driven and braked; crank_direction is the sign of crank rotation about +x.

    clutch_capacity [N·m] is the torque at which the clutch slips.
    """

    axle: str
    brake_front_share: float
    crank_direction: int
    crank_inertia: float | None
    clutch_capacity: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Engine:
    """Engine figures, all optional: m, N·m, rad/s, Pa.

    torque_curve (n, 2) lists crank speed [rad/s] and full-load torque [N·m], speeds rising; bmep is the peak brake
    mean effective pressure; flywheel False marks an engine that revs freely; charged True a turbo or supercharger.
    """

    bore: float | None = None
    stroke: float | None = None
    cylinders: int | None = None
    peak_torque: float | None = None
    max_speed: float | None = None
    torque_curve: Floats | None = None
    bmep: float | None = None
    flywheel: bool = True
    charged: bool | None = None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Stud:
    """One stud of a face: at (2,) = (y, z); preload [N], scatter and load factor as ratios."""

    name: str
    at: Floats
    size: str
    property_class: str
    preload: float
    preload_scatter: float
    load_factor: float
    friction: float


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Face:
    """The front (tub to engine) or rear (engine to gearbox) plane at x with its studs in file order."""

    name: str
    x: float
    studs: tuple[Stud, ...]
