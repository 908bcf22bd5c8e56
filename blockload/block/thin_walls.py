"""Properties of a thin-walled section from its outlines: open, closed, branched or with any number of cells.

The walls are a graph of straight strips: nodes where strips meet, length l, thickness t, unit tangent e, distance
r = y e_z − z e_y of the centre line from the centroid. Warping w of the nodes makes the shear flow of each strip.

    torsion   q = t (w' + r) per unit Gθ',   Σ q δw' l = 0,   J = Σ q r l + Σ l t³/3
    flexure   q = t w',   q' = −t ∂σ/∂x      (no twist, so the flow passes through the shear centre)

The first is Bredt's closed flow in a cell (J = 4A²/∮ds/t; R. Bredt, VDI-Zeitschrift 40 (1896)) and Saint-Venant's in
an open strip, both in one; the second is the shear-flow formula q = V Q / I carried round cells by continuity of w
(as in Megson, Aircraft Structures for Engineering Students, chapters on open, closed and multi-cell tubes). Both are
exact for straight strips: nodal values of the linear solution are those of the strip's own differential equation.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from ..arrays import Floats, Ints
from ..errors import BlockError
from .sections import Section, normal_moments, normal_recovery, torque_at

SAME_POINT = 1e-4  # m; ends of walls nearer than this are one point
_PARABOLAS = np.array([[4.0, 2.0, -1.0], [2.0, 16.0, 2.0], [-1.0, 2.0, 4.0]]) / 30.0  # ∫ of products, ends and middle


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Wall:
    """A wall's centre line through points (n, 2) = (y, z) [m], its thickness [m], whether it closes on itself."""

    points: Floats
    thickness: float
    closed: bool = False


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Strips:
    """Nodes (n, 2) about the centroid; ends (w, 2) into them; length, thickness (w,); tangent (w, 2); distance (w,)."""

    nodes: Floats
    ends: Ints
    length: Floats
    thickness: Floats
    tangent: Floats
    distance: Floats
    area: float
    centroid: Floats
    second: Floats


def thin_walled(walls: Mapping[str, Wall], where: str = "walls") -> Section:
    """Return the section made of these walls; stress is known on both faces at the ends and middle of every strip.

    Raises BlockError for walls that do not hang together, lie on one line, or have no length.
    """
    strips = _strips(walls, where)
    warping, twist = _torsion(strips)
    flow = _flexure(strips)
    run = strips.length[:, None] * np.einsum("wak,a->wk", flow, [1 / 6, 4 / 6, 1 / 6])
    moment = strips.distance @ run  # of the flows of unit V_y and V_z about the centroid
    shear_centre = strips.centroid + np.array([moment[1], -moment[0]])
    flexibility = np.einsum("wai,ab,wbj,w->ij", flow, _PARABOLAS, flow, strips.length / strips.thickness)
    torsion_constant = float(
        twist @ (strips.distance * strips.length) + (strips.length * strips.thickness**3).sum() / 3
    )
    fibres, recovery = _recovery(strips, twist, flow, shear_centre, torsion_constant)
    return Section(
        area=strips.area,
        centroid=strips.centroid,
        second=strips.second,
        torsion_constant=torsion_constant,
        shear_centre=shear_centre,
        shear_area=np.linalg.inv(flexibility),
        fibres=fibres,
        recovery=recovery,
        warping_constant=_warping_constant(strips, warping, shear_centre - strips.centroid),
    )


