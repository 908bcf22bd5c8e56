"""Any value under any key of the demo case is either read or refused: a user's mistake never makes a traceback."""

from __future__ import annotations

import tomllib
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from blockload.case.documents import join_key
from blockload.case.messages import known_keys
from blockload.case.model import Case
from blockload.case.reading import read
from blockload.errors import CaseError

CASES = Path(__file__).parents[2] / "cases"
VALUES = [
    "0",
    "-1",
    "1e300",
    "-1e-300",
    "nan",
    "inf",
    "true",
    "99999999999999999999999999999999999999",
    '""',
    '"x"',
    '"0 m"',
    '"-3 kN"',
    '"(0, 0, 0) m"',
    '"(1, 2) mm"',
    '"(9e99, 0, 0) m"',
    '"50 %"',
    '"250 %"',
    '"none"',
    '"tub"',
    "[]",
    "[1, 2, 3]",
    "[[1, 2], [3, 4]]",
    '["a", "b"]',
    "{}",
    "{ at = 3 }",
    "{ x = { y = 1 } }",
    "1979-05-27",
    "'''a\nb'''",
]


def keys(document: dict[str, Any], parts: tuple[str, ...] = ()) -> Iterator[str]:
    """Every table and key of a document, dotted."""
    for name, value in document.items():
        yield join_key((*parts, name))
        if isinstance(value, dict):
            yield from keys(value, (*parts, name))


DEMO = CASES / "demo.toml"
CONCEPT = CASES / "concept.toml"
KEYS = sorted({key for path in (DEMO, CONCEPT) for key in keys(tomllib.loads(path.read_text(encoding="utf-8")))})
KEYS += [key.replace("NAME", "floor") for key in known_keys() if not key.startswith(("frame", "extends"))]


@settings(max_examples=600, deadline=None)
@given(st.sampled_from([DEMO, CONCEPT]), st.sampled_from(KEYS), st.sampled_from(VALUES))
def test_any_value_under_any_key_is_read_or_refused(path: Path, key: str, value: str) -> None:
    try:
        case = read(path, [f"{key}={value}"])
    except CaseError as error:
        case = None
        message = str(error)

    assert case is None or isinstance(case, Case)
    assert case is not None or "to do" in message or "allowed" in message


@settings(max_examples=200, deadline=None)
@given(st.data())
def test_any_damaged_text_is_read_or_refused(tmp_path_factory: pytest.TempPathFactory, data: st.DataObject) -> None:
    """A line left out, doubled, or cut anywhere makes a case or a refusal."""
    lines = DEMO.read_text(encoding="utf-8").splitlines()
    index = data.draw(st.integers(0, len(lines) - 1))
    cut = data.draw(st.integers(0, 40))
    change = data.draw(
        st.sampled_from([[], [lines[index]] * 2, [lines[index][:cut]], [lines[index], lines[index - 1]]])
    )
    path = tmp_path_factory.getbasetemp() / "damaged.toml"
    path.write_text("\n".join([*lines[:index], *change, *lines[index + 1 :]]), encoding="utf-8")
    try:
        read(path)
    except CaseError as error:
        refused = error
        assert_parts(refused)


def assert_parts(error: CaseError) -> None:
    assert "damaged.toml" in error.where
    assert error.found
