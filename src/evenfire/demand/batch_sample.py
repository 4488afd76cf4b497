"""Weeks of demand drawn from a batch schedule, and the week to size for."""

from __future__ import annotations

import datetime as dt
import heapq
import math
from dataclasses import dataclass, field, replace

import numpy as np
from numpy.typing import NDArray

from evenfire.demand.batch_schedule import Batch, BatchSchedule, check_schedule
from evenfire.demand.series import DemandRecord, FloatArray
from evenfire.demand.storage_need import storage_need_at
from evenfire.errors import Notice, Problem, RecordError
from evenfire.units import SECONDS_PER_DAY

DAYS_PER_WEEK = 7
LEAD_IN_DAYS = 7
"""Days run before the first that counts, so that batches begun earlier are under way."""


@dataclass(frozen=True, slots=True, kw_only=True)
class SampledWeeks:
    """Weeks that a schedule could bring."""

    schedule: str
    monday: dt.date
    step_s: float
    flow_kg_s: FloatArray = field(repr=False)
    """Mean demand of each step [kg/s], shape (weeks, steps per week)."""
    dropped_batches: int
    """Batches that waited for a unit beyond the end of their shift and were not made."""


@dataclass(frozen=True, slots=True, kw_only=True)
class WeekStatistics:
    """How the sampled weeks differ; each pair of a quantile and its value."""

    shares: tuple[float, ...]
    peak_kg_s: tuple[float, ...]
    """Highest step of the week [kg/s]."""
    steam_kg: tuple[float, ...]
    """Steam of the week [kg]."""
    storage_kg: tuple[float, ...]
    """Storage need of the week at the stated capacity [kg]."""


def schedule_record(
    schedule: BatchSchedule, start: dt.date, days: int, step_s: float, seed: int
) -> DemandRecord:
    """Demand record that a batch schedule could bring.

    Use it where there is no meter yet. One draw is one possible course; look at many weeks
    (:func:`sampled_weeks`) before a peak is believed.

    Parameters
    ----------
    schedule
        Shifts, batches, resources.
    start
        First day.
    days
        Number of days, positive.
    step_s
        Step of the record [s]; a day is a whole number of steps.
    seed
        The same seed gives the same record.

    Returns
    -------
    DemandRecord
        With a notice (R151) that it was not measured.

    Raises
    ------
    RecordError
        R150 for a schedule that cannot be meant, R152 for a step or number of days that cannot.

    Notes
    -----
    Each shift of each day has random numbers of its own per batch: a change in one batch or day leaves
    the others as they were. Batches waiting for a unit are served in the order in which they are
    ready; one that would start after its shift is not made, and counted. A batch that has begun is
    finished, also after its shift.

    Examples
    --------
    >>> from evenfire.demand.batch_schedule import Phase, Shift
    >>> cook = Batch(
    ...     name="cook",
    ...     phases=(Phase(name="heat", duration_s=1800.0, flow_kg_s=2.0),),
    ...     shifts=("day",),
    ...     starts_s=(0.0, 7200.0),
    ... )
    >>> day = Shift(name="day", weekdays=(0,), start_s=21_600.0, duration_s=28_800.0)
    >>> plan = BatchSchedule(name="kitchen", shifts=(day,), batches=(cook,), base_kg_s=0.1)
    >>> record = schedule_record(plan, dt.date(2026, 2, 2), 1, 3600.0, 1)
    >>> [round(float(flow), 2) for flow in record.flow_kg_s[5:10]]
    [0.1, 1.1, 0.1, 1.1, 0.1]
    """
    flow, dropped = _drawn_flow(schedule, start, days, step_s, seed)
    text = (
        f"This demand was drawn from the batch schedule '{schedule.name}' (seed {seed}), not measured; "
        f"{dropped} batches did not fit into their shifts."
    )
    return DemandRecord(
        start=dt.datetime.combine(start, dt.time()),
        step_s=step_s,
        flow_kg_s=flow,
        source=f"batch schedule '{schedule.name}'",
        notices=(Notice(code="R151", text=text, severity="warning"),),
    )


def record_with_schedule(record: DemandRecord, schedule: BatchSchedule, seed: int) -> DemandRecord:
    """Measured record with the demand of new equipment on top.

    Use it for a site that has a meter and plans to grow. The schedule must hold the new equipment alone.

    Parameters
    ----------
    record
        The measured record; it must start on a whole step after midnight.
    schedule
        The new equipment.
    seed
        The same seed gives the same record.

    Returns
    -------
    DemandRecord
        With the record's notices and R151.

    Raises
    ------
    RecordError
        R150 and R152 as for :func:`schedule_record`.
    """
    midnight = dt.datetime.combine(record.start.date(), dt.time())
    skipped = (record.start - midnight).total_seconds() / record.step_s
    if abs(skipped - round(skipped)) > 1e-9:
        found = f"the record starts at {record.start:%H:%M:%S} with steps of {record.step_s:g} s"
        raise RecordError(_problem(record.source, found, "must start on a whole step after midnight"))
    days = math.ceil((record.flow_kg_s.size + skipped) * record.step_s / SECONDS_PER_DAY)
    added = schedule_record(schedule, midnight.date(), days, record.step_s, seed)
    first = round(skipped)
    return replace(
        record,
        flow_kg_s=record.flow_kg_s + added.flow_kg_s[first : first + record.flow_kg_s.size],
        source=f"{record.source} with {added.source}",
        notices=record.notices + added.notices,
    )


