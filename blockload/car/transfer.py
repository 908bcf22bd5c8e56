"""How an axle pair shares the lateral load transfer, by its three parts: what a fixed percentage would hide.

The roll couple of an axle has a geometric part (side force at the roll centre), an unsprung part and an elastic part
(`wheels`). Only the elastic one follows the roll stiffness, so the front axle's share of the whole transfer is not its
share of the stiffness, and a percentage measured or quoted for one must not be entered for the other.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import Case, Manoeuvre
from .balance import balance
from .bodies import AXLES

_ONE_G = 9.80665


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Transfer:
    """Roll couples (2,) of the front and rear axle [N·m] in a level turn of 1 g without aero, by part."""

    geometric: Floats
    unsprung: Floats
    elastic: Floats

    @property
    def total(self) -> Floats:
        """Whole roll couple (2,) of each axle."""
        result: Floats = self.geometric + self.unsprung + self.elastic
        return result

    @property
    def front_share(self) -> float:
        """Front axle's share of the whole lateral load transfer."""
        return float(self.total[0] / self.total.sum())

    @property
    def front_elastic_share(self) -> float:
        """Front axle's share of the elastic part: what the roll stiffness sets."""
        return float(self.elastic[0] / self.elastic.sum())


def transfer(case: Case, block_torsion: float | None = None) -> Transfer:
    """The three parts of the lateral load transfer, worked back from the balanced wheel loads of a 1 g turn."""
    turn = Manoeuvre(name="one g", acceleration=frozen((0.0, _ONE_G, 0.0)))
    still = replace(case, devices=(), aero_total=None, aero_split=())
    force = balance(still, [turn], block_torsion=block_torsion).wheels[0]
    roll, geometric, unsprung = np.zeros(2), np.zeros(2), np.zeros(2)
    for k, name in enumerate(AXLES):
        axle, left, right = case.axles[name], force[2 * k], force[2 * k + 1]
        own = -2 * axle.corner.mass * _ONE_G
        roll[k] = (left[2] - right[2]) * axle.track / 2
        geometric[k] = -(left[1] + right[1] + own) * axle.roll_centre_height
        unsprung[k] = own * axle.corner.cg[2]
    return Transfer(geometric=frozen(geometric), unsprung=frozen(unsprung), elastic=frozen(roll - geometric - unsprung))


def share_range(case: Case, low: float = 0.4, high: float = 0.6) -> tuple[float, float]:
    """Front axle's share of the whole transfer with `low` and `high` of the roll stiffness in front."""
    total = sum(axle.roll_stiffness for axle in case.axles.values())
    ends = []
    for share in (low, high):
        axles = {
            "front": replace(case.axles["front"], roll_stiffness=share * total),
            "rear": replace(case.axles["rear"], roll_stiffness=(1.0 - share) * total),
        }
        ends.append(transfer(replace(case, axles=axles)).front_share)
    return ends[0], ends[1]
