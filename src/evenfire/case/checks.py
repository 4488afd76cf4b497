"""Checks that need several keys of a case at once: what each key allows alone is in the schema."""

from __future__ import annotations

from collections import Counter
from collections.abc import Collection, Iterator
from itertools import pairwise

from evenfire.boiler import fuel_spec
from evenfire.case.draft import Draft, boiler_place
from evenfire.case.schema_boiler import BoilerType
from evenfire.case.schema_money import AlternativeName
from evenfire.case.schema_site import Fuel, Steam
from evenfire.errors import Problem
from evenfire.units import bar_g_to_pa, k_to_degc
from evenfire.water import saturation_temperature_k

LOAD_ROUNDING_PERCENT = 0.05
"""How far a typed load may lie above the smallest firing load, as 100 / 3 is typed 33.33 or 33.34."""


def lhv_to_hhv(fuel: Fuel) -> float:
    """Net over gross calorific value of the case's fuel, stated or published [1]."""
    return fuel.lhv_to_hhv if fuel.lhv_to_hhv is not None else fuel_spec(fuel.kind).lhv_to_hhv


def net_efficiency(efficiency_percent: float, basis: str, fuel: Fuel) -> float:
    """Efficiency on net calorific value [1] from a typed one [%] on its basis."""
    efficiency = efficiency_percent / 100.0
    return efficiency / lhv_to_hhv(fuel) if basis == "hhv" else efficiency


def draft_problems(draft: Draft) -> list[Problem]:
    """Every defect between keys of a case that can be seen in the sections that were read."""
    return [
        problem
        for check in (
            _record_problems,
            _steam_problems,
            _boiler_problems,
            _catalogue_problems,
            _fuel_problems,
            _vessel_problems,
            _window_problems,
            _plan_problems,
        )
        for problem in check(draft)
    ]


def _record_problems(draft: Draft) -> Iterator[Problem]:
    record = draft.record
    if record is None:
        return
    if record.gaps != "refuse" and record.largest_gap_minutes is None:
        yield Problem(
            code="C104",
            where=f"{draft.file}: record.largest_gap_minutes",
            found="missing",
            allowed=f"with gaps = '{record.gaps}' state the longest gap that may be filled [min]",
        )
    if record.time_column == record.flow_column:
        yield Problem(
            code="C124",
            where=f"{draft.file}: record.flow_column",
            found=f"found '{record.flow_column}', which is also time_column",
            allowed="name two different columns",
        )


def _steam_problems(draft: Draft) -> Iterator[Problem]:
    steam = draft.steam
    if steam is None:
        return
    if steam.boiler_pressure_bar_g <= steam.process_pressure_bar_g:
        yield Problem(
            code="C110",
            where=f"{draft.file}: steam.boiler_pressure_bar_g",
            found=f"found {steam.boiler_pressure_bar_g:g} bar g",
            allowed=f"must be above steam.process_pressure_bar_g, {steam.process_pressure_bar_g:g} bar g",
        )
    yield from _too_hot(
        steam.feedwater_temperature_degc,
        f"{draft.file}: steam.feedwater_temperature_degc",
        steam.boiler_pressure_bar_g,
        "steam.boiler_pressure_bar_g",
    )


def _too_hot(water_degc: float, where: str, pressure_bar_g: float, pressure_key: str) -> Iterator[Problem]:
    boiling_degc = k_to_degc(float(saturation_temperature_k(bar_g_to_pa(pressure_bar_g))))
    if water_degc >= boiling_degc:
        yield Problem(
            code="C111",
            where=where,
            found=f"found {water_degc:g} degC",
            allowed=f"must be below boiling at {pressure_key} = {pressure_bar_g:g} bar g,"
            f" {boiling_degc:.1f} degC",
        )


