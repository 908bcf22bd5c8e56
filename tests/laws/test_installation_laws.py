"""Laws of the installed block: balance, superposition, symmetry, limits; and slips of the pen that must be caught."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from installation import solid_car
from installation import synthetic_car as car
from numpy.typing import NDArray

from blockload.block.model import Block
from blockload.car.model import LoadCases, LocalLoad
from blockload.case.model import Case
from blockload.errors import CaseError
from blockload.installation.applied import inertia_wrench, known_wrenches
from blockload.installation.install import about_origin, install
from blockload.installation.joining import connections
from blockload.installation.proof import face_sum, proofs
from blockload.installation.system import Connections, solve
from blockload.margins.solid_checks import flexibility_gap, solid_checks
from blockload.response.model import Library

MIRROR = np.array([1.0, -1.0, 1.0, -1.0, 1.0, -1.0])
SWAP = {"TL": "TR", "TR": "TL", "BL": "BR", "BR": "BL"}


@settings(max_examples=25, deadline=None)
@given(seed=st.integers(0, 10_000))
def test_pads_sum_to_the_face_wrench_and_inertia_is_counted_once(seed: int) -> None:
    """For any elastic body and any balanced loads, at every stiffness, on both faces."""
    case = car.case()
    block = car.block(case)
    library = car.library(block, seed=seed)
    cases = car.random_cases(case, seed=seed)

    pads = install(cases, block, library, case)

    assert pads.sum_gap < 1e-10
    assert pads.relief_gap < 1e-10
    for face in ("front", "rear"):
        loads = cases.faces[face]
        total = face_sum(pads.weights, block, library, case, face, loads.reference).sum(axis=2)
        wanted = np.broadcast_to(loads.wrench.sum(axis=1), total.shape)
        np.testing.assert_allclose(total, wanted, rtol=1e-8, atol=1e-5)


def test_a_combination_of_load_cases_is_the_case_of_the_combination() -> None:
    """Superposition: wrenches, motions and path forces are linear in the loads."""
    block, library = solid_car.solved()
    case = solid_car.case()
    rng = np.random.default_rng(8)
    rear, acceleration, rotation = (rng.normal(size=(2, 3, n)) * size for n, size in ((6, 2e3), (3, 20.0), (3, 30.0)))
    mix = np.array([0.7, -1.9])

    apart = install(car.load_cases(case, rear=rear, acceleration=acceleration, rotation=rotation), block, library, case)
    mixed = [np.einsum("c,csk->sk", mix, item)[None] for item in (rear, acceleration, rotation)]
    cases = car.load_cases(case, rear=mixed[0], acceleration=mixed[1], rotation=mixed[2])
    together = install(cases, block, library, case)

    for ours, parts in (
        (together.weights[:, 0], apart.weights),
        (together.block_motion[:, 0], apart.block_motion),
        (together.gearbox_motion[:, 0], apart.gearbox_motion),
    ):
        expected = np.einsum("c,pcsk->psk", mix, parts)
        np.testing.assert_allclose(ours, expected, rtol=1e-9, atol=1e-10 * np.abs(expected).max())


def test_a_mirrored_load_gives_mirrored_pads() -> None:
    """A left-right symmetric block (to the nodes' rounding and its diagonals) answers a mirrored load mirrored."""
    block, library = solid_car.solved()
    case = solid_car.case()
    rng = np.random.default_rng(4)
    rear, acceleration, rotation = (
        rng.normal(size=(1, 1, 6)) * 1e3,
        rng.normal(size=(1, 1, 3)),
        rng.normal(size=(1, 1, 3)),
    )
    crank = np.array([[200.0]])

    right = install(
        car.load_cases(case, rear=rear, acceleration=acceleration, rotation=rotation, crank=crank), block, library, case
    )
    left = install(
        car.load_cases(
            case,
            rear=rear * MIRROR,
            acceleration=acceleration * MIRROR[:3],
            rotation=rotation * MIRROR[3:],
            crank=-crank,
        ),
        block,
        library,
        case,
    )

    for face in ("front", "rear"):
        for name, other in SWAP.items():
            ours = left.weights[:, 0, 0, library.rows(face, name)]
            theirs = right.weights[:, 0, 0, library.rows(face, other)] * MIRROR
            np.testing.assert_allclose(ours, theirs, rtol=1e-7, atol=1e-5)


def test_a_symmetric_load_gives_equal_left_and_right_pads() -> None:
    block, library = solid_car.solved()
    case = solid_car.case()
    rear = np.array([[[-2e3, 0.0, 4e3, 0.0, 3e3, 0.0]]])
    pads = install(car.load_cases(case, rear=rear, acceleration=np.array([[[-5.0, 0.0, 9.8]]])), block, library, case)

    for face in ("front", "rear"):
        for one, other in (("TL", "TR"), ("BL", "BR")):
            left, right = (pads.weights[:, 0, 0, library.rows(face, name)] for name in (one, other))
            np.testing.assert_allclose(left, right * MIRROR, rtol=1e-7, atol=1e-5)


def test_from_soft_to_rigid_pads_the_split_moves_one_way_and_stays_in_balance() -> None:
    """Very soft pads give the rigid face (a stiff block); stiffening them moves every stud away from it for good."""
    block, library = solid_car.solved()
    rear = np.array([[[0.0, 1e3, 3e3, 800.0, 2e3, 1e3]]])
    shift = []
    for stiffness in (1e5, 1e7, 1e9, 1e11):
        case = solid_car.case(pad_stiffness=(("given", stiffness, stiffness),))
        cases = car.load_cases(case, rear=rear)
        pads = install(cases, block, library, case)
        axial = np.array([-pads.weights[1, 0, 0, library.rows("rear", n)][0] for n in cases.faces["rear"].studs])
        shift.append(np.abs(axial - cases.faces["rear"].stud_axial[0, 0]).max())

    # The pads of 60 mm carry a share of the moments by their own bending: 2 % of the largest stud force.
    largest = np.abs(cases.faces["rear"].stud_axial).max()
    assert shift[0] < 0.02 * largest
    assert shift[0] < shift[2] < shift[3]


def test_inertia_counted_twice_or_forgotten_is_caught() -> None:
    """Mistake 2: the carried mass left out, the whole engine on top of the mesh, the mesh twice as heavy as solved."""
    case = car.case()
    whole = car.block(case)
    library = car.library(whole)
    cases = car.random_cases(case)
    none = replace(whole, carried=())
    twice = replace(whole, carried=(replace(whole.carried[0], mass=car.ENGINE.mass),))

    assert install(cases, whole, library, case).relief_gap < 1e-9
    for wrong in (none, twice):
        assert install(cases, wrong, library, case).sum_gap > 1e-3
    assert install(cases, replace(whole, mass=2 * whole.mass), library, case).relief_gap > 1e-3


def test_a_load_on_the_engine_without_an_attachment_is_refused() -> None:
    case = car.case()
    block = car.block(case)
    load = LocalLoad(
        name="airbox", attachment=None, at=np.zeros(3), force=np.ones((5, 4, 3)), moment=np.zeros((5, 4, 3))
    )
    cases = car.random_cases(case, engine_loads=(load,))

    with pytest.raises(CaseError, match="airbox"):
        install(cases, block, car.library(block), case)


def test_a_load_on_the_engine_enters_by_its_attachment_with_its_lever() -> None:
    case = car.case()
    block = car.block(case, carried=None)
    at = np.array([-1.7, 0.1, 0.5])
    force = np.tile([10.0, 20.0, 30.0], (5, 4, 1))
    load = LocalLoad(name="airbox", attachment="mains", at=at, force=force, moment=np.zeros((5, 4, 3)))
    library = car.library(block)
    cases = car.random_cases(case, engine_loads=(load,))
    without = car.random_cases(case)

    pads = install(cases, block, library, case)
    bare = install(without, block, library, case)

    change = (pads.weights - bare.weights)[1, 0, 0, library.rows("other", "mains")]
    lever = np.cross(at - block.attachment("mains").centroid, force[0, 0])
    np.testing.assert_allclose(change, [*force[0, 0], *lever], rtol=1e-9, atol=1e-9)
    assert pads.sum_gap < 1e-9


def test_heat_alone_loads_the_pads_with_a_self_balanced_set() -> None:
    """A hot block on a cold tub: pad forces sum to nothing on each face, and the source is named."""
    block, library = solid_car.solved()
    case = solid_car.case()
    cases = car.load_cases(case, rear=np.zeros((1, 1, 6)))
    pads = install(cases, block, library, case, temperatures={"block": 80.0})

    assert pads.sources[-1] == "heat"
    heat = pads.weights[1, 0, -1]
    assert heat[-1] == 80.0
    assert np.abs(heat[library.rows("front", "TL")][:3]).max() > 1e3
    for face in ("front", "rear"):
        total = face_sum(heat, block, library, case, face, cases.faces[face].reference)
        np.testing.assert_allclose(total, 0.0, atol=1e-6 * np.abs(heat[:-1]).max())


def test_temperature_of_an_unknown_volume_is_refused() -> None:
    case = car.case()
    block = car.block(case)
    with pytest.raises(CaseError, match="Did you mean 'block'"):
        install(car.random_cases(case), block, car.library(block), case, temperatures={"blok": 1.0})


def named(checks: list, part: str) -> NDArray[np.bool_]:
    found = [item.ok for item in checks if part in item.name]
    assert found, part
    return np.array(found)


def test_every_check_of_a_sound_analysis_passes() -> None:
    block, library = solid_car.solved()
    case = solid_car.case()
    cases = car.random_cases(case)
    pads = install(cases, block, library, case)

    failed = [item for item in solid_checks(case, cases, block, library, pads) if not item.ok]
    assert failed == []


@pytest.mark.parametrize("place", [(0, 0), (3, 3), (10, 17)])
def test_one_percent_on_the_flexibility_is_caught(place: tuple[int, int]) -> None:
    """A flexibility that is not the average of the stored motion: one entry, or a symmetric pair, off by 1 %."""
    block, library = solid_car.solved()
    wrong = library.flexibility.copy()
    i, j = place
    wrong[i, j] *= 1.01
    wrong[j, i] = wrong[i, j]
    case = solid_car.case()
    cases = car.random_cases(case)
    bad = replace(library, flexibility=wrong)
    pads = install(cases, block, bad, case)

    assert flexibility_gap(block, library) < 1e-9
    assert flexibility_gap(block, bad) > 1e-6
    assert not named(list(solid_checks(case, cases, block, bad, pads)), "flexibility is the average").all()


def test_a_pad_moved_by_50_mm_is_caught() -> None:
    """The library was solved with a pad elsewhere: its motion is not what the stored flexibility says."""
    block, library = solid_car.solved()
    moved = tuple(
        replace(item, centroid=item.centroid + np.array([0.0, 0.05, 0.0]))
        if (item.kind, item.name) == ("front", "TL")
        else item
        for item in block.attachments
    )
    assert flexibility_gap(replace(block, attachments=moved), library) > 1e-3


def test_left_and_right_swapped_is_caught() -> None:
    """Names of two pads exchanged between block and library."""
    block, library = solid_car.solved()
    swapped = tuple(replace(item, name=SWAP[item.name]) if item.kind == "front" else item for item in block.attachments)
    assert flexibility_gap(replace(block, attachments=swapped), library) > 1e-3


def test_each_face_is_listed_beside_statics_and_both_faces_fixed_is_caught() -> None:
    """Mistake 16: with the rear pads on the ground as well, the engine carries nothing through, and the sums say so."""
    block, library = solid_car.solved()
    case = solid_car.case()
    cases = car.random_cases(case)
    pads = install(cases, block, library, case)
    listed = [item for item in solid_checks(case, cases, block, library, pads) if "pads sum to the face" in item.name]
    assert [item.name.split()[0] for item in listed] == ["front", "rear"]
    assert all(item.ok and "statics" in item.note for item in listed)

    fixed = pads_with_both_faces_fixed(cases, block, library, case)
    proof = proofs(fixed[None], np.zeros((1, *fixed.shape[:2], 0)), cases, block, library, case)
    assert proof.checks["sum rear"] > 0.1
    wrong = replace(pads, weights=np.stack([fixed] * 3), checks={**pads.checks, **proof.checks})
    assert not named(list(solid_checks(case, cases, block, library, wrong)), "rear pads sum").all()


def pads_with_both_faces_fixed(cases: LoadCases, block: Block, library: Library, case: Case) -> NDArray[np.float64]:
    """Weights (C, S, U) of the over-constrained block; the gearbox hangs on six springs of its own."""
    joined = connections(block, library, case, normal=8e8, tangential=4e8)
    count = joined.on_block.shape[1]
    own = 1e-9 * np.eye(6)
    grounded = Connections(
        on_block=np.hstack([joined.on_block, np.zeros((joined.on_block.shape[0], 6))]),
        on_gearbox=np.hstack([np.zeros((6, count)), np.eye(6)]),
        compliance=np.block([[joined.compliance, np.zeros((count, 6))], [np.zeros((6, count)), own]]),
        holding=np.append(joined.holding, [True] * 6),
    )
    known = known_wrenches(cases, block, library, case)
    inertia = inertia_wrench(cases, case, mass=block.mass, cg=block.cg, inertia=block.inertia, about=np.zeros(3))
    rear = about_origin(cases.faces["rear"].wrench, cases.faces["rear"].reference)
    columns = [item.reshape(-1, item.shape[-1]).T for item in (known, inertia, rear)]
    solution = solve(
        grounded,
        library.flexibility,
        library.rigid_modes(),
        wrenches=columns[0],
        own_motion=np.zeros_like(columns[0]),
        block_load=columns[1],
        gearbox_load=columns[2],
    )
    total = columns[0] + grounded.on_block @ solution.forces
    return np.vstack([total, np.zeros((1, total.shape[1]))]).T.reshape(*known.shape[:2], -1)
