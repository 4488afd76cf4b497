"""Checks of each boiler's keys against each other and against the site."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator
from itertools import pairwise

from evenfire.case.checks_steam import boiling_problems
from evenfire.case.draft import Draft, boiler_place, new_boiler_name
from evenfire.case.fuel_basis import net_efficiency
from evenfire.case.schema_boiler import BoilerType
from evenfire.case.schema_site import Steam
from evenfire.errors import Problem

LOAD_ROUNDING_PERCENT = 0.05
"""How far a typed load may lie above the smallest firing load, as 100 / 3 is typed 33.33 or 33.34."""


def boiler_problems(draft: Draft) -> Iterator[Problem]:
    """What is wrong between keys of the boilers in place."""
    for name, times in Counter(boiler.name for boiler in draft.existing_boilers).items():
        if times > 1:
            yield Problem(
                code="C112",
                where=f"{draft.file}: existing_boiler.name",
                found=f"'{name}' is given to {times} boilers",
                allowed="give each boiler its own name",
            )
    taken = (
        {new_boiler_name(size.rating_kg_h) for size in draft.new_boiler.sizes} if draft.new_boiler else set()
    )
    for boiler in draft.existing_boilers:
        if boiler.name in taken:
            yield Problem(
                code="C112",
                where=f"{draft.file}: existing_boiler.name",
                found=f"'{boiler.name}' is what a boiler of [new_boiler] is called",
                allowed="give the boiler in place another name",
            )
        place = f"{draft.file}: {boiler_place(boiler.name)},"
        yield from _type_problems(boiler, place, draft)


def catalogue_problems(draft: Draft) -> Iterator[Problem]:
    """What is wrong between keys of the boilers on offer."""
    catalogue = draft.new_boiler
    if catalogue is None:
        return
    place = f"{draft.file}: new_boiler,"
    yield from _type_problems(catalogue, place, draft)
    for position, size in enumerate(catalogue.sizes):
        if catalogue.stack_readings is None and size.casing_loss_kw is not None:
            yield _needs_stack_readings(f"{place} sizes[{position}].casing_loss_kw")
    for rating, times in Counter(size.rating_kg_h for size in catalogue.sizes).items():
        if times > 1:
            yield Problem(
                code="C114",
                where=f"{place} sizes",
                found=f"the rating {rating:g} kg/h is listed {times} times",
                allowed="list each rating once",
            )


def _pressure_problems(boiler: BoilerType, place: str, steam: Steam) -> Iterator[Problem]:
    today = steam.boiler_pressure_bar_g
    if boiler.design_pressure_bar_g < today:
        yield Problem(
            code="C113",
            where=f"{place} design_pressure_bar_g",
            found=f"found {boiler.design_pressure_bar_g:g} bar g",
            allowed=f"must be at least steam.boiler_pressure_bar_g, {today:g} bar g,"
            " at which all boilers work",
        )
    if boiler.burner_pressure_band_bar >= today:
        yield Problem(
            code="C128",
            where=f"{place} burner_pressure_band_bar",
            found=f"found {boiler.burner_pressure_band_bar:g} bar",
            allowed=f"must be less than steam.boiler_pressure_bar_g, {today:g} bar g",
        )
    if boiler.efficiency_pressure_bar_g is not None:
        yield from boiling_problems(
            steam.feedwater_temperature_degc,
            f"{place} efficiency_pressure_bar_g against steam.feedwater_temperature_degc",
            boiler.efficiency_pressure_bar_g,
            "efficiency_pressure_bar_g",
        )


def _type_problems(boiler: BoilerType, place: str, draft: Draft) -> Iterator[Problem]:
    if draft.steam is not None:
        yield from _pressure_problems(boiler, place, draft.steam)
    yield from _stack_problems(boiler, place, draft)
    for key in ("efficiency_points", "stack_readings"):
        rows = getattr(boiler, key)
        if rows is not None:
            yield from _load_problems([row.load_percent for row in rows], boiler, f"{place} {key}")
    if draft.fuel is None or boiler.efficiency_points is None:
        return
    best = max(boiler.efficiency_points, key=lambda point: point.efficiency_percent)
    net = net_efficiency(best.efficiency_percent, boiler.calorific_basis, draft.fuel)
    if net > 1.0:
        yield Problem(
            code="C117",
            where=f"{place} efficiency_points",
            found=f"{best.efficiency_percent:g} % on gross (hhv) at {best.load_percent:g} % load is"
            f" {100.0 * net:.1f} % on net calorific value",
            allowed="cannot exceed 100 %; a maker's figure is mostly net, then calorific_basis = 'lhv'",
        )


def _load_problems(loads: list[float], boiler: BoilerType, where: str) -> Iterator[Problem]:
    """Loads that do not rise, or do not span the firing range."""
    if any(later <= earlier for earlier, later in pairwise(loads)):
        yield Problem(
            code="C115",
            where=where,
            found=f"load_percent runs {', '.join(f'{load:g}' for load in loads)}",
            allowed="must rise from row to row",
        )
    elif loads[-1] != 100.0:
        yield Problem(
            code="C116",
            where=where,
            found=f"the last row is at {loads[-1]:g} % load",
            allowed="must reach 100 %",
        )
    smallest = 100.0 / boiler.turndown_ratio
    if loads[0] > smallest + LOAD_ROUNDING_PERCENT:
        yield Problem(
            code="C116",
            where=where,
            found=f"the first row is at {loads[0]:g} % load",
            allowed=f"must start at or below the smallest firing load, {smallest:.4g} %"
            f" with turndown_ratio {boiler.turndown_ratio:g}",
        )


def _stack_problems(boiler: BoilerType, place: str, draft: Draft) -> Iterator[Problem]:
    """Stack readings that are missing, incomplete or colder than what they must be hotter than."""
    if boiler.stack_readings is None:
        yield from _missing_stack_problems(boiler, place)
        return
    if boiler.efficiency_points is not None and boiler.economiser is not None:
        yield Problem(
            code="C135",
            where=f"{place} economiser",
            found="efficiency_points are stated too",
            allowed="leave out the points, so that they follow from the readings behind the economiser,"
            " or leave out the economiser that they already hold",
        )
    if draft.fuel is not None and draft.fuel.kind == "electricity":
        yield Problem(
            code="C133",
            where=f"{place} stack_readings",
            found="an electric boiler has no stack",
            allowed="state efficiency_points instead",
        )
    air_degc = boiler.combustion_air_temperature_degc
    if air_degc is None and draft.steam is not None:
        air_degc = draft.steam.ambient_temperature_degc
    water_degc = boiler.economiser.water_temperature_degc if boiler.economiser is not None else None
    if boiler.economiser is not None and water_degc is None and draft.steam is not None:
        water_degc = draft.steam.feedwater_temperature_degc
    for position, reading in enumerate(boiler.stack_readings):
        where = f"{place} stack_readings[{position}]"
        if (reading.o2_percent is None) == (reading.co2_percent is None):
            yield Problem(
                code="C132",
                where=where,
                found="neither oxygen nor carbon dioxide" if reading.o2_percent is None else "both gases",
                allowed="state o2_percent or co2_percent",
            )
        for name, colder_degc in (("combustion air", air_degc), ("water into the economiser", water_degc)):
            if colder_degc is not None and reading.stack_temperature_degc < colder_degc:
                yield Problem(
                    code="C134",
                    where=f"{where}.stack_temperature_degc",
                    found=f"found {reading.stack_temperature_degc:g} degC",
                    allowed=f"must not be colder than the {name}, {colder_degc:g} degC",
                )


def _missing_stack_problems(boiler: BoilerType, place: str) -> Iterator[Problem]:
    if boiler.efficiency_points is None:
        yield Problem(
            code="C131",
            where=f"{place} efficiency_points",
            found="missing",
            allowed="state efficiency_points, or stack_readings to reckon them from",
        )
    for key in ("combustion_air_temperature_degc", "economiser", "casing_loss_kw"):
        if getattr(boiler, key, None) is not None:
            yield _needs_stack_readings(f"{place} {key}")


def _needs_stack_readings(where: str) -> Problem:
    return Problem(
        code="C131",
        where=where,
        found="stated without stack_readings",
        allowed="state stack_readings, which it belongs to, or leave it out",
    )
