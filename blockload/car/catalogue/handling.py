"""Handling the car: jacks, crane, trolley, towing. It does not stand on four wheels, and signs turn round.

Under a hook the car swings until its CG hangs below it: gravity then points from the hook to the CG in the car's own
axes. Jacks, slings and trolley heads press along z; a guide takes sideways forces, of which there are none.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import replace

import numpy as np

from ...arrays import Floats, frozen
from ...case.model import CORNERS, Case, Manoeuvre, Point, PointForce, Support
from ..bodies import masses
from .factors import factor
from .figures import Omission, left_out

Built = Iterator[Manoeuvre | Omission]
LIFTED = {
    "front": ("FL", "FR"),
    "rear": ("RL", "RR"),
    "left": ("FL", "RL"),
    "right": ("FR", "RR"),
    **{corner: (corner,) for corner in CORNERS},
}
_STILL = frozen(np.zeros(3))
_GUIDE = ("x", "y", "yaw")
_ALL = ("x", "y", "z", "roll", "pitch", "yaw")


def jack(case: Case) -> Built:
    """The car on each of its jacking points and the wheels that stay on the ground."""
    jacks = _of_kind(case, "jacks")
    if not jacks:
        yield left_out("jack", "jack", "[points.jacks.NAME] with at, on and lifts", "any jacking point")
    for point in jacks:
        standing = [corner for corner in CORNERS if corner not in LIFTED[point.lifts or "rear"]]
        held = (_pressing(point), *(Support(name=c, on=c, at=_STILL, carries=("z",)) for c in standing))
        name = f"jack_{_short(point)}"
        yield _at_rest(name, "jack", (*held, _guide(case)), f"statics; {', '.join(standing)} stay on the ground")


def crane(case: Case) -> Built:
    """The car on a hook at the roll hoop, and on its slings."""
    hoop, slings = case.points.get("hoop"), _of_kind(case, "hoist")
    if hoop is None:
        yield left_out("crane", "crane_hoop", "[points.hoop] with at and on", "the top of the roll hoop")
    else:
        yield _hanging(case, "crane_hoop", hoop)
    if len(slings) == 1:
        yield _hanging(case, "crane_hoist", slings[0])
    elif len(slings) == 2:
        why = "two slings leave the car free to swing about the line between them"
        remedy = "give one lifting point, or three and more"
        yield Omission(group="crane", situation="crane_hoist", why=why, remedy=remedy)
    elif slings:
        held = (*(_pressing(point) for point in slings), _guide(case))
        yield _at_rest("crane_hoist", "crane", held, f"statics; {_equal(slings)}")


def trolley(case: Case) -> Built:
    """The car on an assembly trolley, its wheels hanging."""
    heads = _of_kind(case, "trolley")
    if len(heads) < 3:
        what = "three supports of the trolley" if not heads else "a third support of the trolley"
        yield left_out("trolley", "trolley", "[points.trolley.NAME], three or more", what)
        return
    held = (*(_pressing(point) for point in heads), _guide(case))
    yield _at_rest("trolley", "trolley", held, f"statics; {_equal(heads)}; wheels hang")


def towing(case: Case) -> Built:
    """Pull and push at each towing eye; the rolling car gives way along x and its wheels answer the rest."""
    eyes = _of_kind(case, "towing")
    if not eyes:
        yield left_out("towing", "towing", "[points.towing.NAME] with at and on", "any towing eye")
    given = case.catalogue.forces.get("towing") if case.catalogue is not None else None
    used = None if given is not None else factor(case, "towing")
    car = masses(case)
    for point in eyes:
        outward = 1.0 if point.at[0] > car.car_cg[0] else -1.0
        if given is not None:
            pull, basis = np.asarray(given.force, dtype=float) * (outward, 1.0, 1.0), given.basis
        else:
            value = 0.0 if used is None else used.value
            pull = np.array((outward * value * car.total * case.gravity, 0.0, 0.0))
            basis = f"{value:g} x weight: {used.source if used is not None else ''}; the mass of this case"
        for word, sign in (("pull", 1.0), ("push", -1.0)):
            force = sign * pull
            yield Manoeuvre(
                name=f"tow_{_short(point)}_{word}",
                acceleration=frozen((force[0] / car.total, force[1] / car.total, 0.0)),
                drive="accelerate",
                point_forces=(_force(point, force),),
                fatigue_exempt=True,
                group="towing",
                factor=used,
                basis=basis,
            )


def _hanging(case: Case, name: str, hook: Point) -> Manoeuvre:
    line = masses(case).car_cg - hook.at
    down = line / np.linalg.norm(line)
    held = Support(name=hook.name, on=hook.on, at=hook.at, carries=_ALL, attachment=hook.attachment)
    tilt = np.degrees(np.arccos(np.clip(-down[2], -1.0, 1.0)))
    basis = f"statics; the car hangs with its CG below the hook, {tilt:.3g}° from level, wheels free"
    return replace(_at_rest(name, "crane", (held,), basis), down=frozen(down))


def _at_rest(name: str, group: str, supports: tuple[Support, ...], basis: str) -> Manoeuvre:
    return Manoeuvre(
        name=name,
        acceleration=_STILL,
        drive="coast",
        supports=supports,
        fatigue_exempt=True,
        group=group,
        basis=basis,
    )


def _pressing(point: Point) -> Support:
    return Support(name=point.name, on=point.on, at=point.at, carries=("z",), attachment=point.attachment)


def _guide(case: Case) -> Support:
    """What keeps a car on vertical supports from rolling away; carries nothing where nothing acts sideways."""
    ground = masses(case).car_cg * (1.0, 1.0, 0.0)
    return Support(name="guide", on="tub", at=frozen(ground), carries=_GUIDE)


def _force(point: Point, force: Floats) -> PointForce:
    return PointForce(
        name=point.name, on=point.on, at=point.at, force=frozen(force), moves=False, attachment=point.attachment
    )


def _of_kind(case: Case, kind: str) -> list[Point]:
    return [point for name, point in case.points.items() if name.startswith(f"{kind}.")]


def _short(point: Point) -> str:
    return point.name.split(".", 1)[1]


def _equal(points: list[Point]) -> str:
    return "three supports" if len(points) == 3 else f"a rigid car on {len(points)} equally stiff supports"
