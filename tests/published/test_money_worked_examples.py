"""Worked examples of textbooks and guides, each with its place."""

from fractions import Fraction

import numpy as np
import numpy_financial
import pytest
from printed import Printed

from evenfire.money.annuity import annuity
from evenfire.money.cash_flow import CashFlow, cash_flow
from evenfire.money.inflation import nominal_rate, real_rate, restated
from evenfire.money.payback import payback
from evenfire.money.rate_of_return import internal_rates_of_return, modified_rate_of_return
from evenfire.money.returns import returns
from evenfire.money.terms import Finance, Investment, Price, Prices, Tax, YearlyQuantities

NOTHING = Price(amount=0.0)


def finance(years: int, rate: float, **more) -> Finance:
    """Terms in dollars, real unless said otherwise."""
    terms = {"rate_basis": "real"} | more
    return Finance(currency="USD", price_date="2000-01", horizon_years=years, discount_rate=rate, **terms)


def fuel_and_maintenance(fuel: Price, maintenance_per_year: float = 0.0):
    """One joule of fuel a year at a price, and maintenance."""
    quantities = YearlyQuantities(
        fuel_j_lhv=1.0,
        co2_kg=0.0,
        electricity_j=0.0,
        water_kg=0.0,
        unmet_steam_kg=0.0,
        burner_start_cost=0.0,
        maintenance_cost=maintenance_per_year,
    )
    prices = Prices(
        fuel_per_j_lhv=fuel,
        carbon_per_kg=NOTHING,
        electricity_per_j=NOTHING,
        water_per_kg=NOTHING,
        unmet_steam_per_kg=NOTHING,
        maintenance=Price(amount=1.0),
    )
    return quantities, prices


def saving_case(investment: Investment, yearly_saving: Price, terms: Finance) -> tuple[CashFlow, CashFlow]:
    """A reference that spends what the investment saves, and the investment."""
    reference = cash_flow((), *fuel_and_maintenance(yearly_saving), terms)
    return reference, cash_flow((investment,), *fuel_and_maintenance(NOTHING), terms)


def amounts_case(amounts: list[float], rate: float) -> tuple[CashFlow, CashFlow]:
    """A reference that costs nothing, and an alternative that brings the given amounts."""
    terms = finance(len(amounts) - 1, rate)
    nothing = CashFlow(finance=terms, lines={"fuel": np.zeros(len(amounts))})
    return nothing, CashFlow(finance=terms, lines={"fuel": -np.array(amounts)})


def test_life_cycle_cost_of_the_federal_example():
    """20 years at 3 % real: purchase, replacement, residual value, energy by UPV* 15.13, upkeep (E3).

    The row's total is recomputed with exact factors; the printed factors 0.701, 0.554 and 14.88 give 516 233.
    """
    terms = finance(20, 0.03)
    energy = Price(amount=20_000.0 * 15.13 / 14.8774748604555)
    building = Investment(
        name="system", amount=103_000.0, life_years=12, replacement_amount=12_000.0, residual_value=3_500.0
    )
    flow = cash_flow((building,), *fuel_and_maintenance(energy, maintenance_per_year=7_000.0), terms)
    Printed("516221.02", "USD", "check row E3, exact factors").check(flow.present_cost)
    print_rounding = 12_000.0 * 0.0005 + 3_500.0 * 0.0005 + 7_000.0 * 0.005
    assert flow.present_cost == pytest.approx(516_233.0, abs=print_rounding)


def test_present_value_counts_year_0_undiscounted():
    """100 000 now and 25 000 in each of six years at 8 % are worth 15 571.991599 (E6)."""
    reference, alternative = amounts_case([-100_000.0] + 6 * [25_000.0], 0.08)
    Printed("15571.991599", "1", "check row E6").check(returns(reference, alternative).net_saving)


def test_present_value_of_the_library_example():
    """-40 000, 5 000, 8 000, 12 000, 30 000 at 8 % are worth 3065.2226681795 (E7)."""
    reference, alternative = amounts_case([-40_000.0, 5_000.0, 8_000.0, 12_000.0, 30_000.0], 0.08)
    Printed("3065.2226681795", "1", "check row E7").check(returns(reference, alternative).net_saving)


