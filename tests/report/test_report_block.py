"""The block's surface, its fields on disk, and stills that really show what they claim."""

from __future__ import annotations

import json
import sys
from pathlib import Path
from types import SimpleNamespace

import meshio
import numpy as np
import pytest
import pyvista
from report.examples import HOT, example_margins, example_surface, margin

from blockload.arrays import frozen
from blockload.installation.model import PadLoads
from blockload.margins.model import SurfaceMargins
from blockload.report import pictures
from blockload.report.colours import STEPS, USE_LIMIT, stress_colours, use_colours
from blockload.report.pictures import Pictures, deformation_scale, draw, hotspots_of
from blockload.report.surface import equivalent, principal, surface, write_fields


def hot(place: str, value: float, at: tuple[float, float, float]) -> object:
    return margin("yield", place, value, at=at, unit="Pa", applied=1e8, allowable=2e8)


def test_uniaxial_tension_and_pure_shear_have_their_textbook_invariants() -> None:
    """Timoshenko, Strength of Materials: σ for tension; principal ±τ and √3 τ for pure shear."""
    stress = np.array([[3.0, 0, 0, 0, 0, 0], [0, 0, 0, 2.0, 0, 0], [5.0, 5.0, 5.0, 0, 0, 0]])

    assert equivalent(stress) == pytest.approx([3.0, 2.0 * np.sqrt(3.0), 0.0])
    assert principal(stress) == pytest.approx(np.array([[3, 0, 0], [2, 0, -2], [5, 5, 5]]), abs=1e-12)


def library_of_two_volumes() -> SimpleNamespace:
    """Two triangles of two volumes that share an edge; one unit load, one node off the surface ahead of them."""
    return SimpleNamespace(
        volumes=("block", "cap"),
        surface_nodes=np.array([1, 2, 3, 4]),
        surface_points=np.array([[0.0, 0, 0], [1, 0, 0], [0, 1, 0], [1, 1, 0]]),
        surface_triangles=np.array([[0, 1, 2], [1, 3, 2]]),
        triangle_volume=np.array([0, 1]),
        entry_node=np.array([0, 1, 1, 2, 2, 3]),
        entry_volume=np.array([0, 1, 0, 0, 1, 1]),
        stress=np.arange(36.0).reshape(6, 6, 1),
        motion=np.arange(15.0).reshape(15, 1),
    )


def pads_of_one_load(rotation: float = 0.0) -> PadLoads:
    motion = np.zeros((1, 1, 1, 6))
    motion[0, 0, 0] = (0.5, 0, 0, 0, 0, rotation)
    nothing = np.zeros((1, 1, 1, 6))
    return PadLoads(
        variants=("given",),
        middle=0,
        weights=np.full((1, 1, 1, 1), 2.0),
        block_motion=motion,
        gearbox_motion=nothing,
        path_force=np.zeros((1, 1, 1, 0)),
        relief=np.zeros((1, 1, 6)),
        sum_gap=0.0,
        relief_gap=0.0,
        left_out=np.zeros(1),
    )


def seen(rotation: float = 0.0) -> object:
    field = SurfaceMargins(
        ratio=frozen(np.ones(6)), case=frozen(np.zeros(6), np.int64), criterion=frozen(np.zeros(6), np.int64)
    )
    cases = SimpleNamespace(names=("only",))
    return surface(cases, library_of_two_volumes(), pads_of_one_load(rotation), field, 0)


def test_each_triangle_takes_the_stress_of_its_own_volume() -> None:
    made = seen()

    assert made.volume[made.triangles].tolist() == [[0, 0, 0], [1, 1, 1]]
    assert library_of_two_volumes().entry_node[made.triangles].tolist() == [[0, 1, 2], [1, 3, 2]]
    assert made.stress[:, 0] == pytest.approx(2.0 * np.arange(0, 36, 6))


def test_displacement_is_the_elastic_part_of_the_right_node_plus_the_rigid_motion() -> None:
    turned = seen(rotation=0.1).displacement

    assert seen().displacement[0] == pytest.approx([2 * 3 + 0.5, 2 * 4, 2 * 5])
    assert turned[5] == pytest.approx([2 * 12 + 0.5 - 0.1, 2 * 13 + 0.1, 2 * 14])


def test_fields_on_disk_hold_what_was_put_in_under_twenty_names(tmp_path: Path) -> None:
    made = example_surface()
    write_fields(tmp_path / "fields.vtu", made, run_id="abc")
    read = meshio.read(tmp_path / "fields.vtu")

    assert len(read.point_data) <= 20
    assert read.point_data["use of strength, envelope"] == pytest.approx(made.ratio)
    assert read.points == pytest.approx(made.points)
    assert (read.cells_dict["triangle"] == made.triangles).all()
    assert [item.name for item in tmp_path.iterdir()] == ["fields.vtu"]


def test_numbers_of_cases_volumes_and_criteria_have_their_names_in_the_file(tmp_path: Path) -> None:
    write_fields(tmp_path / "fields.vtu", example_surface(), run_id="abc")
    words = set(pyvista.read(tmp_path / "fields.vtu").field_data)

    assert words >= {"run abc", "load case 1 is corner_left", "volume 0 is block", "criterion 0 is yield"}
    assert "stress and displacement are of corner_left" in words


def test_zero_margin_is_a_hard_edge_between_two_colours_far_apart() -> None:
    """Least distance in CIE L*a*b* (CIE 15:2004) between −0.1 and +0.1, and within the safe part far less."""
    colours = use_colours()
    edge = int(STEPS / USE_LIMIT)
    lab = _lab(colours)

    assert np.linalg.norm(lab[edge] - lab[edge - 1]) > 40
    assert np.linalg.norm(np.diff(lab[:edge], axis=0), axis=1).max() < 2


