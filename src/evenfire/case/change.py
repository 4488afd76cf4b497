"""Changes numeric inputs of a case by their dotted path before the case is checked."""

from __future__ import annotations

import copy
import re
from collections.abc import Iterator, Mapping
from typing import Any, get_args

from evenfire.case.messages import nearest, written
from evenfire.case.schema_section import Section, section_of
from evenfire.errors import CaseError, Problem

_STEP = re.compile(
    r"""\s*(?:\.?\s*"(?P<double>[^"]*)" | \.?\s*'(?P<single>[^']*)' | \[\s*(?P<index>\d+)\s*\]
        | \[\s*"(?P<boxed_double>[^"]*)"\s*\] | \[\s*'(?P<boxed_single>[^']*)'\s*\] | \.?(?P<bare>[^.\[\]"']+))""",
    re.VERBOSE,
)


def changed_case(
    raw: Mapping[str, Any], changes: Mapping[str, float], root: type[Section], file: str
) -> dict[str, Any]:
    """A copy of a case as read from TOML with numeric inputs replaced by their paths.

    Parameters
    ----------
    raw : Mapping[str, Any]
        The case as read from TOML.
    changes : Mapping[str, float]
        New value by path, in the unit of the key, e.g. ``{"fuel.price_per_mwh": 60.0}``. A row of a list is
        addressed by position from 0 (``new_boiler.sizes[0].installed_cost``) and a boiler also by its
        name in quotes (``existing_boiler."Boiler 1, 5 t/h".turndown_ratio``).
    root : type[Section]
        The model of the whole case file.
    file : str
        Name of the file, for messages.

    Raises
    ------
    CaseError
        C123 for a path that is not a numeric input of this case, the nearest one offered.

    Examples
    --------
    >>> from evenfire.case.schema import CaseFile
    >>> changed_case({"fuel": {"price_per_mwh": 46.0}}, {"fuel.price_per_mwh": 60.0}, CaseFile, "case.toml")
    {'fuel': {'price_per_mwh': 60.0}}
    """
    result: dict[str, Any] = copy.deepcopy(dict(raw))
    places = dict(_numeric_places(result, root, ()))
    problems = []
    for path, value in changes.items():
        location = _location(path, result)
        if location is None or location not in places:
            problems.append(_unknown_path(path, places, result, file))
            continue
        *parents, key = location
        holder: Any = result
        for step in parents:
            holder = holder[step]
        holder[key] = int(value) if places[location] is int and float(value).is_integer() else value
    if problems:
        raise CaseError(*problems)
    return result


def numeric_paths(raw: Mapping[str, Any], root: type[Section]) -> tuple[str, ...]:
    """The paths of every numeric input that a case states or could state, boilers by name."""
    return tuple(_path(location, raw) for location, _ in _numeric_places(raw, root, ()))


def _numeric_places(
    table: Any, section: type[Section], above: tuple[str | int, ...]
) -> Iterator[tuple[tuple[str | int, ...], type]]:
    """Location and type of every number in a table of the case, stated or optional."""
    if not isinstance(table, Mapping):
        return
    for key, field in section.model_fields.items():
        here = (*above, key)
        inside = section_of(field)
        stated = table.get(key)
        kinds = (field.annotation, *get_args(field.annotation))
        if inside is not None and isinstance(stated, list):
            for position, row in enumerate(stated):
                yield from _numeric_places(row, inside, (*here, position))
        elif inside is not None:
            yield from _numeric_places(stated, inside, here)
        elif isinstance(stated, list):
            for position, row in enumerate(stated):
                if isinstance(row, int | float):
                    yield (*here, position), float
        elif float in kinds:
            yield here, float
        elif int in kinds:
            yield here, int


def _location(path: str, raw: Mapping[str, Any]) -> tuple[str | int, ...] | None:
    """The location that a path names in a case, names and positions of rows resolved; None if none."""
    location: list[str | int] = []
    at: Any = raw
    position = 0
    while position < len(path):
        found = _STEP.match(path, position)
        if found is None:
            return None
        position = found.end()
        step = next(part for part in found.groups() if part is not None).strip()
        if isinstance(at, list):
            row = _row(step, at)
            if row is None:
                return None
            location.append(row)
            at = at[row]
        else:
            location.append(step)
            at = at.get(step) if isinstance(at, Mapping) else None
    return tuple(location)


def _row(step: str, rows: list[Any]) -> int | None:
    for position, row in enumerate(rows):
        if isinstance(row, Mapping) and row.get("name") == step:
            return position
    return int(step) if step.isdigit() and int(step) < len(rows) else None


def _path(location: tuple[str | int, ...], raw: Mapping[str, Any]) -> str:
    text = ""
    at: Any = raw
    for step in location:
        at = at[step] if isinstance(step, int) else at.get(step, {})
        if isinstance(step, str):
            text += f".{step}" if text else step
        elif isinstance(at, Mapping) and isinstance(at.get("name"), str):
            text += f'."{at["name"]}"'
        else:
            text += f"[{step}]"
    return text


def _unknown_path(
    path: str, places: Mapping[tuple[str | int, ...], type], raw: Mapping[str, Any], file: str
) -> Problem:
    known = [_path(location, raw) for location in places]
    offer = nearest(path, known) or f"numeric inputs of this case: {', '.join(known[:8])}, ..."
    return Problem(
        code="C123",
        where=f"{file}: change of {written(path)}",
        found="no numeric input has this path",
        allowed=offer,
    )
