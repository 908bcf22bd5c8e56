"""[block.beam] as it is read: what is asked, what contradicts itself, how a frame turns it."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from case_texts import WHOLE, read_text

from blockload.case.reading import read
from blockload.errors import CaseError

STATION = """
[block.beam.stations.middle]
x = "-1.8 m"
area = "80 cm^2"
centroid = "(0.01, 0.26) m"
second_moments = "(12000, 9000) cm^4"
product = "500 cm^4"
torsion_constant = "8000 cm^4"
"""
WALLS = """
[block.beam.stations.middle]
x = "-1.8 m"
[block.beam.stations.middle.walls.casing]
points = ["(0.15, 0.10) m", "(0.15, 0.40) m", "(-0.15, 0.40) m", "(-0.15, 0.10) m"]
thickness = "6 mm"
closed = true
"""
STIFFNESS = """
[block.beam]
mass = "55 kg"
[block.beam.stiffness]
torsion = "150 kNm/deg"
bending_vertical = "250 kNm/deg"
bending_lateral = "300 kNm/deg"
source = "rig test, invented"
"""
METAL = '[block.materials]\n"*" = "EN AC-42100 KT6"\n'


def refused(folder: Path, text: str) -> str:
    with pytest.raises(CaseError) as caught:
        read_text(folder, WHOLE + METAL + text)
    return str(caught.value)


def test_properties_are_read_in_si(tmp_path: Path) -> None:
    case = read_text(tmp_path, WHOLE + METAL + STATION)

    assert case.block is not None
    assert case.block.use == "beam"
    assert case.block.mesh is None
    beam = case.block.beam
    assert beam is not None
    (station,) = beam.stations
    assert station.area == pytest.approx(80e-4)
    np.testing.assert_allclose(station.second_moments, [12000e-8, 9000e-8])
    assert station.torsion_constant == pytest.approx(8000e-8)


def test_a_default_place_is_said(tmp_path: Path) -> None:
    """Where the carried mass enters is nobody's word: it stands among the defaults, unsourced."""
    case = read_text(tmp_path, WHOLE + METAL + STATION)

    (found,) = [item for item in case.defaults if item.key == "block.beam.places.main_bearings"]
    assert "unsourced" in found.source


def test_stations_come_in_order_of_x(tmp_path: Path) -> None:
    second = STATION.replace("stations.middle", "stations.tail").replace("-1.8 m", "-2.0 m")
    case = read_text(tmp_path, WHOLE + METAL + STATION + second)

    assert case.block is not None
    assert case.block.beam is not None
    assert [item.name for item in case.block.beam.stations] == ["tail", "middle"]


@pytest.mark.parametrize("text", [WALLS, STIFFNESS])
def test_walls_or_a_measured_stiffness_will_do(text: str, tmp_path: Path) -> None:
    case = read_text(tmp_path, WHOLE + METAL + text)

    assert case.block is not None
    assert case.block.beam is not None
    assert bool(case.block.beam.stations) != bool(case.block.beam.stiffness)


MISTAKES = {
    "nothing": ("[block.beam]\nmass = '50 kg'\n", "neither stations nor stiffness"),
    "both": (STATION + STIFFNESS, "both stations and measured stiffness"),
    "missing": (STATION.replace('area = "80 cm^2"\n', ""), "area missing"),
    "mixed": (WALLS.replace('x = "-1.8 m"\n', 'x = "-1.8 m"\narea = "80 cm^2"\n'), "has walls and also area"),
    "product": (STATION.replace("500 cm^4", "11000 cm^4"), "larger than the second moments allow"),
    "outside": (STATION.replace("-1.8 m", "-2.5 m"), "outside the block"),
    "mass": (STIFFNESS.replace('mass = "55 kg"\n', ""), "a stiffness says nothing of it"),
    "one point": (WALLS.replace('"(0.15, 0.40) m", "(-0.15, 0.40) m", "(-0.15, 0.10) m"', ""), "at least two points"),
    "unit": (STATION.replace("80 cm^2", "80 cm"), "80 cm"),
    "slip": (STATION.replace("80 cm^2", "80 m^2"), "beyond what is plausible"),
    "unknown": (STATION + 'torsional_constant = "1 cm^4"\n', "torsion_constant"),
    "use": ('[block]\nuse = "mesh"\n' + STATION, "names no mesh"),
}


@pytest.mark.parametrize("name", MISTAKES)
def test_mistakes_are_named(name: str, tmp_path: Path) -> None:
    text, expected = MISTAKES[name]

    assert expected in refused(tmp_path, text)


UNLIKE = {
    "fibres": ('fibres = ["(0.1, 0.4) m"]\n', "fibres"),
    "modulus": ('torsion_modulus = "500 cm^3"\n', "at some stations only"),
}


@pytest.mark.parametrize("name", UNLIKE)
def test_stations_must_be_of_one_kind(name: str, tmp_path: Path) -> None:
    more, expected = UNLIKE[name]
    second = STATION.replace("stations.middle", "stations.tail").replace("-1.8 m", "-2.0 m") + more

    assert expected in refused(tmp_path, STATION + second)


def test_properties_beside_walls_are_refused(tmp_path: Path) -> None:
    second = WALLS.replace("stations.middle", "stations.tail").replace("-1.8 m", "-2.0 m")

    assert "the same walls" in refused(tmp_path, STATION + second)


def test_a_frame_turns_a_section_with_everything_else(tmp_path: Path) -> None:
    """X rearward, y right: places mirror, magnitudes stay, the product of y and z changes its sign.

    With y up the moments about y and z change places.
    """
    (tmp_path / "base.toml").write_text(WHOLE + METAL, encoding="utf-8")
    head = 'extends = "base.toml"\n[frame]\naxes = '
    rearward = read_text(tmp_path, f'{head}"x rearward, y right, z up"\n' + STATION.replace("-1.8 m", "1.8 m"))
    upward = read_text(tmp_path, f'{head}"x forward, y up, z right"\n' + STATION)
    cases = [rearward, upward]
    stations = [case.block.beam.stations[0] for case in cases if case.block is not None and case.block.beam is not None]

    assert [item.x for item in stations] == [-1.8, -1.8]
    np.testing.assert_allclose(stations[0].centroid, [-0.01, 0.26])
    np.testing.assert_allclose(stations[0].second_moments, [12000e-8, 9000e-8])
    assert stations[0].product == pytest.approx(-500e-8)
    np.testing.assert_allclose(stations[1].centroid, [-0.26, 0.01])
    np.testing.assert_allclose(stations[1].second_moments, [9000e-8, 12000e-8])
    assert stations[1].product == pytest.approx(-500e-8)


def test_a_beam_may_stand_beside_a_mesh() -> None:
    """With both described `use` chooses; the other is kept, as a reference."""
    demo = Path(__file__).parents[2] / "cases" / "demo-beam.toml"
    case = read(demo, ["block.use=mesh"])

    assert case.block is not None
    assert (case.block.use, case.block.mesh_unit) == ("mesh", 1e-3)
    assert case.block.beam is not None
    assert case.block.other["main_bearings"] == "main_*"
