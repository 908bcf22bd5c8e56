"""Studs and the joint face beside them: tension, separation, slip, and a supplier's own limits.

With load factor Φ of the joint, preload between F_V,min and F_V,max, axial force a (+ tension, a⁺ its positive part)
and shear s at the stud, and the factor on the external load only:

    tension      (S_p A_s − F_V,max) / (factor Φ a⁺) − 1
    separation   F_V,min / (factor (1 − Φ) a⁺) − 1
    slip         μ F_V,min / (factor (|s| + μ (1 − Φ) a)) − 1, none where the bracket is not positive

(VDI 2230 part 1: bolt force F_V + Φ a, clamp left F_V − (1 − Φ) a, friction capacity μ times it.) Scatter of the
preload is the user's ratio about its nominal value; embedding and thermal change of preload are not in it yet. Each
criterion takes the worst load case of each stud; the band runs over the ways the face's wrench may split among studs.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from ..arrays import Floats
from ..car.model import LoadCases
from ..case.fasteners import Fastener, fastener
from ..case.model import Case, Limits, Stud
from ..installation.model import PadLoads
from ..response.model import Library
from .model import Margin
from .splits import Split, installed_splits, rigid_splits
from .wording import INCREMENT, causes, margin_at

SHEAR, AXIAL = slice(1, 3), 0


@dataclass(frozen=True, slots=True, kw_only=True)
class Joint:
    """One stud with what it may carry: preload between `least` and `most` [N]."""

    stud: Stud
    fastener: Fastener
    least: float
    most: float


def joint(stud: Stud) -> Joint:
    """Return a stud with its strength and the ends of its preload."""
    return Joint(
        stud=stud,
        fastener=fastener(stud.size, stud.property_class),
        least=stud.preload * (1.0 - stud.preload_scatter),
        most=stud.preload * (1.0 + stud.preload_scatter),
    )


def tension_load(of: Joint, force: Floats) -> Floats:
    """Return the external load that raises the stud's own tension, Φ a⁺."""
    return of.stud.load_factor * np.maximum(force[..., AXIAL], 0.0)


def separation_load(of: Joint, force: Floats) -> Floats:
    """Return the external load that takes clamp away, (1 − Φ) a⁺."""
    return (1.0 - of.stud.load_factor) * np.maximum(force[..., AXIAL], 0.0)


def slip_load(of: Joint, force: Floats) -> Floats:
    """Return the external load on friction, |s| + μ (1 − Φ) a."""
    clamp = of.stud.friction * (1.0 - of.stud.load_factor) * force[..., AXIAL]
    result: Floats = np.linalg.norm(force[..., SHEAR], axis=-1) + clamp
    return result


@dataclass(frozen=True, slots=True, kw_only=True)
class StudCriterion:
    """One row of the table of stud criteria for one joint: what it may carry and with which factor."""

    name: str
    load: Callable[[Joint, Floats], Floats]
    allowable: float
    factor: float
    method: str


def criteria(of: Joint, limits: Limits) -> tuple[StudCriterion, ...]:
    """Return the criteria of one stud; a supplier's own allowables where the case gives them."""
    rows = [
        StudCriterion(
            name="stud tension",
            load=tension_load,
            allowable=of.fastener.proof_load - of.most,
            factor=limits.bolt_factor,
            method="proof load less the largest preload, against the stud's part of the tension",
        ),
        StudCriterion(
            name="separation",
            load=separation_load,
            allowable=of.least,
            factor=limits.separation_factor,
            method="least preload against the clamp taken away",
        ),
        StudCriterion(
            name="slip",
            load=slip_load,
            allowable=of.stud.friction * of.least,
            factor=limits.slip_factor,
            method="friction of the least clamp against shear, single stud",
        ),
    ]
    if limits.stud_axial is not None:
        rows.append(_supplier("stud axial limit", _axial_size, limits.stud_axial, limits.bolt_factor))
    if limits.stud_shear is not None:
        rows.append(_supplier("stud shear limit", _shear_size, limits.stud_shear, limits.bolt_factor))
    return tuple(rows)


