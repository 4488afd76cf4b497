"""Fill the gaps of a record by a stated rule, and say in numbers what was filled."""

from __future__ import annotations

import datetime as dt

import numpy as np

from evenfire.demand.series import FloatArray, Gap
from evenfire.errors import Notice, Problem, RecordError


def gaps_filled(
    flow: FloatArray, start: dt.datetime, step_s: float, rule: str, largest_gap_s: float, source: str
) -> tuple[FloatArray, tuple[Notice, ...], tuple[Gap, ...]]:
    """Flow with its missing values (NaN) filled by a stated rule, and the notice that says so.

    Use it on a regular series. ``hold`` repeats the last value, ``interpolate`` joins the values on
    both sides by a straight line, ``zero`` takes the plant as off, ``refuse`` fills nothing.

    Parameters
    ----------
    flow
        Flow of each step, any unit, shape (steps,), NaN where missing.
    start
        Time at the start of the first step.
    step_s
        Length of a step [s].
    rule
        One of ``GAP_RULES``.
    largest_gap_s
        Longest gap that may be filled [s].
    source
        Name of the file, for messages.

    Returns
    -------
    tuple
        The filled flow, shape (steps,); no or one notice; the gaps.

    Raises
    ------
    RecordError
        R110 when gaps are refused or a gap has no value to start from (to end on, for
        ``interpolate``), R111 when a gap is longer than ``largest_gap_s``.

    Examples
    --------
    >>> filled, notices, gaps = gaps_filled(
    ...     np.array([1.0, np.nan, 3.0]), dt.datetime(2026, 2, 2), 60.0, "interpolate", 600.0, "steam.csv"
    ... )
    >>> filled.tolist(), notices[0].code, gaps
    ([1.0, 2.0, 3.0], 'R191', (Gap(first_step=1, last_step=1, rule='interpolate'),))
    """
    missing = np.isnan(flow)
    if not missing.any():
        return flow, (), ()
    edges = np.diff(np.concatenate([[0], missing.astype(np.int8), [0]]))
    first, after = np.flatnonzero(edges == 1), np.flatnonzero(edges == -1)
    length_s = (after - first) * step_s
    longest = int(length_s.argmax())
    longest_at = start + dt.timedelta(seconds=float(first[longest] * step_s))
    found = f"{first.size} gaps, the longest {length_s[longest]:g} s from {longest_at:%Y-%m-%d %H:%M:%S}"
    where = f"{source}: missing values"
    if rule == "refuse":
        allowed = "give every value, or state a rule for gaps: hold, interpolate or zero"
        raise RecordError(Problem(code="R110", where=where, found=found, allowed=allowed))
    if length_s[longest] > largest_gap_s:
        allowed = f"the longest gap that may be filled is {largest_gap_s:g} s"
        raise RecordError(Problem(code="R111", where=where, found=found, allowed=allowed))
    open_start = rule in ("hold", "interpolate") and first[0] == 0
    open_end = rule == "interpolate" and after[-1] == flow.size
    if open_start or open_end:
        end = "starts" if open_start else "ends"
        found = f"the record {end} with a gap, which '{rule}' cannot fill"
        allowed = "cut the record there, or state another rule"
        raise RecordError(Problem(code="R110", where=where, found=found, allowed=allowed))
    filled = flow.copy()
    steps = np.arange(flow.size)
    if rule == "zero":
        filled[missing] = 0.0
    elif rule == "hold":
        filled = flow[np.maximum.accumulate(np.where(missing, 0, steps))]
    else:
        filled[missing] = np.interp(steps[missing], steps[~missing], flow[~missing])
    words = {"hold": "the last value before", "interpolate": "a straight line", "zero": "zero"}
    text = (
        f"{int(missing.sum())} of {flow.size} steps ({missing.mean():.2%}) were missing, in {found}; "
        f"filled with {words[rule]}."
    )
    gaps = tuple(
        Gap(first_step=int(one), last_step=int(end) - 1, rule=rule)
        for one, end in zip(first, after, strict=True)
    )
    return filled, (Notice(code="R191", text=text, severity="assumed"),), gaps
