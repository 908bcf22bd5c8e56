"""The page: self-contained, escaped, complete, and honest about who answers for it."""

from __future__ import annotations

import os
import re
import shutil
import subprocess
from dataclasses import replace
from datetime import UTC, datetime
from html.parser import HTMLParser
from pathlib import Path

import pytest
from report.examples import ExampleRun, example_case, example_cases, example_margins, margin

from blockload.report.cautions import CONSENT, NEVER_JUDGED, cautions
from blockload.report.page import loads_page, page
from blockload.report.pictures import MISSING, Picture, Pictures

VOID = {"meta", "link", "br", "img", "hr", "input"}
HOSTILE = "</script><script>alert('x')</script> \"A\" & 'B' {{ 7 * 7 }}"


class Outline(HTMLParser):
    """Tags, texts and attributes; complains about tags that do not close in order."""

    def __init__(self, text: str) -> None:
        super().__init__()
        self.open: list[str] = []
        self.tags: list[tuple[str, dict[str, str | None]]] = []
        self.text = ""
        self.wrong: list[str] = []
        self.feed(text)

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append((tag, dict(attrs)))
        if tag not in VOID:
            self.open.append(tag)

    def handle_startendtag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append((tag, dict(attrs)))

    def handle_endtag(self, tag: str) -> None:
        if not self.open or self.open.pop() != tag:
            self.wrong.append(tag)

    def handle_data(self, data: str) -> None:
        self.text += data + " "


def made(**changes: object) -> str:
    return page(ExampleRun(**changes), made=datetime(2030, 1, 2, 3, 4, tzinfo=UTC))


def test_tags_close_in_order() -> None:
    outline = Outline(made())

    assert outline.wrong == []
    assert outline.open == []


@pytest.mark.parametrize("text", [made(), loads_page(example_case(), example_cases())], ids=["check", "loads"])
def test_nothing_is_fetched_and_nothing_runs(text: str) -> None:
    outline = Outline(text)
    addresses = [value or "" for _, given in outline.tags for key, value in given.items() if key in ("src", "href")]

    assert "http" not in text
    assert "script" not in {tag for tag, _ in outline.tags}
    assert "@import" not in text
    assert all(address.startswith(("data:image/png;base64,", "#")) for address in addresses)
    assert not [key for _, given in outline.tags for key in given if key.startswith("on")]


def test_titles_and_names_with_markup_stay_text() -> None:
    case = example_case(title=HOSTILE)
    case = replace(case, devices=(replace(case.devices[0], name=HOSTILE), *case.devices[1:]))
    judged = example_margins(margins=(margin(HOSTILE, HOSTILE, note=HOSTILE, method=HOSTILE, load_case=HOSTILE),))
    text = made(case=case, margins=judged)
    outline = Outline(text)

    assert "script" not in {tag for tag, _ in outline.tags}
    assert outline.wrong == []
    assert "alert('x')" in outline.text
    assert "{{ 7 * 7 }}" in outline.text


def test_the_first_page_carries_verdict_level_and_every_caution() -> None:
    text = Outline(made()).text

    assert "ruled out" in text
    assert "level faces" in text
    for caution in cautions(example_case()):
        assert caution in text
    for words in (
        "licensed engineer",
        "local codes",
        "class rules",
        "not permission to drive",
        "can kill",
        *NEVER_JUDGED,
    ):
        assert words in text
    for words in ("assembly, gas and heat: chassis load only", "limits.separation_factor"):
        assert words in text


@pytest.mark.parametrize("word", ["given", "not given", "not asked"])
def test_the_engine_makers_consent_is_said(word: str) -> None:
    assert CONSENT[word] in Outline(made(case=example_case(engine_maker_consent=word))).text


def test_an_unknown_word_for_consent_counts_as_not_asked() -> None:
    assert CONSENT["not asked"] in cautions(example_case(engine_maker_consent="perhaps"))


