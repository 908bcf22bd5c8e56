"""Attachments: which faces of the mesh each stud, saddle or bracket holds, and whether they lie where they should."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fnmatch import fnmatchcase
from typing import TYPE_CHECKING, Any

import numpy as np

from ..arrays import Floats, Ints, frozen
from ..case.model import FACES, BlockSpec, Face
from ..errors import BlockError, nearest
from .model import Attachment
from .moments import face_moments

if TYPE_CHECKING:
    from skfem import MeshTet2

REACH = 0.005
"""A pad's centroid lies within this of its stud [m]."""
WASHERS = {
    5: (10, 5.3),
    6: (12, 6.4),
    8: (16, 8.4),
    10: (20, 10.5),
    12: (24, 13),
    14: (28, 15),
    16: (30, 17),
    18: (34, 19),
    20: (37, 21),
    22: (39, 23),
    24: (44, 25),
}
"""Outer and hole diameter [mm] of plain washers by thread size (ISO 7089, from memory)."""
AREA_BAND = (0.5, 4.0)
"""A pad outside this share of its stud's washer face is pointed out (our choice)."""


def attach(mesh: MeshTet2, spec: BlockSpec, faces: Mapping[str, Face]) -> tuple[Attachment, ...]:
    """Return all attachments: front and rear pads in stud order, then the others in file order."""
    sets = {name: np.asarray(rows, dtype=np.int64) for name, rows in (mesh.boundaries or {}).items()}
    found: list[Attachment] = []
    for face in FACES:
        wanted: Mapping[str, str] = getattr(spec, face)
        _check_stud_names(face, wanted, faces[face])
        found += [_attachment(mesh, sets, face, stud.name, wanted[stud.name]) for stud in faces[face].studs]
    found += [_attachment(mesh, sets, "other", name, pattern) for name, pattern in spec.other.items()]
    _check_shared(mesh, found)
    _check_places(found, faces)
    _check_carrier(spec, found)
    return tuple(found)


def area_notes(found: Sequence[Attachment], faces: Mapping[str, Face]) -> list[dict[str, Any]]:
    """Return the pads whose area is far from their stud's washer face: pad, area, washer face [m²], ratio."""
    notes = []
    for face in FACES:
        for stud in faces[face].studs:
            pad = next(item for item in found if item.kind == face and item.name == stud.name)
            bearing = washer_face(stud.size)
            if bearing is not None and not AREA_BAND[0] <= pad.area / bearing <= AREA_BAND[1]:
                ratio = pad.area / bearing
                notes.append({"pad": f"{face} {stud.name}", "area": pad.area, "bearing": bearing, "ratio": ratio})
    return notes


def washer_face(size: str) -> float | None:
    """Return the area under a plain washer of a thread such as "M12" [m²], None for a size not in the table."""
    digits = size.upper().lstrip("M").split("X")[0]
    row = WASHERS.get(int(digits)) if digits.isdigit() else None
    return None if row is None else float(0.25e-6 * np.pi * (row[0] ** 2 - row[1] ** 2))


def matching(sets: Mapping[str, Ints], pattern: str) -> tuple[str, ...]:
    """Return the set of exactly this name, else all sets that fit the pattern, sorted."""
    return (pattern,) if pattern in sets else tuple(sorted(name for name in sets if fnmatchcase(name, pattern)))


def _attachment(mesh: MeshTet2, sets: Mapping[str, Ints], kind: str, name: str, pattern: str) -> Attachment:
    where = f"block.attachments.{kind}.{name}"
    names = matching(sets, pattern)
    if not names:
        hint = nearest(pattern, sets)
        known = ", ".join(sorted(sets)) or "the mesh has no face sets"
        raise BlockError(where, f"no face set {pattern!r}. {hint}".strip(), known, "name a face set of the mesh")
    empty = [item for item in names if sets[item].size == 0]
    if empty:
        raise BlockError(where, f"face set {empty[0]!r} is empty", "at least one face", "name the faces in the mesher")
    facets = np.unique(np.concatenate([sets[item] for item in names]))
    inner = facets[mesh.f2t[1, facets] >= 0]
    if inner.size:
        found = f"{inner.size} of {facets.size} faces of {', '.join(names)} lie inside the metal, between volumes"
        raise BlockError(where, found, "faces of the outer surface", "name a face set of the surface")
    moments = face_moments(mesh, facets)
    return Attachment(
        name=name,
        kind=kind,
        sets=names,
        facets=frozen(facets, np.int64),
        area=moments.area,
        centroid=moments.centroid,
        normal=moments.normal,
        moments=moments.moments,
    )


