"""Stress at the surface from displacements, volume by volume.

Displacement gradients are taken at the four points of the order-2 rule, where those of quadratic tetrahedra are most
accurate, carried linearly to the element's nodes (Zienkiewicz, Taylor & Zhu, The Finite Element Method, 7th ed. 2013,
chapter 15), and averaged at each node over the elements of one volume, weighted by element volume. All nine
gradients of an entry are one sparse operator on the displacements; six stress components follow from Hooke's law,
and never an invariant is averaged. A node on two volumes has two entries: no average crosses a change of material.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from ..arrays import Floats, Ints
from ..block.model import Block
from .elements import EDGES, Elements, chunks, jacobians, quadrature, slopes
from .spreading import facet_nodes

RECOVERY_ORDER = 2


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Surface:
    """The block's outside: nodes (n,) into the mesh, triangles (t, 3) into them, their volume (t,), entries (m,)."""

    nodes: Ints
    triangles: Ints
    triangle_volume: Ints
    entry_node: Ints
    entry_volume: Ints


def surface_of(block: Block) -> Surface:
    """Cut every outer facet of six nodes into four triangles, wound so that normals point outward."""
    facets = block.mesh.boundary_facets()
    six = _wound(block, facets, facet_nodes(block, facets))
    volume = np.asarray(block.volume_of, dtype=np.int64)[block.mesh.f2t[0, facets]]
    nodes, inverse = np.unique(six, return_inverse=True)
    six = inverse.reshape(six.shape)
    triangles = six[:, [[0, 3, 5], [3, 1, 4], [5, 4, 2], [3, 4, 5]]].reshape(-1, 3)
    inside = block.mesh.dofs.element_dofs
    number = np.full(block.mesh.doflocs.shape[1], -1)
    number[nodes] = np.arange(len(nodes))
    local = number[inside]
    pairs = np.unique(local * len(block.volumes) + np.asarray(block.volume_of)[None, :])
    pairs = pairs[pairs >= 0]
    return Surface(
        nodes=nodes,
        triangles=triangles,
        triangle_volume=np.repeat(volume, 4),
        entry_node=pairs // len(block.volumes),
        entry_volume=pairs % len(block.volumes),
    )


def _wound(block: Block, facets: Ints, six: Ints) -> Ints:
    """Turn facets whose normal points into their element."""
    points = block.mesh.doflocs.T
    corners = points[six[:, :3]]
    inner = points[block.mesh.t[:, block.mesh.f2t[0, facets]].T].mean(axis=1)
    normal = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    inward = np.einsum("fi,fi->f", normal, corners.mean(axis=1) - inner) < 0
    turned = six.copy()
    turned[inward] = six[inward][:, [0, 2, 1, 5, 4, 3]]
    return turned


def to_nodes() -> Floats:
    """Linear extrapolation (10, 4) from the four quadrature points to the ten nodes of an element."""
    at, _ = quadrature(RECOVERY_ORDER)
    inverse = np.linalg.inv(np.column_stack([1 - at.sum(axis=1), at]))
    corners = np.eye(4)
    middles = [(corners[i] + corners[j]) / 2 for i, j in EDGES]
    result: Floats = np.vstack([corners, middles]) @ inverse
    return result


def gradients(elements: Elements) -> tuple[Floats, Floats]:
    """Nodal gradient operators (E, 10 at, 10 of, 3) of the elements, and element volumes (E,)."""
    at, weights = quadrature(RECOVERY_ORDER)
    inverse, determinant = jacobians(elements, at)
    at_points = slopes(at)[None] @ inverse
    nodal = np.einsum("tq,eqai->etai", to_nodes(), at_points, optimize=True)
    return nodal, determinant @ weights


def gradient_operator(elements: Elements, surface: Surface, volumes: int) -> Any:
    """Sparse operator (3m, N) giving ∂/∂x, ∂/∂y, ∂/∂z (row 3·entry + direction) of a nodal field at the entries."""
    from scipy import sparse

    count, entries = len(elements.points), len(surface.entry_node)
    entry_at = np.full(count * volumes, -1, dtype=np.int64)
    entry_at[surface.nodes[surface.entry_node] * volumes + surface.entry_volume] = np.arange(entries)
    entry = entry_at[elements.nodes * volumes + elements.volume_of[:, None]]
    touching = np.flatnonzero((entry >= 0).any(axis=1))
    total = sparse.csr_array((3 * entries, count))
    weight = np.zeros(entries)
    for part in chunks(len(touching), 8 * 900):
        some = elements.take(touching[part])
        nodal, size = gradients(some)
        element, place = np.nonzero(entry[touching[part]] >= 0)
        target = entry[touching[part]][element, place]
        weight += np.bincount(target, size[element], entries)
        values = nodal[element, place] * size[element, None, None]
        rows = np.broadcast_to(3 * target[:, None, None] + np.arange(3), values.shape)
        columns = np.broadcast_to(some.nodes[element][:, :, None], values.shape)
        total = total + sparse.coo_array((values.ravel(), (rows.ravel(), columns.ravel())), shape=total.shape).tocsr()
    return sparse.diags_array(np.repeat(1 / weight, 3)) @ total


def hooke(gradient: Floats, lame: Floats, shear: Floats) -> Floats:
    """Stress (..., 6) xx yy zz xy yz xz from gradients (..., 3, 3) [direction, component]; lame, shear broadcast."""
    trace = lame * np.trace(gradient, axis1=-2, axis2=-1)
    parts = [trace + 2 * shear * gradient[..., k, k] for k in range(3)]
    parts += [shear * (gradient[..., i, j] + gradient[..., j, i]) for i, j in ((0, 1), (1, 2), (0, 2))]
    return np.stack(parts, axis=-1)


def surface_stress(operator: Any, lame: Floats, shear: Floats, motion: Floats, out: Floats) -> None:
    """Write the stress (m, 6, k) of k motions (3N, k) at the entries; lame and shear are per entry (m,)."""
    columns = motion.shape[1]
    gradient = (operator @ motion.reshape(-1, 3 * columns)).reshape(-1, 3, 3, columns)
    trace = lame[:, None] * (gradient[:, 0, 0] + gradient[:, 1, 1] + gradient[:, 2, 2])
    for k in range(3):
        out[:, k] = trace + 2 * shear[:, None] * gradient[:, k, k]
    for k, (i, j) in enumerate(((0, 1), (1, 2), (0, 2))):
        out[:, 3 + k] = shear[:, None] * (gradient[:, i, j] + gradient[:, j, i])
