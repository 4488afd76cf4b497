"""Payback: numbers in the ordinary case, honest words in the others."""

import numpy as np
import pytest

from evenfire.errors import MoneyError
from evenfire.money.cash_flow import CashFlow
from evenfire.money.payback import payback
from tests.money.terms_for_tests import finance


def flow(years: int = 10, rate: float = 0.08, **lines) -> CashFlow:
    """Cash flow with amounts by line: a list from year 0, or one amount for every year of operation."""
    arrays = {
        name.replace("_", " "): np.array(
            amounts + [0.0] * (years + 1 - len(amounts))
            if isinstance(amounts, list)
            else [0.0] + [amounts] * years
        )
        for name, amounts in lines.items()
    }
    return CashFlow(finance=finance(horizon_years=years, discount_rate=rate), lines=arrays)


def words(reference: CashFlow, alternative: CashFlow) -> str:
    """Note of a comparison that has no numbers."""
    result = payback(reference, alternative)
    assert result.simple_years is None
    assert result.discounted_years is None
    return result.note


def test_extra_investment_over_equal_savings():
    """An investment of 100 more that saves 40 a year pays back in two and a half years."""
    result = payback(flow(investment=[50.0], fuel=90.0), flow(investment=[150.0], fuel=50.0))
    assert result.simple_years == pytest.approx(2.5)
    assert result.note == ""


def test_same_as_the_reference():
    """Nothing differs."""
    assert words(flow(fuel=90.0), flow(fuel=90.0)) == "same as the reference"


@pytest.mark.parametrize("invested", [0.0, 30.0, 50.0])
def test_saves_from_the_first_day(invested):
    """No extra investment and a saving, whether it costs the same to buy or less."""
    note = words(flow(investment=[50.0], fuel=90.0), flow(investment=[invested], fuel=80.0))
    assert note == "saves from the first day"


@pytest.mark.parametrize("extra_fuel", [1.0, 50.0])
def test_costs_less_to_buy_but_more_to_run(extra_fuel):
    """Cheaper now and dearer later is said so, whether or not it is cheaper over the horizon."""
    reference = flow(investment=[100.0], fuel=90.0)
    assert words(reference, flow(investment=[40.0], fuel=90.0 + extra_fuel)) == (
        "costs less to buy but more to run"
    )


@pytest.mark.parametrize(("invested", "fuel"), [(100.0, 90.0), (100.0, 95.0), (0.0, 95.0), (1000.0, 80.0)])
def test_never_pays_back(invested, fuel):
    """No saving, a loss, or a saving too small for the horizon."""
    assert words(flow(fuel=90.0), flow(investment=[invested], fuel=fuel)) == "never pays back"


def test_pays_back_only_by_its_residual_value():
    """80 saved of 100, and 60 left at the end: the numbers stand with a reserve."""
    residual = [0.0] * 10 + [-60.0]
    result = payback(
        flow(rate=0.0, fuel=90.0), flow(rate=0.0, investment=[100.0], fuel=82.0, residual_value=residual)
    )
    assert result.note == "pays back only by its residual value"
    assert result.simple_years == pytest.approx(9.0 + 28.0 / 68.0)


def test_reserve_is_judged_on_discounted_savings():
    """14 a year for 100 at 8 % is worth 93.9; only the 60 at the end make it pay back at that rate."""
    residual = [0.0] * 10 + [-60.0]
    result = payback(flow(fuel=90.0), flow(investment=[100.0], fuel=76.0, residual_value=residual))
    assert result.simple_years == pytest.approx(100.0 / 14.0)
    assert result.note == "pays back only by its residual value"


def test_residual_value_of_the_reference_is_left_out_of_that_reserve():
    """Both keep 60 at the end: 80 saved of 100 never pays back, 110 saved pays back without reserve."""
    residual = [0.0] * 10 + [-60.0]
    reference = flow(rate=0.0, fuel=90.0, residual_value=residual)
    alternative = flow(rate=0.0, investment=[100.0], fuel=82.0, residual_value=residual)
    assert words(reference, alternative) == "never pays back"
    alternative = flow(rate=0.0, investment=[100.0], fuel=79.0, residual_value=residual)
    assert payback(reference, alternative).note == ""


def test_later_outlay_puts_it_behind_again():
    """Paid back in two years, but a replacement in year 9 is never recovered."""
    result = payback(flow(fuel=50.0), flow(investment=[60.0], fuel=20.0, replacement=[0.0] * 9 + [2000.0]))
    assert result.simple_years == pytest.approx(2.0)
    assert result.note == "pays back, but a later outlay puts it behind again"


def test_investment_in_a_later_year_is_counted_from_year_0():
    """Bought in year 2 for 100, saving 50 a year from year 3: behind from year 2, even after year 4."""
    result = payback(
        flow(rate=0.0, fuel=[0.0, 50.0, 50.0] + [50.0] * 8),
        flow(rate=0.0, investment=[0.0, 0.0, 100.0], fuel=[0.0, 50.0, 50.0]),
    )
    assert result.simple_years == pytest.approx(4.0)


def test_rounding_is_no_difference():
    """Amounts that differ in the last digits of a float are the same."""
    assert words(flow(fuel=0.1 + 0.2), flow(fuel=0.3)) == "same as the reference"


def test_cash_flows_on_other_terms_do_not_compare():
    """Every term that differs is named."""
    with pytest.raises(MoneyError, match=r"horizon_years.*found 8 against 10") as caught:
        payback(flow(fuel=90.0), flow(years=8, rate=0.05, fuel=80.0))
    assert {problem.code for problem in caught.value.problems} == {"M108"}
    assert len(caught.value.problems) == 2
