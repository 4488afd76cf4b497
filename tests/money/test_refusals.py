"""Terms from which no honest amount can be computed are refused, all of them at once."""

import math

import pytest

from evenfire.errors import EvenfireError, ExitStatus, MoneyError
from evenfire.money.annuity import steam_cost_per_kg
from evenfire.money.cash_flow import cash_flow
from evenfire.money.cost_basis import capacity_scaled_cost, estimated_cost
from evenfire.money.factors import (
    capital_recovery_factor,
    escalating_present_value,
    single_present_value,
    uniform_present_value,
)
from evenfire.money.inflation import nominal_rate, real_rate
from evenfire.money.present_rates import investment_present_cost, present_rates
from evenfire.money.terms import CostBasis, Grant, Investment, Price, Tax
from evenfire.units import bar_g_to_pa
from tests.money.terms_for_tests import finance, prices, quantities


def refused(**changes) -> MoneyError:
    """The error that a finance with these changes raises."""
    with pytest.raises(MoneyError) as caught:
        cash_flow((), quantities(), prices(), finance(**changes))
    return caught.value


def refused_thing(**changes) -> MoneyError:
    """The error that an investment with these changes raises."""
    terms = {"name": "Boiler 1", "amount": 100.0, "life_years": 20}
    with pytest.raises(MoneyError) as caught:
        investment_present_cost(Investment(**(terms | changes)), finance())
    return caught.value


@pytest.mark.parametrize("rate", [-1.0, -1.5, math.nan, math.inf])
def test_rates_of_minus_100_percent_and_less_are_refused(rate):
    """Every factor and both conversions refuse them with M101."""
    for factor in (
        lambda: single_present_value(rate, 5),
        lambda: uniform_present_value(rate, 5),
        lambda: escalating_present_value(0.08, rate, 5),
        lambda: capital_recovery_factor(rate, 5),
        lambda: nominal_rate(rate, 0.02),
        lambda: real_rate(0.02, rate),
    ):
        with pytest.raises(MoneyError, match=r"above -1 .*\[M101\]"):
            factor()


def test_rates_that_burst_numbers_are_refused():
    """A rate a hair above -100 % over 60 years would give 1e480 and no answer; it is refused instead."""
    with pytest.raises(MoneyError, match=r"over 60 a; must not change money by more than .*\[M101\]"):
        uniform_present_value(-0.99999999, 60)
    error = refused(discount_rate=-0.99999999, horizon_years=60)
    assert [problem.code for problem in error.problems] == ["M101"]


def test_horizon_below_one_year_is_refused():
    """Factors of yearly amounts need a year; a single payment may fall in year 0 but not before."""
    with pytest.raises(MoneyError, match=r"found 0 a; must be a whole number of years, at least 1 \[M102\]"):
        uniform_present_value(0.08, 0)
    with pytest.raises(MoneyError, match=r"found -1 a; .*at least 0 \[M102\]"):
        single_present_value(0.08, -1)
    assert single_present_value(0.08, 0) == 1.0
    with pytest.raises(MoneyError, match=r"found 2.5 a"):
        uniform_present_value(0.08, 2.5)


@pytest.mark.parametrize(
    ("changes", "code", "text"),
    [
        ({"horizon_years": 0}, "M102", "horizon_years: found 0 a"),
        ({"discount_rate": -1.0}, "M101", "discount_rate: found -1 per year"),
        ({"inflation": -2.0}, "M101", "inflation"),
        ({"reinvestment_rate": math.nan}, "M101", "reinvestment_rate"),
        ({"rate_basis": "mixed"}, "M106", "found 'mixed'; must be 'real' or 'nominal'"),
        ({"contingency": -0.1}, "M105", "contingency: found -0.1"),
        ({"tax": Tax(rate=1.0, depreciation_shares=(1.0,))}, "M105", "tax rate: found 1"),
        ({"tax": Tax(rate=0.3, depreciation_shares=(0.5, 0.4))}, "M105", "2 shares with the sum 0.9"),
        ({"tax": Tax(rate=0.3, depreciation_shares=(1.5, -0.5))}, "M105", "depreciation_shares"),
        ({"tax": Tax(rate=0.3, depreciation_shares=())}, "M105", "found 0 shares"),
    ],
)
def test_finance_is_refused(changes, code, text):
    """Each wrong term of the finance has its code, place and finding."""
    error = refused(**changes)
    assert [problem.code for problem in error.problems] == [code]
    assert text in str(error)


@pytest.mark.parametrize(
    ("price", "code", "text"),
    [
        (Price(amount=math.inf), "M103", "price carbon_per_kg: found inf"),
        (Price(amount=1.0, escalation=-1.0), "M101", "price carbon_per_kg, escalation"),
        (Price(amount=1.0, path=((0, 2.0),)), "M103", "price of 2 in year 0"),
        (Price(amount=1.0, path=((3, 2.0), (3, 4.0))), "M103", "in year 3 after year 3"),
        (Price(amount=1.0, path=((3, math.nan),)), "M103", "found a price of nan"),
    ],
)
def test_price_is_refused(price, code, text):
    """Each wrong price has its code, place and finding, in rates as in cash flows."""
    with pytest.raises(MoneyError) as caught:
        present_rates(prices(carbon_per_kg=price), finance())
    assert [problem.code for problem in caught.value.problems] == [code]
    assert text in str(caught.value)


