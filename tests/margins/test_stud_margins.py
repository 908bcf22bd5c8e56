"""Stud and face margins against numbers worked by hand."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from installation import synthetic_car as car

from blockload.case.fasteners import fastener
from blockload.errors import CaseError
from blockload.installation.install import install
from blockload.margins.faces import face_margins
from blockload.margins.splits import rigid_splits, series, spring_split
from blockload.margins.studs import Split, criteria, joint, margin_of, stud_margins
from blockload.margins.wording import LARGEST

HERE = {"place": "stud", "at": (0.0, 0.0, 0.0), "names": ("one", "two"), "sources": ("a", "b")}


def stud(**changes):
    """M12 12.9 with 60 kN ± 25 %, load factor 0.2, friction 0.15."""
    return replace(car.studs({"A": (0.0, 0.0)})[0], **changes)


def margin(name: str, force: list[list[list[float]]], **changes):
    """Margin of one criterion for forces (C, S, 3)."""
    of = joint(stud(**changes))
    row = next(item for item in criteria(of, car.LIMITS) if item.name == name)
    return margin_of(row, of, [Split(label="by hand", force=np.array(force))], **HERE)


FORCE = [[[12e3, 3e3, 0.0], [3e3, 0.0, 4e3]], [[1e3, 0.0, 0.0], [0.0, 0.0, 0.0]]]


def test_separation_by_hand() -> None:
    """45 kN / (1.5 · 0.8 · 15 kN) − 1 = 1.5."""
    found = margin("separation", FORCE)
    assert found.margin == pytest.approx(1.5)
    assert found.load_case == "one"
    assert found.second == ("two", pytest.approx(45 / (1.5 * 0.8) - 1))
    assert {c.source: c.share for c in found.causes} == pytest.approx({"a": 0.8, "b": 0.2})


def test_slip_by_hand() -> None:
    """0.15 · 45 kN / (1.5 (5 kN + 0.15 · 0.8 · 15 kN)) − 1 = 6.75/10.2 − 1."""
    found = margin("slip", FORCE)
    assert found.margin == pytest.approx(6.75 / 10.2 - 1)
    assert sum(c.share for c in found.causes) == pytest.approx(1.0)


def test_tension_by_hand() -> None:
    """(970 MPa · 84.27 mm² − 75 kN) / (1.5 · 0.2 · 15 kN) − 1."""
    found = margin("stud tension", FORCE)
    area = np.pi / 4 * (0.012 - 0.9382 * 0.00175) ** 2
    assert found.margin == pytest.approx((970e6 * area - 75e3) / (1.5 * 0.2 * 15e3) - 1)


def test_a_pressed_stud_neither_parts_nor_stretches_and_holds_more() -> None:
    pressed = [[[-15e3, 3e3, 0.0], [0.0, 0.0, 4e3]]]
    names = {**HERE, "names": ("one",)}
    of = joint(stud())
    rows = {item.name: item for item in criteria(of, car.LIMITS)}
    split = [Split(label="by hand", force=np.array(pressed))]

    assert margin_of(rows["separation"], of, split, **names).margin is None
    assert margin_of(rows["stud tension"], of, split, **names).margin is None
    assert margin_of(rows["slip"], of, split, **names).margin == pytest.approx(6.75 / (1.5 * (5 - 1.8)) - 1)


def test_no_slip_margin_where_pressure_holds_more_than_the_shear_asks() -> None:
    found = margin("slip", [[[-100e3, 1e3, 0.0]], [[-100e3, 0.0, 1e3]]])
    assert found.margin is None
    assert found.band is None


def test_preload_above_the_proof_load_fails_without_any_load() -> None:
    found = margin("stud tension", [[[0.0, 0.0, 0.0]], [[0.0, 0.0, 0.0]]], preload=80e3)
    assert found.margin == -1.0


def test_the_factor_scales_the_external_load_only() -> None:
    """Doubling factor and halving load gives the same margin; the preload stays out of it."""
    of = joint(stud())
    once = criteria(of, car.LIMITS)[1]
    twice = replace(once, factor=2 * once.factor)
    full = [Split(label="", force=np.array(FORCE))]
    half = [Split(label="", force=np.array(FORCE) / 2)]

    assert margin_of(twice, of, half, **HERE).margin == pytest.approx(margin_of(once, of, full, **HERE).margin)


def test_the_band_runs_over_the_splits_and_the_margin_is_its_worse_end() -> None:
    of = joint(stud())
    row = criteria(of, car.LIMITS)[1]
    splits = [Split(label=str(k), force=k * np.array(FORCE)) for k in (1.0, 0.5, 2.0)]
    found = margin_of(row, of, splits, **HERE)

    assert found.band == (pytest.approx(2.5 / 2 - 1), pytest.approx(2.5 / 0.5 - 1))
    assert found.margin == found.band[0]


def test_margins_are_cut_where_there_is_no_load_to_speak_of() -> None:
    assert margin("separation", [[[1e-9, 0.0, 0.0]], [[0.0, 0.0, 0.0]]]).margin == pytest.approx(LARGEST)


@settings(max_examples=20, deadline=None)
@given(seed=st.integers(0, 1000))
def test_every_split_of_a_face_is_in_balance_with_its_wrench(seed) -> None:
    """Rigid face, isostatic extremes and stud springs: all carry the same wrench."""
    rng = np.random.default_rng(seed)
    tub = rng.normal(size=(12, 12))
    case = car.case(tub=1e8 * (tub @ tub.T + np.eye(12)))
    cases = car.random_cases(case, seed=seed)
    for face, sign in (("front", 1.0), ("rear", -1.0)):
        loads = cases.faces[face]
        splits = rigid_splits(loads, case)
        assert len(splits) == (8 if face == "front" else 5)
        for split in splits:
            force = split.force * [sign, 1.0, 1.0]
            arm = loads.stud_at - loads.reference
            total = np.concatenate([force.sum(axis=2), np.cross(arm, force).sum(axis=2)], axis=-1)
            np.testing.assert_allclose(total, loads.wrench, rtol=1e-7, atol=1e-6)


def test_springs_all_alike_are_the_rigid_face() -> None:
    case = car.case()
    loads = car.random_cases(case).faces["front"]
    rigid = rigid_splits(loads, case)[0].force
    springs = spring_split(loads, series(np.diag([1e12] * 12), 8e8, 8e8))
    np.testing.assert_allclose(springs, rigid, rtol=1e-6, atol=1e-3)


def test_a_soft_stud_takes_less() -> None:
    """F = k G K⁻¹ W with one stud ten times softer: under pure thrust it carries far less than an equal quarter."""
    case = car.case()
    rear = np.array([[[1e3, 0.0, 0.0, 0.0, 0.0, 0.0]]])
    loads = car.load_cases(case, rear=rear).faces["front"]
    stiffness = np.full(12, 1e9)
    stiffness[:3] = 1e8
    force = spring_split(loads, np.diag(stiffness))[0, 0, :, 0]
    assert abs(force[0]) < 0.4 * 250.0
    assert force.sum() == pytest.approx(-1e3)


def test_margins_without_a_block_band_over_the_ways_to_split() -> None:
    case = car.case()
    found = stud_margins(case, car.random_cases(case))
    assert len(found) == 3 * 8
    assert all(item.margin is None or item.band[0] == item.margin <= item.band[1] for item in found)


def test_margins_of_an_installed_block_band_over_the_pads() -> None:
    case = car.case()
    block = car.block(case)
    library = car.library(block)
    cases = car.random_cases(case)
    pads = install(cases, block, library, case)

    found = stud_margins(case, cases, pads=pads, library=library)

    slip = next(item for item in found if item.criterion == "slip" and item.place == "rear stud TL")
    loads = []
    for variant in range(3):
        force = pads.weights[variant].sum(axis=1)[:, library.rows("rear", "TL")][:, :3]
        loads.append((np.hypot(force[:, 1], force[:, 2]) + 0.15 * 0.8 * -force[:, 0]).max())
    assert slip.applied == pytest.approx(max(loads))
    assert slip.band[1] == pytest.approx(6.75e3 / (1.5 * min(loads)) - 1)


def test_a_suppliers_limits_are_limits_too() -> None:
    limits = replace(car.LIMITS, stud_axial=45e3, stud_shear=20e3, face_moment=15e3)
    case = car.case(limits=limits)
    cases = car.random_cases(case)
    names = {item.criterion for item in (*stud_margins(case, cases), *face_margins(case, cases))}
    assert {"stud axial limit", "stud shear limit", "face moment limit"} <= names


def test_face_moment_by_hand() -> None:
    """√(3² + 4²) = 5 kN·m against 15 kN·m with a factor of 1.5: margin 1."""
    case = car.case(limits=replace(car.LIMITS, face_moment=15e3))
    rear = np.array([[[0.0, 0.0, 0.0, 0.0, 3e3, 4e3]]])
    found = face_margins(case, car.load_cases(case, rear=rear))
    moments = {item.place: item.margin for item in found if item.criterion == "face moment limit"}
    assert moments == pytest.approx({"front face": 1.0, "rear face": 1.0})


def test_face_slip_by_hand() -> None:
    """Four studs of 6.75 kN friction: pure shear 27 kN, pure torsion 6.75 kN times the sum of the radii."""
    case = car.case()
    shear = car.load_cases(case, rear=np.array([[[0.0, 0.0, 9e3, 0.0, 0.0, 0.0]]]))
    twist = car.load_cases(case, rear=np.array([[[0.0, 0.0, 0.0, 2e3, 0.0, 0.0]]]))
    at = twist.faces["rear"].stud_at
    radii = np.linalg.norm(at - at.mean(axis=0), axis=1).sum()

    assert face_margins(case, shear)[1].margin == pytest.approx(27 / (1.5 * 9) - 1)
    assert face_margins(case, twist)[1].margin == pytest.approx(6.75e3 * radii / (1.5 * 2e3) - 1)


def test_a_face_holds_at_least_what_its_worst_stud_allows() -> None:
    """Under pure shear all studs share alike: the group and the single stud slip together."""
    case = car.case()
    cases = car.load_cases(case, rear=np.array([[[0.0, 5e3, 9e3, 0.0, 0.0, 0.0]]]))
    loads = cases.faces["rear"]
    of = joint(case.faces["rear"].studs[0])
    row = criteria(of, case.limits)[2]
    single = [Split(label="", force=rigid_splits(loads, case)[0].force[:, :, 0])]
    one = margin_of(row, of, single, **{**HERE, "names": cases.names, "sources": cases.sources})
    assert face_margins(case, cases)[1].margin == pytest.approx(one.margin)


@pytest.mark.parametrize(("size", "grade"), [("M13", "12.9"), ("12", "12.9"), ("M12", "13.9"), ("M20", "9.8")])
def test_an_unknown_thread_or_class_is_refused(size, grade) -> None:
    with pytest.raises(CaseError, match=r"stud: .* no (metric thread|property class) known here"):
        fastener(size, grade)
