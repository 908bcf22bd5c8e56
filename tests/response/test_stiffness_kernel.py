"""The stiffness and mass kernels against scikit-fem's own assembly (Gustafsson & McBain, JOSS 5(52) 2020, 2369)."""

from __future__ import annotations

import numpy as np
import pytest
from boxes import ALUMINIUM, STEEL, box_block, material
from skfem import Basis, BilinearForm, ElementTetP2, ElementVector, LinearForm
from skfem.helpers import ddot, div, sym_grad, trace

from blockload.block.model import Block
from blockload.errors import BlockError
from blockload.response.elements import elements_of, straight
from blockload.response.relief import rigid_modes
from blockload.response.stiffness import CURVED_ORDER, MASS_ORDER, heat_loads, mass, stiffness

EQUAL = 1e-12


def sheared(p: np.ndarray) -> np.ndarray:
    """An affine distortion: elements stay straight."""
    return np.array([[1.0, 0.3, -0.2], [0.1, 0.9, 0.25], [0.0, -0.15, 1.1]]) @ p


def bent(p: np.ndarray) -> np.ndarray:
    """A curved distortion: middles leave their chords."""
    x, y, z = p
    return np.array([x + 0.8 * z * y, y + 0.5 * x * z, z + 0.05 * np.sin(6 * x)])


def half_bent(p: np.ndarray) -> np.ndarray:
    """Curved in front, straight behind: both kinds of element in one mesh."""
    x, y, z = p
    return np.array([x, y, z + np.where(x > -0.3, (x + 0.3) ** 2, 0.0)])


BLOCKS = {
    "straight": {},
    "sheared": {"move": sheared},
    "curved": {"move": bent},
    "two materials": {"two": True},
    "curved, two materials": {"two": True, "move": bent},
    "mixed, two materials": {"two": True, "move": half_bent},
}


@pytest.fixture(params=BLOCKS.values(), ids=BLOCKS)
def block(request) -> Block:
    return box_block(**request.param)


def lame_at(block: Block, basis: Basis) -> dict[str, np.ndarray]:
    some = elements_of(block)
    points = basis.X.shape[-1]
    return {"lam": np.repeat(some.lame[:, None], points, 1), "mu": np.repeat(some.shear[:, None], points, 1)}


def largest(matrix) -> float:
    return float(abs(matrix).max())


def test_stiffness_equals_scikit_fems_assembly(block: Block) -> None:
    basis = Basis(block.mesh, ElementVector(ElementTetP2()), intorder=CURVED_ORDER)

    @BilinearForm
    def elasticity(u, v, w):
        return w.lam * div(u) * div(v) + 2 * w.mu * ddot(sym_grad(u), sym_grad(v))

    theirs = elasticity.assemble(basis, **lame_at(block, basis))
    ours = stiffness(elements_of(block))

    assert largest(ours - theirs) < EQUAL * largest(theirs)


def test_mass_equals_scikit_fems_assembly(block: Block) -> None:
    basis = Basis(block.mesh, ElementTetP2(), intorder=MASS_ORDER)
    density = np.repeat(elements_of(block).density[:, None], basis.X.shape[-1], 1)

    @BilinearForm
    def weigh(u, v, w):
        return w.density * u * v

    theirs = weigh.assemble(basis, density=density)

    assert largest(mass(elements_of(block)) - theirs) < EQUAL * largest(theirs)


def test_heat_equals_scikit_fems_assembly(block: Block) -> None:
    basis = Basis(block.mesh, ElementVector(ElementTetP2()), intorder=CURVED_ORDER)
    some = elements_of(block)
    pressure = np.repeat(((3 * some.lame + 2 * some.shear) * some.expansion)[:, None], basis.X.shape[-1], 1)

    @LinearForm
    def heat(v, w):
        return w.pressure * trace(sym_grad(v))

    theirs = heat.assemble(basis, pressure=pressure)
    ours = heat_loads(some, len(block.volumes))

    assert np.abs(ours.sum(axis=1) - theirs).max() < EQUAL * np.abs(theirs).max()


def test_stiffness_is_symmetric_to_the_last_bit_and_feels_no_rigid_motion(block: Block) -> None:
    matrix = stiffness(elements_of(block))
    force = matrix @ rigid_modes(block.mesh.doflocs.T, np.zeros(3))

    assert largest(matrix - matrix.T) == 0
    assert np.abs(force).max() < 1e-11 * largest(matrix)


def test_chunks_do_not_change_the_stiffness(monkeypatch: pytest.MonkeyPatch) -> None:
    some = elements_of(box_block(two=True, move=half_bent))
    whole = stiffness(some)
    monkeypatch.setattr("blockload.response.elements.CEILING", 200_000)

    assert largest(stiffness(some) - whole) < 1e-15 * largest(whole)


def test_straight_elements_are_told_from_curved_ones() -> None:
    assert straight(elements_of(box_block(move=sheared))).all()
    assert not straight(elements_of(box_block(move=bent))).any()
    some = straight(elements_of(box_block(move=half_bent)))
    assert some.any()
    assert not some.all()


def test_volume_and_mass_of_a_box_of_two_metals() -> None:
    some = elements_of(box_block(two=True))
    half = 0.3 * 0.4 * 0.3

    assert mass(some).sum() == pytest.approx(half * (ALUMINIUM[2] + STEEL[2]), rel=1e-13)


def test_a_folded_element_is_refused() -> None:
    block = box_block()
    points = block.mesh.doflocs.copy()
    points[:, block.mesh.dofs.element_dofs[4, 0]] += 0.2
    block = box_block(move=lambda _: points)

    with pytest.raises(BlockError, match="folded"):
        stiffness(elements_of(block))


def test_material_of_each_volume_reaches_its_elements() -> None:
    block = box_block(two=True)
    some = elements_of(block)
    young, poisson = STEEL[:2]

    np.testing.assert_allclose(some.shear[some.volume_of == 1], young / (2 * (1 + poisson)))
    assert material().youngs_modulus == ALUMINIUM[0]
