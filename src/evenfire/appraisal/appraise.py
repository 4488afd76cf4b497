"""One case from its files to the verdict."""

from __future__ import annotations

from dataclasses import replace
from importlib.metadata import version

from evenfire.appraisal.alternatives import RULES
from evenfire.appraisal.basis import Bases, basis, case_bases
from evenfire.appraisal.case_record import case_record
from evenfire.appraisal.day_choice import day_notices
from evenfire.appraisal.priced import alternative_result, unplanned_result
from evenfire.appraisal.replay_figures import replay_figures
from evenfire.appraisal.replayed import ReplayChoice, replayed_choice
from evenfire.appraisal.results import AlternativeResult, Appraisal
from evenfire.appraisal.verdict import best_of, verdict_words
from evenfire.appraisal.vessels import WindowTable, window_tables
from evenfire.appraisal.whole_record import whole_record_certificates, whole_record_difference
from evenfire.case.case import Case
from evenfire.errors import InfeasibleError, Notice, Problem
from evenfire.plan.inputs import PlanInputs
from evenfire.plan.operation import Operation
from evenfire.plan.optimum import best_plan
from evenfire.plan.outcome import Has, Plan, PlanOutcome, Stop, Watcher
from evenfire.plan.store import PlanStore

_PACKAGES = ("evenfire", "pyomo", "highspy", "numpy", "pandas", "CoolProp", "numba", "scipy")


WHOLE_RECORD_GAP = 3e-3
"""Gap asked of the certificate for the whole record [1]."""
WHOLE_RECORD_TIME_LIMIT_S = 300.0
"""Time for it per alternative [s]."""
_LEAST_SHORTFALL_T = 0.05
"""Shortfalls below this are rounding [t]."""


def appraise(
    case: Case,
    watch: Watcher | None = None,
    store: PlanStore | None = None,
    whole_record: bool = False,
) -> Appraisal:
    """Plan every alternative of a case and say which is cheapest.

    Parameters
    ----------
    case : Case
        From :func:`evenfire.case.load.load_case`.
    watch : callable, optional
        Called with a ``Progress`` as cost and bound close.
    store : PlanStore, optional
        Plans of earlier runs.
    whole_record : bool
        Also plan every alternative on every day of the record at the record's own step.

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
    tables = window_tables(case)
    bases = case_bases(case, tables)
    record, need, chosen = bases.usual.record, bases.usual.need, bases.usual.chosen
    outcomes = planned_alternatives(case, bases, watch, store)
    choices = {
        outcome.alternative: replayed_choice(
            case, basis.inputs, basis.record, basis.chosen.days, tables, outcome
        )
        for outcome in outcomes
        if outcome.plan is not None and (basis := bases.of(outcome.alternative)) is not None
    }
    if case.plan.reference not in choices:
        raise _no_reference(case, outcomes)
    results = tuple(_result(case, bases, tables, outcome, choices) for outcome in outcomes)
    if whole_record:
        usual = tuple(name for name in case.plan.alternatives if bases.of(name) is bases.usual)
        certificates = whole_record_certificates(
            replace(case, plan=replace(case.plan, alternatives=usual)),
            record,
            chosen.days,
            need,
            tables,
            step_s=record.step_s,
            gap=max(case.plan.gap, WHOLE_RECORD_GAP),
            time_limit_s=WHOLE_RECORD_TIME_LIMIT_S,
            watch=watch,
        )
        results = tuple(
            replace(result, whole_record=certificates[result.name]) if result.name in usual else result
            for result in results
        )
    best = best_of(results)
    return Appraisal(
        case=case,
        record=record,
        typical_days=chosen.days,
        day_errors=chosen.errors,
        storage_need=need,
        alternatives=results,
        reference=case.plan.reference,
        best=best.name,
        verdict=verdict_words(case, results, best),
        fuel_basis=case.fuel_price_basis,
        notices=(*day_notices(case, chosen), *bases.notices, *_notices(results)),
        versions=tuple((package, version(package)) for package in _PACKAGES),
    )


def case_inputs(case: Case) -> PlanInputs:
    """The plan's inputs of a case, read from its files."""
    return basis(case, case_record(case), window_tables(case)).inputs


def planned_alternatives(
    case: Case, bases: Bases, watch: Watcher | None = None, store: PlanStore | None = None
) -> tuple[PlanOutcome, ...]:
    """The plan of every alternative, each judged in the mixed-integer model.

    An interrupt ends the search that runs and leaves the later alternatives unplanned.
    """
    outcomes: list[PlanOutcome] = []
    plans: list[Plan] = []
    operation = Operation(bases.usual.inputs, joined=False)
    for name in case.plan.alternatives:
        basis = bases.of(name)
        if basis is None or (outcomes and outcomes[-1].stop is Stop.INTERRUPTED):
            outcomes.append(_not_begun(name, Stop.INFEASIBLE if basis is None else Stop.INTERRUPTED))
            continue
        usual = basis is bases.usual
        outcome = best_plan(
            basis.inputs,
            RULES[name](basis.inputs),
            gap=case.plan.gap,
            time_limit_s=case.plan.time_limit_s,
            known=tuple(plans) if usual else (),
            watch=watch,
            store=store,
            operation=operation if usual else None,
        )
        if outcome.plan is not None and usual:
            plans.append(outcome.plan)
        outcomes.append(outcome)
    return tuple(outcomes)


def _not_begun(name: str, stop: Stop) -> PlanOutcome:
    return PlanOutcome(
        alternative=name,
        stop=stop,
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
    bases: Bases,
    tables: tuple[WindowTable, ...],
    outcome: PlanOutcome,
    choices: dict[str, ReplayChoice],
) -> AlternativeResult:
    """The recommended plant of an alternative: its plan, and beside it what its replay did."""
    reference = choices[case.plan.reference]
    planned_reference = reference.tried[0].planned
    basis, choice = bases.of(outcome.alternative), choices.get(outcome.alternative)
    if basis is None or choice is None or outcome.plan is None:
        return unplanned_result(outcome, planned_reference)
    planned = choice.chosen.planned
    result = alternative_result(
        case, basis.inputs, outcome, planned, planned_reference, basis.record, basis.chosen.days
    )
    return replace(
        result,
        replayed=replay_figures(
            case, basis.record, choice, reference, planned, planned_reference, outcome.plan.volume_m3
        ),
        typical_days_difference=whole_record_difference(basis.inputs, basis.record, choice.chosen.plan),
    )


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
