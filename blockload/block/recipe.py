"""From a shape to a named mesh of ten-node tetrahedra, the same every time.

The geometry kernel and the mesher run in a child process with a time limit, on a short ladder of settings. Back here
the elements are put in scikit-fem's order, faces get their names while the corner nodes still lie on the geometry,
curved elements that are invalid are straightened, and what was made is measured against the geometry.
"""

from __future__ import annotations

import json
import os
import subprocess
import sys
import tempfile
from collections.abc import Mapping
from dataclasses import asdict, dataclass
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from ..arrays import Ints
from ..errors import BlockError
from .curved import determinant_bound, scaled_jacobian, straightened
from .facets import named_mesh
from .moments import volumes as contents
from .naming import face_sets
from .shape import VeeShape

if TYPE_CHECKING:
    from skfem import MeshTet2

LADDER: tuple[dict[str, float], ...] = (
    {"grading": 0.3, "curvaturesafety": 1.5},
    {"grading": 0.5, "curvaturesafety": 1.0},
    {"grading": 0.7, "curvaturesafety": 0.8},
)
"""Mesher settings, tried in order until one gives a valid mesh."""
COARSE_LADDER = (LADDER[2], LADDER[1], LADDER[0])


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class MeshedShape:
    """A mesh [m] with its names, and `report`: what was asked, what came out (JSON types only)."""

    mesh: MeshTet2
    report: Mapping[str, Any]


def mesh_shape(shape: VeeShape, *, size: float, coarse: bool = False, time_limit: float = 300.0) -> MeshedShape:
    """Mesh a shape with elements of about `size` [m].

    `coarse` spends as few nodes as the geometry allows. Raises BlockError when no settings give a valid mesh.
    """
    failures = []
    for settings in COARSE_LADDER if coarse else LADDER:
        try:
            arrays = _child(shape, size, settings, time_limit)
            return _assembled(shape, arrays, {"size_m": size, **settings})
        except BlockError as error:
            failures.append(f"{settings}: {error.found}")
    raise BlockError("shape", "; ".join(failures), "a shape that can be meshed", "change a dimension by a few mm")


def _child(shape: VeeShape, size: float, settings: Mapping[str, float], time_limit: float) -> dict[str, Any]:
    with tempfile.TemporaryDirectory(prefix="blockload-mesh-") as folder:
        source, target = Path(folder, "shape.json"), Path(folder, "mesh.npz")
        order = {
            "shape": asdict(shape),
            "size": 1e3 * size,
            "settings": {**settings, "closeedgefac": None, "optsteps3d": 4},
        }
        source.write_text(json.dumps(order))
        command = [sys.executable, "-m", "blockload.block.child", str(source), str(target)]
        try:
            done = subprocess.run(
                command, capture_output=True, text=True, timeout=time_limit, check=False, env=_child_environment()
            )
        except subprocess.TimeoutExpired:
            raise BlockError("mesher", f"no mesh within {time_limit:.0f} s") from None
        if done.returncode != 0 or not target.exists():
            tail = (done.stderr or done.stdout).strip().splitlines()
            raise BlockError("mesher", f"stopped with code {done.returncode}: {tail[-1] if tail else 'no message'}")
        with np.load(target) as stored:
            return dict(stored)


def _child_environment() -> dict[str, str]:
    """Return our environment, with this very package found first by the child."""
    package = str(Path(__file__).resolve().parents[2])
    inherited = os.environ.get("PYTHONPATH")
    return {**os.environ, "PYTHONPATH": os.pathsep.join([package, *([inherited] if inherited else [])])}


def _assembled(shape: VeeShape, arrays: dict[str, Any], settings: dict[str, float]) -> MeshedShape:
    names = face_sets(shape, arrays)
    elements = arrays["elements"]
    points, moved = straightened(arrays["points"], elements)
    mesh = named_mesh(
        1e-3 * points,
        elements,
        arrays["facet_corners"],
        names,
        {name: arrays["volume_of"] == i for i, name in enumerate(arrays["volumes"])},
    )
    quality = scaled_jacobian(points, elements)
    volumes = contents(mesh, arrays["volume_of"], len(arrays["volumes"]))
    report = {
        "made_by": str(arrays["mesher"]),
        "settings": settings,
        "shape": asdict(shape),
        "nodes": int(mesh.doflocs.shape[1]),
        "elements": len(elements),
        "face_sets": {name: len(facets) for name, facets in sorted(names.items())},
        "cad_volume_m3": dict(zip(map(str, arrays["volumes"]), (1e-9 * arrays["cad_volume"]).tolist(), strict=True)),
        "mesh_volume_m3": dict(zip(map(str, arrays["volumes"]), volumes.tolist(), strict=True)),
        "mid_nodes_straightened": moved,
        "smallest_determinant_bound_m3": float(1e-9 * determinant_bound(points, elements).min()),
        "smallest_scaled_jacobian": float(quality.min()),
        "elements_below_0.1": int(np.sum(quality < 0.1)),
        "faces_at_worst_elements": _faces_at(elements[np.argsort(quality)[:10], :4], arrays, names),
    }
    return MeshedShape(mesh=mesh, report=report)


def _faces_at(worst: Ints, arrays: dict[str, Any], names: Mapping[str, Ints]) -> list[str]:
    touching = np.any(np.isin(arrays["facet_corners"], worst), axis=1)
    return sorted(name for name, rows in names.items() if np.any(touching[rows]))
