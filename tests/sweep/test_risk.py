"""Random scenarios: against analytic distributions, cash flows one by one, and plans made anew."""

from __future__ import annotations

import json
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from scipy import stats

from evenfire.appraisal.priced import priced
from evenfire.case.case import RiskRequest, UncertainQuantity
from evenfire.case.load import load_case
from evenfire.cli.risk import run
from evenfire.errors import ExitStatus, OutputError, SweepError
from evenfire.money.cash_flow import cash_flow
from evenfire.money.terms import Price, YearlyQuantities
from evenfire.report.page_risk import risk_page
from evenfire.report.risk_document import risk_document, risk_table
from evenfire.sweep.risk import alternative_risks, risk, scenario_changes
from evenfire.sweep.scenarios import SCALED_LINES, deviation, scenarios
from evenfire.sweep.strand import Strand, planned_point
from evenfire.sweep.study import study
from tests.sweep.tiny_case import write_tiny_case

N = 20_000
RISK = """
[risk]
scenarios = 400
seed = 3
[[risk.uncertain]]
quantity = "fuel price"
distribution = "lognormal"
low_percent = -30
high_percent = 60
yearly_volatility_percent = 10
[[risk.uncertain]]
quantity = "cost of new boilers"
distribution = "triangular"
low_percent = -10
likely_percent = 0
high_percent = 40
[[risk.uncertain]]
quantity = "maintenance"
distribution = "uniform"
low_percent = -20
high_percent = 20
[[risk.uncertain]]
quantity = "steam demand growth"
distribution = "uniform"
low_percent = -3
high_percent = 3
"""


def _quantity(name: str = "fuel price", **changes: float | str) -> UncertainQuantity:
    usual = UncertainQuantity(
        name=name,
        distribution="uniform",
        low_deviation=-0.2,
        likely_deviation=0.0,
        high_deviation=0.5,
        yearly_volatility=0.0,
        correlation=0.0,
    )
    return replace(usual, **changes)


@pytest.fixture(scope="module")
def risky_case(tmp_path_factory: pytest.TempPathFactory) -> Path:
    folder = write_tiny_case(tmp_path_factory.mktemp("risk") / "tiny", "as is", "further boiler", "storage")
    file = folder / "case.toml"
    file.write_text(file.read_text() + RISK)
    return folder


@pytest.mark.parametrize(
    ("kind", "true"),
    [
        ("uniform", stats.uniform(-0.2, 0.7)),
        ("triangular", stats.triang(0.2 / 0.7, -0.2, 0.7)),
        (
            "lognormal",
            stats.lognorm(np.log(1.5 / 0.8) / (2 * stats.norm.ppf(0.9)), loc=-1.0, scale=np.sqrt(1.5 * 0.8)),
        ),
    ],
)
def test_quantiles_are_those_of_scipy(kind, true):
    """The quantile function of every distribution against scipy.stats at 99 shares."""
    shares = np.arange(1, 100) / 100
    found = deviation(_quantity(distribution=kind), stats.norm.ppf(shares))
    np.testing.assert_allclose(found, true.ppf(shares), rtol=1e-9, atol=1e-12)


def test_lognormal_ends_are_exceeded_in_nine_and_one_of_ten():
    """What docs/case-file.md says of low and high."""
    found = deviation(_quantity(distribution="lognormal"), stats.norm.ppf([0.1, 0.9]))
    np.testing.assert_allclose(found, [-0.2, 0.5], rtol=1e-12)


def test_draws_follow_their_distribution_and_correlation(risky_case):
    """Kolmogorov-Smirnov on 20 000 draws at one in a thousand; correlation of the scores to 0.02."""
    request = RiskRequest(
        scenarios=N,
        seed=11,
        uncertain=(_quantity(), _quantity("carbon price", correlation=-0.6)),
    )
    drawn = scenarios(load_case(risky_case), request).draws
    for values in drawn:
        assert stats.kstest(values, stats.uniform(-0.2, 0.7).cdf).pvalue > 1e-3
    scores = [stats.norm.ppf((values + 0.2) / 0.7) for values in drawn]
    assert np.corrcoef(scores)[0, 1] == pytest.approx(-0.6, abs=0.02)


