"""Wheel loads from six equations and three sharing rules.

With everything else about the origin (a point on the ground, contact points at z = 0) summed to F, M:
    vertical and pitch give the axle loads:      Fz_f + Fz_r = -F_z,   x_f Fz_f + x_r Fz_r = M_y
    side and yaw give the axles' lateral forces: Fy_f + Fy_r = -F_y,   x_f Fy_f + x_r Fy_r = -M_z
    along x the tyres give -F_x, by axle as driven or braked, equally left and right
    roll gives the sum of the axle roll couples  R_f + R_r = -M_x,     R_i = (Fz_iL - Fz_iR) t_i / 2
and the roll stiffness splits what the links do not carry directly:
    R_i = G_i + E_i,  G_i = -[(Fy_i + U_i) h_rc,i - U_i h_u,i],  E_f : E_r = K_f : K_r on a rigid chassis,
U_i being the lateral d'Alembert force on the axle's unsprung mass (W. F. Milliken, D. L. Milliken, *Race Car Vehicle
Dynamics*, SAE 1995, ch. 18, has the same three parts: geometric, unsprung, elastic; chapter from memory).
A chassis that twists shares the elastic parts by `chassis`, a lifted wheel changes the rule by `lift`. Within an axle
lateral force follows vertical load.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..arrays import Floats
from ..case.model import Case
from ..errors import CaseError
from .chassis import elastic_split, in_series, lumps
from .lift import below_zero, first_to_lift, side_shares, three_wheel_roll, yaw_of_one_side
from .manoeuvres import DRIVEN, Inputs
from .sources import Elementary


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class AxleLoads:
    """What the tyres of an axle carry together, front and rear on the last axis: (..., 2) each [N, N·m]."""

    along: Floats
    lateral: Floats
    vertical: Floats
    roll: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class TyreForces:
    """What the tyres answer.

    force (C, S, 4, 3), extra wheel forces apart; along (C, 2): the whole manoeuvre's force along x of each axle;
    pulled (C, 4): wheels whose load, extra forces included, is below zero in the whole manoeuvre although three wheels
    were tried; lifted (C, 4): wheels off the ground, the other three carrying the car.
    """

    force: Floats
    along: Floats
    pulled: NDArray[np.bool_]
    lifted: NDArray[np.bool_]


def tyre_answer(
    case: Case, inputs: Inputs, loads: Elementary, whole: Elementary, block_torsion: float | None = None
) -> TyreForces:
    """What the tyres answer to every source of `loads`, shared within the axles as `whole` (all parts) is.

    `block_torsion` [N·m/rad] is the block's own stiffness, in series with the rest of the chassis.
    """
    shares = axle_shares(case, inputs)
    split = _split(case, block_torsion)
    call = lumps(whole.answered).sum(axis=1)
    totals = axle_loads(case, call, whole.unsprung.sum(axis=1), shares, split)
    _refuse_pushing_brakes(case, inputs, totals)
    lift = first_to_lift(side_loads(case, totals))
    if lift.any():
        three = axle_loads(case, call, whole.unsprung.sum(axis=1), shares, split, lift)
        lift[below_zero(side_loads(case, three)).any(axis=(1, 2))] = 0.0
        totals = axle_loads(case, call, whole.unsprung.sum(axis=1), shares, split, lift)
    left = left_shares(case, totals)
    answer = axle_loads(case, lumps(loads.answered), loads.unsprung, shares[:, None], split, lift[:, None])
    standing = wheel_forces(case, totals, left, lift) + whole.contact.sum(axis=1)
    return TyreForces(
        force=wheel_forces(case, answer, left[:, None], lift[:, None]),
        along=totals.along,
        pulled=below_zero(standing[..., 2].reshape(-1, 2, 2)).reshape(-1, 4),
        lifted=np.stack([lift > 0, lift < 0], axis=-1).reshape(-1, 4),
    )


def axle_shares(case: Case, inputs: Inputs) -> Floats:
    """Shares (C, 2) of the longitudinal tyre force on the front and rear axle."""
    front = case.drive.brake_front_share
    result: Floats = np.where(inputs.brake[:, None], (front, 1.0 - front), DRIVEN[case.drive.axle])
    return result


def axle_loads(
    case: Case, call: Floats, unsprung: Floats, shares: Floats, split: Floats, lift: Floats | None = None
) -> AxleLoads:
    """Axle loads that balance the wrenches `call` (..., 2, 6) on the front and rear lump, about the origin.

    `unsprung` (..., 2) is the lateral d'Alembert force on the corners of each axle; `shares` (..., 2) those of the
    force along x; `split` (2, 2) turns the lumps' elastic couples into the axles'; `lift` (..., 2): +1 where the left
    wheel is off the ground, -1 the right one.
    """
    axles = [case.axles["front"], case.axles["rear"]]
    x = np.array([axle.x for axle in axles])
    track = np.array([axle.track for axle in axles])
    force, moment = call[..., :3].sum(axis=-2), call[..., 3:].sum(axis=-2)
    vertical = _two_supports(x, -force[..., 2], moment[..., 1])
    along = -force[..., :1] * shares
    yaw = moment[..., 2] if lift is None else moment[..., 2] + yaw_of_one_side(along, track, lift)
    geometric, elastic = _roll_parts(case, call, unsprung)
    roll = geometric.sum(axis=-2) + elastic @ split.T
    return AxleLoads(
        along=along,
        lateral=_two_supports(x, -force[..., 1], -yaw),
        vertical=vertical,
        roll=roll if lift is None else three_wheel_roll(roll, vertical, track, lift),
    )


def left_shares(case: Case, totals: AxleLoads) -> Floats:
    """Share (C, 2) of an axle's lateral force on its left wheel: that of the vertical load, 0 on a lifted wheel."""
    load = side_loads(case, totals)
    both = load.sum(axis=-1)
    carried = both > 1e-9 * np.abs(totals.vertical).sum(axis=-1, keepdims=True)
    share = np.divide(load[..., 0], both, out=np.full_like(both, 0.5), where=carried)
    clipped: Floats = np.clip(share, 0.0, 1.0)
    return clipped


