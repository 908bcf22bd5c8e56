"""Hand-over sheets: the loads that the neighbours of the engine must carry, as CSV for their own calculations.

One sheet per body, `force-on-the-tub.csv` and so on: every stud of its faces, each face as a whole, every suspension
pick-up, device and named point, weight and inertia, with six components per load case and then the least and the
greatest of each. A force on the tub is the reverse of the one on the engine: the heading of every column says whose it
is. Studs carry the loads of a rigid face on equal studs, before preload; where a block is installed there are also
those of its pads, about their centroids.
Sheets stand in the car's axes and, where the case file has a [frame] of its own, in that as well.
"""

from __future__ import annotations

import csv
import io
from collections.abc import Iterable, Iterator, Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np

from ..arrays import Floats, frozen
from ..car.lap_model import LapLoads
from ..car.model import LoadCases, Term
from ..car.terms import CRANK_LABELS, FACE_LABELS
from ..case.frame import CAR_AXES, axes_and_origin
from ..case.model import CARRIERS, Case
from .files import write_beside

if TYPE_CHECKING:
    from ..installation.model import PadLoads
    from ..response.model import Library

_HEADS = ("F_x [N]", "F_y [N]", "F_z [N]", "M_x [N*m]", "M_y [N*m]", "M_z [N*m]")
_ROUNDING = 1e-12  # of the largest load of a place
_FACES_OF = {"tub": ("front",), "engine": ("front", "rear"), "gearbox": ("rear",)}


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class HandOver:
    """One place of a body: what it is, where (3,), force and moment (C, 6) on that body about it.

    names (C,) and kinds (C,) of the load cases; laps holds the same over the samples of each lap, (N, 6) by name.
    """

    name: str
    kind: str
    at: Floats
    load: Floats
    names: tuple[str, ...]
    kinds: tuple[str, ...]
    laps: Mapping[str, Floats] = field(default_factory=dict)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Installed:
    """The load cases of an installed block with the wrenches of its pads; they may be fewer than those handed over."""

    cases: LoadCases
    library: Library
    pads: PadLoads


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Axes:
    """The axes a sheet is written in: p_car = rotation p_sheet + origin."""

    words: str
    rotation: Floats
    origin: Floats
    ending: str = ""


def write_sheets(
    folder: Path,
    case: Case,
    cases: LoadCases,
    *,
    laps: Sequence[LapLoads] = (),
    installed: Installed | None = None,
    run_id: str = "loads",
) -> tuple[Path, ...]:
    """Write the hand-over sheets of tub, engine and gearbox.

    Parameters
    ----------
    folder : Path
        Where to; no other name in it is touched.
    case, cases : Case, LoadCases
        The car and all its load cases, those that take no part in a verdict among them.
    laps : sequence of LapLoads
        Their least and greatest at studs and faces follow those of the load cases.
    installed : Installed, optional
        Pad wrenches of a block, where there is one.
    run_id : str
        Stands at the head of every sheet.

    Returns
    -------
    tuple of Path
        The sheets.

    Raises
    ------
    OutputError
        Where the folder cannot be written.

    """
    written = []
    for body in CARRIERS:
        places = tuple(handed_over(cases, body, laps=laps, installed=installed))
        for axes in axes_of(case):
            path = folder / f"force-on-the-{body}{axes.ending}.csv"
            write_beside(path, sheet(case, body, places, axes, run_id=run_id).encode())
            written.append(path)
    return tuple(written)


def handed_over(
    cases: LoadCases, body: str, *, laps: Sequence[LapLoads] = (), installed: Installed | None = None
) -> Iterator[HandOver]:
    """Yield what enters a body at studs, faces, pick-ups and points, as forces on that body."""
    for name in _FACES_OF[body]:
        sign = 1.0 if body == "engine" else -1.0
        yield from _studs(cases, name, sign, laps)
        if installed is not None:
            yield from _pads(installed, name, sign)
        yield _whole(cases, name, sign, laps)
    for term in cases.terms:
        if term.body == body and term.label not in FACE_LABELS:
            yield from _places(cases, term)


def _studs(cases: LoadCases, name: str, sign: float, laps: Sequence[LapLoads]) -> Iterator[HandOver]:
    face = cases.faces[name]
    own = _stud_load(name, face.stud_axial.sum(axis=1), face.stud_shear.sum(axis=1))
    over = {lap.name: _stud_load(name, lap.faces[name].stud_axial, lap.faces[name].stud_shear) for lap in laps}
    for k, stud in enumerate(face.studs):
        yield HandOver(
            name=f"{name} stud {stud}",
            kind="stud (rigid face)",
            at=frozen([face.reference[0], *face.stud_at[k]]),
            load=frozen(sign * own[:, k]),
            names=cases.names,
            kinds=cases.kind,
            laps={lap: sign * load[:, k] for lap, load in over.items()},
        )


def _stud_load(face: str, axial: Floats, shear: Floats) -> Floats:
    """Force and moment (C, n, 6) on the engine at each stud, from axial (C, n) and shear (C, n, 2) forces."""
    pull = 1.0 if face == "front" else -1.0  # the tub pulls the engine forward, the gearbox rearward
    return np.concatenate([pull * axial[..., None], shear, np.zeros((*axial.shape, 3))], axis=-1)


