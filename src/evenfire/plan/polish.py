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

from evenfire.plan.inputs import PlanBoiler, PlanInputs, VesselSegment
from evenfire.plan.outcome import DayDispatch, Plan
from evenfire.plan.quiet import QuietHighs
from evenfire.plan.tables import mode_costs_k_h, start_cost_k
from evenfire.plan.translate import burner_starts

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]


@dataclass(frozen=True, slots=True, kw_only=True)
class FixedDay:
    """States of one typical day."""

    in_service: tuple[bool, ...]
    mode: IntArray
    """Mode index, -1 when cold, shape (boilers, steps)."""
    charging: NDArray[np.bool_]


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
        from scipy.sparse import coo_array

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
    segment = None if segment_index is None else inputs.vessel_segments[segment_index]
    pressure = 0 if segment is None else segment.pressure
    build = _Builder()
    step, rates = inputs.step_h, inputs.rates
    volume: IntArray | None = None
    if segment is not None:
        _, price = _affine(segment.fixed_cost_k, segment)
        volume = build.add_columns(1, price, volume_range_m3[0], volume_range_m3[1])
    handles = []
    for day, fixed in zip(inputs.days, days, strict=True):
        steps = len(day.demand_t_h)
        weight = day.days_per_year * step
        base = np.zeros(steps)
        terms: list[tuple[IntArray, Any]] = []
        made: list[list[tuple[NDArray[np.bool_], IntArray]]] = []
        outputs: list[FloatArray] = []
        for row, boiler in enumerate(boilers):
            boiler_base = np.zeros(steps)
            pieces: list[tuple[NDArray[np.bool_], IntArray]] = []
            count = max(len(mode.output_t_h) for mode in boiler.modes) - 1
            widths, slopes = np.zeros((count, steps)), np.zeros((count, steps))
            for k, mode in enumerate(boiler.modes):
                at = fixed.mode[row] == k
                if not at.any():
                    continue
                output, cost = mode_costs_k_h(boiler, mode, pressure, rates)
                boiler_base[at] = output[0]
                for i, ((q0, q1), (c0, c1)) in enumerate(zip(pairwise(output), pairwise(cost), strict=True)):
                    widths[i, at] = q1 - q0
                    slopes[i, at] = (c1 - c0) / (q1 - q0)
            for i in range(count):
                column = build.add_columns(steps, weight * slopes[i], 0.0, widths[i])
                terms.append((column, 1.0))
                pieces.append((widths[i] > 0, column))
            base += boiler_base
            outputs.append(boiler_base)
            made.append(pieces)
            _add_ramp(build, boiler, fixed.mode[row], boiler_base, [column for _, column in pieces])
        unmet = build.add_columns(steps, weight * rates.unmet_k_t, 0.0, day.demand_t_h)
        vented = build.add_columns(steps, 0.0, 0.0, sum(boiler.rated_t_h for boiler in boilers))
        terms += [(unmet, 1.0), (vented, -1.0)]
        stored = charge = discharge = None
        if segment is not None and volume is not None:
            capacity, per_capacity = _affine(segment.capacity_t, segment)
            release, per_release = _affine(segment.release_t_h, segment)
            loss, per_loss = _affine(segment.loss_t_h, segment)
            stored = build.add_columns(steps, 0.0, 0.0, segment.capacity_t[1])
            credit = rates.fuel_k_mwh * segment.charging_credit_mwh_t
            most_charge = sum(boiler.rated_t_h for boiler in boilers)
            charge = build.add_columns(
                steps, -weight * credit, 0.0, np.where(fixed.charging, most_charge, 0.0)
            )
            discharge = build.add_columns(
                steps, 0.0, 0.0, np.where(fixed.charging, 0.0, segment.release_t_h[1])
            )
            terms += [(discharge, 1.0), (charge, -1.0)]
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
        build.add_rows(day.demand_t_h - base, day.demand_t_h - base, steps, *terms)
        handles.append((outputs, made, unmet, vented, stored, charge, discharge))
    solution = _solved(build.programme())
    if solution is None:
        return None
    zeros = [np.zeros(len(day.demand_t_h)) for day in inputs.days]
    dispatch = []
    for d, (outputs, made, unmet, vented, stored, charge, discharge) in enumerate(handles):
        rows = [
            base + sum((solution[column] for _, column in pieces), np.zeros_like(base))
            for base, pieces in zip(outputs, made, strict=True)
        ]
        dispatch.append(
            DayDispatch(
                in_service=np.array(days[d].in_service),
                mode=days[d].mode,
                output_t_h=np.array(rows).reshape(len(boilers), len(unmet)),
                start=burner_starts(boilers, days[d].mode),
                stored_t=zeros[d] if stored is None else solution[stored],
                charge_t_h=zeros[d] if charge is None else solution[charge],
                discharge_t_h=zeros[d] if discharge is None else solution[discharge],
                unmet_t_h=solution[unmet],
                vented_t_h=solution[vented],
            )
        )
    return Plan(
        boilers=tuple(boiler.name for boiler in boilers),
        segment=segment_index,
        volume_m3=0.0 if volume is None else float(solution[volume[0]]),
        dispatch=tuple(dispatch),
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
