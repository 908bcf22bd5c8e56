"""A car held by something other than its wheels: a jack, a hook, a trolley, a test rig.

Each support answers some components at its point. The wrench of all that acts on the car, about the origin, is W; with
the unit wrenches of the k components as the columns of A (6, k) the reactions r obey A r = -W. With six independent
components that is statics alone; with more, the shares are those of a rigid car on equally stiff supports, the
reactions of least square sum. A reaction is linear in W, so every source has its own.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from ..arrays import Floats, Ints
from ..case.model import CORNERS, Support
from ..errors import CaseError, nearest
from .bodies import Chassis, corner_body
from .manoeuvres import Inputs
from .model import BODIES, LocalLoad, Term
from .sources import ENGINE, Elementary
from .wheels import TyreForces
from .wrench import moved, sealed

COMPONENTS = ("x", "y", "z", "roll", "pitch", "yaw")
_ROUNDING = 1e-9
_INDEPENDENT = 1e-9


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Held:
    """Reactions of supports.

    cases (H,): which load cases are held; supports by name with reaction (C, S, 6) about its own point, zero where a
    case does not have it; pulled (C,): some one-sided support would have to pull.
    """

    cases: Ints
    supports: tuple[Support, ...]
    reaction: tuple[Floats, ...]
    pulled: NDArray[np.bool_]

    def on_body(self, body: str) -> Iterator[tuple[Support, Floats]]:
        """Supports of one body with their reactions (C, S, 6)."""
        for support, reaction in zip(self.supports, self.reaction, strict=True):
            if support.on == body:
                yield support, reaction


def hold(inputs: Inputs, loads: Elementary, frame: Chassis) -> Held | None:
    """Solve the reactions of all held load cases; None where every car stands on its wheels.

    Raises CaseError for supports that leave the car free to move, or that are no places of the car.
    """
    held = [c for c, supports in enumerate(inputs.supports) if supports]
    if not held:
        return None
    named: dict[tuple[object, ...], tuple[Support, Floats]] = {}
    pulled = np.zeros(len(inputs.names), dtype=bool)
    for c in held:
        where = f"[manoeuvres.{inputs.names[c]}] supports"
        placed = [_placed(support, frame, where) for support in inputs.supports[c]]
        rows, columns = _columns(placed, where)
        answer = -loads.loads[c].sum(axis=1) @ np.linalg.pinv(columns).T
        for k, (s, component) in enumerate(rows):
            place = _place(placed[s])
            if place not in named:
                named[place] = placed[s], np.zeros((*loads.loads.shape[:2], 6))
            named[place][1][c, :, component] += answer[:, k]
        pulled[c] = _pulled(placed, rows, answer.sum(axis=0))
    return Held(
        cases=np.array(held),
        supports=tuple(support for support, _ in named.values()),
        reaction=tuple(sealed(reaction) for _, reaction in named.values()),
        pulled=pulled,
    )


def held_tyres(tyres: TyreForces, held: Held | None) -> TyreForces:
    """The tyres' answer with that of the held cases in its place: only wheels named as supports carry."""
    if held is None:
        return tyres
    force, along, pulled, lifted = tyres.force.copy(), tyres.along.copy(), tyres.pulled.copy(), tyres.lifted.copy()
    force[held.cases], along[held.cases], lifted[held.cases] = 0.0, 0.0, False
    pulled[held.cases] = held.pulled[held.cases, None]
    for i, corner in enumerate(CORNERS):
        for _, reaction in held.on_body(corner):
            force[:, :, i] += reaction[..., :3]
    return replace(tyres, force=force, along=along, pulled=pulled, lifted=lifted)


def held_loads(loads: Elementary, held: Held | None) -> Elementary:
    """The bodies' own loads with the supports' reactions on tub, engine and gearbox among them."""
    if held is None:
        return loads
    total = loads.loads.copy()
    for b, body in enumerate(BODIES[:3]):
        for support, reaction in held.on_body(body):
            total[:, :, b] += moved(reaction, (0.0, 0.0, 0.0), support.at)
    return replace(loads, loads=total)


def support_terms(held: Held | None) -> Iterator[Term]:
    """Reactions as lines of the free-body tables; those of wheels are tyre forces already."""
    for body in BODIES[:3] if held is not None else ():
        for support, reaction in held.on_body(body) if held is not None else ():
            total = reaction.sum(axis=1)
            yield Term(
                body=body,
                label=f"support {support.name}",
                at=support.at,
                force=sealed(total[:, :3].copy()),
                moment=sealed(total[:, 3:].copy()),
            )


def engine_supports(held: Held | None) -> Iterator[LocalLoad]:
    """Reactions that enter the engine at a place of their own."""
    for support, reaction in held.on_body(BODIES[ENGINE]) if held is not None else ():
        yield LocalLoad(
            name=f"support {support.name}",
            attachment=support.attachment,
            at=support.at,
            force=sealed(reaction[..., :3].copy()),
            moment=sealed(reaction[..., 3:].copy()),
        )


def _place(support: Support) -> tuple[object, ...]:
    """What two supports of different load cases share when they are one and the same."""
    return support.name, support.on, tuple(np.asarray(support.at).tolist()), support.attachment


def _placed(support: Support, frame: Chassis, where: str) -> Support:
    if support.on not in BODIES:
        raise CaseError(where, f"{support.name} is on {support.on!r}", ", ".join(BODIES), nearest(support.on, BODIES))
    for word in support.carries:
        if word not in COMPONENTS:
            raise CaseError(where, f"{support.name} carries {word!r}", ", ".join(COMPONENTS), nearest(word, COMPONENTS))
    if support.on not in CORNERS:
        return support
    if set(support.carries) - {"x", "y", "z"}:
        raise CaseError(where, f"{support.name} holds a wheel against turning", "x, y and z at a wheel")
    return replace(support, at=frame.contact[corner_body(support.on) - 3])


def _columns(supports: list[Support], where: str) -> tuple[list[tuple[int, int]], Floats]:
    """Which support and component each reaction is, and their unit wrenches about the origin (6, k)."""
    rows = [(s, COMPONENTS.index(word)) for s, support in enumerate(supports) for word in support.carries]
    units = np.zeros((len(rows), 6))
    for k, (_, component) in enumerate(rows):
        units[k, component] = 1.0
    at = np.array([supports[s].at for s, _ in rows])
    columns = np.stack([moved(units[k], (0.0, 0.0, 0.0), at[k]) for k in range(len(rows))], axis=1)
    if np.linalg.matrix_rank(columns, tol=_INDEPENDENT) < 6:
        left, sizes, _ = np.linalg.svd(columns, full_matrices=True)
        free = left[:, int((sizes > _INDEPENDENT).sum()) if len(sizes) else 0]
        word = COMPONENTS[int(np.argmax(np.abs(free)))]
        raise CaseError(
            where,
            f"leave the car free to move ({word})",
            "supports that answer any load: six independent components",
            "add a support, or move one off the line of the others",
        )
    return rows, columns


def _pulled(supports: list[Support], rows: list[tuple[int, int]], answer: Floats) -> bool:
    """Whether a one-sided support along z would have to pull down, from its load case's reactions (k,)."""
    one_sided = np.array([component == 2 and not supports[s].bolted for s, component in rows])
    return bool(((answer < -_ROUNDING * np.abs(answer).sum()) & one_sided).any())
