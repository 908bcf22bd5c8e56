"""Tables as plain data: made once from the run's values, drawn by the console and by the page alike."""

from __future__ import annotations

import re
from collections.abc import Iterable
from dataclasses import dataclass

import numpy as np

from ..car.model import BODIES, SECTION, LoadCases
from ..case.model import CORNERS, Case, Device
from .wording import (
    ABSENT,
    MINUS,
    figure,
    fixed,
    plain_name,
    point,
    section_words,
)

Row = tuple[str, ...]
_NUMERIC = re.compile(rf"\[?[+{MINUS}>]?\d[\d.,e+{MINUS}-]*( to [+{MINUS}>]?\d[\d.]*)?\]?|{ABSENT}|")


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """A titled table of texts; `note` stands beneath it. The first column names the row."""

    title: str
    columns: Row
    rows: tuple[Row, ...]
    note: str = ""

    def numeric(self, column: int) -> bool:
        """Whether every cell of a column is a number (drawn flush right)."""
        return bool(self.rows) and all(is_number(row[column]) for row in self.rows)


def is_number(cell: str) -> bool:
    """Whether a cell holds a number, a band of two, a dash, or nothing."""
    return _NUMERIC.fullmatch(cell) is not None


def table(title: str, columns: Iterable[str], rows: Iterable[Iterable[str]], note: str = "") -> Table:
    """Return a Table from any iterables."""
    return Table(title=title, columns=tuple(columns), rows=tuple(tuple(row) for row in rows), note=note)


def load_case_summary(cases: LoadCases) -> Table:
    """Speed, aero, accelerations and the balance of every load case."""
    acceleration = cases.acceleration.sum(axis=1)
    turning = cases.angular_acceleration.sum(axis=1)
    rows = [
        (
            plain_name(name),
            fixed(cases.speed[i], 1),
            fixed(cases.downforce[i], 2, scale=1e3),
            fixed(cases.drag[i], 2, scale=1e3),
            *(fixed(a, 1) for a in acceleration[i]),
            *(fixed(a, 1) for a in turning[i]),
            figure(cases.residual[i], digits=1),
        )
        for i, name in enumerate(cases.names)
    ]
    columns = ("load case", "speed", "downforce", "drag", "a_x", "a_y", "a_z", "α_x", "α_y", "α_z", "residual")
    note = (
        "m/s, kN, m/s² at the car's CG, rad/s²; residual: the largest of any body, as a share of the forces (moments) "
        "acting on it, summed again from the written terms."
    )
    return table("Load cases", columns, rows, note)


def wheel_loads(cases: LoadCases) -> Table:
    """Vertical wheel loads and the friction the hardest-worked tyre uses."""
    wheels = cases.wheels
    used = cases.friction_used
    rows = []
    for i, name in enumerate(cases.names):
        worst = int(np.nanargmax(used[i])) if np.isfinite(used[i]).any() else None
        most = ABSENT if worst is None else f"{fixed(used[i, worst], 2)} ({CORNERS[worst]})"
        rows.append((plain_name(name), *(fixed(f, 2, scale=1e3) for f in wheels[i, :, 2]), most))
    note = "kN, road on tyre. Most friction used: √(F_x² + F_y²)/F_z of the hardest-worked tyre."
    return table("Vertical wheel loads", ("load case", *CORNERS, "most friction used"), rows, note)


def wheel_forces(cases: LoadCases) -> Table:
    """All three components at every wheel."""
    wheels, used = cases.wheels, cases.friction_used
    rows = [
        (plain_name(name), CORNERS[k], *(fixed(f, 2, scale=1e3) for f in wheels[i, k]), fixed(used[i, k], 2))
        for i, name in enumerate(cases.names)
        for k in range(4)
    ]
    note = (
        "kN, road on tyre, at the contact point; x forward, y left, z up. No value where the wheel is not pressed down."
    )
    return table("Wheel forces", ("load case", "wheel", "F_x", "F_y", "F_z", "friction used"), rows, note)


def section_wrenches(cases: LoadCases, indices: Iterable[int] | None = None) -> Table:
    """Six components at both faces, with their reference points."""
    chosen = list(range(len(cases.names)) if indices is None else indices)
    rows = [
        (plain_name(cases.names[i]), face, *(fixed(w, 3, scale=1e3, sign=True) for w in cases.section(face)[i]))
        for i in chosen
        for face in cases.faces
    ]
    places = "; ".join(f"{name} {point(face.reference)} m" for name, face in cases.faces.items())
    note = (
        "kN and kN·m about the centroid of each face's studs: "
        f"{places}. N + pulled; V front part on rear part; T about +x of front part on rear part; "
        "M_sag + top pressed, bottom pulled; M_lat + left pulled."
    )
    return table("Section wrenches", ("load case", "face", *SECTION), rows, note)


def section_in_words(cases: LoadCases, index: int) -> Table:
    """One load case's section wrenches, each sign in words."""
    columns = ("component", *(f"{face} face" for face in cases.faces))
    sections = [cases.section(face)[index] for face in cases.faces]
    rows = [
        (component, *(section_words(component, float(s[k])) for s in sections)) for k, component in enumerate(SECTION)
    ]
    places = "; ".join(f"{name} {point(face.reference)} m" for name, face in cases.faces.items())
    return table(f"What crosses the faces: {plain_name(cases.names[index])}", columns, rows, f"About {places}.")


