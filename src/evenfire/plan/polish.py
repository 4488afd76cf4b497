"""The linear programme that is left when every state of a plan is fixed.

Outputs, levels, charging, discharging, unmet steam and the vessel's volume within its segment are
chosen exactly, on the true demand, by HiGHS. The result is a point of the mixed-integer model.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise
from typing import Any

import highspy
import numpy as np
from numpy.typing import NDArray
from scipy.sparse import coo_array

from evenfire.plan.inputs import PlanBoiler, PlanDay, PlanInputs, VesselSegment
from evenfire.plan.outcome import DayDispatch, Plan
from evenfire.plan.quiet import QuietHighs
from evenfire.plan.tables import mode_costs_k_h, start_cost_k
from evenfire.plan.translate import burner_starts

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]

_FIXED_M3 = 1e-9


@dataclass(frozen=True, slots=True, kw_only=True)
class FixedDay:
    """States of one typical day."""

    in_service: tuple[bool, ...]
    mode: IntArray
    """Mode index, -1 when cold, shape (boilers, steps)."""
    charging: NDArray[np.bool_]
    start_t: float | None = None
    """Stored steam at the start of the day, where days must join; else the day chooses its own."""


class _Builder:
    """Columns and rows of a linear programme, gathered as arrays."""

    def __init__(self) -> None:
        self.cost: list[FloatArray] = []
        self.lower: list[FloatArray] = []
        self.upper: list[FloatArray] = []
        self.columns = 0
        self.entries: list[tuple[IntArray, IntArray, FloatArray]] = []
        self.row_low: list[FloatArray] = []
        self.row_high: list[FloatArray] = []
        self.rows = 0

    def add_columns(self, count: int, cost: Any, lower: Any, upper: Any) -> IntArray:
        for store, value in ((self.cost, cost), (self.lower, lower), (self.upper, upper)):
            store.append(np.broadcast_to(np.asarray(value, dtype=float), count).copy())
        self.columns += count
        return np.arange(self.columns - count, self.columns)

    def add_rows(self, low: Any, high: Any, count: int, *terms: tuple[IntArray, Any]) -> None:
        """Rows sum(value * column) between low and high; each term has one column per row."""
        rows = np.arange(self.rows, self.rows + count)
        for columns, value in terms:
            values = np.broadcast_to(np.asarray(value, dtype=float), count)
            self.entries.append((rows, np.broadcast_to(columns, count), values))
        self.row_low.append(np.broadcast_to(np.asarray(low, dtype=float), count).copy())
        self.row_high.append(np.broadcast_to(np.asarray(high, dtype=float), count).copy())
        self.rows += count

    def programme(self) -> highspy.HighsLp:
        rows, columns, values = (np.concatenate(part) for part in zip(*self.entries, strict=True))
        matrix = coo_array((values, (rows, columns)), shape=(self.rows, self.columns)).tocsc()
        lp = highspy.HighsLp()
        lp.num_col_, lp.num_row_ = self.columns, self.rows
        lp.col_cost_ = np.concatenate(self.cost)
        lp.col_lower_, lp.col_upper_ = np.concatenate(self.lower), np.concatenate(self.upper)
        lp.row_lower_, lp.row_upper_ = np.concatenate(self.row_low), np.concatenate(self.row_high)
        lp.a_matrix_.format_ = highspy.MatrixFormat.kColwise
        lp.a_matrix_.start_ = matrix.indptr
        lp.a_matrix_.index_ = matrix.indices
        lp.a_matrix_.value_ = matrix.data
        return lp


def _affine(ends: tuple[float, float], segment: VesselSegment) -> tuple[float, float]:
    """Constant and slope in volume of a vessel property."""
    low, high = segment.volume_m3
    slope = (ends[1] - ends[0]) / (high - low) if high > low else 0.0
    return ends[0] - slope * low, slope


def polished(
    inputs: PlanInputs,
    boilers: tuple[PlanBoiler, ...],
    segment_index: int | None,
    volume_range_m3: tuple[float, float],
    days: tuple[FixedDay, ...],
) -> Plan | None:
    """The best plan with these states.

    Parameters
    ----------
    inputs : PlanInputs
    boilers : tuple of PlanBoiler
        The boilers that stand.
    segment_index : int or None
        Vessel segment, None without a vessel.
    volume_range_m3 : (float, float)
        Volumes allowed within the segment.
    days : tuple of FixedDay
        One per typical day.

    Returns
    -------
    Plan or None
        None where the states admit no feasible levels.
    """
    low, high = volume_range_m3
    if segment_index is None or high - low <= _FIXED_M3:
        # With the volume fixed nothing joins the days: each is a programme of its own.
        parts = [
            _solved_days(inputs, boilers, segment_index, volume_range_m3, (day,), (fixed,))
            for day, fixed in zip(inputs.days, days, strict=True)
        ]
    else:
        parts = [_solved_days(inputs, boilers, segment_index, volume_range_m3, inputs.days, days)]
    if any(part is None for part in parts):
        return None
    kept = [part for part in parts if part is not None]
    return Plan(
        boilers=tuple(boiler.name for boiler in boilers),
        segment=segment_index,
        volume_m3=kept[0][0],
        dispatch=tuple(dispatch for _, dispatches in kept for dispatch in dispatches),
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class _DayColumns:
    """Where one day's variables stand in the programme, and what its states give in any case."""

    base_t_h: list[FloatArray]
    """Least output of each boiler's mode by step."""
    pieces: list[list[IntArray]]
    """Columns of the output above it, per boiler and piece."""
    unmet: IntArray
    vented: IntArray
    vessel: tuple[IntArray, IntArray, IntArray] | None
    """Stored, charge, discharge."""


