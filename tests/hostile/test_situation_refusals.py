"""Bad figures for standard situations: each refused with key, what was found, what is allowed and what to do."""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest

from blockload.case.messages import SeveralCaseError
from blockload.case.model import Case
from blockload.errors import CaseError

sys.path.insert(0, str(Path(__file__).parent.parent / "case"))
from case_texts import WHOLE, read_text

FULL = """
[performance]
speed = "75 m/s"
lateral = "2.2 g"
ratios = [10.0, 7.6, 4.5]
[catalogue]
groups = ["steady", "kerb", "landing"]
[points.jacks.rear]
at = "(-3.05, 0, 0.20) m"
on = "gearbox"
lifts = "rear"
[envelope]
headings = 24
"""


def read_with(folder: Path, *changes: tuple[str, str]) -> Case:
    text = FULL
    for old, new in changes:
        assert old in text
        text = text.replace(old, new)
    return read_text(folder, WHOLE + text)


def refusal(folder: Path, key: str, *changes: tuple[str, str]) -> CaseError:
    with pytest.raises(CaseError) as caught:
        read_with(folder, *changes)
    error = caught.value
    errors = error.errors if isinstance(error, SeveralCaseError) else (error,)
    found = [item for item in errors if key in item.where]
    assert found, f"no refusal about {key}: {error}"
    return found[0]


GROUPS = 'groups = ["steady", "kerb", "landing"]\n'
REFUSALS = [
    # name, old, new, key, found, remedy or allowed
    ("unknown_group", '"kerb", ', '"kerbs", ', "catalogue.groups", "'kerbs' is not known", "kerb"),
    (
        "ratios_that_rise",
        "[10.0, 7.6, 4.5]",
        "[4.5, 7.6, 10.0]",
        "performance.ratios",
        "does not fall",
        "first gear first",
    ),
    ("implausible_ratio", "[10.0, 7.6, 4.5]", "[10.0, 0.1]", "performance.ratios", "implausible", "0.5 to 60"),
    ("speed_without_unit", '"75 m/s"', '"75"', "performance.speed", "unit", "75 m/s"),
    ("lateral_as_speed", '"2.2 g"', '"22 m/s"', "performance.lateral", "a speed, not an acceleration", ""),
    ("lateral_beyond_belief", '"2.2 g"', '"22 g"', "performance.lateral", "beyond what is plausible", "0.2 g to 7 g"),
    (
        "corner_above_v_max",
        'lateral = "2.2 g"\n',
        'lateral = "2.2 g"\nfast_corner = "90 m/s"\n',
        "performance.fast_corner",
        "above the highest speed",
        "",
    ),
    (
        "jack_that_lifts_nothing",
        'lifts = "rear"\n',
        "",
        "points.jacks.rear.lifts",
        "is missing",
        "wheels it takes off the ground",
    ),
    ("jack_that_lifts_the_roof", '"rear"\n[env', '"roof"\n[env', "points.jacks.rear.lifts", "roof", "rear"),
    ("point_on_no_body", 'on = "gearbox"', 'on = "wheel"', "points.jacks.rear.on", "wheel", "gearbox"),
    ("too_few_headings", "headings = 24", "headings = 2", "envelope.headings", "2 headings", "4 to 720"),
    ("unknown_point", "[points.jacks.rear]", "[points.jack.rear]", "points.jack", "not a key", "jacks"),
    (
        "force_without_basis",
        "[envelope]",
        '[catalogue.forces.kerb]\nforce = "(-2, 0, 10) kN"\n[envelope]',
        "catalogue.forces.kerb.basis",
        "is missing",
        "what transmits it",
    ),
    (
        "force_of_no_situation",
        "[envelope]",
        '[catalogue.forces.curb]\nforce = "(-2, 0, 10) kN"\nbasis = "test"\n[envelope]',
        "catalogue.forces",
        "'curb' is not known",
        "kerb",
    ),
    (
        "factor_without_source",
        "[envelope]",
        "[catalogue.factors.kerb]\nvalue = 3.0\n[envelope]",
        "catalogue.factors.kerb.source",
        "is missing",
        "where it comes from",
    ),
    (
        "factor_on_the_air",
        "[envelope]",
        '[catalogue.factors.vertical]\nvalue = 3.0\nsource = "test"\napplies_to = "total wheel load"\n[envelope]',
        "catalogue.factors.vertical.applies_to",
        "more than weight and inertia",
        "a bump does not change what the air does",
    ),
    (
        "factor_on_a_measured_force",
        "[envelope]",
        '[catalogue.factors.kerb]\nvalue = 3.0\nsource = "test"\n[catalogue.forces.kerb]\nforce = "(0, 0, 9) kN"\n'
        'basis = "damper record"\n[envelope]',
        "catalogue.factors.kerb",
        "a force and a factor are both given",
        "holds its dynamics already",
    ),
    (
        "sensitivity_without_its_load",
        "[envelope]",
        '[tyres]\nmu_y = 1.6\nload_sensitivity = "0.03 1/kN"\n[envelope]',
        "tyres.reference_load",
        "not given, with a load_sensitivity",
        "wheel load at which",
    ),
]


