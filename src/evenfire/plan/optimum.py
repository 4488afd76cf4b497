"""The best plan of an alternative: the exact method first, the solver for what it leaves open.

On small or coarse models the grid of the recursion may stop short of the asked gap; there the whole
mixed-integer model is small enough for HiGHS, which starts from the plan found and tightens both sides.
"""

from __future__ import annotations

import time
from dataclasses import replace

from evenfire.plan.compiled import compiled
from evenfire.plan.inputs import AlternativeRules, PlanInputs
from evenfire.plan.milp import FEASIBILITY_TOLERANCE, solve
from evenfire.plan.model import alternative_model
from evenfire.plan.operation import Operation
from evenfire.plan.outcome import Has, Plan, PlanOutcome, Progress, Stop, Watcher
from evenfire.plan.search import Search
from evenfire.plan.store import Kept, PlanStore
from evenfire.plan.translate import assign, extract
from evenfire.plan.verify import judged

LARGEST_MODEL_STEPS = 20_000
"""Boilers times typical days times steps above which HiGHS is not asked to finish a search."""


def best_plan(
    inputs: PlanInputs,
    rules: AlternativeRules,
    *,
    gap: float,
    time_limit_s: float,
    known: tuple[Plan, ...] = (),
    watch: Watcher | None = None,
    store: PlanStore | None = None,
    joined: bool = False,
    operation: Operation | None = None,
) -> PlanOutcome:
    """Plan an alternative to the asked gap, or as far as the time allows.

    Parameters
    ----------
    inputs : PlanInputs
    rules : AlternativeRules
    gap : float
        Asked relative gap [1].
    time_limit_s : float
        Time for this alternative [s].
    known : tuple of Plan
        Plans of other alternatives to start from where the rules allow them.
    watch : callable, optional
        Called with a ``Progress`` as cost and bound close.
    store : PlanStore, optional
        Plans of earlier runs: one within the gap is taken as it is, another is a start.
    joined : bool
        Whether the days follow each other as in the record.
    operation : Operation, optional
        Of the same inputs and days, with the bounds that searches of other alternatives have proven.

    Returns
    -------
    PlanOutcome
        Its plan judged in the mixed-integer model: ``cost_k`` is the model's objective there.
    """
    begin = time.monotonic()
    kept = None if store is None or joined else store.get(inputs, rules)
    if kept is not None:
        outcome = _kept_outcome(inputs, rules, kept)
        if outcome.gap is not None and outcome.gap <= gap:
            return replace(outcome, seconds=time.monotonic() - begin)
        known = (*known, kept.plan)
    outcome = Search(inputs, rules, known, joined=joined, operation=operation).run(gap, time_limit_s, watch)
    if kept is not None and outcome.bound_k is not None:
        outcome = replace(outcome, bound_k=max(outcome.bound_k, kept.bound_k))
    left = time_limit_s - (time.monotonic() - begin)
    size = len(rules.allowed) * sum(len(day.demand_t_h) for day in inputs.days)
    if outcome.stop is Stop.SOLVER_LIMIT and not joined and left > 0 and size <= LARGEST_MODEL_STEPS:
        outcome = _finished(inputs, rules, outcome, gap, left, watch)
    if outcome.plan is not None:
        judgement = judged(inputs, rules, outcome.plan)
        outcome = replace(outcome, cost_k=judgement.cost_k, largest_violation=judgement.largest_violation)
    if store is not None and not joined:
        store.put(inputs, rules, outcome)
    return replace(outcome, seconds=time.monotonic() - begin)


def _kept_outcome(inputs: PlanInputs, rules: AlternativeRules, kept: Kept) -> PlanOutcome:
    """An earlier run's plan, judged anew."""
    judgement = judged(inputs, rules, kept.plan)
    return PlanOutcome(
        alternative=rules.name,
        stop=Stop.GAP_REACHED,
        has=Has.PLAN,
        cost_k=judgement.cost_k,
        bound_k=min(kept.bound_k, judgement.cost_k),
        plan=kept.plan,
        largest_violation=judgement.largest_violation,
        solver=kept.solver,
        shortlist=kept.shortlist,
        seconds=0.0,
    )


def _finished(
    inputs: PlanInputs,
    rules: AlternativeRules,
    outcome: PlanOutcome,
    gap: float,
    time_limit_s: float,
    watch: Watcher | None,
) -> PlanOutcome:
    """The search's outcome, tightened by HiGHS on the whole model of the alternative."""
    model = alternative_model(inputs, rules)
    if outcome.plan is not None:
        assign(model, inputs, outcome.plan)
    arrays = compiled(model)

    def moved(cost_k: float | None, bound_k: float | None, seconds: float) -> None:
        if watch is not None:
            bounds = [x for x in (bound_k, outcome.bound_k) if x is not None]
            watch(
                Progress(
                    alternative=rules.name,
                    cost_k=cost_k,
                    bound_k=max(bounds, default=None),
                    seconds=outcome.seconds + seconds,
                    stage="whole model",
                )
            )

    result = solve(
        arrays,
        gap=gap,
        time_limit_s=time_limit_s,
        start=None if outcome.plan is None else arrays.values(),
        watch=moved,
    )
    plan, cost_k = outcome.plan, outcome.cost_k
    sound = result.point is not None and result.largest_violation <= FEASIBILITY_TOLERANCE
    if result.point is not None and sound and (cost_k is None or (result.cost_k or 0.0) < cost_k):
        arrays.load(result.point)
        plan, cost_k = extract(model, inputs), result.cost_k
    bounds = [x for x in (result.bound_k, outcome.bound_k) if x is not None]
    # A bound above the best plan's own cost can only be tolerance or a defect of the solver.
    bound_k = max((x for x in bounds if cost_k is None or x <= cost_k + 1e-6 * abs(cost_k)), default=None)
    return replace(
        outcome,
        stop=result.stop if result.stop is not Stop.INFEASIBLE or plan is None else Stop.SOLVER_ERROR,
        has=Has.NOTHING if plan is None else Has.PLAN,
        plan=plan,
        cost_k=cost_k,
        bound_k=bound_k if cost_k is None or bound_k is None else min(bound_k, cost_k),
        solver=f"{outcome.solver}, finished by HiGHS on the whole model",
    )
