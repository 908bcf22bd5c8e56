"""Faces and their studs: what all studs share, left-right names, preload from size and class."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace
from typing import Any

import numpy as np

from ..arrays import frozen
from ..errors import CaseError
from ..units import parse, show
from .fasteners import proof_load
from .model import Face, Stud
from .notes import Notes, key_of
from .schema_block import FacesTable, FaceTable, OneStudTable, StudTable
from .tables import Share, metas

PRELOAD_SHARES = ("50 %", "62.5 %", "75 %")
PRELOAD_REASON = "share of the proof load (ISO 898-1); up to 75 % for reused studs (Shigley, eq. 8-31); 50 % unsourced"

SHARED_DEFAULTS = ("preload_scatter", "load_factor", "friction")


def build_faces(table: FacesTable, notes: Notes) -> dict[str, Face]:
    """Return both faces in file order of their studs."""
    front = _common("front", table.front.stud or StudTable(), notes)
    rear = _common("rear", _rear_stud(front, table.rear.stud, notes), notes)
    if front.preload is None:
        notes.bound("faces.front.stud.preload", PRELOAD_SHARES, PRELOAD_REASON)
    if rear.preload is None and table.rear.stud is not None and _another(table.rear.stud):
        notes.bound("faces.rear.stud.preload", PRELOAD_SHARES, PRELOAD_REASON)
    faces = {"front": _face("front", table.front, front, notes), "rear": _face("rear", table.rear, rear, notes)}
    if faces["front"].x <= faces["rear"].x:
        found = f"the front face (x = {show(faces['front'].x, 'm')}) is not ahead of the rear face"
        notes.problem("faces.rear.x", f"{found} (x = {show(faces['rear'].x, 'm')})", "x points forward", "check signs")
    return faces


def _common(face: str, given: StudTable, notes: Notes) -> StudTable:
    """Return what a face's studs share, with defaults for what is missing."""
    return given.model_copy(
        update={key: notes.take(given, StudTable, f"faces.{face}.stud", key) for key in SHARED_DEFAULTS}
    )


def _rear_stud(front: StudTable, rear: StudTable | None, notes: Notes) -> StudTable:
    """Return the rear face's stud with the front's values where it says nothing; a preload belongs to its size."""
    own = {key: value for key in StudTable.model_fields if rear and (value := getattr(rear, key)) is not None}
    over = {"preload": None, "grip": None, **own} if rear is not None and _another(rear) else own
    taken = [key for key in StudTable.model_fields if key not in over and getattr(front, key) is not None]
    if taken:
        value = f"as the front face's: {', '.join(taken)}"
        notes.default("faces.rear.stud", value, "one stud for both faces; unsourced")
    return front.model_copy(update=over)


def _another(rear: StudTable) -> bool:
    return rear.size is not None or rear.property_class is not None


def _face(name: str, given: FaceTable, common: StudTable, notes: Notes) -> Face:
    studs = tuple(
        stud for key, item in given.studs.items() if (stud := _stud(name, key, item, common, notes)) is not None
    )
    if given.mirrored:
        studs = _mirrored(name, studs, notes)
    _check_pattern(name, studs, notes)
    return Face(name=name, x=given.x, studs=studs)


def _stud(face: str, name: str, item: OneStudTable, common: StudTable, notes: Notes) -> Stud | None:
    key = key_of("faces", face, "studs", name)
    values: dict[str, Any] = {}
    for entry in ("size", "property_class", "preload", *SHARED_DEFAULTS):
        own = getattr(item, entry)
        values[entry] = own if own is not None else getattr(common, entry)
    for entry in ("size", "property_class"):
        if values[entry] is None:
            example = metas(StudTable)[entry].example
            found = f"no {entry.replace('_', ' ')} is given for the studs of the {face} face"
            remedy = f"add {entry} = {example} to stud = {{...}} under [faces.{face}]"
            notes.problem(f"faces.{face}.stud.{entry}", found, f"for example {example}", remedy)
            return None
    try:
        values["preload"] = _preload(
            values, f"{key}.preload" if item.preload is not None else f"faces.{face}.stud.preload", notes
        )
    except CaseError as error:
        notes.problems.append(error)
        return None
    return Stud(name=name, at=item.at, **values)