def _strips(walls: Mapping[str, Wall], where: str) -> Strips:
    nodes, ends, thickness = _graph(walls, where)
    span = nodes[ends[:, 1]] - nodes[ends[:, 0]]
    length = np.linalg.norm(span, axis=1)
    tangent = span / length[:, None]
    middle = nodes[ends].mean(axis=1)
    each = length * thickness
    area = float(each.sum())
    centroid = each @ middle / area
    arm = middle - centroid
    across = np.column_stack([-tangent[:, 1], tangent[:, 0]])
    own = (length**2)[:, None, None] * tangent[:, :, None] * tangent[:, None, :]
    own += (thickness**2)[:, None, None] * across[:, :, None] * across[:, None, :]
    second = np.einsum("w,wi,wj->ij", each, arm, arm) + np.einsum("w,wij->ij", each, own) / 12
    _check_spread(nodes - centroid, where)
    return Strips(
        nodes=nodes - centroid,
        ends=ends,
        length=length,
        thickness=thickness,
        tangent=tangent,
        distance=arm[:, 0] * tangent[:, 1] - arm[:, 1] * tangent[:, 0],
        area=area,
        centroid=centroid,
        second=second,
    )


def _graph(walls: Mapping[str, Wall], where: str) -> tuple[Floats, Ints, Floats]:
    """Return nodes, ends of strips and their thickness, with meeting points merged."""
    points: list[Floats] = []
    ends: list[tuple[int, int]] = []
    thickness: list[float] = []
    for name, wall in walls.items():
        numbers = [_number(points, point) for point in wall.points]
        pairs = list(pairwise(numbers))
        if wall.closed and numbers[0] != numbers[-1]:
            pairs.append((numbers[-1], numbers[0]))
        if not pairs or any(a == b for a, b in pairs):
            raise BlockError(f"{where}.{name}", "a piece of the wall has no length", "points apart from each other")
        ends += pairs
        thickness += [wall.thickness] * len(pairs)
    nodes, strips = np.array(points), np.array(ends, dtype=np.int64)
    _check_whole(len(nodes), strips, where)
    return nodes, strips, np.array(thickness)


def _number(points: list[Floats], point: Floats) -> int:
    """Return the number of a point, a new one unless one is there already."""
    for index, known in enumerate(points):
        if np.abs(known - point).max() < SAME_POINT:
            return index
    points.append(np.asarray(point, dtype=float))
    return len(points) - 1


def _check_whole(count: int, ends: Ints, where: str) -> None:
    from scipy.sparse import coo_array
    from scipy.sparse.csgraph import connected_components

    links = coo_array((np.ones(len(ends)), (ends[:, 0], ends[:, 1])), shape=(count, count))
    pieces, _ = connected_components(links, directed=False)
    if pieces > 1:
        remedy = "let walls meet at a common point of both lists"
        raise BlockError(where, f"the walls are {pieces} pieces that do not touch", "one connected section", remedy)


def _check_spread(nodes: Floats, where: str) -> None:
    least, most = np.linalg.eigvalsh(nodes.T @ nodes)
    if least < 1e-8 * most:
        raise BlockError(
            where, "all walls lie on one line", "walls in two directions", "nothing carries shear across it"
        )


def _torsion(strips: Strips) -> tuple[Floats, Floats]:
    """Warping of every node (n,) and flow of every strip (w,) for unit twist and unit Gθ' about the centroid."""
    t, r = strips.thickness, strips.distance
    load = _gathered(strips, np.column_stack([t * r, -t * r]))
    warping = _warped(strips, load[:, None])[:, 0]
    flow: Floats = t * ((warping[strips.ends[:, 1]] - warping[strips.ends[:, 0]]) / strips.length + r)
    return warping, flow


def _warping_constant(strips: Strips, warping: Floats, pole: Floats) -> float:
    """∫ w² dA of the warping about the shear centre, less its mean; w is linear along a strip."""
    about = warping + pole[0] * strips.nodes[:, 1] - pole[1] * strips.nodes[:, 0]
    area = strips.length * strips.thickness
    first, last = about[strips.ends].T
    mean = area @ (first + last) / 2 / strips.area
    first, last = first - mean, last - mean
    return float(area @ (first**2 + first * last + last**2) / 3)


