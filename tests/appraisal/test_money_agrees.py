"""One home for money: the plan's objective, the cash flow and the JSON agree."""

from __future__ import annotations

import pytest

from evenfire.appraisal.alternatives import RULES
from evenfire.appraisal.plan_inputs import K, plan_inputs
from evenfire.appraisal.priced import priced
from evenfire.appraisal.results import Appraisal
from evenfire.appraisal.vessels import window_tables
from evenfire.plan.optimum import best_plan


def test_objective_equals_cash_flow(small_appraisal: Appraisal) -> None:
    """Objective of the mixed-integer model and present cost of the cash flow agree to 1e-6."""
    case = small_appraisal.case
    tables = window_tables(case)
    inputs = plan_inputs(
        case, small_appraisal.record, small_appraisal.typical_days, small_appraisal.storage_need, tables
    )
    for name in ("as is", "storage", "further boiler"):
        outcome = best_plan(inputs, RULES[name](inputs), gap=0.02, time_limit_s=10.0)
        assert outcome.plan is not None
        assert outcome.cost_k is not None
        cash = priced(case, inputs, tables, outcome.plan).cash

        assert cash.present_cost == pytest.approx(outcome.cost_k * K, rel=1e-6)


def test_cost_lines_sum_to_the_total(small_appraisal: Appraisal) -> None:
    """What the report shows line by line adds up to the net present cost."""
    for result in small_appraisal.alternatives:
        lines = sum(line.present_cost for line in result.cost_lines)
        assert lines == pytest.approx(result.net_present_cost, rel=1e-9)


def test_savings_are_against_the_reference(small_appraisal: Appraisal) -> None:
    """Fuel saved and net present saving are the reference's figures less the alternative's."""
    reference = small_appraisal.alternative(small_appraisal.reference)
    for result in small_appraisal.alternatives:
        assert result.fuel_saved_mwh_per_year == pytest.approx(
            reference.fuel_mwh_per_year - result.fuel_mwh_per_year
        )
        assert result.net_present_saving == pytest.approx(
            (reference.net_present_cost or 0.0) - (result.net_present_cost or 0.0)
        )


def test_the_verdict_names_the_cheapest(small_appraisal: Appraisal) -> None:
    """The best alternative is the one with the least net present cost, and the verdict opens with it."""
    costs = {x.name: x.net_present_cost for x in small_appraisal.alternatives if x.net_present_cost}
    assert small_appraisal.best == min(costs, key=lambda name: costs[name] or 0.0)
    assert small_appraisal.verdict.startswith(f"“{small_appraisal.best}”")
