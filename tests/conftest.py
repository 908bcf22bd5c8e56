"""What all tests share: a cache of their own, and the table of published checks that the README shows."""

from __future__ import annotations

import os
from collections.abc import Callable, Iterator
from dataclasses import dataclass
from pathlib import Path

import pytest


@dataclass(frozen=True, slots=True)
class PublishedCheck:
    """One line of the README's table: what was compared with which source, and how it came out."""

    what: str
    source: str
    expected: float
    got: float
    unit: str
    tolerance: float

    @property
    def row(self) -> str:
        return (
            f"| {self.what} | {self.source} | {self.expected:.6g} | {self.got:.6g} | {self.unit} | "
            f"{100 * self.tolerance:.2g} % |"
        )


HEADER = "| check | source | expected | got | unit | tolerance |\n|---|---|---|---|---|---|"
_CHECKS = pytest.StashKey[list[PublishedCheck]]()


@pytest.fixture
def published(request: pytest.FixtureRequest) -> Callable[..., None]:
    """Compare with a published value within a relative tolerance and enter it in the README's table.

    Call as published("what", "source", expected=..., got=..., unit="N", tolerance=1e-3).
    """

    def compare(what: str, source: str, *, expected: float, got: float, unit: str, tolerance: float) -> None:
        item = PublishedCheck(what, source, float(expected), float(got), unit, tolerance)
        request.config.stash.setdefault(_CHECKS, []).append(item)
        assert got == pytest.approx(expected, rel=tolerance), f"{what} ({source})"

    return compare


def pytest_addoption(parser: pytest.Parser) -> None:
    parser.addoption("--published", metavar="FILE", help="write the table of published checks to FILE")


def pytest_terminal_summary(terminalreporter: pytest.TerminalReporter) -> None:
    config = terminalreporter.config
    checks = sorted(config.stash.get(_CHECKS, []), key=lambda item: (item.source, item.what))
    if not checks:
        return
    table = "\n".join([HEADER, *(item.row for item in checks)])
    terminalreporter.section("published checks: expected and got")
    terminalreporter.write_line(table)
    if target := config.getoption("--published"):
        Path(target).write_text(table + "\n", encoding="utf-8")


@pytest.fixture(scope="session", autouse=True)
def _own_cache(tmp_path_factory: pytest.TempPathFactory) -> Iterator[None]:
    """Keep the user's cache out of the tests, and let the tests of one session share theirs."""
    before = os.environ.get("BLOCKLOAD_CACHE")
    os.environ["BLOCKLOAD_CACHE"] = str(tmp_path_factory.mktemp("cache"))
    yield
    if before is None:
        del os.environ["BLOCKLOAD_CACHE"]
    else:
        os.environ["BLOCKLOAD_CACHE"] = before
