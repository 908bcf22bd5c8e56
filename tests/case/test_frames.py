"""[frame]: the same car written in another frame is the same car; points by name from CSV."""

from __future__ import annotations

import dataclasses
import re
from pathlib import Path

import numpy as np
import pytest
from case_texts import WHOLE, changed, read_text

from blockload.case.model import Case
from blockload.case.points import read_points
from blockload.case.reading import replaced
from blockload.errors import CaseError

LINKS = """
[axles.rear.links]
upper_fore = { outboard = "(-2.70, 0.70, 0.47) m", inboard = "(-2.40, 0.30, 0.43) m", carried_by = "engine" }
upper_aft = { outboard = "(-2.72, 0.70, 0.47) m", inboard = "(-2.90, 0.30, 0.43) m" }
lower_fore = { outboard = "(-2.74, 0.74, 0.20) m", inboard = "(-2.40, 0.25, 0.18) m" }
lower_aft = { outboard = "(-2.76, 0.74, 0.20) m", inboard = "(-2.95, 0.25, 0.18) m" }
steer = { outboard = "(-2.90, 0.72, 0.30) m", inboard = "(-2.95, 0.28, 0.28) m" }
pushrod = { outboard = "(-2.75, 0.70, 0.22) m", inboard = "(-2.75, 0.33, 0.50) m" }
[axles.rear.rocker]
pivot = "(-2.75, 0.30, 0.47) m"
axis = [1, 0.2, 0.1]
spring = ["(-2.75, 0.28, 0.54) m", "(-2.75, 0.03, 0.56) m"]
bar_bearing_y = "0.18 m"
[paths.strut]
stiffness = "50 kN/mm"
from = { body = "tub", at = "(-1.4, 0.3, 0.5) m" }
to = { body = "gearbox", at = "(-2.4, 0.3, 0.5) m" }
"""
DRIVE = "\n[manoeuvres.turn]\nspeed = 60\nacceleration = '(3, 15, 0.5) m/s^2'\ndrive = 'accelerate'\n"
CAR = WHOLE + LINKS + DRIVE

FRAMES = {
    "same": ("x forward, y left, z up", [[1, 0, 0], [0, 1, 0], [0, 0, 1]]),
    "turned": ("x rearward, y right, z up", [[-1, 0, 0], [0, -1, 0], [0, 0, 1]]),
    "down": ("x forward, y right, z down", [[1, 0, 0], [0, -1, 0], [0, 0, -1]]),
    "swapped": ("x rearward, y up, z left", [[-1, 0, 0], [0, 0, 1], [0, 1, 0]]),
}
ORIGIN = np.array([-1.5, 0.0, 0.1])

PLACES = ("cg", "at", "outboard", "inboard", "pivot", "spring")
DIRECTIONS = ("acceleration", "RL", "axis")


def rewritten(text: str, axes: str, rotation: np.ndarray) -> str:
    """Write a case of the car's own frame in another: p_file = Rᵀ (p_car - origin)."""
    lines = []
    section = ""
    for line in text.splitlines():
        section = line.strip("[]") if line.startswith("[") and "=" not in line else section
        lines.append(_line(line, section, rotation))
    words = ", ".join(map(repr, ORIGIN.tolist()))
    return f'{chr(10).join(lines)}\n[frame]\naxes = "{axes}"\norigin = "({words}) m"\n'


