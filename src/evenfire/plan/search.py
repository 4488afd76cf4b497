"""Search over boilers, window and volume with valid bounds: the exact method.

A node is a set of boilers, a group of pressure windows (none without a vessel) and a range of steam
capacities. Its bound adds the least fixed cost at the small end to the least operating cost with a store
at least as good as any of the group's at the large end: operation never gets dearer with a better store.
Bounds are refined from cheap to dear, the node with the least bound first. docs/method.md proves each step.
"""

from __future__ import annotations

import heapq
import time
from dataclasses import dataclass, field, replace
from itertools import combinations, count

import numpy as np

from evenfire.plan.day import NO_STORE, Store
from evenfire.plan.inputs import (
    AlternativeRules,
    PlanInputs,
    VesselUse,
    WindowCurves,
    window_curves,
)
from evenfire.plan.operation import EXPECTED_LOSS, QUANTA_T_PER_H, USUAL_STAGE, Operation, Plant
from evenfire.plan.outcome import Has, Plan, PlanOutcome, Progress, Stop, Watcher
from evenfire.plan.polish import plan_cost_k, polished
from evenfire.plan.services import Service

_NARROWEST_M3 = 0.25
_FEWEST_JOINED_DAYS = 13
"""From this number of days on a plan keeps the volume of a node's middle; its days are polished singly."""
_TRIED_APART = (1.06, 1.01)
"""Ratio of volumes that are planned anew: on a rough grid where a plan may move its volume; else."""
_MOST_FRUITLESS_TRIES = 24
_LARGER_VESSELS = (1.25, 1.6, 2.0)
_SHORTLIST_MARGIN = 0.03
"""Plans up to this much dearer than the best are worth a replay [1]."""
_SHORTLIST_LENGTH = 6


@dataclass(frozen=True, slots=True, kw_only=True)
class _Reach:
    """Volumes of one window that a node covers, with the fixed cost at both ends."""

    window: int
    low_m3: float
    high_m3: float
    low_k: float
    high_k: float


@dataclass(frozen=True, slots=True, kw_only=True)
class _Node:
    """Boilers, windows and range of steam capacities, with the bound proven so far."""

    boilers: tuple[str, ...]
    reaches: tuple[_Reach, ...]
    """Empty without a vessel."""
    low_t: float
    high_t: float
    operation_k: float
    """Lower bound of operation."""
    bound_k: float
    stage: int


@dataclass(slots=True)
class _Incumbent:
    plan: Plan | None = None
    cost_k: float = float("inf")
    tried: set[tuple[tuple[str, ...], int | None, int]] = field(default_factory=set)
    found: list[tuple[float, Plan]] = field(default_factory=list)


