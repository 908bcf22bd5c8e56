"""Balanced load cases: every force on every body, source by source.

Axes C (load cases), S (sources), B (bodies: tub, engine, gearbox, FL, FR, RL, RR). A load case is the sum
of its sources over axis S; every array with an S axis is linear in the sources.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from ..arrays import Floats

BODIES = ("tub", "engine", "gearbox", "FL", "FR", "RL", "RR")
SECTION = ("N", "V_y", "V_z", "T", "M_sag", "M_lat")


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class FaceLoads:
    """What crosses one face, about `reference` (3,), the centroid of its studs.

    `wrench` (C, S, 6) is force and moment on the engine through the studs; `stud_axial` (C, S, n) (+ tension) and
    `stud_shear` (C, S, n, 2) (y, z, on the engine) are those of a rigid face on equal studs.
    """

    name: str
    reference: Floats
    studs: tuple[str, ...]
    stud_at: Floats
    wrench: Floats
    stud_axial: Floats
    stud_shear: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class LocalLoad:
    """A load that enters the engine at a place of its own: force and moment (C, S, 3) about `at` (3,)."""

    name: str
    attachment: str | None
    at: Floats
    force: Floats
    moment: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class LinkLoads:
    """Tensions (C, S, n) of a corner's links and of what its rocker works on.

    condition is the condition number of the corner's equations, weakest names the members that hold it least.
    """

    names: tuple[str, ...]
    tension: Floats
    condition: float
    weakest: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Term:
    """One line of a free-body table: force and moment (C, 3) about `at` ((3,) or (C, 3)) on `body`."""

    body: str
    label: str
    at: Floats
    force: Floats
    moment: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class AeroBounds:
    """Least and greatest (axis of 2) of every response over all splits of whole-car aero that keep its totals.

    section maps a face to (2, C, 6) in the order of SECTION; stud_axial to (2, C, n); stud_shear to (2, C, n, 2), its
    components; stud_shear_resultant to (2, C, n). `splits` says in words which carriers share each extreme split.
    The bounds are exact while every wheel stays down at every split; `lifts` (C,) marks the cases where one would not.
    """

    splits: tuple[str, ...]
    section: Mapping[str, Floats]
    stud_axial: Mapping[str, Floats]
    stud_shear: Mapping[str, Floats]
    stud_shear_resultant: Mapping[str, Floats]
    lifts: NDArray[np.bool_]


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class LoadCases:
    """The balanced load cases of a case file (see the module docstring for the axes).

    acceleration (C, S, 3) of the car's CG and angular_acceleration (C, S, 3); wheel_force (C, S, 4, 3), road on
    tyre, in the order FL FR RL RR; engine_acceleration (C, S, 3) is a - g at the engine's CG as far as the parts of
    the case contain it (zero in free fall); crank_couple (C, S) is the couple about x on the engine block from shaft
    torque and crank inertia; crank_torque (C,) is nan where no overall ratio was given.
    residual (C,) is the largest of any body, as a share of the magnitudes on it, reassembled from `terms`;
    front_rear_gap (C,) is the disagreement of the face wrenches summed from the front and from the rear, as a share.
    omega_squared (C,) is that of the steady turn's yaw rate [rad^2/s^2]: it sizes the neglected omega x (omega x r).
    lifted (C, 4) tells which wheel is off the ground while the other three carry the car; wheel_lift (C,) whether three
    would not do either, so that some wheel load of the whole manoeuvre (all parts) is below zero: the ground would have
    to pull, and such a case is not a state of the car.
    links maps each corner that has them to its tensions; overall_ratio (C,) is nan where none was given; tyre_use
    (C, 4) is the share of its grip each tyre uses, nan where friction is not known.
    ride_height (C, 2), front and rear, is nan where no aero map asks for it; outside_map (C,) says which map was read
    beyond its grid, and where; aero_bounds is there where only totals of the aero are known, the case itself then
    standing at the mean of the extreme splits.
    kind (C,) is "service" or "limit"; fatigue_exempt (C,) ones are no cycles; group (C,) is the standard situation's
    own, None for the case file's manoeuvres; basis (C,) says where the figures of a case come from.
    """

    names: tuple[str, ...]
    sources: tuple[str, ...]
    speed: Floats
    downforce: Floats
    drag: Floats
    acceleration: Floats
    angular_acceleration: Floats
    engine_acceleration: Floats
    wheel_force: Floats
    crank_torque: Floats
    crank_couple: Floats
    faces: Mapping[str, FaceLoads]
    engine_loads: tuple[LocalLoad, ...]
    terms: tuple[Term, ...]
    residual: Floats
    front_rear_gap: Floats
    omega_squared: Floats
    wheel_lift: NDArray[np.bool_] = field(default_factory=lambda: np.zeros(0, dtype=bool))
    lifted: NDArray[np.bool_] = field(default_factory=lambda: np.zeros((0, 4), dtype=bool))
    links: Mapping[str, LinkLoads] = field(default_factory=dict)
    overall_ratio: Floats = field(default_factory=lambda: np.zeros(0))
    tyre_use: Floats = field(default_factory=lambda: np.zeros((0, 4)))
    ride_height: Floats = field(default_factory=lambda: np.zeros((0, 2)))
    outside_map: tuple[str, ...] = ()
    aero_bounds: AeroBounds | None = None
    kind: tuple[str, ...] = ()
    fatigue_exempt: tuple[bool, ...] = ()
    group: tuple[str | None, ...] = ()
    basis: tuple[str | None, ...] = ()

    @property
    def wheels(self) -> Floats:
        """Wheel forces of the cases, (C, 4, 3)."""
        total: Floats = self.wheel_force.sum(axis=1)
        return total

    @property
    def friction_used(self) -> Floats:
        """Grip used by each tyre, sqrt(Fx^2 + Fy^2) / Fz, (C, 4); nan where Fz <= 0."""
        x, y, z = np.moveaxis(self.wheels, -1, 0)
        used: Floats = np.divide(np.hypot(x, y), z, out=np.full_like(z, np.nan), where=z > 0)
        return used

    def section(self, face: str) -> Floats:
        """Section wrench (C, 6) in the order of SECTION; the signs are those of the README's sign table."""
        wrench = self.faces[face].wrench.sum(axis=1)
        signs = (1.0, 1.0, 1.0, 1.0, -1.0, -1.0)
        result: Floats = wrench * signs * (1.0 if face == "front" else -1.0)
        return result
