"""Signs in a record that the meter, not the plant, made a value."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from evenfire.demand.peaks import stretches
from evenfire.demand.series import DemandRecord, FloatArray

SPIKE_ABOVE = 1.2
"""A single step counts as a spike above this multiple of what lasted two steps."""
DROPOUT_BELOW = 0.05
"""A single step counts as a dropout below this share of the lower of its neighbours."""
FLAT_LEAST_S = 3.0 * 3600.0
FLAT_LEAST_STEPS = 12
FLAT_LEAST_CHANGES = 50.0
"""A steady flow of fewer smallest changes than this looks flat on a meter so coarse."""
PILED_UP = 5.0
"""How many times more often than the levels below it a top of range is met."""
BAND = 0.95
"""Levels from this share of the highest up are compared with it."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Stretch:
    """Consecutive steps of a record."""

    first_step: int
    last_step: int
    """Both ends included."""
    flow_kg_s: float
    """Value of the steps; the extreme one where they differ [kg/s]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Saturation:
    """A top of range at which peaks were cut off, and what they could have been."""

    top_kg_s: float
    stretches: tuple[Stretch, ...]
    """Every stretch at the top of range."""
    hours: float
    """Time at the top of range [h]."""
    likely_peak_kg_s: float | None
    """Median of the highest peak that the uncut peaks suggest [kg/s]; None when too few are uncut."""
    high_peak_kg_s: float | None
    """Peak that would be passed with a chance of one in ten [kg/s]; None when too few are uncut."""


def spikes(record: DemandRecord) -> tuple[Stretch, ...]:
    """Single steps that stand more than 20 % above any flow that lasted two steps.

    Use it to ask the site about a few values; a short peak may be real, so nothing is removed.

    Examples
    --------
    >>> import datetime as dt
    >>> flow = np.array([1.0, 2.0, 2.2, 1.0, 9.0, 1.0])
    >>> record = DemandRecord(start=dt.datetime(2026, 2, 2), step_s=60.0, flow_kg_s=flow, source="")
    >>> [(spike.first_step, spike.flow_kg_s) for spike in spikes(record)]
    [(4, 9.0)]
    """
    flow = record.flow_kg_s
    lasting = float(np.minimum(flow[:-1], flow[1:]).max(initial=0.0))
    return _single_steps(flow, flow > SPIKE_ABOVE * lasting)


def dropouts(record: DemandRecord) -> tuple[Stretch, ...]:
    """Single steps below 5 % of both neighbours, each of which is at least the mean.

    Use it to find values that a logger lost and wrote as zero.

    Examples
    --------
    >>> import datetime as dt
    >>> flow = np.array([1.0, 2.0, 0.0, 2.0, 0.0, 0.0])
    >>> record = DemandRecord(start=dt.datetime(2026, 2, 2), step_s=60.0, flow_kg_s=flow, source="")
    >>> [drop.first_step for drop in dropouts(record)]
    [2]
    """
    flow = record.flow_kg_s
    if flow.size < 3:
        return ()
    lower = np.minimum(flow[:-2], flow[2:])
    lost = np.zeros(flow.size, dtype=np.bool_)
    lost[1:-1] = (flow[1:-1] < DROPOUT_BELOW * lower) & (lower >= flow.mean())
    return _single_steps(flow, lost)


def flat_lines(record: DemandRecord) -> tuple[Stretch, ...]:
    """Stretches of exactly one positive value for three hours and twelve steps or more.

    Use it to find a sensor that hangs. Zero flow and filled gaps are left out, and so is flow below 50
    times the smallest change that the record shows, which on so coarse a meter is steady by itself.

    Examples
    --------
    >>> import datetime as dt
    >>> flow = np.concatenate([np.arange(12.0) / 10, np.full(16, 5.0), np.arange(12.0)])
    >>> record = DemandRecord(start=dt.datetime(2026, 2, 2), step_s=900.0, flow_kg_s=flow, source="")
    >>> [(flat.first_step, flat.last_step) for flat in flat_lines(record)]
    [(12, 27)]
    """
    flow = record.flow_kg_s
    measured = measured_steps(record)
    same = (flow[1:] == flow[:-1]) & (flow[1:] > 0.0) & measured[1:] & measured[:-1]
    first, after = stretches(same)
    least = max(FLAT_LEAST_STEPS, math.ceil(FLAT_LEAST_S / record.step_s))
    coarse = FLAT_LEAST_CHANGES * smallest_change(flow)
    return tuple(
        Stretch(first_step=int(one), last_step=int(end), flow_kg_s=float(flow[one]))
        for one, end in zip(first, after, strict=True)
        if end - one + 1 >= least and flow[one] >= coarse
    )


def saturation(record: DemandRecord) -> Saturation | None:
    """Top of range at which the meter cut peaks off, or None when nothing points to one.

    Use it before peaks are believed: a cut peak hides the very thing that storage and boilers are
    sized for. A top of range is taken to be there when the highest value is met at least three times,
    and five times as often as the mean of the values within 5 % below it.

    Parameters
    ----------
    record
        The measured record.

    Returns
    -------
    Saturation or None
        The cut stretches and what the peaks could have been.

    Notes
    -----
    Estimate: peaks are stretches above a threshold u, the level that the record passes in 1 % of its
    time or, if lower, 80 % of the top. Their heights over u are taken as exponential, cut at the top of
    range L: with n uncut peaks of N the mean excess is m = sum(min(height, L) - u) / n, the likelihood
    estimate for censored data. The highest of N such peaks has the median u + m (ln N - ln ln 2) and
    passes u + m (ln N - ln(-ln 0.9)) with a chance of one in ten. At least three uncut peaks are asked for.
    It is a statistical guess about what was not measured; a meter with a larger range is the remedy.

    References
    ----------
    J. F. Lawless, Statistical Models and Methods for Lifetime Data: exponential distribution, type I
    censoring.

    Examples
    --------
    >>> import datetime as dt
    >>> flow = np.minimum(np.tile([1.0, 2.0, 5.0, 9.0, 3.0, 1.0, 6.0, 1.5, 4.0], 40), 8.0)
    >>> record = DemandRecord(start=dt.datetime(2026, 2, 2), step_s=900.0, flow_kg_s=flow, source="")
    >>> found = saturation(record)
    >>> found.top_kg_s, len(found.stretches), found.hours
    (8.0, 40, 10.0)
    """
    flow = record.flow_kg_s
    top = float(flow.max())
    at_top = (flow >= top * (1.0 - 1e-9)) & measured_steps(record)
    near = flow[(flow > BAND * top) & (flow < top * (1.0 - 1e-9))]
    usual = near.size / max(1, np.unique(near).size)
    if top <= 0.0 or at_top.sum() < 3 or at_top.sum() < PILED_UP * usual or at_top.all():
        return None
    first, after = stretches(at_top)
    likely, high = _uncut_peaks(flow, top)
    return Saturation(
        top_kg_s=top,
        stretches=tuple(
            Stretch(first_step=int(one), last_step=int(end) - 1, flow_kg_s=top)
            for one, end in zip(first, after, strict=True)
        ),
        hours=float(at_top.sum()) * record.step_s / 3600.0,
        likely_peak_kg_s=likely,
        high_peak_kg_s=high,
    )


def smallest_change(flow_kg_s: FloatArray) -> float:
    """Smallest difference between two values of a record [kg/s]: the meter's resolution; 0 for one value.

    >>> smallest_change(np.array([1.0, 3.0, 2.5]))
    0.5
    """
    levels = np.unique(flow_kg_s)
    return float(np.diff(levels).min()) if levels.size > 1 else 0.0


def measured_steps(record: DemandRecord) -> NDArray[np.bool_]:
    """Whether each step was measured rather than filled, shape (steps,)."""
    measured = np.ones(record.flow_kg_s.size, dtype=np.bool_)
    for gap in record.gaps:
        measured[gap.first_step : gap.last_step + 1] = False
    return measured


def _single_steps(flow: FloatArray, chosen: NDArray[np.bool_]) -> tuple[Stretch, ...]:
    return tuple(
        Stretch(first_step=int(at), last_step=int(at), flow_kg_s=float(flow[at]))
        for at in np.flatnonzero(chosen)
    )


def _uncut_peaks(flow: FloatArray, top: float) -> tuple[float | None, float | None]:
    """Median and 90 % quantile of the highest peak, from the peaks that the top of range did not cut."""
    threshold = min(float(np.quantile(flow, 0.99)), 0.8 * top)
    first, after = stretches(flow > threshold)
    heights = np.array([flow[one:end].max() for one, end in zip(first, after, strict=True)])
    uncut = int((heights < top * (1.0 - 1e-9)).sum())
    if uncut < 3:
        return None, None
    mean_excess = float((heights - threshold).sum()) / uncut
    scale = math.log(heights.size)
    likely = threshold + mean_excess * (scale - math.log(math.log(2.0)))
    high = threshold + mean_excess * (scale - math.log(-math.log(0.9)))
    return max(likely, top), max(high, top)
