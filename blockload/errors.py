"""Every way blockload says no: one base class, four parts to a message.

A message says where the trouble is, what was found, what is allowed and what to do. The parts stay
on the exception so that tests and callers can read them one by one.
"""

from __future__ import annotations

import difflib
from collections.abc import Iterable


class BlockloadError(Exception):
    """Base of every refusal.

    Parameters
    ----------
    where : str
        File, table and key, or the step of the analysis, that the message is about.
    found : str
        What was found there.
    allowed : str
        What would have been accepted.
    remedy : str
        What the user can do about it.

    """

    def __init__(self, where: str, found: str, allowed: str = "", remedy: str = "") -> None:
        super().__init__(where, found, allowed, remedy)
        self.where = where
        self.found = found
        self.allowed = allowed
        self.remedy = remedy

    def __str__(self) -> str:
        lines = [f"{self.where}: {self.found}"]
        if self.allowed:
            lines.append(f"  allowed: {self.allowed}")
        if self.remedy:
            lines.append(f"  to do:   {self.remedy}")
        return "\n".join(lines)


class CaseError(BlockloadError, ValueError):
    """The case file, or a file it names, cannot be used as it stands."""


class BalanceError(BlockloadError, ArithmeticError):
    """The car's loads do not balance, so nothing may be concluded from them."""


class BlockError(BlockloadError, ValueError):
    """The mesh or shape of the block cannot be used as it stands."""


class SolveError(BlockloadError, ArithmeticError):
    """The block's equations could not be solved to the accuracy asked."""


class OutputError(BlockloadError, OSError):
    """A result could not be written."""

    def __str__(self) -> str:
        return BlockloadError.__str__(self)


def nearest(word: str, known: Iterable[str]) -> str:
    """Return " Did you mean 'x'?" for the closest known word, or an empty string."""
    match = difflib.get_close_matches(word, list(known), n=1, cutoff=0.5)
    return f"Did you mean {match[0]!r}?" if match else ""
