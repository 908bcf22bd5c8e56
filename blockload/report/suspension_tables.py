"""Links, the power train, lifted wheels and what spins, in tables."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from ..car.bodies import AXLES
from ..car.brakes import brake_swap
from ..car.model import LoadCases
from ..car.spin import neglected
from ..car.suspension import condition_notes
from ..car.torque import engine_notes, power_train
from ..car.transfer import share_range, transfer
from ..case.model import CORNERS, Case
from .tables import Table, table
from .wording import ABSENT, figure, fixed, plain_name

_RPM = np.pi / 30.0


def suspension_tables(case: Case, cases: LoadCases) -> tuple[Table, ...]:
    """Tables of links, power train and lifted wheels, each only where there is something to say."""
    found = (link_extremes(cases), power_table(case, cases), lifted_table(cases), grip_table(cases))
    return tuple(item for item in found if item.rows)


def car_tables(case: Case, cases: LoadCases) -> tuple[Table, ...]:
    """What a reviewer of the loads asks next: roll couple by part, brakes swapped, what spins."""
    found = (roll_table(case), brake_table(case), spin_table(case, cases))
    return tuple(item for item in found if item.rows)


def link_extremes(cases: LoadCases) -> Table:
    """Greatest pull and press of every link, spring, drop link and heave element with the load case of each."""
    rows = []
    for corner, loads in cases.links.items():
        tension = loads.tension.sum(axis=1)
        for k, name in enumerate(loads.names):
            high, low = int(tension[:, k].argmax()), int(tension[:, k].argmin())
            pulled = f"{fixed(tension[high, k], 2, scale=1e3, sign=True)} {plain_name(cases.names[high])}"
            pressed = f"{fixed(tension[low, k], 2, scale=1e3, sign=True)} {plain_name(cases.names[low])}"
            cells = (pulled if tension[high, k] > 0 else "never", pressed if tension[low, k] < 0 else "never")
            rows.append((f"{corner} {plain_name(name)}", *cells))
    numbers = ", ".join(f"{corner} {figure(loads.condition, digits=2)}" for corner, loads in cases.links.items())
    notes = " ".join(condition_notes(cases.links))
    note = f"Tension, + pulled. Condition number of each corner about its wheel centre: {numbers}. {notes}".strip()
    return table("Link forces", ("link", "most pulled, kN", "most pressed, kN"), rows, note)


def power_table(case: Case, cases: LoadCases) -> Table:
    """Crank speed and torque of every load case with an overall ratio, beside what the engine gives."""
    train = power_train(case, cases)
    rows = [
        (
            plain_name(cases.names[c]),
            _number(train.speed[c] / _RPM, 0),
            _number(train.torque[c], 0),
            _number(train.available[c], 0),
            _number(train.power[c] / 1e3, 0),
            _number(train.piston_speed[c], 1),
            _number(train.pressure[c] / 1e5, 1),
        )
        for c in np.flatnonzero(np.isfinite(train.torque) & (train.torque != 0))
    ]
    columns = ("load case", "crank, rpm", "torque, N·m", "engine gives, N·m", "power, kW", "piston, m/s", "BMEP, bar")
    notes = " ".join(f"{note[0].upper()}{note[1:]}." for note in map(plain_name, engine_notes(case, cases)))
    note = f"Torque at the clutch without losses; crank speed without slip. {notes}".strip()
    return table("Power train", columns, rows, note)


def lifted_table(cases: LoadCases) -> Table:
    """Load cases on three wheels, and those that no set of wheels carries."""
    return table(
        "Wheels off the ground",
        ("load case", "wheel", "state"),
        _lifted(cases),
        "On three wheels the loads follow from statics alone; a wheel in the air drives, brakes and steers nothing.",
    )


def grip_table(cases: LoadCases) -> Table:
    """Load cases that ask more of a tyre than its friction holds."""
    rows = [
        (plain_name(cases.names[c]), CORNERS[k], fixed(cases.tyre_use[c, k], 2))
        for c, k in np.argwhere(cases.tyre_use > 1.0)
    ]
    note = (
        "Share of the friction ellipse used, friction falling with load where stated. Above 1 the tyre slides: the "
        "car cannot do this, unless kerb or impact forces are meant."
    )
    return table("Beyond grip", ("load case", "wheel", "grip used"), rows, note)


def roll_table(case: Case) -> Table:
    """Parts of the lateral load transfer per axle, and what another roll stiffness split would make of it."""
    split = transfer(case)
    parts = (("geometric", split.geometric), ("unsprung", split.unsprung), ("elastic", split.elastic))
    rows = [
        (name, *(fixed(abs(value), 2, scale=1e3) for value in part), fixed(100 * part[0] / part.sum(), 1))
        for name, part in (*parts, ("whole", split.total))
        if part.any()
    ]
    low, high = (fixed(100 * end, 1) for end in share_range(case))
    note = (
        "kN·m in a level turn of 1 g without aero. The front share of the whole is not that of the roll stiffness: "
        f"with 40 and 60 % of the stiffness in front it runs from {low} to {high} %."
    )
    return table("Roll couple by axle", ("part", "front", "rear", "front share, %"), rows, note)


def brake_table(case: Case) -> Table:
    """What moving the brakes inboard or outboard would do: nothing to the faces, much to the links."""
    rows = []
    for name in AXLES if any(axle.links for axle in case.axles.values()) else ():
        swap = brake_swap(case, name)
        if swap is not None:
            change = f"{fixed(swap.link_change, 2, scale=1e3)} kN ({swap.link})"
            rows.append((name, case.axles[name].brakes, swap.to, figure(swap.face_change, digits=1), change))
    note = (
        "Over the braking load cases of this file. The faces stay as they are where all links of the axle end on one "
        "body with the inboard brake; a link on another body carries part of the change across a face."
    )
    columns = ("axle", "brakes", "instead", "faces change by, N or N·m", "links change by up to")
    return table("Where the brake torque is taken", columns, rows, note)


def spin_table(case: Case, cases: LoadCases) -> Table:
    """What spins or turns and is left out of the balance, at its largest."""
    rows = []
    for item in neglected(case, cases):
        if not np.isfinite(item.size).any():
            rows.append((item.name, "not known", ABSENT, item.beside, ABSENT))
            continue
        c = int(np.nanargmax(item.size))
        unit = item.unit.replace("*", "·").replace("^2", "²")
        share = ABSENT if np.isnan(item.share[c]) else f"{fixed(100 * item.share[c], 1)} %"
        rows.append(
            (item.name, f"{figure(item.size[c], digits=2)} {unit}", share, item.beside, plain_name(cases.names[c]))
        )
    columns = ("effect", "largest", "share", "of", "load case")
    return table("Left out of the balance", columns, rows, "Spinning parts and the turning of the car, sized.")


def _lifted(cases: LoadCases) -> Iterator[tuple[str, ...]]:
    for name, lifted, none in zip(cases.names, cases.lifted, cases.wheel_lift, strict=False):
        if none:
            yield plain_name(name), ABSENT, "no state of the car: the ground would have to pull even on three wheels"
        elif lifted.any():
            yield plain_name(name), CORNERS[int(lifted.argmax())], "in the air; the other three carry the car"


def _number(value: float, digits: int) -> str:
    return fixed(value, digits) if np.isfinite(value) else ABSENT
