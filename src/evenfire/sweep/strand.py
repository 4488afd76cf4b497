"""One strand of a sweep: the points that are planned one after the other in one process."""

from __future__ import annotations

from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import numpy as np

from evenfire.appraisal.plan_inputs import K
from evenfire.appraisal.priced import priced
from evenfire.plan.operation import Operation
from evenfire.plan.optimum import best_plan
from evenfire.plan.outcome import Plan, PlanOutcome, Stop
from evenfire.plan.polish import plan_cost_k
from evenfire.plan.search import Search
from evenfire.plan.store import PlanStore
from evenfire.sweep.break_even import break_evens, stretches
from evenfire.sweep.price_answer import PriceRecursion, Solved
from evenfire.sweep.study import Study, study
from evenfire.units import J_PER_MWH, KG_PER_TONNE, pa_to_bar_g

MOST_SOLVES = 8
"""Per alternative along one price; what they leave open stays visible as gap."""
SEARCH_SHARE = 0.75
"""Share of the asked gap that each search along a price may use; chords between searches take the rest."""

Record = dict[str, Any]
"""What a strand found, as JSON holds it."""


Changes = tuple[tuple[str, float], ...]
"""New values by path."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Strand:
    """Points of a sweep that share what they prove."""

    case: Path
    points: tuple[Changes, ...]
    """At least one; along a line they are in order and change the same inputs."""
    along_line: bool
    """Whether the points lie on a straight line along which every cost is straight too."""
    gap: float
    time_limit_s: float
    plans_folder: Path | None = field(compare=False)
    """Where plans of an interrupted run are found again; None for workers without the folder."""


def strand_key(strand: Strand) -> str:
    """What tells a strand from every other of a run."""
    return f"{strand.points!r} {strand.along_line} {strand.gap!r}"


def strand_record(strand: Strand) -> Record:
    """Plan every point of a strand.

    Parameters
    ----------
    strand : Strand

    Returns
    -------
    dict
        ``points``, each a list of alternatives; ``break_evens`` and ``stretches`` along the line, their
        places as shares of the way from the first point to the last.
    """
    return _Planner(strand).record()


def planned_point(strand: Strand) -> tuple[Study, list[tuple[str, PlanOutcome]]]:
    """The only point of a strand with the plans themselves, by alternative."""
    (changes,) = strand.points
    return _Planner(strand).point_outcomes(changes)


def line_shares(points: tuple[Changes, ...]) -> tuple[float, ...]:
    """Places of points on the way from the first to the last, by the input that varies."""
    first, last = dict(points[0]), dict(points[-1])
    path = next(path for path in first if first[path] != last[path])
    span = last[path] - first[path]
    return tuple((dict(point)[path] - first[path]) / span for point in points)


class _Planner:
    def __init__(self, strand: Strand) -> None:
        self._strand = strand
        self._studies: dict[Changes, Study] = {}
        self._operations: dict[Changes, Operation] = {}
        self._store = None if strand.plans_folder is None else PlanStore(strand.plans_folder)

    def record(self) -> Record:
        if self._strand.along_line:
            return self._along_line()
        points = [self._point(changes) for changes in self._strand.points]
        return {"points": points, "break_evens": [], "stretches": []}

    def _study(self, changes: Changes) -> Study:
        if changes not in self._studies:
            self._studies[changes] = study(self._strand.case, dict(changes))
        return self._studies[changes]

    def _outcome(self, changes: Changes, name: str, gap: float, known: tuple[Plan, ...]) -> PlanOutcome:
        at = self._study(changes)
        if changes not in self._operations:
            self._operations[changes] = Operation(at.inputs, joined=False)
        outcome = best_plan(
            at.inputs,
            at.rules(name),
            gap=gap,
            time_limit_s=self._strand.time_limit_s,
            known=known,
            store=self._store,
            operation=self._operations[changes],
        )
        if outcome.stop is Stop.INTERRUPTED:
            raise KeyboardInterrupt
        return outcome

    # --- points by themselves -------------------------------------------------------------------

    def _point(self, changes: Changes) -> list[Record]:
        """One point planned by itself, each alternative from the plans of those before it."""
        at, outcomes = self.point_outcomes(changes)
        return [
            _row(
                at,
                name,
                outcome.plan,
                None if outcome.cost_k is None else outcome.cost_k * K,
                None if outcome.bound_k is None else outcome.bound_k * K,
                infeasible=outcome.stop is Stop.INFEASIBLE,
                asked=self._strand.gap,
            )
            for name, outcome in outcomes
        ]

    def point_outcomes(self, changes: Changes) -> tuple[Study, list[tuple[str, PlanOutcome]]]:
        at = self._study(changes)
        plans: list[Plan] = []
        outcomes = []
        for name in at.case.plan.alternatives:
            outcome = self._outcome(changes, name, self._strand.gap, tuple(plans))
            if outcome.plan is not None:
                plans.append(outcome.plan)
            outcomes.append((name, outcome))
        return at, outcomes

    # --- along a price --------------------------------------------------------------------------

    def _along_line(self) -> Record:
        strand = self._strand
        shares = line_shares(strand.points)
        at_low, at_high = self._study(strand.points[0]), self._study(strand.points[-1])
        names = at_low.case.plan.alternatives
        searches = {name: Search(at_low.inputs, at_low.rules(name)) for name in names}

        def solve(name: str, share: float, known: tuple[Plan, ...]) -> Solved:
            outcome = self._outcome(self._place(shares, share), name, SEARCH_SHARE * strand.gap, known)
            return Solved(plan=outcome.plan, bound_k=outcome.bound_k, stop=outcome.stop)

        answer = PriceRecursion(
            names,
            solve,
            lambda plan: (plan_cost_k(at_low.inputs, plan), plan_cost_k(at_high.inputs, plan)),
            lambda name, plan: searches[name].allows(plan),
            gap=strand.gap,
            most_solves=MOST_SOLVES,
        ).run(shares)
        points = []
        for changes, share in zip(strand.points, shares, strict=True):
            at = self._study(changes)
            rows = []
            for curve in answer.curves:
                bound = curve.bound_k(share) * K
                plan = answer.plans[curve.line_at(share).plan] if curve.lines else None
                rows.append(
                    _row(
                        at,
                        curve.alternative,
                        plan,
                        None if plan is None else plan_cost_k(at.inputs, plan) * K,
                        bound if np.isfinite(bound) else None,
                        infeasible=curve.alternative in answer.infeasible,
                        asked=strand.gap,
                    )
                )
            points.append(rows)
        return {
            "points": points,
            "break_evens": [
                {
                    "cheaper_below": each.cheaper_below,
                    "cheaper_above": each.cheaper_above,
                    "value": each.value,
                    "low": each.low,
                    "high": each.high,
                    "proven": each.proven,
                }
                for each in break_evens(answer.curves)
            ],
            "stretches": [
                {
                    "low": each.low,
                    "high": each.high,
                    "winner": each.winner,
                    "rivals": list(each.rivals),
                }
                for each in (stretches(answer.curves) if any(x.lines for x in answer.curves) else ())
            ],
        }

    def _place(self, shares: tuple[float, ...], share: float) -> Changes:
        """The point at a share of the line; the strand's own points exactly."""
        points = self._strand.points
        if share in shares:
            return points[shares.index(share)]
        return tuple(
            (path, low + (high - low) * share)
            for (path, low), (_, high) in zip(points[0], points[-1], strict=True)
        )


