"""Names, places, materials and masses that contradict the case: each refused with the likely way out."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from tiny import STUDS, case_for, tiny, write

from blockload.block.building import build
from blockload.case.model import Carried, MaterialChoice
from blockload.errors import BlockError

FRONT = {name: f"pad_front_{name}" for name in STUDS}


@pytest.fixture(scope="module")
def path(tmp_path_factory) -> Path:
    return write(tiny(), tmp_path_factory.mktemp("names") / "tiny.vtu")


def refusal(path: Path, **changes: Any) -> BlockError:
    with pytest.raises(BlockError) as caught:
        build(case_for(path, **changes))
    return caught.value


def grade(volume: str, name: str = "EN AC-42100 KT6") -> MaterialChoice:
    return MaterialChoice(volume=volume, grade=name, properties=None, temperature=None)


def test_no_face_set_of_this_name_offers_the_nearest(path) -> None:
    error = refusal(path, front={**FRONT, "TL": "pad_frnt_TL"})

    assert error.where == "block.attachments.front.TL"
    assert "Did you mean 'pad_front_TL'?" in error.found
    assert "main_1, main_2" in error.allowed


def test_a_pattern_that_matches_nothing(path) -> None:
    assert "no face set 'saddle_*'" in refusal(path, other={"main_bearings": "saddle_*"}).found


def test_an_empty_face_set(tmp_path) -> None:
    box = tiny()
    hollow = replace(box, faces={**box.faces, "main_1": box.faces["main_1"][:0]})
    error = refusal(write(hollow, tmp_path / "empty.vtu"), other={"main_bearings": "main_1"})

    assert "'main_1' is empty" in error.found


def test_two_pads_sharing_a_face(tmp_path) -> None:
    box = tiny()
    shared = np.vstack([box.faces["pad_front_TR"], box.faces["pad_front_TL"][:1]])
    path = write(replace(box, faces={**box.faces, "pad_front_TR": shared}), tmp_path / "shared.vtu")
    error = refusal(path)

    assert error.where == "block.attachments.front.TR"
    assert "1 faces belong to front TL as well" in error.found


def test_a_face_set_inside_the_metal(tmp_path) -> None:
    box = tiny()
    inner = np.array([[row[i] for i in (0, 1, 2, 4, 5, 6)] for row in box.elements])
    middle = box.points[inner[:, :3]]
    joint = inner[np.all(abs(middle[:, :, 2] - 0.25) < 1e-9, axis=1)]
    path = write(replace(box, faces={**box.faces, "joint": joint}), tmp_path / "joint.vtu")

    assert "lie inside the metal" in refusal(path, other={"main_bearings": "main_*", "deck": "joint"}).found


def test_a_pad_away_from_its_stud_gives_both_places(path) -> None:
    """A stud moved 50 mm up leaves its pad behind."""
    case = case_for(path)
    front = case.faces["front"]
    studs = tuple(replace(s, at=s.at + np.array([0.0, 0.05])) if s.name == "TL" else s for s in front.studs)
    with pytest.raises(BlockError) as caught:
        build(replace(case, faces={**case.faces, "front": replace(front, studs=studs)}))

    assert "(-1500.0, 125.0, 275.0) mm, 50.0 mm from the stud at (-1500.0, 125.0, 325.0) mm" in caught.value.found


def test_two_names_swapped_are_recognised(path) -> None:
    error = refusal(path, front={**FRONT, "TL": "pad_front_BL", "BL": "pad_front_TL"})

    assert "where the front stud" in error.remedy
    assert "swapped" in error.remedy


def test_left_and_right_exchanged_are_recognised(path) -> None:
    rear = {"TL": "pad_rear_TR", "TR": "pad_rear_TL", "BL": "pad_rear_BL"}
    error = refusal(path, front={**FRONT, "TL": "pad_front_TR", "TR": "pad_front_TL"}, rear=rear)

    assert "left and right look exchanged" in error.remedy


def test_a_block_out_of_place_names_the_common_offset(path) -> None:
    error = refusal(path, place=np.array([0.02, 0.0, 0.01]))

    assert "all pads are off by (20.0, 0.0, 10.0) mm" in error.remedy
    assert "6 of 6 pads" in error.found


def test_a_block_turned_back_to_front_and_put_in_its_place_passes(path, tmp_path) -> None:
    """The same box written with x rearward: turn and place bring it back, left stays left."""
    box = tiny()
    turned = replace(box, points=(box.points - (-1.5, 0, 0.1)) * (-1, -1, 1))
    block = build(
        case_for(
            write(turned, tmp_path / "turned.vtu", scale=1e3),
            mesh_unit=1e-3,
            turn=np.array([0.0, 0.0, np.pi]),
            place=np.array([-1.5, 0.0, 0.1]),
        )
    )

    np.testing.assert_allclose(block.attachment("TL", "front").centroid, (-1.5, 0.125, 0.275), atol=1e-12)
    np.testing.assert_allclose(block.cg, build(case_for(path)).cg, atol=1e-12)


def test_pads_and_studs_must_match_one_to_one(path) -> None:
    assert "no pad for stud BL" in refusal(path, front={"TL": "pad_front_TL", "TR": "pad_front_TR"}).found
    assert "'TLL' is no stud of the front face" in refusal(path, front={**FRONT, "TLL": "pad_front_TL"}).found


def test_an_unknown_carrier(path) -> None:
    error = refusal(path, carried_on="main_bearing")

    assert error.where == "block.carried_on"
    assert "Did you mean 'main_bearings'?" in error.found


def test_a_volume_without_a_material(path) -> None:
    error = refusal(path, materials=(grade("crankcase"),))

    assert "volume 'head' has no material" in error.found
    assert '"*"' in error.remedy


def test_a_volume_that_fits_two_patterns_and_a_pattern_that_fits_none(path) -> None:
    assert "fits 'c*' and '*'" in refusal(path, materials=(grade("c*"), grade("*"))).found
    assert "no volume of this name" in refusal(path, materials=(grade("*"), grade("sump"))).found


def test_a_volumes_own_name_goes_before_a_pattern(path) -> None:
    block = build(case_for(path, materials=(grade("*"), grade("head", "EN AC-43000 KT6"))))

    assert block.materials["head"].name == "EN AC-43000 KT6"
    assert block.materials["crankcase"].name == "EN AC-42100 KT6"


def test_an_unknown_grade_offers_the_nearest(path) -> None:
    assert "Did you mean 'EN AC-42100 KT6'?" in refusal(path, materials=(grade("*", "EN AC-42100 K T6"),)).found


def test_an_engine_lighter_than_its_mesh(path) -> None:
    case = case_for(path)
    engine = replace(case.bodies["engine"], mass=99.0)
    with pytest.raises(BlockError, match=r"lighter than its mesh and named parts \(99.7 kg\)"):
        build(replace(case, bodies={**case.bodies, "engine": engine}))


def test_named_parts_heavier_than_what_is_left(path) -> None:
    part = Carried(name="crank", on="main_bearings", mass=95.0, cg=np.array([-1.8, 0, 0.2]), inertia=np.zeros((3, 3)))

    assert "99.7 + crank 95.0 kg" in refusal(path, carried=(part,)).found


@pytest.mark.parametrize(
    ("principal", "said"),
    [((1.0, 1.0, 1.0), "not positive"), ((9.0, 11.0, 19.9), "triangle rule")],
)
def test_a_remainder_no_body_can_have(path, principal, said: str) -> None:
    case = case_for(path)
    engine = replace(case.bodies["engine"], inertia=np.diag(principal))
    with pytest.raises(BlockError, match=said):
        build(replace(case, bodies={**case.bodies, "engine": engine}))
