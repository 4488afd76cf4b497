"""Between a plan and the variables of the Pyomo model: ``extract`` and its inverse ``assign``."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
import pyomo.environ as pyo
from numpy.typing import NDArray

from evenfire.plan.inputs import PlanBoiler, PlanInputs
from evenfire.plan.outcome import DayDispatch, Plan


def extract(model: pyo.ConcreteModel, inputs: PlanInputs) -> Plan:
    """The plan held by the model's variables."""
    m: Any = model
    names = m.boiler_names
    standing = [b for b in m.B if m.standing[b].value > 0.5]
    segment = next((j for j in m.J if m.bought[j].value > 0.5), None)
    steps = len(m.T)

    def series(variable: Any, d: int) -> np.ndarray[Any, np.dtype[np.float64]]:
        return np.array([pyo.value(variable[d, t]) for t in range(steps)], dtype=float)

    dispatch = []
    for d in m.D:
        service = np.array([m.in_service[b, d].value > 0.5 for b in standing])
        mode = np.full((len(standing), steps), -1, dtype=np.int64)
        output = np.zeros((len(standing), steps))
        for row, b in enumerate(standing):
            count = len(inputs.boiler(names[b]).modes)
            for t in range(steps):
                for k in range(count):
                    if m.mode[b, k, d, t].value > 0.5:
                        mode[row, t] = k
                output[row, t] = pyo.value(m.output[b, d, t])
        dispatch.append(
            DayDispatch(
                in_service=service,
                mode=mode,
                output_t_h=output,
                start=burner_starts([inputs.boiler(names[b]) for b in standing], mode),
                stored_t=series(m.stored, d),
                charge_t_h=series(m.charge, d),
                discharge_t_h=series(m.discharge, d),
                unmet_t_h=series(m.unmet, d),
                vented_t_h=series(m.vented, d),
            )
        )
    return Plan(
        boilers=tuple(names[b] for b in standing),
        segment=segment,
        volume_m3=0.0 if segment is None else float(m.volume[segment].value),
        dispatch=tuple(dispatch),
    )


def burner_starts(boilers: Sequence[PlanBoiler], mode: NDArray[np.int64]) -> NDArray[np.bool_]:
    """Starts from not lit to lit, cyclic over the day, shape (boilers, steps)."""
    lit = np.zeros(mode.shape, dtype=bool)
    for row, boiler in enumerate(boilers):
        fires = [k for k, x in enumerate(boiler.modes) if x.lit]
        lit[row] = np.isin(mode[row], fires)
    return lit & ~np.roll(lit, 1, axis=1)


def assign(model: pyo.ConcreteModel, inputs: PlanInputs, plan: Plan) -> None:
    """Put `plan` into the model's variables, all of them, so that it can be judged or started from."""
    m: Any = model
    names = list(m.boiler_names)
    rows = {names.index(name): row for row, name in enumerate(plan.boilers)}
    steps = len(m.T)
    for variable in m.component_data_objects(pyo.Var):
        variable.set_value(0, skip_validation=True)
    for b in rows:
        m.standing[b].set_value(1)
    if plan.segment is not None:
        m.bought[plan.segment].set_value(1)
        m.volume[plan.segment].set_value(plan.volume_m3, skip_validation=True)
    for d, day in enumerate(plan.dispatch):
        for b, row in rows.items():
            m.in_service[b, d].set_value(int(day.in_service[row]))
            modes = inputs.boiler(names[b]).modes
            lit = np.array([k >= 0 and modes[k].lit for k in day.mode[row]])
            before = np.roll(lit, 1)
            for t in range(steps):
                m.start[b, d, t].set_value(int(lit[t] and not before[t]))
                m.stop[b, d, t].set_value(int(before[t] and not lit[t]))
                k = int(day.mode[row, t])
                if k < 0:
                    continue
                m.mode[b, k, d, t].set_value(1)
                left = float(day.output_t_h[row, t]) - modes[k].output_t_h[0]
                for i in range(len(modes[k].output_t_h) - 1):
                    width = modes[k].output_t_h[i + 1] - modes[k].output_t_h[i]
                    part = min(max(left, 0.0), width)
                    m.part[b, k, i, d, t].set_value(part, skip_validation=True)
                    left -= part
        for t in range(steps):
            m.stored[d, t].set_value(float(day.stored_t[t]), skip_validation=True)
            m.charge[d, t].set_value(float(day.charge_t_h[t]), skip_validation=True)
            m.discharge[d, t].set_value(float(day.discharge_t_h[t]), skip_validation=True)
            m.charging[d, t].set_value(int(day.charge_t_h[t] > day.discharge_t_h[t]))
            m.unmet[d, t].set_value(float(day.unmet_t_h[t]), skip_validation=True)
            m.vented[d, t].set_value(float(day.vented_t_h[t]), skip_validation=True)
    for b, i, j in m.BDD:
        rise = m.in_service[b, j].value - m.in_service[b, i].value
        m.cold_start[b, i, j].set_value(max(0, rise), skip_validation=True)
    pressure = 0 if plan.segment is None else inputs.vessel_segments[plan.segment].pressure
    for b in m.B:
        m.fuel_at[b, pressure].set_value(pyo.value(m.fuel_today[b]), skip_validation=True)
    if plan.segment is not None:
        charged = sum(
            inputs.days[d].days_per_year * inputs.step_h * float(day.charge_t_h.sum())
            for d, day in enumerate(plan.dispatch)
        )
        m.credit_at[plan.segment].set_value(charged, skip_validation=True)
