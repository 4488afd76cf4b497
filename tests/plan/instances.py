"""Random small plants: every state and option of the plan, solved by HiGHS alone within a second."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from hypothesis import strategies as st

from evenfire.plan.compiled import compiled
from evenfire.plan.inputs import AdequacyCut, AlternativeRules, PlanInputs, VesselUse
from evenfire.plan.milp import MilpResult, solve
from evenfire.plan.model import alternative_model
from tests.model.plants import boiler, rules, segment, site


@dataclass(frozen=True, slots=True, kw_only=True)
class Instance:
    """A site and what its alternative may choose."""

    inputs: PlanInputs
    rules: AlternativeRules


def _tenths(low: float, high: float) -> st.SearchStrategy[float]:
    return st.integers(round(low * 10), round(high * 10)).map(lambda n: n / 10)


@st.composite
def instances(draw: st.DrawFn) -> Instance:
    """One or two typical days of 6 to 8 steps; one to three boilers; up to two pressure windows."""
    steps = draw(st.sampled_from([6, 8]))
    days = draw(st.integers(1, 2))
    demand = [draw(st.lists(_tenths(0.0, 7.0), min_size=steps, max_size=steps)) for _ in range(days)]
    count = draw(st.integers(1, 3))
    boilers = [
        boiler(
            f"boiler {b}",
            draw(_tenths(2.0, 6.0)),
            turndown=draw(st.sampled_from([1.5, 3.0, 4.0])),
            existing=draw(st.booleans()) if b else True,
            fixed=draw(st.sampled_from([0.0, 20.0, 200.0])),
            slope=draw(st.sampled_from([0.7, 0.75, 0.8])),
            curvature=draw(st.sampled_from([0.0, 0.05, 0.2])),
            start_wear=draw(st.sampled_from([0.0, 0.05, 0.4])),
            cold_start_fuel=draw(st.sampled_from([0.0, 1.0])),
            minimum_firing_steps=draw(st.integers(1, 3)),
            minimum_off_steps=draw(st.integers(1, 3)),
            ramp=draw(st.sampled_from([1e3, 1.0])),
            starts_peak=draw(st.sampled_from([0.0, 5.0])),
            cycling_parts=draw(st.sampled_from([2, 4])),
            allowed=draw(st.sampled_from([(True, True), (True, False)])),
        )
        for b in range(count)
    ]
    segments = ()
    vessel = draw(st.sampled_from(list(VesselUse)))
    if vessel is not VesselUse.NONE:
        credit = draw(st.sampled_from([-0.01, 0.0, 0.02]))
        segments = (
            segment(5.0, 20.0, credit=credit),
            segment(20.0, 60.0, base=30.0, per_m3=1.5, credit=credit),
            segment(5.0, 40.0, window=1, pressure=1, capacity_per_m3=0.07, release_per_m3=0.2),
        )
    transitions = np.array([[250.0, 50.0], [50.0, 15.0]]) if days == 2 else np.array([[365.0]])
    adequate = draw(st.booleans())
    inputs = site(
        demand,
        boilers,
        segments=segments,
        weights=[300.0, 65.0][:days],
        transitions=transitions,
        cuts=(AdequacyCut(energy_t=2.0, duration_h=0.3),) if adequate else (),
        unmet=draw(st.sampled_from([0.5, 4.0])),
    )
    return Instance(
        inputs=inputs,
        rules=rules(inputs, vessel=vessel, most_new=1, adequate=adequate),
    )


def solved_whole(instance: Instance, gap: float = 1e-7) -> MilpResult:
    """The instance's mixed-integer model handed whole to HiGHS."""
    return solve(compiled(alternative_model(instance.inputs, instance.rules)), gap=gap, time_limit_s=60.0)