def face_routes(case: Case, cases: LoadCases) -> Table:
    """The disagreement of the face wrenches summed from ahead of the cut and from behind it."""
    rows = [
        (plain_name(name), figure(cases.front_rear_gap[i], digits=2), figure(cases.omega_squared[i], digits=2))
        for i, name in enumerate(cases.names)
    ]
    note = (
        "Difference of the face wrench summed over everything ahead of the cut and over everything behind it, as a "
        "share of the forces; ω² is the size of the centripetal part that a linear d'Alembert set leaves out (rad²/s²)."
    )
    return table("Same wrench by two routes", ("load case", "difference", "ω²"), rows, note)


def stud_extremes(cases: LoadCases) -> Table:
    """Greatest pull, press and shear of every stud with the load case of each (rigid face, equal studs)."""
    rows: list[Row] = []
    for face in cases.faces.values():
        axial = face.stud_axial.sum(axis=1)
        shear = np.linalg.norm(face.stud_shear.sum(axis=1), axis=-1)
        for k, stud in enumerate(face.studs):
            worst = (int(axial[:, k].argmax()), int(axial[:, k].argmin()), int(shear[:, k].argmax()))
            values = (axial[worst[0], k], axial[worst[1], k], shear[worst[2], k])
            happens = (values[0] > 0, values[1] < 0, True)
            cells = [
                f"{fixed(v, 2, scale=1e3, sign=j < 2)} {plain_name(cases.names[i])}" if happens[j] else "never"
                for j, (v, i) in enumerate(zip(values, worst, strict=True))
            ]
            rows.append((f"{face.name} {stud}", point(face.stud_at[k, -2:]), *cells))
    columns = ("stud", "(y, z) m", "most pulled, kN", "most pressed, kN", "most shear, kN")
    return table("Stud forces", columns, rows, "Rigid face on equal studs, before preload; axial + pulled.")


def stud_forces(cases: LoadCases, index: int) -> Table:
    """Axial and shear force of every stud in one load case."""
    rows = []
    for face in cases.faces.values():
        axial = face.stud_axial[index].sum(axis=0)
        shear = face.stud_shear[index].sum(axis=0)
        rows += [
            (
                f"{face.name} {stud}",
                fixed(axial[k], 2, scale=1e3, sign=True),
                *(fixed(s, 2, scale=1e3, sign=True) for s in shear[k]),
                fixed(float(np.hypot(*shear[k])), 2, scale=1e3),
            )
            for k, stud in enumerate(face.studs)
        ]
    note = "kN on the engine; axial + pulled; S_y + left, S_z + up. Rigid face on equal studs, before preload."
    return table(f"Studs: {plain_name(cases.names[index])}", ("stud", "axial", "S_y", "S_z", "shear"), rows, note)


def free_bodies(cases: LoadCases, index: int) -> tuple[Table, ...]:
    """Every force on every body of one load case; each table ends with its sum about the car's origin."""
    tables = []
    for body in BODIES:
        terms = [term for term in cases.terms if term.body == body]
        if not terms:
            continue
        rows, total = [], np.zeros(6)
        for term in terms:
            at = np.broadcast_to(term.at, term.force.shape)[index]
            force, moment = term.force[index], term.moment[index]
            if not (force.any() or moment.any()):
                continue
            total += np.concatenate([force, moment + np.cross(at, force)])
            rows.append(
                (plain_name(term.label), point(at), *(fixed(x, 3, scale=1e3, sign=True) for x in (*force, *moment)))
            )
        rows.append(("sum about the origin", "(0, 0, 0)", *(fixed(x, 3, scale=1e3, sign=True) for x in total)))
        columns = ("on this body", "at, m", "F_x", "F_y", "F_z", "M_x", "M_y", "M_z")
        tables.append(table(f"Free body: {body}", columns, rows, "kN and kN·m; inertia enters as d'Alembert's force."))
    return tuple(tables)


def device_table(case: Case) -> Table:
    """Every aero device with the body that carries it."""
    rows = [(plain_name(item.name), item.on, point(item.at), *_areas(item)) for item in case.devices]
    note = "Areas are C_z·A (+ down) and C_x·A (+ drag)."
    if not case.devices:
        rows = [(plain_name(item.name), item.on, point(item.at), "open", "open") for item in case.aero_split]
        note = "Possible carriers of the stated totals; their areas are open."
    columns = ("device", "carried by", "at, m", "downforce area, m²", "drag area, m²")
    return table("Aero devices", columns, rows, note)


def _areas(device: Device) -> tuple[str, str]:
    """Downforce and drag area of a device, as a span where a map gives them."""
    if device.table is None:
        return fixed(device.downforce_area, 3), fixed(device.drag_area, 3)
    spans = []
    for axis in (2, 0):
        values = -device.table.values[..., axis]
        spans.append(f"{fixed(values.min(), 3)} to {fixed(values.max(), 3)}")
    return spans[0], spans[1]
