"""Turns what a case file gets wrong into problems a person can mend."""

from __future__ import annotations

import difflib
from collections.abc import Iterable, Mapping
from typing import Any, get_args

from pydantic import ValidationError
from pydantic.fields import FieldInfo

from evenfire.case.schema_section import Section, choices_of, field_at, form_of, is_list, section_of, unit_of
from evenfire.errors import Problem

Location = tuple[str | int, ...]


def nearest(word: str, known: Iterable[str]) -> str:
    """The offer ``did you mean '...'?`` for a misspelt word, or an empty text where nothing is near."""
    by_lower = {name.lower(): name for name in known}
    found = difflib.get_close_matches(word.lower(), by_lower, n=1, cutoff=0.6)
    return f"did you mean '{by_lower[found[0]]}'?" if found else ""


def written(value: object) -> str:
    """A value as it would be written in the file, cut to a readable length."""
    match value:
        case bool():
            return "true" if value else "false"
        case str():
            return f"'{value if len(value) <= 60 else value[:57] + '...'}'"
        case float():
            return f"{value:.10g}"
        case dict():
            return "a table"
        case list():
            return f"a list of {len(value)}"
        case _:
            return str(value)


def with_unit(value: object, unit: str) -> str:
    """A value and its unit, e.g. ``12 kg/h``; no unit is shown for pure numbers and text."""
    number = isinstance(value, int | float) and not isinstance(value, bool)
    return f"{written(value)} {unit}" if number and unit not in ("", "1") else written(value)


def accepted(field: FieldInfo) -> str:
    """What a key accepts, in words: kind of value, range and unit, or the list of choices."""
    choices = choices_of(field.annotation)
    if choices:
        each = " or ".join(f"'{choice}'" for choice in choices)
        return f"a list of {each}" if is_list(field.annotation) else each
    if section_of(field) is not None:
        return "a list of tables" if is_list(field.annotation) else "a table"
    words = str in (field.annotation, *get_args(field.annotation))
    if is_list(field.annotation):
        return "a list of text" if words else "a list of numbers"
    if words:
        return ", ".join(filter(None, ("text", form_of(field))))
    limits = _limits(field)
    whole = int in (field.annotation, *get_args(field.annotation))
    kind = "a whole number" if whole else "a number"
    unit = unit_of(field)
    return " ".join(part for part in (kind, limits, unit if unit != "1" else "") if part)


def _limits(field: FieldInfo) -> str:
    """The range of a number in words; empty where there is none."""
    found = {
        side: getattr(limit, side)
        for limit in field.metadata
        for side in ("ge", "gt", "le", "lt")
        if getattr(limit, side, None) is not None
    }
    if "ge" in found and "le" in found:
        return f"from {found['ge']:.10g} to {found['le']:.10g}"
    words = {"ge": "at least", "gt": "above", "le": "at most", "lt": "below"}
    return " and ".join(f"{words[side]} {found[side]:.10g}" for side in words if side in found)


def key_path(location: Location) -> str:
    """A location as people write it: ``efficiency_points[1].load_percent``."""
    text = ""
    for step in location:
        text += f"[{step}]" if isinstance(step, int) else f".{step}" if text else step
    return text


def section_problems(
    error: ValidationError, section: type[Section], where: str, elsewhere: Mapping[str, tuple[str, ...]]
) -> list[Problem]:
    """One problem per defect that pydantic found in a section.

    Parameters
    ----------
    error : ValidationError
        What pydantic raised for the section.
    section : type[Section]
        The section's model.
    where : str
        File and section, e.g. ``case.toml: boiler 'Old boiler',``; the key path is put behind it.
    elsewhere : Mapping[str, tuple[str, ...]]
        Keys of every section, to say where a misplaced key belongs.
    """
    defects = error.errors(include_url=False)
    places = [defect["loc"] for defect in defects]
    return [
        _problem(defect, section, where, elsewhere)
        for defect in defects
        if defect["type"] != "too_short" or not any(_inside(place, defect["loc"]) for place in places)
    ]


def _inside(place: tuple[Any, ...], list_place: tuple[Any, ...]) -> bool:
    """Whether a place is in a list: one whose entries are wrong is not empty."""
    return len(place) > len(list_place) and place[: len(list_place)] == list_place


def _problem(
    defect: Any, section: type[Section], where: str, elsewhere: Mapping[str, tuple[str, ...]]
) -> Problem:
    location: Location = tuple(defect["loc"])
    found = defect["input"]
    here = f"{where}{key_path(location)}"
    kind = defect["type"]
    if kind == "extra_forbidden":
        return _unknown_key(location, section, here, elsewhere)
    field = field_at(section, location)
    allowed = f"must be {accepted(field) if field is not None else 'a table'}"
    shown = with_unit(found, unit_of(field)) if field is not None else written(found)
    if kind == "missing":
        return Problem(code="C104", where=here, found="missing", allowed=f"state it: {allowed}")
    if kind == "literal_error" and field is not None:
        hint = nearest(found, choices_of(field.annotation)) if isinstance(found, str) else ""
        offer = "; ".join(filter(None, (allowed, hint)))
        return Problem(code="C107", where=here, found=f"found {shown}", allowed=offer)
    if kind in ("too_short", "string_too_short"):
        return Problem(code="C109", where=here, found="empty", allowed="must hold at least one entry")
    return Problem(code=_CODES.get(kind, "C105"), where=here, found=f"found {shown}", allowed=allowed)


_CODES = {
    "greater_than": "C106",
    "greater_than_equal": "C106",
    "less_than": "C106",
    "less_than_equal": "C106",
    "finite_number": "C106",
    "string_pattern_mismatch": "C108",
}
"""Code by pydantic's kind of defect; every other kind is a value of the wrong kind."""


def _unknown_key(
    location: Location, section: type[Section], here: str, elsewhere: Mapping[str, tuple[str, ...]]
) -> Problem:
    key = str(location[-1])
    field = field_at(section, location[:-1])
    inside = section_of(field) if field is not None else section
    known = tuple((inside or section).model_fields)
    return Problem(code="C103", where=here, found="unknown key", allowed=key_offer(key, known, elsewhere))


def key_offer(key: str, known: tuple[str, ...], elsewhere: Mapping[str, tuple[str, ...]]) -> str:
    """What to do about an unknown key: where it belongs, the nearest here, or all that is known."""
    homes = [f"[{name}]" for name, keys in elsewhere.items() if key in keys]
    if homes:
        return f"it belongs in {' or '.join(homes)}"
    return nearest(key, known) or f"known here: {', '.join(known)}"
