"""Spreading a wrench over an attachment: no point loads, no rigid spider.

A wrench (F, Mo about c) enters as the traction t(x) = a + b × (x − c). With A = ∫dA, s = ∫(x − c)dA and
I = ∫(|r|²1 − r rᵀ)dA its resultant is F = A a + b × s and Mo = s × a + I b; the 6×6 system gives (a, b).
The nodal loads P = ∫ N t dA are work-conjugate to the attachment's motion d = Pᵀu, an average over its area.
Facets carry six nodes and may be curved; the rule used is of order 8 and the check re-integrates with order 6.
"""

from __future__ import annotations

import numpy as np

from ..arrays import Floats, Ints
from ..block.model import Attachment, Block
from ..errors import BlockError
from .elements import EDGES, Bools

SPREAD_ORDER = 8
CHECK_ORDER = 10
_EDGE_OF_CORNERS = ((0, 1), (1, 2), (0, 2))


def facet_nodes(block: Block, facets: Ints) -> Ints:
    """Six nodes of each facet (f, 6): corners, then the middles of (01) (12) (02)."""
    mesh = block.mesh
    corners = mesh.facets[:, facets]
    elements = mesh.f2t[0, facets]
    nodes = mesh.dofs.element_dofs[:, elements]
    local = np.stack([(nodes[:4] == corner).argmax(axis=0) for corner in corners])
    middle_of = np.zeros((4, 4), dtype=np.int64)
    for k, (i, j) in enumerate(EDGES):
        middle_of[i, j] = middle_of[j, i] = 4 + k
    columns = np.arange(len(elements))
    middles = [nodes[middle_of[local[i], local[j]], columns] for i, j in _EDGE_OF_CORNERS]
    return np.stack([*corners, *middles], axis=1).astype(np.int64)


def unit_wrenches(block: Block, attachment: Attachment, part: Bools | None = None) -> tuple[Floats, Ints, Floats]:
    """Nodal loads of six unit wrenches about the attachment's centroid, or what `part` (f,) of its facets takes.

    Returns the loads (k, 3, 6) [N per N, N per N·m], the nodes (k,) they act on, and the wrenches (6, 6) found by
    integrating the same tractions again with another quadrature (the identity where the facets are flat).
    """
    nodes = facet_nodes(block, attachment.facets)
    points = block.mesh.doflocs.T[nodes]
    shape, arm, area = _samples(points, attachment.centroid, SPREAD_ORDER)
    moments = _resultant(_traction_basis(arm), arm, area)
    if np.linalg.cond(_scaled(moments)) > 1e12:
        where = f"attachment {attachment.name} ({attachment.kind})"
        raise BlockError(where, "its facets cannot carry a wrench", "facets that enclose an area", "name other faces")
    coefficients = np.linalg.inv(moments)
    traction = _traction_basis(arm) @ coefficients
    nodal = np.einsum("qa,fqik,fq->faik", shape, traction, area)
    if part is not None:
        nodes, nodal = nodes[part], nodal[part]
    used, inverse = np.unique(nodes, return_inverse=True)
    loads = np.zeros((len(used), 3, 6))
    np.add.at(loads, inverse.reshape(nodes.shape), nodal)
    _, arm, area = _samples(points, attachment.centroid, CHECK_ORDER)
    again = _resultant(_traction_basis(arm) @ coefficients, arm, area)
    return loads, used, again


def _samples(points: Floats, centre: Floats, order: int) -> tuple[Floats, Floats, Floats]:
    """Shape functions (q, 6), arms from the centre (f, q, 3) and areas (f, q) at the quadrature points."""
    from skfem.quadrature import get_quadrature
    from skfem.refdom import RefTri

    at, weights = get_quadrature(RefTri, order)
    bary = np.column_stack([1 - at.sum(axis=0), at.T])
    change = np.array([[-1.0, -1.0], [1.0, 0.0], [0.0, 1.0]])
    pairs = _EDGE_OF_CORNERS
    shape = np.column_stack([bary * (2 * bary - 1), *(4 * bary[:, i] * bary[:, j] for i, j in pairs)])
    slope = [(4 * bary - 1)[:, :, None] * change]
    slope += [4 * (bary[:, [i]] * change[j] + bary[:, [j]] * change[i])[:, None, :] for i, j in pairs]
    tangent = np.einsum("fai,qad->fqid", points, np.concatenate(slope, axis=1))
    area = np.linalg.norm(np.cross(tangent[..., 0], tangent[..., 1]), axis=-1) * weights
    return shape, np.einsum("fai,qa->fqi", points, shape) - centre, area


def _traction_basis(arm: Floats) -> Floats:
    """Traction (..., 3, 6) for unit a and b: the identity beside b ↦ b × r."""
    basis = np.zeros((*arm.shape[:-1], 3, 6))
    basis[..., (0, 1, 2), (0, 1, 2)] = 1.0
    basis[..., (0, 1, 2), (4, 5, 3)] = arm[..., (2, 0, 1)]
    basis[..., (0, 1, 2), (5, 3, 4)] = -arm[..., (1, 2, 0)]
    return basis


def _resultant(traction: Floats, arm: Floats, area: Floats) -> Floats:
    """Force and moment (6, k) of k tractions (f, q, 3, k)."""
    force = np.einsum("fqik,fq->ik", traction, area)
    moment = np.einsum("fqik,fq->ik", np.cross(arm[..., None], traction, axisa=2, axisb=2, axisc=2), area)
    result: Floats = np.concatenate([force, moment])
    return result


def _scaled(moments: Floats) -> Floats:
    """The 6×6 system in units of its own radius, so that its condition means shape and not size."""
    radius = np.sqrt(np.trace(moments[3:, 3:]) / max(3 * moments[0, 0], np.finfo(float).tiny))
    scale = np.array([1.0] * 3 + [1.0 / max(radius, np.finfo(float).tiny)] * 3)
    result: Floats = moments * scale[:, None] * scale / max(moments[0, 0], np.finfo(float).tiny)
    return result