def test_the_title_block_is_there_to_sign_and_each_printed_page_says_what_it_is() -> None:
    text = made()

    for words in ("revision", "prepared", "checked", "approved"):
        assert re.search(rf'<th scope="row">{words}</th><td></td>', text)
    foot = re.search(r"@bottom-left \{ content: \"([^\"]*)\"", text)
    assert foot is not None
    assert foot[1] == "ruled out · level faces"
    assert "run 0123456789ab · 2030-01-02 03:04 UTC" in text
    assert "revision ______ · page" in text


def test_every_table_has_a_caption_and_headers_and_every_picture_words() -> None:
    text = made()

    for table in re.findall(r"<table.*?</table>", text, re.S):
        assert "<caption>" in table
        assert "<th" in table
    for picture in re.findall(r"<svg.*?</svg>", text, re.S):
        assert "aria-label" in picture


def test_inputs_can_be_told_by_hash_run_and_version() -> None:
    text = Outline(made()).text

    for words in ("ab" * 32, "0123456789ab", "SHA-256 of the case file"):
        assert words in text


def test_no_machine_path_and_no_user_name_is_in_the_page() -> None:
    case = replace(example_case(), path=Path("/home/somebody/secret/demo.toml"))
    text = made(case=case)

    assert "somebody" not in text
    assert str(Path.cwd()) not in text
    assert str(Path.home()) + os.sep not in text


def test_bounded_inputs_defaults_and_bases_are_listed_with_their_sources() -> None:
    text = Outline(made()).text

    for words in (
        "stud preload",
        "40 kN",
        "ISO 80000-3:2019",
        "common practice, unsourced",
        "bodies.engine.mass",
        "estimate",
    ):
        assert words in text


def test_both_routes_of_a_face_wrench_are_printed_with_their_difference() -> None:
    text = Outline(made()).text

    for words in ("summed ahead of the cut", "summed behind it", "largest difference"):
        assert words in text


def test_pictures_are_inside_the_page_and_described() -> None:
    picture = Picture(name="margin_front_left", png=b"\x89PNG", caption="a caption", alt="a <description>")
    text = page(ExampleRun(), Pictures(overview=(picture,), hotspots=(picture,), stress_range=1e8, stress_peak=2e8))
    images = [given for tag, given in Outline(text).tags if tag == "img"]

    assert len(images) == 2
    assert images[0]["alt"] == "a <description>"
    assert (images[0]["src"] or "").startswith("data:image/png;base64,")


def test_missing_pictures_are_said_with_what_to_install() -> None:
    text = Outline(page(ExampleRun(), Pictures(missing=f"{MISSING}: no driver. apt-get install libegl1"))).text

    assert "apt-get install libegl1" in text


def test_a_run_without_margins_still_makes_a_page() -> None:
    judged = example_margins(margins=(), requirements={})
    outline = Outline(made(margins=judged))

    assert outline.wrong == []
    assert "Lowest margin of each criterion" not in outline.text


BROWSER = shutil.which("chromium") or shutil.which("chromium-browser")


@pytest.mark.slow
@pytest.mark.skipif(BROWSER is None or shutil.which("pdftotext") is None, reason="needs chromium and pdftotext")
def test_every_printed_page_has_its_footer_and_no_table_is_lost(tmp_path: Path) -> None:
    source, target = tmp_path / "report.html", tmp_path / "report.pdf"
    text = made()
    source.write_text(text, encoding="utf-8")
    flags = ["--headless", "--no-sandbox", "--disable-gpu", "--no-first-run", f"--user-data-dir={tmp_path / 'user'}"]
    subprocess.run(
        [str(BROWSER), *flags, "--no-pdf-header-footer", f"--print-to-pdf={target}", source.as_uri()],
        check=True,
        capture_output=True,
        timeout=120,
    )
    printed = subprocess.run(["pdftotext", "-layout", str(target), "-"], check=True, capture_output=True, text=True)
    pages = [sheet for sheet in printed.stdout.split("\f") if sheet.strip()]

    assert all("ruled out · level faces" in sheet and "revision" in sheet for sheet in pages)
    for caption in re.findall(r"<caption>([^<]*)</caption>", text):
        if caption != "Title block":
            assert caption in printed.stdout
