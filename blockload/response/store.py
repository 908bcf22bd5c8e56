"""The response library on disk: plain .npy arrays and a manifest, one folder per key, never overwritten.

A key is the hash of everything the library depends on: points, cells, the facets of each attachment, materials, the
solver and the source text of this room. An entry is written beside and renamed; whoever loses the race to rename has
lost nothing, since the winner wrote the same. Large arrays are memory-mapped on reading, except where an open map
would keep others from deleting the file.
"""

from __future__ import annotations

import hashlib
import json
import os
import shutil
import time
import uuid
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from ..arrays import frozen
from ..block.model import Block
from .model import Library

FORMAT = "blockload.library/1"
MAPPED = ("motion", "stress") if os.name != "nt" else ()
STALE = 3600.0
ARRAYS = (
    "centroids",
    "cg",
    "inertia",
    "flexibility",
    "thermal_motion",
    "motion",
    "surface_nodes",
    "surface_points",
    "surface_triangles",
    "triangle_volume",
    "entry_node",
    "entry_volume",
    "stress",
)


@dataclass(frozen=True, slots=True, kw_only=True)
class Entry:
    """One library on disk: its key, folder, size [bytes], unknowns, unit loads, and time of writing [s, epoch]."""

    key: str
    path: Path
    size: int
    unknowns: int
    unit_loads: int
    written: float


def cache_folder(given: Path | None = None) -> Path:
    """The folder of the cache: the one given, else BLOCKLOAD_CACHE, else the user's cache folder."""
    if given is not None:
        return given
    named = os.environ.get("BLOCKLOAD_CACHE")
    if named:
        return Path(named)
    from platformdirs import user_cache_path

    return Path(user_cache_path("blockload", appauthor=False))


def fingerprint(block: Block, solver: str) -> str:
    """Key of the library of this block: 64 hexadecimal digits."""
    digest = hashlib.sha256()

    def add(label: str, value: Any) -> None:
        if isinstance(value, np.ndarray):
            text = f"{label} {value.dtype.str} {value.shape}\n"
            digest.update(text.encode())
            digest.update(np.ascontiguousarray(value).data)
        else:
            digest.update(f"{label} {value!r}\n".encode())

    add("format", FORMAT)
    add("points", np.asarray(block.mesh.doflocs, dtype="<f8"))
    add("cells", np.asarray(block.mesh.dofs.element_dofs, dtype="<i8"))
    add("volumes", block.volumes)
    add("volume_of", np.asarray(block.volume_of, dtype="<i8"))
    for name in block.volumes:
        item = block.materials[name]
        add(name, (item.youngs_modulus, item.poissons_ratio, item.density, item.thermal_expansion))
    for attachment in block.attachments:
        add("attachment", (attachment.kind, attachment.name))
        add("facets", np.asarray(attachment.facets, dtype="<i8"))
        add("centroid", np.asarray(attachment.centroid, dtype="<f8"))
    add("solver", solver)
    for name, text in _source_text():
        add(name, text)
    return digest.hexdigest()


def _source_text() -> list[tuple[str, str]]:
    return [(path.name, path.read_text(encoding="utf-8")) for path in sorted(Path(__file__).parent.glob("*.py"))]


def save(folder: Path, library: Library) -> Path:
    """Write a library beside its place and rename it there; an entry already there is kept."""
    target = folder / library.key
    beside = folder / f".{library.key[:16]}-{uuid.uuid4().hex}"
    beside.mkdir(parents=True)
    try:
        for name in ARRAYS:
            np.save(beside / f"{name}.npy", getattr(library, name), allow_pickle=False)
        (beside / "manifest.json").write_text(json.dumps(_manifest(beside, library), indent=1), encoding="utf-8")
        try:
            beside.replace(target)
        except OSError:
            if not (target / "manifest.json").is_file():
                raise
    finally:
        shutil.rmtree(beside, ignore_errors=True)
    return target


def _manifest(folder: Path, library: Library) -> dict[str, Any]:
    return {
        "format": FORMAT,
        "key": library.key,
        "attachments": [list(pair) for pair in library.attachments],
        "volumes": list(library.volumes),
        "mass": library.mass,
        "checks": library.checks,
        "solver": library.solver,
        "unknowns": int(library.motion.shape[0]),
        "unit_loads": int(library.motion.shape[1]),
        "bytes": {name: (folder / f"{name}.npy").stat().st_size for name in ARRAYS},
    }


def load(folder: Path, key: str) -> Library | None:
    """Read an entry, or None where there is none; a damaged one is removed so that it can be built again."""
    target = folder / key
    if not target.is_dir():
        return None
    try:
        manifest = json.loads((target / "manifest.json").read_text(encoding="utf-8"))
        _inspect(target, manifest, key)
        arrays = {name: _array(target / f"{name}.npy", mapped=name in MAPPED) for name in ARRAYS}
        return Library(
            key=key,
            attachments=tuple((str(kind), str(name)) for kind, name in manifest["attachments"]),
            volumes=tuple(str(name) for name in manifest["volumes"]),
            mass=float(manifest["mass"]),
            checks={str(name): float(value) for name, value in manifest["checks"].items()},
            solver=str(manifest["solver"]),
            from_cache=True,
            **arrays,
        )
    except (OSError, ValueError, KeyError, TypeError):
        _remove(target)
        return None


def _remove(entry: Path) -> None:
    """Take an entry out of sight in one step, then delete it, so that nobody meets half of one."""
    aside = entry.with_name(f".{uuid.uuid4().hex}")
    try:
        entry.replace(aside)
    except OSError:
        aside = entry
    shutil.rmtree(aside, ignore_errors=True)


def _inspect(target: Path, manifest: dict[str, Any], key: str) -> None:
    if manifest["format"] != FORMAT or manifest["key"] != key:
        raise ValueError("another format or key")
    for name in ARRAYS:
        if (target / f"{name}.npy").stat().st_size != manifest["bytes"][name]:
            raise ValueError(f"{name} has another size")


def _array(path: Path, *, mapped: bool) -> Any:
    array = np.load(path, mmap_mode="r" if mapped else None, allow_pickle=False)
    return array if mapped else frozen(array, array.dtype)


def list_entries(folder: Path | None = None) -> tuple[Entry, ...]:
    """Entries of the cache, latest first."""
    root = cache_folder(folder)
    found = []
    for path in root.glob("*/manifest.json"):
        if path.parent.name.startswith("."):
            continue
        try:
            manifest = json.loads(path.read_text(encoding="utf-8"))
            found.append(
                Entry(
                    key=path.parent.name,
                    path=path.parent,
                    size=sum(item.stat().st_size for item in path.parent.iterdir()),
                    unknowns=int(manifest["unknowns"]),
                    unit_loads=int(manifest["unit_loads"]),
                    written=path.stat().st_mtime,
                )
            )
        except (OSError, ValueError, KeyError):
            continue
    return tuple(sorted(found, key=lambda entry: -entry.written))


def drop(key: str, folder: Path | None = None) -> tuple[Entry, ...]:
    """Delete the entries whose key starts with `key`, or "all" and what killed runs left; return those deleted."""
    chosen = tuple(entry for entry in list_entries(folder) if key == "all" or (key and entry.key.startswith(key)))
    for entry in chosen:
        _remove(entry.path)
    if key == "all":
        for left in cache_folder(folder).glob(".*"):
            if left.is_dir() and time.time() - left.stat().st_mtime > STALE:
                shutil.rmtree(left, ignore_errors=True)
    return tuple(entry for entry in chosen if not entry.path.exists())
