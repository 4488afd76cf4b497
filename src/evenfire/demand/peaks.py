"""Peaks of a record above a boiler capacity, and how much of them the logging interval hides."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from evenfire.demand.series import DemandRecord, FloatArray
from evenfire.errors import Problem, RecordError

LOOKED_AT = 20
"""Highest peaks whose length is measured."""
LONGEST_STEP_S = 3600.0
FEW_STEPS = 4.0
"""Length of peaks in steps below which the logging interval hides a part of them."""
ROUNDING = 1e-9
"""Flow this close to a capacity is the capacity in other units [1]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Peak:
    """One stretch of demand above a capacity."""

    first_step: int
    last_step: int
    """Both ends included."""
    duration_s: float
    steam_above_kg: float
    """Steam demanded above the capacity [kg]."""
    highest_kg_s: float


@dataclass(frozen=True, slots=True, kw_only=True)
class PeakResolution:
    """How the logging interval compares with the length of the peaks."""

    averaged_s: tuple[float, ...]
    """Averaging intervals: the step, then doubled up to an hour [s]."""
    peak_kg_s: tuple[float, ...]
    """Highest mean flow over each of those intervals, wherever it starts [kg/s]."""
    peak_length_s: float
    """Median time that the highest peaks stay above half their height over the mean [s]."""
    hidden_kg_s: float
    """What a half as long interval could show on top of the peak, estimated [kg/s]."""
    coarse: bool
    """Whether the peaks last less than four steps, so that the record hides a part of them."""


def ranked_peaks(record: DemandRecord, capacity_kg_s: float) -> tuple[Peak, ...]:
    """Stretches of demand above a capacity, those with most steam above it first.

    Use it to see which peaks a boiler capacity leaves and how long they last; sort again by
    ``duration_s`` for the longest. Each stretch ends where demand falls to the capacity, so storage
    that has no time to recharge in between needs more than the largest: see the storage need.

    Parameters
    ----------
    record
        The measured record.
    capacity_kg_s
        Firm boiler capacity [kg/s], not negative.

    Returns
    -------
    tuple of Peak
        All stretches.

    Raises
    ------
    RecordError
        R120 for a negative capacity.

    Examples
    --------
    >>> import datetime as dt
    >>> flow = np.array([1.0, 4.0, 1.0, 3.0, 3.5, 1.0])
    >>> record = DemandRecord(start=dt.datetime(2026, 2, 2), step_s=60.0, flow_kg_s=flow, source="")
    >>> [(peak.first_step, peak.duration_s, peak.steam_above_kg) for peak in ranked_peaks(record, 2.0)]
    [(3, 120.0, 150.0), (1, 60.0, 120.0)]
    """
    if not capacity_kg_s >= 0.0:
        found, allowed = f"found {capacity_kg_s:g} kg/s", "must not be negative"
        where = f"{record.source}: capacity above which peaks count"
        raise RecordError(Problem(code="R120", where=where, found=found, allowed=allowed))
    flow = record.flow_kg_s
    first, after = stretches(flow > capacity_kg_s * (1.0 + ROUNDING))
    if first.size == 0:
        return ()
    above = np.concatenate([[0.0], np.cumsum(np.maximum(flow - capacity_kg_s, 0.0))]) * record.step_s
    steam = above[after] - above[first]
    return tuple(
        Peak(
            first_step=int(first[at]),
            last_step=int(after[at]) - 1,
            duration_s=float(after[at] - first[at]) * record.step_s,
            steam_above_kg=float(steam[at]),
            highest_kg_s=float(flow[first[at] : after[at]].max()),
        )
        for at in np.argsort(-steam, kind="stable")
    )


def peak_resolution(record: DemandRecord) -> PeakResolution:
    """How much of the peaks the logging interval itself may hide.

    Use it before a peak is believed: a mean over 15 minutes says little about a peak of five.

    Parameters
    ----------
    record
        The measured record.

    Returns
    -------
    PeakResolution
        The peak at the step and at longer averages; the length of the peaks; an estimate of what is
        hidden.

    Notes
    -----
    The highest mean over an interval falls as the interval grows. What a half as long interval could
    add is taken as what the step adds over twice the step: an estimate for peaks without a sharp top,
    too high for a record that already resolves its peaks flat, and no bound.

    Examples
    --------
    >>> import datetime as dt
    >>> flow = np.ones(1440)
    >>> flow[600] = 3.0
    >>> record = DemandRecord(start=dt.datetime(2026, 2, 2), step_s=60.0, flow_kg_s=flow, source="")
    >>> found = peak_resolution(record)
    >>> found.averaged_s[:3], found.peak_kg_s[:3], found.hidden_kg_s, found.coarse
    ((60.0, 120.0, 240.0), (3.0, 2.0, 1.5), 1.0, True)
    """
    cumulated = np.concatenate([[0.0], np.cumsum(record.flow_kg_s)])
    averaged, peaks = [record.step_s], [float(record.flow_kg_s.max())]
    steps = 2
    while steps < cumulated.size and steps * record.step_s <= LONGEST_STEP_S:
        averaged.append(steps * record.step_s)
        peaks.append(float((cumulated[steps:] - cumulated[:-steps]).max()) / steps)
        steps *= 2
    length_s = _peak_length_steps(record.flow_kg_s) * record.step_s
    return PeakResolution(
        averaged_s=tuple(averaged),
        peak_kg_s=tuple(peaks),
        peak_length_s=length_s,
        hidden_kg_s=peaks[0] - peaks[1] if len(peaks) > 1 else 0.0,
        coarse=length_s < FEW_STEPS * record.step_s,
    )


def stretches(chosen: NDArray[np.bool_]) -> tuple[NDArray[np.int64], NDArray[np.int64]]:
    """First positions, and positions after the last, of every run of chosen steps.

    >>> stretches(np.array([True, False, True, True]))
    (array([0, 2]), array([1, 4]))
    """
    edges = np.diff(np.concatenate([[0], chosen.astype(np.int8), [0]]))
    return np.flatnonzero(edges == 1), np.flatnonzero(edges == -1)


def _peak_length_steps(flow: FloatArray) -> float:
    """Median length of the highest peaks at half their height over the mean, in steps."""
    mean = float(flow.mean())
    left = flow.copy()
    lengths = []
    for _ in range(LOOKED_AT):
        top = int(left.argmax())
        half = (flow[top] + mean) / 2.0
        if not left[top] > mean:
            break
        before = np.flatnonzero(flow[:top] <= half)
        beyond = np.flatnonzero(flow[top:] <= half)
        first = int(before[-1]) + 1 if before.size else 0
        after = top + int(beyond[0]) if beyond.size else flow.size
        lengths.append(after - first)
        left[first:after] = mean
    return float(np.median(lengths)) if lengths else float(flow.size)
