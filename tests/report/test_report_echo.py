"""The echo picture: sides, carriers and forces as a reader sees them."""

from __future__ import annotations

import itertools
import re
from dataclasses import replace
from xml.etree import ElementTree as ET

import numpy as np
import pytest
from report.examples import example_case, example_cases, face

from blockload.report.bands import bands_svg
from blockload.report.choice import extreme_indices
from blockload.report.diagram import diagram_svg
from blockload.report.drawing import text_width
from blockload.report.echo import echo_svg
from blockload.report.faces import disc_radius, faces_svg

SVG = "{http://www.w3.org/2000/svg}"


def texts(svg: str) -> list[tuple[float, float, str, str, float]]:
    """x, y, words, anchor and size of every text that is not turned."""
    return [
        (float(t.get("x")), float(t.get("y")), t.text or "", t.get("text-anchor"), float(t.get("font-size")))
        for t in ET.fromstring(svg).iter(f"{SVG}text")  # noqa: S314
        if t.get("transform") is None
    ]


def boxes(svg: str) -> list[tuple[float, float, float, float, str]]:
    found = []
    for x, y, words, anchor, size in texts(svg):
        wide = 0.86 * text_width(words, size)
        left = x - {"start": 0.0, "middle": 0.5, "end": 1.0}[anchor] * wide
        found.append((left, y - 0.7 * size, left + wide, y + 0.15 * size, words))
    return found


def discs(svg: str, face_name: str) -> list[tuple[int, float, float, float, float, str]]:
    """Index, x, y, radius, axial force and fill of every stud of a face."""
    found = []
    for group in ET.fromstring(svg).iter(f"{SVG}g"):  # noqa: S314
        if group.get("class") == "stud" and group.get("data-face") == face_name:
            mark = group.find(f"{SVG}circle")
            assert mark is not None
            x, y, r = (float(mark.get(key)) for key in ("cx", "cy", "r"))
            found.append((int(group.get("data-index")), x, y, r, float(group.get("data-axial")), mark.get("fill")))
    return found


@pytest.mark.parametrize("with_loads", [True, False])
def test_the_picture_is_well_formed_and_says_what_it_is(with_loads: bool) -> None:
    case = example_case()
    root = ET.fromstring(echo_svg(case, example_cases(case) if with_loads else None))  # noqa: S314

    assert root.find(f"{SVG}title") is not None
    assert root.get("role") == "img"


def test_seen_from_behind_the_left_stud_is_on_the_left_and_the_top_stud_above() -> None:
    svg = faces_svg(example_cases(), 1)
    for name in ("front", "rear"):
        top_left, top_right, *_, bottom_right = sorted(discs(svg, name))

        assert top_left[1] < top_right[1]
        assert top_right[2] < bottom_right[2]


def test_swapping_left_and_right_in_the_case_swaps_the_picture() -> None:
    case = example_case()
    swapped = face("front", -1.5, {"TL": (-0.24, 0.47), "TR": (0.24, 0.47), "BL": (-0.17, 0.08), "BR": (0.17, 0.08)})
    svg = echo_svg(replace(case, faces={**case.faces, "front": swapped}), None)
    at = {words: x for x, _, words, *_ in texts(svg) if words in ("TL", "TR")}

    # The rear face is drawn last, so look at the first two.
    first = [(x, words) for x, _, words, *_ in texts(svg) if words in ("TL", "TR")][:2]
    assert at
    assert min(first)[1] == "TR"


def test_the_area_of_a_disc_goes_with_the_axial_force_on_one_scale_for_both_faces() -> None:
    svg = faces_svg(example_cases(), 2)
    both = [*discs(svg, "front"), *discs(svg, "rear")]
    ratios = np.array([r**2 / abs(axial) for _, _, _, r, axial, _ in both])

    assert ratios == pytest.approx(ratios[0], rel=1e-3)
    assert disc_radius(0.0, 0.0, 20.0) == 0.0


def test_pulled_and_pressed_differ_by_pattern() -> None:
    for _, _, _, _, axial, fill in discs(faces_svg(example_cases(), 2), "front"):
        assert fill.endswith("-pulled)") == (axial > 0)


def test_discs_hold_the_stud_forces_of_the_case() -> None:
    cases = example_cases()
    drawn = [axial for *_, axial, _ in sorted(discs(faces_svg(cases, 2), "rear"))]

    assert drawn == pytest.approx(cases.faces["rear"].stud_axial[2].sum(axis=0), rel=1e-5)


