"""Straight beams: Young & Budynas, Roark's Formulas for Stress and Strain, 7th ed. 2002, table 8.1 (from memory).

Shear's own part of a deflection: Timoshenko, Strength of Materials, part I, 3rd ed. 1955, on the effect of shear.
"""

from __future__ import annotations

import sys
from pathlib import Path

import pytest

sys.path.append(str(Path(__file__).parents[1] / "response"))
from frames import line, stiffness_of_section

SOURCE = "Roark, table 8.1"
EI, L, P, w, M0 = 3.2e5, 2.0, 1500.0, 800.0, 700.0
FIXED, Z, MY = [0, 1, 2, 3, 4, 5], 2, 4


def node(number: int, component: int) -> int:
    return 6 * number + component


def beam(pieces: int = 2, even: bool = False):
    made = line(L, pieces, stiffness_of_section(EI, length=L))
    if even:
        for member in range(pieces):
            made.load_evenly(member, (0.0, 0.0, -w))
    return made


def held(number: int) -> list[int]:
    return [node(number, k) for k in FIXED]


def pinned(number: int) -> list[int]:
    return [node(number, k) for k in (0, 1, 2, 3, 5)]


def test_simple_span_with_a_load_at_the_middle(published) -> None:
    motion, force = beam().solve([*pinned(0), node(2, 1), node(2, 2)], {node(1, Z): -P})

    published(
        "simple span, centre load: deflection",
        SOURCE,
        expected=P * L**3 / (48 * EI),
        got=-motion[1, Z],
        unit="m",
        tolerance=1e-6,
    )
    published(
        "simple span, centre load: moment",
        SOURCE,
        expected=P * L / 4,
        got=abs(force[0, 1, MY]),
        unit="N·m",
        tolerance=1e-6,
    )


def test_cantilever(published) -> None:
    motion, force = beam().solve(held(0), {node(2, Z): -P})
    published(
        "cantilever, tip load: deflection",
        SOURCE,
        expected=P * L**3 / (3 * EI),
        got=-motion[2, Z],
        unit="m",
        tolerance=1e-6,
    )
    published(
        "cantilever, tip load: moment", SOURCE, expected=P * L, got=abs(force[0, 0, MY]), unit="N·m", tolerance=1e-6
    )
    motion, _ = beam(even=True).solve(held(0), {})
    published(
        "cantilever, even load: deflection",
        SOURCE,
        expected=w * L**4 / (8 * EI),
        got=-motion[2, Z],
        unit="m",
        tolerance=1e-6,
    )
    motion, _ = beam().solve(held(0), {node(2, MY): M0})
    published(
        "cantilever, end couple: deflection",
        SOURCE,
        expected=M0 * L**2 / (2 * EI),
        got=-motion[2, Z],
        unit="m",
        tolerance=1e-6,
    )


def test_fixed_at_both_ends(published) -> None:
    ends = [*held(0), *held(2)]
    motion, force = beam().solve(ends, {node(1, Z): -P})
    published(
        "fixed ends, centre load: deflection",
        SOURCE,
        expected=P * L**3 / (192 * EI),
        got=-motion[1, Z],
        unit="m",
        tolerance=1e-6,
    )
    published(
        "fixed ends, centre load: moment",
        SOURCE,
        expected=P * L / 8,
        got=abs(force[0, 0, MY]),
        unit="N·m",
        tolerance=1e-6,
    )
    motion, force = beam(even=True).solve(ends, {})
    published(
        "fixed ends, even load: deflection",
        SOURCE,
        expected=w * L**4 / (384 * EI),
        got=-motion[1, Z],
        unit="m",
        tolerance=1e-6,
    )
    published(
        "fixed ends, even load: end moment",
        SOURCE,
        expected=w * L**2 / 12,
        got=abs(force[0, 0, MY]),
        unit="N·m",
        tolerance=1e-6,
    )
    published(
        "fixed ends, even load: middle moment",
        SOURCE,
        expected=w * L**2 / 24,
        got=abs(force[0, 1, MY]),
        unit="N·m",
        tolerance=1e-6,
    )


def test_propped_cantilever(published) -> None:
    _, force = beam(even=True).solve([*held(0), node(2, Z)], {})

    published(
        "propped, even load: fixed moment",
        SOURCE,
        expected=w * L**2 / 8,
        got=abs(force[0, 0, MY]),
        unit="N·m",
        tolerance=1e-6,
    )
    published("propped, even load: prop", SOURCE, expected=3 * w * L / 8, got=force[1, 1, Z], unit="N", tolerance=1e-6)


@pytest.mark.parametrize("pieces", [1, 3])
def test_shear_adds_its_own_deflection_at_any_number_of_elements(pieces: int, published) -> None:
    """PL³/3EI + PL/GA_s, exact with one element: no locking and no discretisation."""
    shear = 2.0 * EI / L**2
    motion, _ = line(L, pieces, stiffness_of_section(EI, shear=shear, length=L)).solve(held(0), {node(pieces, Z): -P})
    expected = P * L**3 / (3 * EI) + P * L / shear

    published(
        f"deep cantilever, {pieces} elements: tip",
        "Timoshenko (1955), effect of shear",
        expected=expected,
        got=-motion[pieces, Z],
        unit="m",
        tolerance=1e-6,
    )
