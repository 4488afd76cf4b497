"""States, times, ramps and fuel curves of boilers in the plan, against costs reckoned by hand."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest

from evenfire.boiler import fuel_curve, operating_modes
from evenfire.plan.compiled import compiled
from evenfire.plan.day import NO_STORE, DayProblem
from evenfire.plan.flows import yearly_flows
from evenfire.plan.inputs import PlanBoiler, PlanInputs, PlanMode, VesselUse
from evenfire.plan.milp import solve
from evenfire.plan.model import alternative_model
from evenfire.plan.optimum import best_plan
from evenfire.plan.outcome import Plan, Stop
from evenfire.plant import BoilerSpec, EfficiencyPoint
from tests.model.plants import boiler, rules, site

FUEL, STEAM, WEAR, START_FUEL = 0.4, 0.02, 0.05, 0.01
"""Rates of ``site`` [k/MWh, k/t] and of ``boiler`` [k/start, MWh/start]."""


def _optimum(inputs: PlanInputs) -> tuple[float, Plan]:
    """Cost by HiGHS on the whole model and plan by the exact method, which must cost the same."""
    asked = rules(inputs, vessel=VesselUse.NONE)
    whole = solve(compiled(alternative_model(inputs, asked)), gap=1e-9, time_limit_s=60.0)
    outcome = best_plan(inputs, asked, gap=1e-7, time_limit_s=20.0)
    assert whole.stop is Stop.GAP_REACHED
    assert whole.cost_k is not None
    assert outcome.plan is not None
    assert outcome.cost_k == pytest.approx(whole.cost_k, rel=1e-6)
    return whole.cost_k, outcome.plan


@pytest.mark.parametrize(("cold_start_fuel", "hot"), [(1.0, True), (0.1, False)])
def test_second_boiler_stands_hot_or_goes_cold(cold_start_fuel: float, hot: bool) -> None:
    """A boiler needed for one peak a day pays standby on quiet days, unless cold starts cost less.

    Big: 0.03 + 0.75 q MWh/h up to 4 t/h. Small: 0.02 + 0.85 q from 1 to 2 t/h, standby 0.02 MWh/h.
    Peak day 2, 2, 5, 2 t/h: big 3 x 1.53 + 3.03, small 0.87 + 3 x 0.02 and one start. Quiet day 4 x 2 t/h:
    big 4 x 1.53; small 4 x 0.02 where hot: 165 days give 13.2 MWh, 40 cold starts a year 40 times theirs.
    """
    inputs = site(
        [[2.0, 2.0, 5.0, 2.0], [2.0] * 4],
        [
            boiler("big", 4.0, curvature=0.0, starts_peak=0.0),
            boiler(
                "small", 2.0, turndown=2.0, slope=0.85, casing=0.02, curvature=0.0, starts_peak=0.0,
                cold_start_fuel=cold_start_fuel,
            ),
        ],
        step_h=1.0,
        weights=[200.0, 165.0],
        transitions=np.array([[160.0, 40.0], [40.0, 125.0]]),
    )  # fmt: skip
    fuel = 200 * (3 * 1.53 + 3.03 + 0.87 + 3 * 0.02 + START_FUEL) + 165 * 4 * 1.53
    fuel += 13.2 if hot else 40 * cold_start_fuel
    by_hand = FUEL * fuel + STEAM * (200 * 11 + 165 * 8) + 200 * WEAR

    cost, plan = _optimum(inputs)

    assert cost == pytest.approx(by_hand, rel=1e-7)
    small = plan.boilers.index("small")
    assert [bool(day.in_service[small]) for day in plan.dispatch] == [True, hot]
    flows = yearly_flows(inputs, plan)
    assert flows.boilers[small].standing_fuel_mwh == pytest.approx(200 * 0.06 + (13.2 if hot else 0.0))
    assert flows.boilers[small].cold_start_fuel_mwh == pytest.approx(0.0 if hot else 40 * cold_start_fuel)


def test_cycling_below_turndown_costs_starts_and_purge() -> None:
    """Half of lowest firing all day: fuel of half the time, standing loss of the other half, 5 starts/h.

    Lowest firing of 1 t/h burns 0.78 MWh/h; 300 days of 6 h are 1800 h and 9000 starts of 0.002 MWh and
    0.005 k. Dearer starts make the plan fire at 1 t/h without a pause and vent half of it.
    """
    inputs = site([[0.5] * 6], [boiler("a", 4.0, start_wear=0.005, start_fuel=0.002)], step_h=1.0)
    by_hand = FUEL * (1800 * (0.5 * 0.78 + 0.5 * 0.02) + 9000 * 0.002) + STEAM * 900 + 9000 * 0.005
    dear = site([[0.5] * 6], [boiler("a", 4.0)], step_h=1.0)

    cost, plan = _optimum(inputs)
    (flows,) = yearly_flows(inputs, plan).boilers

    assert cost == pytest.approx(by_hand, rel=1e-9)
    assert flows.burner_starts == pytest.approx(9000)
    assert flows.start_fuel_mwh == pytest.approx(18)
    assert flows.standing_fuel_mwh == pytest.approx(18)
    assert flows.cycling_fuel_mwh == pytest.approx(702)
    assert flows.firing_hours == pytest.approx(900)
    assert _optimum(dear)[0] == pytest.approx(FUEL * 1800 * 0.78 + STEAM * 1800, rel=1e-9)


def _day_cost(fuel_mwh: float, steam_t: float, starts: int) -> float:
    return 300 * (FUEL * (fuel_mwh + starts * START_FUEL) + STEAM * steam_t + starts * WEAR)


@pytest.mark.parametrize(
    ("least_off", "by_hand"),
    [
        (1, _day_cost(2 * 1.53 + 4 * 0.02, 4.0, 2)),
        (2, _day_cost(2 * 1.53 + 0.40 + 3 * 0.02, 4.5, 1)),
    ],
)
def test_minimum_off_time_keeps_a_burner_lit(least_off: int, by_hand: float) -> None:
    """One step without demand is too short to go off for two: the burner stays lit and 0.5 t is vented.

    Lit and cycling gives at least half of lowest firing, 0.5 t/h for 0.02 + (0.78 - 0.02)/2 = 0.40 MWh/h.
    """
    inputs = site(
        [[2.0, 0.0, 2.0, 0.0, 0.0, 0.0]],
        [boiler("a", 4.0, curvature=0.0, starts_peak=0.0, minimum_off_steps=least_off)],
        step_h=1.0,
    )

    assert _optimum(inputs)[0] == pytest.approx(by_hand, rel=1e-9)


@pytest.mark.parametrize(
    ("least_firing", "by_hand"),
    [
        (1, _day_cost(1.53 + 5 * 0.02, 2.0, 1)),
        (3, _day_cost(1.53 + 2 * 0.40 + 3 * 0.02, 3.0, 1)),
    ],
)
def test_minimum_firing_time_vents(least_firing: int, by_hand: float) -> None:
    """One step of demand lit for three vents half of lowest firing in the other two."""
    inputs = site(
        [[2.0, 0.0, 0.0, 0.0, 0.0, 0.0]],
        [boiler("a", 4.0, curvature=0.0, starts_peak=0.0, minimum_firing_steps=least_firing)],
        step_h=1.0,
    )

    assert _optimum(inputs)[0] == pytest.approx(by_hand, rel=1e-9)


def test_slow_ramp_begins_before_the_peak() -> None:
    """A rise of 3 t/h at 1 t/h per step starts two steps early: 1, 2, 3, 4, 1, 1 t/h, 3 t vented."""
    inputs = site(
        [[1.0, 1.0, 1.0, 4.0, 1.0, 1.0]],
        [boiler("a", 4.0, curvature=0.0, starts_peak=0.0, ramp=1.0)],
        step_h=1.0,
    )

    cost, plan = _optimum(inputs)

    assert cost == pytest.approx(_day_cost(6 * 0.03 + 0.75 * 12, 12.0, 0), rel=1e-9)
    assert plan.dispatch[0].output_t_h[0] == pytest.approx([1.0, 2.0, 3.0, 4.0, 1.0, 1.0], abs=1e-6)


CROOKED = (
    ((0.25, 0.86), (0.5, 0.93), (0.75, 0.88), (1.0, 0.91)),
    ((0.25, 0.80), (0.5, 0.85), (0.75, 0.92), (1.0, 0.86)),
)
"""Efficiency points whose fuel curves bend downwards at one point or more."""
WORKING_PA, FEEDWATER_K = 10e5, 376.15
GRID_T_H = 0.05


def _crooked(number: int) -> BoilerSpec:
    return BoilerSpec(
        name=f"crooked {number}",
        rated_kg_s=4.0 / 3.6,
        largest_working_pa=16e5,
        turndown=4.0,
        efficiency_points=tuple(
            EfficiencyPoint(load_fraction=load, efficiency_lhv=eta) for load, eta in CROOKED[number]
        ),
        efficiency_at_pa=WORKING_PA,
        standing_loss_w=20e3,
        purge_energy_j=10e6,
        buffer_kg=80.0,
        burner_band_pa=1.0e5,
        minimum_firing_s=0.0,
        minimum_off_s=0.0,
        cold_start_s=1800.0,
        cold_start_energy_j=5e9,
        ramp_kg_s2=1.0,
        blowdown_fraction=0.04,
        stack_slope_per_k=4.6e-4,
    )


def _plan_boiler(spec: BoilerSpec) -> PlanBoiler:
    """A boiler that stands by or fires: one mode per convex piece, starts without cost."""
    kept = [x for x in operating_modes(spec, WORKING_PA, FEEDWATER_K) if x.firing or x.high_kg_s == 0.0]
    return PlanBoiler(
        name=spec.name,
        existing=True,
        rated_t_h=4.0,
        modes=tuple(
            PlanMode(
                name="firing" if x.firing else "cycling",
                lit=x.firing,
                output_t_h=tuple(x.output_kg_s * 3.6),
                fuel_mwh_h=tuple(x.fuel_w_lhv / 1e6),
                starts_per_h_low=0.0,
                starts_per_h_high=0.0,
            )
            for x in kept
        ),
        fixed_cost_k=0.0,
        start_wear_k=0.0,
        start_fuel_mwh=0.0,
        cold_start_fuel_mwh=0.0,
        minimum_firing_steps=1,
        minimum_off_steps=1,
        ramp_t_h=1e3,
        pressure_factor=(1.0,),
        pressure_allowed=(True,),
    )


def _least_fuel_mwh_h(demand_t_h: float) -> float:
    """Every split of a demand between both crooked boilers on a grid that holds all their breakpoints."""
    outputs = np.concatenate([[0.0], np.arange(1.0, 4.0 + GRID_T_H / 2, GRID_T_H)])
    fuel = []
    for number in (0, 1):
        curve = fuel_curve(_crooked(number), WORKING_PA, FEEDWATER_K)
        standby, *_ = operating_modes(_crooked(number), WORKING_PA, FEEDWATER_K)
        firing = np.interp(outputs / 3.6, curve.output_kg_s, curve.fuel_w_lhv)
        fuel.append(np.where(outputs == 0.0, standby.fuel_w_lhv[0], firing) / 1e6)
    meets = np.abs(outputs[:, None] + outputs[None, :] - demand_t_h) < 1e-9
    return float((fuel[0][:, None] + fuel[1][None, :])[meets].min())


def test_fuel_that_is_not_convex_is_exact() -> None:
    """Two boilers with crooked fuel curves share each demand as the best of every split does.

    Breakpoints are multiples of 1 t/h and demands of the grid's 0.05 t/h, so that the grid holds the
    optimum: a sum of two piecewise linear curves is least at a breakpoint of one of them.
    """
    pair = tuple(_plan_boiler(_crooked(n)) for n in (0, 1))
    assert all(len(x.modes) > 2 for x in pair)
    demand = [2.0, 2.65, 3.3, 4.05, 4.7, 5.35, 6.2, 6.9, 7.55, 8.0]
    least = [_least_fuel_mwh_h(each) for each in demand]
    inputs = site([demand], list(pair), step_h=1.0, pressures=1, unmet=40.0)
    by_enumeration = 300 * (FUEL * sum(least) + STEAM * sum(demand))
    shared = rules(inputs, vessel=VesselUse.NONE, required=("crooked 0", "crooked 1"))

    whole = solve(compiled(alternative_model(inputs, shared)), gap=1e-9, time_limit_s=60.0)
    day = DayProblem(
        demand_t_h=np.array(demand),
        step_h=1.0,
        boilers=pair,
        pressure=0,
        rates=inputs.rates,
        store=NO_STORE,
        quantum_t=GRID_T_H,
        most_states=1,
    )
    schedule = day.schedule()

    assert whole.cost_k == pytest.approx(by_enumeration, rel=1e-9)
    assert schedule is not None
    assert 300 * schedule.cost_k == pytest.approx(by_enumeration, rel=1e-9)
    assert by_enumeration * (1 - 0.01) <= 300 * day.lower_bound() <= by_enumeration * (1 + 1e-9)


def test_convex_hull_would_flatter_a_crooked_curve() -> None:
    """The pieces matter: somewhere the convex hull of a crooked curve lies 1 % below its fuel."""
    curve = fuel_curve(_crooked(0), WORKING_PA, FEEDWATER_K)
    points = list(zip(curve.output_kg_s, curve.fuel_w_lhv, strict=True))
    hull = [points[0]]
    for point in points[1:]:
        while len(hull) > 1 and _turns_down(hull[-2], hull[-1], point):
            hull.pop()
        hull.append(point)
    below = curve.fuel_w_lhv - np.interp(curve.output_kg_s, *np.array(hull).T)

    assert any(slope_2 < slope_1 for slope_1, slope_2 in pairwise(np.diff(curve.fuel_w_lhv)))
    assert float((below / curve.fuel_w_lhv).max()) > 0.01


def _turns_down(first: tuple[float, float], middle: tuple[float, float], last: tuple[float, float]) -> bool:
    """Whether the middle point lies on or above the chord of its neighbours."""
    (x0, y0), (x1, y1), (x2, y2) = first, middle, last
    return (y1 - y0) * (x2 - x0) >= (y2 - y0) * (x1 - x0)
