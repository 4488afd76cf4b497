"""Changes numeric inputs of a case by their dotted path before the case is checked."""

from __future__ import annotations

import copy
import re
import tomllib
from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any, get_args

from evenfire.case.messages import nearest, written
from evenfire.case.schema import CaseFile
from evenfire.case.schema_section import Section, field_at, section_of, unit_of
from evenfire.errors import CaseError, Problem

Location = tuple[str | int, ...]

MOST_PATHS_SHOWN = 8


def changed_case(raw: Mapping[str, Any], changes: Mapping[str, float], file: str) -> dict[str, Any]:
    """A copy of a case as read from TOML with numeric inputs replaced by their paths.

    Use it for sweeps and for one-off questions; every key of the schema that holds a number can be
    changed, also one that the case leaves out.

    Parameters
    ----------
    raw : Mapping[str, Any]
        The case as read from TOML.
    changes : Mapping[str, float]
        New value by path, in the unit of the key, e.g. ``{"fuel.price_per_mwh": 60.0}``. A row of a list is
        addressed by position from 0, ``new_boiler.sizes[0].installed_cost``, and a boiler also by its
        name, ``existing_boiler."Boiler 1, 5 t/h".turndown_ratio``.
    file : str
        Name of the file, for messages.

    Raises
    ------
    CaseError
        C123 for a path that is not a numeric input of this case, the nearest one offered.

    Examples
    --------
    >>> changed_case({"fuel": {"price_per_mwh": 46.0}}, {"fuel.price_per_mwh": 60.0}, "case.toml")
    {'fuel': {'price_per_mwh': 60.0}}
    """
    result: dict[str, Any] = copy.deepcopy(dict(raw))
    kinds = dict(_numeric_places(result, CaseFile, ()))
    places = {_plain(_path(place, result, by_name=False)): place for place in kinds}
    places |= {_plain(_path(place, result, by_name=True)): place for place in kinds}
    problems = []
    for path, value in changes.items():
        place = places.get(_plain(path))
        if place is None:
            problems.append(_unknown_path(path, numeric_paths(raw), file))
            continue
        *parents, key = place
        holder: Any = result
        for step in parents:
            holder = holder[step]
        whole = kinds[place] is int and float(value).is_integer()
        holder[key] = int(value) if whole else value
    if problems:
        raise CaseError(*problems)
    return result


def numeric_paths(raw: Mapping[str, Any]) -> tuple[str, ...]:
    """The paths of every numeric input that a case states or could state, boilers by name.

    Examples
    --------
    >>> numeric_paths({"money": {}})[:2]
    ('money.horizon_years', 'money.discount_rate_percent')
    >>> 'existing_boiler."Old".rating_kg_h' in numeric_paths({"existing_boiler": [{"name": "Old"}]})
    True
    """
    return tuple(_path(place, raw, by_name=True) for place, _ in _numeric_places(raw, CaseFile, ()))


def _numeric_places(table: Any, section: type[Section], above: Location) -> Iterator[tuple[Location, type]]:
    """Place and type of every number in a table of the case, stated or optional."""
    if not isinstance(table, Mapping):
        return
    for key, field in section.model_fields.items():
        here = (*above, key)
        inside = section_of(field)
        stated = table.get(key)
        kinds = (field.annotation, *get_args(field.annotation))
        if isinstance(stated, list):
            for position, row in enumerate(stated):
                if inside is not None:
                    yield from _numeric_places(row, inside, (*here, position))
                elif isinstance(row, int | float):
                    yield (*here, position), float
        elif inside is not None:
            yield from _numeric_places(stated, inside, here)
        elif float in kinds:
            yield here, float
        elif int in kinds:
            yield here, int


def _path(place: Location, raw: Mapping[str, Any], *, by_name: bool) -> str:
    text = ""
    at: Any = raw
    for step in place:
        at = at[step] if isinstance(step, int) else at.get(step, {})
        if isinstance(step, str):
            text += f".{step}" if text else step
        elif by_name and isinstance(at, Mapping) and isinstance(at.get("name"), str):
            text += f'."{at["name"]}"'
        else:
            text += f"[{step}]"
    return text


def _plain(path: str) -> str:
    """A path without quotes and with positions written like keys, so that either spelling is found."""
    return re.sub(r"\.+", ".", re.sub(r"[\"'\]\s]", "", path.replace("[", "."))).strip(".")


def _unknown_path(path: str, known: tuple[str, ...], file: str) -> Problem:
    shown = ", ".join(known[:MOST_PATHS_SHOWN])
    return Problem(
        code="C123",
        where=f"{file}: change of {written(path)}",
        found="no numeric input has this path",
        allowed=nearest(path, known) or f"numeric inputs of this case are {shown}, ...",
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class NumericInput:
    """A numeric input of a case."""

    path: str
    """As the program writes it, boilers by name."""
    value: float | None
    """As the case states it, in ``unit``; None where the case leaves it out."""
    unit: str


def numeric_input(file: Path, path: str) -> NumericInput:
    """The numeric input at a dotted path of a case file that can be read.

    Parameters
    ----------
    file : Path
        The case file or its folder.
    path : str
        As for :func:`changed_case`.

    Raises
    ------
    CaseError
        C123 for a path that is not a numeric input of this case, the nearest one offered.
    """
    file = file / "case.toml" if file.is_dir() else file
    raw = tomllib.loads(file.read_text(encoding="utf-8-sig"))
    for place, _ in _numeric_places(raw, CaseFile, ()):
        named = _path(place, raw, by_name=True)
        if _plain(path) in (_plain(named), _plain(_path(place, raw, by_name=False))):
            field = field_at(CaseFile, place)
            return NumericInput(
                path=named, value=_stated(raw, place), unit="" if field is None else unit_of(field)
            )
    raise CaseError(_unknown_path(path, numeric_paths(raw), str(file)))


def _stated(raw: Mapping[str, Any], place: Location) -> float | None:
    at: Any = raw
    for step in place:
        if isinstance(at, Mapping):
            at = at.get(step)
        elif isinstance(at, list) and isinstance(step, int):
            at = at[step]
    return float(at) if isinstance(at, int | float) else None


def stated_inputs(file: Path) -> tuple[tuple[str, float], ...]:
    """Path and value of every numeric input that a readable case file states, boilers by name."""
    file = file / "case.toml" if file.is_dir() else file
    raw = tomllib.loads(file.read_text(encoding="utf-8-sig"))
    places = (place for place, _ in _numeric_places(raw, CaseFile, ()))
    found = ((_path(place, raw, by_name=True), _stated(raw, place)) for place in places)
    return tuple((path, value) for path, value in found if value is not None)
