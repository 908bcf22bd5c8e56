"""What crosses a plane x = const inside the block, found from the field and not from the loads.

The mesh is parted along element faces: elements whose centre lies behind the plane, and the rest. The nodal forces
that the elements behind need at the nodes they share with the others, less the loads applied to them there, are what
the front part exerts on the rear part. Equilibrium says it equals minus all loads and inertia behind; a field that
does not solve the block's equations shows here.
Stress on the exact plane comes from cutting every tetrahedron; its mean and first moment belong to beam theory's
section: Σ σ_xx (z − z_c) dA = −M_sag.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import Floats, Ints
from ..block.model import Block
from ..errors import BlockError
from .elements import Bools, Elements, elements_of, slopes
from .model import Library
from .recovery import hooke
from .relief import rigid_modes
from .spreading import unit_wrenches
from .stiffness import heat_loads, mass, stiffness

CUT_ORDER = 6


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class SectionCut:
    """Force and moment (k, 6) of the front part on the rear part about the reference, for k states.

    `found` from element nodal forces, `expected` from attachment wrenches and inertia behind; mass [kg] and cg (3,)
    of the metal behind. In the signs of a section: N, V_y, V_z, T = the first four, M_sag, M_lat = minus the others.
    """

    found: Floats
    expected: Floats
    mass: float
    cg: Floats


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class SectionStress:
    """Longitudinal stress on an exact plane, for k states.

    area [m²] and centroid (y, z) of the metal cut; force (k,) = ∫σ_xx dA [N]; about_y (k,) = ∫σ_xx (z − z_c) dA and
    about_z (k,) = ∫σ_xx (y − y_c) dA [N·m]; top and bottom (k,): mean σ_xx [Pa] of the highest and lowest fifth of
    the section's height.
    """

    area: float
    centroid: Floats
    force: Floats
    about_y: Floats
    about_z: Floats
    top: Floats
    bottom: Floats


def section_cut(block: Block, library: Library, weights: Floats, x: float, reference: Floats) -> SectionCut:
    """Resultant of element nodal forces across the plane `x` for states `weights` (k, U) or (U,)."""
    states = np.atleast_2d(weights).T
    elements = elements_of(block)
    behind = elements.points[elements.nodes[:, :4], 0].mean(axis=1) < x
    if behind.all() or not behind.any():
        low, high = elements.points[:, 0].min(), elements.points[:, 0].max()
        raise BlockError("section cut", f"x = {x:.6g} m", f"a plane within the block, {low:.6g} to {high:.6g} m")
    rear = elements.take(np.flatnonzero(behind))
    shared = _touched(elements, behind) & _touched(elements, ~behind)
    edge = rear.take(np.flatnonzero(shared[rear.nodes].any(axis=1)))
    internal = stiffness(edge) @ (library.motion @ states)
    units = 6 * len(library.attachments)
    internal -= heat_loads(edge, len(library.volumes)) @ states[units:]
    inertia = mass(rear)
    external = _behind(block, library, states[:units], behind, inertia)
    weight = np.asarray(inertia.sum(axis=1)).ravel()
    nodes = np.flatnonzero(shared)
    found = _resultant(elements.points, (internal - external).reshape(len(shared), 3, -1), nodes, reference)
    loaded = np.arange(len(shared))
    return SectionCut(
        found=found,
        expected=-_resultant(elements.points, external.reshape(len(shared), 3, -1), loaded, reference),
        mass=float(weight.sum()),
        cg=weight @ elements.points / weight.sum(),
    )


def _touched(elements: Elements, chosen: Bools) -> Bools:
    touched = np.zeros(len(elements.points), dtype=np.bool_)
    touched[elements.nodes[chosen]] = True
    return touched


def _behind(block: Block, library: Library, wrenches: Floats, behind: Bools, inertia: object) -> Floats:
    """Loads (3N, k) on the elements behind: their share of the attachments' tractions, and d'Alembert's forces."""
    count = block.mesh.doflocs.shape[1]
    loads = np.zeros((count, 3, wrenches.shape[1]))
    for index, attachment in enumerate(block.attachments):
        part = behind[block.mesh.f2t[0, attachment.facets]]
        if part.any():
            nodal, nodes, _ = unit_wrenches(block, attachment, part)
            loads[nodes] += nodal @ wrenches[6 * index : 6 * index + 6]
    total = library.rigid_modes().T @ wrenches
    total[3:] -= np.cross(library.cg, total[:3], axisb=0).T
    motion = np.vstack([total[:3] / library.mass, np.linalg.solve(library.inertia, total[3:])])
    acceleration = rigid_modes(block.mesh.doflocs.T, library.cg) @ motion
    loads -= (inertia @ acceleration.reshape(count, -1)).reshape(loads.shape)  # type: ignore[operator]
    return loads.reshape(3 * count, -1)


