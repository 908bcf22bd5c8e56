"""Laws of a free elastic body that hold whatever the mesh: energy, reciprocity, free choice of supports, invariance."""

from __future__ import annotations

import sys
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from blockload.block.model import Block
from blockload.response.elements import elements_of
from blockload.response.energy import ENERGY_LIMIT, energy_gap
from blockload.response.fields import element_stress, field
from blockload.response.loads import unit_loads
from blockload.response.model import Library
from blockload.response.relief import free_body, rigid_modes
from blockload.response.respond import solve
from blockload.response.stiffness import mass, stiffness

sys.path.append(str(Path(__file__).parents[1] / "response"))
from boxes import attachment, block_of, box_block, warped

RNG = np.random.default_rng(11)


def wavy(p: np.ndarray) -> np.ndarray:
    x, y, z = p
    return np.array([x, y + 0.05 * np.sin(5 * x), z + 0.1 * y * x])


@pytest.fixture(scope="module", params=[{}, {"two": True, "move": wavy}], ids=["plain", "curved, two materials"])
def solved(request) -> tuple[Block, Library]:
    block = box_block(**request.param)
    return block, solve(block)


def test_what_is_measured_while_solving_is_small(solved) -> None:
    _, library = solved
    limits = {"residual": 1e-9, "reaction": 1e-9, "relief": 1e-12, "symmetry": 1e-9, "heat reciprocity": 1e-9}

    assert set(library.checks) == {*limits, "spread", "unit energy"}
    for name, limit in limits.items():
        assert library.checks[name] < limit, name
    assert library.checks["spread"] < 1e-4
    assert library.checks["unit energy"] < ENERGY_LIMIT


def test_work_equals_strain_energy_and_a_flexibility_off_by_one_percent_is_caught(solved) -> None:
    block, library = solved
    wrong = library.flexibility.copy()
    wrong[7, 7] *= 1.01

    assert energy_gap(library, block) < ENERGY_LIMIT
    assert energy_gap(replace(library, flexibility=wrong), block) == pytest.approx(0.01, rel=1e-3)
    assert energy_gap(replace(library, flexibility=0.99 * library.flexibility), block) > 1e3 * ENERGY_LIMIT


def test_flexibility_is_symmetric_and_no_load_gives_energy_back(solved) -> None:
    _, library = solved
    scale = np.sqrt(np.diag(library.flexibility))
    values = np.linalg.eigvalsh(library.flexibility / np.outer(scale, scale))

    np.testing.assert_array_equal(library.flexibility, library.flexibility.T)
    assert values.min() > -1e-12 * values.max()


def test_the_field_is_the_same_wherever_the_six_auxiliary_constraints_sit(solved) -> None:
    block, library = solved
    some = elements_of(block)
    body = free_body(some.points, mass(some))
    near_front = np.flatnonzero(np.repeat(some.points[:, 0] > -0.25, 3))
    held = body.held(np.setdiff1d(near_front, body.held()))
    other = solve(block, held=held)

    assert not set(held) & set(body.held())
    for name in ("motion", "stress", "flexibility"):
        first, second = np.asarray(getattr(library, name)), np.asarray(getattr(other, name))
        peak = np.abs(first).max(axis=tuple(range(first.ndim - 1)))
        if name == "stress":  # a free block heated evenly has none: compare with the stress of a held one
            heat = slice(len(library.flexibility), None)
            peak[heat] = np.maximum(peak[heat], 1e6)
        assert (np.abs(first - second) / peak).max() < 1e-9, name


def test_a_unit_wrench_and_its_relief_add_up_to_nothing(solved) -> None:
    block, _ = solved
    some = elements_of(block)
    body = free_body(some.points, mass(some))
    loads = unit_loads(block, some)
    raw = loads.columns(slice(0, 6 * len(block.attachments)))
    modes = rigid_modes(some.points, np.zeros(3))

    assert np.abs(modes.T @ raw).max() > 0.5
    assert np.abs(modes.T @ body.balance(raw)).max() < 1e-12 * np.abs(raw).sum(axis=0).max()