def _check_stud_names(face: str, wanted: Mapping[str, str], studs: Face) -> None:
    known = [stud.name for stud in studs.studs]
    where = f"block.attachments.{face}"
    for name in wanted:
        if name not in known:
            found = f"{name!r} is no stud of the {face} face. {nearest(name, known)}".strip()
            raise BlockError(where, found, ", ".join(known), f"see faces.{face}.studs")
    missing = [name for name in known if name not in wanted]
    if missing:
        found = f"no pad for stud{'s' if len(missing) > 1 else ''} {', '.join(missing)}"
        raise BlockError(where, found, f"one face set for each of: {', '.join(known)}", "name the pad's face set")


def _check_shared(mesh: MeshTet2, found: Sequence[Attachment]) -> None:
    pads = [item for item in found if item.kind in FACES]
    owner = np.full(mesh.nfacets, -1)
    for index, pad in enumerate(pads):
        taken = owner[pad.facets]
        if np.any(taken >= 0):
            other = pads[int(taken[taken >= 0][0])]
            sets = sorted({*pad.sets, *other.sets})
            raise BlockError(
                f"block.attachments.{pad.kind}.{pad.name}",
                f"{int(np.sum(taken >= 0))} faces belong to {other.kind} {other.name} as well ({', '.join(sets)})",
                "each face under one pad only",
                "give each stud its own face set",
            )
        owner[pad.facets] = index


def _check_places(found: Sequence[Attachment], faces: Mapping[str, Face]) -> None:
    studs = {(f, s.name): np.array([faces[f].x, *s.at]) for f in FACES for s in faces[f].studs}
    pads = {(item.kind, item.name): item.centroid for item in found if item.kind in FACES}
    away = {key: pads[key] - at for key, at in studs.items() if np.linalg.norm(pads[key] - at) > REACH}
    if not away:
        return
    key = max(away, key=lambda k: float(np.linalg.norm(away[k])))
    face, name = key
    distance = 1e3 * float(np.linalg.norm(away[key]))
    raise BlockError(
        f"block.attachments.{face}.{name}",
        f"its pad is at {_mm(pads[key])}, {distance:.1f} mm from the stud at {_mm(studs[key])}"
        + (f"; {len(away)} of {len(studs)} pads are away from their studs" if len(away) > 1 else ""),
        "a pad's centroid within 5 mm of its stud",
        _why(key, pads, studs, away),
    )


Key = tuple[str, str]


def _why(key: Key, pads: Mapping[Key, Floats], studs: Mapping[Key, Floats], away: Mapping[Key, Floats]) -> str:
    """Return the likeliest reason: a common offset, two names swapped, left for right, or a wrong place."""
    offsets = np.array(list(away.values()))
    if len(away) == len(studs) and np.all(np.ptp(offsets, axis=0) < REACH):
        return f"all pads are off by {_mm(offsets.mean(axis=0))}: take this off block.place, or check the face's x"
    mirrored = np.array([1.0, -1.0, 1.0])
    if len(away) > 1 and all(np.linalg.norm(pads[k] * mirrored - studs[k]) < REACH for k in away):
        return "left and right look exchanged: +y is the car's left; check block.turn and the names"
    near = [other for other, at in studs.items() if other != key and np.linalg.norm(pads[key] - at) < REACH]
    if near:
        return f"that is where the {near[0][0]} stud {near[0][1]} is: are the two names swapped?"
    return "check the stud's (y, z), the face set's name, block.turn and block.place"


def _check_carrier(spec: BlockSpec, found: Sequence[Attachment]) -> None:
    known = [item.name for item in found]
    wanted = {"block.carried_on": spec.carried_on}
    wanted |= {f"block.carried.{item.name}.on": item.on for item in spec.carried}
    for where, name in wanted.items():
        if name not in known:
            hint = nearest(name, known)
            found_text = f"no attachment {name!r}. {hint}".strip()
            raise BlockError(where, found_text, ", ".join(known), "name it under block.attachments.other")


def _mm(point: Floats) -> str:
    return "(" + ", ".join(f"{1e3 * value:.1f}" for value in point) + ") mm"