def stud_margins(
    case: Case,
    cases: LoadCases,
    *,
    pads: PadLoads | None = None,
    library: Library | None = None,
) -> tuple[Margin, ...]:
    """Return the margins of every stud of both faces: installed where there is a block, else of the rigid face.

    Without a block the band runs over the rigid face and its isostatic extremes; with one, over the pad stiffnesses.
    """
    found: list[Margin] = []
    for face in case.faces.values():
        loads = cases.faces[face.name]
        if pads is not None and library is not None:
            splits, sources = installed_splits(pads, library, loads), pads.sources
        else:
            splits, sources = rigid_splits(loads, case), cases.sources
        for index, stud in enumerate(face.studs):
            of = joint(stud)
            place = f"{face.name} stud {stud.name}"
            at = (face.x, float(stud.at[0]), float(stud.at[1]))
            forces = [Split(label=item.label, force=item.force[:, :, index]) for item in splits]
            found += [
                margin_of(row, of, forces, place=place, at=at, names=cases.names, sources=sources)
                for row in criteria(of, case.limits)
            ]
    return tuple(found)


def margin_of(
    row: StudCriterion,
    of: Joint,
    splits: Sequence[Split],
    *,
    place: str,
    at: tuple[float, float, float],
    names: Sequence[str],
    sources: Sequence[str],
) -> Margin:
    """Return one criterion of one stud: worst load case at the worst split, the band over the splits."""
    loads = np.stack([row.load(of, item.force.sum(axis=1)) for item in splits])
    worst = loads.max(axis=1)
    split = int(worst.argmax())
    ranked = np.argsort(-loads[split], kind="stable")
    applied = float(worst[split])
    ends = [margin_at(row.allowable, row.factor, value) for value in (worst.max(), worst.min())]
    second = None
    if len(ranked) > 1 and loads[split][ranked[1]] > 0.0:
        second = (names[ranked[1]], margin_at(row.allowable, row.factor, loads[split][ranked[1]]))
    bare = applied <= 0.0 < row.allowable
    return Margin(
        criterion=row.name,
        place=place,
        at=at,
        load_case=names[ranked[0]],
        applied=max(applied, 0.0),
        allowable=row.allowable,
        unit="N",
        factor=row.factor,
        margin=None if bare else ends[0],
        band=None if bare else (ends[0], ends[1]),
        trust="converged",
        causes=() if applied <= 0.0 else causes(sources, _shares(row, of, splits[split].force[ranked[0]])),
        second=second,
        method=f"{row.method}; {splits[split].label}",
        note=f"{INCREMENT}; preload {of.least / 1e3:.1f} to {of.most / 1e3:.1f} kN, embedding not taken off",
    )


def _supplier(name: str, load: Callable[[Joint, Floats], Floats], allowable: float, factor: float) -> StudCriterion:
    return StudCriterion(
        name=name, load=load, allowable=allowable, factor=factor, method="supplier's own allowable at one stud"
    )


def _axial_size(_of: Joint, force: Floats) -> Floats:
    return np.abs(force[..., AXIAL])


def _shear_size(_of: Joint, force: Floats) -> Floats:
    result: Floats = np.linalg.norm(force[..., SHEAR], axis=-1)
    return result


def _shares(row: StudCriterion, of: Joint, parts: Floats) -> Floats:
    """Share of each source (S, 3): every load is homogeneous of degree one, so its gradient splits it."""
    total = parts.sum(axis=0)
    size = np.linalg.norm(total[SHEAR])
    shear = parts[:, SHEAR] @ total[SHEAR] / size if size > 0.0 else np.zeros(len(parts))
    if row.load is slip_load:
        split = shear + of.stud.friction * (1.0 - of.stud.load_factor) * parts[:, AXIAL]
    elif row.load is _shear_size:
        split = shear
    else:
        split = parts[:, AXIAL]
    result: Floats = split / split.sum()
    return result
