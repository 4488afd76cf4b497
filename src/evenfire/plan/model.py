"""The mixed-integer model of one alternative, written in Pyomo: the arbiter of every plan.

Symbols and reasons are in docs/formulation.md; the units are those of :mod:`evenfire.plan.inputs`.
Every variable has finite bounds. Time is cyclic within each typical day.
"""

from __future__ import annotations

from itertools import pairwise
from typing import Any

import numpy as np
import pyomo.environ as pyo

from evenfire.plan.inputs import AlternativeRules, PlanBoiler, PlanInputs, PlanMode, VesselUse


def alternative_model(inputs: PlanInputs, rules: AlternativeRules) -> pyo.ConcreteModel:
    """The complete model of one alternative.

    Parameters
    ----------
    inputs : PlanInputs
        Site, demand, boilers, vessel segments and rates.
    rules : AlternativeRules
        Which boilers and whether a vessel the alternative may choose.

    Returns
    -------
    pyomo.environ.ConcreteModel
        Minimise ``net_present_cost`` [k].
    """
    m: Any = pyo.ConcreteModel(name=rules.name)
    boilers = [boiler for boiler in inputs.boilers if boiler.name in rules.allowed]
    segments = inputs.vessel_segments if rules.vessel is not VesselUse.NONE else ()
    m.B = pyo.Set(initialize=range(len(boilers)), ordered=True)
    m.D = pyo.Set(initialize=range(len(inputs.days)), ordered=True)
    m.T = pyo.Set(initialize=range(len(inputs.days[0].demand_t_h)), ordered=True)
    m.J = pyo.Set(initialize=range(len(segments)), ordered=True)
    m.P = pyo.Set(initialize=range(inputs.pressures if segments else 1), ordered=True)
    m.boiler_names = tuple(boiler.name for boiler in boilers)

    _add_investment(m, inputs, rules, boilers)
    _add_boilers(m, boilers)
    _add_vessel(m, inputs)
    _add_balance(m, inputs, boilers)
    _add_adequacy(m, inputs, rules, boilers)
    _add_fuel(m, inputs, boilers)
    _add_objective(m, inputs, boilers)
    return m


def _add_investment(m: Any, inputs: PlanInputs, rules: AlternativeRules, boilers: list[PlanBoiler]) -> None:
    """Which boilers stand, which vessel segment is bought and how large it is."""
    segments = inputs.vessel_segments
    m.standing = pyo.Var(m.B, domain=pyo.Binary)
    for b, boiler in enumerate(boilers):
        if boiler.name in rules.required:
            m.standing[b].setlb(1)
    new = [b for b, boiler in enumerate(boilers) if not boiler.existing]
    m.new_count = pyo.Constraint(
        expr=(rules.fewest_new, sum(m.standing[b] for b in new), rules.most_new)
        if new
        else pyo.Constraint.Feasible
    )

    m.bought = pyo.Var(m.J, domain=pyo.Binary)
    m.volume = pyo.Var(m.J, bounds=lambda _, j: (0, segments[j].volume_m3[1]))
    m.volume_low = pyo.Constraint(
        m.J, rule=lambda m, j: m.volume[j] >= segments[j].volume_m3[0] * m.bought[j]
    )
    m.volume_high = pyo.Constraint(
        m.J, rule=lambda m, j: m.volume[j] <= segments[j].volume_m3[1] * m.bought[j]
    )
    if len(m.J):
        fewest = 1 if rules.vessel is VesselUse.REQUIRED else 0
        m.one_vessel = pyo.Constraint(expr=(fewest, sum(m.bought[j] for j in m.J), 1))
    m.pressure_fits = pyo.ConstraintList()
    for b, boiler in enumerate(boilers):
        refused = [j for j in m.J if not boiler.pressure_allowed[segments[j].pressure]]
        if refused:
            m.pressure_fits.add(m.standing[b] + sum(m.bought[j] for j in refused) <= 1)


