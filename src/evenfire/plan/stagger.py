"""The least peak, or the least storage need, that shifting batch starts within their limits can reach.

One start is one decision for every day on which its shifts run, so that people can follow it. Days are
told apart only by which shifts run on them; each kind of day carries the highest other demand that any
of its days has at each step, so the peak found is not passed on any of them.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import Enum
from itertools import pairwise
from typing import Any

import numpy as np
import pyomo.environ as pyo
from numpy.typing import NDArray

from evenfire.plan.compiled import compiled
from evenfire.plan.milp import MilpResult, solve
from evenfire.plan.outcome import Has, Stop

FloatArray = NDArray[np.float64]
RunningShift = tuple[str, int]
"""A shift and how many days ago it began."""

_SLACK = 1e-6
"""By how much the aim may be missed where starts are then moved as little as can be [t/h or t]."""


class StaggerAim(Enum):
    """What shifting starts is to make small."""

    PEAK = "peak"
    STORAGE = "storage need at a boiler capacity"


@dataclass(frozen=True, slots=True, kw_only=True)
class ShiftableStart:
    """One start of a batch and where it may be put."""

    group: str
    """Starts of one group are alike and stay in their order."""
    today_h: float
    """Start after the start of the shift [h]."""
    positions_h: tuple[float, ...]
    """Starts it may have, rising, today's among them [h]."""
    load_t_h: dict[str, FloatArray] = field(repr=False)
    """By shift: demand per position and step from midnight of the day on which the shift starts,
    shape (positions, days × steps per day)."""
    resource: str
    """Resource of which a unit is held; empty for none."""
    held: dict[str, FloatArray] = field(repr=False)
    """By shift: units held, 0 or 1, shape as ``load_t_h``."""


