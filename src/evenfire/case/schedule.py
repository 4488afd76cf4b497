"""The schedule section of a case as the batch schedule that demand is drawn from."""

from __future__ import annotations

import datetime as dt
from collections.abc import Iterator

from evenfire.case.case import ScheduleRequest, StartLimit
from evenfire.case.schema_schedule import Phase as WrittenPhase
from evenfire.case.schema_schedule import Schedule
from evenfire.case.schema_site import Steam
from evenfire.demand.batch_schedule import (
    Batch,
    BatchSchedule,
    Phase,
    Resource,
    Shift,
    check_schedule,
    heating_steam_kg,
)
from evenfire.errors import OutOfRangeError, Problem, RecordError
from evenfire.units import SECONDS_PER_HOUR, bar_g_to_pa, kg_h_to_kg_s
from evenfire.water import saturation

SECONDS_PER_MINUTE = 60.0
WEEKDAYS = ("mon", "tue", "wed", "thu", "fri", "sat", "sun")
ALONE_KEYS = ("first_monday", "weeks", "size_for_week_percent", "step_seconds")
HEAT_KEYS = ("mass_kg", "heat_capacity_kj_per_kg_k", "temperature_rise_k")


def schedule_request(written: Schedule, steam: Steam, *, alone: bool) -> ScheduleRequest:
    """What is to be drawn, from a schedule section in which nothing is wrong.

    Parameters
    ----------
    written : Schedule
    steam : Steam
        Batches are heated at the process pressure.
    alone : bool
        Whether the case has no record.
    """
    return ScheduleRequest(
        schedule=batch_schedule(written, steam),
        seed=written.seed,
        first_monday=dt.date.fromisoformat(written.first_monday) if alone else None,
        weeks=written.weeks or 0,
        step_s=written.step_seconds or 0.0,
        week_share=None if written.size_for_week_percent is None else written.size_for_week_percent / 100.0,
        start_limits=tuple(
            StartLimit(
                batch=batch.name,
                earlier_s=batch.may_start_earlier_minutes * SECONDS_PER_MINUTE,
                later_s=batch.may_start_later_minutes * SECONDS_PER_MINUTE,
            )
            for batch in written.batch
            if batch.may_start_earlier_minutes or batch.may_start_later_minutes
        ),
    )


def batch_schedule(written: Schedule, steam: Steam) -> BatchSchedule:
    """The schedule in SI."""
    return BatchSchedule(
        name=written.name,
        shifts=tuple(
            Shift(
                name=shift.name,
                weekdays=tuple(WEEKDAYS.index(day) for day in shift.weekdays),
                start_s=_clock_s(shift.start),
                duration_s=shift.hours * SECONDS_PER_HOUR,
                flow_kg_s=kg_h_to_kg_s(shift.flow_kg_h),
            )
            for shift in written.shift
        ),
        resources=tuple(Resource(name=each.name, units=each.units) for each in written.resource),
        batches=tuple(
            Batch(
                name=batch.name,
                phases=tuple(_phase(phase, steam) for phase in batch.phases),
                shifts=batch.shifts,
                starts_s=tuple(start * SECONDS_PER_MINUTE for start in batch.starts_minutes),
                batches_per_shift=batch.batches_per_shift,
                window_s=(
                    batch.earliest_start_minutes * SECONDS_PER_MINUTE,
                    batch.latest_start_minutes * SECONDS_PER_MINUTE,
                ),
                resource=batch.resource,
                held_phases=batch.held_phases,
                turnaround_s=batch.turnaround_minutes * SECONDS_PER_MINUTE,
            )
            for batch in written.batch
        ),
        base_kg_s=kg_h_to_kg_s(written.base_kg_h),
        closed_dates=tuple(dt.date.fromisoformat(date) for date in written.closed_dates),
    )


