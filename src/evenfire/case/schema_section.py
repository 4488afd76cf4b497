"""What every section of a case file has in common, and how its keys describe themselves."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any, get_args

from pydantic import BaseModel, ConfigDict, Field
from pydantic.fields import FieldInfo

LARGEST_PRICE_PER_MWH = 1.0e5
"""Above this a price per MWh is taken for a slip of the unit."""


class Section(BaseModel):
    """One table of a case file: unknown keys refused, no infinities, immutable once read."""

    model_config = ConfigDict(extra="forbid", frozen=True, allow_inf_nan=False, str_strip_whitespace=True)


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
    meaning: str, *, pattern: str | None = None, shortest: int | None = None, when_left_out: str | None = None
) -> Any:
    """The annotation of a key that is not a number: meaning, text pattern, least length."""
    extra: dict[str, Any] | None = {"assumed": when_left_out} if when_left_out is not None else None
    return Field(description=meaning, pattern=pattern, min_length=shortest, json_schema_extra=extra)


def unit_of(field: FieldInfo) -> str:
    """Unit of a numeric key; empty for text, lists and tables."""
    extra = field.json_schema_extra
    return str(extra.get("unit", "")) if isinstance(extra, dict) else ""


def assumption_of(field: FieldInfo) -> str:
    """In words, what is computed where the key is left out; empty where nothing is."""
    extra = field.json_schema_extra
    return str(extra.get("assumed", "")) if isinstance(extra, dict) else ""


def section_of(field: FieldInfo) -> type[Section] | None:
    """The section a key holds, directly or as the rows of a list; None for plain values."""
    return next(_sections_in(field.annotation), None)


def _sections_in(annotation: Any) -> Iterator[type[Section]]:
    if isinstance(annotation, type) and issubclass(annotation, Section):
        yield annotation
    for part in get_args(annotation):
        yield from _sections_in(part)


def field_at(section: type[Section], location: tuple[str | int, ...]) -> FieldInfo | None:
    """The key at a location inside a section, list positions skipped; None where there is none."""
    keys = [step for step in location if isinstance(step, str)]
    field: FieldInfo | None = None
    inside: type[Section] | None = section
    for key in keys:
        if inside is None or key not in inside.model_fields:
            return None
        field = inside.model_fields[key]
        inside = section_of(field)
    return field
