"""What the reader writes down while it builds a case: where keys stand, defaults, bounds, checks and refusals."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import Any

from ..errors import CaseError
from ..units import parse
from .documents import join_key, literal
from .model import Bound, Check, Default
from .tables import Table, metas


@dataclass(slots=True, kw_only=True)
class Notes:
    """A notebook for one reading; `where` turns a dotted key into file and key for a message.

    `turning` tells whether any manoeuvre lets the car turn as a rigid body, so that inertias count.
    """

    where: Callable[[str], str]
    turning: bool = True
    defaults: list[Default] = field(default_factory=list)
    bounds: list[Bound] = field(default_factory=list)
    checks: list[Check] = field(default_factory=list)
    problems: list[CaseError] = field(default_factory=list)

    def default(self, key: str, value: str, source: str) -> None:
        """Note a default that was used."""
        self.defaults.append(Default(key=key, value=value, source=source))

    def bound(self, key: str, texts: tuple[str, str, str], reason: str) -> None:
        """Note a missing number that is run at both ends."""
        low, middle, high = texts
        self.bounds.append(Bound(key=key, low=low, middle=middle, high=high, reason=reason))

    def problem(self, key: str, found: str, allowed: str = "", remedy: str = "") -> None:
        """Note a refusal; all are raised together once the case is read."""
        self.problems.append(CaseError(self.where(key), found, allowed, remedy))

    def take(self, given: Table | None, kind: type[Table], prefix: str, name: str) -> Any:
        """Return a table's value, or its default or the middle of its bound, noting that it was used."""
        value = getattr(given, name) if given is not None else None
        if value is not None:
            return value
        meta = metas(kind)[name]
        key = f"{prefix}.{name}" if prefix else name
        if meta.bound is not None:
            self.bound(key, meta.bound, meta.source)
            text = meta.bound[1]
        elif meta.default is not None:
            self.default(key, meta.default, meta.source)
            text = meta.default
        else:
            return None
        if meta.kind is None:
            read = literal(text)
            return read if isinstance(read, (bool, int)) else text
        read = literal(text)
        return parse(read if isinstance(read, (int, float)) else text, meta.kind, self.where(key))


def key_of(*parts: str | int) -> str:
    """Return a dotted key, quoted where TOML needs it."""
    return join_key(parts)
