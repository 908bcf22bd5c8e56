"""What every table of the case file shares: unknown keys refused, quantities read, and fields that describe themselves.

A field carries its kind (a key of `units.KINDS`), how a [frame] turns it, its default or bound with the source,
and an invented example; the reader, the frame, the messages and the commented template all read these.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from functools import cache
from types import UnionType
from typing import Annotated, Any, Literal, Union, get_args, get_origin

from pydantic import BaseModel, ConfigDict, Field, GetPydanticSchema, ValidationInfo, field_validator
from pydantic_core import core_schema

from ..arrays import Floats
from ..errors import CaseError
from ..units import parse

Vector = Annotated[Floats, GetPydanticSchema(lambda _source, _handler: core_schema.any_schema())]
"""A quantity of two or three numbers; `Table` has already read and checked it."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Meta:
    """What a field says about itself beyond its type.

    kind: key of `units.KINDS`, or None for words; frame: "place", "vector", "axial", "moments", "x", "y", "yz",
    "pair" (magnitudes about or along y and z), "product" (of y and z) or "sign" for what a [frame] converts, "path" for
    a file; short: the key that a bare text stands for in a table of
    tables; default: text used when absent, with `source`; bound: low, middle and high texts used when absent; band:
    least and greatest plausible value (of every component); example: invented value in TOML for the template; many: a
    list of quantities; share: a percentage may stand instead, read as a `Share`.
    """

    kind: str | None = None
    frame: str | None = None
    short: str | None = None
    default: str | None = None
    bound: tuple[str, str, str] | None = None
    band: tuple[str, str] | None = None
    source: str = ""
    example: str = ""
    many: bool = False
    share: bool = False


@dataclass(frozen=True, slots=True)
class Share:
    """A percentage given where a quantity is usual: `value` is the ratio."""

    value: float


_PLAIN = Meta()


class Table(BaseModel):
    """Base of every table: no unknown key, nothing coerced, nothing changed after reading."""

    model_config = ConfigDict(extra="forbid", frozen=True, strict=True, defer_build=True)

    @field_validator("*", mode="before")
    @classmethod
    def _read(cls, value: Any, info: ValidationInfo) -> Any:
        meta = metas(cls)[info.field_name or ""]
        if meta.short is not None and isinstance(value, Mapping):
            return {name: item if isinstance(item, Mapping) else {meta.short: item} for name, item in value.items()}
        if meta.kind is None:
            return value
        if meta.many:
            items = value if isinstance(value, list) else [value]
            return [_within(parse(item, meta.kind, ""), item, meta) for item in items]
        if meta.share and isinstance(value, str) and value.strip().endswith("%"):
            return _share(value)
        return _within(parse(value, meta.kind, ""), value, meta)


def _share(value: str) -> Share:
    share = float(parse(value, "ratio", ""))
    if not 0.0 < share < 1.0:
        raise CaseError("", f"{value!r} is beyond what a share can be", "above 0 % and below 100 %", "check the number")
    return Share(share)


def _within(read: float | Floats, value: Any, meta: Meta) -> float | Floats:
    """Refuse a value outside its plausible band: most often the unit has slipped."""
    if meta.band is None or meta.kind is None:
        return read
    low, high = _band(meta.kind, meta.band)
    least, most = (read, read) if isinstance(read, float) else (float(read.min()), float(read.max()))
    if low <= least and most <= high:
        return read
    allowed = f"{meta.band[0]} to {meta.band[1]}"
    if low > 0.0 and least <= 0.0:
        raise CaseError("", f"{value!r} is not positive", allowed, "check the sign")
    raise CaseError("", f"{value!r} is beyond what is plausible", allowed, "check the number and its unit")


@cache
def _band(kind: str, band: tuple[str, str]) -> tuple[float, float]:
    single = kind.removesuffix("_vector").removesuffix("_pair")
    low, high = (float(parse(text, single, "band")) for text in band)
    return low, high


@cache
def metas(table: type[Table]) -> Mapping[str, Meta]:
    """Return a table's fields with what they say about themselves (worked out once per class)."""
    return {name: meta_of(info) for name, info in table.model_fields.items()}


def meta_of(info: Any) -> Meta:
    """Return what a pydantic field says about itself."""
    return next((item for item in info.metadata if isinstance(item, Meta)), _PLAIN)


def quantity(kind: str, text: str, *, needed: bool = False, **meta: Any) -> Any:
    """Return a field that holds a quantity; None when absent, unless it is needed."""
    return _field(text, needed, Meta(kind=kind, **meta))


def words(text: str, *, needed: bool = False, **meta: Any) -> Any:
    """Return a field that holds words, a switch or a whole number; None when absent, unless it is needed."""
    return _field(text, needed, Meta(**meta))


def table(text: str, *, needed: bool = False, alias: str | None = None) -> Any:
    """Return a field that holds another table; None when absent, unless it is needed."""
    return _field(text, needed, _PLAIN, alias)


def tables(text: str, **meta: Any) -> Any:
    """Return a field that holds named tables (or named texts); empty when absent."""
    info: Any = Field(default_factory=dict, description=text)
    info.metadata.append(Meta(**meta))
    return info


def _field(text: str, needed: bool, meta: Meta, alias: str | None = None) -> Any:
    default = ... if needed else None
    info: Any = Field(default=default, description=text, alias=alias)
    info.metadata.append(meta)
    return info


def inner(annotation: Any) -> tuple[type[Table] | None, bool]:
    """Return the table class a field holds (None for a value) and whether it holds many by name."""
    if get_origin(annotation) in (Union, UnionType):
        for item in get_args(annotation):
            found = inner(item)
            if found[0] is not None:
                return found
        return None, False
    if get_origin(annotation) is dict:
        return inner(get_args(annotation)[1])[0], True
    if isinstance(annotation, type) and issubclass(annotation, Table):
        return annotation, False
    return None, False


def words_of(annotation: Any) -> tuple[str, ...]:
    """Return the words a field chooses from; none where it takes anything else."""
    if get_origin(annotation) is Literal:
        return tuple(str(item) for item in get_args(annotation))
    found = [word for item in get_args(annotation) for word in words_of(item)]
    return tuple(found)


def fields(table_class: type[Table]) -> Iterator[tuple[str, Any, Meta]]:
    """Yield key as written in the file, pydantic's field, and its meta."""
    for name, info in table_class.model_fields.items():
        yield info.alias or name, info, meta_of(info)
