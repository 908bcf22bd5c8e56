"""What a case file says, as frozen values in SI units and the car's axes (ISO 8855).

No parsing lives here: the reader builds these, every later room only reads them.
Lengths m, masses kg, forces N, moments N·m, stiffness N/m and N·m/rad, angles rad, stress Pa.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from ..arrays import Floats

CORNERS = ("FL", "FR", "RL", "RR")
CARRIERS = ("tub", "engine", "gearbox")
FACES = ("front", "rear")


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


@dataclass(frozen=True, slots=True, kw_only=True)
class MaterialChoice:
    """A volume (name or fnmatch pattern), the grade it is made of or its own properties, its temperature [K]."""

    volume: str
    grade: str | None
    properties: Mapping[str, Any] | None
    temperature: float | None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Carried:
    """A mass the mesh does not have, carried by a named attachment; inertia (3, 3) about its own cg."""

    name: str
    on: str
    mass: float
    cg: Floats
    inertia: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BeamWall:
    """A wall of a thin-walled section: centre line through points (n, 2) = (y, z), thickness, closed on itself."""

    points: Floats
    thickness: float
    closed: bool = False


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BeamStation:
    """The section at x, by its walls or else by its properties [m², m⁴, m³], (2,) in the order y, z.

    second_moments are (about y, about z), product ∫yz dA, all at the centroid; fibres (p, 2).
    """

    name: str
    x: float
    walls: Mapping[str, BeamWall]
    area: float | None = None
    centroid: Floats | None = None
    second_moments: Floats | None = None
    product: float = 0.0
    torsion_constant: float | None = None
    shear_areas: Floats | None = None
    shear_centre: Floats | None = None
    torsion_modulus: float | None = None
    fibres: Floats


@dataclass(frozen=True, slots=True, kw_only=True)
class MeasuredStiffness:
    """What a supplier measured between the faces [N·m/rad], with its source."""

    torsion: float
    bending_vertical: float
    bending_lateral: float
    source: str


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BeamSpec:
    """The block as a beam: stations in order of x or measured stiffness, mass of the metal, places (3,) by name."""

    stations: tuple[BeamStation, ...]
    stiffness: MeasuredStiffness | None
    mass: float | None
    places: Mapping[str, Floats]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class BlockSpec:
    """Where the block comes from and how its names meet the car's.

    `use` says which description is judged; mesh and beam are None where not given, but for the one used.
    """

    use: str = "mesh"
    beam: BeamSpec | None = None
    mesh: Path | None
    mesh_unit: float
    turn: Floats
    place: Floats
    carried_on: str
    carried: tuple[Carried, ...]
    materials: tuple[MaterialChoice, ...]
    front: Mapping[str, str]
    rear: Mapping[str, str]
    other: Mapping[str, str]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Installation:
    """How the block is held.

    `pad_stiffness` lists (label, normal, tangential) [N/m] per pad: one entry where the user gave it, three
    (soft, middle, stiff) where it is bounded; empty without any base for an estimate.
    `tub` is None for a rigid tub, else a (3n, 3n) stiffness in stud order. `second_paths` is the user's own
    statement ("none" or None when unstated).
    """

    pad_stiffness: tuple[tuple[str, float, float], ...]
    pad_stiffness_given: bool
    tub: Floats | None
    second_paths: str | None


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class SecondPath:
    """A spring [N/m] along the line between a point (3,) of one body and a point (3,) of another."""

    name: str
    from_body: str
    from_at: Floats
    to_body: str
    to_at: Floats
    stiffness: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Limits:
    """Factors and allowables; None where the user gave none and no default exists."""

    yield_factor: float
    rupture_factor: float
    casting_factor: float
    separation_factor: float
    slip_factor: float
    bolt_factor: float
    torsion_min: float | None = None
    bending_min: float | None = None
    twist_share: float | None = None
    stud_axial: float | None = None
    stud_shear: float | None = None
    face_moment: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class Known:
    """How well one key is known: basis "measured", "drawing", "estimate" or "guess"; band is a ratio or None."""

    key: str
    basis: str
    source: str
    band: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class Bound:
    """A missing number run at both ends: texts as they would stand in the case file."""

    key: str
    low: str
    middle: str
    high: str
    reason: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Default:
    """A missing number that has a default, with its source ("unsourced" is said plainly)."""

    key: str
    value: str
    source: str


@dataclass(frozen=True, slots=True, kw_only=True)
class Check:
    """One thing that can fail: value against limit, both in the unit named."""

    name: str
    ok: bool
    value: float
    limit: float
    note: str = ""


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Case:
    """A case file, read, checked and converted. `document` is the merged TOML it was built from.

    chassis_torsion [N·m/rad] is the torsional stiffness between the axles, None for a rigid chassis;
    chassis_without_block says that the block's own is not in it and comes in series once known.
    """

    path: Path
    title: str
    sha256: str
    document: Mapping[str, Any]
    overrides: tuple[str, ...]
    air_density: float
    gravity: float
    bodies: Mapping[str, Body]
    axles: Mapping[str, Axle]
    devices: tuple[Device, ...]
    aero_total: AeroTotal | None
    drive: Drive
    engine: Engine
    tyre_friction: float | None
    faces: Mapping[str, Face]
    manoeuvres: tuple[Manoeuvre, ...]
    block: BlockSpec | None
    installation: Installation
    paths: tuple[SecondPath, ...]
    limits: Limits
    engine_maker_consent: str
    known: Mapping[str, Known]
    bounds: tuple[Bound, ...]
    defaults: tuple[Default, ...]
    checks: tuple[Check, ...]
    aero_split: tuple[Device, ...] = ()
    concept_grade: str | None = None
    tyres: Tyres = field(default_factory=Tyres)
    chassis_torsion: float | None = None
    chassis_without_block: bool = False
    points: Mapping[str, Point] = field(default_factory=dict)
    performance: Performance = field(default_factory=Performance)
    catalogue: CatalogueSpec | None = None
    envelope: EnvelopeSpec | None = None
    laps: tuple[LapSpec, ...] = ()

    @property
    def wheelbase(self) -> float:
        """Distance between the axles [m]."""
        return self.axles["front"].x - self.axles["rear"].x
