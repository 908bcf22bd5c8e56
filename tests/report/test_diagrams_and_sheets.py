"""Diagrams, hand-over sheets, laps on disk and the split of a change: each shows the numbers it stands for."""

from __future__ import annotations

import csv
import re
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from report.examples import example_case

from blockload import pipeline
from blockload.arrays import frozen
from blockload.car.balance import balance
from blockload.car.envelope import envelope
from blockload.car.lap_model import extremes
from blockload.car.model import BODIES, SECTION
from blockload.case.model import CARRIERS, FACES
from blockload.case.reading import read
from blockload.report.changes import change_table, changes
from blockload.report.compare import compare
from blockload.report.curves import along_csv, envelope_csv, free_bodies_csv
from blockload.report.diagram import HIGH, LEFT, RIGHT, STRIPS, diagram_svg
from blockload.report.envelope_picture import envelope_svg
from blockload.report.handover import write_sheets
from blockload.report.lap_files import lap_records, laps_written, write_laps
from blockload.report.lap_picture import lap_svg
from blockload.report.lap_tables import lap_tables
from blockload.report.results import load_results
from blockload.report.single_tables import envelope_tables, one_case

CASES = Path(__file__).parents[2] / "cases"
NAMES = ("static", "v_max", "corner_left", "downforce_only")


@pytest.fixture(scope="module")
def driven():
    case = read(CASES / "demo-lap.toml")
    return case, pipeline.laps(case)[0]


def rows_of(text: str) -> list[dict[str, str]]:
    lines = [line for line in text.splitlines() if not line.startswith(("#", '"#'))]
    return list(csv.DictReader(lines))


def test_the_table_along_the_car_holds_the_section_wrench_at_both_faces() -> None:
    cases = balance(example_case())
    rows = [row for row in rows_of(along_csv(cases)) if row["face"]]

    assert {(row["load case"], row["face"]) for row in rows} == {(n, f"{f} face") for n in NAMES for f in FACES}
    for row in rows:
        got = [float(row[next(head for head in row if head.startswith(f"{part} ["))]) for part in SECTION]
        expected = cases.section(row["face"].split()[0])[cases.names.index(row["load case"])]
        np.testing.assert_allclose(got, expected, rtol=1e-5, atol=1e-5 * np.abs(expected).max())


def test_the_drawn_curve_passes_the_faces_at_their_section_values() -> None:
    cases = balance(example_case())
    index = cases.names.index("corner_left")
    svg = diagram_svg(cases, index)
    curves = re.findall(r"<path d='M([^Z']*)' fill='none'", svg)
    tops = [34 + k * (HIGH + 14) for k in range(len(STRIPS))]
    x = [float(v) for v in re.findall(r"x = −(\d+\.\d+) m", svg)]

    assert len(curves) == len(STRIPS)
    assert sorted(x) == [1.5, 2.12]
    for curve, top, component in zip(curves, tops, STRIPS, strict=True):
        points = np.array([[float(n) for n in pair.split(",")] for pair in curve.split(" L")])
        zero, most = top + HIGH / 2, None
        drawn = {}
        for face in FACES:
            at = float(cases.faces[face].reference[0])
            across = LEFT + (RIGHT - LEFT) * (_front(cases) - at) / _length(cases)
            k = np.flatnonzero(np.abs(points[:, 0] - across) <= 0.11)
            drawn[face] = zero - points[k, 1]
        values = {face: cases.section(face)[index, SECTION.index(component)] for face in FACES}
        most = 0.46 * HIGH / _most(cases, component)
        for face in FACES:
            assert np.abs(drawn[face] - values[face] * most).min() < 0.11, (component, face)


def _stations(cases):
    from blockload.car.stations import stations

    return stations(cases)


def _front(cases) -> float:
    return float(_stations(cases).max())


def _length(cases) -> float:
    x = _stations(cases)
    return float(x.max() - x.min())


def _most(cases, component: str) -> float:
    from blockload.car.stations import section_along

    return float(np.abs(section_along(cases, _stations(cases))[:, :, SECTION.index(component)]).max())


def test_free_bodies_as_csv_sum_to_zero_on_every_body() -> None:
    cases = balance(read(CASES / "demo-links.toml"))
    sums = {(name, body): np.zeros(6) for name in cases.names for body in BODIES}
    size = 0.0
    for row in rows_of(free_bodies_csv(cases)):
        numbers = np.array([float(v) for v in list(row.values())[3:]])
        at, force, moment = np.split(numbers, 3)
        sums[row["load case"], row["body"]] += np.concatenate([force, moment + np.cross(at, force)])
        size = max(size, np.abs(force).max())

    assert max(np.abs(total).max() for total in sums.values()) < 1e-7 * size