def _resultant(points: Floats, loads: Floats, nodes: Ints, reference: Floats) -> Floats:
    """Force and moment (k, 6) of nodal loads (N, 3, k) at these nodes about the reference."""
    chosen = loads[nodes].transpose(2, 0, 1)
    moment = np.cross(points[nodes] - reference, chosen).sum(axis=1)
    return np.concatenate([chosen.sum(axis=1), moment], axis=1)


def section_stress(block: Block, library: Library, weights: Floats, x: float) -> SectionStress:
    """Integrate σ_xx over the plane `x` for states `weights` (k, U) or (U,); curved edges are cut as straight."""
    states = np.atleast_2d(weights).T
    elements = elements_of(block)
    owner, bary = plane_cut(elements, x)
    if not len(owner):
        raise BlockError("section stress", f"the plane x = {x:.6g} m misses the block")
    some = elements.take(owner)
    corners = np.einsum("tvc,tci->tvi", bary, some.points[some.nodes[:, :4]])
    size = np.linalg.norm(np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0]), axis=1)
    stress, place, area = [], [], []
    for at, weight in _triangle_rule(CUT_ORDER):
        point = np.einsum("v,tvc->tc", at, bary)
        stress.append(_sigma_xx(some, point[:, 1:], library, states))
        place.append(np.einsum("v,tvi->ti", at, corners))
        area.append(size * weight)
    return _statistics(np.concatenate(stress), np.concatenate(place)[:, 1:], np.concatenate(area))


def plane_cut(elements: Elements, x: float) -> tuple[Ints, Floats]:
    """Triangles of the plane's cut: the element (t,) of each, and its corners' barycentric coordinates (t, 3, 4)."""
    distance = elements.points[elements.nodes[:, :4], 0] - x
    order = np.argsort(distance, axis=1)
    behind = (distance < 0).sum(axis=1)
    owners, corners = [], []
    for count, edges in (
        (1, ((0, 1), (0, 2), (0, 3))),
        (3, ((3, 0), (3, 1), (3, 2))),
        (2, ((0, 2), (0, 3), (1, 3))),
        (2, ((0, 2), (1, 3), (1, 2))),
    ):
        chosen = np.flatnonzero(behind == count)
        bary = np.zeros((len(chosen), 3, 4))
        rows = np.arange(len(chosen))
        for k, (i, j) in enumerate(edges):
            first, second = order[chosen, i], order[chosen, j]
            low, high = distance[chosen, first], distance[chosen, second]
            share = low / (low - high)
            bary[rows, k, first] = 1 - share
            bary[rows, k, second] = share
        owners.append(chosen)
        corners.append(bary)
    return np.concatenate(owners), np.concatenate(corners)


def _triangle_rule(order: int) -> list[tuple[Floats, float]]:
    """Barycentric points (3,) and weights (of twice the area, summing to a half) of a rule on the triangle."""
    from skfem.quadrature import get_quadrature
    from skfem.refdom import RefTri

    at, weights = get_quadrature(RefTri, order)
    bary = np.column_stack([1 - at.sum(axis=0), at.T])
    return [(row, float(weight)) for row, weight in zip(bary, weights, strict=True)]


def _sigma_xx(elements: Elements, at: Floats, library: Library, states: Floats) -> Floats:
    """σ_xx (t, k) of each element at its own reference point (t, 3)."""
    slope = slopes(at)
    jacobian = np.einsum("tai,tap->tip", elements.points[elements.nodes], slope)
    gradient = np.einsum("tap,tpi->tai", slope, np.linalg.inv(jacobian))
    rows = 3 * elements.nodes[:, :, None] + np.arange(3)
    nodes, inverse = np.unique(rows, return_inverse=True)
    motion = (np.asarray(library.motion[nodes]) @ states)[inverse.reshape(rows.shape)]
    full = np.einsum("tad,tack->tkdc", gradient, motion)
    stress = hooke(full, elements.lame[:, None], elements.shear[:, None])[..., 0]
    heat = states[6 * len(library.attachments) + elements.volume_of]
    free: Floats = stress - ((3 * elements.lame + 2 * elements.shear) * elements.expansion)[:, None] * heat
    return free


def _statistics(stress: Floats, place: Floats, area: Floats) -> SectionStress:
    total = float(area.sum())
    centroid = area @ place / total
    arm = place - centroid
    low, high = place[:, 1].min(), place[:, 1].max()
    fifth = (high - low) / 5
    top, bottom = place[:, 1] > high - fifth, place[:, 1] < low + fifth
    return SectionStress(
        area=total,
        centroid=centroid,
        force=area @ stress,
        about_y=(area * arm[:, 1]) @ stress,
        about_z=(area * arm[:, 0]) @ stress,
        top=(area * top) @ stress / (area * top).sum(),
        bottom=(area * bottom) @ stress / (area * bottom).sum(),
    )
