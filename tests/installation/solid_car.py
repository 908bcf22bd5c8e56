"""An elastic brick between the faces, mirror-symmetric, with pads of real facets: small enough to solve in a test."""

from __future__ import annotations

from dataclasses import replace
from functools import cache

import numpy as np
from installation.synthetic_car import FRONT_X, METAL, REAR_X, rest_of_engine
from installation.synthetic_car import case as any_case
from skfem import MeshTet, MeshTet2

from blockload.block.model import Attachment, Block
from blockload.case.model import Case
from blockload.response.model import Library
from blockload.response.respond import solve

FRONT = {"TL": (0.21, 0.41), "TR": (-0.21, 0.41), "BL": (0.15, 0.11), "BR": (-0.15, 0.11)}
REAR = {"TL": (0.21, 0.35), "TR": (-0.21, 0.35), "BL": (0.09, 0.11), "BR": (-0.09, 0.11)}


def case(**changes: object) -> Case:
    """The made-up car with studs at the middles of the brick's cells."""
    return any_case(**{"front": FRONT, "rear": REAR, **changes})  # type: ignore[arg-type]


@cache
def solved() -> tuple[Block, Library]:
    """The brick and its response library, solved once."""
    block = solid_block(case())
    return block, solve(block)


def solid_mesh() -> MeshTet2:
    """A brick of 60 mm cells, its right half the mirror image of its left half."""
    x, y, z = np.linspace(REAR_X, FRONT_X, 7), np.linspace(0.0, 0.24, 5), np.linspace(0.08, 0.44, 7)
    left = MeshTet.init_tensor(x, y, z)
    points = np.hstack([left.p, left.p * np.array([[1.0], [-1.0], [1.0]])])
    cells = np.hstack([left.t, left.t[[1, 0, 2, 3]] + left.p.shape[1]])
    _, first, inverse = np.unique(np.round(points, 9), axis=1, return_index=True, return_inverse=True)
    return MeshTet2.from_mesh(MeshTet(points[:, first], inverse.ravel()[cells]))


def solid_block(of: Case, *, yield_strength: float = 147e6) -> Block:
    """A real elastic brick: pads are the two triangles of one cell at each stud, mains two cells of the bottom."""
    mesh = solid_mesh()
    outer = mesh.boundary_facets()
    middles = mesh.p[:, mesh.facets[:, outer]].mean(axis=1)
    sets: dict[str, np.ndarray] = {}
    attachments = []

    def add(name: str, kind: str, centre: tuple[float, float, float], axis: int, sign: float, half: float) -> None:
        inside = np.abs(middles - np.array(centre)[:, None]) < half
        inside[axis] = np.abs(middles[axis] - centre[axis]) < 1e-9
        facets = outer[inside.all(axis=0)]
        label = name if kind == "other" else f"{kind}_{name}"
        sets[label] = facets
        attachments.append(real_attachment(mesh, name, kind, label, facets, sign * np.eye(3)[axis]))

    for stud in of.faces["front"].studs:
        add(stud.name, "front", (FRONT_X, *stud.at), 0, 1.0, 0.029)
    for stud in of.faces["rear"].studs:
        add(stud.name, "rear", (REAR_X, *stud.at), 0, -1.0, 0.029)
    add("mains", "other", (-1.8, 0.0, 0.08), 2, -1.0, 0.099)
    size = np.array([FRONT_X - REAR_X, 0.48, 0.36])
    cg = np.array([(FRONT_X + REAR_X) / 2, 0.0, 0.26])
    density = 500.0  # a brick is no casting: this brings 52 kg into its volume
    mass = density * float(size.prod())
    inertia = mass / 12.0 * np.diag((size**2).sum() - size**2)
    metal = replace(METAL, density=density, yield_strength=yield_strength, tensile_strength=1.4 * yield_strength)
    return Block(
        mesh=mesh.with_boundaries(sets),
        volumes=("block",),
        volume_of=np.zeros(mesh.nelements, dtype=np.int64),
        materials={"block": metal},
        attachments=tuple(attachments),
        sha256="0" * 64,
        mass=mass,
        cg=cg,
        inertia=inertia,
        metadata={},
        carried=(rest_of_engine(mass, cg, inertia),),
    )


def real_attachment(
    mesh: MeshTet2, name: str, kind: str, label: str, facets: np.ndarray, normal: np.ndarray
) -> Attachment:
    """Area, centroid and second moments of flat triangles, ∫ r rᵀ dA = A/12 (Σ vᵢvᵢᵀ + (Σvᵢ)(Σvᵢ)ᵀ)."""
    corners = mesh.p[:, mesh.facets[:, facets]].transpose(2, 1, 0)
    area = np.linalg.norm(np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]), axis=1) / 2
    centroid = area @ corners.mean(axis=1) / area.sum()
    arms = corners - centroid
    total = arms.sum(axis=1)
    squares = np.einsum("fvi,fvj->fij", arms, arms) + np.einsum("fi,fj->fij", total, total)
    return Attachment(
        name=name,
        kind=kind,
        sets=(label,),
        facets=facets,
        area=float(area.sum()),
        centroid=centroid,
        normal=normal,
        moments=np.einsum("f,fij->ij", area, squares) / 12.0,
    )