def test_uniform_gravity_and_any_rigid_acceleration_make_no_stress() -> None:
    """The relief of a body force M Φ a is minus itself, so nothing is left to solve."""
    some = elements_of(box_block(two=True))
    body = free_body(some.points, mass(some))
    force = body.weighted @ RNG.normal(size=(6, 4))

    assert np.abs(body.balance(force)).max() < 1e-12 * np.abs(force).max()


def test_motion_carries_no_rigid_part(solved) -> None:
    block, library = solved
    some = elements_of(block)
    body = free_body(some.points, mass(some))
    rigid = body.inverse @ (body.weighted.T @ library.motion)
    peak = np.abs(library.motion).max(axis=0)

    assert np.abs(rigid[:3] / peak).max() < 1e-9
    assert np.abs(0.3 * rigid[3:] / peak).max() < 1e-9


def test_the_body_weighs_what_its_metal_weighs() -> None:
    library = solve(box_block())
    size = np.array([0.6, 0.4, 0.3])
    expected = library.mass / 12 * (np.sum(size**2) * np.eye(3) - np.diag(size**2))

    assert library.mass == pytest.approx(0.6 * 0.4 * 0.3 * 2700, rel=1e-12)
    np.testing.assert_allclose(library.cg, [-0.3, 0, 0.15], atol=1e-12)
    np.testing.assert_allclose(library.inertia, expected, atol=1e-12 * expected.max())


def test_turning_the_block_and_its_loads_turns_the_answer() -> None:
    """Flexibility and stress of a rotated block are those of the first, rotated (objectivity)."""
    turn, _ = np.linalg.qr(RNG.normal(size=(3, 3)))
    turn *= np.sign(np.linalg.det(turn))
    block = box_block()
    turned_mesh = warped(block.mesh, lambda p: turn @ p)
    attachments = [attachment(turned_mesh, item.name, item.kind, item.facets) for item in block.attachments]
    first, second = solve(block), solve(block_of(turned_mesh, attachments))
    both = np.kron(np.eye(2 * len(attachments)), turn)
    expected = both @ first.flexibility @ both.T
    scale = np.abs(expected).max()

    np.testing.assert_allclose(second.flexibility, expected, atol=1e-9 * scale)
    stress = np.einsum("ij,mjku,lk->milu", turn, tensor(first.stress[..., : len(expected)]), turn) @ both.T
    there = tensor(second.stress[..., : len(expected)])
    np.testing.assert_allclose(there, stress, atol=1e-9 * np.abs(stress).max())


def tensor(stress: np.ndarray) -> np.ndarray:
    """Components xx yy zz xy yz xz (m, 6, U) as (m, 3, 3, U)."""
    order = [[0, 3, 5], [3, 1, 4], [5, 4, 2]]
    return np.asarray(stress)[:, order]


def test_fields_of_load_cases_add_up() -> None:
    block = box_block(two=True)
    library = solve(block)
    first, second = RNG.normal(size=(2, library.unit_count))
    node, volume = int(library.surface_nodes[library.entry_node[10]]), int(library.entry_volume[10])
    both = element_stress(block, library, first - 2 * second, node, volume)
    apart = element_stress(block, library, first, node, volume)
    apart -= 2 * element_stress(block, library, second, node, volume)

    np.testing.assert_allclose(both, apart, atol=1e-12 * np.abs(apart).max())
    motion = field(library, first) - 2 * field(library, second)
    np.testing.assert_allclose(field(library, first - 2 * second), motion, atol=1e-14 * np.abs(motion).max())


def test_single_elements_average_to_the_nodal_stress() -> None:
    """At equal element sizes the plain mean of the elements' own stress is the library's nodal stress."""
    block = box_block(two=True)
    library = solve(block)
    weights = RNG.normal(size=library.unit_count)
    for entry in (0, 17, len(library.entry_node) - 1):
        node, volume = int(library.surface_nodes[library.entry_node[entry]]), int(library.entry_volume[entry])
        mean = element_stress(block, library, weights, node, volume).mean(axis=0)
        expected = library.stress[entry] @ weights

        np.testing.assert_allclose(mean, expected, atol=1e-9 * np.abs(expected).max())


