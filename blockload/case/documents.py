"""Case files as plain documents: reading TOML, `extends`, `--set KEY=VALUE`, and merging layer over layer."""

from __future__ import annotations

import json
import re
import tomllib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from ..errors import CaseError

Document = dict[str, Any]

_MARK = 271828


@dataclass(frozen=True, slots=True, kw_only=True)
class Layer:
    """One case file as it stands: its folder, its bytes, its tables."""

    path: Path
    content: bytes
    document: Document


def layers(path: Path) -> tuple[Layer, ...]:
    """Read a case file and every file it extends, outermost first.

    Raises
    ------
    CaseError
        If a file is missing, is no TOML, or extends itself in a circle.

    """
    found: list[Layer] = []
    seen: list[Path] = []
    place = str(path)
    while True:
        try:
            resolved = path.resolve()
        except (OSError, RuntimeError) as error:  # a link that leads back to itself
            raise CaseError(place, f"cannot be followed: {error}", "a readable file", "check the links") from error
        if resolved in seen:
            circle = " -> ".join(item.name for item in [*seen[seen.index(resolved) :], resolved])
            remedy = "take `extends` out of one of these files"
            raise CaseError(place, f"the files extend each other in a circle: {circle}", "a chain that ends", remedy)
        seen.append(resolved)
        layer = _load(path, place)
        found.append(layer)
        base = layer.document.get("extends")
        if base is None:
            return tuple(found)
        place = f"{path}, extends"
        if not isinstance(base, str):
            raise CaseError(place, f"{base!r} is no file name", "the path of a case file, relative to this one")
        path = path.parent / base


def _load(path: Path, place: str) -> Layer:
    try:
        content = path.read_bytes()
    except IsADirectoryError:
        raise CaseError(place, f"{path} is a folder", "a case file (TOML)", "name the file inside it") from None
    except OSError as error:
        reason = (error.strerror or "cannot be read").lower()
        remedy = "check the name; `blockload new` writes a commented case to start from"
        raise CaseError(place, f"{path} cannot be read ({reason})", "a case file (TOML)", remedy) from None
    try:
        document = tomllib.loads(content.decode("utf-8-sig"))
    except UnicodeDecodeError as error:
        line = content[: error.start].count(b"\n") + 1
        raise CaseError(f"{path}, line {line}", "is not UTF-8 text", "TOML in UTF-8", "save it as UTF-8") from None
    except tomllib.TOMLDecodeError as error:
        at = re.search(r"line (\d+)", str(error))
        lines = content.decode("utf-8-sig").splitlines()
        number = int(at[1]) if at else len(lines)
        text = lines[number - 1].strip() if 0 < number <= len(lines) else ""
        found = f"is not valid TOML: {error}" + (f"; the line reads {text!r}" if text else "")
        remedy = "mend this line; texts stand in quotes, tables in square brackets"
        raise CaseError(f"{path}, line {number}", found, "TOML 1.0", remedy) from None
    return Layer(path=path, content=content, document=document)


def split_key(key: str, place: str) -> tuple[str, ...]:
    """Return the parts of a dotted key; parts may stand in quotes as in TOML.

    Raises
    ------
    CaseError
        If the text is no dotted key.

    """
    try:
        node: Any = tomllib.loads(f"{key} = {_MARK}") if "\n" not in key else {}
    except tomllib.TOMLDecodeError:
        node = {}
    parts: list[str] = []
    while isinstance(node, dict) and len(node) == 1:
        name, node = next(iter(node.items()))
        parts.append(name)
    if node != _MARK:
        raise CaseError(place, f"{key!r} is no key", "a dotted key such as bodies.gearbox.mass")
    return tuple(parts)


def join_key(parts: Iterable[str | int]) -> str:
    """Return a dotted key, with quotes round parts that need them, as TOML writes it."""
    return ".".join(str(part) if re.fullmatch(r"[A-Za-z0-9_-]+", str(part)) else _quoted(str(part)) for part in parts)


def _quoted(part: str) -> str:
    """A TOML basic string is a JSON string, but for the delete character."""
    return json.dumps(part, ensure_ascii=False).replace("\x7f", "\\u007f")


def override(text: str) -> Document:
    """Return the document that one KEY=VALUE stands for; the value is a TOML literal if it reads as one, else text.

    Raises
    ------
    CaseError
        If there is no "=" or the key is none.

    """
    place = f"--set {text}"
    match = re.match(r"""((?:[^="']|"(?:[^"\\]|\\.)*"|'[^']*')+)=(.*)""", text, re.DOTALL)
    if match is None:
        raise CaseError(place, "has no '='", "KEY=VALUE", "write for example --set bodies.gearbox.mass='130 kg'")
    parts = split_key(match[1].strip(), place)
    return nested(parts, literal(match[2].strip()))


def literal(text: str) -> Any:
    """Return a TOML literal's value, or the text itself."""
    try:
        tree = tomllib.loads(f"value = {text}")
    except tomllib.TOMLDecodeError:
        return text
    return tree["value"] if len(tree) == 1 else text


def nested(parts: Iterable[str], value: Any) -> Document:
    """Return {a: {b: value}} for parts (a, b)."""
    for part in reversed(list(parts)):
        value = {part: value}
    return dict(value)


def merged(base: Mapping[str, Any], over: Mapping[str, Any]) -> Document:
    """Return base with the keys of another document over it, table by table; neither is changed."""
    result = dict(base)
    for name, value in over.items():
        below = result.get(name)
        result[name] = merged(below, value) if isinstance(below, Mapping) and isinstance(value, Mapping) else value
    return result