def test_more_scenarios_or_quantities_leave_the_first_as_they_are(risky_case):
    """The first hundred of a thousand are the hundred; another uncertain quantity changes nothing."""
    case = load_case(risky_case)
    short = RiskRequest(scenarios=100, seed=5, uncertain=(_quantity(yearly_volatility=0.1),))
    longer = replace(short, scenarios=1000, uncertain=(_quantity("maintenance"), *short.uncertain))
    column = SCALED_LINES.index("fuel")
    np.testing.assert_array_equal(
        scenarios(case, short).factors[:, column], scenarios(case, longer).factors[:100, column]
    )
    other = scenarios(case, replace(short, seed=6)).factors[:, column]
    assert not np.any(other == scenarios(case, short).factors[:, column])


def test_a_walk_keeps_its_expectation_and_spreads_with_the_root_of_time(risky_case):
    """A price walk has expectation one: the mean factor is one within four standard errors."""
    request = RiskRequest(
        scenarios=N,
        seed=2,
        uncertain=(_quantity(low_deviation=-1e-9, high_deviation=1e-9, yearly_volatility=0.2),),
    )
    factor = scenarios(load_case(risky_case), request).factors[:, SCALED_LINES.index("fuel")]
    assert factor.mean() == pytest.approx(1.0, abs=4 * factor.std() / np.sqrt(N))
    assert 0.2 < factor.std() < 0.2 * np.sqrt(15)


def test_factor_of_a_scenario_is_that_of_its_cash_flow(risky_case):
    """Fuel at a price path drawn by hand, demand growing: the cash flow year by year gives the factor."""
    case = load_case(risky_case)
    growth = _quantity("steam demand growth", low_deviation=-0.03, high_deviation=0.03)
    request = RiskRequest(scenarios=5, seed=9, uncertain=(_quantity(), growth))
    drawn = scenarios(case, request)
    horizon = case.finance.horizon_years
    price = case.prices.fuel_per_j_lhv
    usual = cash_flow((), _fuel_alone(), case.prices, case.finance).line_present_cost("fuel")
    for row in range(5):
        level, grown = drawn.draws[0][row], drawn.draws[1][row]
        path = tuple(
            (year, price.amount * (1 + price.escalation) ** year * (1 + level) * (1 + grown) ** year)
            for year in range(1, horizon + 1)
        )
        prices = replace(case.prices, fuel_per_j_lhv=Price(amount=price.amount, path=path))
        found = cash_flow((), _fuel_alone(), prices, case.finance).line_present_cost("fuel")
        assert drawn.factors[row, SCALED_LINES.index("fuel")] == pytest.approx(found / usual, rel=1e-12)


def _fuel_alone() -> YearlyQuantities:
    return YearlyQuantities(
        fuel_j_lhv=1e12,
        co2_kg=0.0,
        electricity_j=0.0,
        water_kg=0.0,
        unmet_steam_kg=0.0,
        burner_start_cost=0.0,
        maintenance_cost=0.0,
    )


def test_probability_of_two_normal_costs_is_the_analytic_one():
    """Costs N(100, 9) and N(103, 16), independent: the first wins with Phi(3 / 5) = 0.7257.

    Expected regret of the first is E[max(0, D)] with D = N(-3, 25): 5 phi(0.6) - 3 Phi(-0.6) = 0.843.
    """
    rng = np.random.default_rng(4)
    costs = np.column_stack([rng.normal(100, 3, 400_000), rng.normal(103, 4, 400_000)])
    first, second = alternative_risks(("first", "second"), np.array([100.0, 103.0]), (0.0, 0.0), costs)
    assert first.probability_cheapest == pytest.approx(stats.norm.cdf(0.6), abs=4 * first.probability_error)
    assert first.probability_cheapest + second.probability_cheapest == pytest.approx(1.0)
    expected = 5 * stats.norm.pdf(0.6) - 3 * stats.norm.cdf(-0.6)
    assert first.expected_regret == pytest.approx(expected, abs=0.015)
    assert first.p10_cost == pytest.approx(stats.norm.ppf(0.1, 100, 3), abs=0.03)
    assert second.p90_cost == pytest.approx(stats.norm.ppf(0.9, 103, 4), abs=0.04)


def test_regret_by_hand():
    """Three scenarios: regrets 0, 5, 0 and 2, 0, 0 (a tie); the second has the least largest regret."""
    costs = np.array([[10.0, 12.0], [15.0, 10.0], [7.0, 7.0]])
    first, second = alternative_risks(("a", "b"), np.array([10.0, 12.0]), (0.0, 0.0), costs)
    assert (first.largest_regret, second.largest_regret) == (5.0, 2.0)
    assert first.expected_regret == pytest.approx(5 / 3)
    assert second.expected_regret == pytest.approx(2 / 3)
    assert (first.probability_cheapest, second.probability_cheapest) == (0.5, 0.5)


