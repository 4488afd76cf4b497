"""Operating a fixed plant over all days: lower bounds from rough to fine, and good states.

Days are cyclic each by itself, as typical days are. With ``joined`` they follow each other as in the
record: a common function of stored steam at midnight, added at the start and taken off at the end of
every day, cancels over the record, so the sum of the days' bounds is a bound of the record as a whole;
plans then start and end every day in one common state.
"""

from __future__ import annotations

from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass
from functools import partial
from itertools import combinations

import numpy as np
from numpy.typing import NDArray

from evenfire.plan.day import DayProblem, Store, quantum_t
from evenfire.plan.inputs import PlanInputs
from evenfire.plan.polish import FixedDay
from evenfire.plan.services import Service, cheapest_services
from evenfire.plan.tables import mode_costs_k_h

FloatArray = NDArray[np.float64]

QUANTA_T_PER_H = (0.5, 0.25, 0.125, 0.0625, 0.03125, 0.015625)
"""Wanted quantum per hour of step, from rough to fine bounds [t/h]."""
EXPECTED_LOSS = (1e-2, 4e-3, 1e-3, 4e-4, 2e-4, 1e-4)
"""What a bound at each quantum usually loses of the cost: decides whether to refine it or to split."""
_MOST_STATES = (1, 1, 64, 64, 64, 64)
"""Joint burner states told apart at each quantum; 1 leaves minimum times out of the bound."""
_MOST_CELLS = 30_000
"""Joint burner states times levels up to which all states are told apart even if they are more."""
USUAL_STAGE = 1
"""Index of the quantum that plans of long records are made on; others one finer."""
_THREADS = 2


@dataclass(frozen=True, slots=True, kw_only=True)
class Plant:
    """What operation depends on."""

    boilers: tuple[str, ...]
    pressure: int
    store: Store


