"""Rows at their time stamps turned into one value for every step."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from evenfire.demand.flows import Readings
from evenfire.demand.local_time import hour_lost_or_gap
from evenfire.demand.record_format import AMOUNT_KG, COUNTER_KG, RecordFormat
from evenfire.demand.series import FloatArray, Gap
from evenfire.demand.table import rows_named
from evenfire.errors import Notice, Problem, RecordError
from evenfire.units import SECONDS_PER_DAY

StampArray = NDArray[np.datetime64]
LineArray = NDArray[np.int64]
LEAST_COVERED = 0.5
"""Share of steps with a row below which a record is not taken for a regular one [1]."""
RULE_WANTED = "give every value, or state a rule for gaps: hold, interpolate or zero"


@dataclass(frozen=True, slots=True, kw_only=True)
class Grid:
    """Mean flow of every step from the first to the last."""

    start: dt.datetime
    step_s: float
    flow_kg_s: FloatArray = field(repr=False)
    """NaN where missing, shape (steps,)."""
    notices: tuple[Notice, ...]
    spread: tuple[Gap, ...] = ()
    """Steps between counter readings further apart than a step."""


def order_problems(stamps: StampArray, form: RecordFormat, source: str, lines: LineArray) -> list[Problem]:
    """Rows out of order (R107), with the time stamp of another row (R108), or fewer than two (R112)."""
    where = f"{source}: time"
    if stamps.size < 2:
        found = f"{stamps.size} rows with values"
        allowed = "give at least one day; eight weeks or more are better"
        return [Problem(code="R112", where=where, found=found, allowed=allowed)]
    problems = []
    backwards = np.concatenate([[False], np.diff(stamps).astype(np.int64) < 0])
    if backwards.any():
        found = f"time runs backwards in {rows_named(lines, backwards)}"
        allowed = "sort the rows by time; where clocks change, state the zone"
        problems.append(Problem(code="R107", where=where, found=found, allowed=allowed))
    repeated = np.zeros(stamps.size, dtype=np.bool_)
    order = np.argsort(stamps, kind="stable")
    repeated[order[1:]] = np.diff(stamps[order]).astype(np.int64) == 0
    if repeated.any() and form.logging == "regular":
        found = f"time stamp given before in {rows_named(lines, repeated)}"
        allowed = "keep one row per time stamp; where an hour comes twice in autumn, state the zone"
        problems.append(Problem(code="R108", where=where, found=found, allowed=allowed))
    return problems


def regular_grid(
    stamps: StampArray, readings: Readings, form: RecordFormat, source: str, lines: LineArray
) -> Grid:
    """Flow of every step of a record that was logged at a regular step, NaN where rows are missing.

    Use it on ordered time stamps. The step is the most frequent distance; every other distance must
    be a whole multiple of it. The rise of a counter across missing rows is known in sum; it is spread
    evenly where gaps may be interpolated.

    Raises
    ------
    RecordError
        R109 irregular step, or rows for less than half the steps; R110 or R111 gap; R125 an hour that
        may be missing or skipped by summer time.
    """
    distance = np.diff(stamps).astype(np.int64)
    distances, counts = np.unique(distance, return_counts=True)
    step_ns = int(distances[counts.argmax()])
    step_s = step_ns / 1e9
    irregular = np.concatenate([[False], distance % step_ns != 0])
    if irregular.any():
        found = f"step of {step_s:g} s, but another distance in {rows_named(lines, irregular)}"
        allowed = "every distance must be a whole multiple of the step; state 'on change' where values hold"
        raise RecordError(Problem(code="R109", where=f"{source}: time", found=found, allowed=allowed))
    covered = stamps.size / (int(distance.sum()) // step_ns + 1)
    if covered < LEAST_COVERED:
        found = f"rows for {covered:.0%} of the steps of {step_s:g} s: logged on change, or full of gaps"
        allowed = "state 'on change' where a value holds until the next row, else export without gaps"
        raise RecordError(Problem(code="R109", where=f"{source}: time", found=found, allowed=allowed))
    problems = _summer_time_problems(stamps, distance, step_ns, form, source, lines)
    problems += _gap_problems(stamps, distance, step_ns, readings, form, source, lines)
    if problems:
        raise RecordError(*problems)
    position = (stamps - stamps[0]).astype(np.int64) // step_ns
    start = stamps[0]
    if form.flow_unit in COUNTER_KG:
        first = int(position[~readings.missing][0])
        flow, notices, spread = _counter_flow(position, readings, step_s, form, source)
        start = start + np.timedelta64(first * step_ns, "ns")
    else:
        flow, notices, spread = np.full(int(position[-1]) + 1, np.nan), (), ()
        flow[position] = readings.values / (step_s if form.flow_unit in AMOUNT_KG else 1.0)
        if form.stamp == "end":
            start = start - np.timedelta64(step_ns, "ns")
    return Grid(start=_moment(start), step_s=step_s, flow_kg_s=flow, notices=notices, spread=spread)


def averaged_grid(
    stamps: StampArray, readings: Readings, form: RecordFormat, source: str, lines: LineArray
) -> Grid:
    """Mean flow of every step of a record that was logged on change, by the time each value held.

    Use it on ordered time stamps. Between rows further apart than the longest gap allowed nothing is
    known: a steady value cannot be told from a logger that stopped.

    Raises
    ------
    RecordError
        R111 when rows are further apart than ``largest_gap_s``, R112 when no whole step is covered.
    """
    counter = form.flow_unit in COUNTER_KG
    kept = ~readings.missing if counter else np.ones(stamps.size, dtype=np.bool_)
    moments = (stamps[kept] - stamps[0].astype("datetime64[D]")).astype(np.float64) / 1e9
    values, rows = readings.values[kept], lines[kept]
    length = np.diff(moments)
    if length.size and length.max() > form.largest_gap_s:
        at = int(length.argmax())
        found = (
            f"{int((length > form.largest_gap_s).sum())} times without a row, the longest {length[at]:g} s "
            f"after row {rows[at]}"
        )
        allowed = (
            f"the longest gap allowed is {form.largest_gap_s:g} s; allow more if the flow was steady then"
        )
        raise RecordError(Problem(code="R111", where=f"{source}: time", found=found, allowed=allowed))
    step_s = form.step_s
    first, last = int(np.ceil(moments[0] / step_s)), int(np.floor(moments[-1] / step_s))
    if last <= first:
        found, allowed = f"less than one step of {step_s:g} s", "give at least one day"
        raise RecordError(Problem(code="R112", where=f"{source}: length", found=found, allowed=allowed))
    steam = values[1:] if counter else values[:-1] * length
    unknown = np.isnan(steam)
    edges = np.arange(first, last + 1, dtype=np.float64) * step_s
    mass = _at(edges, moments, np.where(unknown, 0.0, steam))
    blind = _at(edges, moments, np.where(unknown, length, 0.0))
    flow = np.diff(mass) / step_s
    flow[np.diff(blind) > 1e-9 * step_s] = np.nan
    text = f"{source}: {stamps.size} rows logged on change are averaged to {flow.size} steps of {step_s:g} s."
    start = stamps[0].astype("datetime64[D]") + np.timedelta64(round(first * step_s * 1e9), "ns")
    return Grid(
        start=_moment(start),
        step_s=step_s,
        flow_kg_s=np.maximum(flow, 0.0),
        notices=(Notice(code="R199", text=text),),
    )


def _at(edges: FloatArray, moments: FloatArray, added: FloatArray) -> FloatArray:
    """Running sum of what each interval adds, at the edges of the steps."""
    total = np.concatenate([[0.0], np.cumsum(added)])
    last_of_moment = np.append(np.diff(moments) > 0.0, True)
    at_edges: FloatArray = np.interp(edges, moments[last_of_moment], total[last_of_moment])
    return at_edges


def _counter_flow(
    position: NDArray[np.int64], readings: Readings, step_s: float, form: RecordFormat, source: str
) -> tuple[FloatArray, tuple[Notice, ...], tuple[Gap, ...]]:
    nodes = position[~readings.missing]
    steps = np.diff(nodes)
    flow = np.repeat(readings.values[~readings.missing][1:] / (steps * step_s), steps)
    spread = int((steps[steps > 1]).sum())
    if spread == 0:
        return flow, (), ()
    text = (
        f"{source}: {spread} of {flow.size} steps lie between counter readings further apart than a step "
        f"(longest {steps.max() * step_s:g} s); the steam between them is spread evenly."
    )
    gaps = tuple(
        Gap(first_step=int(nodes[at] - nodes[0]), last_step=int(nodes[at + 1] - nodes[0]) - 1, rule="spread")
        for at in np.flatnonzero(steps > 1)
    )
    return flow, (Notice(code="R191", text=text, severity="assumed"),), gaps


def _summer_time_problems(
    stamps: StampArray,
    distance: NDArray[np.int64],
    step_ns: int,
    form: RecordFormat,
    source: str,
    lines: LineArray,
) -> list[Problem]:
    if form.zone:
        return []
    before = stamps[:-1] + np.timedelta64(0 if form.stamp == "end" else step_ns, "ns")
    for at in np.flatnonzero(distance > step_ns):
        if hour_lost_or_gap(before[at], int(distance[at]) - step_ns):
            found = (
                f"the hour from {before[at].astype('datetime64[m]')} is missing after row {lines[at]}: "
                "a gap in the record, or the hour that summer time skips"
            )
            allowed = "state the zone, e.g. Europe/Berlin, or 'fixed' for a clock that is never changed"
            return [Problem(code="R125", where=f"{source}: time", found=found, allowed=allowed)]
    return []


def _gap_problems(
    stamps: StampArray,
    distance: NDArray[np.int64],
    step_ns: int,
    readings: Readings,
    form: RecordFormat,
    source: str,
    lines: LineArray,
) -> list[Problem]:
    problems = []
    counter = form.flow_unit in COUNTER_KG
    if counter:
        kept = ~readings.missing
        stamps, lines = stamps[kept], lines[kept]
        distance = np.diff(stamps).astype(np.int64)
        if distance.size == 0:
            found, allowed = f"{stamps.size} rows with a reading", "give at least two"
            return [Problem(code="R112", where=f"{source}: length", found=found, allowed=allowed)]
    missing_s = (int(distance.max()) - step_ns) / 1e9
    spreads = form.gaps == "interpolate" or not counter
    refused = form.gaps == "refuse" or not spreads
    if missing_s > form.largest_gap_s or (missing_s > 0.0 and refused):
        jump = int(distance.argmax())
        found = (
            f"{int((distance > step_ns).sum())} gaps, the longest {missing_s:g} s after row {lines[jump]} "
            f"({stamps[jump].astype('datetime64[s]')})"
        )
        code, allowed = "R111", f"the longest gap that may be filled is {form.largest_gap_s:g} s"
        if refused:
            rule = "the steam between two readings is known: state 'interpolate' to spread it evenly"
            code, allowed = "R110", rule if counter else RULE_WANTED
        problems.append(Problem(code=code, where=f"{source}: time", found=found, allowed=allowed))
    if form.gaps == "refuse" and not counter and readings.missing.any():
        found = f"no value in {rows_named(lines, readings.missing)}"
        where = f"{source}: column '{form.flow_column}'"
        problems.append(Problem(code="R110", where=where, found=found, allowed=RULE_WANTED))
    return problems


def length_problem(grid: Grid, source: str) -> list[Problem]:
    """R112 for a record shorter than one day."""
    length_s = grid.flow_kg_s.size * grid.step_s
    if length_s >= SECONDS_PER_DAY:
        return []
    found = f"{grid.flow_kg_s.size} steps of {grid.step_s:g} s, {length_s / 3600.0:g} h"
    allowed = "give at least one day; eight weeks or more are better"
    return [Problem(code="R112", where=f"{source}: length", found=found, allowed=allowed)]


def _moment(stamp: np.datetime64) -> dt.datetime:
    moment = stamp.astype("datetime64[us]").astype(dt.datetime)
    assert isinstance(moment, dt.datetime)
    return moment