def _boiler_problems(draft: Draft) -> Iterator[Problem]:
    for name, times in Counter(boiler.name for boiler in draft.existing_boilers).items():
        if times > 1:
            yield Problem(
                code="C112",
                where=f"{draft.file}: existing_boiler.name",
                found=f"'{name}' is given to {times} boilers",
                allowed="give each boiler its own name",
            )
    for boiler in draft.existing_boilers:
        place = f"{draft.file}: {boiler_place(boiler.name)},"
        yield from _type_problems(boiler, place, draft)


def _catalogue_problems(draft: Draft) -> Iterator[Problem]:
    catalogue = draft.new_boiler
    if catalogue is None:
        return
    place = f"{draft.file}: new_boiler,"
    yield from _type_problems(catalogue, place, draft)
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
        yield from _too_hot(
            steam.feedwater_temperature_degc,
            f"{place} efficiency_pressure_bar_g against steam.feedwater_temperature_degc",
            boiler.efficiency_pressure_bar_g,
            "efficiency_pressure_bar_g",
        )


def _type_problems(boiler: BoilerType, place: str, draft: Draft) -> Iterator[Problem]:
    if draft.steam is not None:
        yield from _pressure_problems(boiler, place, draft.steam)
    loads = [point.load_percent for point in boiler.efficiency_points]
    if any(later <= earlier for earlier, later in pairwise(loads)):
        yield Problem(
            code="C115",
            where=f"{place} efficiency_points",
            found=f"load_percent runs {', '.join(f'{load:g}' for load in loads)}",
            allowed="must rise from point to point",
        )
    elif loads[-1] != 100.0:
        yield Problem(
            code="C116",
            where=f"{place} efficiency_points",
            found=f"the last point is at {loads[-1]:g} % load",
            allowed="must reach 100 %",
        )
    smallest = 100.0 / boiler.turndown_ratio
    if loads[0] > smallest + LOAD_ROUNDING_PERCENT:
        yield Problem(
            code="C116",
            where=f"{place} efficiency_points",
            found=f"the first point is at {loads[0]:g} % load",
            allowed=f"must start at or below the smallest firing load, {smallest:.4g} %"
            f" with turndown_ratio {boiler.turndown_ratio:g}",
        )
    if draft.fuel is None:
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


def _fuel_problems(draft: Draft) -> Iterator[Problem]:
    fuel = draft.fuel
    if fuel is None or fuel.kind == "electricity":
        return
    if fuel.price_per_mwh < 0.0:
        yield Problem(
            code="C118",
            where=f"{draft.file}: fuel.price_per_mwh",
            found=f"found {fuel.price_per_mwh:g} currency/MWh",
            allowed="must not be below zero; only electricity can be",
        )


def _vessel_problems(draft: Draft) -> Iterator[Problem]:
    vessel = draft.vessel
    if vessel is None:
        return
    if vessel.make_up_temperature_degc is not None:
        yield from _too_hot(
            vessel.make_up_temperature_degc,
            f"{draft.file}: vessel.make_up_temperature_degc",
            min(vessel.discharged_pressures_bar_g),
            "vessel.discharged_pressures_bar_g",
        )
    if vessel.smallest_volume_m3 > vessel.largest_volume_m3:
        yield Problem(
            code="C119",
            where=f"{draft.file}: vessel.smallest_volume_m3",
            found=f"found {vessel.smallest_volume_m3:g} m3",
            allowed=f"must not exceed vessel.largest_volume_m3, {vessel.largest_volume_m3:g} m3",
        )
    for key in ("charged_pressures_bar_g", "discharged_pressures_bar_g"):
        for pressure, times in Counter(getattr(vessel, key)).items():
            if times > 1:
                yield Problem(
                    code="C114",
                    where=f"{draft.file}: vessel.{key}",
                    found=f"{pressure:g} bar g is listed {times} times",
                    allowed="list each pressure once",
                )