@pytest.mark.parametrize(
    ("amounts", "text"),
    [
        ([-100_000.0] + 6 * [25_000.0], "0.12978000690772"),
        ([-100.0, 39.0, 59.0, 55.0, 20.0], "0.28094842116"),
        ([-100.0, 0.0, 0.0, 74.0], "-0.0954958303"),
    ],
)
def test_internal_rate_of_one_change_of_sign(amounts, text):
    """One change of sign has one rate, to the last digit (E8)."""
    rates = internal_rates_of_return(np.array(amounts))
    assert len(rates) == 1
    Printed(text, "1/a", "check row E8").check(rates[0])


def test_several_changes_of_sign_give_every_rate():
    """-5, 10.5, 1, -8, 1 has the rate 0.0885983385 (E8) among others, and the result says several."""
    reference, alternative = amounts_case([-5.0, 10.5, 1.0, -8.0, 1.0], 0.05)
    internal = returns(reference, alternative).internal
    assert len(internal.rates) > 1
    assert internal.rate is None
    assert "several rates" in internal.note
    nearest = min(internal.rates, key=lambda rate: abs(rate - 0.0885983385))
    Printed("0.0885983385", "1/a", "check row E8").check(nearest)


def test_strip_mine_has_two_rates():
    """-1.6, +10, -10 million has the rates 25 % and 400 %, and at 10 % a value of -0.77 million.

    Brigham and Houston, Fundamentals of Financial Management, Project M.
    """
    reference, alternative = amounts_case([-1.6, 10.0, -10.0], 0.10)
    result = returns(reference, alternative)
    assert result.internal.rates == pytest.approx((0.25, 4.0), rel=1e-12)
    Printed("-0.77", "million USD", "Brigham and Houston, Project M").check(result.net_saving)


def test_problem_of_four_rates():
    """-252, 1431, -3035, 2850, -1000 has four rates between 20 % and 70 %: 1/4, 1/3, 3/7, 2/3.

    Ross, Westerfield and Jordan, Fundamentals of Corporate Finance, problem 'Multiple IRRs'. That the four
    rates are exact is shown with fractions; a polynomial of degree four has no others.
    """
    amounts = [-252, 1431, -3035, 2850, -1000]
    exact = [Fraction(1, 4), Fraction(1, 3), Fraction(3, 7), Fraction(2, 3)]
    for rate in exact:
        assert sum(amount / (1 + rate) ** year for year, amount in enumerate(amounts)) == 0
    rates = internal_rates_of_return(np.array(amounts, dtype=float))
    assert rates == pytest.approx([float(rate) for rate in exact], rel=1e-9)


def test_second_rate_may_lie_far_below_zero():
    """-39 800, 63 800, -12 800 has the rates -76.49 % and 36.79 % (a published exercise on two rates)."""
    low, high = internal_rates_of_return(np.array([-39_800.0, 63_800.0, -12_800.0]))
    Printed("-76.49", "%", "exercise on two rates").check(100.0 * low)
    Printed("36.79", "%", "exercise on two rates").check(100.0 * high)


@pytest.mark.parametrize(
    ("amounts", "finance_rate", "reinvestment_rate", "text"),
    [
        ([-100_000.0] + 6 * [25_000.0], 0.08, 0.08, "0.106366936153"),
        ([-120_000.0, 39_000.0, 30_000.0, 21_000.0, 37_000.0, 46_000.0], 0.10, 0.12, "0.126094130366"),
        (
            [-4500.0, -800.0, 800.0, 800.0, 600.0, 600.0, 800.0, 800.0, 700.0, 3000.0],
            0.08,
            0.055,
            "0.066597175032",
        ),
        ([-1000.0, 100.0, 50.0, 10.0, 15.0], 0.34, 0.21, "-0.2742274708267268"),
    ],
)
def test_modified_rate_of_return(amounts, finance_rate, reinvestment_rate, text):
    """The modified rate agrees to the last digit (E9; the last one from a tutorial of the library)."""
    rate = modified_rate_of_return(np.array(amounts), finance_rate, reinvestment_rate)
    assert rate is not None
    Printed(text, "1/a", "check row E9").check(rate)


