"""The main job on the demo car: from its figures to a verdict, with everything that must hold on the way."""

from __future__ import annotations

import re
from dataclasses import replace
from pathlib import Path

import demo
import numpy as np
import pytest

from blockload import pipeline
from blockload.block.building import build
from blockload.car.balance import balance
from blockload.car.governing import in_group
from blockload.car.model import SECTION
from blockload.case.model import SecondPath
from blockload.case.reading import read
from blockload.errors import BlockError, CaseError
from blockload.installation.install import install
from blockload.margins.faces import face_margins
from blockload.margins.judging import judge
from blockload.margins.model import Margins
from blockload.margins.strength import von_mises
from blockload.report.suspension_tables import lifted_table
from blockload.response.cuts import section_stress

STAMP = "chassis load only: no assembly, gas or heat"


def test_the_demo_is_not_shown_only_because_base_states_are_missing() -> None:
    verdict = demo.run().margins.verdict

    assert (verdict.word, verdict.level) == ("not shown", "solid")
    assert STAMP in verdict.reasons
    assert not [reason for reason in verdict.reasons if reason.startswith(("check failed", "fails", "band crosses"))]
    assert verdict.lowest_margin is not None
    assert verdict.lowest_margin > 0.0


@pytest.mark.slow
def test_the_thin_block_is_ruled_out() -> None:
    verdict = demo.run("demo-thin").margins.verdict

    assert verdict.word == "ruled out"
    assert verdict.lowest_margin is not None
    assert verdict.lowest_margin < 0.0


def test_every_check_of_the_demo_passes() -> None:
    run = demo.run()

    assert [item.name for item in (*run.case.checks, *run.margins.checks) if not item.ok] == []


def test_every_solid_margin_carries_the_stamp_trust_and_causes_that_sum_to_one() -> None:
    for item in demo.run().margins.margins:
        if item.criterion in ("yield", "tensile rupture"):
            assert STAMP in item.note
            assert item.trust in ("converged", "coarse", "singular", "near an attachment")
            assert sum(cause.share for cause in item.causes) == pytest.approx(1.0, abs=1e-9)


def test_downforce_alone_presses_the_top_studs_and_pulls_the_bottom_ones() -> None:
    run = demo.run()
    case = run.cases.names.index("downforce_only")
    for face in run.cases.faces.values():
        axial = face.stud_axial[case].sum(axis=0)
        height = face.stud_at[:, 1]

        assert (axial[height == height.max()] < 0.0).all()
        assert (axial[height == height.min()] > 0.0).all()


def test_downforce_alone_presses_the_top_fifth_of_the_solid_and_pulls_the_bottom_fifth() -> None:
    """The first moment of the longitudinal stress over the middle section is the sagging moment there."""
    run = demo.run()
    assert run.block is not None
    assert run.library is not None
    assert run.pads is not None
    case = run.cases.names.index("downforce_only")
    state = run.pads.weights[run.pads.middle, case].sum(axis=0)
    x = (run.cases.faces["front"].reference[0] + run.cases.faces["rear"].reference[0]) / 2.0
    stress = section_stress(run.block, run.library, state, float(x))

    assert stress.top[0] < 0.0 < stress.bottom[0]
    assert stress.about_y[0] == pytest.approx(-sagging(run, case, x, stress.centroid[1]), rel=5e-3)


def sagging(run: demo.Run, case: int, x: float, height: float) -> float:
    """M_sag of the front on the rear part at the middle section about its own centroid, from the car's rear side."""
    from blockload.car.stations import reference_line, section_along

    section = section_along(run.cases, np.array([x]))[case, 0]
    shift = height - reference_line(run.cases, np.array([x]))[0, 2]
    # The moment about a point higher by `shift`: M_y changes by -N shift, and M_sag = -M_y.
    return float(section[SECTION.index("M_sag")] + shift * section[SECTION.index("N")])


def test_a_flexibility_wrong_by_one_per_cent_is_caught() -> None:
    run = demo.run()
    assert run.block is not None
    assert run.library is not None
    assert run.pads is not None
    wrong = replace(run.library, flexibility=run.library.flexibility * 1.01)
    margins = judge(run.case, run.cases, run.block, wrong, install(run.cases, run.block, wrong, run.case))

    assert "flexibility is the average motion of the attachments" in [
        item.name for item in margins.checks if not item.ok
    ]