def linear_in_volume(m: Any, ends: list[tuple[float, float]], segments: tuple[Any, ...]) -> Any:
    """Expression of a vessel property given by its values at both ends of each segment."""
    terms = []
    for j in m.J:
        v_low, v_high = segments[j].volume_m3
        low, high = ends[j]
        slope = (high - low) / (v_high - v_low) if v_high > v_low else 0.0
        terms.append(slope * m.volume[j] + (low - slope * v_low) * m.bought[j])
    return sum(terms) if terms else 0.0


def _add_boilers(m: Any, boilers: list[PlanBoiler]) -> None:
    """Operating modes, output, burner starts, minimum times and ramps."""
    modes = [(b, k) for b, boiler in enumerate(boilers) for k in range(len(boiler.modes))]
    pieces = [(b, k, i) for b, k in modes for i in range(len(boilers[b].modes[k].output_t_h) - 1)]
    steps = len(m.T)

    def mode(b: int, k: int) -> PlanMode:
        return boilers[b].modes[k]

    def width(b: int, k: int, i: int) -> float:
        return mode(b, k).output_t_h[i + 1] - mode(b, k).output_t_h[i]

    m.BK = pyo.Set(initialize=modes, dimen=2, ordered=True)
    m.BKI = pyo.Set(initialize=pieces, dimen=3, ordered=True)
    m.in_service = pyo.Var(m.B, m.D, domain=pyo.Binary)
    m.mode = pyo.Var(m.BK, m.D, m.T, domain=pyo.Binary)
    m.part = pyo.Var(m.BKI, m.D, m.T, bounds=lambda _, b, k, i, d, t: (0, width(b, k, i)))
    m.start = pyo.Var(m.B, m.D, m.T, bounds=(0, 1))
    m.stop = pyo.Var(m.B, m.D, m.T, bounds=(0, 1))

    m.service_if_standing = pyo.Constraint(m.B, m.D, rule=lambda m, b, d: m.in_service[b, d] <= m.standing[b])
    m.one_mode = pyo.Constraint(
        m.B,
        m.D,
        m.T,
        rule=lambda m, b, d, t: (
            sum(m.mode[b, k, d, t] for k in range(len(boilers[b].modes))) == m.in_service[b, d]
        ),
    )
    m.part_in_mode = pyo.Constraint(
        m.BKI,
        m.D,
        m.T,
        rule=lambda m, b, k, i, d, t: m.part[b, k, i, d, t] <= width(b, k, i) * m.mode[b, k, d, t],
    )
    m.lit = pyo.Expression(
        m.B,
        m.D,
        m.T,
        rule=lambda m, b, d, t: sum(m.mode[b, k, d, t] for k, x in enumerate(boilers[b].modes) if x.lit),
    )
    m.output = pyo.Expression(
        m.B,
        m.D,
        m.T,
        rule=lambda m, b, d, t: (
            sum(x.output_t_h[0] * m.mode[b, k, d, t] for k, x in enumerate(boilers[b].modes))
            + sum(
                m.part[b, k, i, d, t]
                for k, x in enumerate(boilers[b].modes)
                for i in range(len(x.output_t_h) - 1)
            )
        ),
    )
    m.logic = pyo.Constraint(
        m.B,
        m.D,
        m.T,
        rule=lambda m, b, d, t: (
            m.lit[b, d, t] - m.lit[b, d, (t - 1) % steps] == m.start[b, d, t] - m.stop[b, d, t]
        ),
    )

    def window(t: int, length: int) -> list[int]:
        return [(t - i) % steps for i in range(min(length, steps))]

    m.minimum_firing = pyo.Constraint(
        m.B,
        m.D,
        m.T,
        rule=lambda m, b, d, t: (
            sum(m.start[b, d, i] for i in window(t, boilers[b].minimum_firing_steps)) <= m.lit[b, d, t]
        ),
    )
    m.minimum_off = pyo.Constraint(
        m.B,
        m.D,
        m.T,
        rule=lambda m, b, d, t: (
            sum(m.stop[b, d, i] for i in window(t, boilers[b].minimum_off_steps))
            <= m.in_service[b, d] - m.lit[b, d, t]
        ),
    )

    def ramp(m: Any, b: int, d: int, t: int) -> Any:
        boiler = boilers[b]
        low = min(x.output_t_h[0] for x in boiler.modes if x.lit)
        if boiler.ramp_t_h >= boiler.rated_t_h - low:
            return pyo.Constraint.Skip
        # A burner that lights may reach its smallest firing plus one ramp; the cycling output before it
        # is given up, so the row is written on lit output alone.
        before = (t - 1) % steps
        return (
            _lit_output(m, boiler, b, d, t) - _lit_output(m, boiler, b, d, before)
            <= boiler.ramp_t_h * m.lit[b, d, before] + (low + boiler.ramp_t_h) * m.start[b, d, t]
        )

    m.ramp = pyo.Constraint(m.B, m.D, m.T, rule=ramp)


