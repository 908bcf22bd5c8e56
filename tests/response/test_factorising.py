"""Direct solvers: the same answer from each, a small residual, a clear refusal otherwise."""

from __future__ import annotations

import numpy as np
import pytest
from boxes import box_block
from scipy import sparse

from blockload.errors import SolveError
from blockload.response import factor as factoring
from blockload.response.cholesky import factor
from blockload.response.dissection import dissect
from blockload.response.elements import elements_of
from blockload.response.factor import SOLVERS, choose, factorise, installed, node_graph
from blockload.response.relief import free_body, hold
from blockload.response.respond import solve
from blockload.response.stiffness import mass, stiffness


def residual(matrix, found: np.ndarray, columns: np.ndarray) -> float:
    return float((np.linalg.norm(matrix @ found - columns, axis=0) / np.linalg.norm(columns, axis=0)).max())


@pytest.fixture(scope="module")
def system():
    some = elements_of(box_block(two=True))
    matrix = stiffness(some)
    body = free_body(some.points, mass(some))
    held = body.held()
    columns = body.balance(np.random.default_rng(4).normal(size=(matrix.shape[0], 5)))
    columns[held] = 0
    return hold(matrix, held), some.points, columns


@pytest.mark.parametrize("solver", [name for name in SOLVERS if name != "fronts"])
def test_results_do_not_depend_on_the_solver(solver: str, system) -> None:
    if not installed(solver):
        pytest.skip(f"{solver} is not installed")
    matrix, points, columns = system
    ours = factorise(matrix, "fronts", points)(columns)
    theirs = factorise(matrix, solver, points)(columns)

    assert np.abs(ours - theirs).max() < 1e-9 * np.abs(ours).max()


def test_the_factor_solves_to_rounding(system) -> None:
    matrix, points, columns = system
    found = factorise(matrix, "fronts", points)(columns)

    assert residual(matrix, found, columns) < 1e-10
    assert found.flags.c_contiguous


@pytest.mark.parametrize("leaf", [4, 16, 200, 10**6])
def test_the_size_of_the_leaves_does_not_change_the_solution(leaf: int, system) -> None:
    matrix, points, columns = system
    found = factor(matrix, dissect(node_graph(matrix), points, leaf)).solve(columns)

    assert residual(matrix, found, columns) < 1e-10


def test_dissection_orders_every_node_once_and_no_link_joins_two_halves(system) -> None:
    matrix, points, _ = system
    graph = node_graph(matrix)
    parts = dissect(graph, points)
    above: list[set[int]] = []
    for index, part in reversed(list(enumerate(parts))):
        assert part.parent > index or (part.parent == -1 and index == len(parts) - 1)
    assert sorted(np.concatenate([part.nodes for part in parts])) == list(range(len(points)))
    owner = np.empty(len(points), dtype=int)
    for index, part in enumerate(parts):
        owner[part.nodes] = index
    for index in range(len(parts)):
        line, up = {index}, index
        while (up := parts[up].parent) != -1:
            line.add(up)
        above.append(line)
    links = graph.tocoo()
    for a, b in zip(owner[links.row], owner[links.col], strict=True):
        assert a in above[b] or b in above[a]


def test_points_in_one_place_still_get_an_order() -> None:
    graph = sparse.csr_array(np.ones((200, 200)))
    parts = dissect(graph, np.zeros((200, 3)))

    assert sorted(np.concatenate([part.nodes for part in parts])) == list(range(200))


def test_an_indefinite_matrix_is_refused() -> None:
    matrix = sparse.bsr_array(-np.eye(30), blocksize=(3, 3))

    with pytest.raises(SolveError, match="not positive definite"):
        factorise(matrix, "fronts", np.zeros((10, 3)))


def test_a_large_residual_is_refused(monkeypatch: pytest.MonkeyPatch) -> None:
    right = factoring._fronts
    for error in (1e-5, np.nan):
        monkeypatch.setattr(
            factoring, "_fronts", lambda *system, error=error: lambda columns: (1 + error) * right(*system)(columns)
        )
        with pytest.raises(SolveError, match="residual of a unit load"):
            solve(box_block())


def test_auto_names_an_installed_solver_and_an_unknown_one_is_refused() -> None:
    assert choose("auto") in SOLVERS
    assert choose("scipy") == "scipy"
    with pytest.raises(SolveError, match="allowed: auto, pypardiso, fronts"):
        choose("magic")


def test_a_missing_solver_is_refused_with_what_to_do(monkeypatch: pytest.MonkeyPatch) -> None:
    def missing(name: str) -> None:
        raise ImportError(name)

    monkeypatch.setattr(factoring, "import_module", missing)

    assert choose("auto") == "fronts"
    with pytest.raises(SolveError, match="not installed"):
        choose("pypardiso")