def test_pads_installed_upside_down_and_stale_carried_masses_are_caught() -> None:
    run = demo.run()
    assert run.block is not None
    assert run.library is not None
    assert run.pads is not None
    swapped = run.pads.weights.copy()
    for a, b in (("TL", "BL"), ("TR", "BR")):
        top, bottom = run.library.rows("front", a), run.library.rows("front", b)
        swapped[..., top], swapped[..., bottom] = run.pads.weights[..., bottom], run.pads.weights[..., top]
    upside_down = judge(run.case, run.cases, run.block, run.library, replace(run.pads, weights=swapped))
    heavier = read(demo.CASES / "demo.toml", ["bodies.engine.mass=195 kg"])
    stale = judge(heavier, run.cases, run.block, run.library, run.pads)

    assert "sagging presses the upper pads against the lower ones" in failed(upside_down)
    assert "mesh and carried masses add up to the engine" in failed(stale)


def failed(margins: Margins) -> list[str]:
    return [item.name for item in margins.checks if not item.ok]


@pytest.mark.parametrize("key", ["faces.front.studs.TL", "faces.rear.studs.MR"])
def test_a_pad_moved_by_50_mm_is_refused_by_its_name(key: str) -> None:
    case = read(demo.CASES / "demo.toml")
    face, name = key.split(".")[1], key.split(".")[-1]
    stud = next(item for item in case.faces[face].studs if item.name == name)
    moved = f"({stud.at[0]}, {stud.at[1] + 0.05}) m"
    with pytest.raises(BlockError, match=name):
        build(read(demo.CASES / "demo.toml", [f"{key}={moved}"]))


def test_left_and_right_exchanged_is_refused(tmp_path: Path) -> None:
    """Exchanging the studs is refused on reading; exchanging the pads at the mesh."""
    with pytest.raises(CaseError, match="TL"):
        read(
            demo.CASES / "demo.toml",
            ["faces.front.studs.TL=(-0.240, 0.470) m", "faces.front.studs.TR=(0.240, 0.470) m"],
        )
    swapped = ["block.attachments.front.TL=pad_front_TR", "block.attachments.front.TR=pad_front_TL"]
    with pytest.raises(BlockError, match="TL"):
        build(read(demo.CASES / "demo.toml", swapped))


def test_a_combination_of_load_cases_equals_the_case_of_the_combination() -> None:
    """Weight alone and downforce alone add up to both together, in faces, pads and stress."""
    base = read(demo.CASES / "demo.toml")
    quiet = base.manoeuvres[1]
    both, weight, down = (
        replace(quiet, name="-".join(parts), drive="coast", overall_ratio=None, parts=parts)
        for parts in (("weight", "downforce"), ("weight",), ("downforce",))
    )
    run = demo.run()
    assert run.block is not None
    assert run.library is not None
    cases = balance(replace(base, manoeuvres=(both, weight, down)))
    pads = install(cases, run.block, run.library, base)
    state = pads.weights[pads.middle].sum(axis=1)
    stress = np.asarray(run.library.stress) @ state.T
    whole, sum_of_parts = stress[..., 0], stress[..., 1] + stress[..., 2]

    assert np.abs(whole - sum_of_parts).max() <= 1e-9 * np.abs(whole).max()


def test_a_second_run_does_not_touch_the_factorisation(monkeypatch: pytest.MonkeyPatch) -> None:
    from blockload.response import respond

    first = demo.run()

    def refuse(*_args: object, **_kwargs: object) -> None:
        pytest.fail("the factorisation was called again")

    monkeypatch.setattr(respond, "factorise", refuse)
    second = pipeline.check(demo.CASES / "demo.toml")

    assert first.library is not None
    assert second.library is not None
    assert second.library.from_cache
    assert second.margins.verdict == first.margins.verdict


def test_the_concept_needs_at_most_25_numbers_and_answers_at_level_faces() -> None:
    """Numbers of quantities are counted; names such as M12, 12.9 or a grade are not."""
    text = (demo.CASES / "concept.toml").read_text(encoding="utf-8")
    lines = [
        line.split("#")[0] for line in text.splitlines() if not line.startswith(("format", "title", "grade", "stud"))
    ]
    values = "\n".join(line.partition("=")[2] for line in lines)
    numbers = re.findall(r"(?<![\w.^])[-+]?\d+(?:\.\d+)?", values)
    run = demo.run("concept")

    assert len(numbers) <= 25
    assert run.margins.verdict.level == "faces"
    assert run.margins.requirements
    assert run.block is None


@pytest.mark.slow
def test_loads_that_are_only_handed_on_are_never_judged_with_the_blocks_own_twist_either() -> None:
    """Roll-structure and rear-impact loads test other parts: the second balance leaves them out as the first does."""
    twist = ("chassis.torsion_stiffness=20 kNm/deg", "chassis.without_block=true")
    groups = {
        group for run in (demo.run("demo-catalogue"), demo.run("demo-catalogue", *twist)) for group in run.cases.group
    }

    assert not groups & {"roll_structure", "rear_impact"}


