"""The whole record beside the typical days: what chosen plants cost on it, and a certificate on demand."""

from __future__ import annotations

from dataclasses import replace

from evenfire.appraisal.alternatives import RULES
from evenfire.appraisal.day_choice import every_day, operating_cost_k
from evenfire.appraisal.plan_inputs import K, plan_inputs
from evenfire.appraisal.results import WholeRecord
from evenfire.appraisal.vessels import WindowTable
from evenfire.case.case import Case
from evenfire.demand.series import DemandRecord, StorageNeed, TypicalDays
from evenfire.plan.day import NO_STORE, Store
from evenfire.plan.inputs import PlanInputs, window_curves
from evenfire.plan.operation import Plant
from evenfire.plan.optimum import best_plan
from evenfire.plan.outcome import Plan, Watcher


def whole_record_difference(inputs: PlanInputs, record: DemandRecord, plan: Plan) -> float:
    """Operating cost of a plan's plant on typical days over that on every day of the record, less one.

    The same plant, the same step and the same recursion on both, so the difference is that of the days.

    Parameters
    ----------
    inputs : PlanInputs
        With the typical days.
    record : DemandRecord
    plan : Plan

    Returns
    -------
    float
        Positive where the typical days are too dear [1].
    """
    plant = plant_of(inputs, plan)
    truth = operating_cost_k(every_day(inputs, record), plant)
    return operating_cost_k(inputs, plant) / truth - 1.0 if truth else 0.0


def plant_of(inputs: PlanInputs, plan: Plan) -> Plant:
    """The plant of a plan as operation sees it."""
    if plan.segment is None:
        return Plant(boilers=plan.boilers, pressure=0, store=NO_STORE)
    curves = window_curves(inputs.vessel_segments)[inputs.vessel_segments[plan.segment].window]
    return Plant(
        boilers=plan.boilers,
        pressure=curves.pressure,
        store=Store(
            capacity_t=curves.at(curves.capacity_t, plan.volume_m3),
            release_t_h=curves.at(curves.release_t_h, plan.volume_m3),
            loss_t_h=curves.at(curves.loss_t_h, plan.volume_m3),
            credit_k_t=inputs.rates.fuel_k_mwh * curves.charging_credit_mwh_t,
        ),
    )


def whole_record_certificates(
    case: Case,
    record: DemandRecord,
    typical: TypicalDays,
    need: StorageNeed,
    tables: tuple[WindowTable, ...],
    *,
    step_s: float,
    gap: float,
    time_limit_s: float,
    watch: Watcher | None = None,
) -> dict[str, WholeRecord]:
    """Every alternative planned on every day of the record, each day followed by the next.

    Parameters
    ----------
    step_s : float
        Step of the plan [s]; the record's own for its certificate.
    gap : float
        Asked relative gap [1].
    time_limit_s : float
        Per alternative [s].

    Returns
    -------
    dict
        By alternative.
    """
    fine = replace(case, plan=replace(case.plan, step_s=step_s))
    inputs = every_day(plan_inputs(fine, record, typical, need, tables), record)
    certificates = {}
    plans: list[Plan] = []
    for name in case.plan.alternatives:
        outcome = best_plan(
            inputs,
            RULES[name](inputs),
            gap=gap,
            time_limit_s=time_limit_s,
            known=tuple(plans),
            watch=watch,
            joined=True,
        )
        if outcome.plan is not None:
            plans.append(outcome.plan)
        certificates[name] = WholeRecord(
            step_s=step_s,
            days=len(inputs.days),
            net_present_cost=None if outcome.cost_k is None else outcome.cost_k * K,
            bound=None if outcome.bound_k is None else outcome.bound_k * K,
            gap=outcome.gap,
            boilers=() if outcome.plan is None else outcome.plan.boilers,
            vessel_volume_m3=None if outcome.plan is None else outcome.plan.volume_m3,
            stopped=outcome.stop.value,
        )
    return certificates
