"""Small invented blocks for tests: boxes of quadratic tetrahedra with pads at both ends."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from types import MappingProxyType

import numpy as np
from skfem import MeshTet, MeshTet2

from blockload.block.model import Attachment, Block, Material

ALUMINIUM = (71e9, 0.33, 2700.0, 21e-6)
STEEL = (210e9, 0.30, 7850.0, 12e-6)


def material(name: str = "aluminium", properties: tuple[float, float, float, float] = ALUMINIUM) -> Material:
    young, poisson, density, expansion = properties
    return Material(
        name=name,
        youngs_modulus=young,
        poissons_ratio=poisson,
        density=density,
        thermal_expansion=expansion,
        yield_strength=200e6,
        tensile_strength=250e6,
        bar_yield_strength=200e6,
        bar_tensile_strength=250e6,
        casting_knock_down=1.0,
        temperature=293.0,
        temperature_factor=1.0,
        cast=False,
        sources=MappingProxyType({}),
    )


def tetrahedra(x: Sequence[float], y: Sequence[float], z: Sequence[float]) -> MeshTet2:
    """A box of quadratic tetrahedra on these grid lines."""
    mesh = MeshTet.init_tensor(np.asarray(x, float), np.asarray(y, float), np.asarray(z, float))
    return MeshTet2.from_mesh(mesh)


def warped(mesh: MeshTet2, move: Callable[[np.ndarray], np.ndarray]) -> MeshTet2:
    """The same mesh with every node moved: middles follow the map, so elements become curved."""
    return MeshTet2(move(mesh.doflocs), mesh.t)


def attachment(mesh: MeshTet2, name: str, kind: str, facets: np.ndarray) -> Attachment:
    """An attachment of flat facets."""
    corners = mesh.doflocs[:, mesh.facets[:, facets]]
    normals = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0], axis=0) / 2
    inner = mesh.doflocs[:, mesh.t[:, mesh.f2t[0, facets]]].mean(axis=1)
    normals = normals * np.sign((normals * (corners.mean(axis=1) - inner)).sum(axis=0))
    areas = np.linalg.norm(normals, axis=0)
    centroid = (corners.mean(axis=1) * areas).sum(axis=1) / areas.sum()
    middles = (corners[:, [0, 1, 2]] + corners[:, [1, 2, 0]]) / 2 - centroid[:, None, None]
    moments = np.einsum("iaf,jaf,f->ij", middles, middles, areas / 3)
    normal = normals.sum(axis=1)
    return Attachment(
        name=name,
        kind=kind,
        sets=(name,),
        facets=np.asarray(facets, dtype=np.int64),
        area=float(areas.sum()),
        centroid=centroid,
        normal=normal / np.linalg.norm(normal),
        moments=moments,
    )


def block_of(
    mesh: MeshTet2,
    attachments: Sequence[Attachment],
    *,
    volume_of: np.ndarray | None = None,
    materials: Sequence[Material] | None = None,
) -> Block:
    """A block of one or several volumes; weighed by nobody, since the response weighs for itself."""
    materials = materials or (material(),)
    volumes = tuple(f"part_{index}" for index in range(len(materials)))
    return Block(
        mesh=mesh,
        volumes=volumes,
        volume_of=np.zeros(mesh.nelements, dtype=np.int64) if volume_of is None else volume_of,
        materials=MappingProxyType(dict(zip(volumes, materials, strict=True))),
        attachments=tuple(attachments),
        sha256="0" * 64,
        mass=float("nan"),
        cg=np.full(3, np.nan),
        inertia=np.full((3, 3), np.nan),
        metadata=MappingProxyType({}),
    )


def near(mesh: MeshTet2, axis: int, value: float, centre: Sequence[float], half: float) -> np.ndarray:
    """Facets of the plane `axis` = `value` whose corners lie within a square about `centre` (the other two axes)."""
    corners = mesh.doflocs[:, mesh.facets]
    others = [k for k in range(3) if k != axis]
    inside = np.abs(corners[axis] - value).max(axis=0) < 1e-9
    for k, middle in zip(others, centre, strict=True):
        inside &= np.abs(corners[k] - middle).max(axis=0) < half + 1e-9
    return np.flatnonzero(inside)


def box_block(*, cells: int = 1, two: bool = False, move: Callable[[np.ndarray], np.ndarray] | None = None) -> Block:
    """A 0.6 × 0.4 × 0.3 m box with four pads in front (x = 0), four behind and one on top."""
    x = np.linspace(-0.6, 0.0, 6 * cells + 1)
    y, z = np.linspace(-0.2, 0.2, 4 * cells + 1), np.linspace(0.0, 0.3, 3 * cells + 1)
    mesh = tetrahedra(x, y, z)
    pads = [
        (name, kind, near(mesh, 0, place, (across, up), 0.05))
        for kind, place in (("front", 0.0), ("rear", -0.6))
        for name, across, up in (("TL", 0.15, 0.25), ("TR", -0.15, 0.25), ("BL", 0.15, 0.05), ("BR", -0.15, 0.05))
    ]
    pads.append(("saddle", "other", near(mesh, 2, 0.3, (-0.3, 0.0), 0.1)))
    volume_of = (mesh.doflocs[0, mesh.t].mean(axis=0) < -0.3).astype(np.int64) if two else None
    materials = (material(), material("steel", STEEL)) if two else None
    if move is not None:
        mesh = warped(mesh, move)
    return block_of(mesh, [attachment(mesh, *pad) for pad in pads], volume_of=volume_of, materials=materials)
