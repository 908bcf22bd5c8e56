"""From the case to the block: read the mesh, put it in the car, check it, hang names, materials and masses on it."""

from __future__ import annotations

import hashlib
from dataclasses import replace
from types import MappingProxyType
from typing import TYPE_CHECKING, Any, TypeVar

import numpy as np

from ..arrays import Floats, Ints
from ..case.model import BlockSpec, Case
from ..errors import BlockError
from .attachments import area_notes, attach
from .carried import carried_masses
from .curved import EDGES, determinant_bound, least_determinant, scaled_jacobian
from .facets import facet_numbers
from .model import AnyBlock, Block
from .moments import MassProperties, mass_properties, volumes
from .reading import RawBlock, read_mesh
from .volumes import assign, partition

if TYPE_CHECKING:
    from skfem import MeshTet2

SIZE_BAND = (0.15, 3.0)
"""Largest dimension of an engine block that is believed [m] (our choice)."""
AnyBlockT = TypeVar("AnyBlockT", bound=AnyBlock)
_UNITS = {"mm": 1e-3, "cm": 1e-2, "in": 0.0254, "m": 1.0}


def build(case: Case) -> Block:
    """Return the block of a case in car axes [m].

    Raises BlockError for a mesh that cannot be used, each kind of trouble with its own message.
    """
    spec = case.block
    if spec is None:
        raise BlockError("block", "the case has no [block]", "block.mesh")
    if spec.mesh is None:
        raise BlockError("block.mesh", "the case names no mesh", "a mesh file")
    raw = read_mesh(spec.mesh)
    where = str(spec.mesh)
    points = placed(raw.points, spec)
    _check_size(where, raw.points, points, spec.mesh_unit)
    _check_order(where, points, raw.elements)
    _check_inverted(where, points, raw.elements)
    _check_ground(where, points)
    centres = points[raw.elements[:, :4]].mean(axis=1)
    names, volume_of, left_out = partition(where, raw.volumes, centres)
    materials = assign(names, spec.materials)
    mesh = _mesh(points, raw, names, volume_of)
    attachments = attach(mesh, spec, case.faces)
    metal = mass_properties(mesh, np.array([materials[name].density for name in names])[volume_of])
    block = Block(
        mesh=mesh,
        volumes=names,
        volume_of=volume_of,
        materials=MappingProxyType(materials),
        attachments=attachments,
        sha256=hashlib.sha256(spec.mesh.read_bytes()).hexdigest(),
        mass=metal.mass,
        cg=metal.cg,
        inertia=metal.inertia,
        metadata=MappingProxyType(
            {
                "file": spec.mesh.name,
                "orphan_points_dropped": raw.orphans,
                "sets_left_out": left_out,
                "volume_m3": dict(zip(names, volumes(mesh, volume_of, len(names)).tolist(), strict=True)),
                "pads_of_unusual_area": area_notes(attachments, case.faces),
                **_quality(points, raw.elements),
            }
        ),
        carried=(),
    )
    return recarried(block, case)


def recarried(block: AnyBlockT, case: Case) -> AnyBlockT:
    """Return the block with the carried masses that this case's engine leaves to it (the metal stays as meshed).

    Raises BlockError where engine and mesh contradict each other.
    """
    if case.block is None:
        return block
    metal = MassProperties(mass=block.mass, cg=block.cg, inertia=block.inertia)
    carried = carried_masses(case.bodies["engine"], metal, case.block.carried, case.block.carried_on)
    return replace(block, carried=carried)


def placed(points: Floats, spec: BlockSpec) -> Floats:
    """Return mesh points in the car: p_car = Rz Ry Rx (unit p) + place."""
    return np.asarray(spec.mesh_unit * points @ turning(spec.turn).T + spec.place)


def turning(angles: Floats) -> Floats:
    """Return Rz Ry Rx of three angles about x, y and z [rad], (3, 3)."""
    (a, b, c), (sa, sb, sc) = np.cos(angles), np.sin(angles)
    about_x = np.array([[1, 0, 0], [0, a, -sa], [0, sa, a]])
    about_y = np.array([[b, 0, sb], [0, 1, 0], [-sb, 0, b]])
    about_z = np.array([[c, -sc, 0], [sc, c, 0], [0, 0, 1]])
    return np.asarray(about_z @ about_y @ about_x)


