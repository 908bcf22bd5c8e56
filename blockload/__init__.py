"""blockload decides whether an engine block can be a piece of the chassis.

The steps of the job are the public names; each is imported when it is first used, so that importing the package
costs nothing.
"""

from __future__ import annotations

import importlib
from typing import TYPE_CHECKING, Any

from .errors import BlockloadError

if TYPE_CHECKING:
    from .block.building import build
    from .car.balance import balance
    from .case.reading import read
    from .installation.install import install
    from .margins.judging import judge
    from .pipeline import check, loads
    from .response.respond import respond

__version__ = "0.1.0"

_HOMES = {
    "read": "case.reading",
    "balance": "car.balance",
    "build": "block.building",
    "respond": "response.respond",
    "install": "installation.install",
    "judge": "margins.judging",
    "loads": "pipeline",
    "check": "pipeline",
}

__all__ = [
    "BlockloadError",
    "__version__",
    "balance",
    "build",
    "check",
    "install",
    "judge",
    "loads",
    "read",
    "respond",
]


def __getattr__(name: str) -> Any:
    if name in _HOMES:
        return getattr(importlib.import_module(f"{__name__}.{_HOMES[name]}"), name)
    raise AttributeError(f"module {__name__!r} has no attribute {name!r}")
