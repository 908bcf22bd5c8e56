"""Stress over the whole surface, all load cases and pad stiffnesses, at memory speed.

The stress of a state is the library's unit stress times its weights: one matrix product per chunk of entries, reduced
at once to the two worst cases of each entry. Yield by von Mises, σ_v = √(3 J2); tensile rupture of a casting by the
largest principal stress, the greatest root of the characteristic cubic in closed form (O. K. Smith, Communications of
the ACM 4 (1961) 168). Pressure does not tear: a negative largest principal stress is no load.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from ..arrays import Floats, Ints
from ..block.model import Material
from ..case.model import Limits

CHUNK_BYTES = 16 * 2**20


def von_mises(stress: Floats) -> Floats:
    """Von Mises stress of components on axis −2: (..., 6, k) to (..., k)."""
    xx, yy, zz, xy, yz, xz = np.moveaxis(stress, -2, 0)
    squares = (xx - yy) ** 2 + (yy - zz) ** 2 + (zz - xx) ** 2 + 6.0 * (xy * xy + yz * yz + xz * xz)
    result: Floats = np.sqrt(0.5 * squares)
    return result


def largest_principal(stress: Floats) -> Floats:
    """Largest principal stress of components on axis −2, nothing below zero: (..., 6, k) to (..., k)."""
    xx, yy, zz, xy, yz, xz = np.moveaxis(stress, -2, 0)
    mean = (xx + yy + zz) / 3.0
    a, b, c = xx - mean, yy - mean, zz - mean
    j2 = 0.5 * (a * a + b * b + c * c) + xy * xy + yz * yz + xz * xz
    j3 = a * (b * c - yz * yz) - xy * (xy * c - yz * xz) + xz * (xy * yz - b * xz)
    radius = np.sqrt(j2 / 3.0)
    with np.errstate(divide="ignore", invalid="ignore"):
        angle = np.arccos(np.clip(np.nan_to_num(j3 / (2.0 * radius**3)), -1.0, 1.0))
    result: Floats = np.maximum(mean + 2.0 * radius * np.cos(angle / 3.0), 0.0)
    return result


@dataclass(frozen=True, slots=True, kw_only=True)
class Criterion:
    """A reduction of six stress components to one applied stress, its strength and its factor."""

    name: str
    reduce: Callable[[Floats], Floats]
    strength: Callable[[Material], float]
    factor: Callable[[Limits], float]
    method: str


CRITERIA = (
    Criterion(
        name="yield",
        reduce=von_mises,
        strength=lambda material: material.yield_strength,
        factor=lambda limits: limits.yield_factor,
        method="von Mises stress against the casting's yield strength",
    ),
    Criterion(
        name="tensile rupture",
        reduce=largest_principal,
        strength=lambda material: material.tensile_strength,
        factor=lambda limits: limits.rupture_factor,
        method="largest principal stress against the casting's tensile strength",
    ),
)


@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class Peaks:
    """The two worst load cases of every entry: values [Pa] and case indices, each (m, P)."""

    worst: Floats
    case: Ints
    second: Floats
    second_case: Ints


def peaks(stress: Floats, weights: Floats, criteria: Sequence[Criterion] = CRITERIA) -> tuple[Peaks, ...]:
    """Reduce the stress of all states to the two worst cases of each entry, one Peaks per criterion.

    Parameters
    ----------
    stress : array, shape (m, 6, U)
        Unit stress; may be a memory map, read once in order.
    weights : array, shape (P, C, U)
        Weights of every pad stiffness and load case.
    criteria : sequence of Criterion
        What to reduce to.

    """
    variants, count, units = weights.shape
    columns = np.ascontiguousarray(weights.reshape(-1, units).T)
    entries = stress.shape[0]
    step = max(1, CHUNK_BYTES // (8 * 6 * max(columns.shape[1], units)))
    values = np.zeros((len(criteria), 2, entries, variants))
    cases = np.zeros((len(criteria), 2, entries, variants), dtype=np.int64)
    for start in range(0, entries, step):
        part = slice(start, min(start + step, entries))
        some = np.asarray(stress[part], dtype=np.float64)
        state = (some.reshape(-1, units) @ columns).reshape(len(some), 6, -1)
        for index, criterion in enumerate(criteria):
            applied = criterion.reduce(state).reshape(len(some), variants, count)
            for rank in range(min(2, count)):
                worst = applied.argmax(axis=2)
                values[index, rank, part] = np.take_along_axis(applied, worst[..., None], 2)[..., 0]
                cases[index, rank, part] = worst
                np.put_along_axis(applied, worst[..., None], -1.0, 2)
    return tuple(
        Peaks(worst=values[i, 0], case=cases[i, 0], second=values[i, 1], second_case=cases[i, 1])
        for i in range(len(criteria))
    )


def shares(criterion: Criterion, parts: Floats) -> Floats:
    """Share of each source in an applied stress; they sum to 1 and may be negative.

    Both measures are homogeneous of degree one in the stress, so the gradient at the total splits it exactly:
    3/2 s:σ_k/σ_v for von Mises, n·σ_k·n along the principal direction n for the largest principal stress.

    Parameters
    ----------
    criterion : Criterion
        One of CRITERIA.
    parts : array, shape (S, 6)
        Stress of each source.

    """
    total = tensor(parts.sum(axis=0))
    if criterion.reduce is von_mises:
        gradient = total - np.trace(total) / 3.0 * np.eye(3)
    else:
        direction = np.linalg.eigh(total)[1][:, -1]
        gradient = np.outer(direction, direction)
    split = np.array([(tensor(part) * gradient).sum() for part in parts])
    whole = split.sum()
    result: Floats = split / whole if whole > 0.0 else np.zeros(len(parts))
    return result


def tensor(stress: Floats) -> Floats:
    """Return the (3, 3) tensor of six components xx yy zz xy yz xz."""
    xx, yy, zz, xy, yz, xz = stress
    return np.array([[xx, xy, xz], [xy, yy, yz], [xz, yz, zz]])


def allowables(criterion: Criterion, volumes: Sequence[str], materials: dict[str, Material], limits: Limits) -> Floats:
    """Return strength and factor of every volume, (V, 2); castings carry the casting factor as well."""
    rows = []
    for name in volumes:
        material = materials[name]
        factor = criterion.factor(limits) * (limits.casting_factor if material.cast else 1.0)
        rows.append((criterion.strength(material), factor))
    return np.array(rows)
