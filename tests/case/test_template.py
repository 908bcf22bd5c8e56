"""The commented case: it reads as a case, holds every key of the schema, and its examples are valid."""

from __future__ import annotations

import re
import tomllib
from collections.abc import Iterator
from pathlib import Path

import pytest
from case_texts import read_text

from blockload.case.schema import CaseTable
from blockload.case.tables import Table, fields, inner
from blockload.case.template import template
from blockload.unit_table import KINDS
from blockload.units import parse

TEXT = template()


def every_field(table: type[Table]) -> Iterator[tuple[str, object, object]]:
    for name, info, meta in fields(table):
        yield name, info, meta
        below, _ = inner(info.annotation)
        if below is not None:
            yield from every_field(below)


FIELDS = list(every_field(CaseTable))


def test_the_template_reads_as_a_case(tmp_path: Path) -> None:
    """What is live in it is enough, and all else is bounded or defaulted."""
    case = read_text(tmp_path, TEXT)

    assert case.bounds
    assert case.wheelbase == 2.7
    assert [stud.name for stud in case.faces["front"].studs] == ["TL", "TR", "BL", "BR"]


def test_the_template_holds_every_key() -> None:
    """Every key of the schema stands in the text, as a line or in the list of what a table may hold."""
    for name, _, _ in FIELDS:
        assert re.search(rf"\b{re.escape(name)}\b", TEXT), name


def test_every_key_says_its_meaning_and_source() -> None:
    """Every field has a description; every default and bound has a source."""
    for name, info, meta in FIELDS:
        assert info.description, name  # type: ignore[attr-defined]
        if meta.default is not None or meta.bound is not None:  # type: ignore[attr-defined]
            assert meta.source, name  # type: ignore[attr-defined]


@pytest.mark.parametrize("index", [i for i, (_, _, meta) in enumerate(FIELDS) if meta.kind], ids=lambda i: FIELDS[i][0])
def test_every_quantity_documents_itself_with_values_that_read(index: int) -> None:
    """Example, default, bound and band of a field are quantities of its kind, and in order."""
    _, _, meta = FIELDS[index]
    single = meta.kind.removesuffix("_vector").removesuffix("_pair")
    if meta.example:
        example = tomllib.loads(f"value = {meta.example}")["value"]
        for item in example if meta.many else [example]:
            parse(item, meta.kind, "example")
    if meta.default is not None:
        value = tomllib.loads(f'value = "{meta.default}"')["value"]
        parse(value, meta.kind, "default")
    for texts in (meta.bound, meta.band):
        if texts is not None:
            values = [parse(text, single, "band") for text in texts]
            assert values == sorted(values)
    assert meta.kind in KINDS


def test_every_commented_key_may_be_uncommented() -> None:
    """With every commented line live the text is still TOML, with the tables of the schema."""
    live = "\n".join(
        re.sub(r"^# (?=[\[A-Za-z\"])", "", line) for line in TEXT.splitlines() if " blockload case" not in line
    )
    live = "\n".join(line for line in live.splitlines() if not re.match(r"(then a unit|All values)", line))
    document = tomllib.loads(live)

    assert set(document) >= {"frame", "car", "bodies", "axles", "aero", "block", "limits", "known", "concept"}
    assert set(document["axles"]["rear"]["links"]) == {
        "upper_fore",
        "upper_aft",
        "lower_fore",
        "lower_aft",
        "steer",
        "pushrod",
    }
