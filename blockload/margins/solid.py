"""Strength of the solid block: peaks over its surface, as hotspots with place, band, trust and causes.

A peak on a sharp edge or beside a pad says little about the wall it sits in. So each criterion is looked at twice:
the highest peaks wherever they are, and the highest among the places whose stress may be taken at its word.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from ..arrays import Floats, Ints, frozen
from ..block.model import AnyBlock, Block
from ..car.model import LoadCases
from ..case.model import Case
from ..installation.model import PadLoads
from ..response.model import Library
from .hotspots import peaks_apart
from .model import Margin, SurfaceMargins
from .places import Atlas, atlas, place_name
from .strength import CRITERIA, Criterion, Peaks, allowables, peaks, shares
from .trust import State, Trust, Zones, trust_of, zones
from .wording import INCREMENT, causes, margin_at

EVERYWHERE, CLEAR = 6, 6  # hotspots per criterion: highest of all, and highest outside the zones of doubt


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Ground:
    """The block a field lives on, with its named places and zones of doubt."""

    block: Block
    library: Library
    where: Atlas
    marked: Zones


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Field:
    """One criterion over the surface: its peaks, and strength [Pa] and factor of every entry (m,)."""

    criterion: Criterion
    peaks: Peaks
    strength: Floats
    factor: Floats

    @property
    def ratio(self) -> Floats:
        """Factor × applied / strength of every entry and variant, (m, P); 1 fails."""
        result: Floats = self.peaks.worst * (self.factor / self.strength)[:, None]
        return result


def strength_margins(
    case: Case, cases: LoadCases, block: Block, library: Library, pads: PadLoads
) -> tuple[tuple[Margin, ...], SurfaceMargins]:
    """Return the strength margins at the hotspots of every criterion, and the field at the middle stiffness."""
    fields = strength_fields(case, block, library, pads)
    where = atlas(block)
    ground = Ground(block=block, library=library, where=where, marked=zones(where, library))
    margins = [
        _margin(field, int(entry), ground, cases=cases, pads=pads)
        for field in fields
        for entry in hot_entries(field, ground)
    ]
    return tuple(margins), surface_margins(fields, pads.middle)


def strength_fields(case: Case, block: AnyBlock, library: Library, pads: PadLoads) -> tuple[Field, ...]:
    """Return every criterion over every surface entry, all cases and stiffnesses."""
    found = peaks(library.stress, pads.weights.sum(axis=2))
    result = []
    for criterion, peak in zip(CRITERIA, found, strict=True):
        rows = allowables(criterion, library.volumes, dict(block.materials), case.limits)[library.entry_volume]
        result.append(Field(criterion=criterion, peaks=peak, strength=rows[:, 0], factor=rows[:, 1]))
    return tuple(result)


def hot_entries(field: Field, ground: Ground) -> Ints:
    """Return the entries at the peaks of the worst ratio over the variants, everywhere and in the clear."""
    library = ground.library
    worst = field.ratio.max(axis=1)
    at_node = np.full(len(library.surface_points), -np.inf)
    np.maximum.at(at_node, library.entry_node, worst)
    surface = (library.surface_points, library.surface_triangles)
    everywhere = peaks_apart(at_node, *surface, most=EVERYWHERE)
    clear = peaks_apart(np.where(ground.marked.clear, at_node, 0.0), *surface, most=CLEAR, known=everywhere)
    nodes = np.concatenate([everywhere, clear])
    order = np.lexsort((-worst, library.entry_node))
    first = order[np.searchsorted(library.entry_node[order], nodes)]
    result: Ints = first
    return result


def _margin(field: Field, entry: int, ground: Ground, *, cases: LoadCases, pads: PadLoads) -> Margin:
    library = ground.library
    variant = int(field.ratio[entry].argmax())
    state = pads.weights[variant, field.peaks.case[entry, variant]].sum(axis=0)
    known = State(criterion=field.criterion, weights=state, applied=float(field.peaks.worst[entry, variant]))
    at = library.surface_points[library.entry_node[entry]]
    return stress_margin(
        field,
        entry,
        library,
        cases=cases,
        pads=pads,
        place=place_name(ground.where, at, library.volumes[library.entry_volume[entry]]),
        trust=trust_of(ground.where, ground.marked, ground.block, library, entry, known),
    )


def stress_margin(
    field: Field, entry: int, library: Library, *, cases: LoadCases, pads: PadLoads, place: str, trust: Trust
) -> Margin:
    """Return one criterion at one surface entry: worst load case at the worst pad stiffness, the band over all."""
    variant = int(field.ratio[entry].argmax())
    case_index = int(field.peaks.case[entry, variant])
    applied = float(field.peaks.worst[entry, variant])
    strength, factor = float(field.strength[entry]), float(field.factor[entry])
    low, high = (margin_at(strength, factor, float(end)) for end in (applied, field.peaks.worst[entry].min()))
    state = pads.weights[variant, case_index]
    at = library.surface_points[library.entry_node[entry]]
    split = shares(field.criterion, np.asarray(library.stress[entry]).dot(state.T).T)
    second = None
    if len(cases.names) > 1:
        value = float(field.peaks.second[entry, variant])
        if value > 0.0:
            name = cases.names[field.peaks.second_case[entry, variant]]
            second = (name, margin_at(strength, factor, value))
    return Margin(
        criterion=field.criterion.name,
        place=place,
        at=(float(at[0]), float(at[1]), float(at[2])),
        load_case=cases.names[case_index],
        applied=applied,
        allowable=strength,
        unit="Pa",
        factor=factor,
        margin=low,
        band=(low, high),
        trust=trust.word,
        causes=causes(pads.sources, split),
        second=second,
        method=f"{field.criterion.method}; {pads.variants[variant]} pads",
        note=f"{INCREMENT}; {trust.reason}",
        spread=trust.spread,
    )


def surface_margins(fields: Sequence[Field], middle: int) -> SurfaceMargins:
    """Return the worst criterion of every entry at the middle stiffness."""
    ratios = np.stack([field.ratio[:, middle] for field in fields], axis=1)
    worst = ratios.argmax(axis=1)
    rows = np.arange(len(ratios))
    cases = np.stack([field.peaks.case[:, middle] for field in fields], axis=1)
    return SurfaceMargins(
        ratio=frozen(ratios[rows, worst]),
        case=frozen(cases[rows, worst], dtype=np.int64),
        criterion=frozen(worst, dtype=np.int64),
    )
