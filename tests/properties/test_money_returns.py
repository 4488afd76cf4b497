"""Properties of rates of return and payback."""

import warnings
from itertools import pairwise

import numpy as np
import numpy_financial
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st

from evenfire.money.cash_flow import CashFlow
from evenfire.money.payback import payback
from evenfire.money.rate_of_return import internal_rates_of_return, modified_rate_of_return
from evenfire.money.returns import returns
from evenfire.money.terms import Finance

yearly_amounts = st.lists(st.integers(-1000, 1000).map(float), min_size=2, max_size=25)


def compared(amounts, rate=0.08):
    """A reference that costs nothing, and an alternative that brings the given amounts."""
    finance = Finance(
        currency="EUR",
        price_date="2026-10",
        horizon_years=len(amounts) - 1,
        discount_rate=rate,
        rate_basis="real",
    )
    nothing = CashFlow(finance=finance, lines={"fuel": np.zeros(len(amounts))})
    return nothing, CashFlow(finance=finance, lines={"fuel": -np.array(amounts)})


@given(st.lists(st.integers(-60, 300), min_size=1, max_size=6, unique=True), st.floats(1.0, 1e6))
def test_every_rate_is_found(percents, scale):
    """Amounts built from chosen rates give exactly these rates back, none missing and none added."""
    chosen = sorted(percent / 100.0 for percent in percents)
    amounts = np.array([scale])
    for rate in chosen:
        amounts = np.convolve(amounts, [1.0, -(1.0 + rate)])
    assert internal_rates_of_return(amounts) == pytest.approx(chosen, rel=1e-4, abs=1e-4)


@given(yearly_amounts)
def test_rates_lie_where_the_sign_changes(amounts):
    """On a fine grid of rates, the sign of the value changes only where a rate was found."""
    amounts = np.array(amounts)
    rates = np.array(internal_rates_of_return(amounts))
    grid = np.concatenate([np.linspace(-0.5, 0.0, 200), np.linspace(0.001, 3.0, 400)])
    powers = (1.0 + grid[:, None]) ** -np.arange(amounts.size)
    values = powers @ amounts
    clear = np.abs(values) > 1e-9 * (powers @ np.abs(amounts))
    grid, signs = grid[clear], np.sign(values[clear])
    for left, right, left_sign, right_sign in zip(grid, grid[1:], signs, signs[1:], strict=False):
        found = int(np.count_nonzero((rates > left) & (rates < right)))
        if left_sign != right_sign:
            assert found >= 1
    for rate in rates[(rates > -0.9) & (rates < 50.0)]:
        discount = (1.0 + rate) ** -np.arange(amounts.size)
        assert abs(amounts @ discount) <= 1e-9 * (np.abs(amounts) @ discount)


@given(yearly_amounts)
def test_number_of_rates_obeys_the_rule_of_signs(amounts):
    """No more rates than changes of sign, and an outlay before savings has one."""
    moving = [amount for amount in amounts if amount != 0.0]
    changes = sum(1 for one, other in pairwise(moving) if one * other < 0.0)
    rates = internal_rates_of_return(np.array(amounts))
    assert len(rates) <= changes
    if changes == 1:
        assert len(rates) == 1


@given(st.integers(1, 1000), st.lists(st.integers(0, 500), min_size=1, max_size=20))
def test_ordinary_investment_agrees_with_a_finance_library(outlay, savings):
    """One outlay before savings: internal and modified rate equal those of numpy-financial."""
    assume(sum(savings) > 0)
    amounts = np.array([-float(outlay), *map(float, savings)])
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", RuntimeWarning)
        library = numpy_financial.irr(amounts)
    (rate,) = internal_rates_of_return(amounts)
    if np.isfinite(library) and abs(numpy_financial.npv(library, amounts)) < 1e-6:
        assert rate == pytest.approx(library, rel=1e-6, abs=1e-6)
    assert modified_rate_of_return(amounts, 0.07, 0.04) == pytest.approx(
        numpy_financial.mirr(amounts, 0.07, 0.04), rel=1e-9, abs=1e-12
    )


@given(st.integers(1, 1000), st.lists(st.integers(0, 500), min_size=1, max_size=20), st.floats(0.0, 0.3))
def test_payback_of_an_ordinary_investment(outlay, savings, rate):
    """Discounted payback exists where the net saving is not negative, is no shorter, and balances the sum."""
    amounts = [-float(outlay), *map(float, savings)]
    reference, alternative = compared(amounts, rate)
    result = payback(reference, alternative)
    net_saving = returns(reference, alternative).net_saving
    assume(abs(net_saving) > 1e-6 * outlay)
    assert (result.discounted_years is not None) == (net_saving > 0.0)
    if result.discounted_years is None:
        assert result.note.startswith("never pays back")
        return
    assert result.simple_years is not None
    assert result.discounted_years >= result.simple_years - 1e-9
    whole = int(result.simple_years)
    recovered = sum(savings[:whole])
    if whole < len(savings):
        recovered += (result.simple_years - whole) * savings[whole]
    assert recovered == pytest.approx(outlay, rel=1e-9)


@given(yearly_amounts, st.floats(-0.05, 0.3))
def test_swapping_the_sides_swaps_the_sign(amounts, rate):
    """The reference against the alternative saves what the alternative against the reference loses."""
    reference, alternative = compared(amounts, rate)
    one, other = returns(reference, alternative), returns(alternative, reference)
    assert one.net_saving == pytest.approx(-other.net_saving, rel=1e-12, abs=1e-9)
    assert one.internal.rates == pytest.approx(other.internal.rates, rel=1e-9, abs=1e-12)
