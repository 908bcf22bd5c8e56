"""The meshing child process: `python -m blockload.block.child SHAPE.json OUT.npz`.

netgen prints to standard output and can abort its process, so it never runs in ours. This file's only words are an
exit code and one npz: points [mm], tets (1-based numbers made 0-based, VTK order), facet corners, the face of each
facet, and per face its name and the two volumes it separates.
"""

from __future__ import annotations

import json
import math
import sys
from pathlib import Path
from typing import Any

import netgen
import numpy as np
from netgen.occ import OCCGeometry

from .shape import VeeShape, shape_from
from .solids import build, curved_radii, glued

TO_VTK = [0, 2, 1, 3, 5, 7, 4, 6, 9, 8]
"""netgen's mid nodes (01)(02)(03)(12)(13)(23) to (01)(12)(02)(03)(13)(23), corners 1, 2 swapped: all come negative."""

CURVED_SIZE = 0.47
"""Element size on a curved face over its radius: thirteen curved sides around, the area true to 1e-5."""


def mesh_arrays(shape: VeeShape, size: float, settings: dict[str, Any]) -> dict[str, Any]:
    """Return the arrays of the mesh of this shape; `size` in mm."""
    solids = build(shape)
    compound = glued(solids, shape)
    for edge in compound.edges:
        chord = math.dist(tuple(edge.start), tuple(edge.end))
        if abs(edge.mass - chord) > 1e-6 * edge.mass:
            edge.maxh = min(size, edge.mass / 3.0)
    for face in compound.faces:
        for kind, radius in curved_radii(shape).items():
            if (face.name or "").startswith(kind):
                face.maxh = min(size, CURVED_SIZE * radius)
    mesh = OCCGeometry(compound).GenerateMesh(maxh=size, segmentsperedge=1, **settings)
    facets = mesh.Elements2D().NumPy()
    corners, faces = facets["nodes"][:, :3].astype(np.int64) - 1, facets["index"].astype(np.int64) - 1
    mesh.SecondOrder()
    tets = mesh.Elements3D().NumPy()
    nodes = tets["nodes"].astype(np.int64) - 1
    descriptors = [mesh.FaceDescriptor(i + 1) for i in range(int(faces.max()) + 1)]
    volumes = sorted(solids)
    materials = [mesh.GetMaterial(i + 1) for i in range(int(tets["index"].max()))]
    return {
        "points": np.array(mesh.Coordinates()),
        "elements": nodes[:, TO_VTK],
        "volume_of": np.array([volumes.index(m) for m in materials])[tets["index"] - 1],
        "volumes": np.array(volumes),
        "cad_volume": np.array([solids[name].mass for name in volumes]),
        "facet_corners": corners,
        "facet_face": faces,
        "face_names": np.array([d.bcname for d in descriptors]),
        "face_sides": np.array(
            [[_side(d.domin, materials, volumes), _side(d.domout, materials, volumes)] for d in descriptors]
        ),
        "mesher": np.array(f"netgen {netgen.__version__}"),
    }


def _side(domain: int, materials: list[str], volumes: list[str]) -> int:
    return volumes.index(materials[domain - 1]) if domain > 0 else -1


def main(arguments: list[str]) -> int:
    """Read the shape and settings, mesh, write; the exit code is the whole conversation."""
    source, target = map(Path, arguments)
    order = json.loads(source.read_text())
    np.savez(target, **mesh_arrays(shape_from(order["shape"]), order["size"], order["settings"]))
    return 0


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
