"""The exact price answer against enumeration, a hand calculation and the solver alone."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from evenfire.plan.compiled import compiled
from evenfire.plan.inputs import AlternativeRules, PlanInputs, VesselUse
from evenfire.plan.milp import solve as solve_whole
from evenfire.plan.model import alternative_model
from evenfire.plan.optimum import best_plan
from evenfire.plan.outcome import Plan, Stop
from evenfire.plan.polish import plan_cost_k
from evenfire.plan.search import Search
from evenfire.sweep.break_even import break_evens, stretches
from evenfire.sweep.curve import CostCurve, PlanLine, ProvenPoint
from evenfire.sweep.price_answer import PriceAnswer, PriceRecursion, Solved
from tests.model.plants import boiler, rules, segment, site
from tests.sweep.catalogue import Catalogue

SHARES = np.linspace(0.0, 1.0, 101)

costs = st.floats(100.0, 1000.0)
lines = st.lists(st.tuples(costs, costs), min_size=1, max_size=12)


@given(lines)
@settings(max_examples=100, deadline=None)
def test_every_breakpoint_is_found_with_as_few_solves_as_the_theory_says(own):
    """With exact solves the curve is the least of all lines, after at most 2 B + 1 solves for B lines."""
    catalogue = Catalogue(lines={"a": own})
    answer = catalogue.recursion().run()
    (curve,) = answer.curves
    for share in SHARES:
        assert curve.cost_k(share) == pytest.approx(catalogue.least("a", share), rel=1e-10)
        assert curve.bound_k(share) == pytest.approx(catalogue.least("a", share), rel=1e-10)
    assert answer.solves <= 2 * (len(curve.kinks()) + 1) + 1


@given(lines, lines, st.sampled_from([1e-4, 1e-2, 0.1]))
@settings(max_examples=100, deadline=None)
def test_gaps_are_honoured_between_solves(first, second, gap):
    """With solves that stop at a gap the true least cost lies between bound and cost everywhere."""
    catalogue = Catalogue(lines={"a": first, "b": second}, gap=gap)
    for curve in catalogue.recursion().run().curves:
        for share in SHARES:
            true = catalogue.least(curve.alternative, share)
            assert curve.bound_k(share) <= true * (1 + 1e-12)
            assert curve.cost_k(share) >= true * (1 - 1e-12)
            assert curve.gap(share) <= 1.05 * gap + 1e-9


@given(lines, lines, st.sampled_from([0.0, 1e-3, 0.05]))
@settings(max_examples=150, deadline=None)
def test_proven_break_evens_hold_the_true_one(first, second, gap):
    """In the interval of every proven break-even the true costs cross, and nowhere outside all intervals."""
    catalogue = Catalogue(lines={"a": first, "b": second}, gap=gap)
    found = break_evens(catalogue.recursion().run().curves)

    def lead(share: float) -> float:
        return catalogue.least("b", share) - catalogue.least("a", share)

    for each in found:
        assert each.low <= each.value <= each.high
        if each.proven:
            sign = 1.0 if each.cheaper_below == "a" else -1.0
            assert sign * lead(each.low) >= -1e-6
            assert sign * lead(each.high) <= 1e-6
    if gap == 0.0:
        dense = np.array([lead(share) for share in SHARES])
        sure = np.abs(dense) > 1e-6
        signs = np.sign(dense[sure])
        assert len(found) >= np.count_nonzero(np.diff(signs))


def test_break_even_of_two_plants_by_hand():
    """100 k and 10 MWh against 40 k and 25 MWh cost the same at 4 k/MWh; the first wins above."""
    low, high = 2.0, 8.0
    curves = tuple(
        CostCurve(
            alternative=name,
            lines=(PlanLine(plan=0, cost_low_k=fixed + use * low, cost_high_k=fixed + use * high),),
            proven=(
                ProvenPoint(share=0.0, bound_k=fixed + use * low),
                ProvenPoint(share=1.0, bound_k=fixed + use * high),
            ),
        )
        for name, fixed, use in (("thrifty", 100.0, 10.0), ("cheap", 40.0, 25.0))
    )
    (found,) = break_evens(curves)
    assert (found.cheaper_below, found.cheaper_above) == ("cheap", "thrifty")
    assert low + (high - low) * found.value == pytest.approx(4.0)
    assert found.low == pytest.approx(found.value)
    assert found.high == pytest.approx(found.value)
    assert [stretch.winner for stretch in stretches(curves)] == ["cheap", "thrifty"]


def test_gaps_widen_the_interval_of_a_break_even_by_hand():
    """Costs 40 + 25 p and 100 + 10 p, bounds 3 k and 6 k below: the truth is between 3.6 and 4.2 k/MWh."""
    low, high = 2.0, 8.0

    def curve(name: str, fixed: float, use: float, slack: float) -> CostCurve:
        ends = (fixed + use * low, fixed + use * high)
        return CostCurve(
            alternative=name,
            lines=(PlanLine(plan=0, cost_low_k=ends[0], cost_high_k=ends[1]),),
            proven=(
                ProvenPoint(share=0.0, bound_k=ends[0] - slack),
                ProvenPoint(share=1.0, bound_k=ends[1] - slack),
            ),
        )

    (found,) = break_evens((curve("cheap", 40.0, 25.0, 3.0), curve("thrifty", 100.0, 10.0, 6.0)))
    assert found.proven
    assert low + (high - low) * found.low == pytest.approx(4.0 - 6.0 / 15.0)
    assert low + (high - low) * found.high == pytest.approx(4.0 + 3.0 / 15.0)


def test_a_break_even_that_the_gap_leaves_open_is_not_called_proven():
    """Where bounds do not exclude that one alternative wins everywhere, the break-even says so."""

    def curve(name: str, a: float, b: float) -> CostCurve:
        return CostCurve(
            alternative=name,
            lines=(PlanLine(plan=0, cost_low_k=a, cost_high_k=b),),
            proven=(ProvenPoint(share=0.0, bound_k=a - 50.0), ProvenPoint(share=1.0, bound_k=b - 50.0)),
        )

    (found,) = break_evens((curve("a", 100.0, 200.0), curve("b", 110.0, 190.0)))
    assert not found.proven
    assert (found.low, found.high) == (0.0, 1.0)
    (first, second) = stretches((curve("a", 100.0, 200.0), curve("b", 110.0, 190.0)))
    assert (first.rivals, second.rivals) == (("b",), ("a",))


def test_equal_alternatives_have_no_break_even():
    """Two alternatives with the same plan tie at every price; the first named wins every stretch."""
    both = tuple(
        CostCurve(
            alternative=name,
            lines=(PlanLine(plan=0, cost_low_k=10.0, cost_high_k=20.0),),
            proven=(ProvenPoint(share=0.0, bound_k=10.0), ProvenPoint(share=1.0, bound_k=20.0)),
        )
        for name in ("storage", "free choice")
    )
    assert break_evens(both) == ()
    assert [(x.winner, x.rivals) for x in stretches(both)] == [("storage", ())]


# --- small plants -------------------------------------------------------------------------------

LOW_K, HIGH_K = 0.05, 1.2
GAP = 1e-4


def _small_site() -> PlanInputs:
    """Peaks above an old boiler: a thrifty boiler, a cheap one or a vessel, cheapest at different prices."""
    return site(
        [[0.6, 2.6, 1.0, 0.4, 2.8, 0.8, 0.3, 1.5]],
        [
            boiler("old", 2.0, slope=0.86, casing=0.06),
            boiler("thrifty", 3.0, existing=False, fixed=150.0, slope=0.72, turndown=6.0),
            boiler("cheap", 3.0, existing=False, fixed=90.0, slope=0.84, turndown=2.0),
        ],
        segments=(segment(5.0, 40.0, base=70.0),),
    )


def _alternatives(inputs: PlanInputs) -> dict[str, AlternativeRules]:
    old = rules(inputs, "old", vessel=VesselUse.NONE, most_new=0)
    return {
        "old": old,
        "further": replace(old, name="further", most_new=1, fewest_new=1),
        "storage": replace(old, name="storage", vessel=VesselUse.REQUIRED),
    }


def _at(inputs: PlanInputs, fuel_k_mwh: float) -> PlanInputs:
    return replace(inputs, rates=replace(inputs.rates, fuel_k_mwh=fuel_k_mwh))


def _answer(inputs: PlanInputs, alternatives: dict[str, AlternativeRules]) -> PriceAnswer:
    def solve(name: str, share: float, known: tuple[Plan, ...]) -> Solved:
        outcome = best_plan(
            _at(inputs, LOW_K + (HIGH_K - LOW_K) * share),
            alternatives[name],
            gap=GAP / 2,
            time_limit_s=60.0,
            known=known,
        )
        return Solved(plan=outcome.plan, bound_k=outcome.bound_k, stop=outcome.stop)

    return PriceRecursion(
        tuple(alternatives),
        solve,
        lambda plan: (plan_cost_k(_at(inputs, LOW_K), plan), plan_cost_k(_at(inputs, HIGH_K), plan)),
        lambda name, plan: Search(inputs, alternatives[name]).allows(plan),
        gap=GAP,
        most_solves=12,
    ).run()


@pytest.fixture(scope="module")
def answer() -> PriceAnswer:
    inputs = _small_site()
    return _answer(inputs, _alternatives(inputs))


@pytest.fixture(scope="module")
def true_costs() -> dict[str, list[float]]:
    """Least cost of every alternative at 21 prices, each mixed-integer model handed whole to HiGHS."""
    inputs = _small_site()
    found = {}
    for name, own in _alternatives(inputs).items():
        results = [
            solve_whole(
                compiled(alternative_model(_at(inputs, LOW_K + (HIGH_K - LOW_K) * share), own)),
                gap=1e-8,
                time_limit_s=60.0,
            )
            for share in SHARES[::5]
        ]
        found[name] = [result.cost_k for result in results if result.cost_k is not None]
    return found


def test_curves_hold_what_the_solver_alone_finds_at_every_price(answer, true_costs):
    """Bound <= least cost of the whole model by HiGHS <= cost at 21 prices, within the asked gap."""
    for curve in answer.curves:
        for share, true in zip(SHARES[::5], true_costs[curve.alternative], strict=True):
            assert curve.bound_k(share) <= true * (1 + 1e-7)
            assert curve.cost_k(share) >= true * (1 - 1e-7)
            assert curve.gap(share) <= 1.2 * GAP


def test_winners_of_all_stretches_are_those_of_the_solver_alone(answer, true_costs):
    """Away from break-evens the winner on each stretch is the one that enumeration of prices finds."""
    found = stretches(answer.curves)
    assert len(found) > 1
    doubtful = [(each.low, each.high) for each in break_evens(answer.curves)]
    for index, share in enumerate(SHARES[::5]):
        if any(low <= share <= high for low, high in doubtful):
            continue
        winner = min(true_costs, key=lambda name: true_costs[name][index])
        assert next(x.winner for x in found if x.low <= share <= x.high) == winner


def test_break_even_price_by_bisection_with_the_solver_alone(answer):
    """The first winner change, bisected on whole models solved by HiGHS, lies in its interval."""
    inputs = _small_site()
    alternatives = _alternatives(inputs)
    first, second = stretches(answer.curves)[:2]
    each = next(
        x
        for x in break_evens(answer.curves)
        if (x.cheaper_below, x.cheaper_above) == (first.winner, second.winner)
    )
    assert each.proven

    def lead(share: float) -> float:
        below, above = (
            solve_whole(
                compiled(
                    alternative_model(_at(inputs, LOW_K + (HIGH_K - LOW_K) * share), alternatives[name])
                ),
                gap=1e-9,
                time_limit_s=60.0,
            ).cost_k
            for name in (each.cheaper_below, each.cheaper_above)
        )
        assert below is not None
        assert above is not None
        return above - below

    low, high = 0.0, 1.0
    for _ in range(14):
        middle = (low + high) / 2
        low, high = (middle, high) if lead(middle) > 0 else (low, middle)
    assert each.low - 1e-4 <= high
    assert low <= each.high + 1e-4


def test_an_alternative_without_plants_has_no_curve_and_is_said_to_be_infeasible():
    """A vessel is required where none can be bought: infeasible at every price, solved once."""
    inputs = replace(_small_site(), vessel_segments=())
    impossible = replace(rules(inputs, "storage", vessel=VesselUse.REQUIRED, most_new=0))
    answer = _answer(inputs, {"storage": impossible})
    assert answer.infeasible == {"storage"}
    assert answer.curves[0].lines == ()
    assert break_evens(answer.curves) == ()


def test_a_search_out_of_time_keeps_its_bound_and_is_not_tried_at_every_price():
    """Where a search stops short, its gap stays visible and bends are not solved again and again."""
    catalogue = Catalogue(lines={"a": [(100.0, 200.0), (130.0, 150.0), (170.0, 110.0), (110.0, 180.0)]})
    calls = []

    def solve(name: str, share: float, known: tuple[Plan, ...]) -> Solved:
        calls.append(share)
        costs = [(1 - share) * a + share * b for a, b in catalogue.lines[name]]
        number = int(np.argmin(costs))
        return Solved(
            plan=Plan(boilers=("a", str(number)), segment=None, volume_m3=0.0, dispatch=()),
            bound_k=0.8 * min(costs),
            stop=Stop.TIME_LIMIT,
        )

    answer = PriceRecursion(
        ("a",),
        solve,
        lambda plan: catalogue.lines["a"][int(plan.boilers[1])],
        lambda name, plan: True,
        gap=0.01,
        most_solves=50,
    ).run()
    assert len(calls) <= 6
    assert answer.curves[0].gap(0.5) > 0.19


def test_a_plan_costs_a_straight_line_in_the_fuel_price():
    """Costs of plans are straight in the fuel price: three prices, one plan, one line."""
    inputs = _small_site()
    outcome = best_plan(inputs, _alternatives(inputs)["storage"], gap=0.01, time_limit_s=30.0)
    assert outcome.plan is not None
    low, middle, high = (plan_cost_k(_at(inputs, price), outcome.plan) for price in (0.2, 0.5, 0.8))
    assert middle == pytest.approx((low + high) / 2, rel=1e-12)