def test_ratio_and_adjusted_rate_follow_the_federal_rule():
    """100 000 that save 25 000 for 15 years at 3 %: the adjusted rate is the modified one (E10).

    Definitions: 10 CFR 436.21 and 436.22.
    """
    investment = Investment(name="vessel", amount=100_000.0, life_years=15)
    result = returns(*saving_case(investment, Price(amount=25_000.0), finance(15, 0.03)))
    assert result.savings_to_investment is not None
    assert result.adjusted_rate is not None
    Printed("2.984483771694", "1", "check row E10").check(result.savings_to_investment)
    Printed("0.107886251160", "1/a", "check row E10").check(result.adjusted_rate)
    library = numpy_financial.mirr([-100_000.0] + 15 * [25_000.0], 0.03, 0.03)
    assert result.adjusted_rate == pytest.approx(library, rel=1e-12)
    assert result.modified_rate == pytest.approx(library, rel=1e-12)


def test_simple_and_discounted_payback():
    """100 000 that save 25 000 a year at 8 %: 4 years, discounted 5.011568, linear in the year (E12)."""
    investment = Investment(name="vessel", amount=100_000.0, life_years=15)
    result = payback(*saving_case(investment, Price(amount=25_000.0), finance(15, 0.08)))
    assert result.simple_years == pytest.approx(4.0, abs=1e-12)
    assert result.discounted_years is not None
    Printed("5.011568", "a", "check row E12").check(result.discounted_years)
    assert result.note == ""


def test_saving_below_interest_never_pays_back_discounted():
    """100 000 that save 7 900 a year at 8 % pay back without interest only (E13), however long one waits."""
    investment = Investment(name="vessel", amount=100_000.0, life_years=60)
    result = payback(*saving_case(investment, Price(amount=7_900.0), finance(60, 0.08)))
    assert result.simple_years == pytest.approx(100_000.0 / 7_900.0, rel=1e-12)
    assert result.discounted_years is None
    assert result.note == "never pays back at the discount rate"


@pytest.mark.parametrize(
    ("amounts", "rate", "text"),
    [
        ([-150.0, 70.0, 55.0, 40.0, 25.0, 10.0], 0.085, "3.41"),
        ([-8_000.0, 4_800.0, 5_900.0, 6_700.0, 8_000.0], 0.15, "1.86"),
        ([-210.0, 85.0, 75.0, 85.0, 105.0], 0.11, "3.15"),
    ],
)
def test_discounted_payback_of_uneven_savings(amounts, rate, text):
    """Published exercises that interpolate in the discounted year (course solutions on payback)."""
    result = payback(*amounts_case(amounts, rate))
    assert result.discounted_years is not None
    Printed(text, "a", "course solution on discounted payback").check(result.discounted_years)


def test_after_tax_value_with_straight_line_depreciation():
    """5 000 that save 1 500 a year, 40 % tax, 10 %: -72 without and 1 791 with a resale at 5 000.

    Jensen, Operations Research Models and Methods, economics problems, review of taxes.
    """
    terms = finance(5, 0.10, tax=Tax(rate=0.4, depreciation_shares=(0.2,) * 5))
    place = "Jensen, taxes review"
    machine = Investment(name="machine", amount=5_000.0, life_years=5)
    result = returns(*saving_case(machine, Price(amount=1_500.0), terms))
    Printed("-72", "USD", place).check(result.net_saving)
    resold = Investment(name="machine", amount=5_000.0, life_years=5, residual_value=5_000.0)
    result = returns(*saving_case(resold, Price(amount=1_500.0), terms))
    Printed("1791", "USD", place).check(result.net_saving)


