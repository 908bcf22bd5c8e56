"""Bars and beams as solids against closed formulas.

Cantilever: Cowper, The shear coefficient in Timoshenko's beam theory, J. Appl. Mech. 33 (1966) 335-340, with the
tip deflection PL³/3EI + PL/(κGA). Axial bar: FL/EA. Free-free bar: Blevins, Formulas for Natural Frequency and Mode
Shape, 1979, table 8-1, corrected for shear and rotary inertia.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
from scipy import sparse
from scipy.sparse.linalg import eigsh
from solids import elements, grid, solved, traction_load, unknowns

from blockload.response.respond import solve
from blockload.response.stiffness import mass, stiffness

sys.path.append(str(Path(__file__).parents[1] / "response"))
from boxes import attachment, block_of, material, near, tetrahedra


def test_cantilever_block_deflects_as_timoshenko_says(published) -> None:
    mesh = grid(np.linspace(0, 0.4, 25), np.linspace(-0.03, 0.03, 5), np.linspace(-0.03, 0.03, 5))
    some = elements(mesh, 71e9, 0.33)
    end = mesh.facets_satisfying(lambda p: np.abs(p[0] - 0.4) < 1e-9, boundaries_only=True)
    load = traction_load(mesh, end, (0.0, 0.0, 10e3 / 0.06**2))
    motion = solved(stiffness(some), load, unknowns(mesh, mesh.doflocs[0] < 1e-9, (0, 1, 2)))
    tip = load @ motion / 10e3

    published(
        "cantilever block, tip (root fully clamped: about 1.3 % stiffer)",
        "Timoshenko beam with Cowper's coefficient (1966)",
        expected=2.8310,
        got=tip * 1e3,
        unit="mm",
        tolerance=0.02,
    )


def test_axial_bar_stretches_by_hookes_law_between_its_attachments(published) -> None:
    mesh = tetrahedra(np.linspace(0, 0.5, 6), [-0.015, 0.015], [-0.01, 0.01])
    ends = [
        attachment(mesh, "A", "front", near(mesh, 0, 0.5, (0, 0), 1.0)),
        attachment(mesh, "B", "rear", near(mesh, 0, 0.0, (0, 0), 1.0)),
    ]
    block = block_of(mesh, ends, materials=[material()])
    library = solve(block)
    pull = np.zeros(library.unit_count)
    pull[0], pull[6] = 30e3, -30e3
    stretch = (library.flexibility @ pull[:12])[0] - (library.flexibility @ pull[:12])[6]
    stress = library.stress @ pull

    published("axial bar, stretch", "Hooke's law", expected=0.35211268, got=stretch * 1e3, unit="mm", tolerance=1e-6)
    np.testing.assert_allclose(stress[:, 0], 50e6, rtol=1e-9)
    np.testing.assert_allclose(stress[:, 1:], 0, atol=1e-2)


def test_free_free_bar_rings_at_the_published_frequencies(published) -> None:
    mesh = grid(np.linspace(0, 0.5, 21), np.linspace(0, 0.03, 3), np.linspace(0, 0.02, 3))
    some = elements(mesh, 70e9, 0.33, density=2700.0)
    heavy = sparse.kron(mass(some), sparse.eye_array(3)).tocsc()
    squares = eigsh(stiffness(some).tocsc(), k=9, M=heavy, sigma=-1e4, which="LM", return_eigenvectors=False)
    found = np.sqrt(np.abs(np.sort(squares))) / (2 * np.pi)

    assert found[5] < 1e-3 * found[6]
    for expected, got in zip((416.4, 620.1, 1136.6), found[6:], strict=True):
        published(
            f"free-free bar, {expected} Hz",
            "Blevins (1979), table 8-1, with shear",
            expected=expected,
            got=got,
            unit="Hz",
            tolerance=0.005,
        )