def test_plans_are_paid_for_exactly(risky_case, tmp_path):
    """The case file with a scenario's values, priced by the appraisal: what the scenario says to 1e-9."""
    result, forget = risk(risky_case, tmp_path / "kept", scenario_count=5)
    forget()
    case = load_case(risky_case)
    _, outcomes = planned_point(
        Strand(
            case=risky_case, points=((),), along_line=False, gap=0.01, time_limit_s=20.0, plans_folder=None
        )
    )
    drawn = scenarios(case, replace(case.risk, scenarios=5))
    for row, changes in enumerate(scenario_changes(risky_case, case, drawn, 5)):
        assert {name for name, _ in changes} > {"fuel.price_per_mwh", "new_boiler.sizes[0].installed_cost"}
        at = study(risky_case, dict(changes))
        for column, (_, outcome) in enumerate(outcomes):
            found = priced(at.case, at.inputs, at.tables, outcome.plan).cash.present_cost
            assert result.costs[row, column] == pytest.approx(found, rel=1e-9)


def test_planning_anew_saves_little_and_never_costs_more(risky_case, tmp_path):
    """Six scenarios by the whole search, in one process and in two: none dearer than the case's plan."""
    one, forget = risk(risky_case, tmp_path / "one", scenario_count=50, replan=6)
    forget()
    two, forget = risk(risky_case, tmp_path / "two", scenario_count=50, replan=6, processes=2)
    forget()
    assert risk_document(one) == risk_document(two)
    assert one.replanned is not None
    fixed = one.costs[:6].mean(axis=0)
    anew = np.array([each.expected_cost for each in one.replanned.alternatives])
    np.testing.assert_allclose(fixed - anew, one.replanned.saved_by_replanning, rtol=1e-9, atol=1e-6)
    assert (np.array(one.replanned.saved_by_replanning) >= 0).all()


def test_same_seed_same_bytes_and_the_page_names_the_choice(risky_case, tmp_path):
    """Two runs agree in every byte; table has a row per scenario; the page tells the choice."""
    first, _ = risk(risky_case, tmp_path / "a", scenario_count=200)
    second, _ = risk(risky_case, tmp_path / "b", scenario_count=200)
    assert risk_table(first) == risk_table(second)
    assert risk_page(first) == risk_page(second)
    assert len(risk_table(first).splitlines()) == 201
    assert risk_document(first)["least_largest_regret"] in {each.name for each in first.alternatives}
    assert first.likeliest_cheapest in risk_page(first)


def test_a_case_that_says_nothing_of_risk_is_refused(tmp_path):
    """S109 names the section that is missing."""
    case = write_tiny_case(tmp_path / "tiny")
    with pytest.raises(SweepError, match=r"\[risk\]: missing section.*S109"):
        risk(case, tmp_path / "kept")


@pytest.mark.parametrize(("count", "anew"), [(0, 0), (2_000_000, 0), (10, 11), (10, -1)])
def test_impossible_numbers_of_scenarios_are_refused(risky_case, tmp_path, count, anew):
    """S110 for none, too many, and more planned anew than drawn."""
    with pytest.raises(SweepError, match="S110"):
        risk(risky_case, tmp_path / "kept", scenario_count=count, replan=anew)


def test_the_command_writes_its_folder_once(risky_case, tmp_path):
    """risk.json, risk.csv and risk.html, nothing unfinished; the folder is not written over unasked."""
    options = {"seed": 4, "replan": 0, "processes": 1, "cluster": None, "replace": False, "quiet": True}
    out = tmp_path / "chances"
    assert run(risky_case, out, scenarios=150, **options) == ExitStatus.DONE
    assert sorted(each.name for each in tmp_path.iterdir()) == ["chances"]
    document = json.loads((out / "risk.json").read_text())
    assert (document["scenarios"], document["seed"]) == (150, 4)
    assert {"probability_cheapest", "expected_regret", "p10_cost", "p90_cost", "largest_regret"} <= set(
        document["alternatives"][0]
    )
    assert len((out / "risk.csv").read_text().splitlines()) == 151
    assert "://" not in (out / "risk.html").read_text().replace("http://www.w3.org", "")
    with pytest.raises(OutputError, match="already exists"):
        run(risky_case, out, scenarios=150, **options)
