"""The exact method against HiGHS alone on the same mixed-integer model."""

from __future__ import annotations

import pytest
from hypothesis import HealthCheck, Phase, given, seed, settings

from evenfire.plan.outcome import Stop
from evenfire.plan.search import Search
from evenfire.plan.verify import judged
from tests.plan.instances import Instance, instances, solved_whole

ROUNDING = 1e-6
SOLVER_GAP = 1e-5
"""Of the solver alone; its bound and its cost enclose the optimum."""
steady = settings(
    max_examples=100,
    deadline=None,
    suppress_health_check=[HealthCheck.too_slow, HealthCheck.data_too_large],
    phases=[Phase.explicit, Phase.generate],
)


@seed(1)
@steady
@given(instances())
def test_bound_and_plan_enclose_the_optimum(instance: Instance) -> None:
    """The bound never exceeds the solver's optimum, the plan never beats it, and the model agrees."""
    compare(instance)


@seed(2)
@steady
@given(instances())
def test_another_hundred_plants(instance: Instance) -> None:
    """The same for other random plants."""
    compare(instance)


def compare(instance: Instance) -> None:
    """One plant by both ways."""
    outcome = Search(instance.inputs, instance.rules).run(gap=1e-3, time_limit_s=5.0)
    whole = solved_whole(instance, SOLVER_GAP)

    if whole.stop is Stop.INFEASIBLE:
        assert outcome.stop is Stop.INFEASIBLE
        return
    assert whole.stop is Stop.GAP_REACHED
    assert whole.cost_k is not None
    assert whole.bound_k is not None
    assert outcome.bound_k is not None
    assert outcome.bound_k <= whole.cost_k + ROUNDING * abs(whole.cost_k) + ROUNDING
    if outcome.plan is None:
        assert outcome.stop is Stop.SOLVER_LIMIT, "only the whole model finds a plan here, and that is said"
        return
    assert outcome.cost_k is not None
    assert outcome.cost_k >= whole.bound_k - ROUNDING * abs(whole.bound_k) - ROUNDING
    judgement = judged(instance.inputs, instance.rules, outcome.plan)
    assert judgement.largest_violation < ROUNDING
    assert judgement.cost_k == pytest.approx(outcome.cost_k, rel=ROUNDING)
