"""Wrenches: force and moment about a point, as arrays (..., 6)."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike

from ..arrays import Floats


def sealed(array: Floats) -> Floats:
    """The array itself, made read-only: for one that was made here and is known to nobody else."""
    array.flags.writeable = False
    return array


def wrench(force: ArrayLike, at: ArrayLike, about: ArrayLike = (0.0, 0.0, 0.0)) -> Floats:
    """Wrench (..., 6) about a point of a force (..., 3) acting at another."""
    force = np.asarray(force, dtype=float)
    arm = np.asarray(at, dtype=float) - np.asarray(about, dtype=float)
    moment = np.cross(np.broadcast_to(arm, force.shape), force)
    return np.concatenate([force, moment], axis=-1)


def moved(wrenches: Floats, to: ArrayLike, since: ArrayLike = (0.0, 0.0, 0.0)) -> Floats:
    """The same wrenches (..., 6) about the point `to` instead of `since`."""
    arm = np.asarray(since, dtype=float) - np.asarray(to, dtype=float)
    force = wrenches[..., :3]
    moment = wrenches[..., 3:] + np.cross(np.broadcast_to(arm, force.shape), force)
    return np.concatenate([force, moment], axis=-1)
