"""The main job on a block known by sections alone: a verdict within its level, and what it can and cannot say."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from blockload import pipeline
from blockload.block import beam
from blockload.block.beam import BeamBlock
from blockload.case.reading import read
from blockload.errors import BlockError, CaseError
from blockload.margins.judging import rules_out
from blockload.report.beam_sketch import axes_of
from blockload.report.console import summary
from blockload.report.results import results
from blockload.report.writing import write_run
from blockload.response.beam_library import middle_cut, respond_beam

DEMO = Path(__file__).parents[1] / "cases" / "demo-beam.toml"
MEASURED = """
format = "blockload.case/1"
extends = "{base}"
[block]
use = "beam"
[block.beam]
mass = "48 kg"
[block.beam.stiffness]
torsion = "150 kNm/deg"
bending_vertical = "250 kNm/deg"
bending_lateral = "300 kNm/deg"
source = "rig test, invented"
"""
WALLS = """
format = "blockload.case/1"
extends = "{base}"
[block]
use = "beam"
[block.beam.stations.all]
x = "-1.8 m"
[block.beam.stations.all.walls.casing]
points = ["(0.20, 0.08) m", "(0.20, 0.42) m", "(-0.20, 0.42) m", "(-0.20, 0.08) m"]
thickness = "5 mm"
closed = true
"""


@pytest.fixture(scope="module")
def run() -> pipeline.Run:
    return pipeline.check(DEMO)


def from_demo(folder: Path, text: str, *overrides: str) -> pipeline.Run:
    path = folder / "case.toml"
    path.write_text(text.format(base=(DEMO.parent / "demo.toml").as_posix()), encoding="utf-8")
    return pipeline.check(path, overrides)


def test_a_beam_never_shows(run: pipeline.Run) -> None:
    verdict = run.margins.verdict

    assert (verdict.word, verdict.level) == ("not shown", "beam")
    assert any("never show" in reason for reason in verdict.reasons)
    assert any("bosses" in text for text in verdict.not_judged)
    assert verdict.lowest_margin is not None
    assert verdict.lowest_margin > 0.0


def test_every_check_of_the_demo_passes(run: pipeline.Run) -> None:
    assert [item.name for item in run.margins.checks if not item.ok] == []
    assert "element forces across mid-length equal the loads behind it" in [item.name for item in run.margins.checks]


def test_stress_margins_say_that_they_are_nominal(run: pipeline.Run) -> None:
    found = [item for item in run.margins.margins if item.criterion in ("yield", "tensile rupture")]

    assert found
    for item in found:
        assert "nominal" in item.note
        assert item.trust in ("converged", "near an attachment")
        assert sum(cause.share for cause in item.causes) == pytest.approx(1.0, abs=1e-9)
    assert any(item.trust == "converged" for item in found)


def test_a_section_far_too_weak_is_ruled_out() -> None:
    """A nominal stress beyond strength at both ends of its band is reason enough."""
    weak = [f"block.beam.stations.{name}.torsion_modulus=25 cm^3" for name in ("rear", "middle", "front")]
    run = pipeline.check(DEMO, weak)

    assert run.margins.verdict.word == "ruled out"
    assert any(item.criterion == "yield" and rules_out(item) for item in run.margins.margins)


def test_a_soft_block_fails_its_stiffness(tmp_path: Path) -> None:
    """Series of nothing: a measured stiffness is what is judged."""
    run = from_demo(tmp_path, MEASURED, "limits.torsion_min=200 kNm/deg")

    assert run.margins.stiffness["torsion_Nm_per_rad"] == pytest.approx(150e3 * 180 / np.pi, rel=1e-6)
    assert run.margins.stiffness["bending_vertical_Nm_per_rad"] == pytest.approx(250e3 * 180 / np.pi, rel=1e-6)
    assert run.margins.stiffness["bending_lateral_Nm_per_rad"] == pytest.approx(300e3 * 180 / np.pi, rel=1e-6)
    assert run.margins.verdict.word == "ruled out"
    assert not [item for item in run.margins.margins if item.criterion == "yield"]
    assert any("stiffness alone" in text for text in run.margins.verdict.not_judged)


def test_walls_alone_will_do(tmp_path: Path) -> None:
    """G J / L of the closed casing is its torsional stiffness between rigid faces."""
    run = from_demo(tmp_path, WALLS)

    assert isinstance(run.block, BeamBlock)
    metal = run.block.materials["beam"]
    shear = metal.youngs_modulus / (2 * (1 + metal.poissons_ratio))
    J = 4 * (0.40 * 0.34) ** 2 * 0.005 / (2 * (0.40 + 0.34)) + 1.48 * 0.005**3 / 3
    assert run.margins.stiffness["torsion_Nm_per_rad"] == pytest.approx(shear * J / 0.62, rel=1e-6)
    assert run.block.mass == pytest.approx(metal.density * 1.48 * 0.005 * 0.62)
    assert run.margins.verdict.level == "beam"


def test_bent_walls_carry_the_wrench_of_the_section(tmp_path: Path) -> None:
    """Stress over the casing at mid-length sums to the wrench the car model has there."""
    run = from_demo(tmp_path, WALLS)
    assert isinstance(run.block, BeamBlock)
    assert run.pads is not None
    assert run.library is not None
    state = run.pads.weights[run.pads.middle].sum(axis=1)
    units = run.block.fibres.shape[2] // 6  # strips: two faces of three places each
    element = len(run.block.x) // 2 - 1
    count = run.block.fibres.shape[2]
    first = (2 * element + 1) * count
    stress = np.einsum("mcu,ku->kmc", run.library.stress[first : first + count], state)
    each = stress.reshape(len(state), units, 2, 3, 6).mean(axis=2)
    length = np.array([0.34, 0.40, 0.34, 0.40])
    area = np.multiply.outer(length, np.array([1, 4, 1]) / 6) * 0.005
    force = np.einsum("kwac,wa->kc", each, area)[:, [0, 3, 5]]

    found, expected = middle_cut(run.block, state[:, : len(run.library.flexibility)])
    np.testing.assert_allclose(found, expected, atol=1e-9 * np.abs(expected).max())
    np.testing.assert_allclose(force, expected[:, :3], atol=2e-3 * np.abs(expected).max())


def test_pads_carry_what_statics_says(run: pipeline.Run) -> None:
    """Pads of both faces, weight and inertia of metal and carried masses are in balance in every case."""
    assert run.pads is not None
    assert run.pads.sum_gap < 1e-9
    assert run.pads.relief_gap < 1e-9


def test_pads_are_as_large_as_the_washers(run: pipeline.Run) -> None:
    """M12: 24 mm outside, 13 mm inside (ISO 7089, from memory); said among the defaults."""
    assert run.block is not None
    pad = run.block.attachment("TL", "front")

    assert pad.area == pytest.approx(np.pi / 4 * (0.024**2 - 0.013**2))
    np.testing.assert_allclose(np.diag(pad.moments)[1:], np.pi / 64 * (0.024**4 - 0.013**4))
    assert any("pads" in item.key for item in run.case.defaults)


def test_report_results_and_console_stand(run: pipeline.Run, tmp_path: Path) -> None:
    write_run(tmp_path, run)
    page = (tmp_path / "report.html").read_text(encoding="utf-8")
    data = results(run.case, run.cases, run.block, run.library, run.pads, run.margins, run_id="1")

    assert "a beam has no surface to draw" in page
    assert "beam: a beam between the faces" in page
    assert page.count("The block as a beam</title>") == 1
    assert data["block"]["elements"] == len(run.block.x) - 1  # type: ignore[union-attr]
    assert data["inputs"]["mesh_sha256"] is None
    assert not (tmp_path / "fields.vtu").exists()
    assert summary(run.case, run.cases, run.margins)


STRUT = """
[paths.strut]
from = {{ body = "engine", at = "({x}, 0, 0.20) m" }}
to = {{ body = "tub", at = "(-1.3, 0.3, 0.5) m" }}
stiffness = "20 kN/mm"
"""


def test_a_second_path_enters_at_the_nearest_attachment(tmp_path: Path) -> None:
    """A strut on the engine takes the place it is at; one far from every attachment is refused."""
    base = (DEMO.parent / "demo.toml").read_text(encoding="utf-8").replace('second_paths = "none"\n', "")
    (tmp_path / "demo.toml").write_text(base, encoding="utf-8")
    beam_text = DEMO.read_text(encoding="utf-8")
    path = tmp_path / "case.toml"
    path.write_text(beam_text + STRUT.format(x=-1.81), encoding="utf-8")
    run = pipeline.check(path)

    assert run.pads is not None
    assert np.abs(run.pads.path_force).max() > 1.0
    assert [item.name for item in run.margins.checks if not item.ok] == []
    path.write_text(beam_text + STRUT.format(x=-1.65), encoding="utf-8")
    with pytest.raises(CaseError, match="from the nearest attachment"):
        pipeline.check(path)


def test_pieces_are_fine_enough(monkeypatch: pytest.MonkeyPatch) -> None:
    """The tapered demo is within 1e-3 of its limit: the error falls with the square of the pieces."""
    case = read(DEMO)
    found = []
    for pieces in (24, 48, 96):
        monkeypatch.setattr(beam, "PIECES", pieces)
        found.append(respond_beam(beam.build_beam(case)).flexibility)
    scale = np.sqrt(np.outer(np.diag(found[2]), np.diag(found[2])))
    first, second = (np.abs((found[k + 1] - found[k]) / scale).max() for k in (0, 1))

    assert 3.0 < first / second < 5.0
    assert second * 4 / 3 < 1e-3


def test_walls_in_pieces_are_refused(tmp_path: Path) -> None:
    text = WALLS.replace("closed = true", "closed = false") + (
        '[block.beam.stations.all.walls.loose]\npoints = ["(0.3, 0.1) m", "(0.3, 0.2) m"]\nthickness = "5 mm"\n'
    )

    with pytest.raises(BlockError, match="2 pieces that do not touch"):
        from_demo(tmp_path, text)


def test_walls_on_one_line_are_refused(tmp_path: Path) -> None:
    text = WALLS.replace('"(0.20, 0.42) m", "(-0.20, 0.42) m", "(-0.20, 0.08) m"', '"(0.20, 0.42) m"')

    with pytest.raises(BlockError, match="on one line"):
        from_demo(tmp_path, text.replace("closed = true", "closed = false"))


def test_the_sketch_is_drawn_from_what_was_solved(run: pipeline.Run) -> None:
    """Centroid and shear centre read back from the pieces' stiffness are those of the case file."""
    assert isinstance(run.block, BeamBlock)
    centroid, shear = axes_of(run.block)
    middle = int(np.abs(run.block.x + 1.81).argmin())

    np.testing.assert_allclose(centroid[middle], [0.0, 0.295], atol=1e-3)
    np.testing.assert_allclose(shear[middle], [0.0, 0.210], atol=5e-3)
    np.testing.assert_allclose(centroid[0], [0.0, 0.290], atol=1e-3)


