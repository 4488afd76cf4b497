"""The quality sheet: what a record is worth, in numbers."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field

import numpy as np

from evenfire.demand.peaks import PeakResolution, peak_resolution
from evenfire.demand.sensor_faults import (
    Saturation,
    Stretch,
    dropouts,
    flat_lines,
    measured_steps,
    saturation,
    smallest_change,
    spikes,
)
from evenfire.demand.series import DemandRecord, FloatArray, Gap
from evenfire.errors import Notice
from evenfire.units import kg_s_to_kg_h

IDLE_SHARE_OF_PEAK = 0.01
RAMP_WINDOWS_S = (60.0, 300.0, 900.0)


@dataclass(frozen=True, slots=True, kw_only=True)
class Ramp:
    """Changes of demand within one length of time."""

    within_s: float
    largest_rise_kg_s: float
    usual_rise_kg_s: float
    """Rise passed in 1 % of the record [kg/s]."""
    largest_fall_kg_s: float
    """As a positive number [kg/s]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class QualitySheet:
    """What was measured, what is doubtful, and how well the step resolves the peaks."""

    coverage: float
    """Share of the steps that a meter measured [1]."""
    gaps: tuple[Gap, ...] = field(repr=False)
    longest_gap_s: float
    spikes: tuple[Stretch, ...] = field(repr=False)
    dropouts: tuple[Stretch, ...] = field(repr=False)
    flat_lines: tuple[Stretch, ...] = field(repr=False)
    saturation: Saturation | None = field(repr=False)
    zero_share: float
    """Share of the steps without any flow [1]."""
    idle_share: float
    """Share of the steps below 1 % of the peak, zero included [1]."""
    smallest_change_kg_s: float
    """Smallest difference between two values of the record: the meter's resolution [kg/s]."""
    resolution: PeakResolution
    ramps: tuple[Ramp, ...]
    notices: tuple[Notice, ...]
    """The import's notices, then one for everything found here."""


def record_quality(record: DemandRecord) -> QualitySheet:
    """Quality sheet of a record.

    Use it before anything is computed from a record, and beside every result. Nothing is changed:
    whatever looks wrong is named, with its place, for the site to answer.

    Parameters
    ----------
    record
        The measured record.

    Returns
    -------
    QualitySheet
        Findings and one notice for each kind: R141 coverage, R142 spikes, R143 dropouts, R144 flat
        lines, R145 top of range, R146 coarse step, R147 days of the week without data.

    Examples
    --------
    >>> flow = np.tile(np.repeat([1.0, 3.0, 2.0, 1.5], 24), 7)
    >>> record = DemandRecord(start=dt.datetime(2026, 2, 2), step_s=900.0, flow_kg_s=flow, source="")
    >>> sheet = record_quality(record)
    >>> sheet.coverage, sheet.spikes, [ramp.largest_rise_kg_s for ramp in sheet.ramps]
    (1.0, (), [2.0])
    """
    flow = record.flow_kg_s
    measured = measured_steps(record)
    gap_lengths = [(gap.last_step - gap.first_step + 1) * record.step_s for gap in record.gaps]
    findings = {
        "spikes": spikes(record),
        "dropouts": dropouts(record),
        "flat_lines": flat_lines(record),
    }
    cut = saturation(record)
    resolution = peak_resolution(record)
    coverage = float(measured.mean())
    notices = [*record.notices, *_coverage_notices(record, coverage)]
    notices += _finding_notices(record, findings)
    notices += _cut_notices(record, cut)
    notices += _resolution_notices(record, resolution)
    notices += _weekday_notices(record)
    return QualitySheet(
        coverage=coverage,
        gaps=record.gaps,
        longest_gap_s=max(gap_lengths, default=0.0),
        saturation=cut,
        zero_share=float((flow == 0.0).mean()),
        idle_share=float((flow < IDLE_SHARE_OF_PEAK * flow.max()).mean()),
        smallest_change_kg_s=smallest_change(flow),
        resolution=resolution,
        ramps=_ramps(record),
        notices=tuple(notices),
        **findings,
    )