def sampled_weeks(
    schedule: BatchSchedule, monday: dt.date, weeks: int, step_s: float, seed: int
) -> SampledWeeks:
    """Many weeks that a schedule could bring, drawn one after the other.

    Use it for peak statistics and for the week to size for; 200 weeks settle a 95 % quantile to a few
    percent.

    Parameters
    ----------
    schedule
        Shifts, batches, resources.
    monday
        First day; closed dates count from the calendar.
    weeks
        Number of weeks, positive.
    step_s
        Step [s].
    seed
        The same seed gives the same weeks.

    Returns
    -------
    SampledWeeks
        Shape (weeks, steps per week).

    Raises
    ------
    RecordError
        R150 and R152 as for :func:`schedule_record`; R152 also when the first day is no Monday.
    """
    if monday.weekday() != 0:
        raise RecordError(_problem(schedule.name, f"found {monday:%A %Y-%m-%d}", "must be a Monday"))
    flow, dropped = _drawn_flow(schedule, monday, weeks * DAYS_PER_WEEK, step_s, seed)
    return SampledWeeks(
        schedule=schedule.name,
        monday=monday,
        step_s=step_s,
        flow_kg_s=flow.reshape(weeks, -1),
        dropped_batches=dropped,
    )


def week_statistics(
    sample: SampledWeeks, capacity_kg_s: float, shares: tuple[float, ...] = (0.5, 0.95, 1.0)
) -> WeekStatistics:
    """Quantiles of peak, steam and storage need over sampled weeks.

    Parameters
    ----------
    sample
        The weeks.
    capacity_kg_s
        Firm boiler capacity for the storage need [kg/s].
    shares
        Quantiles wanted [1]; 0.95 is exceeded in one week of twenty.

    Returns
    -------
    WeekStatistics
        One value per share.

    Notes
    -----
    The quantile is the value of a drawn week, of rank ceil(share x weeks); nothing is interpolated.
    """
    needs = _week_needs(sample, capacity_kg_s)
    weeks = needs.size
    at = [min(weeks, max(1, math.ceil(share * weeks))) - 1 for share in shares]
    peak = np.sort(sample.flow_kg_s.max(axis=1))
    steam = np.sort(sample.flow_kg_s.sum(axis=1) * sample.step_s)
    need = np.sort(needs)
    return WeekStatistics(
        shares=shares,
        peak_kg_s=tuple(float(peak[rank]) for rank in at),
        steam_kg=tuple(float(steam[rank]) for rank in at),
        storage_kg=tuple(float(need[rank]) for rank in at),
    )


def quantile_week(sample: SampledWeeks, capacity_kg_s: float, share: float) -> DemandRecord:
    """The drawn week that stands at a quantile of storage need: 0.95 for the P95 week.

    Use it as the record to size for where nothing was measured.

    Parameters
    ----------
    sample
        The weeks.
    capacity_kg_s
        Firm boiler capacity at which weeks are ranked [kg/s].
    share
        Quantile [1], above 0 and at most 1.

    Returns
    -------
    DemandRecord
        One week; weeks of equal need are ranked by their peak.

    Raises
    ------
    RecordError
        R152 for a share outside its limits.
    """
    if not 0.0 < share <= 1.0:
        found, allowed = f"found the quantile {share:g}", "must be above 0 and at most 1"
        raise RecordError(_problem(sample.schedule, found, allowed))
    needs = _week_needs(sample, capacity_kg_s)
    order = np.lexsort((sample.flow_kg_s.max(axis=1), needs))
    week = int(order[math.ceil(share * needs.size) - 1])
    monday = sample.monday + dt.timedelta(days=DAYS_PER_WEEK * week)
    text = (
        f"This is week {week + 1} of {needs.size} drawn from the batch schedule '{sample.schedule}': "
        f"{share:.0%} of the weeks need no more storage. It was not measured."
    )
    return DemandRecord(
        start=dt.datetime.combine(monday, dt.time()),
        step_s=sample.step_s,
        flow_kg_s=sample.flow_kg_s[week].copy(),
        source=f"batch schedule '{sample.schedule}'",
        notices=(Notice(code="R151", text=text, severity="warning"),),
    )