def _lit_output(m: Any, boiler: PlanBoiler, b: int, d: int, t: int) -> Any:
    return sum(
        x.output_t_h[0] * m.mode[b, k, d, t]
        + sum(m.part[b, k, i, d, t] for i in range(len(x.output_t_h) - 1))
        for k, x in enumerate(boiler.modes)
        if x.lit
    )


def _add_vessel(m: Any, inputs: PlanInputs) -> None:
    """Stored steam, charging and discharging within the chosen vessel's limits."""
    segments = inputs.vessel_segments
    largest_capacity = max((segments[j].capacity_t[1] for j in m.J), default=0.0)
    largest_release = max((segments[j].release_t_h[1] for j in m.J), default=0.0)
    largest_charge = sum(boiler.rated_t_h for boiler in inputs.boilers if boiler.name in m.boiler_names)
    if not len(m.J):
        largest_charge = 0.0
    steps = len(m.T)

    m.capacity = pyo.Expression(expr=linear_in_volume(m, [x.capacity_t for x in segments], segments))
    m.release = pyo.Expression(expr=linear_in_volume(m, [x.release_t_h for x in segments], segments))
    m.loss = pyo.Expression(expr=linear_in_volume(m, [x.loss_t_h for x in segments], segments))

    m.stored = pyo.Var(m.D, m.T, bounds=(0, largest_capacity))
    m.charge = pyo.Var(m.D, m.T, bounds=(0, largest_charge))
    m.discharge = pyo.Var(m.D, m.T, bounds=(0, largest_release))
    m.charging = pyo.Var(m.D, m.T, domain=pyo.Binary)
    if not len(m.J):
        m.charging.fix(0)
        return
    m.stored_fits = pyo.Constraint(m.D, m.T, rule=lambda m, d, t: m.stored[d, t] <= m.capacity)
    m.release_fits = pyo.Constraint(m.D, m.T, rule=lambda m, d, t: m.discharge[d, t] <= m.release)
    m.charge_or = pyo.Constraint(
        m.D, m.T, rule=lambda m, d, t: m.charge[d, t] <= largest_charge * m.charging[d, t]
    )
    m.discharge_or = pyo.Constraint(
        m.D, m.T, rule=lambda m, d, t: m.discharge[d, t] <= largest_release * (1 - m.charging[d, t])
    )
    m.store = pyo.Constraint(
        m.D,
        m.T,
        rule=lambda m, d, t: (
            m.stored[d, (t + 1) % steps]
            == m.stored[d, t] + inputs.step_h * (m.charge[d, t] - m.discharge[d, t] - m.loss)
        ),
    )


def _add_balance(m: Any, inputs: PlanInputs, boilers: list[PlanBoiler]) -> None:
    """Steam made, taken from the vessel and not met against demand."""
    total = sum(boiler.rated_t_h for boiler in boilers)
    demand = [day.demand_t_h for day in inputs.days]
    m.unmet = pyo.Var(m.D, m.T, bounds=lambda _, d, t: (0, float(demand[d][t])))
    m.vented = pyo.Var(m.D, m.T, bounds=(0, total))
    m.balance = pyo.Constraint(
        m.D,
        m.T,
        rule=lambda m, d, t: (
            sum(m.output[b, d, t] for b in m.B)
            + m.discharge[d, t]
            + m.unmet[d, t]
            - m.charge[d, t]
            - m.vented[d, t]
            == float(demand[d][t])
        ),
    )


