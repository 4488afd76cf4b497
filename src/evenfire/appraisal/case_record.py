"""The demand of a case: its record, its batch schedule, or the schedule on top of the record."""

from __future__ import annotations

from dataclasses import replace

from evenfire.case.case import Case, ScheduleRequest
from evenfire.demand.batch_sample import (
    quantile_week,
    record_with_schedule,
    sampled_weeks,
    schedule_record,
    week_statistics,
)
from evenfire.demand.batch_schedule import BatchSchedule
from evenfire.demand.read import demand_record
from evenfire.demand.series import DemandRecord
from evenfire.errors import Notice
from evenfire.units import KG_PER_TONNE, kg_s_to_kg_h

DAYS_PER_WEEK = 7
STATISTICS_WEEKS = 200
"""Weeks drawn to say how peaks differ from week to week."""


def case_record(case: Case) -> DemandRecord:
    """Demand that a case is about, as one regular record.

    Parameters
    ----------
    case
        With a record, a schedule, or both.

    Returns
    -------
    DemandRecord
        What was drawn from a schedule says so in its notices.

    Raises
    ------
    RecordError
        As for :func:`~evenfire.demand.read.demand_record` and
        :func:`~evenfire.demand.batch_sample.schedule_record`.
    """
    if case.schedule is None:
        return _measured(case)
    return scheduled_record(case, case.schedule, case.schedule.schedule)


def scheduled_record(case: Case, request: ScheduleRequest, schedule: BatchSchedule) -> DemandRecord:
    """The case's demand with another schedule in place of its own, drawn in the same way."""
    if request.first_monday is None:
        return record_with_schedule(_measured(case), schedule, request.seed)
    capacity_kg_s = sum(offer.spec.rated_kg_s for offer in case.boilers if offer.existing)
    sample = sampled_weeks(schedule, request.first_monday, STATISTICS_WEEKS, request.step_s, request.seed)
    if request.week_share is None:
        days = DAYS_PER_WEEK * request.weeks
        record = schedule_record(schedule, request.first_monday, days, request.step_s, request.seed)
    else:
        drawn = sampled_weeks(schedule, request.first_monday, request.weeks, request.step_s, request.seed)
        record = quantile_week(drawn, capacity_kg_s, request.week_share)
    found = week_statistics(sample, capacity_kg_s)
    half, most, all_weeks = (
        f"{kg_s_to_kg_h(peak):,.0f} kg/h and {need / KG_PER_TONNE:.2f} t"
        for peak, need in zip(found.peak_kg_s, found.storage_kg, strict=True)
    )
    text = (
        f"Of {STATISTICS_WEEKS} weeks drawn from the schedule half stay within a peak and a storage need at "
        f"today's boilers of {half}, 95 % within {most}, all within {all_weeks}."
    )
    return replace(record, notices=(*record.notices, Notice(code="R153", text=text)))


def _measured(case: Case) -> DemandRecord:
    if case.record_file is None or case.record_format is None:
        raise ValueError("the case has no record")
    return demand_record(case.record_file, case.record_format)