def test_the_edge_is_seen_in_grey_too() -> None:
    grey = _lab(use_colours())[:, 0]
    edge = int(STEPS / USE_LIMIT)

    assert abs(grey[edge] - grey[edge - 1]) > 20


def test_stress_colours_fall_evenly_in_lightness() -> None:
    steps = np.diff(_lab(stress_colours())[:, 0])

    assert steps.max() < 0.5
    assert steps.min() > -1.0


def _lab(rgb: np.ndarray) -> np.ndarray:
    """CIE L*a*b* of sRGB colours, white point D65 (IEC 61966-2-1:1999; CIE 15:2004)."""
    share = rgb / 255.0
    linear = np.where(share <= 0.04045, share / 12.92, ((share + 0.055) / 1.055) ** 2.4)
    matrix = np.array([[0.4124, 0.3576, 0.1805], [0.2126, 0.7152, 0.0722], [0.0193, 0.1192, 0.9505]])
    xyz = linear @ matrix.T / (0.95047, 1.0, 1.08883)
    f = np.where(xyz > (6 / 29) ** 3, np.cbrt(xyz), xyz * (29 / 6) ** 2 / 3 + 4 / 29)
    return np.stack([116 * f[:, 1] - 16, 500 * (f[:, 0] - f[:, 1]), 200 * (f[:, 1] - f[:, 2])], axis=-1)


def test_hotspots_are_the_lowest_strength_margins_and_never_within_15_mm() -> None:
    judged = example_margins(
        margins=(
            hot("a", 0.3, (0, 0, 0)),
            hot("b", 0.1, (0.01, 0, 0)),
            hot("c", 0.4, (0.1, 0, 0)),
            margin("slip", "stud", -1.0),
        )
    )

    assert [item.place for item in hotspots_of(judged, 6)] == ["b", "c"]


def test_the_scale_of_deformation_is_a_round_number_that_moves_a_twentieth() -> None:
    scale = deformation_scale(example_surface())
    moved = scale * 1e-4

    assert scale in (10.0, 20.0, 50.0)
    assert 0.001 <= moved <= 0.05 * 0.1 + 1e-12


@pytest.fixture(scope="module")
def stills() -> Pictures:
    judged = example_margins(margins=(hot("top", -0.17, HOT), hot("below", 1.0, (-1.75, 0.05, 0.2))))
    made = draw(example_surface(), judged)
    if made.missing:
        pytest.skip(f"this machine cannot draw: {made.missing}")
    return made


def pixels(png: bytes) -> np.ndarray:
    from io import BytesIO

    from matplotlib.image import imread

    return (imread(BytesIO(png))[..., :3] * 255).astype(int)


def test_three_sides_by_margin_one_by_stress_and_every_hotspot_are_drawn(stills: Pictures) -> None:
    assert [item.name for item in stills.overview] == list(pictures.TITLES)
    assert len(stills.hotspots) == 2
    assert all(len(item.png) < 500_000 for item in (*stills.overview, *stills.hotspots))


def test_a_place_beyond_its_strength_is_brown_and_the_rest_is_not(stills: Pictures) -> None:
    image = pixels(stills.overview[0].png)
    red, blue = image[..., 0], image[..., 2]
    brown = (red - blue > 60).sum()
    drawn = (image.min(axis=-1) < 250).sum()

    assert 100 < brown < 0.2 * drawn


def test_every_close_up_shows_its_own_spot(stills: Pictures) -> None:
    assert all("hidden" not in item.caption for item in stills.hotspots)
    middle = pixels(stills.hotspots[0].png)[236:244, 316:324]
    assert (middle[..., 0] - middle[..., 2] > 40).all()


def test_captions_state_scale_case_place_and_margin(stills: Pictures) -> None:
    assert f"×{stills.deformation:.0f} as in corner left" in stills.overview[0].caption
    assert "yield, top (−1.750, 0.050, 0.300) m: margin −0.17, corner left" in stills.hotspots[0].caption


def test_a_crash_of_the_drawing_process_costs_only_the_pictures(tmp_path: Path) -> None:
    """An interpreter that dies as a graphics driver does: by a signal, without an exception."""
    crashing = tmp_path / "python"
    crashing.write_text("#!/bin/sh\nkill -SEGV $$\n", encoding="utf-8")
    crashing.chmod(0o755)
    made = draw(example_surface(), example_margins(), python=str(crashing))

    assert made.overview == ()
    assert "exit code -11" in made.missing
    assert "libegl1 libgl1-mesa-dri" in made.missing


def test_a_drawing_process_that_cannot_start_is_said() -> None:
    made = draw(example_surface(), example_margins(), python="/nonexistent/python")

    assert made.missing.startswith(pictures.MISSING)


def test_a_drawing_process_that_hangs_is_given_up(monkeypatch: pytest.MonkeyPatch, tmp_path: Path) -> None:
    sleeping = tmp_path / "python"
    sleeping.write_text("#!/bin/sh\nexec sleep 30\n", encoding="utf-8")
    sleeping.chmod(0o755)
    monkeypatch.setattr(pictures, "TIMEOUT", 0.3)

    assert "did not finish (TimeoutExpired)" in draw(example_surface(), example_margins(), python=str(sleeping)).missing


def test_the_child_is_this_package_and_draws_off_screen() -> None:
    made = pictures._environment({"PYTHONPATH": "elsewhere"})

    assert (
        Path(made["PYTHONPATH"].split(":")[0] if sys.platform != "win32" else made["PYTHONPATH"])
        .joinpath("blockload")
        .is_dir()
    )
    if sys.platform.startswith("linux"):
        assert made["VTK_DEFAULT_OPENGL_WINDOW"] == "vtkEGLRenderWindow"
    assert json.dumps(made)
