"""A case file section by section, so that one wrong section does not hide what is wrong in the others."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any, TypeVar

from pydantic import ValidationError

from evenfire.case.messages import key_offer, section_problems, written
from evenfire.case.schema import CaseFile
from evenfire.case.schema_boiler import ExistingBoiler, NewBoiler
from evenfire.case.schema_money import Money, Plan, Replay
from evenfire.case.schema_record import Record
from evenfire.case.schema_risk import Risk
from evenfire.case.schema_schedule import Schedule
from evenfire.case.schema_section import Section, section_of
from evenfire.case.schema_site import Fuel, Site, Steam, Vessel
from evenfire.errors import Problem

AnySection = TypeVar("AnySection", bound=Section)


@dataclass(frozen=True, slots=True, kw_only=True)
class Draft:
    """The sections of a case that are right in themselves; None where one is missing or wrong."""

    file: str
    site: Site | None
    record: Record | None
    schedule: Schedule | None
    steam: Steam | None
    fuel: Fuel | None
    existing_boilers: tuple[ExistingBoiler, ...]
    all_boilers_read: bool
    """False where a boiler is not in this draft because it is wrong in itself."""
    new_boiler: NewBoiler | None
    vessel: Vessel | None
    money: Money | None
    plan: Plan | None
    risk: Risk | None
    sections: frozenset[str]
    """Names of the sections that the file holds, right or wrong."""


def boiler_place(name: str) -> str:
    """How messages and notices call a boiler of the site."""
    return f"boiler '{name}'"


def new_boiler_name(rating_kg_h: float) -> str:
    """What a boiler of the catalogue is called."""
    return f"New boiler, {rating_kg_h / 1000.0:g} t/h"


def case_draft(raw: Mapping[str, Any], file: str) -> tuple[Draft, list[Problem]]:
    """The sections of a case as read from TOML, and every defect found inside them.

    Parameters
    ----------
    raw : Mapping[str, Any]
        The case as read from TOML.
    file : str
        Name of the file, for messages.
    """
    problems = _unknown_sections(raw, file)
    boilers, boiler_problems = _existing_boilers(raw, file)
    new_boiler = _section(raw, "new_boiler", NewBoiler, file, problems)
    site = _section(raw, "site", Site, file, problems)
    if "record" not in raw and "schedule" not in raw:
        description = str(CaseFile.model_fields["record"].description)
        problems.append(_missing_section("record", description, file))
    _section(raw, "replay", Replay, file, problems)
    draft = Draft(
        file=file,
        site=site,
        record=_section(raw, "record", Record, file, problems),
        schedule=_section(raw, "schedule", Schedule, file, problems),
        steam=_section(raw, "steam", Steam, file, problems),
        fuel=_section(raw, "fuel", Fuel, file, problems),
        existing_boilers=boilers,
        all_boilers_read=not boiler_problems and (new_boiler is not None or "new_boiler" not in raw),
        new_boiler=new_boiler,
        vessel=_section(raw, "vessel", Vessel, file, problems),
        money=_section(raw, "money", Money, file, problems),
        plan=_section(raw, "plan", Plan, file, problems),
        risk=_section(raw, "risk", Risk, file, problems),
        sections=frozenset(raw),
    )
    return draft, problems + boiler_problems


def _unknown_sections(raw: Mapping[str, Any], file: str) -> list[Problem]:
    known = tuple(CaseFile.model_fields)
    return [
        Problem(
            code="C103",
            where=f"{file}: {name}",
            found="unknown section" if isinstance(raw[name], dict | list) else "key outside any section",
            allowed=key_offer(name, known, _KEYS_BY_SECTION),
        )
        for name in raw
        if name not in known
    ]


def _section(
    raw: Mapping[str, Any], name: str, section: type[AnySection], file: str, problems: list[Problem]
) -> AnySection | None:
    """One section of the file; its defects are appended to `problems`."""
    field = CaseFile.model_fields[name]
    if name not in raw:
        if not field.is_required():
            return field.default if isinstance(field.default, section) else None
        problems.append(_missing_section(name, str(field.description), file))
        return None
    read, found = _read(raw[name], section, f"{file}: [{name}]", f"{file}: {name}.", f"a section [{name}]")
    problems += found
    return read


def _missing_section(name: str, description: str, file: str) -> Problem:
    return Problem(code="C104", where=f"{file}: [{name}]", found="missing section", allowed=description)


def _existing_boilers(raw: Mapping[str, Any], file: str) -> tuple[tuple[ExistingBoiler, ...], list[Problem]]:
    rows = raw.get("existing_boiler")
    if not isinstance(rows, list) or not rows:
        found = "missing" if not rows else f"found {written(rows)}"
        allowed = "state each boiler that stands on the site in a section [[existing_boiler]] of its own"
        return (), [Problem(code="C104", where=f"{file}: existing_boiler", found=found, allowed=allowed)]
    boilers: list[ExistingBoiler] = []
    problems: list[Problem] = []
    for position, row in enumerate(rows):
        name = row.get("name") if isinstance(row, dict) else None
        named = isinstance(name, str) and name.strip() != ""
        where = f"{file}: {boiler_place(str(name))}" if named else f"{file}: existing_boiler[{position}]"
        between = ", " if named else "."
        boiler, found_here = _read(
            row, ExistingBoiler, where, where + between, "a section [[existing_boiler]]"
        )
        problems += found_here
        if boiler is not None:
            boilers.append(boiler)
    return tuple(boilers), problems


def _read(
    table: Any, section: type[AnySection], where: str, before_key: str, kind: str
) -> tuple[AnySection | None, list[Problem]]:
    if not isinstance(table, dict):
        return None, [
            Problem(code="C105", where=where, found=f"found {written(table)}", allowed=f"must be {kind}")
        ]
    try:
        return section.model_validate(table), []
    except ValidationError as error:
        return None, section_problems(error, section, before_key, _KEYS_BY_SECTION)


def _keys_by_section() -> dict[str, tuple[str, ...]]:
    inside = {name: section_of(field) for name, field in CaseFile.model_fields.items()}
    return {name: tuple(section.model_fields) for name, section in inside.items() if section is not None}


_KEYS_BY_SECTION = _keys_by_section()
