"""Links, the power train, lifted wheels and what spins, in tables."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from ..car.model import LoadCases
from ..car.spin import neglected
from ..car.suspension import condition_notes
from ..car.torque import engine_notes, power_train
from ..case.model import CORNERS, Case
from .tables import Table, table
from .wording import ABSENT, figure, fixed, plain_name

_RPM = np.pi / 30.0


def suspension_tables(case: Case, cases: LoadCases) -> tuple[Table, ...]:
    """Tables of links, power train and lifted wheels, each only where there is something to say."""
    return tuple(item for item in (link_extremes(cases), power_table(case, cases), lifted_table(cases)) if item.rows)


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
