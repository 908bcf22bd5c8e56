"""Stress measures, their reduction over cases, and how causes share them."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays
from installation.synthetic_car import LIMITS, METAL

from blockload.margins.strength import CRITERIA, allowables, largest_principal, peaks, shares, tensor, von_mises

STRESS = arrays(np.float64, (6,), elements=st.floats(-300.0, 300.0))


def column(*six: float) -> np.ndarray:
    return np.array(six, dtype=float)[:, None]


@pytest.mark.parametrize(
    ("six", "mises", "principal"),
    [
        ((100, 0, 0, 0, 0, 0), 100.0, 100.0),  # tension
        ((-100, 0, 0, 0, 0, 0), 100.0, 0.0),  # pressure does not tear
        ((0, 0, 0, 80, 0, 0), 80 * np.sqrt(3), 80.0),  # pure shear
        ((50, 50, 50, 0, 0, 0), 0.0, 50.0),  # all round tension
        ((60, -60, 0, 0, 0, 0), 60 * np.sqrt(3), 60.0),
        ((0, 0, 0, 0, 0, 0), 0.0, 0.0),
    ],
)
def test_measures_of_plain_states(six, mises, principal) -> None:
    assert von_mises(column(*six))[0] == pytest.approx(mises, abs=1e-9)
    assert largest_principal(column(*six))[0] == pytest.approx(principal, abs=1e-6)


@given(stress=STRESS)
def test_largest_principal_is_the_largest_eigenvalue(stress) -> None:
    expected = max(np.linalg.eigvalsh(tensor(stress))[-1], 0.0)
    assert largest_principal(stress[:, None])[0] == pytest.approx(expected, abs=1e-5)


@given(stress=STRESS, seed=st.integers(0, 1000))
def test_measures_do_not_depend_on_the_axes(stress, seed) -> None:
    turn = np.linalg.qr(np.random.default_rng(seed).normal(size=(3, 3)))[0]
    t = turn @ tensor(stress) @ turn.T
    turned = np.array([t[0, 0], t[1, 1], t[2, 2], t[0, 1], t[1, 2], t[0, 2]])
    for measure in (von_mises, largest_principal):
        assert measure(turned[:, None])[0] == pytest.approx(measure(stress[:, None])[0], abs=1e-5)


def test_peaks_are_those_of_every_state_taken_alone() -> None:
    """Chunks, variants and the second-worst case against a plain loop."""
    rng = np.random.default_rng(1)
    stress, weights = rng.normal(size=(57, 6, 11)), rng.normal(size=(3, 9, 11))

    found = peaks(stress, weights)

    for criterion, peak in zip(CRITERIA, found, strict=True):
        state = np.einsum("mku,pcu->mpkc", stress, weights)
        applied = criterion.reduce(state)
        order = np.argsort(-applied, axis=2)
        np.testing.assert_allclose(peak.worst, applied.max(axis=2), rtol=1e-12)
        np.testing.assert_array_equal(peak.case, order[..., 0])
        np.testing.assert_array_equal(peak.second_case, order[..., 1])


@settings(max_examples=50)
@given(parts=arrays(np.float64, (5, 6), elements=st.floats(-100.0, 100.0)))
@pytest.mark.parametrize("criterion", CRITERIA, ids=lambda c: c.name)
def test_shares_sum_to_one_and_are_the_slope(criterion, parts) -> None:
    """A share is what a source adds per unit of its growth: Euler's theorem on degree-one functions."""
    total = criterion.reduce(parts.sum(axis=0)[:, None])[0]
    if total < 1.0:
        return
    split = shares(criterion, parts)
    assert split.sum() == pytest.approx(1.0, abs=1e-9)

    gaps = np.diff(np.linalg.eigvalsh(tensor(parts.sum(axis=0))))
    if gaps.min() < 1.0:
        return
    step = 1e-6
    grown = parts.copy()
    grown[2] *= 1.0 + step
    slope = (criterion.reduce(grown.sum(axis=0)[:, None])[0] / total - 1.0) / step
    assert split[2] == pytest.approx(slope, abs=1e-3)


def test_castings_carry_the_casting_factor_too() -> None:
    limits = replace(LIMITS, casting_factor=1.25)
    materials = {"cast": METAL, "bar": replace(METAL, cast=False)}

    rows = allowables(CRITERIA[0], ("cast", "bar"), materials, limits)

    np.testing.assert_allclose(rows, [[147e6, 1.25 * 1.25], [147e6, 1.25]])
