"""Weighted real days that stand for the record where dispatch is optimised."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from evenfire.demand.series import DemandRecord, FloatArray, TypicalDay, TypicalDays
from evenfire.demand.storage_need import storage_need_at
from evenfire.errors import Problem, RecordError
from evenfire.units import DAYS_PER_YEAR, SECONDS_PER_DAY

KINDS = ("workday", "saturday", "sunday")


@dataclass(frozen=True, slots=True, kw_only=True)
class Days:
    """Complete calendar days of a record."""

    dates: tuple[dt.date, ...]
    raw_kg_s: FloatArray
    """Shape (days, raw steps per day)."""
    flow_kg_s: FloatArray
    """Shape (days, steps per day)."""


def typical_days(record: DemandRecord, step_s: float) -> TypicalDays:
    """Weighted real days of a record: workday, Saturday, Sunday and the peak days.

    Use them where the whole record is too long, to optimise dispatch; sizes must still be checked
    against the whole record. The peak day holds the highest step of the record; a second one is kept
    when another day needs more storage at a capacity halfway between mean and peak. Peak days stand
    for themselves; of the remaining days of a kind, the one stands for all that is closest to their
    mean in steam and in load duration curve.

    Parameters
    ----------
    record
        The measured record.
    step_s
        Step of the typical days [s]: a whole multiple of the record's step that divides a day.

    Returns
    -------
    TypicalDays
        Weights add up to 365 days a year; what the days get wrong is stated with them.

    Raises
    ------
    RecordError
        R116 when ``step_s`` does not fit, R117 when the record holds no complete calendar day.

    Notes
    -----
    Values within a step are averaged, which lowers short peaks: ``peak_error`` says by how much.
    Distance between a day d and the mean day of its kind, both with flows sorted:
    ``|sum(d) - sum(mean)| + sum|d - mean|``.

    Examples
    --------
    >>> flow = np.tile(np.repeat([1.0, 3.0, 1.0], 8), 14)
    >>> record = DemandRecord(start=dt.datetime(2026, 2, 2), step_s=3600.0, flow_kg_s=flow, source="")
    >>> days = typical_days(record, 3600.0)
    >>> [(day.name, round(day.days_per_year, 1)) for day in days.days]
    [('workday', 234.6), ('saturday', 52.1), ('sunday', 52.1), ('peak day', 26.1)]
    """
    days = complete_days(record, step_s)
    peaks = peak_days(record, days)
    day_weight = DAYS_PER_YEAR / len(days.dates)
    chosen: list[TypicalDay] = []
    assigned = [0] * len(days.dates)
    for kind in KINDS:
        members = [at for at, date in enumerate(days.dates) if at not in peaks and day_kind(date) == kind]
        if members:
            at = members[nearest_to_mean(days.flow_kg_s[members])]
            for member in members:
                assigned[member] = len(chosen)
            chosen.append(typical_day(kind, at, days, day_weight * len(members)))
    for number, at in enumerate(peaks, start=1):
        name = "peak day" if len(peaks) == 1 else f"peak day {number}"
        assigned[at] = len(chosen)
        chosen.append(typical_day(name, at, days, day_weight))
    return with_errors(record, step_s, tuple(chosen), tuple(assigned))


def day_kind(date: dt.date) -> str:
    """``workday``, ``saturday`` or ``sunday``.

    >>> day_kind(dt.date(2026, 2, 7))
    'saturday'
    """
    return KINDS[max(0, date.weekday() - 4)]


def complete_days(record: DemandRecord, step_s: float) -> Days:
    """Complete calendar days of a record, raw and averaged to a step (R116, R117 as for typical days)."""
    per_day = SECONDS_PER_DAY / record.step_s
    merged = step_s / record.step_s
    steps = SECONDS_PER_DAY / step_s if step_s > 0.0 else 0.0
    if min(per_day, merged, steps) < 1.0 or any(abs(x - round(x)) > 1e-9 for x in (per_day, merged, steps)):
        raise RecordError(
            Problem(
                code="R116",
                where=f"{record.source}: step of the typical days",
                found=f"found {step_s:g} s for a record with steps of {record.step_s:g} s",
                allowed="must be a whole multiple of the record's step and divide a day",
            )
        )
    midnight = dt.datetime.combine(record.start.date(), dt.time())
    if midnight < record.start:
        midnight += dt.timedelta(days=1)
    skipped = int(np.ceil((midnight - record.start).total_seconds() / record.step_s - 1e-9))
    count = max(0, (record.flow_kg_s.size - skipped) // round(per_day))
    if count == 0:
        raise RecordError(
            Problem(
                code="R117",
                where=f"{record.source}: length",
                found=f"found no complete calendar day in {record.days:.2f} days",
                allowed="give a record that runs from midnight to midnight at least once",
            )
        )
    raw = record.flow_kg_s[skipped : skipped + count * round(per_day)].reshape(count, -1)
    return Days(
        dates=tuple(midnight.date() + dt.timedelta(days=day) for day in range(count)),
        raw_kg_s=raw,
        flow_kg_s=raw.reshape(count, round(steps), -1).mean(axis=2),
    )


def peak_days(record: DemandRecord, days: Days) -> list[int]:
    """Position of the day with the highest step and, if another, of the day that needs most storage."""
    highest = int(days.raw_kg_s.max(axis=1).argmax())
    capacity = (float(record.flow_kg_s.mean()) + float(record.flow_kg_s.max())) / 2.0
    need = np.zeros(len(days.dates))
    for at, flow in enumerate(days.raw_kg_s):
        piece = storage_need_at(flow, record.step_s, capacity)
        need[at] = piece.energy_kg - capacity * piece.duration_s
    neediest = int(need.argmax())
    return [highest] if need[neediest] <= need[highest] else [highest, neediest]


def nearest_to_mean(flow: FloatArray) -> int:
    """Position of the day closest to the mean day in steam and load duration curve; shape (days, steps)."""
    return int(distances_to_mean(flow).argmin())


def distances_to_mean(flow: FloatArray) -> FloatArray:
    """Distance of each day to the mean day in steam and load duration curve; shape (days, steps)."""
    curves = np.sort(flow, axis=1)
    away = curves - curves.mean(axis=0)
    distance: FloatArray = np.abs(away.sum(axis=1)) + np.abs(away).sum(axis=1)
    return distance


def typical_day(name: str, at: int, days: Days, days_per_year: float) -> TypicalDay:
    """One day of the table with its name and weight."""
    return TypicalDay(
        name=name, date=days.dates[at], days_per_year=days_per_year, flow_kg_s=days.flow_kg_s[at].copy()
    )


def with_errors(
    record: DemandRecord, step_s: float, days: tuple[TypicalDay, ...], assigned: tuple[int, ...]
) -> TypicalDays:
    """Typical days with what they get wrong against the raw record."""
    flow = np.concatenate([day.flow_kg_s for day in days])
    weight = np.concatenate(
        [np.full(day.flow_kg_s.size, day.days_per_year / day.flow_kg_s.size) for day in days]
    )
    mean = float(record.flow_kg_s.mean())
    peak = float(record.flow_kg_s.max())
    return TypicalDays(
        step_s=step_s,
        days=days,
        assigned=assigned,
        energy_error=float(np.average(flow, weights=weight)) / mean - 1.0,
        duration_curve_error=curve_distance(flow, weight, record.flow_kg_s) / mean,
        peak_error=float(flow.max()) / peak - 1.0,
    )


def curve_distance(flow: FloatArray, weight: NDArray[np.float64], record_flow: FloatArray) -> float:
    """Mean absolute difference of two load duration curves: the area between their distributions."""
    order = np.argsort(flow)
    levels = np.unique(np.concatenate([flow, record_flow]))
    below = np.concatenate([[0.0], np.cumsum(weight[order])]) / weight.sum()
    ours = below[np.searchsorted(flow[order], levels[:-1], side="right")]
    theirs = np.searchsorted(np.sort(record_flow), levels[:-1], side="right") / record_flow.size
    return float(np.sum(np.abs(ours - theirs) * np.diff(levels)))