def test_after_tax_rate_with_accelerated_depreciation_and_disposal():
    """A truck of 3 000, resold at 750, saves 800 a year at 34 % tax: flows and a rate of 11.24 %.

    Newnan, Eschenbach and Lavelle, Engineering Economic Analysis, Figure 12-3 (five-year MACRS shares).
    """
    shares = (0.20, 0.32, 0.192, 0.1152, 0.1152, 0.0576)
    terms = finance(5, 0.10, tax=Tax(rate=0.34, depreciation_shares=shares))
    truck = Investment(name="truck", amount=3_000.0, life_years=5, residual_value=750.0)
    reference, alternative = saving_case(truck, Price(amount=800.0), terms)
    after_tax = reference.yearly_total - alternative.yearly_total
    printed = ["-3000.0", "732.0", "854.4", "723.8", "645.5", "1199.3"]
    for text, amount in zip(printed, after_tax, strict=True):
        Printed(text, "USD", "Newnan, Figure 12-3").check(amount)
    rate = returns(reference, alternative).internal.rate
    assert rate is not None
    Printed("11.24", "%", "Newnan, Figure 12-3").check(100.0 * rate)


DEPRECIATED_OVER_SIX = Tax(rate=0.46, depreciation_shares=(1.0 / 6.0,) * 6)
SIX_YEAR_INVESTMENT = Investment(name="machine", amount=12_000.0, life_years=6)


def test_after_tax_rate_without_inflation():
    """12 000 that save 2 918 a year for six years at 46 % tax earn 6.7 % (Newnan, Example 14-10)."""
    terms = finance(6, 0.05, tax=DEPRECIATED_OVER_SIX)
    rate = returns(*saving_case(SIX_YEAR_INVESTMENT, Price(amount=2_918.0), terms)).internal.rate
    assert rate is not None
    Printed("6.7", "%", "Newnan, Example 14-10").check(100.0 * rate)


def test_inflation_erodes_depreciation():
    """With 5 % inflation the same investment earns less than 5 % real, year by year as printed.

    Newnan, Example 14-10. The print rounds income and tax to whole dollars before it subtracts them, and in
    the second column once more, so each figure may be a dollar off.
    """
    terms = finance(6, 0.08, rate_basis="nominal", inflation=0.05, tax=DEPRECIATED_OVER_SIX)
    reference, alternative = saving_case(SIX_YEAR_INVESTMENT, Price(amount=2_918.0, escalation=0.05), terms)
    actual = reference.yearly_total - alternative.yearly_total
    assert actual == pytest.approx([-12_000, 2_575, 2_657, 2_744, 2_835, 2_931, 3_031], abs=1.0)
    year_0 = restated(reference, "real").yearly_total - restated(alternative, "real").yearly_total
    assert year_0 == pytest.approx([-12_000, 2_452, 2_410, 2_370, 2_332, 2_297, 2_262], abs=1.0)
    (rate,) = internal_rates_of_return(year_0)
    interpolated = 0.04 + 0.01 * 362.0 / (362.0 + 25.0)
    assert rate == pytest.approx(interpolated, abs=0.0005)


def test_real_calculation_erodes_depreciation_alike():
    """The same example calculated in real terms gives the same year-0 dollars."""
    terms = finance(6, 0.08, inflation=0.05, tax=DEPRECIATED_OVER_SIX)
    reference, alternative = saving_case(SIX_YEAR_INVESTMENT, Price(amount=2_918.0), terms)
    year_0 = reference.yearly_total - alternative.yearly_total
    assert year_0 == pytest.approx([-12_000, 2_452, 2_410, 2_370, 2_332, 2_297, 2_262], abs=1.0)


def test_real_and_nominal_rates():
    """3 % inflation and 5 % real make 8.15 % nominal (course notes on effects of inflation)."""
    Printed("8.15", "%", "effects of inflation, chapter 5").check(100.0 * nominal_rate(0.05, 0.03))
    Printed("5.00", "%", "effects of inflation, chapter 5").check(100.0 * real_rate(0.0815, 0.03))


def test_annuity_of_an_investment():
    """100 000 at 8 % over 15 years is 11 682.954494 a year (E11)."""
    investment = Investment(name="vessel", amount=100_000.0, life_years=15)
    flow = cash_flow((investment,), *fuel_and_maintenance(NOTHING), finance(15, 0.08))
    Printed("11682.954494", "1/a", "check row E11").check(annuity(flow))
