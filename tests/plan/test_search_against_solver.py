"""The exact method against HiGHS alone on the same mixed-integer model."""

from __future__ import annotations

import pytest
from hypothesis import HealthCheck, given, settings

from evenfire.plan.outcome import Has, Stop
from evenfire.plan.search import Search
from evenfire.plan.verify import judged
from tests.plan.instances import Instance, instances, solved_whole


@settings(
    max_examples=200,
    deadline=None,
    derandomize=True,
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large],
)
@given(instances())
def test_bound_and_plan_enclose_the_optimum(instance: Instance) -> None:
    """The bound never exceeds the solver's optimum, the plan never beats it, and the model agrees."""
    outcome = Search(instance.inputs, instance.rules).run(gap=1e-3, time_limit_s=0.5)
    whole = solved_whole(instance)

    if whole.stop is Stop.INFEASIBLE:
        assert outcome.stop is Stop.INFEASIBLE
        return
    assert whole.stop is Stop.GAP_REACHED
    assert whole.cost_k is not None
    assert outcome.bound_k is not None
    assert outcome.bound_k <= whole.cost_k * (1 + 1e-6) + 1e-6
    assert outcome.has is Has.PLAN
    assert outcome.plan is not None
    assert outcome.cost_k is not None
    assert outcome.cost_k >= whole.cost_k * (1 - 1e-6) - 1e-6
    judgement = judged(instance.inputs, instance.rules, outcome.plan)
    assert judgement.largest_violation < 1e-6
    assert judgement.cost_k == pytest.approx(outcome.cost_k, rel=1e-6)