def wheel_forces(case: Case, loads: AxleLoads, left: Floats, lift: Floats) -> Floats:
    """Forces (..., 4, 3) of the road on the tyres FL FR RL RR, with `left` (..., 2) from `left_shares`."""
    lateral = np.stack(np.broadcast_arrays(loads.lateral * left, loads.lateral * (1.0 - left)), axis=-1)
    along = loads.along[..., None] * side_shares(lift)
    three = loads.vertical[..., None] * side_shares(lift)
    vertical = np.where(lift[..., None] != 0, three, side_loads(case, loads))
    result = np.stack([along, lateral, vertical], axis=-1)
    return result.reshape(*result.shape[:-3], 4, 3)


def _refuse_pushing_brakes(case: Case, inputs: Inputs, totals: AxleLoads) -> None:
    push = totals.along.sum(axis=-1)
    wrong = inputs.brake & (push > 1e-9 * np.abs(totals.vertical).sum(axis=-1))
    if not wrong.any():
        return
    c = int(np.flatnonzero(wrong)[0])
    raise CaseError(
        f"[manoeuvres.{inputs.names[c]}] drive",
        f'"brake" at {inputs.acceleration[c, 0]:g} m/s^2, where drag alone slows the car more and the tyres would have '
        f"to push forward with {push[c] / 1e3:.3g} kN",
        "a deceleration beyond that of drag alone",
        'set drive = "accelerate" (the tyres push), or "coast"',
    )


def side_loads(case: Case, loads: AxleLoads) -> Floats:
    """Vertical loads (..., 2 axles, 2 sides: left, right)."""
    track = np.array([case.axles["front"].track, case.axles["rear"].track])
    half, transfer = loads.vertical / 2, loads.roll / track
    return np.stack([half + transfer, half - transfer], axis=-1)


def _roll_parts(case: Case, call: Floats, unsprung: Floats) -> tuple[Floats, Floats]:
    """Geometric roll couples (..., 2 lumps, 2 axles) and what each lump leaves to the springs (..., 2 lumps)."""
    axles = [case.axles["front"], case.axles["rear"]]
    x = np.array([axle.x for axle in axles])
    centre = np.array([axle.roll_centre_height for axle in axles])
    height = np.array([axle.corner.cg[2] for axle in axles])
    lateral = _two_supports(x, -call[..., 1], -call[..., 5])
    own = unsprung[..., None, :] * np.eye(2)  # each axle's corners belong to one lump
    geometric = -(lateral + own) * centre + own * height
    elastic = -call[..., 3] - geometric.sum(axis=-1)
    return geometric, elastic


def _split(case: Case, block_torsion: float | None) -> Floats:
    front, rear = (case.axles[name].roll_stiffness for name in ("front", "rear"))
    return elastic_split(front, rear, in_series(case.chassis_torsion, block_torsion))


def _two_supports(x: Floats, total: Floats, moment: Floats) -> Floats:
    """Forces (..., 2) at x with the given sum and the given sum of x times force."""
    rear = (moment - x[0] * total) / (x[1] - x[0])
    return np.stack([total - rear, rear], axis=-1)