def _solved_days(
    inputs: PlanInputs,
    boilers: tuple[PlanBoiler, ...],
    segment_index: int | None,
    volume_range_m3: tuple[float, float],
    days: tuple[PlanDay, ...],
    fixed: tuple[FixedDay, ...],
) -> tuple[float, list[DayDispatch]] | None:
    """Volume and dispatch of some days, optimal for their states."""
    segment = None if segment_index is None else inputs.vessel_segments[segment_index]
    build = _Builder()
    volume: IntArray | None = None
    if segment is not None:
        _, price = _affine(segment.fixed_cost_k, segment)
        volume = build.add_columns(1, price, volume_range_m3[0], volume_range_m3[1])
    columns = [
        _add_day(build, inputs, boilers, segment, volume, day, states)
        for day, states in zip(days, fixed, strict=True)
    ]
    solution = _solved(build.programme())
    if solution is None:
        return None
    chosen = 0.0 if volume is None else float(solution[volume[0]])
    return chosen, [
        _dispatch(boilers, states, place, solution) for states, place in zip(fixed, columns, strict=True)
    ]


def _add_day(
    build: _Builder,
    inputs: PlanInputs,
    boilers: tuple[PlanBoiler, ...],
    segment: VesselSegment | None,
    volume: IntArray | None,
    day: PlanDay,
    fixed: FixedDay,
) -> _DayColumns:
    """Outputs, unmet and vented steam, vessel and balance of one day."""
    rates = inputs.rates
    pressure = 0 if segment is None else segment.pressure
    steps = len(day.demand_t_h)
    weight = day.days_per_year * inputs.step_h
    terms: list[tuple[IntArray, Any]] = []
    bases: list[FloatArray] = []
    pieces: list[list[IntArray]] = []
    for row, boiler in enumerate(boilers):
        base = np.zeros(steps)
        count = max(len(mode.output_t_h) for mode in boiler.modes) - 1
        widths, slopes = np.zeros((count, steps)), np.zeros((count, steps))
        for k, mode in enumerate(boiler.modes):
            at = fixed.mode[row] == k
            if not at.any():
                continue
            output, cost = mode_costs_k_h(boiler, mode, pressure, rates)
            base[at] = output[0]
            for i, ((q0, q1), (c0, c1)) in enumerate(zip(pairwise(output), pairwise(cost), strict=True)):
                widths[i, at] = q1 - q0
                slopes[i, at] = (c1 - c0) / (q1 - q0)
        own = [build.add_columns(steps, weight * slopes[i], 0.0, widths[i]) for i in range(count)]
        terms += [(column, 1.0) for column in own]
        bases.append(base)
        pieces.append(own)
        _add_ramp(build, boiler, fixed.mode[row], base, own)
    unmet = build.add_columns(steps, weight * rates.unmet_k_t, 0.0, day.demand_t_h)
    vented = build.add_columns(steps, 0.0, 0.0, sum(boiler.rated_t_h for boiler in boilers))
    terms += [(unmet, 1.0), (vented, -1.0)]
    vessel = None
    if segment is not None and volume is not None:
        vessel = _add_vessel(build, inputs, boilers, segment, volume, weight, fixed)
        terms += [(vessel[2], 1.0), (vessel[1], -1.0)]
    left = day.demand_t_h - sum(bases, np.zeros(steps))
    build.add_rows(left, left, steps, *terms)
    return _DayColumns(base_t_h=bases, pieces=pieces, unmet=unmet, vented=vented, vessel=vessel)