@dataclass(frozen=True, slots=True, kw_only=True)
class DayKind:
    """Days on which the same shifts run."""

    running: frozenset[RunningShift]
    other_t_h: FloatArray = field(repr=False)
    """Highest demand of everything that is not shifted, shape (steps per day,)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class StaggerProblem:
    """Starts to be shifted, the days on which they count, and what they share."""

    step_h: float
    starts: tuple[ShiftableStart, ...]
    days: tuple[DayKind, ...]
    units: dict[str, int]
    """Units of each resource."""
    capacity_t_h: float
    """Boiler capacity at which storage need is reckoned."""


@dataclass(frozen=True, slots=True, kw_only=True)
class StaggerOutcome:
    """Where the starts are put and how far that is proven."""

    stop: Stop
    has: Has
    starts_h: tuple[float, ...]
    """Chosen start of each shiftable start [h]; empty without a result."""
    value: float | None
    """Peak [t/h] or storage need [t] reached over all kinds of days."""
    bound: float | None
    """Valid lower bound of it."""


def staggered_starts(
    problem: StaggerProblem, aim: StaggerAim, *, gap: float, time_limit_s: float
) -> StaggerOutcome:
    """Starts with the least peak or storage need, moved no further than that asks for.

    Parameters
    ----------
    problem : StaggerProblem
    aim : StaggerAim
    gap : float
        Relative gap at which to stop [1].
    time_limit_s : float
        For each of the two solves [s].

    Returns
    -------
    StaggerOutcome
        ``INFEASIBLE`` where no choice of starts leaves every batch a unit of its resource.

    Notes
    -----
    Mixed-integer model: binary x_ip puts start i at position p, demand of kind k at step t is
    ``other_kt + sum_ip load_ipkt x_ip``, and the peak is not below any of it. For the storage need the
    level obeys ``L_kt >= L_k,t-1 + step (demand - capacity)``, each kind of day following itself. A second
    solve keeps the value and makes the sum of all shifts least. Batches take their mean durations.
    """
    model = _model(problem, aim)
    result = solve(compiled(model), gap=gap, time_limit_s=time_limit_s)
    if result.point is None or result.cost_k is None:
        return StaggerOutcome(
            stop=result.stop, has=Has.NOTHING, starts_h=(), value=None, bound=result.bound_k
        )
    model.value.setub(result.cost_k + _SLACK)
    model.least_value.deactivate()
    model.least_shift.activate()
    moved = solve(compiled(model), gap=gap, time_limit_s=time_limit_s)
    chosen = _chosen(problem, model, moved if moved.point is not None else result)
    value = reached(problem, aim, chosen)
    return StaggerOutcome(
        stop=result.stop,
        has=Has.PLAN,
        starts_h=tuple(start.positions_h[at] for start, at in zip(problem.starts, chosen, strict=True)),
        value=value,
        bound=None if result.bound_k is None else min(result.bound_k, value),
    )


def reached(problem: StaggerProblem, aim: StaggerAim, positions: tuple[int, ...]) -> float:
    """Peak [t/h] or storage need [t] with every start at the position of this number."""
    worst = 0.0
    for day in problem.days:
        demand = day.other_t_h.copy()
        for start, at in zip(problem.starts, positions, strict=True):
            demand += _on_day(problem, start.load_t_h, day)[at]
        if aim is StaggerAim.PEAK:
            worst = max(worst, float(demand.max()))
            continue
        level = 0.0
        for lacking in np.tile(demand - problem.capacity_t_h, 2):
            level = max(0.0, level + float(lacking) * problem.step_h)
            worst = max(worst, level)
    return worst


def _on_day(problem: StaggerProblem, by_shift: dict[str, FloatArray], day: DayKind) -> FloatArray:
    """Share of a start in one day, by position, shape (positions, steps per day)."""
    steps = len(day.other_t_h)
    total = np.zeros((len(next(iter(by_shift.values()))), steps))
    for shift, lag in day.running:
        if shift in by_shift:
            part = by_shift[shift][:, lag * steps : (lag + 1) * steps]
            total[:, : part.shape[1]] += part
    return total


def _model(problem: StaggerProblem, aim: StaggerAim) -> Any:
    m: Any = pyo.ConcreteModel("staggered starts")
    starts, days = problem.starts, problem.days
    pairs = [(i, p) for i, start in enumerate(starts) for p in range(len(start.positions_h))]
    m.at = pyo.Var(pairs, domain=pyo.Binary)
    m.one = pyo.ConstraintList()
    for i, start in enumerate(starts):
        m.one.add(sum(m.at[i, p] for p in range(len(start.positions_h))) == 1)
    m.value = pyo.Var(bounds=(0.0, _most(problem)))
    m.rows = pyo.ConstraintList()
    load = [[_on_day(problem, start.load_t_h, day) for start in starts] for day in days]
    held = [[_on_day(problem, start.held, day) for start in starts] for day in days]
    if aim is StaggerAim.STORAGE:
        steps = len(days[0].other_t_h)
        m.level = pyo.Var(range(len(days)), range(steps), bounds=(0.0, _most(problem)))
    for k, day in enumerate(days):
        for t, other in enumerate(day.other_t_h):
            demand = float(other) + sum(
                float(load[k][i][p, t]) * m.at[i, p] for i, p in pairs if load[k][i][p, t]
            )
            if aim is StaggerAim.PEAK:
                m.rows.add(m.value >= demand)
            else:
                before = m.level[k, (t - 1) % len(day.other_t_h)]
                m.rows.add(m.level[k, t] >= before + problem.step_h * (demand - problem.capacity_t_h))
                m.rows.add(m.value >= m.level[k, t])
            for resource, units in problem.units.items():
                users = [(i, p) for i, p in pairs if starts[i].resource == resource and held[k][i][p, t]]
                if len({i for i, _ in users}) > units:
                    m.rows.add(sum(float(held[k][i][p, t]) * m.at[i, p] for i, p in users) <= units)
    for i, (first, second) in enumerate(pairwise(starts)):
        if first.group == second.group:
            m.rows.add(_start_h(m, i, first) <= _start_h(m, i + 1, second))
    m.least_value = pyo.Objective(expr=m.value)
    m.least_shift = pyo.Objective(
        expr=sum(abs(starts[i].positions_h[p] - starts[i].today_h) * m.at[i, p] for i, p in pairs)
    )
    m.least_shift.deactivate()
    return m


def _most(problem: StaggerProblem) -> float:
    """No peak [t/h] and no storage need [t] of a day is larger."""
    peak = max(
        float(day.other_t_h.max())
        + sum(float(_on_day(problem, start.load_t_h, day).max()) for start in problem.starts)
        for day in problem.days
    )
    hours = len(problem.days[0].other_t_h) * problem.step_h
    return peak * max(1.0, hours)


def _start_h(m: Any, i: int, start: ShiftableStart) -> Any:
    return sum(position * m.at[i, p] for p, position in enumerate(start.positions_h))


def _chosen(problem: StaggerProblem, model: Any, result: MilpResult) -> tuple[int, ...]:
    arrays = compiled(model)
    if result.point is not None:
        arrays.load(result.point)
    return tuple(
        max(range(len(start.positions_h)), key=lambda p: float(pyo.value(model.at[i, p])))
        for i, start in enumerate(problem.starts)
    )
