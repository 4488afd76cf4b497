"""One case from its files to the verdict."""

from __future__ import annotations

from importlib.metadata import version

from evenfire.appraisal.alternatives import RULES
from evenfire.appraisal.case_record import case_record
from evenfire.appraisal.day_choice import chosen_days, day_notices
from evenfire.appraisal.plan_inputs import plan_inputs
from evenfire.appraisal.priced import Priced, alternative_result, priced, unplanned_result
from evenfire.appraisal.results import AlternativeResult, Appraisal
from evenfire.appraisal.verdict import best_of, verdict_words
from evenfire.appraisal.vessels import window_tables
from evenfire.case.case import Case
from evenfire.demand.series import DemandRecord, TypicalDays
from evenfire.demand.storage_need import storage_need
from evenfire.errors import InfeasibleError, Notice, Problem
from evenfire.plan.inputs import PlanInputs
from evenfire.plan.optimum import best_plan
from evenfire.plan.outcome import Has, Plan, PlanOutcome, Stop, Watcher

_PACKAGES = ("evenfire", "pyomo", "highspy", "numpy", "pandas", "CoolProp", "numba", "scipy")


_LEAST_SHORTFALL_T = 0.05
"""Shortfalls below this are rounding [t]."""


def appraise(case: Case, watch: Watcher | None = None) -> Appraisal:
    """Plan every alternative of a case and say which is cheapest.

    Parameters
    ----------
    case : Case
        From :func:`evenfire.case.load.load_case`.
    watch : callable, optional
        Called with a ``Progress`` as cost and bound close.

    Returns
    -------
    Appraisal

    Raises
    ------
    RecordError
        If the record cannot be used.
    InfeasibleError
        E101 if the reference, or every alternative, has no plan.
    """
    record = case_record(case)
    need = storage_need(record.flow_kg_s, record.step_s)
    tables = window_tables(case)
    chosen = chosen_days(case, record, need, tables)
    typical = chosen.days
    inputs = plan_inputs(case, record, typical, need, tables)
    outcomes = planned_alternatives(case, inputs, watch)
    prices = {
        outcome.alternative: priced(case, inputs, tables, outcome.plan)
        for outcome in outcomes
        if outcome.plan is not None
    }
    reference = prices.get(case.plan.reference)
    if reference is None:
        raise _no_reference(case, outcomes)
    results = tuple(
        _result(case, inputs, outcome, prices.get(outcome.alternative), reference, record, typical)
        for outcome in outcomes
    )
    best = best_of(results)
    return Appraisal(
        case=case,
        record=record,
        typical_days=typical,
        day_errors=chosen.errors,
        storage_need=need,
        alternatives=results,
        reference=case.plan.reference,
        best=best.name,
        verdict=verdict_words(case, results, best),
        fuel_basis=case.fuel_price_basis,
        notices=(*day_notices(case, chosen), *_notices(results)),
        versions=tuple((package, version(package)) for package in _PACKAGES),
    )


def planned_alternatives(
    case: Case, inputs: PlanInputs, watch: Watcher | None = None
) -> tuple[PlanOutcome, ...]:
    """The plan of every alternative, each judged in the mixed-integer model.

    An interrupt ends the search that runs and leaves the later alternatives unplanned.
    """
    outcomes: list[PlanOutcome] = []
    plans: list[Plan] = []
    for name in case.plan.alternatives:
        rules = RULES[name](inputs)
        if outcomes and outcomes[-1].stop is Stop.INTERRUPTED:
            outcomes.append(_not_begun(name))
            continue
        outcome = best_plan(
            inputs,
            rules,
            gap=case.plan.gap,
            time_limit_s=case.plan.time_limit_s,
            known=tuple(plans),
            watch=watch,
        )
        if outcome.plan is not None:
            plans.append(outcome.plan)
        outcomes.append(outcome)
    return tuple(outcomes)


def _not_begun(name: str) -> PlanOutcome:
    return PlanOutcome(
        alternative=name,
        stop=Stop.INTERRUPTED,
        has=Has.NOTHING,
        cost_k=None,
        bound_k=None,
        plan=None,
        largest_violation=0.0,
        solver="not begun",
        seconds=0.0,
    )


def _result(
    case: Case,
    inputs: PlanInputs,
    outcome: PlanOutcome,
    price: Priced | None,
    reference: Priced,
    record: DemandRecord,
    typical: TypicalDays,
) -> AlternativeResult:
    if price is None or outcome.plan is None:
        return unplanned_result(outcome, reference)
    return alternative_result(case, inputs, outcome, price, reference, record, typical)


def _no_reference(case: Case, outcomes: tuple[PlanOutcome, ...]) -> InfeasibleError:
    outcome = next(x for x in outcomes if x.alternative == case.plan.reference)
    return InfeasibleError(
        Problem(
            code="E101",
            where=f"{case.folder.name}: alternative '{outcome.alternative}'",
            found=f"no plan ({outcome.stop.value}), and it is the reference of all savings",
            allowed=(
                "allow larger boilers or vessels that meet the record's peak, take another [plan] reference, "
                "or allow more time"
            ),
        )
    )


def _notices(results: tuple[AlternativeResult, ...]) -> tuple[Notice, ...]:
    notices = []
    for result in results:
        if result.planned and len(result.boilers) == 1:
            notices.append(
                Notice(
                    code="N202",
                    severity="warning",
                    text=(
                        f"{result.name}: one boiler alone supplies the site; nothing makes steam while it "
                        "stands for inspection or repair"
                    ),
                )
            )
        if result.planned and result.record_shortfall_t >= _LEAST_SHORTFALL_T:
            notices.append(
                Notice(
                    code="N201",
                    severity="warning",
                    text=(
                        f"{result.name}: the whole record holds {result.record_shortfall_t:.1f} t of steam "
                        "above what its boilers and vessel can give at once"
                    ),
                )
            )
    return tuple(notices)