def _line(line: str, section: str, rotation: np.ndarray) -> str:
    def turn(match: re.Match[str]) -> str:
        values = np.array([float(item) for item in match[1].split(",")])
        if section.endswith("studs"):
            full = rotation.T @ (np.array([0.0, *values]) - [0.0, *ORIGIN[1:]])
            values = full[1:]
        elif "inertia" in line:
            values = np.abs(rotation.T) @ values
        elif any(f"{word} =" in line for word in DIRECTIONS):
            values = rotation.T @ values
        else:
            values = rotation.T @ (values - ORIGIN)
        return "(" + ", ".join(repr(float(item)) for item in values) + ")"

    if line.startswith("axis"):
        line = line.replace("[1, 0.2, 0.1]", '"(1, 0.2, 0.1)"')
    if line.startswith("bar_bearing_y"):
        sign = rotation[1].sum()
        return f"bar_bearing_y = {float(sign * (0.18 - ORIGIN[1]))!r}"
    if line.startswith("x = "):
        value = float(line.split('"')[1].split()[0])
        return f"x = {float(rotation[0, 0] * (value - ORIGIN[0]))!r}"
    if line.startswith("crank_inertia"):
        return f"{line}\ncrank_direction = {-int(rotation[0, 0])}"
    return re.sub(r"\(([^()]*)\)", turn, line)


def numbers(case: object) -> list[np.ndarray]:
    """Every number of a case but those of its document, in one fixed order."""
    if isinstance(case, Case):
        fields = [
            getattr(case, f.name) for f in dataclasses.fields(case) if f.name not in ("document", "sha256", "path")
        ]
        return [item for value in fields for item in numbers(value)]
    if dataclasses.is_dataclass(case) and not isinstance(case, type):
        return [item for f in dataclasses.fields(case) for item in numbers(getattr(case, f.name))]
    if isinstance(case, dict):
        return [item for value in case.values() for item in numbers(value)]
    if isinstance(case, (tuple, list)):
        return [item for value in case for item in numbers(value)]
    if isinstance(case, (float, int, np.ndarray)):
        return [np.asarray(case, dtype=float)]
    return []


@pytest.mark.parametrize("name", FRAMES)
def test_the_same_car_in_another_frame(tmp_path: Path, name: str) -> None:
    """Places, directions, moments, axial vectors and crank direction come to the same car to 1e-12."""
    axes, columns = FRAMES[name]
    rotation = np.array(columns, dtype=float).T
    assert round(float(np.linalg.det(rotation))) == 1

    own = read_text(tmp_path, CAR)
    other = read_text(tmp_path, rewritten(CAR, axes, rotation), name="other.toml")

    assert len(numbers(own)) == len(numbers(other)) > 100
    for mine, theirs in zip(numbers(own), numbers(other), strict=True):
        np.testing.assert_allclose(theirs, mine, atol=1e-12)


def test_each_file_has_a_frame_of_its_own(tmp_path: Path) -> None:
    """A base in one frame and a case over it in another meet in the car's axes; an override is in the case's frame."""
    axes, columns = FRAMES["turned"]
    rotation = np.array(columns, dtype=float).T
    (tmp_path / "base.toml").write_text(rewritten(CAR, axes, rotation), encoding="utf-8")
    own = read_text(tmp_path, CAR)
    over = read_text(tmp_path, 'extends = "base.toml"\n[bodies.engine]\ncg = "(-1.82, 0, 0.25) m"\n', name="over.toml")

    np.testing.assert_allclose(over.bodies["engine"].cg, [-1.82, 0.0, 0.25])
    np.testing.assert_allclose(over.bodies["tub"].cg, own.bodies["tub"].cg, atol=1e-12)
    based = read_text(tmp_path, rewritten(CAR, axes, rotation), ("bodies.engine.cg=(0.32, 0, 0.15) m",), "based.toml")
    np.testing.assert_allclose(based.bodies["engine"].cg, [-1.82, 0.0, 0.25], atol=1e-12)


def test_replacing_in_a_framed_case_keeps_its_frame(tmp_path: Path) -> None:
    """A key replaced later is read in the file's own frame, and nothing is turned twice."""
    axes, columns = FRAMES["turned"]
    case = read_text(tmp_path, rewritten(CAR, axes, np.array(columns, dtype=float).T))
    changed_case = replaced(case, "bodies.engine.cg", "(0.32, 0, 0.15) m")

    np.testing.assert_allclose(changed_case.bodies["engine"].cg, [-1.82, 0.0, 0.25], atol=1e-12)
    np.testing.assert_allclose(changed_case.bodies["tub"].cg, case.bodies["tub"].cg)
    np.testing.assert_allclose(case.bodies["engine"].cg, [-1.80, 0.0, 0.27], atol=1e-12)


