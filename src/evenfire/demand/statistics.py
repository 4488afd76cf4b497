"""Figures that describe a record: how much, how peaky, how long at which load."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np

from evenfire.demand.series import DemandRecord, FloatArray
from evenfire.errors import Problem, RecordError


@dataclass(frozen=True, slots=True, kw_only=True)
class DemandStatistics:
    """What a record holds, over its whole length and at its own step."""

    days: float
    steam_kg: float
    """Steam of the whole record [kg]."""
    mean_kg_s: float
    lowest_kg_s: float
    peak_kg_s: float
    load_factor: float
    """Mean over peak [1]."""
    steepest_rise_kg_s2: float
    """Largest rise from one step to the next, per second of the step [kg/s per s]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class LoadDurationCurve:
    """For how large a share of the record demand is at least so high."""

    share: FloatArray = field(repr=False)
    """Share of the record [1], rising from 0 to 1, shape (points,)."""
    flow_kg_s: FloatArray = field(repr=False)
    """Demand reached or exceeded during that share [kg/s], falling from the peak, shape (points,)."""


def demand_statistics(record: DemandRecord) -> DemandStatistics:
    """Mean, peak, load factor and steepest rise of a record.

    Use it for the first line of any report. ``load factor = mean / peak``.

    Parameters
    ----------
    record
        The measured record, at least one step.

    Returns
    -------
    DemandStatistics
        In SI units.

    Notes
    -----
    A step is a mean over its length, so the true peak and the true rise are at least as large.

    Examples
    --------
    >>> import datetime as dt
    >>> flow = np.array([1.0, 3.0, 2.0, 2.0])
    >>> record = DemandRecord(start=dt.datetime(2026, 2, 2), step_s=60.0, flow_kg_s=flow, source="")
    >>> found = demand_statistics(record)
    >>> found.steam_kg, found.mean_kg_s, found.peak_kg_s, round(found.load_factor, 4)
    (480.0, 2.0, 3.0, 0.6667)
    """
    flow = record.flow_kg_s
    mean, peak = float(flow.mean()), float(flow.max())
    rise = float(np.diff(flow).max(initial=0.0)) / record.step_s
    return DemandStatistics(
        days=record.days,
        steam_kg=float(flow.sum()) * record.step_s,
        mean_kg_s=mean,
        lowest_kg_s=float(flow.min()),
        peak_kg_s=peak,
        load_factor=mean / peak if peak > 0.0 else 0.0,
        steepest_rise_kg_s2=rise,
    )


def load_duration_curve(record: DemandRecord, points: int) -> LoadDurationCurve:
    """Load duration curve of a record, thinned for a plot.

    Use it to draw; the points lie on the true curve, its peak and its lowest value included, and are
    closer together near the peak, where the curve is steep.

    Parameters
    ----------
    record
        The measured record.
    points
        Number of points, at least 2; fewer come back when the record has fewer steps.

    Returns
    -------
    LoadDurationCurve
        Shape (points,).

    Raises
    ------
    RecordError
        R118 when fewer than two points are asked for.

    Notes
    -----
    The k-th highest of n steps stands at the share (k - 1) / (n - 1).

    Examples
    --------
    >>> import datetime as dt
    >>> flow = np.array([1.0, 3.0, 2.0])
    >>> record = DemandRecord(start=dt.datetime(2026, 2, 2), step_s=60.0, flow_kg_s=flow, source="")
    >>> load_duration_curve(record, 3).flow_kg_s.tolist()
    [3.0, 2.0, 1.0]
    """
    if points < 2:
        raise RecordError(
            Problem(
                code="R118",
                where=f"{record.source}: load duration curve",
                found=f"found {points} points",
                allowed="ask for at least 2",
            )
        )
    falling = np.sort(record.flow_kg_s)[::-1]
    last = falling.size - 1
    if points > last:
        at = np.arange(falling.size)
    else:
        at = np.unique(np.round(last * np.linspace(0.0, 1.0, points) ** 2).astype(np.int64))
    return LoadDurationCurve(share=at / max(last, 1), flow_kg_s=falling[at])
