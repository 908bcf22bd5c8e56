"""Tables of what was judged and on what: margins, causes, checks, stiffness, requirements, assumptions."""

from __future__ import annotations

from collections.abc import Iterable, Mapping

from ..case.model import Case, Check
from ..margins.model import Margin, Margins
from .tables import Row, Table, table
from .wording import ABSENT, band, figure, fixed, plain_name, point, quantity

PRELOAD = "_preload_against_"


def margin_table(margins: Iterable[Margin], title: str = "Margins") -> Table:
    """Lowest margins with place, governing and second load case, band and trust."""
    columns = (
        "criterion",
        "place",
        "load case",
        "applied",
        "allowable",
        "factor",
        "margin",
        "second-worst",
        "trust",
    )
    rows = [
        (
            item.criterion,
            f"{plain_name(item.place)} {point(item.at)}" if any(item.at) else plain_name(item.place),
            plain_name(item.load_case),
            quantity(item.applied, item.unit),
            quantity(item.allowable, item.unit),
            figure(item.factor),
            band(item.band, item.margin),
            "" if item.second is None else f"{plain_name(item.second[0])} {fixed(item.second[1], 2)}",
            item.trust,
        )
        for item in margins
    ]
    note = "margin = allowable / (factor × applied) − 1; below zero fails. A band: both ends of what is not known."
    return table(title, columns, rows, note)


def cause_table(margins: Iterable[Margin]) -> Table:
    """Which sources make each margin's applied value, largest share first."""
    rows = []
    for item in margins:
        ordered = sorted(item.causes, key=lambda cause: -abs(cause.share))[:6]
        shares = ", ".join(f"{plain_name(c.source)} {fixed(100 * c.share, 0, sign=True)} %" for c in ordered)
        rows.append((f"{item.criterion}, {plain_name(item.place)}", plain_name(item.load_case), shares, item.method))
    note = "Shares of the applied value by source; they sum to 100 %, and a negative share relieves."
    return table("What causes each margin", ("margin", "load case", "causes", "method"), rows, note)


def check_table(checks: Iterable[Check], title: str = "Checks") -> Table:
    """Every check with its value against its limit."""
    rows = [
        (item.name, "passed" if item.ok else "FAILED", figure(item.value), figure(item.limit), item.note)
        for item in checks
    ]
    return table(title, ("check", "outcome", "value", "limit", "note"), rows)


def assumption_tables(case: Case, margins: Margins | None) -> tuple[Table, ...]:
    """Bounded, defaulted and stated-basis inputs, and what was overridden on the command line."""
    found = []
    if case.bounds:
        moves = {item.key: item for item in margins.movements} if margins is not None else {}
        rows: list[Row] = []
        for bound in case.bounds:
            move = moves.get(bound.key)
            ends = ABSENT if move is None else f"{fixed(move.margin_low, 2)} and {fixed(move.margin_high, 2)}"
            rows.append((bound.key, bound.low, bound.middle, bound.high, ends, bound.reason))
        columns = ("missing number", "low", "middle", "high", "lowest margin at the ends", "why these")
        found.append(table("Bounded inputs", columns, rows, "Not in the case file: run at both ends."))
    if case.defaults:
        rows = [(item.key, item.value, item.source) for item in case.defaults]
        found.append(table("Defaults used", ("key", "value", "source"), rows))
    if case.known:
        rows = [
            (item.key, item.basis, "" if item.band is None else f"±{fixed(100 * item.band, 1)} %", item.source)
            for item in case.known.values()
        ]
        found.append(table("How well inputs are known", ("key", "basis", "band", "source"), rows))
    if case.overrides:
        found.append(table("Set on the command line", ("key and value",), [(text,) for text in case.overrides]))
    return tuple(found)


def unsourced(case: Case) -> tuple[str, ...]:
    """Keys whose default has no source."""
    return tuple(item.key for item in case.defaults if "unsourced" in item.source.lower())


