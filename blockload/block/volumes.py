"""Volumes: each element in exactly one, each made of one material."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from fnmatch import fnmatchcase

import numpy as np

from ..arrays import Floats, Ints, frozen
from ..case.model import MaterialChoice
from ..errors import BlockError, nearest
from .materials import material
from .model import Material

UNUSED = "a set of all elements beside the volumes, left out"


def partition(where: str, named: Mapping[str, Ints], centres: Floats) -> tuple[tuple[str, ...], Ints, tuple[str, ...]]:
    """Return volume names in file order, each element's volume (e,), and the sets left out.

    `centres` (e, 3) [m] say where trouble is. A set of all elements is left out when the others already part the
    mesh, and is the volume when it stands alone.
    """
    count = len(centres)
    full = [name for name, rows in named.items() if len(rows) == count]
    parts = {name: rows for name, rows in named.items() if len(rows) and name not in full}
    if not parts and full:
        parts = {full[0]: named[full[0]]}
    if not parts:
        raise BlockError(
            where,
            "no volume names: nothing says what each element is made of",
            "one named volume (cell set) per material",
            "name the solids in the mesher and export the names with the mesh",
        )
    names = tuple(parts)
    volume_of = np.full(count, -1)
    for index, (name, rows) in enumerate(parts.items()):
        taken = rows[volume_of[rows] >= 0]
        if taken.size:
            other = names[volume_of[taken[0]]]
            raise BlockError(
                where,
                f"{taken.size} elements are both in {other!r} and in {name!r}, one at {_point(centres[taken[0]])}",
                "each element in exactly one volume",
                "leave overlapping element sets out of the export",
            )
        volume_of[rows] = index
    missing = np.flatnonzero(volume_of < 0)
    if missing.size:
        raise BlockError(
            where,
            f"{missing.size} of {count} elements are in no volume, one at {_point(centres[missing[0]])}",
            "each element in exactly one volume",
            f"name the remaining solids; named so far: {', '.join(names)}",
        )
    return names, frozen(volume_of, np.int64), tuple(name for name in full if name not in names)


def assign(names: Sequence[str], choices: Sequence[MaterialChoice]) -> dict[str, Material]:
    """Return each volume's material: by its own name first, else by the one pattern that fits."""
    exact = {choice.volume: choice for choice in choices}
    used: set[str] = set()
    chosen: dict[str, Material] = {}
    for name in names:
        fits = [exact[name]] if name in exact else [c for c in choices if fnmatchcase(name, c.volume)]
        if not fits:
            raise BlockError(
                "block.materials",
                f"volume {name!r} has no material",
                f"a line for each of: {', '.join(names)}",
                f'add {name} = "EN AC-42100 KT6", or a pattern such as "*"',
            )
        if len(fits) > 1:
            patterns = " and ".join(repr(c.volume) for c in fits)
            remedy = f"name {name} itself, or narrow a pattern"
            raise BlockError("block.materials", f"volume {name!r} fits {patterns}", "one material", remedy)
        used.add(fits[0].volume)
        chosen[name] = material(fits[0])
    for choice in choices:
        if choice.volume not in used and not any(fnmatchcase(name, choice.volume) for name in names):
            hint = nearest(choice.volume, names)
            raise BlockError(
                f"block.materials.{choice.volume}", f"no volume of this name. {hint}".strip(), ", ".join(names)
            )
    return chosen


def _point(xyz: Floats) -> str:
    return "(" + ", ".join(f"{value:.3f}" for value in xyz) + ") m"