def _add_adequacy(m: Any, inputs: PlanInputs, rules: AlternativeRules, boilers: list[PlanBoiler]) -> None:
    """Peaks of the whole raw record that typical days alone would average away."""
    m.adequacy = pyo.ConstraintList()
    if not rules.adequate:
        return
    firm = sum(boiler.rated_t_h * m.standing[b] for b, boiler in enumerate(boilers))
    for cut in inputs.cuts:
        m.adequacy.add(m.capacity + cut.duration_h * firm >= cut.energy_t)
    m.adequacy.add(firm + m.release >= inputs.peak_t_h)


def _add_fuel(m: Any, inputs: PlanInputs, boilers: list[PlanBoiler]) -> None:
    """Yearly fuel per boiler, by the boiler pressure that the chosen window asks for."""
    step = inputs.step_h

    def mode_fuel(b: int, k: int, d: int, t: int) -> Any:
        x = boilers[b].modes[k]
        fuel = x.fuel_mwh_h[0] * m.mode[b, k, d, t]
        for i, ((q0, q1), (f0, f1)) in enumerate(
            zip(pairwise(x.output_t_h), pairwise(x.fuel_mwh_h), strict=True)
        ):
            fuel += (f1 - f0) / (q1 - q0) * m.part[b, k, i, d, t]
        return fuel

    def mode_starts(b: int, k: int, d: int, t: int) -> Any:
        x = boilers[b].modes[k]
        if not x.starts_per_h_low and not x.starts_per_h_high:
            return 0.0
        span = x.output_t_h[-1] - x.output_t_h[0]
        slope = (x.starts_per_h_high - x.starts_per_h_low) / span if span else 0.0
        parts = sum(m.part[b, k, i, d, t] for i in range(len(x.output_t_h) - 1))
        return x.starts_per_h_low * m.mode[b, k, d, t] + slope * parts

    m.starts_per_day = pyo.Expression(
        m.B,
        m.D,
        rule=lambda m, b, d: sum(
            m.start[b, d, t] + step * sum(mode_starts(b, k, d, t) for k in range(len(boilers[b].modes)))
            for t in m.T
        ),
    )
    m.steam_per_day = pyo.Expression(
        m.B, m.D, rule=lambda m, b, d: step * sum(m.output[b, d, t] for t in m.T)
    )
    pairs = [
        (b, i, j)
        for b in range(len(boilers))
        for i in range(len(inputs.days))
        for j in range(len(inputs.days))
        if i != j and inputs.transitions_per_year[i, j] > 0
    ]
    m.BDD = pyo.Set(initialize=pairs, dimen=3, ordered=True)
    m.cold_start = pyo.Var(m.BDD, bounds=(0, 1))
    m.cold_logic = pyo.Constraint(
        m.BDD, rule=lambda m, b, i, j: m.cold_start[b, i, j] >= m.in_service[b, j] - m.in_service[b, i]
    )

    def yearly_fuel(m: Any, b: int) -> Any:
        running = sum(
            day.days_per_year
            * (
                step * sum(mode_fuel(b, k, d, t) for k in range(len(boilers[b].modes)) for t in m.T)
                + boilers[b].start_fuel_mwh * m.starts_per_day[b, d]
            )
            for d, day in enumerate(inputs.days)
        )
        cold = sum(
            float(inputs.transitions_per_year[i, j]) * boilers[b].cold_start_fuel_mwh * m.cold_start[b, i, j]
            for x, i, j in pairs
            if x == b
        )
        return running + cold

    m.fuel_today = pyo.Expression(m.B, rule=yearly_fuel)
    """Fuel at today's pressure [MWh/a]."""
    most = [_most_fuel(inputs, boiler) for boiler in boilers]
    m.fuel_at = pyo.Var(m.B, m.P, bounds=lambda _, b, p: (0, most[b]))
    m.fuel_sum = pyo.Constraint(m.B, rule=lambda m, b: sum(m.fuel_at[b, p] for p in m.P) == m.fuel_today[b])
    if len(m.P) > 1:
        segments = inputs.vessel_segments

        def at_pressure(m: Any, b: int, p: int) -> Any:
            chosen = sum(m.bought[j] for j in m.J if segments[j].pressure == p)
            none = 1 - sum(m.bought[j] for j in m.J) if p == 0 else 0
            return m.fuel_at[b, p] <= most[b] * (chosen + none)

        m.fuel_pressure = pyo.Constraint(m.B, m.P, rule=at_pressure)
    m.fuel = pyo.Expression(
        m.B, rule=lambda m, b: sum(boilers[b].pressure_factor[p] * m.fuel_at[b, p] for p in m.P)
    )
    m.credit_at = pyo.Var(m.J, bounds=(0, _most_charge(inputs, boilers)))
    m.credit_pressure = pyo.Constraint(
        m.J, rule=lambda m, j: m.credit_at[j] <= _most_charge(inputs, boilers) * m.bought[j]
    )
    if len(m.J):
        m.credit_sum = pyo.Constraint(
            expr=sum(m.credit_at[j] for j in m.J)
            == sum(
                day.days_per_year * step * sum(m.charge[d, t] for t in m.T)
                for d, day in enumerate(inputs.days)
            )
        )