class Search:
    """One alternative's search; construct, then ``run``.

    Parameters
    ----------
    inputs : PlanInputs
    rules : AlternativeRules
    known : tuple of Plan
        Plans of other alternatives; those that these rules allow are starting points.
    joined : bool
        Whether the days follow each other as in the record, instead of each being cyclic by itself.
    operation : Operation, optional
        Of the same inputs, with the bounds that searches of other alternatives have proven.
    """

    def __init__(
        self,
        inputs: PlanInputs,
        rules: AlternativeRules,
        known: tuple[Plan, ...] = (),
        *,
        joined: bool = False,
        operation: Operation | None = None,
    ) -> None:
        self._inputs = inputs
        self._rules = rules
        self._known = known
        self._windows = window_curves(inputs.vessel_segments)
        self._operation = Operation(inputs, joined=joined) if operation is None else operation
        self._joined = joined
        self._best = _Incumbent()
        self._begin = time.monotonic()

    def run(self, gap: float, time_limit_s: float, watch: Watcher | None = None) -> PlanOutcome:
        """Search until the gap is proven or time is up; Ctrl-C ends it with what it has."""
        self._begin = time.monotonic()
        order = count()
        queue: list[tuple[float, int, _Node]] = [(node.bound_k, next(order), node) for node in self._roots()]
        heapq.heapify(queue)
        if not queue:
            return self._outcome(Stop.INFEASIBLE, None)
        for plan in self._known:
            if self.allows(plan):
                self._offer(plan)
        stop = Stop.GAP_REACHED
        closed = float("inf")
        try:
            while queue:
                bound = min(queue[0][0], closed)
                self._report(watch, bound, queue[0][2])
                if self._within(gap, bound) or self._fruitless():
                    break
                if time.monotonic() - self._begin > time_limit_s:
                    stop = Stop.TIME_LIMIT
                    break
                _, _, node = heapq.heappop(queue)
                for child in self._refined(node):
                    if child is None:
                        closed = min(closed, node.bound_k)
                    elif child.bound_k < self._best.cost_k:
                        heapq.heappush(queue, (child.bound_k, next(order), child))
            else:
                if self._best.plan is None and closed == float("inf"):
                    return self._outcome(Stop.INFEASIBLE, None)
        except KeyboardInterrupt:
            stop = Stop.INTERRUPTED
        bound = min([closed, self._best.cost_k, *(entry[0] for entry in queue)])
        if stop is Stop.GAP_REACHED and not self._within(gap, bound):
            stop = Stop.SOLVER_LIMIT
        return replace(self._outcome(stop, bound), shortlist=self._shortlist())

    def _fruitless(self) -> bool:
        """Whether no plan came of many tries, as where ramps bind: the whole model then does better."""
        return self._best.plan is None and len(self._best.tried) >= _MOST_FRUITLESS_TRIES

    def _within(self, gap: float, bound: float) -> bool:
        cost = self._best.cost_k
        return bool(np.isfinite(cost)) and cost - bound <= gap * abs(cost)

    def _outcome(self, stop: Stop, bound: float | None) -> PlanOutcome:
        plan = self._best.plan
        return PlanOutcome(
            alternative=self._rules.name,
            stop=stop,
            has=Has.NOTHING if plan is None else Has.PLAN,
            cost_k=None if plan is None else self._best.cost_k,
            bound_k=bound,
            plan=plan,
            largest_violation=0.0,
            solver="exact recursion with branch and bound",
            seconds=time.monotonic() - self._begin,
        )

    def _report(self, watch: Watcher | None, bound: float, node: _Node) -> None:
        if watch is None:
            return
        cost = self._best.cost_k
        vessel = f"{node.low_t:.1f} to {node.high_t:.1f} t stored" if node.reaches else "no vessel"
        watch(
            Progress(
                alternative=self._rules.name,
                cost_k=cost if np.isfinite(cost) else None,
                bound_k=bound,
                seconds=time.monotonic() - self._begin,
                stage=f"{len(node.boilers)} boilers, {vessel}",
            )
        )

    # --- the tree -------------------------------------------------------------------------------

    def _roots(self) -> list[_Node]:
        """One node per set of boilers and vessel segment that can meet the peaks."""
        inputs, rules = self._inputs, self._rules
        names = [x.name for x in inputs.boilers if x.name in rules.allowed]
        new = [name for name in names if not inputs.boiler(name).existing]
        old = [name for name in names if inputs.boiler(name).existing]
        optional = [name for name in old if name not in rules.required]
        kept = [name for name in old if name in rules.required]
        nodes = []
        for size in range(len(optional) + 1):
            for stay in combinations(optional, size):
                for number in range(rules.fewest_new, min(rules.most_new, len(new)) + 1):
                    for bought in combinations(new, number):
                        chosen = {*kept, *stay, *bought}
                        boilers = tuple(name for name in names if name in chosen)
                        nodes += self._vessel_nodes(boilers)
        return nodes

    def _vessel_nodes(self, boilers: tuple[str, ...]) -> list[_Node]:
        nodes = []
        if self._rules.vessel is not VesselUse.REQUIRED and self._adequate(boilers, None, 0.0):
            plant = Plant(boilers=boilers, pressure=0, store=NO_STORE)
            nodes.append(self._node(boilers, (), 0.0, 0.0, self._hull_k(plant), 0))
        if self._rules.vessel is VesselUse.NONE:
            return nodes
        fitting = tuple(
            number
            for number, curves in self._windows.items()
            if all(self._inputs.boiler(name).pressure_allowed[curves.pressure] for name in boilers)
            and self._adequate(boilers, curves, float(curves.volume_m3[-1]))
        )
        for windows in self._comparable(boilers, fitting):
            all_curves = [self._windows[number] for number in windows]
            low = min(x.at(x.capacity_t, self._smallest_adequate_m3(boilers, x)) for x in all_curves)
            high = max(float(x.capacity_t[-1]) for x in all_curves)
            root = self._vessel_node(boilers, windows, low, high, -np.inf, 0)
            nodes.append(self._priced(root, self._hull_k(self._plant(root))))
        return nodes

    def _comparable(self, boilers: tuple[str, ...], windows: tuple[int, ...]) -> list[tuple[int, ...]]:
        """The windows in groups that have a cheapest boiler pressure each: all together where it can be."""
        if not windows:
            return []
        if self._cheapest_pressure(boilers, windows) is not None:
            return [windows]
        pressures = sorted({self._windows[number].pressure for number in windows})
        return [
            tuple(number for number in windows if self._windows[number].pressure == pressure)
            for pressure in pressures
        ]

    def _cheapest_pressure(self, boilers: tuple[str, ...], windows: tuple[int, ...]) -> int | None:
        """The windows' boiler pressure at which no boiler's fuel costs more than at any other of them."""
        pressures = sorted({self._windows[number].pressure for number in windows})
        rate = self._inputs.rates.fuel_k_mwh
        costs = np.array(
            [
                [rate * self._inputs.boiler(name).pressure_factor[pressure] for pressure in pressures]
                for name in boilers
            ]
        ).reshape(len(boilers), len(pressures))
        cheapest = np.flatnonzero((costs <= costs.min(axis=1, keepdims=True)).all(axis=0))
        return pressures[cheapest[0]] if len(cheapest) else None

    def _adequate(self, boilers: tuple[str, ...], curves: WindowCurves | None, volume: float) -> bool:
        if not self._rules.adequate:
            return True
        firm = sum(self._inputs.boiler(name).rated_t_h for name in boilers)
        capacity = release = 0.0
        if curves is not None:
            capacity = curves.at(curves.capacity_t, volume)
            release = curves.at(curves.release_t_h, volume)
        tolerance = 1e-9
        return firm + release >= self._inputs.peak_t_h - tolerance and all(
            capacity + cut.duration_h * firm >= cut.energy_t - tolerance for cut in self._inputs.cuts
        )

    def _smallest_adequate_m3(self, boilers: tuple[str, ...], curves: WindowCurves) -> float:
        """Smallest volume whose capacity and release meet the peaks: both rise with volume."""
        low = float(curves.volume_m3[0])
        if not self._rules.adequate:
            return low
        firm = sum(self._inputs.boiler(name).rated_t_h for name in boilers)
        stored = max((cut.energy_t - cut.duration_h * firm for cut in self._inputs.cuts), default=0.0)
        needs = ((curves.release_t_h, self._inputs.peak_t_h - firm), (curves.capacity_t, stored))
        return max(low, *(float(np.interp(need, values, curves.volume_m3)) for values, need in needs))

    def _vessel_node(
        self,
        boilers: tuple[str, ...],
        windows: tuple[int, ...],
        low_t: float,
        high_t: float,
        operation_k: float,
        stage: int,
    ) -> _Node:
        """The node of those windows that have adequate volumes in a range of steam capacities."""
        reaches = []
        for number in windows:
            curves = self._windows[number]
            low = max(
                self._smallest_adequate_m3(boilers, curves),
                float(np.interp(low_t, curves.capacity_t, curves.volume_m3)),
            )
            high = float(np.interp(high_t, curves.capacity_t, curves.volume_m3))
            if low > high or curves.capacity_t[-1] < low_t:
                continue
            reaches.append(
                _Reach(
                    window=number,
                    low_m3=low,
                    high_m3=high,
                    low_k=curves.at(curves.fixed_cost_k, low),
                    high_k=curves.at(curves.fixed_cost_k, high),
                )
            )
        return self._node(boilers, tuple(reaches), low_t, high_t, operation_k, stage)

    def _node(
        self,
        boilers: tuple[str, ...],
        reaches: tuple[_Reach, ...],
        low_t: float,
        high_t: float,
        operation_k: float,
        stage: int,
    ) -> _Node:
        node = _Node(
            boilers=boilers,
            reaches=reaches,
            low_t=low_t,
            high_t=high_t,
            operation_k=-np.inf,
            bound_k=-np.inf,
            stage=stage,
        )
        return self._priced(node, operation_k)

    def _priced(self, node: _Node, operation_k: float) -> _Node:
        """A node with a bound of its operation, if that is better than what it had."""
        operation_k = max(operation_k, node.operation_k)
        return replace(node, operation_k=operation_k, bound_k=operation_k + self._fixed_k(node))

    def _refined(self, node: _Node) -> list[_Node | None]:
        """The node with a better bound, or its parts; None marks one that cannot be refined."""
        if node.stage:
            loss_k = EXPECTED_LOSS[node.stage - 1] * node.bound_k
            last = node.stage == len(QUANTA_T_PER_H)
            if self._width_k(node) > loss_k and not self._narrow(node):
                return [*self._halves(node)]
            if len(node.reaches) > 1 and (last or self._spread_k(node) > loss_k):
                return [*self._groups(node)]
            if last:
                return [None]
        operation_k, services = self._operation.bound(self._plant(node), node.stage)
        better = self._worthwhile(replace(self._priced(node, operation_k), stage=node.stage + 1))
        if better is None:
            return []
        near = self._width_k(better) <= 2 * EXPECTED_LOSS[USUAL_STAGE] * better.bound_k
        if near and better.stage > (USUAL_STAGE if self._joined else USUAL_STAGE + 1):
            self._try(better, services)
        return [better]

    def _worthwhile(self, node: _Node) -> _Node | None:
        """The node without the windows that cannot be part of a better plan than the best so far."""
        if node.bound_k >= self._best.cost_k:
            return None
        left = self._best.cost_k - node.operation_k - (self._fixed_k(node) - self._least_low_k(node))
        return replace(node, reaches=tuple(reach for reach in node.reaches if reach.low_k < left))

    def _halves(self, node: _Node) -> list[_Node]:
        """The smaller and the larger capacities of a node."""
        middle = (node.low_t + node.high_t) / 2
        windows = tuple(reach.window for reach in node.reaches)
        halves = [
            self._vessel_node(node.boilers, windows, low, high, node.operation_k, node.stage - 1)
            for low, high in ((node.low_t, middle), (middle, node.high_t))
        ]
        return [half for half in halves if half.reaches]

    def _groups(self, node: _Node) -> list[_Node]:
        """A node's windows by boiler pressure, or one by one where they share it."""
        by_pressure: dict[int, list[_Reach]] = {}
        for reach in node.reaches:
            by_pressure.setdefault(self._windows[reach.window].pressure, []).append(reach)
        groups = list(by_pressure.values()) if len(by_pressure) > 1 else [[reach] for reach in node.reaches]
        return [
            self._node(node.boilers, tuple(group), node.low_t, node.high_t, node.operation_k, node.stage - 1)
            for group in groups
        ]

    def _width_k(self, node: _Node) -> float:
        """How much dearer the largest vessel of a node is than the smallest [k]."""
        return max((reach.high_k - reach.low_k for reach in node.reaches), default=0.0)

    def _narrow(self, node: _Node) -> bool:
        return all(reach.high_m3 - reach.low_m3 <= _NARROWEST_M3 for reach in node.reaches)

    def _spread_k(self, node: _Node) -> float:
        """How much dearer fuel is at the dearest boiler pressure of a node's windows than at the cheapest."""
        factors = [
            [self._inputs.boiler(name).pressure_factor[pressure] for name in node.boilers]
            for pressure in {self._windows[reach.window].pressure for reach in node.reaches}
        ]
        spread = np.ptp(np.array(factors), axis=0).max(initial=0.0)
        return float(spread) * node.operation_k

    # --- bounds ---------------------------------------------------------------------------------

    def _least_low_k(self, node: _Node) -> float:
        return min((reach.low_k for reach in node.reaches), default=0.0)

    def _fixed_k(self, node: _Node) -> float:
        total = sum(self._inputs.boiler(name).fixed_cost_k for name in node.boilers)
        if node.reaches:
            total += self._least_low_k(node) + self._inputs.vessel_maintenance_k
        return total

    def _hull_k(self, plant: Plant) -> float:
        """Every tonne at the best average cost of any boiler, or not met."""
        inputs = self._inputs
        steam = sum(day.days_per_year * inputs.step_h * float(day.demand_t_h.sum()) for day in inputs.days)
        least = self._operation.least_steam_cost_k_t(plant.boilers, plant.pressure)
        return steam * (least - max(0.0, plant.store.credit_k_t))

    def _plant(self, node: _Node) -> Plant:
        """A plant whose operation costs no more than that of any plant of a node."""
        if not node.reaches:
            return Plant(boilers=node.boilers, pressure=0, store=NO_STORE)
        pressure = self._cheapest_pressure(node.boilers, tuple(reach.window for reach in node.reaches))
        if pressure is None:
            raise AssertionError("windows without a cheapest boiler pressure are never in one group")
        ends = [(self._windows[reach.window], reach) for reach in node.reaches]
        return Plant(
            boilers=node.boilers,
            pressure=pressure,
            store=Store(
                capacity_t=max(curves.at(curves.capacity_t, reach.high_m3) for curves, reach in ends),
                release_t_h=max(curves.at(curves.release_t_h, reach.high_m3) for curves, reach in ends),
                loss_t_h=min(curves.at(curves.loss_t_h, reach.low_m3) for curves, reach in ends),
                credit_k_t=max(
                    self._inputs.rates.fuel_k_mwh * curves.charging_credit_mwh_t for curves, _ in ends
                ),
            ),
        )

    def _plant_at(self, boilers: tuple[str, ...], window: int | None, volume_m3: float) -> Plant:
        """The plant with one vessel."""
        if window is None:
            return Plant(boilers=boilers, pressure=0, store=NO_STORE)
        curves = self._windows[window]
        return Plant(
            boilers=boilers,
            pressure=curves.pressure,
            store=Store(
                capacity_t=curves.at(curves.capacity_t, volume_m3),
                release_t_h=curves.at(curves.release_t_h, volume_m3),
                loss_t_h=curves.at(curves.loss_t_h, volume_m3),
                credit_k_t=self._inputs.rates.fuel_k_mwh * curves.charging_credit_mwh_t,
            ),
        )

    # --- plans ----------------------------------------------------------------------------------

    def allows(self, plan: Plan) -> bool:
        """Whether these rules allow a plan of another alternative."""
        rules, inputs = self._rules, self._inputs
        new = sum(not inputs.boiler(name).existing for name in plan.boilers)
        names = set(plan.boilers)
        segment = None if plan.segment is None else inputs.vessel_segments[plan.segment]
        return (
            rules.required <= names <= rules.allowed
            and rules.fewest_new <= new <= rules.most_new
            and (segment is not None or rules.vessel is not VesselUse.REQUIRED)
            and (segment is None or rules.vessel is not VesselUse.NONE)
            and self._adequate(
                plan.boilers, None if segment is None else self._windows[segment.window], plan.volume_m3
            )
        )

    def _offer(self, plan: Plan) -> None:
        cost = plan_cost_k(self._inputs, plan)
        self._best.found.append((cost, plan))
        if cost < self._best.cost_k:
            self._best.plan, self._best.cost_k = plan, cost

    def _try(self, node: _Node, services: tuple[Service, ...]) -> None:
        """Make a plan near a node, in the window that promises most, and keep it if it is the best so far."""
        window, volume = None, 0.0
        if node.reaches:
            reach = min(node.reaches, key=lambda reach: self._promised_k(node, reach))
            window, volume = reach.window, (reach.low_m3 + reach.high_m3) / 2
        free_volume = len(self._inputs.days) < _FEWEST_JOINED_DAYS
        apart = _TRIED_APART[0] if free_volume and node.stage <= USUAL_STAGE + 2 else _TRIED_APART[1]
        key = (node.boilers, window, round(np.log(max(volume, _NARROWEST_M3)) / np.log(apart)))
        if key in self._best.tried:
            return
        self._best.tried.add(key)
        self._make(node.boilers, window, volume, services, free_volume=free_volume)

    def _promised_k(self, node: _Node, reach: _Reach) -> float:
        """Fixed cost in the middle of a window's volumes, and fuel at its boiler pressure."""
        pressure = self._windows[reach.window].pressure
        dearest = max(
            (self._inputs.boiler(name).pressure_factor[pressure] for name in node.boilers), default=1.0
        )
        return (reach.low_k + reach.high_k) / 2 + node.operation_k * dearest

    def _make(
        self,
        names: tuple[str, ...],
        window: int | None,
        volume: float,
        services: tuple[Service, ...],
        *,
        free_volume: bool,
    ) -> None:
        """Plan some boilers and a window at a volume, or freely within the segment around it."""
        inputs = self._inputs
        days = self._operation.states(self._plant_at(names, window, volume), services)
        if days is None:
            return
        segment, allowed = None, (0.0, 0.0)
        if window is not None:
            curves = self._windows[window]
            segment = curves.segment_at(volume)
            low, high = inputs.vessel_segments[segment].volume_m3
            allowed = (volume, volume)
            if free_volume:
                allowed = (max(low, self._smallest_adequate_m3(names, curves)), high)
        boilers = tuple(inputs.boiler(name) for name in names)
        plan = polished(inputs, boilers, segment, allowed, days)
        if plan is not None:
            self._offer(plan)

    def _shortlist(self) -> tuple[Plan, ...]:
        """Plants within the margin of the best, distinct in boilers, window or a tenth of volume.

        Foresight flatters small vessels, so the best plan's vessel is planned larger too.
        """
        best = self._best.plan
        if best is None:
            return ()
        if best.segment is not None:
            window = self._inputs.vessel_segments[best.segment].window
            services = tuple(
                tuple(name for name, hot in zip(best.boilers, day.in_service, strict=True) if hot)
                for day in best.dispatch
            )
            largest = float(self._windows[window].volume_m3[-1])
            for factor in _LARGER_VESSELS:
                if best.volume_m3 * factor <= largest:
                    self._make(best.boilers, window, best.volume_m3 * factor, services, free_volume=False)
        kept: dict[tuple[object, ...], Plan] = {self._kind(best): best}
        for cost, plan in sorted(self._best.found, key=lambda x: x[0]):
            if cost <= self._best.cost_k * (1.0 + _SHORTLIST_MARGIN) and len(kept) <= _SHORTLIST_LENGTH:
                kept.setdefault(self._kind(plan), plan)
        return tuple(kept.values())[1:]

    def _kind(self, plan: Plan) -> tuple[object, ...]:
        """What tells two plants apart on a short list."""
        if plan.segment is None:
            return (plan.boilers,)
        window = self._inputs.vessel_segments[plan.segment].window
        return plan.boilers, window, round(np.log(plan.volume_m3) / np.log(1.1))
