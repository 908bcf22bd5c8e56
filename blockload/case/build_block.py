"""The block's source and names, how it is held, and second load paths."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import Any

import numpy as np

from ..arrays import Floats, frozen
from ..unit_table import UNITS
from ..units import significant
from .build_beam import build_beam
from .fasteners import boss_stiffness
from .messages import nearest_key
from .model import (
    BlockSpec,
    Carried,
    Face,
    Installation,
    MaterialChoice,
    SecondPath,
)
from .notes import Notes, key_of
from .schema import CaseTable
from .schema_block import BlockTable, InstallationTable, MaterialTable

_PAD_SOURCE = (
    "estimated from the studs: aluminium boss 2.5 d wide, clamped length 3 d unless grip is given "
    "(E and G of EN 1999-1-1); a tenth and ten times, unsourced"
)


def build_block(table: CaseTable, folder: Path, faces: Mapping[str, Face], notes: Notes) -> BlockSpec | None:
    """Return where the block comes from, or None without a [block]."""
    given = table.block
    if given is None:
        return None
    use = _used(given, notes)
    if use is None:
        return None
    meshed = given if use == "mesh" else None
    unit, turn, place = (
        notes.take(meshed, BlockTable, "block", name) if meshed is not None else None
        for name in ("mesh_unit", "turn", "place")
    )
    carried_on = notes.take(given, BlockTable, "block", "carried_on")
    attachments = given.attachments
    pads = {face: dict(getattr(attachments, face)) if attachments else {} for face in ("front", "rear", "other")}
    beam = None if given.beam is None else build_beam(given.beam, faces, carried_on, notes)
    if use == "mesh":
        for face in ("front", "rear"):
            _check_pads(face, pads[face], faces, notes)
        if carried_on not in pads["other"]:
            allowed = ", ".join(pads["other"]) or "none is named"
            remedy = f'add {carried_on} = "main_*" under [block.attachments.other]'
            notes.problem("block.carried_on", f"{carried_on!r} is no attachment of the block", allowed, remedy)
    elif beam is not None:
        pads["other"] = {name: name for name in (*beam.places, carried_on)}
    return BlockSpec(
        use=use,
        beam=beam,
        mesh=None if given.mesh is None else folder / given.mesh,
        mesh_unit=1.0 if unit is None else UNITS[unit].factor,
        turn=frozen(np.zeros(3)) if turn is None else turn,
        place=frozen(np.zeros(3)) if place is None else place,
        carried_on=carried_on,
        carried=_carried(given, pads["other"], notes),
        materials=_materials(given, notes),
        **pads,
    )


def _used(given: BlockTable, notes: Notes) -> str | None:
    """Return which description of the block is judged, or None with the reason noted."""
    use = given.use or ("mesh" if given.mesh is not None or given.beam is None else "beam")
    if getattr(given, use) is not None:
        return use
    kinds = ", ".join(word for word in ("shape", "cad") if getattr(given, word) is not None)
    found = f"names no {use} ({kinds} is not used yet)" if kinds else f"names no {use}"
    remedy = f"add {use}, or leave [block] out to judge by the faces alone"
    notes.problem(f"block.{use}", found, "a mesh file" if use == "mesh" else "a [block.beam] table", remedy)
    return None


def _check_pads(face: str, pads: Mapping[str, str], faces: Mapping[str, Face], notes: Notes) -> None:
    studs = [stud.name for stud in faces[face].studs]
    for name in pads:
        if name not in studs:
            key = key_of("block", "attachments", face, name)
            notes.problem(key, f"{name!r} is no stud of the {face} face", ", ".join(studs), nearest_key(name, studs))
    missing = [name for name in studs if name not in pads]
    if missing:
        found = f"no face set is named for stud {', '.join(missing)}"
        remedy = f'add {missing[0]} = "NAME_OF_FACE_SET" under [block.attachments.{face}]'
        notes.problem(f"block.attachments.{face}", found, "one pad for each stud", remedy)


def _carried(given: BlockTable, other: Mapping[str, str], notes: Notes) -> tuple[Carried, ...]:
    found = []
    for name, item in given.carried.items():
        if item.on not in other:
            key = key_of("block", "carried", name, "on")
            notes.problem(key, f"{item.on!r} is no attachment", ", ".join(other), nearest_key(item.on, other))
        inertia = item.inertia if item.inertia is not None else np.zeros(3)
        found.append(Carried(name=name, on=item.on, mass=item.mass, cg=item.cg, inertia=frozen(np.diag(inertia))))
    return tuple(found)


def _materials(given: BlockTable, notes: Notes) -> tuple[MaterialChoice, ...]:
    choices = []
    for volume, item in given.materials.items():
        key = key_of("block", "materials", volume)
        own = {
            name: getattr(item, name)
            for name in MaterialTable.model_fields
            if name not in ("grade", "temperature") and getattr(item, name) is not None
        }
        needed = [name for name in _OWN if name not in own]
        if item.grade is None and needed:
            remedy = "add them, or name a grade of the materials list"
            notes.problem(key, f"{', '.join(needed)} missing", "a grade, or a whole set of properties", remedy)
        if item.grade is not None and own:
            found = f"names a grade and also {', '.join(own)}"
            notes.problem(key, found, "a grade, or properties of your own", "take one of the two out")
        choices.append(
            MaterialChoice(volume=volume, grade=item.grade, properties=own or None, temperature=item.temperature)
        )
    return tuple(choices)


_OWN = (
    "youngs_modulus",
    "poissons_ratio",
    "density",
    "thermal_expansion",
    "yield_strength",
    "tensile_strength",
    "source",
)


def build_installation(table: CaseTable, faces: Mapping[str, Face], notes: Notes) -> Installation:
    """Return how the block is held; pad stiffness is estimated and bounded where absent."""
    given = table.installation
    pad = given.pad_stiffness if given is not None else None
    if pad is not None:
        stiffness: tuple[tuple[str, float, float], ...] = (("given", pad.normal, pad.tangential),)
    else:
        stiffness = _estimated_pads(table, faces, notes)
    statement = given.second_paths if given is not None else None
    if statement is not None and statement != "none":
        remedy = "describe each in a [paths.NAME] table, and leave second_paths out"
        notes.problem("installation.second_paths", f"{statement!r} is no such statement", '"none"', remedy)
    if statement == "none" and table.paths:
        found = "'none' is stated, yet [paths] describes some"
        notes.problem("installation.second_paths", found, "one of the two", "take the statement out")
    return Installation(
        pad_stiffness=stiffness,
        pad_stiffness_given=pad is not None,
        tub=_tub(notes.take(given, InstallationTable, "installation", "tub"), len(faces["front"].studs), notes),
        second_paths=statement,
    )


def _estimated_pads(table: CaseTable, faces: Mapping[str, Face], notes: Notes) -> tuple[tuple[str, float, float], ...]:
    sizes = []
    for name, face in faces.items():
        face_table = getattr(table.faces, name)
        common = face_table.stud or table.faces.front.stud
        for stud in face.studs:
            own = face_table.studs.get(stud.name)
            grip = own.grip if own is not None and own.grip is not None else getattr(common, "grip", None)
            sizes.append(boss_stiffness(stud.size, grip, notes.where(key_of("faces", name, "studs", stud.name))))
    if not sizes:
        return ()
    normal, tangential = (float(f"{value:.3g}") for value in np.mean(sizes, axis=0))
    variants = [("soft", 0.1), ("middle", 1.0), ("stiff", 10.0)]
    low, middle, high = (
        f'{{ normal = "{significant(normal * factor / 1e6)} kN/mm", '
        f'tangential = "{significant(tangential * factor / 1e6)} kN/mm" }}'
        for _, factor in variants
    )
    notes.bound("installation.pad_stiffness", (low, middle, high), _PAD_SOURCE)
    return tuple((label, normal * factor, tangential * factor) for label, factor in variants)


def _tub(given: Any, studs: int, notes: Notes) -> Floats | None:
    key = "installation.tub"
    if given == "rigid":
        return None
    size = 3 * studs
    allowed = f'"rigid", or {size} rows of {size} numbers in N/m, x y z of each front stud in file order'
    try:
        matrix = np.array(given, dtype=float)
    except (TypeError, ValueError):
        notes.problem(key, f"{str(given)[:60]!r} cannot be used", allowed)
        return None
    if matrix.shape != (size, size):
        notes.problem(key, f"the matrix has shape {matrix.shape}", allowed, "condense the tub to the front studs")
        return None
    scale = float(np.abs(matrix).max())
    if not np.all(np.isfinite(matrix)) or np.abs(matrix - matrix.T).max() > 1e-6 * scale:
        notes.problem(key, "the matrix is not symmetric (or not finite)", allowed, "check the order of rows")
    elif np.linalg.eigvalsh(matrix)[0] < -1e-6 * scale:
        notes.problem(
            key, "the matrix gives energy away: it has a negative eigenvalue", allowed, "check signs and units"
        )
    return frozen(matrix)


def build_paths(table: CaseTable, notes: Notes) -> tuple[SecondPath, ...]:
    """Return the second load paths."""
    paths = []
    for name, item in table.paths.items():
        if item.from_.body == item.to.body:
            key = key_of("paths", name, "to")
            notes.problem(key, f"both ends are on the {item.to.body}", "two bodies", "correct one body")
        if float(np.linalg.norm(item.from_.at - item.to.at)) < 1e-3:
            key = key_of("paths", name, "to")
            notes.problem(
                key, "both ends are at one place, so the path has no direction", "two places", "correct one end"
            )
        paths.append(
            SecondPath(
                name=name,
                from_body=item.from_.body,
                from_at=item.from_.at,
                to_body=item.to.body,
                to_at=item.to.at,
                stiffness=item.stiffness,
            )
        )
    return tuple(paths)
