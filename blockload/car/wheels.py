"""Wheel loads from six equations and three sharing rules.

With everything else about the origin (a point on the ground, contact points at z = 0) summed to F, M:
    vertical and pitch give the axle loads:      Fz_f + Fz_r = -F_z,   x_f Fz_f + x_r Fz_r = M_y
    side and yaw give the axles' lateral forces: Fy_f + Fy_r = -F_y,   x_f Fy_f + x_r Fy_r = -M_z
    along x the tyres give -F_x, by axle as driven or braked, equally left and right
    roll gives the sum of the axle roll couples  R_f + R_r = -M_x,     R_i = (Fz_iL - Fz_iR) t_i / 2
and the roll stiffness splits what the links do not carry directly:
    R_i = G_i + E_i,  G_i = -[(Fy_i + U_i) h_rc,i - U_i h_u,i],  E_f : E_r = K_f : K_r,
U_i being the lateral d'Alembert force on the axle's unsprung mass (W. F. Milliken, D. L. Milliken, *Race Car Vehicle
Dynamics*, SAE 1995, ch. 18, has the same three parts: geometric, unsprung, elastic; chapter from memory).
Within an axle lateral force follows vertical load.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ..arrays import Floats
from ..case.model import Case
from ..errors import CaseError
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
    lifted (C, 4): wheels whose load, extra forces included, is below zero in the whole manoeuvre.
    """

    force: Floats
    along: Floats
    lifted: NDArray[np.bool_]


def tyre_answer(case: Case, inputs: Inputs, loads: Elementary, whole: Elementary) -> TyreForces:
    """What the tyres answer to every source of `loads`, shared within the axles as `whole` (all parts) is."""
    shares = axle_shares(case, inputs)
    totals = axle_loads(case, whole.loads.sum(axis=(1, 2)), whole.unsprung.sum(axis=1), shares)
    _refuse_pushing_brakes(case, inputs, totals)
    left = left_shares(case, totals)
    answer = axle_loads(case, loads.loads.sum(axis=2), loads.unsprung, shares[:, None])
    standing = wheel_forces(case, totals, left) + whole.contact.sum(axis=1)
    return TyreForces(
        force=wheel_forces(case, answer, left[:, None]),
        along=totals.along,
        lifted=standing[..., 2] < 0,
    )


def axle_shares(case: Case, inputs: Inputs) -> Floats:
    """Shares (C, 2) of the longitudinal tyre force on the front and rear axle."""
    front = case.drive.brake_front_share
    result: Floats = np.where(inputs.brake[:, None], (front, 1.0 - front), DRIVEN[case.drive.axle])
    return result


def axle_loads(case: Case, wrenches: Floats, unsprung: Floats, shares: Floats) -> AxleLoads:
    """Axle loads that balance wrenches (..., 6) about the origin.

    `unsprung` (..., 2) is the lateral d'Alembert force on the corners of each axle; `shares` (..., 2) those of the
    force along x.
    """
    axles = [case.axles["front"], case.axles["rear"]]
    x = np.array([axle.x for axle in axles])
    stiffness = np.array([axle.roll_stiffness for axle in axles])
    if not stiffness.sum() > 0:
        raise CaseError("[axles] roll_stiffness", "no roll stiffness on either axle", "above 0 on one axle at least")
    force, moment = wrenches[..., :3], wrenches[..., 3:]
    vertical = _two_supports(x, -force[..., 2], moment[..., 1])
    lateral = _two_supports(x, -force[..., 1], -moment[..., 2])
    centre = np.array([axle.roll_centre_height for axle in axles])
    unsprung_height = np.array([axle.corner.cg[2] for axle in axles])
    geometric = -(lateral + unsprung) * centre + unsprung * unsprung_height
    elastic = -moment[..., 0] - geometric.sum(axis=-1)
    return AxleLoads(
        along=-force[..., :1] * shares,
        lateral=lateral,
        vertical=vertical,
        roll=geometric + elastic[..., None] * stiffness / stiffness.sum(),
    )


def left_shares(case: Case, totals: AxleLoads) -> Floats:
    """Share (C, 2) of an axle's lateral force on its left wheel: that of the vertical load, 0 on a lifted wheel."""
    load = _side_loads(case, totals)
    both = load.sum(axis=-1)
    carried = both > 1e-9 * np.abs(totals.vertical).sum(axis=-1, keepdims=True)
    share = np.divide(load[..., 0], both, out=np.full_like(both, 0.5), where=carried)
    clipped: Floats = np.clip(share, 0.0, 1.0)
    return clipped


def wheel_forces(case: Case, loads: AxleLoads, left: Floats) -> Floats:
    """Forces (..., 4, 3) of the road on the tyres FL FR RL RR, with `left` (..., 2) from `left_shares`."""
    lateral = np.stack(np.broadcast_arrays(loads.lateral * left, loads.lateral * (1.0 - left)), axis=-1)
    along = np.stack([loads.along / 2, loads.along / 2], axis=-1)
    result = np.stack([along, lateral, _side_loads(case, loads)], axis=-1)
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


def _side_loads(case: Case, loads: AxleLoads) -> Floats:
    """Vertical loads (..., 2 axles, 2 sides: left, right)."""
    track = np.array([case.axles["front"].track, case.axles["rear"].track])
    half, transfer = loads.vertical / 2, loads.roll / track
    return np.stack([half + transfer, half - transfer], axis=-1)


def _two_supports(x: Floats, total: Floats, moment: Floats) -> Floats:
    """Forces (..., 2) at x with the given sum and the given sum of x times force."""
    rear = (moment - x[0] * total) / (x[1] - x[0])
    return np.stack([total - rear, rear], axis=-1)
