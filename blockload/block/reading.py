"""Mesh files: ten-node tetrahedra with named volumes and named face sets, whatever format carries them.

meshio reads; this module makes of it points, elements and names, and refuses what cannot be used, each with its own
reason. Names come from scikit-fem's own encoding (one number per cell and set), from cell sets, or from the tags of
MSH 2.2 and MED files. Faces are found again by their three corners.
"""

from __future__ import annotations

import contextlib
import io
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from ..arrays import Floats, Ints
from ..errors import BlockError

if TYPE_CHECKING:
    from meshio import Mesh as RawMesh

SUFFIXES = (".vtu", ".vtk", ".msh", ".xdmf", ".med")
_TET, _LINEAR, _FACES = "tetra10", "tetra", ("triangle6", "triangle")
_FLAT = {"vertex", "line", "line3", "triangle", "triangle6", "quad", "quad8", "quad9"}
_PREFIX = "skfem"


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class RawBlock:
    """What a mesh file says, in its own unit.

    points (n, 3), elements (e, 10) in VTK order; `volumes` name -> element numbers; `faces` name -> (f, 3) corner
    nodes; `coded_faces` name -> (e,) bit mask of the element's own faces in scikit-fem's order; `orphans` dropped.
    """

    points: Floats
    elements: Ints
    volumes: Mapping[str, Ints]
    faces: Mapping[str, Ints]
    coded_faces: Mapping[str, Ints]
    orphans: int


def read_mesh(path: Path) -> RawBlock:
    """Read a mesh file.

    Raises BlockError for a missing, damaged or foreign file, and for anything but ten-node tetrahedra.
    """
    where = str(path)
    if path.suffix.lower() not in SUFFIXES:
        raise BlockError(where, f"a {path.suffix or 'nameless'} file", ", ".join(SUFFIXES), "export to one of these")
    if not path.is_file():
        raise BlockError(where, "no such file", "a mesh file", "check block.mesh; paths are relative to the case file")
    raw = _read_raw(path)
    _check_cells(where, raw)
    kinds = [block.type for block in raw.cells]
    elements = np.concatenate([b.data for b in raw.cells if b.type == _TET]).astype(np.int64)
    points = np.asarray(raw.points, dtype=float)
    if points.shape[1] != 3 or not np.all(np.isfinite(points)):
        raise BlockError(where, "points that are not finite (x, y, z)", "finite coordinates", "export the mesh again")
    if elements.size and (elements.min() < 0 or elements.max() >= len(points)):
        raise BlockError(where, "elements that use points the file does not have", remedy="export the mesh again")
    volumes, faces, coded = _names(raw, kinds)
    used, renumbered = np.unique(elements, return_inverse=True)
    lookup = np.full(len(points), -1)
    lookup[used] = np.arange(len(used))
    return RawBlock(
        points=points[used],
        elements=renumbered.reshape(elements.shape),
        volumes=volumes,
        faces={name: lookup[corners] for name, corners in faces.items()},
        coded_faces=coded,
        orphans=len(points) - len(used),
    )


def _read_raw(path: Path) -> RawMesh:
    import meshio

    words = io.StringIO()
    try:
        # a damaged file makes meshio print and leave the process; both stay here
        with contextlib.redirect_stdout(words), contextlib.redirect_stderr(words):
            return meshio.read(path)
    except (SystemExit, Exception) as error:  # any reader of any format may fail in any way
        reason = str(error) if str(error) not in ("", "1") else " ".join(words.getvalue().split())
        raise BlockError(
            str(path),
            f"cannot be read: {reason or type(error).__name__}"[:400],
            "a complete " + path.suffix + " file",
            "it may be truncated or of another format; export it again",
        ) from None


def _check_cells(where: str, raw: RawMesh) -> None:
    count = {block.type: 0 for block in raw.cells}
    for block in raw.cells:
        count[block.type] += len(block.data)
    foreign = {kind: n for kind, n in count.items() if kind not in _FLAT | {_TET, _LINEAR} and n}
    if foreign:
        text = ", ".join(f"{n} {kind}" for kind, n in foreign.items())
        raise BlockError(where, f"cells that are no tetrahedra: {text}", "ten-node tetrahedra", "mesh with tetrahedra")
    if count.get(_LINEAR):
        raise BlockError(
            where,
            f"{count[_LINEAR]} linear (four-node) tetrahedra",
            "ten-node tetrahedra: linear ones are far too stiff in bending (about half the deflection)",
            "raise the mesh to second order in the mesher, on the curved geometry, and export again",
        )
    if not count.get(_TET):
        text = ", ".join(f"{n} {kind}" for kind, n in count.items()) or "no cells"
        raise BlockError(where, f"no volume elements ({text})", "ten-node tetrahedra", "export the volume mesh")


def _names(raw: RawMesh, kinds: list[str]) -> tuple[dict[str, Ints], dict[str, Ints], dict[str, Ints]]:
    starts: dict[int, int] = {}
    seen: dict[str, int] = {}
    for i, block in enumerate(raw.cells):
        starts[i] = seen.get(block.type, 0)
        seen[block.type] = starts[i] + len(block.data)
    members = _sets(raw)
    volumes: dict[str, list[Ints]] = {}
    faces: dict[str, list[Ints]] = {}
    for name, per_block in members.items():
        for i, rows in enumerate(per_block):
            if kinds[i] == _TET and len(rows):
                volumes.setdefault(name, []).append(rows + starts[i])
            elif kinds[i] in _FACES and len(rows):
                faces.setdefault(name, []).append(raw.cells[i].data[rows][:, :3].astype(np.int64))
    coded: dict[str, Ints] = {}
    for key, data in raw.cell_data.items():
        parts = key.split(":")
        if parts[0] != _PREFIX or len(parts) != 3:
            continue
        values = np.concatenate([np.asarray(data[i]).ravel() for i, kind in enumerate(kinds) if kind == _TET])
        if parts[1] == "s":
            volumes[parts[2]] = [np.flatnonzero(values)]
        elif parts[1] == "b":
            coded[parts[2]] = values.astype(np.int64)
    whole = {name: np.unique(np.concatenate(rows)) for name, rows in volumes.items()}
    return whole, {name: np.concatenate(rows) for name, rows in faces.items()}, coded


def _sets(raw: RawMesh) -> dict[str, list[Ints]]:
    """Return rows per cell block of every named set; names with a colon are some mesher's own."""
    sets: dict[str, list[Ints]] = {}
    for name, rows in raw.cell_sets.items():
        if ":" not in name:
            empty = np.zeros(0, dtype=np.int64)
            sets[name] = [empty if r is None else np.asarray(r, dtype=np.int64) for r in rows]
    if sets:
        return sets
    for name, tag in _tags(raw).items():
        key, wanted = tag
        sets[name] = [np.flatnonzero(np.isin(np.asarray(values).ravel(), wanted)) for values in raw.cell_data[key]]
    return sets


def _tags(raw: RawMesh) -> dict[str, tuple[str, Any]]:
    """Return name -> (cell array, tag values) of MSH 2.2 physical groups and of MED families."""
    found: dict[str, tuple[str, Any]] = {}
    if "gmsh:physical" in raw.cell_data:
        for name, entry in raw.field_data.items():
            found[name] = ("gmsh:physical", [int(np.ravel(entry)[0])])
    if "cell_tags" in raw.cell_data:
        families: dict[str, list[int]] = {}
        for number, names in getattr(raw, "cell_tags", {}).items():
            for name in names:
                families.setdefault(str(name).strip(), []).append(int(number))
        found.update({name: ("cell_tags", numbers) for name, numbers in families.items()})
    return found
