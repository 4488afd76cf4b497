"""Tiny plants whose optimum is known: by hand, by enumeration, or because there is no choice."""

from __future__ import annotations

from itertools import product

import numpy as np
import pytest

from evenfire.plan.compiled import compiled
from evenfire.plan.inputs import PlanInputs, VesselUse
from evenfire.plan.milp import solve
from evenfire.plan.model import alternative_model
from evenfire.plan.optimum import best_plan
from evenfire.plan.outcome import Has, Stop
from evenfire.plan.polish import FixedDay, plan_cost_k, polished
from evenfire.plan.search import Search
from tests.model.plants import boiler, rules, segment, site


def _optimum_k(inputs: PlanInputs, vessel: VesselUse = VesselUse.OPTIONAL) -> float:
    result = solve(
        compiled(alternative_model(inputs, rules(inputs, vessel=vessel))), gap=1e-9, time_limit_s=60.0
    )
    assert result.stop is Stop.GAP_REACHED
    assert result.cost_k is not None
    return result.cost_k


def test_demand_below_rating_needs_no_vessel() -> None:
    """A steady demand inside the firing range buys nothing."""
    inputs = site([[2.0] * 6], [boiler("a", 4.0)], segments=(segment(5.0, 20.0),))
    outcome = best_plan(inputs, rules(inputs), gap=1e-6, time_limit_s=20.0)

    assert outcome.plan is not None
    assert outcome.plan.segment is None
    assert _optimum_k(inputs) == pytest.approx(outcome.cost_k, rel=1e-6)


def test_constant_firing_costs_what_the_curve_says() -> None:
    """One boiler at a constant load: fuel and steam from the curve by hand, no starts.

    Rating 4 t/h, turndown 4, casing 0.03 MWh/h, slope 0.75 MWh/t: at 2 t/h the fuel is
    0.03 + 0.75 * 2 = 1.53 MWh/h. 300 days of 1.5 h: 450 h. Fuel 688.5 MWh at 0.4 k, steam 900 t at 0.02 k.
    """
    inputs = site([[2.0] * 6], [boiler("a", 4.0)])

    assert _optimum_k(inputs, VesselUse.NONE) == pytest.approx(688.5 * 0.4 + 900 * 0.02, rel=1e-9)


def test_two_steps_share_a_vessel() -> None:
    """Demand 0 and 4 t/h with a 2 t/h boiler: a lossless vessel of 0.5 t lets it fire at 2 t/h throughout.

    Per step of 0.25 h the vessel takes 0.5 t; 10 m3 of 0.05 t/m3 hold exactly that. Without it half of the
    demand, 0.5 t a day, is not met: 300 days at 4 k/t are 600 k, more than the vessel's 40 k.
    """
    vessel = segment(5.0, 20.0, loss_per_m3=0.0, credit=0.0, base=20.0, per_m3=2.0)
    inputs = site([[0.0, 4.0]], [boiler("a", 2.0, curvature=0.0)], segments=(vessel,))
    # Fuel at the rating: 0.03 + 0.75 * 2 = 1.53 MWh/h for 150 h a year.
    by_hand = 1.0 + 20.0 + 2.0 * 10.0 + 0.4 * 1.53 * 150 + 0.02 * 300

    assert _optimum_k(inputs) == pytest.approx(by_hand, rel=1e-9)
    outcome = best_plan(inputs, rules(inputs), gap=1e-7, time_limit_s=20.0)
    assert outcome.cost_k == pytest.approx(by_hand, rel=1e-6)
    assert outcome.plan is not None
    assert outcome.plan.volume_m3 == pytest.approx(10.0, abs=1e-4)


def test_every_pattern_of_modes_enumerated() -> None:
    """All mode patterns of a four-step day, each solved as a linear programme: the model agrees to 1e-6."""
    inputs = site(
        [[0.5, 3.5, 0.2, 1.5]],
        [boiler("a", 3.0, minimum_firing_steps=2, start_wear=0.3, cycling_parts=2)],
        segments=(segment(5.0, 20.0),),
    )
    best = np.inf
    own = inputs.boilers[0]
    for modes in product(range(len(own.modes)), repeat=4):
        lit = [own.modes[k].lit for k in modes]
        starts = [t for t in range(4) if lit[t] and not lit[t - 1]]
        if any(not lit[(t + 1) % 4] for t in starts):
            continue
        for charging in product([False, True], repeat=4):
            day = FixedDay(
                in_service=(True,), mode=np.array([modes], dtype=np.int64), charging=np.array(charging)
            )
            plan = polished(inputs, (own,), 0, (5.0, 20.0), (day,))
            if plan is not None:
                best = min(best, plan_cost_k(inputs, plan))

    assert _optimum_k(inputs, VesselUse.REQUIRED) == pytest.approx(best, rel=1e-6)
    outcome = best_plan(inputs, rules(inputs, vessel=VesselUse.REQUIRED), gap=1e-7, time_limit_s=20.0)
    assert outcome.cost_k == pytest.approx(best, rel=1e-6)


def test_peaks_no_plant_can_meet_are_infeasible() -> None:
    """Where nothing on offer meets the raw peak, infeasible is a result, not an exception."""
    inputs = site([[1.0] * 4], [boiler("a", 2.0)], segments=(segment(5.0, 20.0),))
    too_much = rules(inputs, adequate=True)
    inputs_with_peak = PlanInputs(**{**_fields(inputs), "peak_t_h": 50.0})
    outcome = Search(inputs_with_peak, too_much).run(gap=1e-3, time_limit_s=5.0)

    assert outcome.stop is Stop.INFEASIBLE
    assert outcome.has is Has.NOTHING


def _fields(inputs: PlanInputs) -> dict[str, object]:
    return {name: getattr(inputs, name) for name in inputs.__slots__}


def test_an_added_option_never_raises_the_cost() -> None:
    """Allowing a vessel cannot make the optimum dearer."""
    inputs = site([[0.4, 3.0, 0.4, 2.0]], [boiler("a", 2.5)], segments=(segment(5.0, 20.0),))

    assert _optimum_k(inputs) <= _optimum_k(inputs, VesselUse.NONE) * (1 + 1e-9)


def test_doubled_prices_double_the_cost() -> None:
    """With every price doubled the optimum doubles."""
    demand = [[0.4, 3.0, 0.4, 2.0]]
    single = site(demand, [boiler("a", 2.5)], fuel=0.4, steam=0.02, unmet=4.0)
    double = site(demand, [boiler("a", 2.5, start_wear=0.1)], fuel=0.8, steam=0.04, unmet=8.0)

    assert _optimum_k(double) == pytest.approx(2 * _optimum_k(single), rel=1e-9)