def _window_problems(draft: Draft) -> Iterator[Problem]:
    vessel, steam = draft.vessel, draft.steam
    if vessel is None:
        return
    charged, discharged = vessel.charged_pressures_bar_g, vessel.discharged_pressures_bar_g
    for position, pressure in enumerate(charged):
        if pressure <= min(discharged):
            yield Problem(
                code="C120",
                where=f"{draft.file}: vessel.charged_pressures_bar_g[{position}]",
                found=f"found {pressure:g} bar g",
                allowed="must be above a discharged pressure, the lowest of which is"
                f" {min(discharged):g} bar g",
            )
    for position, pressure in enumerate(discharged):
        if pressure >= max(charged):
            yield Problem(
                code="C120",
                where=f"{draft.file}: vessel.discharged_pressures_bar_g[{position}]",
                found=f"found {pressure:g} bar g",
                allowed=f"must be below a charged pressure, the highest of which is {max(charged):g} bar g",
            )
    if steam is None:
        return
    lowest = steam.process_pressure_bar_g + steam.discharging_pressure_drop_bar
    for position, pressure in enumerate(discharged):
        if pressure < lowest - 1e-9:
            yield Problem(
                code="C121",
                where=f"{draft.file}: vessel.discharged_pressures_bar_g[{position}]",
                found=f"found {pressure:g} bar g",
                allowed=f"must be at least {lowest:g} bar g, steam.process_pressure_bar_g plus"
                " steam.discharging_pressure_drop_bar",
            )
    boilers = [*draft.existing_boilers, *([draft.new_boiler] if draft.new_boiler is not None else [])]
    if not draft.all_boilers_read or not boilers:
        return
    highest = max(boiler.design_pressure_bar_g for boiler in boilers) - steam.charging_pressure_drop_bar
    for position, pressure in enumerate(charged):
        if pressure > highest + 1e-9:
            yield Problem(
                code="C122",
                where=f"{draft.file}: vessel.charged_pressures_bar_g[{position}]",
                found=f"found {pressure:g} bar g",
                allowed=f"must be at most {highest:g} bar g, the highest boiler design_pressure_bar_g less"
                " steam.charging_pressure_drop_bar",
            )


def _plan_problems(draft: Draft) -> Iterator[Problem]:
    plan = draft.plan
    if plan is None:
        return
    place = f"{draft.file}: plan"
    alternatives = plan.alternatives or possible_alternatives(draft.sections)
    for name, times in Counter(alternatives).items():
        if times > 1:
            yield Problem(
                code="C114",
                where=f"{place}.alternatives",
                found=f"'{name}' is listed {times} times",
                allowed="list each alternative once",
            )
    if plan.reference not in alternatives:
        yield Problem(
            code="C125",
            where=f"{place}.reference",
            found=f"found '{plan.reference}'",
            allowed=f"must be one of plan.alternatives: {', '.join(alternatives)}",
        )
    for name in dict.fromkeys(alternatives):
        if name not in possible_alternatives(draft.sections):
            sections = " or ".join(f"[{section}]" for section in _NEEDED_SECTIONS[name])
            yield Problem(
                code="C126",
                where=f"{place}.alternatives",
                found=f"'{name}' needs {sections}, which the case does not have",
                allowed="add it, or leave the alternative out of the list",
            )
    steps = 1440.0 / plan.step_minutes
    if abs(steps - round(steps)) > 1e-9:
        yield Problem(
            code="C127",
            where=f"{place}.step_minutes",
            found=f"found {plan.step_minutes:g} min",
            allowed="must divide a day, as 1, 5, 10, 15 or 30 min do",
        )


def possible_alternatives(sections: Collection[str]) -> tuple[AlternativeName, ...]:
    """Every alternative for which a case has one of the sections it needs, in the usual order."""
    return tuple(
        name
        for name, needed in _NEEDED_SECTIONS.items()
        if not needed or any(section in sections for section in needed)
    )


_NEEDED_SECTIONS: dict[AlternativeName, tuple[str, ...]] = {
    "as is": (),
    "bigger boiler": ("new_boiler",),
    "further boiler": ("new_boiler",),
    "storage": ("vessel",),
    "free choice": ("new_boiler", "vessel"),
}
