"""Between a plan and the model's variables, and between the model and a file for another solver."""

from __future__ import annotations

import pytest

from evenfire.plan.compiled import compiled
from evenfire.plan.flows import yearly_flows
from evenfire.plan.inputs import VesselUse
from evenfire.plan.milp import solve
from evenfire.plan.model import alternative_model
from evenfire.plan.polish import plan_cost_k
from evenfire.plan.translate import assign, extract
from tests.model.plants import boiler, rules, segment, site

INPUTS = site(
    [[0.3, 3.5, 0.2, 1.5, 4.0, 0.6], [0.2] * 6],
    [boiler("a", 3.0, minimum_firing_steps=2), boiler("b", 2.0, cold_start_fuel=0.3)],
    segments=(segment(5.0, 20.0), segment(5.0, 30.0, window=1, pressure=1, capacity_per_m3=0.07)),
    weights=[250.0, 115.0],
)
RULES = rules(INPUTS, vessel=VesselUse.REQUIRED, required=("a",))


def test_extract_and_assign_are_inverse() -> None:
    """A solved plan read from the model and put back gives the same objective and no violation."""
    model = alternative_model(INPUTS, RULES)
    arrays = compiled(model)
    result = solve(arrays, gap=1e-6, time_limit_s=60.0)
    assert result.point is not None
    arrays.load(result.point)
    plan = extract(model, INPUTS)
    assign(model, INPUTS, plan)
    back = arrays.values()

    assert arrays.objective(back) == pytest.approx(result.cost_k, rel=1e-9)
    assert arrays.largest_violation(back) < 1e-6
    assert plan_cost_k(INPUTS, plan) == pytest.approx(result.cost_k, rel=1e-6)


def test_yearly_flows_price_to_the_objective() -> None:
    """Quantities of the plan times the rates, plus what is bought, are the model's objective."""
    model = alternative_model(INPUTS, RULES)
    arrays = compiled(model)
    result = solve(arrays, gap=1e-6, time_limit_s=60.0)
    assert result.point is not None
    arrays.load(result.point)
    plan = extract(model, INPUTS)
    flows = yearly_flows(INPUTS, plan)
    segment_of_plan = INPUTS.vessel_segments[plan.segment or 0]
    low, high = segment_of_plan.fixed_cost_k
    share = (plan.volume_m3 - segment_of_plan.volume_m3[0]) / (
        segment_of_plan.volume_m3[1] - segment_of_plan.volume_m3[0]
    )
    total = (
        sum(INPUTS.boiler(name).fixed_cost_k for name in plan.boilers)
        + low
        + share * (high - low)
        + INPUTS.vessel_maintenance_k
        + INPUTS.rates.fuel_k_mwh * flows.fuel_mwh
        + INPUTS.rates.steam_k_t * sum(x.steam_t for x in flows.boilers)
        + INPUTS.rates.unmet_k_t * flows.unmet_t
        + sum(INPUTS.boiler(x.name).start_wear_k * x.burner_starts for x in flows.boilers)
    )

    assert total == pytest.approx(result.cost_k, rel=1e-6)