def test_shear_arrows_point_as_the_force_on_the_engine_does() -> None:
    """At speed the tub presses the engine down at the front face, the gearbox lifts it at the rear one."""
    root = ET.fromstring(faces_svg(example_cases(), 1))  # noqa: S314
    for group in root.iter(f"{SVG}g"):
        if group.get("class") != "stud":
            continue
        shaft = group.find(f"{SVG}line")
        assert shaft is not None
        falls = float(shaft.get("y2")) > float(shaft.get("y1"))
        assert falls == (group.get("data-face") == "front")


def test_each_device_is_drawn_in_the_colour_of_the_body_that_carries_it() -> None:
    case = example_case()
    moved = tuple(replace(d, on="tub") if d.name == "rear_wing" else d for d in case.devices)
    for devices, expected in ((case.devices, "gearbox"), (moved, "tub")):
        svg = echo_svg(replace(case, devices=devices), None)
        marks = [g for g in ET.fromstring(svg).iter(f"{SVG}g") if g.get("data-number") == "5"]  # noqa: S314
        assert {g.get("data-on") for g in marks} == {expected}
        assert len({g.find(f"{SVG}circle").get("fill") for g in marks}) == 1
        assert f"rear wing: {expected}" in svg


def test_the_car_drives_to_the_left_of_the_side_view() -> None:
    svg = echo_svg(example_case(), None)
    marks = [g for g in ET.fromstring(svg).iter(f"{SVG}g") if g.get("data-number") in ("1", "5")]  # noqa: S314
    x = {g.get("data-number"): float(g.find(f"{SVG}circle").get("cx")) for g in marks[:2]}

    assert x["1"] < x["5"]


def test_wheelbase_and_tracks_are_to_one_scale() -> None:
    svg = echo_svg(example_case(), None)
    bodies = [g for g in ET.fromstring(svg).iter(f"{SVG}g") if g.get("data-body") == "engine"]  # noqa: S314
    lengths = [float(g.find(f"{SVG}rect").get("width")) for g in bodies]

    assert "wheelbase 2.750 m" in svg
    assert "track 1.660 m" in svg
    assert lengths[0] == pytest.approx(lengths[1], abs=0.02)


def _overlapping(svg: str) -> list[tuple[str, str]]:
    return [
        (a[4], b[4])
        for a, b in itertools.combinations(boxes(svg), 2)
        if min(a[2], b[2]) - max(a[0], b[0]) > 1 and min(a[3], b[3]) - max(a[1], b[1]) > 1
    ]


def test_no_two_labels_lie_on_each_other() -> None:
    case = example_case()
    cases = example_cases(case)

    assert _overlapping(echo_svg(case, cases)) == []
    for index in range(len(cases.names)):
        assert _overlapping(faces_svg(cases, index)) == []
    assert _overlapping(diagram_svg(cases, 2)) == []


def test_devices_at_one_place_are_drawn_apart() -> None:
    case = example_case()
    stacked = tuple(replace(d, at=case.devices[0].at) for d in case.devices)
    marks = [
        g.find(f"{SVG}circle")
        for g in ET.fromstring(echo_svg(replace(case, devices=stacked), None)).iter(f"{SVG}g")  # noqa: S314
        if g.get("class") == "device"
    ]
    places = [(float(mark.get("cx")), float(mark.get("cy"))) for mark in marks if mark is not None][:5]

    assert all(np.hypot(a[0] - b[0], a[1] - b[1]) >= 18.9 for a, b in itertools.combinations(places, 2))


def test_hostile_names_stay_text() -> None:
    case = example_case(title="</title><script>x</script>")
    devices = (replace(case.devices[0], name="a<b>&'\""), *case.devices[1:])
    svg = echo_svg(replace(case, devices=devices), None)

    assert "<script" not in svg
    assert "a<b>&'\"" in (ET.fromstring(svg).findtext(f"{SVG}desc") or "")  # noqa: S314


def test_two_pictures_on_one_page_share_no_id() -> None:
    cases = example_cases()
    ids = [
        set(re.findall(r"id='([^']+)'", svg))
        for svg in (faces_svg(cases, 0, key="a"), faces_svg(cases, 1, key="b"), bands_svg([], key="c"))
    ]

    assert not (ids[0] & ids[1] | ids[1] & ids[2] | ids[0] & ids[2])


def test_cases_shown_hold_every_stud_extreme() -> None:
    cases = example_cases()
    chosen = extreme_indices(cases)
    for made in cases.faces.values():
        axial = made.stud_axial.sum(axis=1)
        assert axial[chosen].max(axis=0) == pytest.approx(axial.max(axis=0))
        assert axial[chosen].min(axis=0) == pytest.approx(axial.min(axis=0))