# Ending of a key: unit shown and its size in SI.
KEY_UNITS = {
    "_Nm_per_rad": ("kN·m/rad", 1e3),
    "_Nm": ("kN·m", 1e3),
    "_N_per_m": ("kN/mm", 1e6),
    "_N": ("kN", 1e3),
    "_m3": ("cm³", 1e-6),
    "_m4": ("cm⁴", 1e-8),
    "_m2": ("cm²", 1e-4),
    "_Pa": ("MPa", 1e6),
    "_m": ("mm", 1e-3),
    "_rad": ("mrad", 1e-3),
}


def amount(key: str, value: float | None) -> Row:
    """Return name, figure and unit of a value whose key ends in its SI unit."""
    for ending, (unit, scale) in KEY_UNITS.items():
        if key.endswith(ending):
            return plain_name(key.removesuffix(ending)), figure(value, scale=scale), unit
    return plain_name(key), figure(value), ""


def stiffness_table(margins: Margins) -> Table:
    """Stiffness between the faces."""
    rows = [amount(key, value) for key, value in margins.stiffness.items()]
    return table("Stiffness of the block between its faces", ("mode", "value", "unit"), rows)


def rear_face_table(margins: Margins) -> Table:
    """How far the rear face moves against the tub in each load case."""
    rows = [
        (plain_name(name), *(fixed(value, 3, scale=1e-3, sign=True) for value in motion))
        for name, motion in margins.rear_face.items()
    ]
    columns = ("load case", "x, mm", "y, mm", "z, mm", "about x, mrad", "about y, mrad", "about z, mrad")
    note = "The gearbox's flange at the centroid of its studs, pads and block together, at the middle pad stiffness."
    return table("Deflection of the rear face against the tub", columns, rows, note)


def requirement_tables(margins: Margins) -> tuple[Table, ...]:
    """The requirements sheet: what each face asks of a block that is not there yet."""
    return tuple(_requirement(place, values) for place, values in margins.requirements.items())


def _requirement(place: str, values: Mapping[str, float]) -> Table:
    title = f"Required of the block: {plain_name(place)}"
    studs = list(dict.fromkeys(key.partition(PRELOAD)[0] for key in values if PRELOAD in key))
    if not studs:
        return table(title, ("quantity", "at least", "unit"), [amount(key, value) for key, value in values.items()])
    against = ("slip_rigid_face", "slip_worst_split", "separation_rigid_face", "separation_worst_split")
    rows = [(name, *(fixed(values[f"{name}{PRELOAD}{kind}_N"], 1, scale=1e3) for kind in against)) for name in studs]
    note = "Preload needed, kN: on a rigid face, and where one row of studs carries the axial or the shear alone."
    return table(title, ("stud", *(plain_name(kind) for kind in against)), rows, note)


def requirement_summary(margins: Margins) -> Table | None:
    """The requirements sheet in a few lines: section moduli and the largest preload of each face, and the twist."""
    faces = {place: values for place, values in margins.requirements.items() if place.endswith(" face")}
    if not faces:
        return None
    rows = [
        (plain_name(key.removesuffix("_m3")), *(fixed(values[key], 1, scale=1e-6) for values in faces.values()), "cm³")
        for key in next(iter(faces.values()))
        if key.endswith("_m3")
    ]
    for kind in ("slip_rigid_face", "separation_rigid_face"):
        most = [
            max(
                value
                for key, value in margins.requirements[f"{place.removesuffix(' face')} studs"].items()
                if kind in key
            )
            for place in faces
        ]
        rows.append(
            (f"largest preload against {plain_name(kind)}", *(fixed(value, 1, scale=1e3) for value in most), "kN")
        )
    for key, value in margins.requirements.get("between the faces", {}).items():
        name, number, unit = amount(key, value)
        rows.append((name, number, *[""] * (len(faces) - 1), unit))
    return table("Required of the block (at least)", ("quantity", *faces, "unit"), rows)