def _preload(values: Mapping[str, Any], key: str, notes: Notes) -> float:
    where = notes.where(key)
    proof = proof_load(values["size"], values["property_class"], where)
    given = values["preload"]
    if given is None:
        given = Share(float(parse(PRELOAD_SHARES[1], "ratio", where)))
    preload: float = given.value * proof if isinstance(given, Share) else given
    if not 0.0 <= preload <= 1.05 * proof:
        stud = f"{values['size']} {values['property_class']}"
        found = f"a preload of {show(preload, 'kN')} is beyond 1.05 times the proof load of {stud}"
        raise CaseError(where, found, f"0 to {show(1.05 * proof, 'kN')}", "check size, class, force and unit")
    return preload


def side_of(name: str) -> int:
    """Return +1 for a name that says left, -1 for right, 0 for neither: TL, bottom_left, stud_r, ML."""
    word = name.lower()
    code, before = name[-1:], name[-2:-1]
    if word.endswith(("left", "right")):
        return 1 if word.endswith("left") else -1
    if word[-1:] in ("l", "r") and (before in ("_", ".", " ", "-") or (code in "LR" and _short(name[:-1]))):
        return 1 if code in "Ll" else -1
    return 0


def _short(stem: str) -> bool:
    """Whether a capital L or R after this is a side, as in TL, B2L and topR, and not the end of a word, as in REAR."""
    return not stem or not stem[-1].isupper() or (len(stem) <= 2 and stem.isupper())


def _mirrored(face: str, studs: tuple[Stud, ...], notes: Notes) -> tuple[Stud, ...]:
    both: list[Stud] = []
    for stud in studs:
        both.append(stud)
        if side_of(stud.name) > 0 and stud.name.endswith("L"):
            both.append(replace(stud, name=stud.name[:-1] + "R", at=frozen(stud.at * (-1.0, 1.0))))
    if len({stud.name for stud in both}) < len(both):
        found = "mirrored = true, yet some studs on the right are written too"
        notes.problem(f"faces.{face}.mirrored", found, "left studs only, or mirrored = false", "take one of them out")
    return tuple(both)


def _check_pattern(face: str, studs: tuple[Stud, ...], notes: Notes) -> None:
    for stud in studs:
        side = side_of(stud.name)
        if side and side * stud.at[0] <= 0.0:
            said, lies = ("left", "right") if side > 0 else ("right", "left")
            place = show(float(stud.at[0]), "mm")
            found = f"stud {stud.name} is named for the {said} but sits at y = {place}, on the {lies}"
            allowed = "y points to the car's left: names in L at +y, names in R at -y"
            remedy = "swap name or sign, or state this file's axes in [frame]"
            notes.problem(key_of("faces", face, "studs", stud.name), found, allowed, remedy)
    points = np.array([stud.at for stud in studs]).reshape(-1, 2)
    spread = np.linalg.svd(points - points.mean(axis=0), compute_uv=False) if len(studs) > 2 else np.zeros(2)
    if not notes.problems and spread[-1] < 0.01:
        found = "no stud positions are given"
        if studs:
            found = f"{len(studs)} studs {'on one line ' if len(studs) > 2 else ''}hold no moment"
        remedy = f'add each stud with its (y, z), for example TL = "(0.24, 0.45) m" under [faces.{face}.studs]'
        notes.problem(f"faces.{face}.studs", found, "three or more studs, not on one line", remedy)
        return
    for i, j in np.argwhere(np.triu(np.linalg.norm(points[:, None] - points, axis=2) < 1e-3, 1)):
        found = f"studs {studs[i].name} and {studs[j].name} sit at the same place"
        notes.problem(f"faces.{face}.studs", found, "each stud at a place of its own", "correct one of them")
