"""Whole-car aero alone: every response between its least and greatest value over all ways to share it out.

Known are the total downforce, its front share, maybe the total drag, and places that may carry them. With areas
L_k >= 0 (downforce) and D_k >= 0 (drag) at places x_k, z_k of the carriers the possible splits are
    sum L_k = L,   sum D_k = D,   sum [L_k (x_k - x_r) - c D_k z_k] / wheelbase = share L,
c = 1 where the share includes the drag moment, else 0: a polytope whose corners have as many areas above zero as there
are equations (two without drag, three with it). The faces and studs are linear in the areas, because what lies between
- axle loads, roll couples - is; so each takes its least and greatest value at a corner (the main theorem of linear
programming: G. B. Dantzig, *Linear Programming and Extensions*, 1963, ch. 7; chapter from memory), and listing the
corners is exact. (The sharing of lateral force within an axle stays that of the case itself; it moves a face only where
links of one axle end on two bodies.) A carrier that lifts, or pushes forward, is left out: name it as a device.

The load case itself stands at the mean of the corners, where every carrier that can carry does. Without a total drag
no drag acts; a share that includes the drag moment then still gives the axle loads right.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from itertools import combinations
from types import MappingProxyType

import numpy as np

from ..arrays import Floats, frozen
from ..case.model import CARRIERS, Case, Device
from ..errors import CaseError, nearest
from .model import AeroBounds, FaceLoads

_ZERO = 1e-9  # of the largest area: below it an area is none


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Splits:
    """The corners of all splits.

    columns: a device for each area, with its unit area; area (V, K) [m²] of each at each corner; middle (K,): their
    mean.
    """

    columns: tuple[Device, ...]
    area: Floats
    middle: Floats

    def devices(self, area: Floats) -> tuple[Device, ...]:
        """The devices of one split (K,); carriers without an area stay, so that the sources keep their places."""
        return tuple(
            replace(column, downforce_area=column.downforce_area * float(a), drag_area=column.drag_area * float(a))
            for column, a in zip(self.columns, area, strict=True)
        )

    def words(self, corner: int) -> str:
        """Say which carriers share a corner: "front_wing 40 %, rear_wing 60 %"; drag apart."""
        parts = []
        for kind in ("downforce_area", "drag_area"):
            own = np.array([getattr(column, kind) for column in self.columns]) * self.area[corner]
            shares = [
                f"{column.name} {100 * share:.0f} %"
                for column, share in zip(self.columns, own / max(own.sum(), _ZERO), strict=True)
                if share > _ZERO
            ]
            parts.append(", ".join(shares))
        return "; ".join(part for part in parts if part)


def only_totals(case: Case) -> bool:
    """Whether the aero is known by its totals and possible carriers alone."""
    return case.aero_total is not None and not case.devices and bool(case.aero_split)


def splits(case: Case) -> Splits:
    """Every corner of the splits that keep the totals and balance of a case without devices.

    Raises CaseError where no split keeps them.
    """
    total = case.aero_total
    if total is None or not case.aero_split:
        raise CaseError("[aero_split]", "no total or no carriers", "[aero_total] and one [aero_split.NAME] at least")
    _check(case)
    pressure = 0.5 * case.air_density * total.at_speed**2
    down, drag = total.downforce / pressure, (total.drag or 0.0) / pressure
    columns = _columns(case, drag > 0)
    kinds = np.array([(c.downforce_area, c.drag_area) for c in columns]).T
    at = np.array([column.at for column in columns])
    rear = case.axles["rear"].x
    counted = 1.0 if total.share_includes_drag_moment else 0.0
    arm = (kinds[0] * (at[:, 0] - rear) - counted * kinds[1] * at[:, 2]) / case.wheelbase
    area = corners(np.array([kinds[0], arm, kinds[1]]), np.array([down, total.front_share * down, drag]))
    if not len(area):
        raise _unreachable(case, rear)
    return Splits(columns=columns, area=frozen(area), middle=frozen(area.mean(axis=0)))


def corners(matrix: Floats, right: Floats) -> Floats:
    """Every corner (V, K) of the polytope matrix @ a = right, a >= 0; (0, K) where it is empty.

    Parameters
    ----------
    matrix : (m, K)
        Equations, a few; dependent ones may be among them.
    right : (m,)
        Right-hand sides.

    """
    left, size, _ = np.linalg.svd(matrix, full_matrices=False)
    base = left[:, size > 1e-12 * size[0]]
    scale = float(np.abs(right).max())
    if np.linalg.norm(right - base @ (base.T @ right)) > _ZERO * scale:
        return np.zeros((0, matrix.shape[1]))
    rows, value = base.T @ matrix, base.T @ right
    chosen = np.array(list(combinations(range(matrix.shape[1]), len(rows))))
    squares = rows[:, chosen].transpose(1, 0, 2)
    sound = np.linalg.svd(squares, compute_uv=False)[:, -1] > 1e-10 * np.abs(rows).max()
    chosen, squares = chosen[sound], squares[sound]
    found = np.linalg.solve(squares, np.broadcast_to(value[:, None], (len(squares), len(rows), 1)))[..., 0]
    kept = (found >= -_ZERO * scale).all(axis=1)
    area = np.zeros((int(kept.sum()), matrix.shape[1]))
    np.put_along_axis(area, chosen[kept], np.maximum(found[kept], 0.0), axis=1)
    _, first = np.unique(np.round(area / (10 * _ZERO * scale)), axis=0, return_index=True)
    return area[np.sort(first)]


def with_middle_split(case: Case, found: Splits) -> Case:
    """The same case with its total at the middle split, carrier by carrier."""
    return replace(case, devices=found.devices(found.middle))


def extreme_cases(case: Case) -> Iterator[tuple[str, Case]]:
    """The case at every corner of its splits, as one with devices, each with the words of its split."""
    found = splits(case)
    for corner, area in enumerate(found.area):
        yield found.words(corner), replace(case, devices=found.devices(area), aero_split=())


def bounds(found: Splits, faces: Mapping[str, FaceLoads], wheel_force: Floats) -> AeroBounds:
    """Least and greatest of every face component and stud force.

    Both `faces` and wheel_force (C, S, 4, 3) have the columns of `found` as their first sources.
    """
    section, axial, shear, resultant = {}, {}, {}, {}
    for name, face in faces.items():
        signs = np.array((1.0, 1.0, 1.0, 1.0, -1.0, -1.0)) * (1.0 if name == "front" else -1.0)
        section[name] = _ends(_at_corners(found, face.wrench * signs))
        axial[name] = _ends(_at_corners(found, face.stud_axial))
        across = _at_corners(found, face.stud_shear)
        shear[name] = _ends(across)
        resultant[name] = frozen(np.stack([least_norm(across), np.linalg.norm(across, axis=-1).max(axis=0)]))
    return AeroBounds(
        splits=tuple(found.words(corner) for corner in range(len(found.area))),
        section=MappingProxyType(section),
        stud_axial=MappingProxyType(axial),
        stud_shear=MappingProxyType(shear),
        stud_shear_resultant=MappingProxyType(resultant),
        lifts=frozen((_at_corners(found, wheel_force[..., 2]) <= 0.0).any(axis=(0, 2)), np.bool_),
    )


def least_norm(points: Floats) -> Floats:
    """Distance (...) of the origin from the convex hull of V points (V, ..., 2): zero inside it.

    It lies inside when no half-plane holds all points; outside, the nearest point lies on a line between two of them.
    """
    angle = np.sort(np.arctan2(points[..., 1], points[..., 0]), axis=0)
    gaps = np.diff(np.concatenate([angle, angle[:1] + 2 * np.pi]), axis=0)
    inside = gaps.max(axis=0) < np.pi
    least = np.linalg.norm(points, axis=-1).min(axis=0)
    for i, j in combinations(range(len(points)), 2):
        along = points[j] - points[i]
        length = (along**2).sum(axis=-1)
        part = np.divide(-(points[i] * along).sum(axis=-1), length, out=np.zeros_like(length), where=length > 0)
        nearest_point = points[i] + np.clip(part, 0.0, 1.0)[..., None] * along
        least = np.minimum(least, np.linalg.norm(nearest_point, axis=-1))
    result: Floats = np.where(inside, 0.0, least)
    return result


def _at_corners(found: Splits, response: Floats) -> Floats:
    """Values (V, C, ...) at every corner of a response (C, S, ...) whose first sources stand at the middle split."""
    count = len(found.columns)
    unit = response[:, :count] / np.where(found.middle > 0, found.middle, 1.0).reshape(-1, *(1,) * (response.ndim - 2))
    result: Floats = response[:, count:].sum(axis=1) + np.einsum("vk,ck...->vc...", found.area, unit)
    return result


def _ends(values: Floats) -> Floats:
    return frozen(np.stack([values.min(axis=0), values.max(axis=0)]))


def _columns(case: Case, drag: bool) -> tuple[Device, ...]:
    """One device of unit area for each unknown: the downforce of each carrier, then the drag of each."""
    down = [replace(carrier, downforce_area=1.0, drag_area=0.0) for carrier in case.aero_split]
    taken = {carrier.name for carrier in case.aero_split}
    pull = []
    for carrier in case.aero_split if drag else ():
        name = f"{carrier.name}_drag"
        while name in taken:
            name += "_"
        pull.append(replace(carrier, name=name, downforce_area=0.0, drag_area=1.0))
    return (*down, *pull)


def _check(case: Case) -> None:
    total = case.aero_total
    if total is not None and not total.downforce > 0:
        remedy = "list the devices: a car that lifts has no split over carriers that press down"
        raise CaseError("[aero_total] downforce", f"{total.downforce:g} N", "above 0", remedy)
    for carrier in case.aero_split:
        if carrier.on not in CARRIERS:
            where = f"[aero_split.{carrier.name}] on"
            raise CaseError(where, repr(carrier.on), ", ".join(CARRIERS), nearest(carrier.on, CARRIERS))


def _unreachable(case: Case, rear: float) -> CaseError:
    total = case.aero_total
    share = total.front_share if total is not None else np.nan
    centre = rear + share * case.wheelbase
    places = ", ".join(f"{carrier.name} {carrier.at[0]:.3f}" for carrier in case.aero_split)
    return CaseError(
        "[aero_split]",
        f"no split over these carriers keeps a front share of {share:g}: the centre of pressure lies at "
        f"x = {centre:.3f} m before drag, the carriers at {places} m",
        "carriers on both sides of the centre of pressure (each carries downforce of 0 or more)",
        "add the missing carrier (front wing, floor, diffuser, rear wing), or check front_share and "
        "share_includes_drag_moment",
    )