def _week_needs(sample: SampledWeeks, capacity_kg_s: float) -> FloatArray:
    pieces = [storage_need_at(flow, sample.step_s, capacity_kg_s) for flow in sample.flow_kg_s]
    return np.array([piece.energy_kg - capacity_kg_s * piece.duration_s for piece in pieces])


def _drawn_flow(
    schedule: BatchSchedule, start: dt.date, days: int, step_s: float, seed: int
) -> tuple[FloatArray, int]:
    """Mean flow of each step and the number of batches not made."""
    check_schedule(schedule)
    per_day = SECONDS_PER_DAY / step_s if step_s > 0.0 else 0.0
    if days < 1 or per_day < 1.0 or abs(per_day - round(per_day)) > 1e-9:
        found = f"found {days} days in steps of {step_s:g} s"
        raise RecordError(_problem(schedule.name, found, "needs at least a day and a step that divides it"))
    moments, changes = [np.zeros(1)], [np.zeros(1)]
    flows, dropped = _batch_flows(schedule, start, days, seed)
    for begin, end, flow in (*_shift_flows(schedule, start, days), *flows):
        moments.append(np.array([begin, end]))
        changes.append(np.array([flow, -flow]))
    moment, change = np.concatenate(moments), np.concatenate(changes)
    order = np.argsort(moment, kind="stable")
    moment, rate = moment[order], np.cumsum(change[order])
    steam = np.concatenate([[0.0], np.cumsum(rate[:-1] * np.diff(moment))])
    edges = np.arange(days * round(per_day) + 1) * step_s
    mean = np.diff(np.interp(edges, moment, steam)) / step_s
    return schedule.base_kg_s + np.maximum(mean, 0.0), dropped


def _shift_flows(schedule: BatchSchedule, start: dt.date, days: int) -> list[tuple[float, float, float]]:
    return [
        (begin, begin + shift.duration_s, shift.flow_kg_s)
        for shift in schedule.shifts
        if shift.flow_kg_s > 0.0
        for begin, _ in _shift_starts(schedule, shift.name, start, days)
    ]


def _shift_starts(schedule: BatchSchedule, name: str, start: dt.date, days: int) -> list[tuple[float, int]]:
    """Starts of a shift after the first midnight [s], and the ordinal of their day."""
    shift = next(shift for shift in schedule.shifts if shift.name == name)
    starts = []
    for day in range(-LEAD_IN_DAYS, days):
        date = start + dt.timedelta(days=day)
        if date.weekday() in shift.weekdays and date not in schedule.closed_dates:
            starts.append((day * SECONDS_PER_DAY + shift.start_s, date.toordinal()))
    return starts


def _batch_flows(
    schedule: BatchSchedule, start: dt.date, days: int, seed: int
) -> tuple[list[tuple[float, float, float]], int]:
    """Every phase of every batch as (begin, end, flow), and the number of batches not made."""
    waiting: list[tuple[float, int, int, float, NDArray[np.float64]]] = []
    for number, batch in enumerate(schedule.batches):
        for order, name in enumerate(batch.shifts):
            shift = next(shift for shift in schedule.shifts if shift.name == name)
            for begin, ordinal in _shift_starts(schedule, name, start, days):
                rng = np.random.default_rng([seed, ordinal, number, order])
                for ready in _ready_times(batch, rng):
                    lasting = _durations(batch, rng)
                    waiting.append((begin + ready, number, len(waiting), begin + shift.duration_s, lasting))
    units = {resource.name: [-math.inf] * resource.units for resource in schedule.resources}
    flows = []
    dropped = 0
    for ready, number, _, shift_end, lasting in sorted(waiting, key=lambda entry: entry[:3]):
        batch = schedule.batches[number]
        begin = ready
        if batch.resource:
            free = units[batch.resource]
            begin = max(ready, free[0])
            if begin >= shift_end:
                dropped += ready >= 0.0
                continue
            held = float(lasting[: batch.held_phases or lasting.size].sum())
            heapq.heapreplace(free, begin + held + batch.turnaround_s)
        for phase, duration in zip(batch.phases, lasting, strict=True):
            if phase.flow_kg_s > 0.0:
                flows.append((begin, begin + float(duration), phase.flow_kg_s))
            begin += float(duration)
    return flows, dropped


def _ready_times(batch: Batch, rng: np.random.Generator) -> list[float]:
    if batch.starts_s:
        return list(batch.starts_s)
    earliest, latest = batch.window_s
    draws = rng.random(batch.batches_per_shift)
    return sorted(earliest + (latest - earliest) * float(draw) for draw in draws)


def _durations(batch: Batch, rng: np.random.Generator) -> FloatArray:
    spread = np.array([phase.duration_spread for phase in batch.phases])
    mean = np.array([phase.duration_s for phase in batch.phases])
    return mean * (1.0 + spread * (2.0 * rng.random(mean.size) - 1.0))


def _problem(where: str, found: str, allowed: str) -> Problem:
    return Problem(code="R152", where=f"batch schedule: {where}", found=found, allowed=allowed)
