"""Checks that need several keys of a case at once: what each key allows alone is in the schema."""

from __future__ import annotations

from collections import Counter
from collections.abc import Collection, Iterator

from evenfire.case.checks_boiler import boiler_problems, catalogue_problems
from evenfire.case.checks_steam import boiling_problems, flooding_problems, steam_problems
from evenfire.case.draft import Draft
from evenfire.case.record import record_format
from evenfire.case.risk import risk_problems
from evenfire.case.schedule import schedule_problems
from evenfire.case.schema_money import AlternativeName
from evenfire.case.schema_record import Record
from evenfire.case.schema_schedule import Schedule
from evenfire.case.schema_site import Steam
from evenfire.demand.record_format import format_problems
from evenfire.errors import Problem

SHIFTABLE = "schedule.batch.may_start_later_minutes"
"""Stands for a [schedule] with starts that may be shifted."""


def draft_problems(draft: Draft) -> list[Problem]:
    """Every defect between keys of a case that can be seen in the sections that were read."""
    return [
        problem
        for check in (
            _record_problems,
            _schedule_problems,
            steam_problems,
            boiler_problems,
            catalogue_problems,
            _fuel_problems,
            _vessel_problems,
            _window_problems,
            flooding_problems,
            _plan_problems,
            risk_problems,
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
    steam = draft.steam
    if steam is None or list(steam_problems(draft)):
        return
    found = list(_deaerator_problems(record, steam, f"{draft.file}: record.deaerator_inlet_temperature_degc"))
    yield from found
    if not found:
        yield from format_problems(record_format(record, steam)[0], f"{draft.file}: record")


def _schedule_problems(draft: Draft) -> Iterator[Problem]:
    steam = None if list(steam_problems(draft)) else draft.steam
    yield from schedule_problems(draft.schedule, steam, draft.file, alone="record" not in draft.sections)


def _deaerator_problems(record: Record, steam: Steam, where: str) -> Iterator[Problem]:
    """A deaerator that cools its water, or whose steam the meter cannot have missed."""
    inlet_degc = record.deaerator_inlet_temperature_degc
    if inlet_degc is None:
        return
    if inlet_degc > steam.feedwater_temperature_degc:
        yield Problem(
            code="C136",
            where=where,
            found=f"found {inlet_degc:g} degC",
            allowed="must not be above steam.feedwater_temperature_degc,"
            f" {steam.feedwater_temperature_degc:g} degC: a deaerator heats its water",
        )
    if record.heat_meter is not None and record.heat_meter.boiler_efficiency_percent is not None:
        yield Problem(
            code="C136",
            where=where,
            found="stated beside a fuel meter",
            allowed="leave it out: a fuel meter counts the fuel of all steam made, the deaerator's included",
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
        yield from boiling_problems(
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
    sections = draft.sections
    if draft.schedule is not None and starts_shift(draft.schedule):
        sections |= {SHIFTABLE}
    alternatives = plan.alternatives or possible_alternatives(sections)
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
        if name not in possible_alternatives(sections):
            needed = " or ".join(f"[{section}]" for section in _NEEDED_SECTIONS[name])
            yield Problem(
                code="C126",
                where=f"{place}.alternatives",
                found=f"'{name}' needs {needed}, which the case does not have",
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


def starts_shift(schedule: Schedule) -> bool:
    """Whether a schedule has starts that may be put earlier or later."""
    return any(batch.may_start_earlier_minutes or batch.may_start_later_minutes for batch in schedule.batch)


def possible_alternatives(sections: Collection[str]) -> tuple[AlternativeName, ...]:
    """Every alternative for which a case has one of the sections it needs, in the usual order."""
    return tuple(
        name
        for name, needed in _NEEDED_SECTIONS.items()
        if not needed or any(section in sections for section in needed)
    )


_NEEDED_SECTIONS: dict[AlternativeName, tuple[str, ...]] = {
    "as is": (),
    "staggered starts": (SHIFTABLE,),
    "bigger boiler": ("new_boiler",),
    "further boiler": ("new_boiler",),
    "storage": ("vessel",),
    "free choice": ("new_boiler", "vessel"),
}