def test_hand_over_sheets_balance_and_meet_each_other(tmp_path: Path) -> None:
    """All rows of a body but whole faces sum to zero; the tub's studs are the reverse of the engine's."""
    case = read(CASES / "demo-links.toml")
    cases = balance(case)
    paths = write_sheets(tmp_path, case, cases)
    sheets = {body: rows_of((tmp_path / f"force-on-the-{body}.csv").read_text("utf-8")) for body in CARRIERS}

    assert {path.name for path in paths} == {f"force-on-the-{body}.csv" for body in CARRIERS}
    for body, rows in sheets.items():
        assert sum(head.startswith(f"force on the {body}: ") for head in rows[0]) == 6
        for name in cases.names:
            own = [row for row in rows if row["load case"] == name]
            loads = {row["kind"] == "whole face": np.zeros(6) for row in own}
            for row in own:
                at = np.array([float(row[f"{axis} [m]"]) for axis in "xyz"])
                load = np.array([float(v) for head, v in row.items() if head.startswith("force on")])
                loads[row["kind"] == "whole face"] += [*load[:3], *(load[3:] + np.cross(at, load[:3]))]
            assert np.abs(loads[False]).max() < 2.0, (body, name)  # N and N·m: six digits are written
    for face, other in (("front", "tub"), ("rear", "gearbox")):
        here = [
            row for row in sheets["engine"] if row["place"].startswith(f"{face} ") and row["case kind"] != "envelope"
        ]
        there = [row for row in sheets[other] if row["place"].startswith(f"{face} ") and row["case kind"] != "envelope"]
        for a, b in zip(here, there, strict=True):
            assert a["place"] == b["place"]
            values = [[float(v) for head, v in row.items() if head.startswith("force on")] for row in (a, b)]
            np.testing.assert_allclose(values[0], -np.array(values[1]), atol=1e-9)


def test_the_envelope_rows_of_a_sheet_are_its_own_ends_and_hold_the_laps(tmp_path: Path, driven) -> None:
    case, lap = driven
    write_sheets(tmp_path, case, balance(case), laps=(lap,))
    rows = [
        r for r in rows_of((tmp_path / "force-on-the-engine.csv").read_text("utf-8")) if r["place"] == "front stud TL"
    ]
    head = "force on the engine: F_x [N]"
    plain = [float(row[head]) for row in rows if row["case kind"] != "envelope"]
    ends = {row["load case"]: float(row[head]) for row in rows if row["case kind"] == "envelope"}
    axial = lap.faces["front"].stud_axial[:, lap.faces["front"].studs.index("TL")]

    assert ends["least of all"] == min(plain)
    assert ends["greatest of all"] == max(plain)
    assert ends["least of lap invented_circuit"] == pytest.approx(axial.min(), rel=1e-5)
    assert ends["greatest of lap invented_circuit"] == pytest.approx(axial.max(), rel=1e-5)


def test_sheets_in_the_files_own_axes_are_the_same_forces_at_the_same_places(tmp_path: Path) -> None:
    frame = {"axes": "x rearward, y right, z up", "origin": "(0.5, 0, 0.1) m"}
    case = example_case(document={"frame": frame})
    paths = write_sheets(tmp_path, case, balance(case))
    pairs = [rows_of((tmp_path / f"force-on-the-tub{end}.csv").read_text("utf-8")) for end in ("", "-in-file-axes")]
    turn = np.array([-1.0, -1.0, 1.0])

    assert len(paths) == 6
    for car, own in zip(*pairs, strict=True):
        if car["case kind"] == "envelope":
            continue
        at = [np.array([float(row[f"{axis} [m]"]) for axis in "xyz"]) for row in (car, own)]
        load = [np.array([float(v) for head, v in row.items() if head.startswith("force on")]) for row in (car, own)]
        np.testing.assert_allclose(at[0], turn * at[1] + (0.5, 0.0, 0.1), atol=1e-5)
        np.testing.assert_allclose(load[0], np.tile(turn, 2) * load[1], atol=1e-9)


