"""Ratio and rates of return: numbers where they mean something, words elsewhere."""

import numpy as np
import numpy_financial
import pytest

from evenfire.money.cash_flow import CashFlow, cash_flow
from evenfire.money.rate_of_return import internal_rates_of_return, modified_rate_of_return
from evenfire.money.returns import returns
from evenfire.money.terms import Grant, Investment, Price
from tests.money.terms_for_tests import finance, prices, quantities


def plant(fuel: float, *things: Investment, **terms):
    """Cash flow of a plant with a yearly fuel cost."""
    return cash_flow(
        things, quantities(fuel_j_lhv=1.0), prices(fuel_per_j_lhv=Price(amount=fuel)), finance(**terms)
    )


def thing(amount: float, life_years: int = 15, **terms) -> Investment:
    """Something bought."""
    return Investment(name="thing", amount=amount, life_years=life_years, **terms)


def test_net_saving_is_the_difference_of_present_costs():
    """Reference less alternative (10 CFR 436.20)."""
    reference, alternative = plant(60_000.0), plant(35_000.0, thing(100_000.0))
    result = returns(reference, alternative)
    assert result.net_saving == pytest.approx(reference.present_cost - alternative.present_cost, rel=1e-12)


def test_ratio_counts_replacement_and_residual_value_as_investment():
    """A thing of 100 with a life of ten in fifteen years: 100 + 100 v**10 - 50 v**15 against 25 a year."""
    result = returns(plant(60.0), plant(35.0, thing(100.0, life_years=10)))
    invested = 100.0 + 100.0 * 1.08**-10 - 50.0 * 1.08**-15
    assert result.savings_to_investment == pytest.approx(25.0 * 8.559478688 / invested, rel=1e-8)


def test_grant_lowers_the_investment_of_the_ratio():
    """Half the price granted, twice the ratio."""
    without = returns(plant(60.0), plant(35.0, thing(100.0)))
    granted = returns(plant(60.0), plant(35.0, thing(100.0, grant=Grant(share=0.5))))
    assert granted.savings_to_investment == pytest.approx(2.0 * without.savings_to_investment, rel=1e-12)


def test_savings_reinvested_at_a_lower_rate_earn_less():
    """25 a year at 3 % for 15 years against 100: rates from the end value by hand."""
    result = returns(plant(60.0, reinvestment_rate=0.03), plant(35.0, thing(100.0), reinvestment_rate=0.03))
    end_value = sum(25.0 * 1.03 ** (15 - year) for year in range(1, 16))
    assert result.adjusted_rate == pytest.approx((end_value / 100.0) ** (1 / 15) - 1.0, rel=1e-12)
    assert result.modified_rate == pytest.approx(result.adjusted_rate, rel=1e-12)


def test_without_extra_investment_there_is_no_ratio():
    """Cheaper to buy and to run: no ratio and no internal rate, and both say why."""
    result = returns(plant(60.0, thing(100.0)), plant(35.0, thing(80.0)))
    assert result.savings_to_investment is None
    assert result.adjusted_rate is None
    assert result.ratio_note == "no extra investment over the life"
    assert result.internal.rate is None
    assert result.internal.note == "saves from the first day"


def test_without_running_saving_there_is_no_adjusted_rate():
    """Dearer to buy and to run: a negative ratio, no adjusted rate, never pays back."""
    result = returns(plant(60.0), plant(70.0, thing(80.0)))
    assert result.savings_to_investment == pytest.approx(-10.0 * 8.559478688 / 80.0, rel=1e-8)
    assert result.adjusted_rate is None
    assert result.ratio_note == "no saving in running costs"
    assert result.internal.note == "never pays back"
    assert result.modified_rate is None


def test_same_as_the_reference():
    """Nothing differs."""
    result = returns(plant(60.0), plant(60.0))
    assert result.net_saving == 0.0
    assert result.internal.note == "same as the reference"


def test_cheaper_plant_that_costs_more_to_run_has_the_rate_of_a_loan():
    """100 less now for 25 more a year: the rate stands but is not called the rate of return."""
    result = returns(plant(35.0, thing(100.0)), plant(60.0))
    assert result.internal.rates == pytest.approx((numpy_financial.irr([-100.0] + 15 * [25.0]),), rel=1e-9)
    assert result.internal.rate is None
    assert result.internal.note.startswith("costs less to buy but more to run: the rate is that of a loan")


def test_resale_value_given_up_gives_two_rates():
    """A new plant saves 25 a year, the old one could be sold for 300 at the end: no single rate."""
    old = thing(0.0, residual_value=300.0)
    result = returns(plant(60.0, old), plant(35.0, thing(100.0)))
    assert len(result.internal.rates) == 2
    assert result.internal.rate is None
    assert result.internal.note == "several rates of return: compare net present costs"


def test_saving_that_only_touches_zero_has_no_rate_to_judge_by():
    """-100, +220, -121 is a loss at every rate but 10 %: the rate is shown with words, not as a return."""
    terms = finance(horizon_years=2)
    nothing = CashFlow(finance=terms, lines={"fuel": np.zeros(3)})
    result = returns(nothing, CashFlow(finance=terms, lines={"fuel": np.array([100.0, -220.0, 121.0])}))
    assert result.internal.rates == pytest.approx((0.1,), abs=1e-7)
    assert result.internal.rate is None
    assert result.internal.note.startswith("the net saving only touches zero")


def test_value_of_one_sign_has_no_rate():
    """-1, +2, -2 is worth less than nothing at every rate."""
    assert internal_rates_of_return(np.array([-1.0, 2.0, -2.0])) == ()


def test_rate_at_which_the_value_only_touches_zero_is_found():
    """-1, +2.2, -1.21 is -(1 - 1.1 v)**2: the double rate 10 %."""
    assert internal_rates_of_return(np.array([-1.0, 2.2, -1.21])) == pytest.approx((0.1,), abs=1e-7)


def test_rate_zero_is_found_once():
    """Money that comes back without interest has the rate zero."""
    assert internal_rates_of_return(np.array([-3.0, 1.0, 1.0, 1.0])) == pytest.approx((0.0,), abs=1e-12)


def test_leading_and_trailing_zeros_change_no_rate():
    """Years without amounts before and after shift the flow but not its rate."""
    bare = internal_rates_of_return(np.array([-100.0, 60.0, 60.0]))
    padded = internal_rates_of_return(np.array([0.0, 0.0, -100.0, 60.0, 60.0, 0.0]))
    assert padded == pytest.approx(bare, rel=1e-12)


@pytest.mark.parametrize("amounts", [[0.0, 0.0], [5.0, 5.0], [-5.0, -5.0], [-5.0, 0.0]])
def test_amounts_of_one_sign_have_no_rates(amounts):
    """Without an outlay and an income there is neither an internal nor a modified rate."""
    assert internal_rates_of_return(np.array(amounts)) == ()
    assert modified_rate_of_return(np.array(amounts), 0.08, 0.08) is None


def test_sixty_years_of_amounts_have_their_one_rate():
    """The longest horizon: a perpetuity's rate is nearly reached."""
    (rate,) = internal_rates_of_return(np.array([-100.0] + 60 * [10.0]))
    assert 10.0 * (1.0 - (1.0 + rate) ** -60) / rate == pytest.approx(100.0, rel=1e-12)
