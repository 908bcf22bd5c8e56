"""Forces at named points of the car: a towing eye, an impact structure, a test rig's ram.

Either the rigid car gives way to such a force, as to a blow at a wheel, or the wheels answer it as they answer the air
(a pull at a towing eye, with the acceleration it causes given). On a car that is held, its supports answer.
"""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

import numpy as np

from ..arrays import Floats
from ..case.model import CARRIERS, PointForce
from ..errors import CaseError
from .bodies import Masses
from .manoeuvres import Inputs
from .model import LocalLoad, Term
from .wrench import sealed, wrench

if TYPE_CHECKING:
    from .sources import Elementary

_PREFIX = "point."
_ENGINE = CARRIERS.index("engine")


def point_names(inputs: Inputs) -> tuple[str, ...]:
    """Names of the sources of point forces, each once."""
    return tuple(dict.fromkeys(f"{_PREFIX}{force.name}" for forces in inputs.point_forces for force in forces))


def add_points(result: Elementary, inputs: Inputs, names: tuple[str, ...], car: Masses, matrices: Floats) -> None:
    """Add every point force to its body, with the rigid motion of a free car; `matrices` (B, 6, 6) as of inertia."""
    if not any(inputs.point_forces):
        return
    inverse = np.linalg.inv(car.car_inertia)
    for c, force in _each(inputs):
        s, keep = names.index(f"{_PREFIX}{force.name}"), inputs.keep["extra"][c]
        acts = wrench(keep * np.asarray(force.force), force.at)
        result.loads[c, s, CARRIERS.index(force.on)] += acts
        if not force.moves or inputs.supports[c]:
            continue
        about_cg = wrench(acts[:3], force.at, car.car_cg)
        motion = np.concatenate([acts[:3] / car.total, inverse @ about_cg[3:]])
        result.moving[c, s] = True
        result.motion[c, s] += motion
        result.engine_motion[c, s] += motion
        result.engine_motion[c, s, :3] += np.cross(motion[3:], car.cg[_ENGINE] - car.car_cg)
        result.loads[c, s] -= matrices @ motion


def point_terms(inputs: Inputs) -> Iterator[Term]:
    """Point forces as lines of the free-body tables."""
    for name in point_names(inputs):
        force, at, body = _gathered(inputs, name)
        yield Term(body=body, label=name, at=sealed(at), force=sealed(force), moment=sealed(np.zeros_like(force)))


def engine_points(inputs: Inputs, names: tuple[str, ...]) -> Iterator[LocalLoad]:
    """Point forces on the engine, as loads that enter it at a place of their own."""
    for name in point_names(inputs):
        force, at, body = _gathered(inputs, name)
        if body != "engine":
            continue
        first = next(item for _, item in _each(inputs) if f"{_PREFIX}{item.name}" == name)
        load = np.zeros((len(force), len(names), 6))
        load[:, names.index(name)] = wrench(force, at, first.at)
        yield LocalLoad(
            name=name,
            attachment=first.attachment,
            at=first.at,
            force=sealed(load[..., :3].copy()),
            moment=sealed(load[..., 3:].copy()),
        )


def _gathered(inputs: Inputs, name: str) -> tuple[Floats, Floats, str]:
    """Force and place (C, 3) of one source over all load cases, and its body."""
    force, at, body = np.zeros((len(inputs.names), 3)), np.zeros((len(inputs.names), 3)), ""
    for c, item in _each(inputs):
        if f"{_PREFIX}{item.name}" != name:
            continue
        if body not in ("", item.on):
            raise CaseError(f"[manoeuvres.{inputs.names[c]}]", f"{item.name} is on {item.on} here, on {body} elsewhere")
        body = item.on
        force[c] += inputs.keep["extra"][c] * np.asarray(item.force)
        at[c] = item.at
    return force, at, body


def _each(inputs: Inputs) -> Iterator[tuple[int, PointForce]]:
    for c, forces in enumerate(inputs.point_forces):
        for force in forces:
            yield c, force
