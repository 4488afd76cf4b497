"""The alternative that costs nothing: batches started within their limits so that peaks are least."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from evenfire.appraisal.case_record import scheduled_record
from evenfire.appraisal.plan_inputs import kg_s_to_t_h_array
from evenfire.case.case import Case, ScheduleRequest, StartLimit
from evenfire.demand.batch_schedule import Batch, BatchSchedule
from evenfire.demand.series import DemandRecord
from evenfire.demand.typical_days import complete_days
from evenfire.errors import Notice
from evenfire.plan.outcome import Has
from evenfire.plan.stagger import (
    DayKind,
    ShiftableStart,
    StaggerAim,
    StaggerOutcome,
    StaggerProblem,
    reached,
    staggered_starts,
)
from evenfire.units import SECONDS_PER_DAY, SECONDS_PER_HOUR, kg_s_to_t_h

FloatArray = NDArray[np.float64]

NAME = "staggered starts"
_GAP = 1e-3
_FINEST_S = 300.0
"""People start batches by the five minutes at best."""
_DAYS = 3
"""A batch that begins late in a shift of a day may run into the second day after it."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Staggering:
    """The shifted schedule and what it does to the demand."""

    schedule: BatchSchedule
    record: DemandRecord
    outcome: StaggerOutcome
    today_t_h: float
    """Peak that the model sees with today's starts [t/h]."""
    starts: tuple[ShiftableStart, ...]


def staggering(case: Case) -> Staggering | None:
    """The starts with the least peak, and the demand drawn with them; None where there are none to shift.

    Parameters
    ----------
    case : Case

    Returns
    -------
    Staggering or None
        None also where no choice of starts leaves every batch a unit of its resource.

    Notes
    -----
    Starts are moved in steps of five minutes or more, and one choice holds for every shift and day.
    Batches take their mean durations; whatever is not shifted counts with the highest demand that the drawn
    or measured days of the same shifts have at each step. Batches that are not shifted are taken not to need
    the units of a shared resource.
    """
    request = case.schedule
    if request is None or not request.start_limits:
        return None
    problem = stagger_problem(case, request)
    outcome = staggered_starts(
        problem, StaggerAim.PEAK, gap=max(_GAP, case.plan.gap), time_limit_s=case.plan.time_limit_s
    )
    if outcome.has is Has.NOTHING:
        return None
    schedule = _with_starts(request, problem.starts, outcome.starts_h)
    today = tuple(start.positions_h.index(start.today_h) for start in problem.starts)
    return Staggering(
        schedule=schedule,
        record=scheduled_record(case, request, schedule),
        outcome=outcome,
        today_t_h=reached(problem, StaggerAim.PEAK, today),
        starts=problem.starts,
    )


def stagger_notice(found: Staggering, record: DemandRecord) -> Notice:
    """Every start that moves, and what that does to the peak."""
    shift_start_s = {shift.name: shift.start_s for shift in found.schedule.shifts}
    first_shift = {batch.name: batch.shifts[0] for batch in found.schedule.batches}
    moved = [
        f"“{start.group}” {_clock(start.today_h, shift_start_s[first_shift[start.group]])} to "
        f"{_clock(to, shift_start_s[first_shift[start.group]])}"
        for start, to in zip(found.starts, found.outcome.starts_h, strict=True)
        if abs(to - start.today_h) > 1e-9
    ]
    peak, before = (kg_s_to_t_h(float(each.flow_kg_s.max())) for each in (found.record, record))
    value, bound = found.outcome.value, found.outcome.bound
    proven = f"; no choice within the limits brings it below {bound:.2f}" if bound is not None else ""
    text = (
        f"{NAME}: {'; '.join(moved) if moved else 'no start need move'}. With mean durations the "
        f"peak falls from {found.today_t_h:.2f} to {value:.2f} t/h{proven}. As drawn it falls from "
        f"{before:.2f} to {peak:.2f} t/h"
    )
    return Notice(code="N204", text=text)


