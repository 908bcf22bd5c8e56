"""Writing a file so that a reader sees the old one or the new one, never half of it."""

from __future__ import annotations

import os
import secrets
import tempfile
from collections.abc import Callable
from pathlib import Path

from ..errors import OutputError


def write_beside(path: Path, content: bytes) -> None:
    """Write `content` beside `path` and rename it into place; raises OutputError."""
    fill_beside(path, lambda temporary: _fill(temporary, content))


def _fill(path: Path, content: bytes) -> None:
    path.write_bytes(content)


def write_text(path: Path, text: str) -> None:
    """Write text as UTF-8, beside and then renamed; raises OutputError."""
    write_beside(path, text.encode("utf-8"))


def fill_beside(path: Path, fill: Callable[[Path], None]) -> None:
    """Let `fill` write a temporary file of the same ending beside `path`, then rename it into place."""
    temporary = path.parent / f".part-{secrets.token_hex(6)}{path.suffix}"
    try:
        path.parent.mkdir(parents=True, exist_ok=True)
        try:
            fill(temporary)
            os.replace(temporary, path)
        finally:
            temporary.unlink(missing_ok=True)
    except OSError as error:
        raise refusal(path, error) from error


def probe_folder(folder: Path) -> None:
    """Refuse a folder that cannot be written, before any work is done for it; leaves nothing behind."""
    existing = next(path for path in (folder, *folder.absolute().parents) if path.exists())
    try:
        with tempfile.NamedTemporaryFile(dir=existing, prefix=".part-"):
            pass
    except OSError as error:
        raise refusal(folder, error) from error


def refusal(path: Path, error: OSError) -> OutputError:
    """Return the message for a place that cannot be written."""
    return OutputError(
        str(path),
        f"cannot be written: {error.strerror or error}",
        "a folder this user may write to, on a disk with room",
        "choose another place with --output, or free this one",
    )
