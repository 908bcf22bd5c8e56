"""A chassis that twists between the axles: how it shares the elastic roll couple.

Two lumps roll on the springs of their own axle, K_f and K_r, and are joined by the chassis of torsional stiffness K_c.
M_f and M_r are the roll couples that each lump leaves to the springs: tub and front corners, engine, gearbox and rear
corners. All flexibility is put where the engine is; a tub that twists along its length gives a little less.
    phi_f = [M_f (K_r + K_c) + M_r K_c] / D,   D = K_f K_r + K_c (K_f + K_r),   phi_r likewise,
    elastic couples E_f = K_f phi_f, E_r = K_r phi_r (E_f + E_r = M_f + M_r), chassis torque K_c (phi_f - phi_r).
The same two-lump model: M. Sampo, A. Sorniotti, A. Crocombe, *Chassis Torsional Stiffness: Analysis of the Influence on
Vehicle Dynamics*, SAE 2010-01-0094; A. Deakin et al., SAE 2000-01-3554 (both read in abstract).
"""

from __future__ import annotations

import numpy as np

from ..arrays import Floats
from ..errors import CaseError

FRONT_LUMP = (0, 3, 4)
"""Bodies that roll with the front axle: tub, FL, FR."""
REAR_LUMP = (1, 2, 5, 6)
"""Bodies that roll with the rear axle: engine, gearbox, RL, RR."""


def elastic_split(front: float, rear: float, chassis: float | None) -> Floats:
    """Matrix (2, 2) from the lumps' couples (M_f, M_r) to the axles' elastic couples (E_f, E_r).

    Roll stiffness of both axles and torsional stiffness of the chassis [N·m/rad]; None: a rigid chassis.
    """
    if not front + rear > 0 or front < 0 or rear < 0:
        raise CaseError("[axles] roll_stiffness", "no roll stiffness on either axle", "above 0 on one axle at least")
    if chassis is None:
        return np.array([[front, front], [rear, rear]]) / (front + rear)
    if not chassis > 0:
        raise CaseError("[chassis] torsion_stiffness", f"{chassis:g} N·m/rad", "above 0, or left out for a rigid one")
    determinant = front * rear + chassis * (front + rear)
    own = np.array([[front * (rear + chassis), front * chassis], [rear * chassis, rear * (front + chassis)]])
    result: Floats = own / determinant
    return result


def in_series(*stiffness: float | None) -> float | None:
    """Torsional stiffness of parts one behind the other; None counts as rigid, and one without any leaves none."""
    known = [value for value in stiffness if value is not None]
    if any(value <= 0 for value in known):
        return 0.0
    return 1.0 / sum(1.0 / value for value in known) if known else None


def lumps(loads: Floats) -> Floats:
    """Loads (..., 2, 6) on the front and rear lump from those on the seven bodies (..., 7, 6), about the origin."""
    return np.stack([loads[..., FRONT_LUMP, :].sum(axis=-2), loads[..., REAR_LUMP, :].sum(axis=-2)], axis=-2)
