"""The installed system against closed forms, and what it refuses."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from installation import solid_car
from installation import synthetic_car as car

from blockload.case.model import SecondPath
from blockload.errors import CaseError, SolveError
from blockload.installation.compliance import pad_compliance, stiffness_variants
from blockload.installation.install import install

K_N, K_T = 8e8, 4e8


def pad_force(pads, library, face, name, variant=1):
    return pads.weights[variant].sum(axis=1)[:, library.rows(face, name)][:, :3]


def soft_pads(case, block, cases, **changes):
    """Pads a million times softer than the block: what a rigid block would do."""
    library = car.library(block, flexibility=1e-9 * car.library(block).flexibility)
    return install(cases, block, library, case, **changes), library


def test_a_round_pad_has_the_stiffness_of_its_area_moments() -> None:
    """k_n I/A and k_t J/A of a disc: I = πr⁴/4, J = πr⁴/2, so I/A = r²/4 and J/A = r²/2 (any handbook)."""
    pad = car.pad("P", "front", (0.0, 0.0, 0.0), (1.0, 0.0, 0.0))

    compliance = pad_compliance(pad, K_N, K_T)

    r2 = 0.02**2
    expected = [1 / K_N, 1 / K_T, 1 / K_T, 2 / (K_T * r2), 4 / (K_N * r2), 4 / (K_N * r2)]
    np.testing.assert_allclose(compliance, np.diag(expected), rtol=1e-12, atol=1e-24)


def test_pad_compliance_turns_with_its_normal() -> None:
    """A pad facing another way is the same pad in turned axes."""
    turn = np.linalg.qr(np.random.default_rng(5).normal(size=(3, 3)))[0]
    turn *= np.sign(np.linalg.det(turn))
    straight = car.pad("P", "front", (0.0, 0.0, 0.0), (1.0, 0.0, 0.0))
    n = turn @ straight.normal
    turned = car.pad("P", "front", (0.0, 0.0, 0.0), tuple(n))

    both = np.kron(np.eye(2), turn)
    expected = both @ pad_compliance(straight, K_N, K_T) @ both.T
    np.testing.assert_allclose(pad_compliance(turned, K_N, K_T), expected, rtol=1e-9, atol=1e-18)


def test_one_given_stiffness_is_the_middle_of_a_band() -> None:
    """A tenth and ten times bound it; three given are kept, soft to stiff."""
    one = stiffness_variants(car.case().installation)
    three = stiffness_variants(
        car.case(pad_stiffness=(("stiff", 3e9, 1e9), ("soft", 1e8, 1e8), ("middle", 1e9, 5e8))).installation
    )

    assert [n for _, n, _ in one] == pytest.approx([8e7, 8e8, 8e9])
    assert [t for _, _, t in one] == pytest.approx([4e7, 4e8, 4e9])
    assert [label for label, _, _ in three] == ["soft", "middle", "stiff"]


@pytest.mark.parametrize("entries", [(), (("given", 0.0, 1e8),), (("given", 1e8, -1.0),), (("given", np.inf, 1e8),)])
def test_a_pad_without_a_stiffness_is_refused(entries) -> None:
    with pytest.raises(CaseError, match="pad_stiffness"):
        stiffness_variants(car.case(pad_stiffness=entries).installation)


def test_a_rigid_block_on_equal_pads_has_the_stud_forces_of_the_rigid_face() -> None:
    """The rear face, whose wrench is given: bolt-group rule a = N/n + M d/Σd², s = V/n + T r/Σr² (Shigley, ch. 8).

    A pad's own bending takes a little of the moments, so it is made tiny.
    """
    case = car.case(pad_stiffness=(("given", K_N, K_N),))
    block = car.block(case)
    block = with_points_for_pads(block)
    cases = car.random_cases(case)
    pads, library = soft_pads(case, block, cases)

    loads = cases.faces["rear"]
    for index, name in enumerate(loads.studs):
        force = pad_force(pads, library, "rear", name)
        np.testing.assert_allclose(-force[:, 0], loads.stud_axial.sum(axis=1)[:, index], rtol=1e-5, atol=0.05)
        np.testing.assert_allclose(force[:, 1:], loads.stud_shear.sum(axis=1)[:, index], rtol=1e-5, atol=0.05)


def with_points_for_pads(block):
    """Pads shrunk to a tenth of a millimetre: forces only."""
    shrunk = tuple(replace(item, area=1e-4 * item.area, moments=1e-8 * item.moments) for item in block.attachments)
    return replace(block, attachments=shrunk)


def test_a_second_path_shares_with_the_pads_like_two_springs() -> None:
    """Two springs side by side, opened by hand: the strut takes k_s/(k_s + k) of the thrust.

    k is that of the four front and four rear pads in series between tub and gearbox, 4 k_n / 2.
    """
    stiffness = 5e8
    rear = {"TL": (0.2, 0.4), "TR": (-0.2, 0.4), "BL": (0.2, 0.1), "BR": (-0.2, 0.1)}
    path = SecondPath(
        name="strut",
        from_body="gearbox",
        from_at=np.array([-2.3, 0.0, 0.25]),
        to_body="tub",
        to_at=np.array([-1.4, 0.0, 0.25]),
        stiffness=stiffness,
    )
    case = car.case(front=rear, rear=rear, paths=(path,))
    block = car.block(case, carried=())
    wrench = np.array([[[1000.0, 0.0, 0.0, 0.0, 0.0, 0.0]]])
    cases = car.load_cases(case, rear=wrench)
    pads, library = soft_pads(case, block, cases)

    pair = 4 * K_N / 2
    share = stiffness / (stiffness + pair)
    strut = pads.path_force[pads.middle, 0, 0, 0]
    through_pads = sum(pad_force(pads, library, "rear", name)[0, 0] for name in rear)

    assert abs(strut) == pytest.approx(1000.0 * share, rel=1e-6)
    assert through_pads == pytest.approx(1000.0 * (1 - share), rel=1e-6)
    assert pads.sum_gap < 1e-9


def strut_to_mains(y: float) -> SecondPath:
    return SecondPath(
        name="strut",
        from_body="tub",
        from_at=np.array([-1.4, 0.5, 0.3]),
        to_body="engine",
        to_at=np.array([-1.8, y, 0.08]),
        stiffness=1e8,
    )


def test_a_second_path_on_the_engine_enters_by_the_nearest_attachment() -> None:
    """A strut from the tub loads the block where it is bolted, and every sum still closes."""
    block, library = solid_car.solved()
    path = strut_to_mains(0.02)
    case = solid_car.case(paths=(path,))
    cases = car.random_cases(case)
    pads = install(cases, block, library, case)
    without = install(cases, block, library, solid_car.case())

    difference = pads.weights[1].sum(axis=1) - without.weights[1].sum(axis=1)
    mains = difference[:, library.rows("other", "mains")]
    line = (path.to_at - path.from_at) / np.linalg.norm(path.to_at - path.from_at)
    tension = pads.path_force[1].sum(axis=1)[:, 0]
    assert np.abs(tension).max() > 10.0
    np.testing.assert_allclose(mains[:, :3], -tension[:, None] * line, rtol=1e-9, atol=1e-6)
    assert pads.sum_gap < 1e-9
    assert pads.relief_gap < 1e-9


def test_a_second_path_far_from_every_attachment_is_refused() -> None:
    block, library = solid_car.solved()
    case = solid_car.case(paths=(strut_to_mains(0.9),))

    with pytest.raises(CaseError, match="nearest attachment") as caught:
        install(car.random_cases(case), block, library, case)
    assert caught.value.where == "[paths.strut]"


def test_a_diagonal_tub_matrix_is_softer_pads() -> None:
    """A 3n × 3n tub of springs in series with the pads equals pads of the combined stiffness (forces only)."""
    tub = np.diag(np.tile([6e8, 3e8, 3e8], 4))
    with_tub = car.case(pad_stiffness=(("given", K_N, K_T),), tub=tub)
    block = with_points_for_pads(car.block(with_tub))
    library = car.library(block)
    cases = car.random_cases(with_tub)
    ours = install(cases, block, library, with_tub)

    soft = 1 / (1 / K_N + 1 / 6e8), 1 / (1 / K_T + 1 / 3e8)
    stiffness = np.diag(np.tile([*soft, soft[1]], 4))
    inverse = np.linalg.inv(stiffness) - np.diag(np.tile([1 / K_N, 1 / K_T, 1 / K_T], 4))
    same = install(cases, block, library, car.case(tub=np.linalg.inv(inverse)))

    np.testing.assert_allclose(ours.weights[1], same.weights[1], rtol=1e-9, atol=1e-6)
    rigid = install(cases, block, library, car.case())
    assert np.abs(rigid.weights[1] - ours.weights[1]).max() > 1.0


@pytest.mark.parametrize(
    ("tub", "words"),
    [
        (np.eye(9) * 1e8, "9 x 9"),
        (np.eye(12) * 1e8 + np.triu(np.full((12, 12), 1e7), 1), "not symmetric"),
        (np.diag([0.0] + [1e8] * 11), "softest motion"),
    ],
)
def test_a_tub_matrix_that_cannot_be_one_is_refused(tub, words) -> None:
    case = car.case(tub=tub)
    block = car.block(case)

    with pytest.raises(CaseError, match=words):
        install(car.random_cases(case), block, car.library(block), case)


@pytest.mark.parametrize(
    ("front", "motion"),
    [
        ({"A": (0.2, 0.3), "B": (-0.2, 0.3)}, "rotation of the engine about"),
        ({"A": (0.0, 0.3)}, "rotation of the engine about"),
        ({"A": (0.2, 0.3), "B": (0.0, 0.3), "C": (-0.2, 0.3)}, "rotation of the engine about"),
        ({}, "engine"),
    ],
)
def test_pads_that_leave_a_motion_free_are_refused_and_the_motion_named(front, motion) -> None:
    """Under-constraint: two studs, one, three in a line, none."""
    case = car.case()
    block = car.block(case)
    fewer = car.case(front=front) if front else case
    keep = car.block(fewer) if front else without(block, "front")
    cases = car.random_cases(case)

    with pytest.raises(SolveError, match="nothing holds") as caught:
        install(cases, keep, car.library(keep), fewer)
    assert motion in caught.value.found


def test_the_axis_of_a_missing_rotation_is_the_line_through_two_studs() -> None:
    case = car.case(front={"A": (0.2, 0.3), "B": (-0.2, 0.3)})
    block = car.block(case)

    with pytest.raises(SolveError) as caught:
        install(car.random_cases(car.case()), block, car.library(block), case)
    assert "(-1.500" in caught.value.found
    assert "0.300) m" in caught.value.found


def without(block, kind):
    return replace(block, attachments=tuple(item for item in block.attachments if item.kind != kind))


def test_a_block_without_gearbox_pads_is_refused() -> None:
    """Nothing would carry the gearbox."""
    case = car.case()
    block = without(car.block(case), "rear")

    with pytest.raises(SolveError, match="gearbox"):
        install(car.random_cases(case), block, car.library(block), case)
