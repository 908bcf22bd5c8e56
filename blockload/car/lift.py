"""Three wheels on the ground: what changes when a wheel lifts.

A wheel cannot pull. Where four wheels would call for a load below zero, the wheel with the lowest load is let go: its
axle carries all of its load on the other side, so that its roll couple is R = -(V t / 2) with the left wheel off, the
reverse with the right one off, and the other axle takes the rest of the couple. Statics alone then fixes the loads; no
roll stiffness enters. The lifted wheel drives and brakes nothing: its neighbour takes the axle's whole force along x
(brakes as set, a locked differential), and the yaw of that is answered by the side forces. Where three wheels would not
do either (a car on two wheels, an axle that is lifted as a whole) there is no steady state, and the case is said to
have none.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from ..arrays import Floats

_ROUNDING = 1e-9  # of the car's load


def first_to_lift(load: Floats) -> Floats:
    """Which wheel of which axle to let go, (..., 2 axles): +1 left, -1 right, 0 none.

    `load` (..., 2 axles, 2 sides) are the vertical loads that four wheels would carry.
    """
    flat = load.reshape(*load.shape[:-2], 4)
    lowest = flat.argmin(axis=-1)
    lifted = (np.arange(4) == lowest[..., None]) & below_zero(load).reshape(flat.shape)
    sides: Floats = lifted[..., 0::2].astype(float) - lifted[..., 1::2]
    return sides


def below_zero(load: Floats) -> NDArray[np.bool_]:
    """Where loads (..., 2, 2) are below zero by more than rounding."""
    scale = np.abs(load).sum(axis=(-2, -1), keepdims=True)
    result: NDArray[np.bool_] = load < -_ROUNDING * scale
    return result


def three_wheel_roll(roll: Floats, vertical: Floats, track: Floats, lift: Floats) -> Floats:
    """Axle roll couples (..., 2) with the wheels of `lift` (..., 2) off the ground; their sum stays.

    `roll`, `vertical` (..., 2) are what four wheels would carry per axle, `track` (2,); at most one axle lifts.
    """
    own = -lift * vertical * track / 2
    other = roll.sum(axis=-1, keepdims=True) - own[..., ::-1]
    result: Floats = np.where(lift != 0, own, np.where(lift[..., ::-1] != 0, other, roll))
    return result


def side_shares(lift: Floats) -> Floats:
    """Shares (..., 2 axles, 2 sides) of an axle's force along x on its left and right wheel."""
    return np.stack([(1 - lift) / 2, (1 + lift) / 2], axis=-1)


def yaw_of_one_side(along: Floats, track: Floats, lift: Floats) -> Floats:
    """Yaw moment (...,) of axle forces along x (..., 2) that one side alone carries."""
    result: Floats = (along * lift * track / 2).sum(axis=-1)
    return result