def _add_vessel(
    build: _Builder,
    inputs: PlanInputs,
    boilers: tuple[PlanBoiler, ...],
    segment: VesselSegment,
    volume: IntArray,
    weight: float,
    fixed: FixedDay,
) -> tuple[IntArray, IntArray, IntArray]:
    """Stored steam and flows of one day within the vessel's limits, linear in its volume."""
    step, steps = inputs.step_h, len(fixed.charging)
    capacity, per_capacity = _affine(segment.capacity_t, segment)
    release, per_release = _affine(segment.release_t_h, segment)
    loss, per_loss = _affine(segment.loss_t_h, segment)
    credit = inputs.rates.fuel_k_mwh * segment.charging_credit_mwh_t
    most_charge = sum(boiler.rated_t_h for boiler in boilers)
    least, most = np.zeros(steps), np.full(steps, segment.capacity_t[1])
    if fixed.start_t is not None:
        least[0] = most[0] = fixed.start_t
    stored = build.add_columns(steps, 0.0, least, most)
    charge = build.add_columns(steps, -weight * credit, 0.0, np.where(fixed.charging, most_charge, 0.0))
    discharge = build.add_columns(steps, 0.0, 0.0, np.where(fixed.charging, 0.0, segment.release_t_h[1]))
    build.add_rows(-np.inf, capacity, steps, (stored, 1.0), (volume, -per_capacity))
    build.add_rows(-np.inf, release, steps, (discharge, 1.0), (volume, -per_release))
    build.add_rows(
        -step * loss,
        -step * loss,
        steps,
        (np.roll(stored, -1), 1.0),
        (stored, -1.0),
        (charge, -step),
        (discharge, step),
        (volume, step * per_loss),
    )
    return stored, charge, discharge


def _dispatch(
    boilers: tuple[PlanBoiler, ...], fixed: FixedDay, place: _DayColumns, solution: FloatArray
) -> DayDispatch:
    """One day's dispatch read from a solution."""
    steps = len(place.unmet)
    output = np.zeros((len(boilers), steps))
    for row, (base, own) in enumerate(zip(place.base_t_h, place.pieces, strict=True)):
        output[row] = base + sum((solution[column] for column in own), np.zeros(steps))
    zeros = np.zeros(steps)
    stored, charge, discharge = (
        (zeros, zeros, zeros) if place.vessel is None else (solution[column] for column in place.vessel)
    )
    return DayDispatch(
        in_service=np.array(fixed.in_service),
        mode=fixed.mode,
        output_t_h=output,
        start=burner_starts(boilers, fixed.mode),
        stored_t=stored,
        charge_t_h=charge,
        discharge_t_h=discharge,
        unmet_t_h=solution[place.unmet],
        vented_t_h=solution[place.vented],
    )