def _most_fuel(inputs: PlanInputs, boiler: PlanBoiler) -> float:
    """An upper bound on a boiler's yearly fuel [MWh/a]."""
    hours = sum(day.days_per_year * len(day.demand_t_h) * inputs.step_h for day in inputs.days)
    starts = 1.0 / inputs.step_h + max(max(x.starts_per_h_low, x.starts_per_h_high) for x in boiler.modes)
    per_hour = max(max(x.fuel_mwh_h) for x in boiler.modes) + boiler.start_fuel_mwh * starts
    return hours * per_hour + float(np.sum(inputs.transitions_per_year)) * boiler.cold_start_fuel_mwh


def _most_charge(inputs: PlanInputs, boilers: list[PlanBoiler]) -> float:
    """An upper bound on the steam charged in a year [t/a]."""
    hours = sum(day.days_per_year * len(day.demand_t_h) * inputs.step_h for day in inputs.days)
    return hours * sum(boiler.rated_t_h for boiler in boilers)


def _add_objective(m: Any, inputs: PlanInputs, boilers: list[PlanBoiler]) -> None:
    """Net present cost [k], kept by its parts."""
    rates = inputs.rates
    segments = inputs.vessel_segments
    weight = [day.days_per_year for day in inputs.days]
    m.boiler_cost = pyo.Expression(
        expr=sum(boiler.fixed_cost_k * m.standing[b] for b, boiler in enumerate(boilers))
    )
    m.vessel_cost = pyo.Expression(
        expr=linear_in_volume(m, [x.fixed_cost_k for x in segments], segments)
        + inputs.vessel_maintenance_k * sum(m.bought[j] for j in m.J)
    )
    m.fuel_cost = pyo.Expression(
        expr=rates.fuel_k_mwh
        * (sum(m.fuel[b] for b in m.B) - sum(segments[j].charging_credit_mwh_t * m.credit_at[j] for j in m.J))
    )
    m.steam_cost = pyo.Expression(
        expr=rates.steam_k_t * sum(weight[d] * m.steam_per_day[b, d] for b in m.B for d in m.D)
    )
    m.start_cost = pyo.Expression(
        expr=sum(
            boiler.start_wear_k * sum(weight[d] * m.starts_per_day[b, d] for d in m.D)
            for b, boiler in enumerate(boilers)
        )
    )
    m.unmet_cost = pyo.Expression(
        expr=rates.unmet_k_t * sum(weight[d] * inputs.step_h * sum(m.unmet[d, t] for t in m.T) for d in m.D)
    )
    m.net_present_cost = pyo.Objective(
        expr=m.boiler_cost + m.vessel_cost + m.fuel_cost + m.steam_cost + m.start_cost + m.unmet_cost,
        sense=pyo.minimize,
    )