def _row(
    at: Study,
    name: str,
    plan: Plan | None,
    cost: float | None,
    bound: float | None,
    *,
    infeasible: bool,
    asked: float,
) -> Record:
    """One alternative at one point, in trade units."""
    if plan is None or cost is None:
        return {"name": name, "standing": "infeasible" if infeasible else "no plan found", "bound": bound}
    bound = None if bound is None else min(bound, cost)
    gap = None if bound is None else (cost - bound) / abs(cost) if cost else 0.0
    met = gap is not None and gap <= asked * (1.0 + 1e-9)
    price = priced(at.case, at.inputs, at.tables, plan)
    window = None if price.performance is None else price.performance.window
    fuel_mwh = price.quantities.fuel_j_lhv / J_PER_MWH
    net = at.case.fuel_price_basis != "hhv"
    return {
        "name": name,
        "standing": "planned" if met else "gap not reached",
        "net_present_cost": cost,
        "bound": bound,
        "gap": gap,
        "investment": price.cash.investment,
        "boilers": list(plan.boilers),
        "vessel_volume_m3": None if window is None else plan.volume_m3,
        "charged_bar_g": None if window is None else pa_to_bar_g(window.charged_pa),
        "discharged_bar_g": None if window is None else pa_to_bar_g(window.discharged_pa),
        "fuel_mwh_per_year": fuel_mwh if net else fuel_mwh / at.case.fuel.lhv_to_hhv,
        "burner_starts_per_year": sum(each.burner_starts for each in price.flows.boilers),
        "unmet_steam_t_per_year": price.quantities.unmet_steam_kg / KG_PER_TONNE,
    }
