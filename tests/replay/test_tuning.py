"""Tuning: deterministic, never worse than where it began, honest about weeks it did not see."""

from __future__ import annotations

import numpy as np

from evenfire.replay.controls import ControlKind
from evenfire.replay.simulate import Replay
from evenfire.replay.starting_controls import usual_controls
from evenfire.replay.tuning import OperatingWeights, halves, tuned
from tests.replay.plants import plant, record
from tests.replay.test_simulate import WEEK, peaky_flow

WEIGHTS = OperatingWeights(fuel_per_j=45.0 / 3.6e9, start=np.array([1.5]), unmet_per_kg=0.12)


def test_tuned_controls_cost_no_more_than_the_start() -> None:
    """On the weeks they were learnt on; the same seed finds the same settings."""
    made = plant(volume_m3=25.0)
    demand = record(peaky_flow(11, 2 * WEEK))
    start = usual_controls(made, ControlKind.SMOOTHED_DEMAND)
    found = [tuned(made, demand, start, WEIGHTS, trials=60, seed=4) for _ in range(2)]
    learnt, _ = halves(demand)
    tonnes = learnt.flow_kg_s.sum() * 60.0 / 1000.0

    assert found[0].controls.burners == found[1].controls.burners
    assert found[0].learnt_cost_per_t <= WEIGHTS.cost(Replay(made, learnt).run(start)) / tonnes + 1e-12
    assert found[0].judged_cost_per_t > 0.0


def test_halves_share_nothing_and_leave_nothing_out() -> None:
    """Four weeks: the first and third are learnt on, the second and fourth judged on."""
    flow = np.arange(4 * WEEK, dtype=float)
    learnt, judged = halves(record(flow))

    assert np.array_equal(learnt.flow_kg_s, np.concatenate([flow[:WEEK], flow[2 * WEEK : 3 * WEEK]]))
    assert np.array_equal(np.sort(np.concatenate([learnt.flow_kg_s, judged.flow_kg_s])), flow)