def manufactured(cells: int) -> float:
    """L2 error of u = (sin 2y, sin 2z, sin 2x) on a unit cube under its exact body force, prescribed on the outside."""
    from skfem import Basis, ElementTetP2, ElementVector, FacetBasis, LinearForm, MeshTet, MeshTet2, condense
    from skfem import solve as solve_sparse

    from blockload.response.elements import Elements

    ends = np.linspace(0, 1, cells + 1)
    mesh = MeshTet2.from_mesh(MeshTet.init_tensor(ends, ends, ends))
    lame, shear = 1.5, 1.0
    count = mesh.nelements
    some = Elements(
        points=mesh.doflocs.T.copy(),
        nodes=mesh.dofs.element_dofs.T.astype(np.int64),
        volume_of=np.zeros(count, dtype=np.int64),
        lame=np.full(count, lame),
        shear=np.full(count, shear),
        density=np.ones(count),
        expansion=np.zeros(count),
    )
    basis = Basis(mesh, ElementVector(ElementTetP2()), intorder=6)

    @LinearForm
    def body(v, w):
        """−div σ of u = (sin 2y, sin 2z, sin 2x): 4μ u, since div u = 0."""
        x, y, z = w.x
        return 4 * shear * (np.sin(2 * y) * v[0] + np.sin(2 * z) * v[1] + np.sin(2 * x) * v[2])

    exact = np.array([np.sin(2 * mesh.doflocs[1]), np.sin(2 * mesh.doflocs[2]), np.sin(2 * mesh.doflocs[0])]).T.ravel()
    boundary = FacetBasis(mesh, ElementVector(ElementTetP2())).get_dofs().all()
    motion = solve_sparse(*condense(stiffness(some).tocsr(), body.assemble(basis), x=exact, D=boundary))
    x, y, z = basis.global_coordinates()
    gap = np.asarray(basis.interpolate(motion)) - np.array([np.sin(2 * y), np.sin(2 * z), np.sin(2 * x)])
    return float(np.sqrt((gap**2 * basis.dx).sum()))


@pytest.mark.slow
def test_the_error_falls_with_the_third_power_of_the_element_size() -> None:
    """Quadratic elements converge with order 3 in L2 (Ern & Guermond, Theory and Practice of Finite Elements, 2004)."""
    errors = [manufactured(cells) for cells in (2, 4, 8)]
    orders = -np.diff(np.log2(errors))

    assert orders[-1] == pytest.approx(3, abs=0.15)


def test_no_average_crosses_a_change_of_material() -> None:
    """Heated as a whole, two metals press and pull each other: the two entries of a joint node differ."""
    block = box_block(two=True)
    library = solve(block)
    joint = np.flatnonzero(np.bincount(library.entry_node) == 2)
    pair = np.flatnonzero(library.entry_node == joint[0])
    rise = np.zeros(library.unit_count)
    rise[-2:] = 1.0

    assert len(joint) > 10
    assert set(library.entry_volume[pair]) == {0, 1}
    assert np.abs(np.diff(library.stress[pair] @ rise, axis=0)).max() > 1e4


def test_heat_of_one_volume_is_felt_by_the_other_and_both_together_grow_freely() -> None:
    """One metal all through, heated in halves: each half alone makes stress, both together none."""
    metal = box_block(two=True).materials["part_0"]
    block = box_block(two=True)
    block = replace(block, materials=dict.fromkeys(block.volumes, metal))
    library = solve(block)
    apart = np.abs(library.stress[..., -1]).max()
    together = np.abs(library.stress[..., -2:].sum(axis=-1)).max()

    assert apart > 1e5
    assert together < 1e-9 * apart
