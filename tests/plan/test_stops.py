"""Searches that end early, that go on, and that are asked for more."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest

from evenfire.plan.compiled import compiled
from evenfire.plan.inputs import VesselUse
from evenfire.plan.milp import solve
from evenfire.plan.model import alternative_model
from evenfire.plan.optimum import best_plan
from evenfire.plan.outcome import Has, Progress, Stop
from evenfire.plan.search import Search
from evenfire.plan.store import PlanStore
from tests.model.plants import boiler, rules, segment, site
from tests.plan.sites import peaky_site


def test_a_smaller_gap_never_loosens_what_is_proven() -> None:
    """Bounds rise and costs fall as finer grids are asked for."""
    inputs, allowed = peaky_site()
    outcomes = [Search(inputs, allowed).run(gap, 30.0) for gap in (3e-2, 1e-2, 3e-3)]
    costs = [outcome.cost_k for outcome in outcomes]
    bounds = [outcome.bound_k for outcome in outcomes]

    assert costs == sorted(costs, reverse=True)
    assert bounds == sorted(bounds)
    assert all(bound <= min(costs) for bound in bounds)


def test_ctrl_c_keeps_the_best_plan() -> None:
    """An interrupt after the first plan ends the search with that plan, its bound and the word for it."""
    inputs, allowed = peaky_site()

    def interrupt(progress: Progress) -> None:
        if progress.cost_k is not None:
            raise KeyboardInterrupt

    outcome = Search(inputs, allowed).run(0.0, 30.0, interrupt)

    assert outcome.stop is Stop.INTERRUPTED
    assert outcome.has is Has.PLAN
    assert outcome.bound_k is not None
    assert outcome.cost_k is not None
    assert outcome.bound_k <= outcome.cost_k


def test_no_time_is_said() -> None:
    """Without time there is a bound, no plan, and the reason."""
    outcome = Search(*peaky_site()).run(0.0, 0.0)

    assert outcome.stop is Stop.TIME_LIMIT
    assert outcome.has is Has.NOTHING
    assert outcome.gap is None


def test_a_kept_plan_is_not_planned_twice(tmp_path: Path) -> None:
    """The same inputs find plan, bound and short list again; the search does not run."""
    inputs, allowed = peaky_site()
    store = PlanStore(tmp_path)
    first = best_plan(inputs, allowed, gap=2e-2, time_limit_s=30.0, store=store)
    moved: list[Progress] = []
    again = best_plan(inputs, allowed, gap=2e-2, time_limit_s=30.0, store=store, watch=moved.append)

    assert not moved
    assert again.cost_k == first.cost_k
    assert again.bound_k == first.bound_k
    assert again.plan is not None
    assert first.plan is not None
    assert np.array_equal(again.plan.dispatch[0].output_t_h, first.plan.dispatch[0].output_t_h)
    assert [x.volume_m3 for x in again.shortlist] == [x.volume_m3 for x in first.shortlist]


def test_a_kept_plan_belongs_to_its_numbers(tmp_path: Path) -> None:
    """Another price, other rules or a damaged file find nothing."""
    inputs, allowed = peaky_site()
    store = PlanStore(tmp_path)
    best_plan(inputs, allowed, gap=2e-2, time_limit_s=30.0, store=store)
    dearer = replace(inputs, rates=replace(inputs.rates, fuel_k_mwh=inputs.rates.fuel_k_mwh + 1e-9))

    assert store.get(inputs, allowed) is not None
    assert store.get(dearer, allowed) is None
    assert store.get(inputs, replace(allowed, vessel=VesselUse.NONE)) is None
    for file in tmp_path.glob("*.npz"):
        file.write_bytes(file.read_bytes()[:100])
    assert store.get(inputs, allowed) is None


def test_a_kept_plan_short_of_the_gap_is_where_the_search_goes_on(tmp_path: Path) -> None:
    """A smaller gap starts from what an earlier run had, and never ends above it."""
    inputs, allowed = peaky_site()
    store = PlanStore(tmp_path)
    first = best_plan(inputs, allowed, gap=5e-2, time_limit_s=30.0, store=store)
    second = best_plan(inputs, allowed, gap=1e-3, time_limit_s=30.0, store=store)

    assert first.cost_k is not None
    assert second.cost_k is not None
    assert second.cost_k <= first.cost_k
    assert second.gap is not None
    assert second.gap <= 1e-3


def test_joined_days_enclose_one_long_day() -> None:
    """Three days that follow each other are one cyclic day three times as long, solved by HiGHS alone."""
    days = [[1.0, 3.0, 1.5, 1.0], [2.0, 2.5, 1.0, 1.0], [1.0, 1.0, 3.5, 1.0]]
    equipment = [boiler("one", 2.5, cycling_parts=4)]
    segments = (segment(5.0, 60.0),)
    following = np.roll(np.eye(3), 1, axis=1)
    joined = site(days, equipment, segments=segments, weights=[1.0] * 3, transitions=following)
    long = site([[*days[0], *days[1], *days[2]]], equipment, segments=segments, weights=[1.0])
    allowed = rules(joined, vessel=VesselUse.REQUIRED)
    outcome = Search(joined, allowed, joined=True).run(1e-3, 20.0)
    whole = solve(compiled(alternative_model(long, allowed)), gap=1e-7, time_limit_s=60.0)

    assert whole.stop is Stop.GAP_REACHED
    assert whole.cost_k is not None
    assert outcome.bound_k is not None
    assert outcome.bound_k <= whole.cost_k * (1 + 1e-9)
    assert outcome.cost_k is not None
    assert outcome.cost_k >= whole.cost_k * (1 - 1e-6)
    assert outcome.bound_k == pytest.approx(whole.cost_k, rel=0.02)
