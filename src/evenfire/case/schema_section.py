"""What every section of a case file has in common, and how its keys describe themselves."""

from __future__ import annotations

from collections.abc import Iterator
from types import UnionType
from typing import Any, Literal, get_args, get_origin

from pydantic import BaseModel, ConfigDict, Field
from pydantic.fields import FieldInfo

LARGEST_PRICE_PER_MWH = 1.0e5
"""Above this a price per MWh is taken for a slip of the unit."""


class Section(BaseModel):
    """One table of a case file: unknown keys refused, no infinities, immutable once read."""

    model_config = ConfigDict(extra="forbid", frozen=True, allow_inf_nan=False)


def quantity(
    unit: str,
    meaning: str,
    *,
    at_least: float | None = None,
    above: float | None = None,
    at_most: float | None = None,
    below: float | None = None,
    when_left_out: str | None = None,
) -> Any:
    """The annotation of a numeric key: unit, meaning, range, and what is assumed where it is left out."""
    extra: dict[str, Any] = {"unit": unit}
    if when_left_out is not None:
        extra["assumed"] = when_left_out
    return Field(
        strict=True,
        description=meaning,
        json_schema_extra=extra,
        ge=at_least,
        gt=above,
        le=at_most,
        lt=below,
    )


def entry(
    meaning: str,
    *,
    pattern: str | None = None,
    form: str | None = None,
    shortest: int | None = None,
    when_left_out: str | None = None,
) -> Any:
    """The annotation of a key that is not a number: meaning, pattern and form of text, least length."""
    extra: dict[str, Any] = {}
    if form is not None:
        extra["form"] = form
    if when_left_out is not None:
        extra["assumed"] = when_left_out
    return Field(description=meaning, pattern=pattern, min_length=shortest, json_schema_extra=extra or None)


def unit_of(field: FieldInfo) -> str:
    """Unit of a numeric key; empty for text, lists and tables."""
    return _extra(field, "unit")


def assumption_of(field: FieldInfo) -> str:
    """In words, what is computed where the key is left out; empty where nothing is."""
    return _extra(field, "assumed")


def form_of(field: FieldInfo) -> str:
    """In words, how the text of a key must look; empty where any text will do."""
    return _extra(field, "form")


def _extra(field: FieldInfo, name: str) -> str:
    extra = field.json_schema_extra
    return str(extra.get(name, "")) if isinstance(extra, dict) else ""


def section_of(field: FieldInfo) -> type[Section] | None:
    """The section a key holds, directly or as the rows of a list; None for plain values."""
    return next(_sections_in(field.annotation), None)


def _sections_in(annotation: Any) -> Iterator[type[Section]]:
    if isinstance(annotation, type) and issubclass(annotation, Section):
        yield annotation
    for part in get_args(annotation):
        yield from _sections_in(part)


def is_list(annotation: Any) -> bool:
    """Whether a key holds a list, also where it may be left out."""
    return get_origin(annotation) is tuple or any(is_list(part) for part in _alternatives(annotation))


def choices_of(annotation: Any) -> tuple[str, ...]:
    """The words a key accepts, directly or as entries of a list; empty where it is not a choice."""
    if get_origin(annotation) is Literal:
        return get_args(annotation)
    return next(filter(None, map(choices_of, get_args(annotation))), ())


def _alternatives(annotation: Any) -> tuple[Any, ...]:
    return get_args(annotation) if isinstance(annotation, UnionType) else ()


def field_at(section: type[Section], location: tuple[str | int, ...]) -> FieldInfo | None:
    """The key, or the entry of a list, at a location inside a section; None where there is none."""
    field: FieldInfo | None = None
    inside: type[Section] | None = section
    for step in location:
        if isinstance(step, int):
            field = _entry_of(field) if field is not None else None
        else:
            field = inside.model_fields.get(step) if inside is not None else None
        inside = section_of(field) if field is not None else None
    return field


def _entry_of(field: FieldInfo) -> FieldInfo | None:
    """One entry of a list as if it were a key of its own."""
    for part in (field.annotation, *_alternatives(field.annotation)):
        if get_origin(part) is tuple:
            return FieldInfo.from_annotation(get_args(part)[0])
    return None
