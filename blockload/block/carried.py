"""Masses the mesh does not have: what is left of the engine after the meshed metal and the parts known better.

Remainder = engine − mesh − named parts, in mass, first moment and inertia (parallel axes, all about the remainder's
own cg). A remainder that no body can have means that mesh and engine data contradict each other.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import Body, Carried
from ..errors import BlockError
from .model import CarriedMass
from .moments import MassProperties

REMAINDER = "rest of the engine"
_ROUNDING = 1e-9


def carried_masses(
    engine: Body, metal: MassProperties, named: Sequence[Carried], carried_on: str
) -> tuple[CarriedMass, ...]:
    """Return the named parts and then the remainder, on the attachment `carried_on`.

    Raises BlockError where the remainder's mass or inertia is not positive or breaks the triangle rule.
    """
    parts = tuple(
        CarriedMass(name=c.name, attachment=c.on, mass=c.mass, cg=frozen(c.cg), inertia=frozen(c.inertia))
        for c in named
    )
    known = [(metal.mass, metal.cg, metal.inertia)] + [(p.mass, p.cg, p.inertia) for p in parts]
    mass = engine.mass - sum(item[0] for item in known)
    if mass <= 0.0:
        detail = "".join(f" + {p.name} {p.mass:.1f}" for p in parts)
        raise BlockError(
            "bodies.engine.mass",
            f"the engine ({engine.mass:.1f} kg) is lighter than its mesh and named parts ({metal.mass:.1f}{detail} kg)",
            "an engine heavier than the metal meshed",
            "check mesh_unit, the materials' densities and the engine mass",
        )
    moment = engine.mass * engine.cg - sum(m * cg for m, cg, _ in known)
    cg = np.asarray(moment / mass)
    inertia = _about(engine.mass, engine.cg, engine.inertia, cg) - sum(_about(m, c, i, cg) for m, c, i in known)
    _check_inertia(engine, mass, cg, inertia)
    rest = CarriedMass(name=REMAINDER, attachment=carried_on, mass=mass, cg=frozen(cg), inertia=frozen(inertia))
    return (*parts, rest)


def _about(mass: float, cg: Floats, inertia: Floats, point: Floats) -> Floats:
    arm = cg - point
    return np.asarray(inertia + mass * (arm @ arm * np.eye(3) - np.outer(arm, arm)))


def _check_inertia(engine: Body, mass: float, cg: Floats, inertia: Floats) -> None:
    small, middle, large = np.linalg.eigvalsh(inertia)
    if small > 0.0 and large <= (small + middle) * (1.0 + _ROUNDING):
        return
    reason = "is not positive" if small <= 0.0 else "breaks the triangle rule (largest over the sum of the others)"
    at = "(" + ", ".join(f"{value:.3f}" for value in cg) + ") m"
    estimated = " (estimated)" if engine.inertia_estimated else ""
    raise BlockError(
        "bodies.engine.inertia",
        f"what is left of the engine beside the mesh ({mass:.1f} kg at {at}) has principal inertia "
        f"({small:.3g}, {middle:.3g}, {large:.3g}) kg·m², which {reason}",
        f"an engine inertia{estimated} and cg that contain the mesh's",
        "check the engine's cg and inertia, block.place and the parts under block.carried",
    )
