"""Figures of a four-stroke engine: how plausible its torque and speed are.

J. B. Heywood, *Internal Combustion Engine Fundamentals*, McGraw-Hill 1988: mean effective pressure eq. 2.19-2.20
(n_R = 2 turns a cycle), mean piston speed section 2.2; swept volume is geometry, power is torque times speed.
"""

from __future__ import annotations

import math


def displacement(bore: float, stroke: float, cylinders: int) -> float:
    """Swept volume [m^3] of all cylinders from bore and stroke [m]."""
    return cylinders * math.pi / 4 * bore**2 * stroke


def bmep(torque: float, volume: float) -> float:
    """Brake mean effective pressure [Pa], 4 pi T / V, of a four-stroke engine from torque [N·m] and volume [m^3]."""
    return 4 * math.pi * torque / volume


def torque_at(pressure: float, volume: float) -> float:
    """Torque [N·m] of a four-stroke engine at a mean effective pressure [Pa], from its swept volume [m^3]."""
    return pressure * volume / (4 * math.pi)


def mean_piston_speed(stroke: float, speed: float) -> float:
    """Mean piston speed [m/s], twice the stroke [m] a turn, at a crank speed [rad/s]."""
    return stroke * speed / math.pi


def power(torque: float, speed: float) -> float:
    """Power [W] from torque [N·m] and crank speed [rad/s]."""
    return torque * speed