def _add_ramp(
    build: _Builder, boiler: PlanBoiler, mode: IntArray, base: FloatArray, pieces: list[IntArray]
) -> None:
    """Largest rise of output between two lit steps and from lighting."""
    lit = np.array([k >= 0 and boiler.modes[k].lit for k in mode])
    low = min(x.output_t_h[0] for x in boiler.modes if x.lit)
    if boiler.ramp_t_h >= boiler.rated_t_h - low or not lit.any():
        return
    at = np.flatnonzero(lit)
    before = (at - 1) % len(mode)
    follows = lit[before]
    limit = np.where(follows, boiler.ramp_t_h + base[before], low + boiler.ramp_t_h) - base[at]
    terms: list[tuple[IntArray, Any]] = [(piece[at], 1.0) for piece in pieces]
    terms += [(piece[before], np.where(follows, -1.0, 0.0)) for piece in pieces]
    build.add_rows(-np.inf, limit, len(at), *terms)


def _solved(lp: highspy.HighsLp) -> FloatArray | None:
    solver = QuietHighs()
    solver.setOptionValue("primal_feasibility_tolerance", 1e-9)
    solver.setOptionValue("dual_feasibility_tolerance", 1e-9)
    solver.passModel(lp)
    solver.run()
    if solver.getModelStatus() != highspy.HighsModelStatus.kOptimal:
        return None
    return np.array(solver.getSolution().col_value)


def plan_cost_k(inputs: PlanInputs, plan: Plan) -> float:
    """Net present cost of a plan [k], term by term from its dispatch and independent of any solver."""
    rates = inputs.rates
    segment = None if plan.segment is None else inputs.vessel_segments[plan.segment]
    pressure = 0 if segment is None else segment.pressure
    boilers = [inputs.boiler(name) for name in plan.boilers]
    total = sum(boiler.fixed_cost_k for boiler in boilers)
    if segment is not None:
        constant, slope = _affine(segment.fixed_cost_k, segment)
        total += constant + slope * plan.volume_m3 + inputs.vessel_maintenance_k
    for day, dispatch in zip(inputs.days, plan.dispatch, strict=True):
        weight = day.days_per_year
        for row, boiler in enumerate(boilers):
            for k, mode in enumerate(boiler.modes):
                at = dispatch.mode[row] == k
                output, cost = mode_costs_k_h(boiler, mode, pressure, rates)
                total += (
                    weight
                    * inputs.step_h
                    * float(np.interp(dispatch.output_t_h[row, at], output, cost).sum())
                )
            total += weight * start_cost_k(boiler, pressure, rates) * int(dispatch.start[row].sum())
        total += weight * inputs.step_h * rates.unmet_k_t * float(dispatch.unmet_t_h.sum())
        if segment is not None:
            credit = rates.fuel_k_mwh * segment.charging_credit_mwh_t
            total -= weight * inputs.step_h * credit * float(dispatch.charge_t_h.sum())
    return total + cold_start_cost_k(inputs, plan, pressure)


def cold_start_cost_k(inputs: PlanInputs, plan: Plan, pressure: int) -> float:
    """Present cost of heating up cold boilers between days [k]."""
    total = 0.0
    for row, name in enumerate(plan.boilers):
        boiler = inputs.boiler(name)
        price = inputs.rates.fuel_k_mwh * boiler.pressure_factor[pressure] * boiler.cold_start_fuel_mwh
        service = np.array([bool(day.in_service[row]) for day in plan.dispatch])
        rises = ~service[:, None] & service[None, :]
        total += price * float(inputs.transitions_per_year[rises].sum())
    return total