def _pads(installed: Installed, name: str, sign: float) -> Iterator[HandOver]:
    """The wrenches of the installed block at the middle pad stiffness."""
    library, pads, cases = installed.library, installed.pads, installed.cases
    weights = pads.weights[pads.middle].sum(axis=1)
    for index, (kind, stud) in enumerate(library.attachments):
        if kind == name:
            yield HandOver(
                name=f"{name} pad {stud}",
                kind="pad (installed block)",
                at=frozen(library.centroids[index]),
                load=frozen(sign * weights[:, library.rows(kind, stud)]),
                names=cases.names,
                kinds=cases.kind,
            )


def _whole(cases: LoadCases, name: str, sign: float, laps: Sequence[LapLoads]) -> HandOver:
    face = cases.faces[name]
    return HandOver(
        name=f"{name} face",
        kind="whole face",
        at=face.reference,
        load=frozen(sign * face.wrench.sum(axis=1)),
        names=cases.names,
        kinds=cases.kind,
        laps={lap.name: sign * lap.faces[name].wrench for lap in laps},
    )


def _places(cases: LoadCases, term: Term) -> Iterator[HandOver]:
    """One row of the free-body table, cut by place where its load cases do not share one."""
    load = np.concatenate([term.force, term.moment], axis=1)
    at = np.broadcast_to(term.at, term.force.shape)
    acting = load.any(axis=1)
    for place in np.unique(at[acting], axis=0):
        here = acting & (at == place).all(axis=1)
        yield HandOver(
            name=term.label,
            kind=_kind(term.label),
            at=frozen(place),
            load=frozen(np.where(here[:, None], load, 0.0)),
            names=cases.names,
            kinds=cases.kind,
        )


def _kind(label: str) -> str:
    known = {"weight": "body", "inertia": "body (d'Alembert)", **dict.fromkeys(CRANK_LABELS, "shaft")}
    if label.startswith("aero."):
        return "aero"
    return known.get(label, "shaft" if label.startswith("half-shaft") else "pick-up or point")


def axes_of(case: Case) -> tuple[Axes, ...]:
    """Return the car's axes, and the case file's own where it states others."""
    car = Axes(words=CAR_AXES, rotation=frozen(np.eye(3)), origin=frozen(np.zeros(3)))
    table = case.document.get("frame")
    if not isinstance(table, Mapping):
        return (car,)
    rotation, origin = axes_and_origin(table, case.path)
    if np.array_equal(rotation, car.rotation) and not origin.any():
        return (car,)
    words = table.get("axes", CAR_AXES)
    return (car, Axes(words=words, rotation=rotation, origin=origin, ending="-in-file-axes"))


def sheet(case: Case, body: str, places: Sequence[HandOver], axes: Axes, *, run_id: str = "loads") -> str:
    """Return one sheet as CSV text: a row per place and load case, then the envelope of each place."""
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    for remark in (f"run = {run_id}", *_remarks(case, body, axes)):
        writer.writerow((f"# {remark}",))
    writer.writerow(
        (
            "place",
            "kind",
            "x [m]",
            "y [m]",
            "z [m]",
            "load case",
            "case kind",
            *(f"force on the {body}: {h}" for h in _HEADS),
        )
    )
    for place in places:
        at = axes.rotation.T @ (place.at - axes.origin)
        head = (place.name, place.kind, *(f"{x + 0.0:.6g}" for x in at))
        writer.writerows((*head, *row) for row in _rows(place, axes))
    return text.getvalue()


def _rows(place: HandOver, axes: Axes) -> Iterator[tuple[str, ...]]:
    load = _turned(place.load, axes)
    floor = _ROUNDING * float(np.abs(load).max(initial=0.0))
    kinds = place.kinds or ("",) * len(place.names)
    for name, kind, row in zip(place.names, kinds, load, strict=True):
        yield (name, kind, *_figures(row, floor))
    over = {"of all": load, **{f"of lap {name}": _turned(samples, axes) for name, samples in place.laps.items()}}
    for words, values in over.items():
        yield (f"least {words}", "envelope", *_figures(values.min(axis=0), floor))
        yield (f"greatest {words}", "envelope", *_figures(values.max(axis=0), floor))


def _turned(load: Floats, axes: Axes) -> Floats:
    """Force and moment (N, 6) in the sheet's axes: a moment turns as a force does, the rotation being proper."""
    return np.concatenate([load[:, :3] @ axes.rotation, load[:, 3:] @ axes.rotation], axis=1)


def _remarks(case: Case, body: str, axes: Axes) -> Iterator[str]:
    yield f"blockload hand-over sheet: force on the {body}"
    yield f"case = {case.title}"
    yield f"case sha256 = {case.sha256}"
    yield f"axes = {axes.words}"
    yield f"origin = ({', '.join(f'{x:g}' for x in axes.origin)}) m in the car (ground; centre plane; front axle)"
    yield "moments are about the place of their own row; those of a whole face about the centroid of its studs"
    yield "least and greatest are taken component by component: they do not act together"
    yield "not factored; before preload. An aero device is listed at its centre of pressure: it enters at its mounts"
    yield "studs with all rows but whole faces and pads sum to zero: the body is in equilibrium"


def _figures(row: Iterable[float], floor: float) -> Iterator[str]:
    """Numbers with six digits; what is rounding beside the largest load of the place is zero."""
    return (f"{value:.6g}" if abs(value) > floor else "0" for value in row)