def _flexure(strips: Strips) -> Floats:
    """Flow at start, middle and end of every strip for unit V_y and unit V_z, (w, 3, 2)."""
    t, l = strips.thickness, strips.length  # noqa: E741 - the strip's length, as in the formula
    line = strips.second - np.einsum("w,wi,wj->ij", l * t**3 / 12, _across(strips), _across(strips))
    slope = np.linalg.inv(normal_moments(strips.area, np.zeros(2), line))[:, 1:] @ np.array([[0.0, 1.0], [-1.0, 0.0]])
    g = np.column_stack([np.ones(len(strips.nodes)), strips.nodes[:, 1], -strips.nodes[:, 0]])
    rate = (g @ slope)[strips.ends]  # ∂σ/∂x at both ends for unit V_y, V_z
    push = (l * t)[:, None, None] * np.stack([2 * rate[:, 0] + rate[:, 1], rate[:, 0] + 2 * rate[:, 1]], axis=1) / 6
    load = np.stack([_gathered(strips, push[:, :, k]) for k in (0, 1)], axis=1)
    warping = _warped(strips, load)
    mean = (t / l)[:, None] * (warping[strips.ends[:, 1]] - warping[strips.ends[:, 0]])
    first, last = mean + push[:, 0], mean - push[:, 1]
    middle = first - (l * t)[:, None] * (3 * rate[:, 0] + rate[:, 1]) / 8
    return np.stack([first, middle, last], axis=1)


def _across(strips: Strips) -> Floats:
    return np.column_stack([-strips.tangent[:, 1], strips.tangent[:, 0]])


def _gathered(strips: Strips, values: Floats) -> Floats:
    """Sum values at the ends of strips (w, 2) at the nodes (n,)."""
    return np.asarray(np.bincount(strips.ends.ravel(), values.ravel(), len(strips.nodes)), dtype=float)


def _warped(strips: Strips, load: Floats) -> Floats:
    """Warping (n, k) of the nodes under balanced loads; the first node stays."""
    stiffness = np.zeros((len(strips.nodes),) * 2)
    each = strips.thickness / strips.length
    for (a, b), sign in (((0, 0), 1), ((1, 1), 1), ((0, 1), -1), ((1, 0), -1)):
        np.add.at(stiffness, (strips.ends[:, a], strips.ends[:, b]), sign * each)
    warping = np.zeros_like(load)
    warping[1:] = np.linalg.solve(stiffness[1:, 1:], load[1:])
    return warping


def _recovery(
    strips: Strips, twist: Floats, flow: Floats, shear_centre: Floats, torsion_constant: float
) -> tuple[Floats, Floats]:
    """Fibres on both faces at start, middle and end of every strip, and their stress for unit forces."""
    start, end = (strips.nodes[strips.ends[:, k]] + strips.centroid for k in (0, 1))
    line = np.stack([start, (start + end) / 2, end], axis=1)
    torque = torque_at(shear_centre)
    fibres, shears = [], []
    for side in (1.0, -1.0):
        fibres.append(line + side * (strips.thickness / 2)[:, None, None] * _across(strips)[:, None, :])
        per_torque = (twist / strips.thickness - side * strips.thickness) / torsion_constant
        shear = per_torque[:, None, None] * np.broadcast_to(torque, (*line.shape[:2], 6))
        shear[:, :, 1:3] += flow / strips.thickness[:, None, None]
        shears.append(shear)
    place = np.stack(fibres, axis=1).reshape(-1, 2)
    along = np.stack(shears, axis=1)
    recovery = np.zeros((len(place), 3, 6))
    recovery[:, 0] = normal_recovery(place, strips.area, strips.centroid, strips.second)
    recovery[:, 1:] = np.einsum("wi,wsaf->wsaif", strips.tangent, along).reshape(-1, 2, 6)
    return place, recovery


def between(first: Mapping[str, Wall], last: Mapping[str, Wall], share: float) -> dict[str, Wall]:
    """Return the walls at a share of the way from one station to the next; both have the same walls."""
    return {
        name: Wall(
            points=(1 - share) * wall.points + share * last[name].points,
            thickness=(1 - share) * wall.thickness + share * last[name].thickness,
            closed=wall.closed,
        )
        for name, wall in first.items()
    }