def schedule_problems(
    written: Schedule | None, steam: Steam | None, file: str, *, alone: bool
) -> Iterator[Problem]:
    """What cannot be meant in a schedule section: C141, C142, and R150 for the schedule as a whole."""
    if written is None:
        return
    place = f"{file}: schedule"
    found = [*_key_problems(written, place, alone=alone), *_phase_problems(written, place)]
    yield from found
    if found or steam is None:
        return
    try:
        check_schedule(batch_schedule(written, steam))
    except (RecordError, OutOfRangeError) as refused:
        yield from refused.problems


def _key_problems(written: Schedule, place: str, *, alone: bool) -> Iterator[Problem]:
    for key in ALONE_KEYS:
        stated = getattr(written, key) not in (None, "")
        if stated and not alone:
            yield Problem(
                code="C141",
                where=f"{place}.{key}",
                found="stated beside a [record]",
                allowed="leave it out: the schedule is drawn on top of the record, step by step",
            )
        if alone and not stated and key != "size_for_week_percent":
            yield Problem(
                code="C104",
                where=f"{place}.{key}",
                found="missing",
                allowed="state it: without a [record] the schedule alone makes the demand",
            )
    dates = [("closed_dates", date) for date in written.closed_dates]
    if written.first_monday:
        dates.append(("first_monday", written.first_monday))
    for key, text in dates:
        try:
            date = dt.date.fromisoformat(text)
        except ValueError:
            allowed = "must be a date as '2026-02-02'"
            yield Problem(code="C141", where=f"{place}.{key}", found=f"found '{text}'", allowed=allowed)
            continue
        if key == "first_monday" and date.weekday() != 0:
            found = f"{text} is a {date:%A}"
            yield Problem(code="C141", where=f"{place}.{key}", found=found, allowed="must be a Monday")
    for batch in written.batch:
        if (batch.may_start_earlier_minutes or batch.may_start_later_minutes) and not batch.starts_minutes:
            yield Problem(
                code="C142",
                where=f"{place}: batch '{batch.name}'",
                found="may start earlier or later, but has no fixed starts",
                allowed="give starts_minutes, or leave the limits out",
            )


def _phase_problems(written: Schedule, place: str) -> Iterator[Problem]:
    for batch in written.batch:
        for phase in batch.phases:
            ways = [key for key in ("flow_kg_h", "steam_kg", "mass_kg") if getattr(phase, key) is not None]
            stated = [key for key in HEAT_KEYS if getattr(phase, key) is not None]
            if len(ways) == 1 and (ways == ["mass_kg"]) == bool(stated) and len(stated) in (0, 3):
                continue
            yield Problem(
                code="C141",
                where=f"{place}: batch '{batch.name}', phase '{phase.name}'",
                found=f"found {', '.join(dict.fromkeys(ways + stated)) or 'no steam'}",
                allowed=f"give flow_kg_h, or steam_kg, or all of {', '.join(HEAT_KEYS)}",
            )


def _phase(written: WrittenPhase, steam: Steam) -> Phase:
    duration_s = written.minutes * SECONDS_PER_MINUTE
    if written.flow_kg_h is not None:
        flow_kg_s = kg_h_to_kg_s(written.flow_kg_h)
    elif written.steam_kg is not None:
        flow_kg_s = written.steam_kg / duration_s
    else:
        state = saturation(bar_g_to_pa(steam.process_pressure_bar_g))
        flow_kg_s = (
            heating_steam_kg(
                written.mass_kg or 0.0,
                (written.heat_capacity_kj_per_kg_k or 0.0) * 1000.0,
                written.temperature_rise_k or 0.0,
                float(state.enthalpy_vapour_j_kg) - float(state.enthalpy_liquid_j_kg),
                written.heat_loss_percent / 100.0,
            )
            / duration_s
        )
    return Phase(
        name=written.name,
        duration_s=duration_s,
        flow_kg_s=flow_kg_s,
        duration_spread=written.spread_percent / 100.0,
    )


def _clock_s(text: str) -> float:
    hours, minutes = text.split(":")
    return int(hours) * SECONDS_PER_HOUR + int(minutes) * SECONDS_PER_MINUTE