def test_an_open_casing_is_not_ruled_out_by_its_free_torsion(tmp_path: Path) -> None:
    """Open at the bottom, the faces hold it from warping: its stress is not believed, its stiffness is a band."""
    run = from_demo(tmp_path, WALLS.replace("closed = true", "closed = false"), "limits.torsion_min=3 kNm/deg")
    stress = [item for item in run.margins.margins if item.criterion == "yield"]
    (torsion,) = [item for item in run.margins.margins if item.criterion == "torsion stiffness"]

    assert {item.trust for item in stress} == {"near an attachment"}
    assert not any(rules_out(item) for item in stress)
    assert min(item.margin for item in stress if item.margin is not None) < 0.0
    assert torsion.band is not None
    assert torsion.band[0] < 0.0 < torsion.band[1]
    assert not rules_out(torsion)
    assert run.margins.verdict.word == "not shown"


def test_an_open_section_by_its_properties_says_so_with_its_warping_constant() -> None:
    """A torsion stress that would rule the closed section out is not believed of an open one."""
    weak = [f"block.beam.stations.{name}.torsion_modulus=25 cm^3" for name in ("rear", "middle", "front")]
    opened = [f"block.beam.stations.{name}.warping_constant=3e8 cm^6" for name in ("rear", "middle", "front")]

    assert pipeline.check(DEMO, weak).margins.verdict.word == "ruled out"
    assert pipeline.check(DEMO, [*weak, *opened]).margins.verdict.word == "not shown"


