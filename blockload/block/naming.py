"""Names of face sets: those the solids carry, the interfaces between volumes, plane faces known by where they lie."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np

from ..arrays import Ints
from .shape import SIDES, VeeShape

INTERFACES = {
    frozenset(("block", "head_left")): "deck_left",
    frozenset(("block", "head_right")): "deck_right",
    frozenset(("block", "sump")): "joint_sump",
    frozenset(("block", "caps")): "joint_caps",
}
_TOLERANCE = 1e-3


def face_sets(shape: VeeShape, arrays: Mapping[str, Any]) -> dict[str, Ints]:
    """Return facet rows by set name; must run while the corners lie on the geometry [mm].

    A face of the geometry belongs to one set only, except that a set may gather faces of several volumes.
    """
    sides, facet_face = arrays["face_sides"], arrays["facet_face"]
    given = arrays["face_names"].tolist()
    volumes = arrays["volumes"].tolist()
    planes = _planes(shape)
    corners = arrays["points"][arrays["facet_corners"]]
    sets: dict[str, list[Ints]] = {}
    for face, (inside, outside) in enumerate(sides):
        rows = np.flatnonzero(facet_face == face)
        if rows.size == 0:
            continue
        owners = [volumes[i] for i in (inside, outside) if i >= 0]
        if len(owners) == 2:
            name = INTERFACES.get(frozenset(owners))
        elif given[face] not in ("", "default"):
            name = given[face]
        else:
            name = _plane_name(planes, owners[0], corners[rows].reshape(-1, 3))
        if name is not None:
            sets.setdefault(name, []).append(rows)
    return {name: np.sort(np.concatenate(rows)) for name, rows in sorted(sets.items())}


def _planes(shape: VeeShape) -> list[tuple[str, str, Ints, float]]:
    """Return (volume, set name, normal, offset) of the plane faces worth a name [mm]."""
    front, rear = 1e3 * (shape.front_x - shape.recess), 1e3 * (shape.rear_x + shape.recess)
    x, z = np.array([1.0, 0, 0]), np.array([0, 0, 1.0])
    planes = [
        ("sump", "sump_underside", z, 1e3 * shape.sump_z),
        ("block", "valley", z, 1e3 * shape.valley_z),
        ("sump", "sump_floor", z, 1e3 * (shape.sump_z + shape.sump_floor)),
    ]
    for volume in ("block", "sump", "head_left", "head_right"):
        planes += [(volume, f"{volume}_front", x, front), (volume, f"{volume}_rear", x, rear)]
    for side in SIDES:
        (ay, az), (cy, cz) = shape.bank_axes(side)
        along, across = np.array([0, ay, az]), np.array([0, cy, cz])
        base = 1e3 * shape.crank_z
        half = 1e3 * shape.head_half_width
        planes += [
            (f"head_{side}", f"head_{side}_top", along, 1e3 * (shape.deck + shape.head_height) + base * az),
            (f"head_{side}", f"head_{side}_outside", across, half + base * cz),
            (f"head_{side}", f"head_{side}_inside", across, -half + base * cz),
        ]
    return planes


def _plane_name(planes: list[tuple[str, str, Ints, float]], volume: str, corners: Any) -> str | None:
    for owner, name, normal, offset in planes:
        if owner == volume and np.all(np.abs(corners @ normal - offset) < _TOLERANCE):
            return name
    return None