@pytest.mark.parametrize(
    "content",
    [
        "name,x [mm],y [mm],z [mm]\nengine cg,-1800,0,270\nwing,-3050,0,950\n",
        "\ufeffname;x [m];y [m];z [m]\nengine cg;-1.8;0;0.27\nwing;-3.05;0;0.95\n",
        "# hard points\nname\tx_mm\ty_mm\tz_mm\nengine cg\t-1800\t0\t270\n\nwing\t-3050\t0\t950\n",
        'name,x,y,z (mm)\n"engine cg",-1800,0,270\nwing,-3050,0,950\n',
        "Name,X[in],Y[in],Z[in]\r\nengine cg,-70.86614173,0,10.62992126\r\nwing,-120.0787402,0,37.4015748\r\n",
    ],
    ids=["commas", "bom and semicolons", "tabs", "one unit", "inches"],
)
def test_points_by_name(tmp_path: Path, content: str) -> None:
    """Any place may be a point's name; separators, byte-order mark and unit are those of the file."""
    (tmp_path / "points.csv").write_text(content, encoding="utf-8")
    text = changed('cg = "(-1.80, 0, 0.27) m"', 'cg = "engine cg"')
    text = changed('at = "(-3.05, 0, 0.95) m"', 'at = "wing"', text)
    case = read_text(tmp_path, text + '[frame]\npoints = "points.csv"\n')

    np.testing.assert_allclose(case.bodies["engine"].cg, [-1.8, 0.0, 0.27], atol=1e-8)
    np.testing.assert_allclose(case.devices[1].at, [-3.05, 0.0, 0.95], atol=1e-8)


@pytest.mark.parametrize(
    ("content", "word", "line"),
    [
        ("name,x,y,z\nA,1,2,3\n", "no unit", "line 1"),
        ("name,x [mm],y [m],z [mm]\nA,1,2,3\n", "several units", "line 1"),
        ("point,x,y,z [m]\nA,1,2,3\n", "no such header", "line 1"),
        ("name,x [kg],y [kg],z [kg]\nA,1,2,3\n", "a mass", "line 1"),
        ("name,x [m],y [m],z [m]\nA,1,2\n", "3 cells", "line 2"),
        ("name,x [m],y [m],z [m]\nA,1,5,2,3\n", "5 cells", "line 2"),
        ("name;x [m];y [m];z [m]\nA;1,5;2;3\n", "decimal comma", "line 2"),
        ("name,x [m],y [m],z [m]\nA,1,2,3\nA,4,5,6\n", "twice", "line 3"),
        ("name,x [m],y [m],z [m]\nA,1,,3\n", "no number", "line 2"),
        ("", "empty", ""),
    ],
)
def test_bad_points(content: str, word: str, line: str) -> None:
    """A points file that cannot be used is refused by its line."""
    with pytest.raises(CaseError) as caught:
        read_points(content.encode(), Path("points.csv"))

    assert line in caught.value.where
    assert word in caught.value.found


def test_a_misspelt_point(tmp_path: Path) -> None:
    """A place that is neither a quantity nor a known point is refused with the nearest point."""
    (tmp_path / "points.csv").write_text("name,x [m],y [m],z [m]\nengine,-1.8,0,0.27\n", encoding="utf-8")
    text = changed('cg = "(-1.80, 0, 0.27) m"', 'cg = "enginee"') + '[frame]\npoints = "points.csv"\n'
    with pytest.raises(CaseError) as caught:
        read_text(tmp_path, text)

    assert "bodies.engine.cg" in caught.value.where
    assert "'engine'" in caught.value.remedy
