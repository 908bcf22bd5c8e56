"""From a case file to a Case: layers merged, turned into the car's axes, checked by the schema, built, compared."""

from __future__ import annotations

import hashlib
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import replace
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from ..errors import CaseError
from .build_axles import build_axles
from .build_block import build_block, build_installation, build_paths
from .build_bodies import build_bodies, total_mass
from .build_faces import build_faces
from .build_limits import build_known, build_limits
from .build_loads import (
    build_aero_split,
    build_aero_total,
    build_devices,
    build_drive,
    build_engine,
    build_manoeuvres,
    build_tyres,
)
from .build_situations import build_catalogue, build_envelope, build_laps, build_performance, build_points, turns
from .documents import Document, Layer, layers, literal, merged, nested, override, split_key
from .frame import Frame, read_frame, to_car
from .messages import refusals, together
from .model import FACES, Case
from .notes import Notes
from .plausible import check_car
from .schema import CaseTable
from .schema_car import EngineTable


def read(path: str | Path, overrides: Sequence[str] = ()) -> Case:
    """Read a case file.

    Parameters
    ----------
    path : str or Path
        The case file; files it extends are read too.
    overrides : sequence of str
        KEY=VALUE texts that go over the file's own keys, in this file's frame.

    Raises
    ------
    CaseError
        Saying which file, table and key, what was found, what is allowed and what to do.

    """
    path = Path(path)
    found = layers(path)
    digest = hashlib.sha256()
    document: Document = {}
    for layer in reversed(found):
        frame = read_frame(layer.document, layer.path)
        document = merged(document, _in_car(_rebased(layer, path.parent), frame))
        digest.update(layer.content + (frame.content if frame is not None else b""))
    if "frame" not in found[0].document:
        document.pop("frame", None)
    document.pop("extends", None)
    outermost = read_frame(found[0].document, path)
    for text in overrides:
        change = override(text)
        _refuse_structure(change, f"--set {text}")
        document = merged(document, _in_car(_fitted(document, change), outermost))
    return _build(document, path, digest.hexdigest(), tuple(overrides), found)


def replaced(case: Case, key: str, text: str) -> Case:
    """Return the case with one key changed, rebuilt and checked from its document.

    Parameters
    ----------
    case : Case
        The case to start from; it is not changed.
    key : str
        Dotted key, such as "bodies.gearbox.mass"; parts may stand in quotes.
    text : str
        The value, a TOML literal or a plain text such as "130 kg", in the case file's own frame.

    """
    place = f"{case.path}, {key}"
    change = nested(split_key(key, place), literal(text))
    _refuse_structure(change, place)
    frame = read_frame(case.document, case.path)
    document = merged(case.document, _in_car(_fitted(case.document, change), frame))
    return _build(document, case.path, case.sha256, (*case.overrides, f"{key}={text}"), ())


def _refuse_structure(change: Mapping[str, Any], place: str) -> None:
    for key in ("extends", "frame"):
        if key in change:
            remedy = "write it in a file; a small one that extends this one will do"
            raise CaseError(place, f"{key} says how files are read and cannot be set here", "any other key", remedy)


def _in_car(document: Mapping[str, Any], frame: Frame | None) -> Document:
    return to_car(document, CaseTable, frame) if frame is not None else dict(document)


def _rebased(layer: Layer, folder: Path) -> Document:
    """Return a layer's document with its file names relative to the outermost file's folder."""
    own = layer.path.parent
    document = dict(layer.document)
    if own == folder:
        return document
    for table, key in (("block", "mesh"), ("block", "cad")):
        name = document.get(table, {}).get(key) if isinstance(document.get(table), Mapping) else None
        if isinstance(name, str):
            document[table] = {**document[table], key: str((own / name).resolve())}
    for table, key in (("aero", "map"), ("laps", "file")):
        if isinstance(document.get(table), Mapping):
            document[table] = {
                name: {**item, key: str((own / item[key]).resolve())}
                if isinstance(item, Mapping) and isinstance(item.get(key), str)
                else item
                for name, item in document[table].items()
            }
    return document


def _fitted(document: Mapping[str, Any], change: Mapping[str, Any]) -> Document:
    """Return a change that fits the document where a bare text stands for a table, as a stud's (y, z) does."""
    result = dict(change)
    for face, name, value in _stud_changes(change):
        given = _at(document, ("faces", face, "studs", name))
        if given is not None and not isinstance(given, Mapping):
            result = merged(result, nested(("faces", face, "studs", name), {"at": given, **value}))
    return result


