"""What crosses a plane x = const inside the block, found from the field and not from the loads.

The mesh is parted along element faces: elements whose centre lies behind the plane, and the rest. The nodal forces
that the elements behind need at the nodes they share with the others, less the loads applied to them there, are what
the front part exerts on the rear part. Equilibrium says it equals minus all loads and inertia behind; a field that
does not solve the block's equations shows here.
Stress over the section is integrated over a slab with a smooth window w(x) of unit area: ∫σ_xx (z − z_c) w dV is the
virtual work of bending the slab as a beam does (v_x = (z − z_c)Φ, v_z = −∫Φ, Φ' = w, no other strain), so it equals
−M_sag of the slab, where a single plane would see the stress jump from element to element.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from ..arrays import Floats, Ints
from ..block.model import Block
from ..errors import BlockError
from .elements import Bools, Elements, elements_of, jacobians, quadrature, shapes, slopes
from .model import Library
from .relief import rigid_modes
from .spreading import unit_wrenches
from .stiffness import heat_loads, mass, stiffness

SLAB_ORDER = 7
SLAB_ELEMENTS = 4


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
    """Longitudinal stress in a slab about a plane, for k states.

    area [m²] and centroid (y, z) of the metal, averaged over the slab; force (k,) = ∫σ_xx dA [N]; about_y (k,) =
    ∫σ_xx (z − z_c) dA and about_z (k,) = ∫σ_xx (y − y_c) dA [N·m]; top and bottom (k,): mean σ_xx [Pa] of the highest
    and lowest fifth of the section's height.
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


def section_stress(
    block: Block, library: Library, weights: Floats, x: float, thickness: float | None = None
) -> SectionStress:
    """Integrate σ_xx over a slab about the plane `x` for states `weights` (k, U) or (U,).

    By default the slab is SLAB_ELEMENTS elements thick.
    """
    states = np.atleast_2d(weights).T
    elements = elements_of(block)
    reach = elements.points[elements.nodes[:, :4], 0]
    low, high = reach.min(axis=1), reach.max(axis=1)
    if thickness is None:
        cut = (low <= x) & (high > x)
        thickness = SLAB_ELEMENTS * float(np.median((high - low)[cut])) if cut.any() else 0.0
    chosen = np.flatnonzero((low < x + thickness / 2) & (high > x - thickness / 2))
    if not len(chosen):
        raise BlockError("section stress", f"the plane x = {x:.6g} m misses the block")
    some = elements.take(chosen)
    at, rule = quadrature(SLAB_ORDER)
    inverse, determinant = jacobians(some, at)
    place = np.einsum("qa,eai->eqi", shapes(at), some.points[some.nodes])
    away = np.abs(place[..., 0] - x) / (thickness / 2)
    window = np.where(away < 1, (1 + np.cos(np.pi * away)) / thickness, 0.0)
    stress = _sigma_xx(some, slopes(at)[None] @ inverse, library, states)
    inside = window.ravel() > 0
    return _statistics(
        stress.reshape(-1, states.shape[1])[inside],
        place.reshape(-1, 3)[inside, 1:],
        (window * determinant * rule).ravel()[inside],
    )


def _sigma_xx(elements: Elements, gradient: Floats, library: Library, states: Floats) -> Floats:
    """σ_xx (e, q, k) from the gradients (e, q, 10, 3) of the shape functions."""
    nodes, local = np.unique(elements.nodes, return_inverse=True)
    rows = (3 * nodes[:, None] + np.arange(3)).ravel()
    motion = (np.asarray(library.motion[rows]) @ states).reshape(len(nodes), 3, -1)
    strain = np.einsum("eqac,eack->eqck", gradient, motion[local.reshape(elements.nodes.shape)], optimize=True)
    lame, shear = elements.lame[:, None, None], elements.shear[:, None, None]
    heat = states[6 * len(library.attachments) + elements.volume_of][:, None, :]
    free = (3 * lame + 2 * shear) * elements.expansion[:, None, None] * heat
    result: Floats = lame * strain.sum(axis=2) + 2 * shear * strain[:, :, 0] - free
    return result


def _statistics(stress: Floats, place: Floats, area: Floats) -> SectionStress:
    total = float(area.sum())
    centroid = area @ place / total
    arm = place - centroid
    low, high = place[:, 1].min(), place[:, 1].max()
    fifth = (high - low) / 5
    top, bottom = area * (place[:, 1] > high - fifth), area * (place[:, 1] < low + fifth)
    return SectionStress(
        area=total,
        centroid=centroid,
        force=area @ stress,
        about_y=(area * arm[:, 1]) @ stress,
        about_z=(area * arm[:, 0]) @ stress,
        top=top @ stress / top.sum(),
        bottom=bottom @ stress / bottom.sum(),
    )