@pytest.mark.parametrize(
    ("old", "new", "key", "found", "words"), [r[1:] for r in REFUSALS], ids=[r[0] for r in REFUSALS]
)
def test_refused_with_key_and_words(tmp_path: Path, old: str, new: str, key: str, found: str, words: str) -> None:
    error = refusal(tmp_path, key, (old, new))

    assert found in error.found
    assert words in f"{error.allowed} {error.remedy}"


def test_the_text_that_the_others_spoil_is_accepted(tmp_path: Path) -> None:
    case = read_with(tmp_path)

    assert case.performance.ratios == (10.0, 7.6, 4.5)
    assert case.performance.lateral == pytest.approx(2.2 * 9.80665)
    assert case.points["jacks.rear"].lifts == "rear"


def test_every_default_factor_and_speed_in_use_is_listed_with_its_source(tmp_path: Path) -> None:
    """What the engineer did not give stands among the defaults; what nobody sourced says so."""
    listed = {item.key: item.source for item in read_with(tmp_path).defaults}

    assert "Barton" in listed["catalogue.factors.vertical"]
    assert "unsourced" in listed["catalogue.factors.kerb"]
    assert "unsourced" in listed["performance.fast_corner"]
    assert "unsourced" in listed["performance.crest"]
    assert "catalogue.factors.towing" not in listed


def test_a_given_figure_is_no_longer_listed_as_a_default(tmp_path: Path) -> None:
    given = (
        "[envelope]",
        '[catalogue.factors.kerb]\nvalue = 2.5\nsource = "own records"\n[catalogue.factors.vertical]\nvalue = 2.0\n'
        'source = "own records"\n[envelope]',
    )
    listed = {item.key for item in read_with(tmp_path, given).defaults}

    assert not {key for key in listed if key.startswith("catalogue.")}


def test_a_case_needs_no_manoeuvre_of_its_own_beside_a_catalogue(tmp_path: Path) -> None:
    text = WHOLE[: WHOLE.index("[manoeuvres.")] + FULL

    assert read_text(tmp_path, text).manoeuvres == ()


def test_points_follow_the_frame_of_their_file(tmp_path: Path) -> None:
    """A jack written with x rearward and y right is the same place of the same car."""
    frame = '[frame]\naxes = "x rearward, y right, z up"\norigin = "(0, 0, 0) m"\n'
    base = tmp_path / "base.toml"
    base.write_text(WHOLE, encoding="utf-8")
    points = '[points.jacks.left]\nat = "(1.40, -0.75, 0.12) m"\non = "tub"\nlifts = "left"\n'
    text = f'format = "blockload.case/1"\nextends = "base.toml"\n{frame}{points}'

    np.testing.assert_allclose(read_text(tmp_path, text).points["jacks.left"].at, (-1.40, 0.75, 0.12))