def _stud_changes(change: Mapping[str, Any]) -> Iterator[tuple[str, str, Mapping[str, Any]]]:
    """Yield face, stud and table for every stud that a change describes by a table."""
    for face in FACES:
        studs = _at(change, ("faces", face, "studs"))
        for name, value in studs.items() if isinstance(studs, Mapping) else ():
            if isinstance(value, Mapping):
                yield face, name, value


def _at(document: Any, parts: Sequence[str]) -> Any:
    """Return what stands at a dotted key, None where nothing does."""
    for part in parts:
        document = document.get(part) if isinstance(document, Mapping) else None
    return document


def _locator(path: Path, overrides: Sequence[str], found: Sequence[Layer]) -> Callable[[str], str]:
    """Return a function that says in which file, or in which override, a dotted key stands."""

    def where(key: str) -> str:
        parts = split_key(key, str(path)) if key else ()
        for text in reversed(overrides):
            if _at(override(text), parts) is not None:
                return f"--set {text}"
        for layer in found:
            if _at(layer.document, parts) is not None:
                return f"{layer.path}, {key}"
        return f"{path}, {key}" if key else str(path)

    return where


def _build(document: Document, path: Path, sha256: str, overrides: tuple[str, ...], found: Sequence[Layer]) -> Case:
    where = _locator(path, overrides, found)
    try:
        table = CaseTable.model_validate(document)
    except ValidationError as error:
        raise together(refusals(error, where), str(path)) from None
    notes = Notes(where=where, turning=turns(table))
    case = _assembled(table, document, path, sha256, overrides, notes)
    if notes.problems or case is None:
        raise together(notes.problems, str(path))
    return case


def _assembled(
    table: CaseTable, document: Document, path: Path, sha256: str, overrides: tuple[str, ...], notes: Notes
) -> Case | None:
    """Build every part; None where the car itself cannot be built, with the reasons in the notes."""
    folder = path.parent
    air_density = notes.take(table, CaseTable, "", "air_density")
    faces = build_faces(table.faces, notes)
    total = total_mass(table, notes)
    if table.axles.rear.x is None:
        remedy = "add x under [axles.rear]: minus the wheelbase, with the front axle at 0"
        notes.problem("axles.rear.x", "the wheelbase is not given", "1.5 m to 4 m behind the front axle", remedy)
    if notes.problems or total is None:
        return None
    axles = build_axles(table, total, notes)
    bodies = build_bodies(table, axles, faces, total, notes)
    if not bodies:
        return None
    stated = table.car if table.bodies.tub is not None and table.bodies.tub.mass is not None else None
    check_car(bodies, axles, faces, stated, notes)
    devices = build_devices(table, folder, air_density, notes)
    drive = build_drive(table, notes)
    case = Case(
        path=path,
        title=table.title or path.stem,
        sha256=sha256,
        document=document,
        overrides=overrides,
        air_density=air_density,
        gravity=notes.take(table, CaseTable, "", "gravity"),
        bodies=bodies,
        axles=axles,
        devices=devices,
        aero_total=build_aero_total(table, devices, axles, air_density, notes),
        aero_split=build_aero_split(table),
        drive=drive,
        engine=build_engine(table.engine, notes),
        tyre_friction=_friction(table),
        faces=faces,
        manoeuvres=build_manoeuvres(table, drive, notes),
        block=build_block(table, folder, faces, notes),
        installation=build_installation(table, faces, notes),
        paths=build_paths(table, notes),
        limits=build_limits(table, notes),
        engine_maker_consent=notes.take(table.engine, EngineTable, "engine", "maker_consent"),
        known=build_known(table, document, notes),
        concept_grade=table.concept.grade if table.concept is not None else None,
        bounds=(),
        defaults=(),
        checks=(),
        tyres=build_tyres(table.tyres, notes),
        chassis_torsion=table.chassis.torsion_stiffness if table.chassis is not None else None,
        chassis_without_block=table.chassis is not None and table.chassis.without_block is True,
        points=build_points(table),
        performance=build_performance(table.performance, notes),
        catalogue=build_catalogue(table, notes),
        envelope=build_envelope(table.envelope, notes),
        laps=build_laps(table, folder, notes),
    )
    return _noted(case, notes)


def _noted(case: Case, notes: Notes) -> Case:
    return replace(case, bounds=tuple(notes.bounds), defaults=tuple(notes.defaults), checks=tuple(notes.checks))


def _friction(table: CaseTable) -> float | None:
    """The smaller of the two peak frictions: grip used is shown on the safe side."""
    given = [value for value in (table.tyres.mu_x, table.tyres.mu_y) if value is not None] if table.tyres else []
    return min(given) if given else None


__all__ = ["CaseError", "read", "replaced"]