@pytest.mark.parametrize(
    ("changes", "code", "text"),
    [
        ({"amount": -1.0}, "M104", "investment 'Boiler 1', amount: found -1 EUR"),
        ({"amount": math.nan}, "M104", "amount: found nan EUR"),
        ({"replacement_amount": -1.0}, "M104", "replacement_amount"),
        ({"residual_value": -1.0}, "M104", "residual_value"),
        ({"life_years": 0}, "M102", "life_years: found 0 a"),
        ({"escalation": -1.0}, "M101", "escalation"),
        ({"year": 15}, "M104", "found year 15; must lie between year 0 and year 14"),
        ({"year": -1}, "M104", "found year -1"),
        ({"payments": ((0, 0.5), (1, 0.4))}, "M105", "payments: found shares with the sum 0.9"),
        ({"payments": ()}, "M105", "payments"),
        ({"payments": ((0, 0.5), (16, 0.5))}, "M104", "16 a after the purchase in year 0"),
        ({"payments": ((-1, 1.0),)}, "M104", "-1 a after the purchase"),
        ({"grant": Grant(share=1.1)}, "M105", "grant share: found 1.1"),
        ({"grant": Grant(share=0.5, years_after_purchase=16)}, "M104", "grant: found a payment 16 a"),
    ],
)
def test_investment_is_refused(changes, code, text):
    """Each wrong term of an investment has its code, the name of the thing, and the finding."""
    error = refused_thing(**changes)
    assert code in {problem.code for problem in error.problems}
    assert text in str(error)


@pytest.mark.parametrize("amount", [-1.0, math.nan, math.inf])
def test_quantity_is_refused(amount):
    """Yearly quantities are finite and not negative."""
    with pytest.raises(MoneyError, match=r"yearly quantity water_kg: found .*\[M107\]"):
        cash_flow((), quantities(water_kg=amount), prices(), finance())


def test_steam_cost_needs_steam():
    """Without steam there is no cost per tonne."""
    flow = cash_flow((), quantities(), prices(), finance())
    with pytest.raises(MoneyError, match=r"found 0 kg of steam a year; must be above 0"):
        steam_cost_per_kg(flow, 0.0)


def test_all_problems_are_told_at_once():
    """A finance with three defects and an investment with one give four problems, and the exit status 2."""
    with pytest.raises(MoneyError) as caught:
        cash_flow(
            (Investment(name="vessel", amount=-5.0, life_years=20),),
            quantities(),
            prices(),
            finance(discount_rate=-1.0, contingency=-1.0, rate_basis="?"),
        )
    assert sorted(problem.code for problem in caught.value.problems) == ["M101", "M104", "M105", "M106"]
    assert isinstance(caught.value, EvenfireError)
    assert caught.value.exit_status is ExitStatus.REFUSED


def estimate(correlation="steam boiler by heat output", size=5.0e6, bar_g=10.0, diameter_m=None, **changes):
    """Estimate with one wrong term."""
    terms = {"correlation": correlation, "cost_index": 800.0, "currency_per_usd": 0.9}
    return estimated_cost(
        CostBasis(**(terms | changes)), size=size, pressure_pa=bar_g_to_pa(bar_g), diameter_m=diameter_m
    )


@pytest.mark.parametrize(
    ("changes", "code", "text"),
    [
        ({"size": 1.1e6}, "M110", r"heat output: found 1.1e\+06 W; must lie between 1.2e\+06 and 9.4e\+06 W"),
        ({"size": 9.5e6}, "M110", "use a quote or a cost curve instead"),
        ({"size": math.nan}, "M110", "found nan W"),
        ({"bar_g": 41.0}, "M110", "found 41 bar g; must lie between 0 and 40 bar g"),
        ({"correlation": "steam boiler"}, "M111", "nearest is 'steam boiler by heat output'"),
        ({"cost_index": 0.0}, "M112", "cost_index: found 0"),
        ({"currency_per_usd": -1.0}, "M112", "currency_per_usd"),
        ({"installation_factor": 2.0}, "M112", "this correlation gives the installed cost"),
        (
            {"correlation": "packaged boiler by steam, 2007", "size": 3.0, "bar_g": 16.0},
            "M112",
            "the source gives the cost of the equipment alone",
        ),
        ({"correlation": "horizontal vessel by volume", "size": 20.0}, "M110", "diameter: found none"),
        (
            {"correlation": "horizontal vessel by volume", "size": 20.0, "diameter_m": 0.0},
            "M110",
            "diameter: found 0 m",
        ),
    ],
)
def test_estimate_outside_its_source_is_refused(changes, code, text):
    """Outside range, without what it needs or by an unknown name there is an error, never a number."""
    with pytest.raises(MoneyError, match=text) as caught:
        estimate(**changes)
    assert [problem.code for problem in caught.value.problems] == [code]


def test_scaling_needs_sizes():
    """The capacity exponent has no meaning at size zero."""
    with pytest.raises(MoneyError, match=r"found sizes 0 and 5; both sizes must be above 0"):
        capacity_scaled_cost(100.0, from_size=0.0, to_size=5.0)
