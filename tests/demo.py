"""The demo run, solved once for all tests that look at it."""

from __future__ import annotations

from functools import cache
from pathlib import Path

from blockload import pipeline
from blockload.pipeline import Run

CASES = Path(__file__).parent.parent / "cases"


@cache
def run(name: str = "demo", *overrides: str) -> Run:
    """Return the check of one of the demo cases."""
    return pipeline.check(CASES / f"{name}.toml", overrides)