def test_held_warping_is_vlasovs(tmp_path: Path) -> None:
    """Without Saint-Venant's part the stiffness is 12 EΓ/L³ (warping held at both ends); long beams do not feel it."""
    block = from_demo(tmp_path, WALLS.replace("closed = true", "closed = false")).block
    assert isinstance(block, BeamBlock)
    length, metal = 0.62, block.materials["beam"]
    shear = metal.youngs_modulus / (2 * (1 + metal.poissons_ratio))
    J = 1.08 * 0.005**3 / 3
    stiff = replace(block, warping=1e4 * block.warping)
    slack = replace(block, warping=1e-8 * block.warping)

    expected = 12 * stiff.warping.mean() / length**3
    assert beam.held_torsion(stiff) * shear * J / length == pytest.approx(expected, rel=1e-3)
    assert beam.held_torsion(slack) == pytest.approx(1.0, abs=1e-2)


STEPPED = """
format = "blockload.case/1"
extends = "{base}"
[block]
use = "beam"
[block.beam]
mass = "48 kg"
"""
STATION = """
[block.beam.stations.{name}]
x = "{x} m"
area = "200 cm^2"
centroid = "(0, 0.25) m"
second_moments = "(30000, 30000) cm^4"
torsion_constant = "{torsion} cm^4"
"""


def test_two_stations_at_one_x_make_a_step(tmp_path: Path) -> None:
    """A step in the torsion constant is two springs in a row: 1/K = Σ L/GJ, exactly."""
    rows = (("a", -2.0, 10000), ("b", -2.0, 30000), ("c", -1.6, 30000))
    run = from_demo(tmp_path, STEPPED + "".join(STATION.format(name=n, x=x, torsion=j) for n, x, j in rows))
    assert run.block is not None
    metal = run.block.materials["beam"]
    shear = metal.youngs_modulus / (2 * (1 + metal.poissons_ratio))

    expected = shear / (0.12 / 10000e-8 + 0.50 / 30000e-8)
    assert run.margins.stiffness["torsion_Nm_per_rad"] == pytest.approx(expected, rel=1e-9)
    assert any("no torsion_modulus" in text or "stiffness alone" in text for text in run.margins.verdict.not_judged)