def test_a_change_is_the_sum_of_its_sources_and_names_what_was_changed() -> None:
    """More downforce on one wing: every other device stays out of it."""
    case = example_case()
    wings = tuple(
        replace(d, downforce_area=d.downforce_area + 0.3) if d.name == "rear_wing" else d for d in case.devices
    )
    first, second = (load_results(it, balance(it)) for it in (case, replace(case, devices=wings)))
    found = changes(first, second)

    assert {item.response for item in found} >= {"V_z", "M_sag", "TL", "BR"}
    for item in found:
        assert sum(item.parts.values()) == pytest.approx(item.second - item.first, abs=1e-6)
        before, after = (data["load_cases"][item.load_case]["faces"][item.face] for data in (first, second))
        if item.response in SECTION:
            assert after["section"][item.response] == pytest.approx(item.second, abs=1e-6)
        else:
            stud, _, shear = item.response.partition(" ")
            assert before["studs"][stud][shear or "axial"] == pytest.approx(item.first, abs=1e-6)
    sag = next(item for item in found if (item.face, item.response) == ("front", "M_sag"))
    assert max(sag.parts, key=lambda name: abs(sag.parts[name])) == "aero.rear_wing"
    assert all(
        abs(value) < 1e-6 for name, value in sag.parts.items() if name.startswith("aero.") and "wing" not in name
    )
    table = change_table(first, second)
    assert table is not None
    assert any("aero.rear wing" in row[-1] for row in table.rows)
    assert table in compare(first, second)
    assert change_table(first, first) is None


def test_a_lap_on_disk_is_the_lap_in_memory(tmp_path: Path, driven) -> None:
    _, lap = driven
    write_laps(tmp_path, (lap,))
    loaded = np.load(tmp_path / "invented_circuit.npy", allow_pickle=False)
    text = (tmp_path / "invented_circuit.csv").read_text("utf-8").splitlines()

    assert loaded.dtype == lap_records(lap).dtype
    np.testing.assert_array_equal(loaded["front M_sag [N*m]"], lap.faces["front"].section[:, 4])
    np.testing.assert_array_equal(loaded["FL pushrod [N]"], lap.links["FL"][:, lap.link_names["FL"].index("pushrod")])
    assert len(text) == len(lap.time) + 1
    written = laps_written((lap,))["laps"]["invented_circuit"]
    for item in extremes(lap):
        ends = written["extremes"][f"{item.of} {item.response}"]
        assert ends["least"]["value"] == item.least
        assert ends["greatest"]["time"] == lap.time[item.greatest_at]
    assert "nan" not in str(written).lower()


def test_tables_and_picture_of_a_lap_name_its_extremes(driven) -> None:
    _, lap = driven
    shown = lap_tables((lap,))
    axial = lap.faces["front"].stud_axial
    svg = lap_svg(lap)

    assert f"811 samples over {lap.time[-1]:.2f} s" in shown[0].rows[0][0]
    assert {row[0] for row in shown[1].rows} >= {"front M_sag", "rear BR shear"}
    assert f"+{axial.max() / 1e3:.1f} kN pulled" in svg
    assert f"−{-axial.min() / 1e3:.1f} kN pressed" in svg


def test_the_envelopes_picture_table_and_csv_hold_every_vertex() -> None:
    case = read(CASES / "demo-catalogue.toml", ["envelope.headings=12", 'envelope.speeds=["30 m/s", "60 m/s"]'])
    found = envelope(case)
    rows = rows_of(envelope_csv(found))
    svg = envelope_svg(found)
    table = envelope_tables(case)[0]

    assert len(rows) == found.limit.size == 24
    np.testing.assert_allclose([float(r["a_y [m/s^2]"]) for r in rows], found.acceleration[..., 1].ravel(), rtol=1e-5)
    assert svg.count("stroke-width='1.8'/>") == 2
    assert float(table.rows[1][3].replace("−", "-")) == pytest.approx(
        -found.acceleration[1, :, 0].min() / 9.80665, abs=0.005
    )


def test_one_load_case_in_full_shows_both_faces_and_every_body() -> None:
    cases = balance(example_case(devices=()))
    along, *bodies = one_case(cases, "v_max")

    assert [row[-1] for row in along.rows if row[-1]] == ["front face", "rear face"]
    assert len(bodies) == len(BODIES)
    assert frozen(cases.section("front")[1])[4] / 1e3 == pytest.approx(
        float(next(row for row in along.rows if row[-1] == "front face")[5].replace("−", "-")), abs=0.005
    )


def test_a_changed_shear_is_split_into_parts_that_sum_to_the_change() -> None:
    """Parts along the mean direction of both shears are exact, though a length is not linear in them."""
    demo = Path(__file__).parents[2] / "cases" / "demo.toml"
    heavier = ["bodies.gearbox.mass=150 kg", "faces.rear.studs.BL=(0.14, 0.06) m"]
    first, second = (load_results(*pipeline.loads(demo, overrides)) for overrides in ([], heavier))
    found = [item for item in changes(first, second) if item.response.endswith(" shear")]

    assert len(found) == 10
    for item in found:
        written = second["load_cases"][item.load_case]["faces"][item.face]["studs"][
            item.response.removesuffix(" shear")
        ]
        assert item.second == pytest.approx(written["shear"], rel=1e-9)
        assert sum(item.parts.values()) == pytest.approx(item.second - item.first, abs=1e-6)