class Operation:
    """Bounds and states of operation for one site; bounds are kept and never computed twice.

    Parameters
    ----------
    inputs : PlanInputs
    joined : bool
        Whether the days follow each other as in the record.
    """

    def __init__(self, inputs: PlanInputs, *, joined: bool) -> None:
        self._inputs = inputs
        self._joined = joined
        self._plan_stage = USUAL_STAGE if joined else USUAL_STAGE + 1
        self._bounds: dict[tuple[int, Service, int, Store, int], float] = {}
        self._potentials: dict[tuple[Plant, int], FloatArray] = {}
        self._steam_k_t: dict[tuple[Service, int], float] = {}

    def least_steam_cost_k_t(self, boilers: Service, pressure: int) -> float:
        """Best average cost of a tonne over every mode of some boilers, or its price when not met."""
        key = (boilers, pressure)
        if key not in self._steam_k_t:
            least = self._inputs.rates.unmet_k_t
            for name in boilers:
                boiler = self._inputs.boiler(name)
                for mode in boiler.modes:
                    output, cost = mode_costs_k_h(boiler, mode, pressure, self._inputs.rates)
                    made = output > 0
                    least = min(least, float((cost[made] / output[made]).min()))
            self._steam_k_t[key] = least
        return self._steam_k_t[key]

    def bound(self, plant: Plant, stage: int) -> tuple[float, tuple[Service, ...]]:
        """Lower bound of a year's operation [k] and the hot boilers per day that attain it.

        Parameters
        ----------
        plant : Plant
        stage : int
            Index of the quantum.
        """
        inputs = self._inputs
        services = [
            chosen for size in range(len(plant.boilers) + 1) for chosen in combinations(plant.boilers, size)
        ]
        costs = tuple(
            {service: self._rough_day_k(plant, day, service) for service in services}
            for day in range(len(inputs.days))
        )
        cold_start_k = {
            name: inputs.rates.fuel_k_mwh
            * inputs.boiler(name).pressure_factor[plant.pressure]
            * inputs.boiler(name).cold_start_fuel_mwh
            for name in plant.boilers
        }
        proven: set[tuple[int, Service]] = set()
        if self._joined:
            self._potential(plant, stage)
        while True:
            total, best = cheapest_services(costs, cold_start_k, inputs.transitions_per_year)
            missing = [pair for pair in enumerate(best) if pair not in proven]
            if not missing:
                return total, best
            with ThreadPoolExecutor(_THREADS) as pool:
                for (day, service), value in zip(
                    missing, pool.map(partial(self._day_bound, plant, stage), missing), strict=True
                ):
                    costs[day][service] = max(costs[day][service], value)
                    proven.add((day, service))

    def day_bounds_k(self, plant: Plant, services: tuple[Service, ...], stage: int) -> FloatArray:
        """Lower bound of operating each day once with its boilers hot [k], shape (days,)."""
        weights = np.array([day.days_per_year for day in self._inputs.days])
        yearly = [self._day_bound(plant, stage, which) for which in enumerate(services)]
        bounds: FloatArray = np.array(yearly) / weights
        return bounds

    def states(self, plant: Plant, services: tuple[Service, ...]) -> tuple[FixedDay, ...] | None:
        """Good states of every day for a plant with its true vessel; None where the grid has none."""
        boilers = [self._inputs.boiler(name) for name in plant.boilers]
        boundary = self._boundary_t(plant, services) if self._joined else None
        with ThreadPoolExecutor(_THREADS) as pool:
            schedules = list(
                pool.map(
                    lambda pair: self._problem(plant, pair[0], pair[1], self._plan_stage).schedule(boundary),
                    enumerate(services),
                )
            )
        days = []
        for service, schedule, day in zip(services, schedules, self._inputs.days, strict=True):
            if schedule is None:
                return None
            mode = np.full((len(boilers), len(day.demand_t_h)), -1, dtype=np.int64)
            for row, boiler in enumerate(boilers):
                if boiler.name in service:
                    mode[row] = schedule.mode[service.index(boiler.name)]
            days.append(
                FixedDay(
                    in_service=tuple(boiler.name in service for boiler in boilers),
                    mode=mode,
                    charging=schedule.charging,
                    start_t=boundary,
                )
            )
        return tuple(days)

    def _problem(self, plant: Plant, day: int, service: Service, stage: int) -> DayProblem:
        inputs = self._inputs
        wanted = QUANTA_T_PER_H[stage] * inputs.step_h
        if plant.store.capacity_t == 0.0:
            wanted /= 8.0
        divided = plant.boilers if self._joined else service
        quantum = quantum_t(tuple(inputs.boiler(name) for name in divided), inputs.step_h, wanted)
        most_states = _MOST_STATES[stage]
        if most_states > 1 or plant.store.capacity_t == 0.0:
            most_states = max(most_states, int(_MOST_CELLS / (2 + plant.store.capacity_t / quantum)))
        return DayProblem(
            demand_t_h=inputs.days[day].demand_t_h,
            step_h=inputs.step_h,
            boilers=tuple(inputs.boiler(name) for name in service),
            pressure=plant.pressure,
            rates=inputs.rates,
            store=plant.store,
            quantum_t=quantum,
            most_states=most_states,
        )

    def _day_bound(self, plant: Plant, stage: int, which: tuple[int, Service]) -> float:
        """Least cost of one day with these boilers hot, weighted by its days a year [k]."""
        day, service = which
        key = (day, service, plant.pressure, plant.store, stage)
        if key not in self._bounds:
            problem = self._problem(plant, day, service, stage)
            potential = self._potential(plant, stage) if self._joined else None
            self._bounds[key] = self._inputs.days[day].days_per_year * problem.lower_bound(potential)
        return self._bounds[key]

    def _potential(self, plant: Plant, stage: int) -> FloatArray:
        """What stored steam is worth at midnight [k by quantum]: settled on the day of most steam."""
        if (plant, stage) not in self._potentials:
            heaviest = int(np.argmax([day.demand_t_h.sum() for day in self._inputs.days]))
            problem = self._problem(plant, heaviest, plant.boilers, stage)
            self._potentials[plant, stage] = problem.settled_potential()
        return self._potentials[plant, stage]

    def _boundary_t(self, plant: Plant, services: tuple[Service, ...]) -> float:
        """Stored steam at every midnight of a plan: that of the day of median steam by itself."""
        totals = [float(day.demand_t_h.sum()) for day in self._inputs.days]
        middle = int(np.argsort(totals)[len(totals) // 2])
        schedule = self._problem(plant, middle, services[middle], self._plan_stage).schedule(None)
        return 0.0 if schedule is None else schedule.start_t

    def _rough_day_k(self, plant: Plant, day: int, service: Service) -> float:
        """A cheap bound on a day: best average cost, and what the boilers cannot make is not met.

        Where days follow each other a day may begin with a full vessel and end with an empty one.
        """
        inputs = self._inputs
        demand = inputs.days[day].demand_t_h
        most = sum(inputs.boiler(name).rated_t_h for name in service)
        given = plant.store.capacity_t if self._joined else 0.0
        energy = max(0.0, float(demand.sum()) * inputs.step_h - given)
        short = max(0.0, energy - most * len(demand) * inputs.step_h)
        credit = max(0.0, plant.store.credit_k_t)
        least = (energy - short) * (self.least_steam_cost_k_t(service, plant.pressure) - credit)
        least += short * (inputs.rates.unmet_k_t - credit)
        return inputs.days[day].days_per_year * least
