"""Search over boilers, window and volume with valid bounds: the exact method.

A node is a set of boilers, a pressure window (or no vessel) and a range of volumes. Its bound adds the
fixed cost at the small end to the least operating cost with the large end's vessel, the standing loss
being the small end's: operation never gets dearer with a larger vessel of the same loss. Bounds are
refined from cheap to dear, the node with the least bound first. docs/method.md proves each step.
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
from evenfire.plan.operation import EXPECTED_LOSS, QUANTA_T_PER_H, Operation, Plant
from evenfire.plan.outcome import Has, Plan, PlanOutcome, Progress, Stop, Watcher
from evenfire.plan.polish import plan_cost_k, polished
from evenfire.plan.services import Service

_NARROWEST_M3 = 0.25
_FEWEST_JOINED_DAYS = 13
"""From this number of days on a plan keeps the volume of a node's middle; its days are polished singly."""


_LARGER_VESSELS = (1.25, 1.6, 2.0)
_SHORTLIST_MARGIN = 0.03
"""Plans up to this much dearer than the best are worth a replay [1]."""
_SHORTLIST_LENGTH = 6


@dataclass(frozen=True, slots=True, kw_only=True)
class _Node:
    """Boilers, pressure window and range of volumes, with the bound proven so far."""

    boilers: tuple[str, ...]
    window: int | None
    low_m3: float
    high_m3: float
    bound_k: float
    stage: int


@dataclass(slots=True)
class _Incumbent:
    plan: Plan | None = None
    cost_k: float = float("inf")
    tried: set[tuple[tuple[str, ...], int | None, float]] = field(default_factory=set)
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
                if self._within(gap, bound):
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
        vessel = "no vessel" if node.window is None else f"{node.low_m3:.0f} to {node.high_m3:.0f} m3"
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
            nodes.append(self._node(boilers, None, 0.0, 0.0))
        if self._rules.vessel is VesselUse.NONE:
            return nodes
        for number, curves in self._windows.items():
            if not all(self._inputs.boiler(name).pressure_allowed[curves.pressure] for name in boilers):
                continue
            high = float(curves.volume_m3[-1])
            if self._adequate(boilers, curves, high):
                nodes.append(self._node(boilers, number, self._smallest_adequate_m3(boilers, curves), high))
        return nodes

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

    def _node(self, boilers: tuple[str, ...], window: int | None, low: float, high: float) -> _Node:
        node = _Node(boilers=boilers, window=window, low_m3=low, high_m3=high, bound_k=0.0, stage=0)
        return replace(node, bound_k=self._fixed_k(node) + self._hull_k(node))

    def _refined(self, node: _Node) -> list[_Node | None]:
        """The node with a better bound, or its two halves; None marks one that cannot be refined."""
        width_k = self._width_k(node)
        narrow = node.high_m3 - node.low_m3 <= _NARROWEST_M3
        if node.stage and not narrow and width_k > EXPECTED_LOSS[node.stage - 1] * node.bound_k:
            middle = (node.low_m3 + node.high_m3) / 2
            return [
                replace(node, high_m3=middle, stage=node.stage - 1),
                replace(node, low_m3=middle, stage=node.stage - 1),
            ]
        if node.stage == len(QUANTA_T_PER_H):
            return [None]
        operation_k, services = self._operation.bound(self._plant(node), node.stage)
        better = replace(
            node,
            bound_k=max(node.bound_k, self._fixed_k(node) + operation_k),
            stage=node.stage + 1,
        )
        narrow_enough = width_k <= 2 * EXPECTED_LOSS[0] * node.bound_k
        ready = narrow_enough if self._joined else better.stage >= 2
        if ready and better.bound_k < self._best.cost_k:
            self._try(better, services)
        return [better]

    def _width_k(self, node: _Node) -> float:
        """How much dearer the largest vessel of a node is than the smallest [k]."""
        if node.window is None:
            return 0.0
        curves = self._windows[node.window]
        return curves.at(curves.fixed_cost_k, node.high_m3) - curves.at(curves.fixed_cost_k, node.low_m3)

    # --- bounds ---------------------------------------------------------------------------------

    def _fixed_k(self, node: _Node) -> float:
        total = sum(self._inputs.boiler(name).fixed_cost_k for name in node.boilers)
        if node.window is not None:
            curves = self._windows[node.window]
            total += curves.at(curves.fixed_cost_k, node.low_m3) + self._inputs.vessel_maintenance_k
        return total

    def _hull_k(self, node: _Node) -> float:
        """Every tonne at the best average cost of any boiler, or not met."""
        inputs = self._inputs
        plant = self._plant(node)
        steam = sum(day.days_per_year * inputs.step_h * float(day.demand_t_h.sum()) for day in inputs.days)
        least = self._operation.least_steam_cost_k_t(node.boilers, plant.pressure)
        return steam * (least - max(0.0, plant.store.credit_k_t))

    def _plant(self, node: _Node, *, at_m3: float | None = None) -> Plant:
        """The plant whose operation bounds a node's, or the plant at one volume."""
        if node.window is None:
            return Plant(boilers=node.boilers, pressure=0, store=NO_STORE)
        curves = self._windows[node.window]
        high = node.high_m3 if at_m3 is None else at_m3
        low = node.low_m3 if at_m3 is None else at_m3
        return Plant(
            boilers=node.boilers,
            pressure=curves.pressure,
            store=Store(
                capacity_t=curves.at(curves.capacity_t, high),
                release_t_h=curves.at(curves.release_t_h, high),
                loss_t_h=curves.at(curves.loss_t_h, low),
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
        """Make a plan near a node and keep it if it is the best so far."""
        inputs = self._inputs
        volume = (node.low_m3 + node.high_m3) / 2
        key = (node.boilers, node.window, round(volume, 1))
        if key in self._best.tried:
            return
        self._best.tried.add(key)
        self._make(node, volume, services, free_volume=len(inputs.days) < _FEWEST_JOINED_DAYS)

    def _make(self, node: _Node, volume: float, services: tuple[Service, ...], *, free_volume: bool) -> None:
        """Plan a node's boilers and window at a volume, or freely within the segment around it."""
        inputs = self._inputs
        days = self._operation.states(self._plant(node, at_m3=volume), services)
        if days is None:
            return
        segment, allowed = None, (0.0, 0.0)
        if node.window is not None:
            curves = self._windows[node.window]
            segment = curves.segment_at(volume)
            low, high = inputs.vessel_segments[segment].volume_m3
            allowed = (volume, volume)
            if free_volume:
                allowed = (max(low, self._smallest_adequate_m3(node.boilers, curves)), high)
        boilers = tuple(inputs.boiler(name) for name in node.boilers)
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
            node = _Node(
                boilers=best.boilers, window=window, low_m3=0.0, high_m3=largest, bound_k=0.0, stage=0
            )
            for factor in _LARGER_VESSELS:
                if best.volume_m3 * factor <= largest:
                    self._make(node, best.volume_m3 * factor, services, free_volume=False)
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
