"""Lower bound and good schedule of one typical day for a fixed plant."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from math import ceil, floor
from typing import Any

import numpy as np
from numpy.typing import NDArray

from evenfire.plan.inputs import PlanBoiler, PlanRates
from evenfire.plan.recursion import joint_states, lap, path
from evenfire.plan.tables import StepCosts, step_costs

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]

_SNAP = 1e-9
_MOST_LAPS = 5
_SETTLING_LAPS = 2
_LAP_PROGRESS = 2e-5
"""Relative gain of the bound below which another lap is not worth it."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Store:
    """A vessel of known size as one day's dispatch sees it."""

    capacity_t: float
    release_t_h: float
    loss_t_h: float
    credit_k_t: float
    """Present cost saved per tonne charged a year [k]."""


NO_STORE = Store(capacity_t=0.0, release_t_h=0.0, loss_t_h=0.0, credit_k_t=0.0)


@dataclass(frozen=True, kw_only=True)
class DayProblem:
    """Dispatch of the boilers in service and one store over one cyclic day.

    Costs are present costs per yearly occurrence of the day [k].
    """

    demand_t_h: FloatArray
    step_h: float
    boilers: tuple[PlanBoiler, ...]
    pressure: int
    rates: PlanRates
    store: Store
    quantum_t: float
    most_states: int
    """Joint burner states told apart at most; without minimum times a bound is still valid."""

    @cached_property
    def _outward(self) -> StepCosts:
        return self._tables(outward=True)

    @cached_property
    def _inward(self) -> StepCosts:
        return self._tables(outward=False)

    def _tables(self, *, outward: bool) -> StepCosts:
        return step_costs(
            self.boilers, self.pressure, self.rates, self.step_h, self.quantum_t, outward=outward
        )

    def _whole_quanta(self) -> tuple[IntArray, FloatArray]:
        """Demand plus standing loss per step [quanta], rounded down cumulatively, and the exact one."""
        exact = (self.demand_t_h + self.store.loss_t_h) * self.step_h / self.quantum_t
        total = np.floor(np.concatenate([[0.0], np.cumsum(exact)]) + _SNAP).astype(np.int64)
        return np.diff(total), exact

    def lower_bound(self, potential_k: FloatArray | None = None) -> float:
        """A valid lower bound on the day's least cost [k].

        Laps of the cyclic day: for any function V of the state, the least of (lap(V) - V) over states
        never exceeds the cost of a day that ends where it began.

        Parameters
        ----------
        potential_k : array of shape (levels,), optional
            A function of stored steam common to days that follow each other. The bound is then that of
            the day's cost plus the potential at its start less that at its end, which cancel over all days.
        """
        demand, exact = self._whole_quanta()
        recursion = self._recursion(self._ages(), outward=True)
        # Charging is counted from the change of level on the grid; what standing loss and the rounding of
        # demand can shift in it is granted in advance.
        credit = self.store.credit_k_t * self.quantum_t
        loss = len(demand) * self.store.loss_t_h * self.step_h / self.quantum_t
        granted = abs(credit) * float(np.abs(exact - demand).sum()) + max(0.0, credit) * loss
        if potential_k is not None:
            value = np.tile(potential_k, (recursion.states, 1))
            return float((recursion.turned(value) - value).min()) - granted
        value = np.zeros((recursion.states, recursion.levels))
        best = -np.inf
        for _ in range(_MOST_LAPS):
            after = recursion.turned(value)
            reached = np.isfinite(after)
            bound = float((after[reached] - value[reached]).min())
            done = bound <= best + _LAP_PROGRESS * abs(bound)
            best = max(best, bound)
            if done:
                break
            value = _normalised(after)
        return best - granted

    def settled_potential(self) -> FloatArray:
        """What stored steam has cost at the end of a day that repeats [k], shape (levels,)."""
        potential: FloatArray = self._recursion(self._ages(), outward=True).settled().min(axis=0)
        return potential

    def _recursion(self, ages: tuple[IntArray, IntArray], *, outward: bool) -> _Recursion:
        demand, _ = self._whole_quanta()
        tables = self._outward if outward else self._inward
        off_ages, lit_ages = ages
        strides, lit_set = joint_states(off_ages, lit_ages)
        return _Recursion(
            states=len(lit_set),
            levels=self._levels(outward=outward),
            lit_set=lit_set,
            arguments=(
                demand,
                tables.costs,
                tables.most,
                tables.start,
                off_ages,
                lit_ages,
                strides,
                lit_set,
                self.rates.unmet_k_t * self.quantum_t,
                self.store.credit_k_t * self.quantum_t,
                self._discharge(outward=outward),
            ),
        )

    def _ages(self) -> tuple[IntArray, IntArray]:
        """Ages of burner states told apart: all that minimum times ask for, or none beyond the limit."""
        off_ages = np.array([boiler.minimum_off_steps for boiler in self.boilers], dtype=np.int64)
        lit_ages = np.array([boiler.minimum_firing_steps for boiler in self.boilers], dtype=np.int64)
        if np.prod(off_ages + lit_ages) > self.most_states:
            return np.ones_like(off_ages), np.ones_like(lit_ages)
        return off_ages, lit_ages

    def _minimum_times_kept(self, off_ages: IntArray, lit_ages: IntArray) -> bool:
        return all(
            off_ages[b] == boiler.minimum_off_steps and lit_ages[b] == boiler.minimum_firing_steps
            for b, boiler in enumerate(self.boilers)
        )

    def _levels(self, *, outward: bool) -> int:
        count = self.store.capacity_t / self.quantum_t
        return ceil(count - _SNAP) + 2 if outward else max(1, floor(count + _SNAP))

    def _discharge(self, *, outward: bool) -> int:
        if outward:
            fall = self.store.release_t_h + self.store.loss_t_h
            return ceil(fall * self.step_h / self.quantum_t - _SNAP) + 1
        return floor(self.store.release_t_h * self.step_h / self.quantum_t + _SNAP)

    def schedule(self, boundary_t: float | None = None) -> DaySchedule | None:
        """A good day on the grid that keeps minimum times.

        Parameters
        ----------
        boundary_t : float, optional
            Stored steam at both ends of the day, with every burner off there; else the day chooses its own.

        Returns
        -------
        DaySchedule or None
            None where the grid has no such day (the plan then looks elsewhere).
        """
        ages = self._ages()
        hold = 1
        if not self._minimum_times_kept(*ages):
            hold = max(max(x.minimum_firing_steps, x.minimum_off_steps) for x in self.boilers)
            ages = np.ones_like(ages[0]), np.ones_like(ages[1])
        offsets = sorted({0, hold // 2})
        found = [self._schedule(ages, hold, offset, boundary_t) for offset in offsets]
        kept = [schedule for schedule in found if schedule is not None]
        return min(kept, key=lambda x: x.cost_k) if kept else None

    def _schedule(
        self, ages: tuple[IntArray, IntArray], hold: int, offset: int, boundary_t: float | None
    ) -> DaySchedule | None:
        """One day whose burners change every ``hold`` steps at most."""
        demand, _ = self._whole_quanta()
        if len(demand) % hold:
            return None
        tables = self._inward
        recursion = self._recursion(ages, outward=False)
        if boundary_t is None:
            value = recursion.settled()
            if not np.isfinite(value).all():
                return None
            # Two days back from the cheapest state lies a state of the cycle that the days settle into.
            state = np.unravel_index(int(np.argmin(value)), value.shape)
            for _ in range(2):
                _, burners, stored = recursion.way(value, state, hold, offset)
                state = (burners[0], stored[0])
        else:
            oldest_off = sum(
                int(stride * (off - 1)) for stride, off in zip(recursion.strides, ages[0], strict=True)
            )
            level = min(int(boundary_t / self.quantum_t), recursion.levels - 1)
            state = (np.int64(oldest_off), np.int64(level))
        value = np.full((recursion.states, recursion.levels), np.inf)
        value[state] = 0.0
        cost, burners, stored = recursion.way(value, state, hold, offset)
        if not np.isfinite(cost):
            return None
        lit = recursion.lit_set[burners[1:]]
        steps = len(demand)
        mode = np.zeros((len(self.boilers), steps), dtype=np.int64)
        for t in range(steps):
            made = min(int(demand[t] + stored[t + 1] - stored[t]), int(tables.most[lit[t]]))
            for b in range(len(self.boilers)):
                fires = (lit[t] >> b) & 1
                mode[b, t] = tables.mode[b][fires][tables.split[lit[t], made, b]]
        return DaySchedule(
            cost_k=cost,
            mode=mode,
            charging=np.diff(stored) > 0,
            start_t=float(stored[0]) * self.quantum_t,
        )


@dataclass(frozen=True, slots=True, kw_only=True)
class DaySchedule:
    """States of one day found on the grid; outputs and levels are left to the linear programme."""

    cost_k: float
    mode: IntArray
    """Mode index per boiler in service and step."""
    charging: NDArray[np.bool_]
    start_t: float
    """Stored steam at the start of the day [t]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class _Recursion:
    """The compiled recursion with its arguments bound."""

    states: int
    levels: int
    lit_set: IntArray
    arguments: tuple[Any, ...]

    @property
    def strides(self) -> IntArray:
        strides: IntArray = self.arguments[6]
        return strides

    def turned(self, value: FloatArray) -> FloatArray:
        """One turn round the day."""
        after: FloatArray = lap(value, *self.arguments)
        return after

    def settled(self) -> FloatArray:
        """Cost of each state after a few days that repeat, infinite where none can be reached."""
        value = np.zeros((self.states, self.levels))
        for _ in range(_SETTLING_LAPS):
            after = self.turned(value)
            if not np.isfinite(after).any():
                return after
            value = _normalised(after)
        return value

    def way(
        self, value: FloatArray, last: tuple[Any, ...], hold: int, offset: int
    ) -> tuple[float, IntArray, IntArray]:
        """The cheapest day that ends in a state: cost, burner states and stored quanta."""
        cost, burners, stored = path(value, int(last[0]), int(last[1]), *self.arguments, hold, offset)
        return float(cost), burners, stored


def _normalised(value: FloatArray) -> FloatArray:
    """Finite costs from zero; states that cannot be reached cost what the dearest does."""
    reached = np.isfinite(value)
    settled: FloatArray = np.where(reached, value, value[reached].max()) - value[reached].min()
    return settled


def quantum_t(boilers: tuple[PlanBoiler, ...], step_h: float, wanted_t: float) -> float:
    """A quantum near `wanted_t` [t] that nearly divides smallest and largest lit outputs per step."""
    ends = [
        end * step_h
        for boiler in boilers
        for mode in boiler.modes
        if mode.lit
        for end in (mode.output_t_h[0], mode.output_t_h[-1])
    ]
    if not ends:
        return wanted_t
    first = ends[-1]
    best, best_miss = wanted_t, np.inf
    for count in range(max(1, ceil(first / (wanted_t * 1.25))), max(2, floor(first * 1.6 / wanted_t) + 1)):
        quantum = first / count
        miss = sum(min(end / quantum % 1.0, 1.0 - end / quantum % 1.0) for end in ends) * quantum
        if miss < best_miss - 1e-12:
            best, best_miss = quantum, miss
    return best
