"""Refusals of the case file in the words of its user: full dotted key, what was found, the nearest right key."""

from __future__ import annotations

import difflib
from collections.abc import Callable, Iterator, Sequence
from functools import cache
from typing import Any

from pydantic import ValidationError

from ..errors import CaseError, nearest
from .documents import join_key
from .schema import CaseTable
from .tables import Table, inner, meta_of


def refusals(error: ValidationError, where: Callable[[str], str]) -> list[CaseError]:
    """Return one refusal for each thing the schema found, in the order of the file's tables."""
    return [_refusal(item, where) for item in error.errors(include_url=False)]


class SeveralCaseError(CaseError):
    """Several refusals of one case file, so that a user mends them in one go; `errors` keeps each with its parts."""

    def __init__(self, place: str, errors: Sequence[CaseError]) -> None:
        shown = "\n".join(f"{number}. {problem}" for number, problem in enumerate(errors, 1))
        super().__init__(place, f"{len(errors)} things to mend\n{shown}")
        self.errors = tuple(errors)


def together(problems: Sequence[CaseError], place: str) -> CaseError:
    """Return one error for one or several refusals; of several about one key only the first, as the rest follow."""
    first = list({problem.where: problem for problem in reversed(problems)}.values())[::-1]
    return first[0] if len(first) == 1 else SeveralCaseError(place, first)


def _refusal(item: Any, where: Callable[[str], str]) -> CaseError:
    location = tuple(part for part in item["loc"] if part != "[key]")
    key = join_key(location)
    place = where(key)
    kind = item["type"]
    if kind == "missing":
        return _missing(location, where)
    if kind == "extra_forbidden":
        return _unknown(location, place)
    cause = item.get("ctx", {}).get("error")
    if isinstance(cause, CaseError):
        return CaseError(place, cause.found, cause.allowed, cause.remedy)
    found = f"{_short(item['input'])} cannot be used"
    if kind == "literal_error":
        words = item["ctx"]["expected"].replace(" or ", ", ")
        return CaseError(
            place, found, words, nearest(str(item["input"]), [word.strip("' ") for word in words.split(",")])
        )
    return CaseError(place, found, _expected(location, kind), _text_of(location))


def _missing(location: tuple[str | int, ...], where: Callable[[str], str]) -> CaseError:
    key = join_key(location)
    table = join_key(location[:-1])
    info = _info(location)
    meaning = info.description if info is not None else ""
    example = meta_of(info).example if info is not None else ""
    entry = f"{location[-1]} = {example}" if example else f"[{key}]"
    under = f" under [{table}]" if example and table else ""
    return CaseError(where(key), f"{key} is missing", meaning, f"add for example {entry}{under}")


def _unknown(location: tuple[str | int, ...], place: str) -> CaseError:
    key = join_key(location)
    siblings = _keys_at(location[:-1])
    prefix = join_key(location[:-1])
    allowed = f"in [{prefix}]: {', '.join(siblings)}" if prefix else f"at the top: {', '.join(siblings)}"
    return CaseError(place, f"{key} is not a key of a case file", allowed, _guess(location, siblings))


def _guess(location: tuple[str | int, ...], siblings: Sequence[str]) -> str:
    """Return the nearest right key: in the same table, then the same word elsewhere, then the nearest of all."""
    word = str(location[-1])
    near = difflib.get_close_matches(word, siblings, n=1, cutoff=0.6)
    if near:
        return f"Did you mean {join_key([*location[:-1], near[0]])}?"
    elsewhere = [key for key in known_keys() if key.endswith(f".{word}")]
    if elsewhere:
        return f"{word} is a key elsewhere: {', '.join(elsewhere[:3])}"
    return nearest(join_key(location), known_keys())


def _expected(location: tuple[str | int, ...], kind: str) -> str:
    names = {
        "string_type": "text in quotes",
        "model_type": "a table",
        "dict_type": "a table",
        "bool_type": "true or false",
        "int_type": "a whole number",
        "list_type": "a list",
    }
    info = _info(location)
    example = meta_of(info).example if info is not None else ""
    word = names.get(kind, kind.replace("_", " "))
    return f"{word}, for example {example}" if example else word


def _text_of(location: tuple[str | int, ...]) -> str:
    info = _info(location)
    return f"{location[-1]}: {info.description}" if info is not None and info.description else ""


def _short(value: Any) -> str:
    text = repr(value)
    return text if len(text) < 60 else text[:57] + "..."


def _table_at(location: Sequence[str | int]) -> type[Table] | None:
    """Return the table class at a place, stepping over the names of named tables."""
    current: type[Table] | None = CaseTable
    named = False
    for part in location:
        if named:
            named = False
            continue
        if current is None:
            return None
        info = _field(current, str(part))
        current, named = inner(info.annotation) if info is not None else (None, False)
    return current


def _field(table: type[Table], name: str) -> Any:
    return next((info for key, info in table.model_fields.items() if name in (key, info.alias)), None)


def _info(location: Sequence[str | int]) -> Any:
    table = _table_at(location[:-1])
    return _field(table, str(location[-1])) if table is not None else None


def _keys_at(location: Sequence[str | int]) -> list[str]:
    table = _table_at(location)
    return [info.alias or key for key, info in table.model_fields.items()] if table is not None else []


@cache
def known_keys() -> tuple[str, ...]:
    """Every key of the schema, dotted, with NAME where the user chooses a name."""
    return tuple(_walk(CaseTable, ""))


def _walk(table: type[Table], prefix: str) -> Iterator[str]:
    for name, info in table.model_fields.items():
        key = f"{prefix}{info.alias or name}"
        yield key
        below, many = inner(info.annotation)
        if below is not None:
            yield from _walk(below, f"{key}.NAME." if many else f"{key}.")


def is_key(parts: Sequence[str]) -> bool:
    """Whether a dotted key, split, is one of the schema's; inside a loosely kept table any key is."""
    for length in range(1, len(parts) + 1):
        table = _table_at(parts[: length - 1])
        if table is None:
            info = _info(parts[: length - 1])
            return info is not None and info.annotation is Any
        info = _field(table, parts[length - 1])
        if info is not None and inner(info.annotation)[1]:
            rest = parts[length + 1 :]
            below = inner(info.annotation)[0]
            return below is None or not rest or all(_is_field(below, part) for part in rest[:1])
        if info is None:
            return False
    return True


def _is_field(table: type[Table], name: str) -> bool:
    return _field(table, name) is not None


def kind_of(parts: Sequence[str]) -> str | None:
    """Return the kind of quantity a key holds; None for words and tables."""
    info = _info(parts)
    return meta_of(info).kind if info is not None else None


def nearest_key(word: str, known: Sequence[str] | Any = None) -> str:
    """Return "Did you mean ...?" for the nearest of some words, or of all keys of the schema."""
    return nearest(word, known_keys() if known is None else known)
