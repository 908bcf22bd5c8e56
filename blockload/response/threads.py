"""How many threads the linear algebra underneath may use.

The wheels of numpy and scipy each bring an OpenBLAS whose idle threads spin while they wait. Many small products on a
machine that others use too then take ten times as long as with one thread, so small fronts run on one and large ones
on all. Where the libraries are others (a system's own, a vendor's) nothing is changed.
"""

from __future__ import annotations

import ctypes
from collections.abc import Iterator
from contextlib import contextmanager
from functools import cache
from pathlib import Path
from typing import Any

LARGE = 2e9


@cache
def _libraries() -> tuple[tuple[Any, Any], ...]:
    """Getter and setter of the thread count of every bundled OpenBLAS found."""
    import numpy
    import scipy

    found = []
    for module in (numpy, scipy):
        home = Path(str(module.__file__)).parent
        for folder in (home.parent / f"{home.name}.libs", home / ".dylibs"):
            for path in sorted(folder.glob("*openblas*")):
                found += _functions(path)
    return tuple(found)


def _functions(path: Path) -> list[tuple[Any, Any]]:
    try:
        library = ctypes.CDLL(str(path))
    except OSError:
        return []
    for prefix in ("scipy_openblas", "openblas"):
        for suffix in ("", "64_"):
            getter = getattr(library, f"{prefix}_get_num_threads{suffix}", None)
            setter = getattr(library, f"{prefix}_set_num_threads{suffix}", None)
            if getter is not None and setter is not None:
                return [(getter, setter)]
    return []


@cache
def available() -> int:
    """Threads the libraries used when first asked: the machine's, or what the user set; 1 where none was found."""
    return max((int(getter()) for getter, _ in _libraries()), default=1)


def use(count: int) -> None:
    """Let every library found use this many threads from now on."""
    for _, setter in _libraries():
        setter(int(count))


def use_for(work: float) -> None:
    """All threads for a product of more than LARGE operations, else one."""
    use(available() if work > LARGE else 1)


@contextmanager
def one_thread() -> Iterator[None]:
    """One thread within, unless `use_for` says otherwise; the counts found come back on leaving."""
    available()
    before = [int(getter()) for getter, _ in _libraries()]
    use(1)
    try:
        yield
    finally:
        for (_, setter), count in zip(_libraries(), before, strict=True):
            setter(count)
