"""One site with a vessel worth buying, small enough for HiGHS alone."""

from __future__ import annotations

from evenfire.plan.inputs import AlternativeRules, PlanInputs, VesselUse
from tests.model.plants import boiler, rules, segment, site

DEMAND = [[1.0, 1.0, 4.5, 1.0, 0.5, 4.0, 1.0, 1.5], [0.5, 0.5, 0.5, 3.5, 0.5, 0.5, 0.5, 0.5]]


def peaky_site() -> tuple[PlanInputs, AlternativeRules]:
    """Two days of short peaks above one boiler's rating, a second boiler and two windows to choose."""
    inputs = site(
        DEMAND,
        [boiler("old", 3.0, minimum_firing_steps=2), boiler("new", 2.0, existing=False, fixed=150.0)],
        segments=(
            segment(5.0, 20.0),
            segment(20.0, 60.0, base=30.0, per_m3=1.5),
            segment(5.0, 40.0, window=1, pressure=1, capacity_per_m3=0.07, release_per_m3=0.4),
        ),
        weights=[300.0, 65.0],
    )
    return inputs, rules(inputs, vessel=VesselUse.OPTIONAL, most_new=1)