def weekly_map(record: DemandRecord) -> tuple[FloatArray, FloatArray]:
    """Mean and highest demand of every hour of the week, for a heat map.

    Parameters
    ----------
    record
        The measured record.

    Returns
    -------
    tuple
        Mean and highest flow [kg/s], each of shape (7, 24), Monday and midnight first; NaN for hours
        that the record does not cover.

    Notes
    -----
    A step belongs to the hour in which it starts.

    Examples
    --------
    >>> flow = np.arange(168.0)
    >>> record = DemandRecord(start=dt.datetime(2026, 2, 3), step_s=3600.0, flow_kg_s=flow, source="")
    >>> float(weekly_map(record)[0][1, 0]), float(weekly_map(record)[0][0, 23])
    (0.0, 167.0)
    """
    monday = record.start.weekday() * 86_400.0
    since = (record.start - dt.datetime.combine(record.start.date(), dt.time())).total_seconds()
    seconds = monday + since + np.arange(record.flow_kg_s.size) * record.step_s
    hour = (seconds // 3600.0).astype(np.int64) % 168
    count = np.bincount(hour, minlength=168)
    total = np.bincount(hour, weights=record.flow_kg_s, minlength=168)
    mean = np.full(168, np.nan)
    np.divide(total, count, out=mean, where=count > 0)
    highest = np.full(168, -np.inf)
    np.maximum.at(highest, hour, record.flow_kg_s)
    highest[count == 0] = np.nan
    return mean.reshape(7, 24), highest.reshape(7, 24)


def _ramps(record: DemandRecord) -> tuple[Ramp, ...]:
    flow = record.flow_kg_s
    ramps = []
    for within_s in RAMP_WINDOWS_S:
        steps = round(within_s / record.step_s)
        if steps < 1 or steps >= flow.size:
            continue
        change = flow[steps:] - flow[:-steps]
        ramps.append(
            Ramp(
                within_s=steps * record.step_s,
                largest_rise_kg_s=max(0.0, float(change.max())),
                usual_rise_kg_s=max(0.0, float(np.quantile(change, 0.99))),
                largest_fall_kg_s=max(0.0, -float(change.min())),
            )
        )
    return tuple(ramps)


def _when(record: DemandRecord, step: int) -> str:
    return f"{record.start + dt.timedelta(seconds=step * record.step_s):%Y-%m-%d %H:%M:%S}"


def _coverage_notices(record: DemandRecord, coverage: float) -> list[Notice]:
    if not record.gaps:
        return []
    text = f"A meter measured {coverage:.2%} of the record; {len(record.gaps)} gaps were filled."
    return [Notice(code="R141", text=text, severity="warning" if coverage < 0.98 else "note")]


def _finding_notices(record: DemandRecord, findings: dict[str, tuple[Stretch, ...]]) -> list[Notice]:
    words = {
        "spikes": ("R142", "single steps stand far above anything that lasted two steps"),
        "dropouts": ("R143", "single steps fall to almost nothing between high ones"),
        "flat_lines": ("R144", "stretches of three hours or more hold exactly one value"),
    }
    notices = []
    for kind, found in findings.items():
        if not found:
            continue
        code, meaning = words[kind]
        first = found[0]
        flow = f"{kg_s_to_kg_h(first.flow_kg_s):.0f} kg/h"
        text = f"{len(found)} {meaning}, first {_when(record, first.first_step)} at {flow}; ask the site."
        notices.append(Notice(code=code, text=text, severity="warning"))
    return notices


def _cut_notices(record: DemandRecord, cut: Saturation | None) -> list[Notice]:
    if cut is None:
        return []
    text = (
        f"Demand stands at exactly {kg_s_to_kg_h(cut.top_kg_s):.0f} kg/h for {cut.hours:.2f} h in "
        f"{len(cut.stretches)} stretches, first {_when(record, cut.stretches[0].first_step)}: probably the "
        "meter's top of range, so the true peaks are not known."
    )
    if cut.likely_peak_kg_s is not None and cut.high_peak_kg_s is not None:
        text += (
            f" From the peaks that were not cut the highest was likely about "
            f"{kg_s_to_kg_h(cut.likely_peak_kg_s):.0f} kg/h, with a chance of one in ten above "
            f"{kg_s_to_kg_h(cut.high_peak_kg_s):.0f} kg/h."
        )
    else:
        text += " Too few peaks stayed below it to say what they were."
    return [Notice(code="R145", text=text, severity="warning")]


def _resolution_notices(record: DemandRecord, found: PeakResolution) -> list[Notice]:
    if not found.coarse:
        return []
    text = (
        f"Peaks last about {found.peak_length_s / 60.0:.1f} min and the step is {record.step_s / 60.0:g} "
        "min: means over a step hide part of the peaks. Half the step would show perhaps "
        f"{kg_s_to_kg_h(found.hidden_kg_s):.0f} kg/h more than the "
        f"{kg_s_to_kg_h(found.peak_kg_s[0]):.0f} kg/h measured."
    )
    return [Notice(code="R146", text=text, severity="warning")]


def _weekday_notices(record: DemandRecord) -> list[Notice]:
    if record.days >= 7.0:
        return []
    mean, _ = weekly_map(record)
    names = ("Monday", "Tuesday", "Wednesday", "Thursday", "Friday", "Saturday", "Sunday")
    lacking = [name for name, hours in zip(names, mean, strict=True) if np.isnan(hours).all()]
    if not lacking:
        return []
    text = f"The record holds no {', no '.join(lacking)}; the year is made of the other days."
    return [Notice(code="R147", text=text, severity="warning")]
