"""Small case files for the tests: a whole one, and ways to change it by one line."""

from __future__ import annotations

from pathlib import Path

from blockload.case.model import Case
from blockload.case.reading import read

WHOLE = """\
format = "blockload.case/1"
title = "A small car"
air_density = "1.20 kg/m^3"
[bodies.tub]
mass = "670 kg"
cg = "(-1.22, 0, 0.40) m"
inertia = "(80, 420, 450) kg*m^2"
[bodies.engine]
mass = "190 kg"
cg = "(-1.80, 0, 0.27) m"
inertia = "(9, 11, 12) kg*m^2"
[bodies.gearbox]
mass = "130 kg"
cg = "(-2.62, 0, 0.32) m"
inertia = "(8, 22, 24) kg*m^2"
[axles.front]
x = "0 m"
track = "1.66 m"
loaded_radius = "0.33 m"
roll_centre_height = "30 mm"
roll_stiffness = "260 kNm/rad"
[axles.front.corner]
mass = "38 kg"
cg = "(0, 0.79, 0.33) m"
inertia = "(0.8, 1.2, 0.8) kg*m^2"
[axles.rear]
x = "-2.75 m"
track = "1.62 m"
loaded_radius = "0.34 m"
roll_centre_height = "60 mm"
roll_stiffness = "220 kNm/rad"
[axles.rear.corner]
mass = "42 kg"
cg = "(-2.75, 0.77, 0.34) m"
inertia = "(0.9, 1.3, 0.9) kg*m^2"
[aero.floor]
on = "tub"
at = "(-1.40, 0, 0.08) m"
downforce_area = "2.30 m^2"
drag_area = "0.20 m^2"
[aero.rear_wing]
on = "gearbox"
at = "(-3.05, 0, 0.95) m"
downforce_area = "1.40 m^2"
drag_area = "0.45 m^2"
[drive]
crank_inertia = "0.045 kg*m^2"
[faces.front]
x = "-1.50 m"
stud = { size = "M12", property_class = "12.9", preload = "60 kN" }
[faces.front.studs]
TL = "(0.24, 0.47) m"
TR = "(-0.24, 0.47) m"
BL = "(0.17, 0.08) m"
BR = "(-0.17, 0.08) m"
[faces.rear]
x = "-2.12 m"
stud = { size = "M12", property_class = "12.9", preload = "60 kN" }
[faces.rear.studs]
TL = "(0.25, 0.40) m"
TR = "(-0.25, 0.40) m"
BL = "(0.13, 0.06) m"
BR = "(-0.13, 0.06) m"
[manoeuvres.v_max]
speed = "75 m/s"
[manoeuvres.kerb]
speed = "40 m/s"
drive = "coast"
basis = "estimate"
[manoeuvres.kerb.extra_wheel_force]
RL = "(-2, 0, 10) kN"
[installation]
pad_stiffness = { normal = "800 kN/mm", tangential = "400 kN/mm" }
"""


def changed(old: str, new: str, text: str = WHOLE) -> str:
    """Return a case text with one passage replaced; the passage must be there."""
    if old not in text:
        raise AssertionError(f"{old!r} is not in the text")
    return text.replace(old, new, 1)


def without(start: str, text: str = WHOLE) -> str:
    """Return a case text without the line that starts so."""
    lines = text.splitlines()
    (line,) = [item for item in lines if item.startswith(start)]
    return text.replace(line + "\n", "", 1)


def without_table(name: str, text: str = WHOLE) -> str:
    """Return a case text without one table."""
    before, _, after = text.partition(f"[{name}]\n")
    _, bracket, rest = after.partition("\n[")
    return before + (bracket.strip() + rest if rest else "")


def read_text(folder: Path, text: str, overrides: tuple[str, ...] = (), name: str = "car.toml") -> Case:
    """Write a text to a file and read it as a case."""
    path = folder / name
    path.write_text(text, encoding="utf-8")
    return read(path, overrides)
