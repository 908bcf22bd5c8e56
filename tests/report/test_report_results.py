"""results.json: every key of the contract, nothing that is not a number, and a balance that a wrong number spoils."""

from __future__ import annotations

import copy
import json
import math
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from report.examples import example_case, example_cases, example_margins, margin

from blockload.report.compare import compare
from blockload.report.results import load_results, plain, reassembled_residual, results, write_json

LOAD_CASE_KEYS = {
    "speed",
    "downforce",
    "drag",
    "acceleration",
    "angular_acceleration",
    "wheels",
    "links",
    "crank_torque",
    "faces",
    "residual",
}


def document() -> dict[str, Any]:
    return results(example_case(), example_cases(), None, None, None, example_margins(), run_id="abc")


def numbers(value: Any) -> Iterator[float]:
    if isinstance(value, dict):
        for item in value.values():
            yield from numbers(item)
    elif isinstance(value, list):
        for item in value:
            yield from numbers(item)
    elif isinstance(value, float):
        yield value


def test_every_key_of_the_contract_is_there() -> None:
    data = document()

    assert {"format", "blockload_version", "run_id", "inputs", "load_cases"} <= set(data)
    assert {"stiffness", "margins", "checks", "verdict"} <= set(data)
    assert data["format"] == "blockload.results/1"
    assert {"case_sha256", "mesh_sha256"} <= set(data["inputs"])
    for case in data["load_cases"].values():
        assert set(case) >= LOAD_CASE_KEYS
        assert set(case["wheels"]) == {"FL", "FR", "RL", "RR"}
        assert set(case["wheels"]["FL"]) >= {"force", "friction_used"}
        for face in case["faces"].values():
            assert set(face) >= {"reference", "force", "moment", "section", "studs"}
            assert list(face["section"]) == ["N", "V_y", "V_z", "T", "M_sag", "M_lat"]
            assert all(set(stud) >= {"axial", "shear"} for stud in face["studs"].values())
    assert set(data["stiffness"]) >= {
        "torsion_Nm_per_rad",
        "bending_vertical_Nm_per_rad",
        "bending_lateral_Nm_per_rad",
    }
    assert set(data["margins"][0]) >= {
        "criterion",
        "place",
        "at",
        "load_case",
        "applied",
        "allowable",
        "unit",
        "factor",
        "margin",
        "band",
        "trust",
        "causes",
    }
    assert set(data["verdict"]) >= {"word", "level", "lowest_margin", "governing", "not_judged"}
    assert all(set(item) >= {"name", "ok", "value", "limit"} for item in data["checks"])


def test_numbers_that_do_not_exist_are_null_and_all_others_finite() -> None:
    data = document()

    assert all(math.isfinite(value) for value in numbers(data))
    assert data["load_cases"]["static"]["crank_torque"] is None
    assert plain({"a": math.nan, "b": np.float64("inf"), "c": np.array([1.0, np.nan])}) == {
        "a": None,
        "b": None,
        "c": [1.0, None],
    }


def test_friction_is_null_where_a_wheel_is_not_pressed_down() -> None:
    data = load_results(example_case(), example_cases())

    assert data["load_cases"]["static"]["wheels"]["FL"]["friction_used"] == pytest.approx(0.0)
    assert all(
        (wheel["friction_used"] is None) == (wheel["force"][2] <= 0)
        for case in data["load_cases"].values()
        for wheel in case["wheels"].values()
    )


def test_the_written_balance_closes() -> None:
    for case in document()["load_cases"].values():
        assert case["residual"] < 1e-12


def _corruptions() -> list[tuple[str, ...]]:
    return [
        ("wheels", "RL", "force", "2"),
        ("faces", "front", "moment", "1"),
        ("faces", "rear", "force", "0"),
        ("faces", "rear", "reference", "2"),
        ("free_bodies", "gearbox", "0", "force", "2"),
        ("free_bodies", "engine", "1", "at", "2"),
    ]


@pytest.mark.parametrize("path", _corruptions(), ids=".".join)
def test_one_wrong_number_spoils_the_written_balance(path: tuple[str, ...]) -> None:
    data = copy.deepcopy(document()["load_cases"]["corner_left"])
    place: Any = data
    for key in path[:-1]:
        place = place[int(key) if isinstance(place, list) else key]
    place[int(path[-1])] += 0.01 * abs(place[int(path[-1])]) + 1e-3

    assert reassembled_residual(data) > 1e-6


def test_wheels_and_faces_are_written_once_and_referred_to() -> None:
    bodies = document()["load_cases"]["v_max"]["free_bodies"]

    assert [line["same_as"] for line in bodies["FL"] if "same_as" in line] == ["wheels.FL"]
    assert sorted(line["same_as"] for line in bodies["engine"] if "same_as" in line) == ["faces.front", "faces.rear"]


def test_the_file_is_valid_json_without_nan(tmp_path: Path) -> None:
    path = tmp_path / "results.json"
    write_json(path, document())

    def refuse(word: str) -> None:
        raise AssertionError(word)

    assert json.loads(path.read_text(encoding="utf-8"), parse_constant=refuse)["run_id"] == "abc"


def test_a_nan_that_slipped_through_is_never_written(tmp_path: Path) -> None:
    with pytest.raises(ValueError, match="not JSON compliant"):
        write_json(tmp_path / "results.json", {"a": math.nan})
    assert list(tmp_path.iterdir()) == []


def test_two_results_side_by_side_show_the_difference() -> None:
    first, second = document(), document()
    second["margins"] = [dict(item, margin=item["margin"] + 0.5) for item in second["margins"]]
    second["load_cases"]["v_max"]["faces"]["front"]["section"]["M_sag"] += 1e3
    made = {item.title: item for item in compare(first, second, names=("one", "two"))}

    assert next(row for row in made["Face wrenches"].rows if row[:3] == ("v max", "front", "M_sag"))[-1] == "+1.00"
    assert {row[-1] for row in made["Margins"].rows} == {"+0.50"}
    assert made["The two"].note == "A is one; B is two"


def test_results_of_loads_alone_can_be_compared_with_those_of_a_check() -> None:
    titles = [item.title for item in compare(load_results(example_case(), example_cases()), document())]

    assert "Margins" in titles
    assert "Face wrenches" in titles


def test_a_margin_without_load_is_null() -> None:
    judged = example_margins(margins=(margin(value=0.1), margin("unloaded", value=None, band=None)))
    data = results(example_case(), example_cases(), None, None, None, judged, run_id="abc")

    assert data["margins"][1]["margin"] is None
    assert data["margins"][1]["band"] is None
