"""A box of ten-node tetrahedra that stands in for a block: six pads, a saddle, two volumes, and the demo car's case.

The box fills x −2.12 to −1.50, y ±0.15, z 0.10 to 0.30 m: 0.0372 m³. Its pads are 50 mm squares in the corners of the
end faces, so every area, centroid and moment has a plain formula.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path
from typing import Any

import meshio
import numpy as np
from numpy.typing import NDArray

from blockload.block.curved import EDGES
from blockload.case.model import Case, MaterialChoice
from blockload.case.reading import read

DEMO = Path(__file__).parents[2] / "cases" / "demo.toml"
X = np.array([-2.12, -1.9, -1.7, -1.5])
Y = np.array([-0.15, -0.10, 0.0, 0.10, 0.15])
Z = np.array([0.10, 0.15, 0.25, 0.30])
STUDS = {"TL": (0.125, 0.275), "TR": (-0.125, 0.275), "BL": (0.125, 0.125)}
KUHN = np.array([[0, 1, 3, 7], [0, 1, 5, 7], [0, 4, 5, 7], [0, 4, 6, 7], [0, 2, 6, 7], [0, 2, 3, 7]])


@dataclass(frozen=True)
class Tiny:
    """Points (n, 3), elements (e, 10), faces (f, 6) by name and element numbers by volume name."""

    points: NDArray[np.float64]
    elements: NDArray[np.int64]
    faces: Mapping[str, NDArray[np.int64]]
    volumes: Mapping[str, NDArray[np.int64]] = field(default_factory=dict)


def tiny() -> Tiny:
    """Return the box with its names."""
    grid = np.stack(np.meshgrid(X, Y, Z, indexing="ij"), axis=-1)
    number = np.arange(X.size * Y.size * Z.size).reshape(X.size, Y.size, Z.size)
    corner = np.stack(
        [
            number[i : i + X.size - 1, j : j + Y.size - 1, k : k + Z.size - 1]
            for i in (0, 1)
            for j in (0, 1)
            for k in (0, 1)
        ],
        axis=-1,
    ).reshape(-1, 8)
    linear = corner[:, KUHN].reshape(-1, 4)
    points = grid.reshape(-1, 3)
    sides = points[linear[:, 1:]] - points[linear[:, :1]]
    left_handed = np.linalg.det(sides) < 0
    linear[left_handed] = linear[left_handed][:, [0, 2, 1, 3]]
    points, elements = second_order(points, linear)
    centre = points[elements[:, :4]].mean(axis=1)
    upper = centre[:, 2] > 0.25
    volumes = {"crankcase": np.flatnonzero(~upper), "head": np.flatnonzero(upper)}
    return Tiny(points, elements, _faces(points, elements), volumes)


def second_order(points: NDArray[Any], linear: NDArray[Any]) -> tuple[NDArray[Any], NDArray[Any]]:
    """Return points and elements with a node in the middle of every edge."""
    pairs = np.sort(linear[:, np.array(EDGES)], axis=2).reshape(-1, 2)
    unique, inverse = np.unique(pairs, axis=0, return_inverse=True)
    middles = points[unique].mean(axis=1)
    return np.vstack([points, middles]), np.hstack([linear, len(points) + inverse.reshape(-1, 6)])


def _faces(points: NDArray[Any], elements: NDArray[Any]) -> dict[str, NDArray[Any]]:
    local = np.array([[0, 2, 1, 6, 5, 4], [0, 1, 3, 4, 8, 7], [0, 3, 2, 7, 9, 6], [1, 2, 3, 5, 9, 8]])
    six = elements[:, local].reshape(-1, 6)
    middle = points[six[:, :3]].mean(axis=1)
    faces = {}
    for face, x in (("front", X[-1]), ("rear", X[0])):
        for name, (y, z) in STUDS.items():
            near = (abs(middle[:, 1] - y) < 0.025) & (abs(middle[:, 2] - z) < 0.025) & (abs(middle[:, 0] - x) < 1e-9)
            faces[f"pad_{face}_{name}"] = six[near]
    bottom = abs(middle[:, 2] - Z[0]) < 1e-9
    faces["main_1"] = six[bottom & (middle[:, 0] > -1.7)]
    faces["main_2"] = six[bottom & (middle[:, 0] < -1.9)]
    faces["underside"] = six[bottom]
    return faces


def write(tiny_block: Tiny, path: Path, *, scale: float = 1.0) -> Path:
    """Write an MSH 4.1 file whose named cell sets carry faces and volumes (scikit-fem's encoding in a VTU)."""
    from blockload.block.facets import named_mesh

    names = list(tiny_block.faces)
    corners = np.vstack([tiny_block.faces[name][:, :3] for name in names]) if names else np.zeros((0, 3), dtype=int)
    ends = np.cumsum([0, *(len(tiny_block.faces[name]) for name in names)])
    sets = {name: np.arange(ends[i], ends[i + 1]) for i, name in enumerate(names)}
    masks = {name: np.isin(np.arange(len(tiny_block.elements)), rows) for name, rows in tiny_block.volumes.items()}
    mesh = named_mesh(scale * tiny_block.points, tiny_block.elements, corners, sets, masks)
    mesh.save(path)
    return path


def write_cells(
    path: Path, points: NDArray[Any], cells: Mapping[str, NDArray[Any]], *, file_format: str | None = None, **names: Any
) -> Path:
    """Write cells of any kind by meshio."""
    meshio.Mesh(points, list(cells.items()), **names).write(path, file_format=file_format)
    return path


def case_for(mesh: Path, **changes: Any) -> Case:
    """Return the demo car's case with this mesh, the tiny box's studs and names; `changes` are BlockSpec fields."""
    case = read(DEMO)
    assert case.block is not None
    faces = {}
    for name, face in case.faces.items():
        studs = tuple(replace(face.studs[0], name=stud, at=np.array(at)) for stud, at in STUDS.items())
        faces[name] = replace(face, studs=studs)
    spec = {
        "mesh": mesh,
        "mesh_unit": 1.0,
        "turn": np.zeros(3),
        "place": np.zeros(3),
        "materials": (MaterialChoice(volume="*", grade="EN AC-42100 KT6", properties=None, temperature=None),),
        "front": {name: f"pad_front_{name}" for name in STUDS},
        "rear": {name: f"pad_rear_{name}" for name in STUDS},
        "other": {"main_bearings": "main_*"},
    }
    return replace(case, faces=faces, block=replace(case.block, **{**spec, **changes}))