def _mesh(points: Floats, raw: RawBlock, names: tuple[str, ...], volume_of: Ints) -> MeshTet2:
    from skfem import MeshTet2

    mesh = MeshTet2(np.ascontiguousarray(points.T), np.ascontiguousarray(raw.elements.T))
    renumbered = np.full(len(points), -1)
    renumbered[raw.elements[:, :4].T.ravel()] = mesh.t.ravel()
    bits = 1 << np.arange(4)[:, None]
    sets = {name: np.unique(mesh.t2f[(bits & mask) > 0]) for name, mask in raw.coded_faces.items()}
    for name, corners in raw.faces.items():
        if name not in sets:
            sets[name] = np.unique(facet_numbers(mesh, renumbered[corners]))
    solids = {name: np.flatnonzero(volume_of == i) for i, name in enumerate(names)}
    return mesh.with_boundaries({name: rows.astype(np.int32) for name, rows in sets.items()}).with_subdomains(solids)


def _check_size(where: str, raw: Floats, points: Floats, unit: float) -> None:
    size = float(np.ptp(points, axis=0).max())
    if SIZE_BAND[0] <= size <= SIZE_BAND[1]:
        return
    largest = float(np.ptp(raw, axis=0).max())
    fits = [name for name, factor in _UNITS.items() if SIZE_BAND[0] <= factor * largest <= SIZE_BAND[1]]
    guess = f'mesh_unit is probably "{fits[0]}"' if fits else "check mesh_unit and the mesh"
    now = next((name for name, factor in _UNITS.items() if factor == unit), f"{unit:g} m")
    raise BlockError(
        where,
        f"the block is {size:.4g} m long, read in {now}",
        f"{SIZE_BAND[0]:g} to {SIZE_BAND[1]:g} m",
        guess,
    )


def _check_order(where: str, points: Floats, elements: Ints) -> None:
    """Mid nodes lie near the middles of their edges; a wrong node order puts them at another edge's."""
    ends = points[elements[:, :4]][:, np.array(EDGES)]
    chord = np.linalg.norm(ends[:, :, 1] - ends[:, :, 0], axis=2)
    off = np.linalg.norm(points[elements[:, 4:]] - ends.mean(axis=2), axis=2)
    wrong = np.flatnonzero(np.any(off > 0.45 * chord, axis=1))
    if wrong.size:
        at = _where(points, elements[wrong[:1]])
        raise BlockError(
            where,
            f"{wrong.size} of {len(elements)} elements have mid nodes away from the middle of their edges, one at {at}",
            "ten-node tetrahedra with mid nodes of edges 12 23 13 14 24 34, in this order",
            "check the export's node order",
        )


def _check_inverted(where: str, points: Floats, elements: Ints) -> None:
    least = least_determinant(points, elements)
    bad = np.flatnonzero(least <= 0.0)
    if bad.size == 0:
        return
    worst = bad[np.argsort(least[bad])[:3]]
    everything = bad.size == len(elements)
    raise BlockError(
        where,
        f"{bad.size} of {len(elements)} elements are inverted or flat, the worst at {_where(points, elements[worst])}",
        "a positive Jacobian determinant everywhere",
        "the mesh is mirrored or its nodes are numbered left-handed; mirror it back or export it again"
        if everything
        else "repair the mesh there: straighten its curved edges or mesh finer",
    )


def _check_ground(where: str, points: Floats) -> None:
    lowest = int(np.argmin(points[:, 2]))
    if points[lowest, 2] < 0.0:
        at = "(" + ", ".join(f"{value:.3f}" for value in points[lowest]) + ") m"
        raise BlockError(
            where,
            f"the block reaches {-1e3 * points[lowest, 2]:.1f} mm below the ground, at {at}",
            "z ≥ 0 everywhere in the car",
            "check block.place, block.turn and mesh_unit",
        )


def _where(points: Floats, elements: Ints) -> str:
    centres = points[elements[:, :4]].mean(axis=1)
    return ", ".join("(" + ", ".join(f"{value:.3f}" for value in centre) + ") m" for centre in centres)


def _quality(points: Floats, elements: Ints) -> dict[str, Any]:
    shape = scaled_jacobian(points, elements)
    return {
        "smallest_scaled_jacobian": float(shape.min()),
        "elements_below_0.1": int(np.sum(shape < 0.1)),
        "elements_not_proved_valid": int(np.sum(determinant_bound(points, elements) <= 0.0)),
    }