@pytest.mark.slow
def test_every_hotspot_finds_its_own_vertex_of_the_grip_and_power_boundary() -> None:
    """Vertices are ordinary load cases: at each hotspot the governing case is found again among all of them."""
    run = demo.run("demo", 'envelope.speeds=["30 m/s", "60 m/s"]', "envelope.headings=12")
    assert run.library is not None
    assert run.pads is not None
    states = run.pads.weights.sum(axis=2)
    points = run.library.surface_points[run.library.entry_node]
    for item in [item for item in run.margins.margins if item.criterion == "yield"][:3]:
        entry = int(np.linalg.norm(points - item.at, axis=1).argmin())
        applied = von_mises(np.asarray(run.library.stress[entry]) @ np.moveaxis(states, -1, -2))

        assert item.load_case == run.cases.names[int(applied.reshape(len(states), -1).max(axis=0).argmax())]
    assert len(in_group(run.cases, "envelope")) == 24


def test_a_lifted_wheel_is_solved_on_three_wheels_and_said() -> None:
    _, cases = pipeline.loads(demo.CASES / "demo.toml", ["manoeuvres.corner_left.acceleration=(0, 42, 0) m/s^2"])
    corner = cases.names.index("corner_left")

    assert cases.lifted[corner].tolist() == [True, False, False, False]
    assert cases.wheels[corner, 0, 2] == pytest.approx(0.0, abs=1e-6)
    assert not cases.wheel_lift[corner]
    assert "FL" in " ".join(lifted_table(cases).rows[0])


def test_a_load_case_beyond_the_tyres_grip_rules_nothing_out_and_shows_nothing() -> None:
    run = demo.run("demo", "manoeuvres.launch.acceleration=(30, 0, 0) m/s^2")

    assert run.margins.verdict.word == "not shown"
    assert any("grip" in reason and "launch" in reason for reason in run.margins.verdict.reasons)
    assert [item.name for item in run.margins.checks if not item.ok] == ["load cases beyond the grip of an axle"]


def test_a_failure_behind_an_impossible_load_case_still_rules_out() -> None:
    """One stud slips on a kerb; corners that would tip the car are worse for it, and must not hide that."""
    strict = "limits.slip_factor=1.9"
    corners = [f"manoeuvres.corner_{side}.acceleration=(0, {a}, 0) m/s^2" for side, a in (("left", 95), ("right", -95))]
    real, run = demo.run("demo", strict), demo.run("demo", strict, *corners)

    assert real.margins.verdict.word == "ruled out"
    assert run.margins.verdict.word == "ruled out"
    assert any("corner_left" in reason and "no states of the car" in reason for reason in run.margins.verdict.reasons)


def test_a_second_load_path_takes_its_share_off_the_face_slip() -> None:
    """A strut from tub to gearbox carries force past both faces: their slip changes with its tension."""
    run = demo.run("demo")
    assert run.block is not None
    assert run.library is not None
    ends = {"from_at": np.array([-1.4, 0.0, 0.5]), "to_at": np.array([-2.3, 0.0, 0.5])}
    strut = SecondPath(name="strut", from_body="tub", to_body="gearbox", stiffness=2e8, **ends)
    braced = replace(run.case, paths=(strut,))
    pads = install(run.cases, run.block, run.library, braced)
    plain, eased = face_margins(run.case, run.cases), face_margins(braced, run.cases, pads)

    assert np.abs(pads.path_force.sum(axis=2)).max() > 1e3
    assert pads.sum_gap < 1e-9
    for before, after in zip(plain, eased, strict=True):
        assert before.margin is not None
        assert after.margin is not None
        assert abs(before.margin - after.margin) > 1e-3


def test_a_tub_matrix_leaves_the_faces_bending_to_the_studs() -> None:
    """A tub known by its studs' translations holds no pad in rotation, however soft it is."""
    run = demo.run("demo")
    assert run.block is not None
    assert run.library is not None
    soft = replace(run.case, installation=replace(run.case.installation, tub=np.eye(12) * 2e7))
    pads = install(run.cases, run.block, run.library, soft)
    couples = [
        np.abs(pads.weights[..., run.library.rows("front", stud.name)][..., 3:]).max()
        for stud in run.case.faces["front"].studs
    ]

    assert max(couples) == pytest.approx(0.0, abs=1e-6)
    assert pads.sum_gap < 1e-9


def test_a_car_that_would_tip_is_flagged_and_nothing_is_shown() -> None:
    run = demo.run("demo", "manoeuvres.corner_left.acceleration=(0, 90, 0) m/s^2")

    assert run.cases.wheel_lift.any()
    assert run.margins.verdict.word == "not shown"
    assert any("wheel" in reason for reason in run.margins.verdict.reasons)