def stagger_problem(case: Case, request: ScheduleRequest) -> StaggerProblem:
    """What may be shifted, on which kinds of days, and what else the site takes on them."""
    schedule = request.schedule
    limits = {limit.batch: limit for limit in request.start_limits}
    others = replace(
        schedule,
        batches=tuple(
            replace(batch, phases=tuple(replace(phase, flow_kg_s=0.0) for phase in batch.phases))
            if batch.name in limits
            else batch
            for batch in schedule.batches
        ),
    )
    # Every drawn week counts here, also where the demand to size for is a single one of them.
    drawn = scheduled_record(case, replace(request, week_share=None), others)
    step_s = _step_s(case.plan.step_s, drawn.step_s)
    rest = complete_days(drawn, step_s)
    shifts = frozenset(name for batch in schedule.batches if batch.name in limits for name in batch.shifts)
    kinds: dict[frozenset[tuple[str, int]], FloatArray] = {}
    for date, flow in zip(rest.dates, rest.flow_kg_s, strict=True):
        running = _running(schedule, shifts, date)
        kinds[running] = np.maximum(kinds[running], flow) if running in kinds else flow
    return StaggerProblem(
        step_h=step_s / SECONDS_PER_HOUR,
        starts=tuple(
            start
            for batch in schedule.batches
            if batch.name in limits
            for start in _starts(schedule, batch, limits[batch.name], step_s)
        ),
        days=tuple(
            DayKind(running=running, other_t_h=kg_s_to_t_h_array(flow)) for running, flow in kinds.items()
        ),
        units={resource.name: resource.units for resource in schedule.resources},
        capacity_t_h=kg_s_to_t_h(sum(offer.spec.rated_kg_s for offer in case.boilers if offer.existing)),
    )


def _step_s(plan_s: float, record_s: float) -> float:
    """The plan's step, or the part of it nearest to five minutes from above that the record resolves [s]."""
    counts = range(1, max(1, int(plan_s // max(record_s, _FINEST_S))) + 1)
    return min(plan_s / count for count in counts if (plan_s / count) % record_s == 0.0)


def _running(schedule: BatchSchedule, names: frozenset[str], date: dt.date) -> frozenset[tuple[str, int]]:
    """Shifts that start on a date or on the days before it, with how long ago."""
    return frozenset(
        (shift.name, lag)
        for shift in schedule.shifts
        if shift.name in names
        for lag in range(_DAYS)
        if (date - dt.timedelta(days=lag)).weekday() in shift.weekdays
        and date - dt.timedelta(days=lag) not in schedule.closed_dates
    )


def _starts(
    schedule: BatchSchedule, batch: Batch, limit: StartLimit, step_s: float
) -> tuple[ShiftableStart, ...]:
    shifts = [shift for shift in schedule.shifts if shift.name in batch.shifts]
    last_s = min(shift.duration_s for shift in shifts)
    durations = [phase.duration_s for phase in batch.phases]
    flows = [phase.flow_kg_s for phase in batch.phases]
    held_s = sum(durations[: batch.held_phases or len(durations)]) + batch.turnaround_s
    starts = []
    for today_s in sorted(batch.starts_s):
        counts = range(-int(limit.earlier_s // step_s), int(limit.later_s // step_s) + 1)
        positions = [today_s + count * step_s for count in counts]
        positions = [position for position in positions if 0.0 <= position < last_s]
        starts.append(
            ShiftableStart(
                group=batch.name,
                today_h=today_s / SECONDS_PER_HOUR,
                positions_h=tuple(position / SECONDS_PER_HOUR for position in positions),
                load_t_h={
                    shift.name: kg_s_to_t_h_array(
                        np.array(
                            [_mean_flow(shift.start_s + at, durations, flows, step_s) for at in positions]
                        )
                    )
                    for shift in shifts
                },
                resource=batch.resource,
                held={
                    shift.name: np.array(
                        [
                            np.ceil(_mean_flow(shift.start_s + at, [held_s], [1.0], step_s) - 1e-9)
                            for at in positions
                        ]
                    )
                    for shift in shifts
                },
            )
        )
    return tuple(starts)


def _mean_flow(begin_s: float, durations: list[float], flows: list[float], step_s: float) -> FloatArray:
    """Mean flow of each step of three days [kg/s] of phases that begin at a moment."""
    moments = begin_s + np.concatenate([[0.0], np.cumsum(durations)])
    steam = np.concatenate([[0.0], np.cumsum(np.array(durations) * np.array(flows))])
    edges = np.arange(round(_DAYS * SECONDS_PER_DAY / step_s) + 1) * step_s
    mean: FloatArray = np.diff(np.interp(edges, moments, steam)) / step_s
    return mean


def _with_starts(
    request: ScheduleRequest, starts: tuple[ShiftableStart, ...], chosen_h: tuple[float, ...]
) -> BatchSchedule:
    new: dict[str, list[float]] = {}
    for start, at in zip(starts, chosen_h, strict=True):
        new.setdefault(start.group, []).append(at * SECONDS_PER_HOUR)
    return replace(
        request.schedule,
        batches=tuple(
            replace(batch, starts_s=tuple(sorted(new[batch.name]))) if batch.name in new else batch
            for batch in request.schedule.batches
        ),
    )


def _clock(after_h: float, shift_start_s: float) -> str:
    minutes = round((after_h * SECONDS_PER_HOUR + shift_start_s) / 60.0) % 1440
    return f"{minutes // 60:02d}:{minutes % 60:02d}"
