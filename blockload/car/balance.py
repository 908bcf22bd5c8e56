"""From the car's figures and manoeuvres to balanced loads on seven bodies.

The order of work: elementary loads of every source; the total of each case, for the fractions that make sharing
non-linear (lateral force within an axle) and for the drive torque; every source with those fractions; corners, faces,
studs; the free-body tables and their residuals. With the fractions frozen a case is exactly the sum of its sources.
A case that keeps only some `parts` shares as the whole manoeuvre does.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import Case, Manoeuvre
from .aero import check_devices
from .aero_split import bounds, only_totals, splits, with_middle_split
from .aero_totals import refuse_wrong_total
from .bodies import chassis, masses
from .catalogue.expanding import expand
from .corners import corner_loads
from .crank import crank_couples, crank_torque
from .engine_loads import engine_loads
from .faces import chain_loads, face_loads, front_rear_gap
from .manoeuvres import Inputs, read
from .model import LoadCases
from .point_forces import engine_points, point_terms
from .residual import refuse, residuals
from .ride_height import in_the_air
from .sources import elementary, source_names
from .supports import engine_supports, held_loads, held_tyres, hold, support_terms
from .suspension import axle_maps, body_wrenches, corner_wrenches, link_loads
from .terms import body_terms, crank_terms, face_terms, pickup_terms, wheel_terms
from .tyres import tyre_use
from .wheels import tyre_answer
from .wrench import sealed


def balance(
    case: Case,
    manoeuvres: Sequence[Manoeuvre] | None = None,
    *,
    block_torsion: float | None = None,
    judged_only: bool = False,
) -> LoadCases:
    """Balanced load cases of a car: its own manoeuvres with those of its catalogue and envelope, or those given.

    `block_torsion` [N·m/rad] is the block's own torsional stiffness, in series with the chassis's between the axles;
    None: the block is rigid, or is contained in the chassis's figure. `judged_only` leaves out manoeuvres that take no
    part in a verdict.

    Raises CaseError for a manoeuvre or a car that has no meaning, BalanceError for a residual above 1e-6.
    """
    extremes = splits(case) if only_totals(case) else None
    if extremes is not None:
        case = with_middle_split(case, extremes)
    check_devices(case)
    refuse_wrong_total(case)
    run = (*case.manoeuvres, *expand(case)) if manoeuvres is None else manoeuvres
    run = tuple(it for it in run if it.judged) if judged_only else run
    inputs = read(case, run)
    car, frame = masses(case), chassis(case)
    inputs = in_the_air(case, inputs, car)
    names = source_names(case, inputs)
    loads = elementary(case, inputs, names, car, frame)
    whole = loads
    if not all(kept.all() for kept in inputs.keep.values()):
        whole = elementary(case, inputs.whole(), names, car, frame)

    held = hold(inputs, loads, frame)
    tyres = held_tyres(tyre_answer(case, inputs, loads, whole, block_torsion), held)
    loads = held_loads(loads, held)
    torque = crank_torque(case, inputs, frame, tyres.along)
    couple = crank_couples(case, inputs, names, torque)
    corners = corner_loads(case, inputs, frame, loads.loads[:, :, 3:], tyres.force)
    shaft = np.where([name == "crank" for name in names], couple, 0.0)
    maps = axle_maps(case, frame)
    wrenches = corner_wrenches(frame, corners.resultant)
    chain = chain_loads(loads.loads, frame, corners, body_wrenches(maps, wrenches), shaft)
    faces = face_loads(case, chain)
    wheel_force = sealed(tyres.force + loads.contact)
    terms = (
        *body_terms(case, inputs, car, loads.motion.sum(axis=1)),
        *point_terms(inputs),
        *support_terms(held),
        *crank_terms(car, couple[:, names.index("crank")], couple[:, names.index("crank_inertia")]),
        *wheel_terms(frame, wheel_force, corners.shaft.sum(axis=1)),
        *pickup_terms(maps, wrenches.sum(axis=1)),
        *face_terms(faces["front"], faces["rear"]),
    )
    residual = residuals(terms, car, len(inputs.names))
    refuse(residual, inputs.names)
    return LoadCases(
        names=inputs.names,
        sources=names,
        speed=inputs.speed,
        downforce=_aero(inputs, "downforce"),
        drag=_aero(inputs, "drag"),
        acceleration=sealed(loads.motion[..., :3]),
        angular_acceleration=sealed(loads.motion[..., 3:]),
        engine_acceleration=sealed(loads.engine_motion[..., :3]),
        wheel_force=wheel_force,
        crank_torque=sealed(torque),
        crank_couple=sealed(couple),
        faces=faces,
        links=link_loads(maps, wrenches),
        overall_ratio=inputs.ratio,
        tyre_use=sealed(tyre_use(case.tyres, wheel_force.sum(axis=1))),
        engine_loads=(
            *engine_loads(case, inputs, frame, maps, corners.shaft, wrenches),
            *engine_points(inputs, names),
            *engine_supports(held),
        ),
        terms=terms,
        residual=sealed(residual.max(axis=1)),
        front_rear_gap=sealed(front_rear_gap(chain)),
        omega_squared=_turning(inputs),
        wheel_lift=frozen(tyres.pulled.any(axis=1), bool),
        lifted=frozen(tyres.lifted, bool),
        ride_height=frozen(inputs.air.ride_height),
        outside_map=inputs.air.outside,
        aero_bounds=None if extremes is None else bounds(extremes, faces, wheel_force),
        kind=tuple(it.kind for it in run),
        fatigue_exempt=tuple(it.fatigue_exempt for it in run),
        group=tuple(it.group for it in run),
        basis=tuple(it.basis for it in run),
    )


def _aero(inputs: Inputs, kind: str) -> Floats:
    part, axis = (0, 2) if kind == "downforce" else (1, 0)
    return sealed(-inputs.pressure * inputs.air.area[:, :, part, axis].sum(axis=1) * inputs.keep[kind])


def _turning(inputs: Inputs) -> Floats:
    """Square of the yaw rate a_y / v (C,) of a steady turn."""
    rate = np.divide(inputs.acceleration[:, 1], inputs.speed, out=np.zeros_like(inputs.speed), where=inputs.speed > 0)
    return sealed(rate**2)
