"""Properties of cash flows: the plan's rates, real and nominal money, scaling."""

from dataclasses import fields, replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from evenfire.money.annuity import annuity
from evenfire.money.cash_flow import cash_flow
from evenfire.money.factors import single_present_value
from evenfire.money.inflation import nominal_rate, restated
from evenfire.money.present_rates import investment_present_cost, present_rates
from evenfire.money.terms import (
    Finance,
    Grant,
    Investment,
    Price,
    Prices,
    Tax,
    YearlyQuantities,
)

rates = st.floats(-0.1, 0.3)
amounts = st.floats(0.0, 1e6)


@st.composite
def finances(draw):
    """Any finance of the data model."""
    years = draw(st.integers(1, 4))
    tax = Tax(rate=draw(st.floats(0.0, 0.6)), depreciation_shares=(1.0 / years,) * years)
    return Finance(
        currency="EUR",
        price_date="2026-10",
        horizon_years=draw(st.integers(1, 30)),
        discount_rate=draw(rates),
        rate_basis=draw(st.sampled_from(["real", "nominal"])),
        contingency=draw(st.floats(0.0, 0.5)),
        inflation=draw(st.floats(-0.02, 0.1)),
        tax=draw(st.sampled_from([None, tax])),
    )


@st.composite
def prices(draw):
    """Any prices of the data model, negative ones and paths included."""

    def price():
        years = draw(st.lists(st.integers(1, 40), max_size=4, unique=True).map(sorted))
        return Price(
            amount=draw(st.floats(-1e3, 1e3)),
            escalation=draw(rates),
            path=tuple((year, draw(st.floats(-1e3, 1e3))) for year in years),
        )

    return Prices(**{field.name: price() for field in fields(Prices)})


@st.composite
def investments(draw, finance):
    """Up to three things bought within the horizon."""

    def investment(name):
        year = draw(st.integers(0, finance.horizon_years - 1))
        longest_delay = finance.horizon_years - year
        delay = draw(st.integers(0, min(2, longest_delay)))
        grant = Grant(
            share=draw(st.floats(0.0, 1.0)), years_after_purchase=draw(st.integers(0, min(2, longest_delay)))
        )
        return Investment(
            name=name,
            amount=draw(amounts),
            life_years=draw(st.integers(1, 40)),
            year=year,
            payments=((0, 0.25), (delay, 0.75)),
            escalation=draw(st.sampled_from([None, 0.0, 0.03])),
            replacement_amount=draw(st.one_of(st.none(), amounts)),
            residual_value=draw(st.one_of(st.none(), amounts)),
            grant=draw(st.sampled_from([None, grant])),
        )

    return tuple(investment(f"thing {n}") for n in range(draw(st.integers(0, 3))))


@st.composite
def cases(draw):
    """Everything a cash flow is made from."""
    finance = draw(finances())
    quantities = YearlyQuantities(**{field.name: draw(amounts) for field in fields(YearlyQuantities)})
    return draw(investments(finance)), quantities, draw(prices()), finance


def scale_of(flow) -> float:
    """Sum of all that moves, so that cancelling amounts do not ask for more than floats hold."""
    factors = (1.0 + flow.finance.discount_rate) ** -np.arange(flow.finance.horizon_years + 1.0)
    return 1.0 + sum(float(np.abs(line) @ factors) for line in flow.lines.values())


@given(cases())
def test_present_rates_add_up_to_the_cash_flow(case):
    """Quantity times rate, plus the present cost of everything bought, is the cash flow's present cost."""
    bought, used, price_list, finance = case
    flow = cash_flow(*case)
    rate = present_rates(price_list, finance)
    running = (
        used.fuel_j_lhv * rate.fuel_per_j_lhv
        + used.co2_kg * rate.carbon_per_kg
        + used.electricity_j * rate.electricity_per_j
        + used.water_kg * rate.water_per_kg
        + used.unmet_steam_kg * rate.unmet_steam_per_kg
        + used.burner_start_cost * rate.burner_starts
        + used.maintenance_cost * rate.maintenance
    )
    capital = sum(investment_present_cost(thing, finance) for thing in bought)
    assert running + capital == pytest.approx(flow.present_cost, rel=1e-9, abs=1e-9 * scale_of(flow))
    assert sum(flow.line_present_cost(name) for name in flow.lines) == pytest.approx(
        flow.present_cost, rel=1e-9, abs=1e-9 * scale_of(flow)
    )


@given(cases())
def test_present_cost_is_the_sum_of_discounted_years(case):
    """Present cost equals every line and year discounted by the single factor, one by one."""
    flow = cash_flow(*case)
    by_hand = sum(
        float(amount) * single_present_value(flow.finance.discount_rate, year)
        for line in flow.lines.values()
        for year, amount in enumerate(line)
    )
    assert flow.present_cost == pytest.approx(by_hand, rel=1e-9, abs=1e-9 * scale_of(flow))


@given(cases())
def test_annuity_has_the_present_cost(case):
    """The annuity, paid every year of the horizon, is worth the present cost."""
    flow = cash_flow(*case)
    factors = (1.0 + flow.finance.discount_rate) ** -np.arange(1.0, flow.finance.horizon_years + 1.0)
    assert float(annuity(flow) * factors.sum()) == pytest.approx(flow.present_cost, rel=1e-9, abs=1e-6)


@given(cases())
def test_restating_changes_no_present_cost(case):
    """Real and nominal tables of one cash flow have one present cost, and restating twice changes nothing."""
    flow = cash_flow(*case)
    other_basis = "real" if flow.finance.rate_basis == "nominal" else "nominal"
    other = restated(flow, other_basis)
    assert other.present_cost == pytest.approx(flow.present_cost, rel=1e-9, abs=1e-9 * scale_of(flow))
    back = restated(other, flow.finance.rate_basis)
    assert back.finance.discount_rate == pytest.approx(flow.finance.discount_rate, abs=1e-12)
    for name, line in flow.lines.items():
        assert back.lines[name] == pytest.approx(line, rel=1e-9, abs=1e-9)


@given(cases())
def test_real_terms_and_nominal_terms_describe_one_case(case):
    """Terms stated in real money, and the same terms carried to nominal money, give the same years.

    Tax, fixed payments, grants and replacements included; prices with escalation, paths at full years.
    """
    bought, used, price_list, finance = case
    real = replace(finance, rate_basis="real")
    inflation = finance.inflation

    def nominal_price(price: Price) -> Price:
        if price.path:
            last, _ = price.path[-1]
            years = np.arange(last + 1.0)
            points = np.array([0.0, *(year for year, _ in price.path)])
            values = np.array([price.amount, *(value for _, value in price.path)])
            by_year = np.interp(years, points, values) * (1.0 + inflation) ** years
            path = tuple((int(year), float(by_year[int(year)])) for year in years[1:])
        else:
            path = ()
        return Price(amount=price.amount, escalation=nominal_rate(price.escalation, inflation), path=path)

    nominal = replace(real, rate_basis="nominal", discount_rate=nominal_rate(real.discount_rate, inflation))
    nominal_prices = Prices(
        **{field.name: nominal_price(getattr(price_list, field.name)) for field in fields(Prices)}
    )
    nominal_bought = tuple(
        thing
        if thing.escalation is None
        else replace(thing, escalation=nominal_rate(thing.escalation, inflation))
        for thing in bought
    )
    in_real = cash_flow(bought, used, price_list, real)
    in_nominal = cash_flow(nominal_bought, used, nominal_prices, nominal)
    deflated = restated(in_nominal, "real")
    for name, line in in_real.lines.items():
        tolerance = 1e-9 * (1.0 + float(np.abs(line).max()))
        assert deflated.lines[name] == pytest.approx(line, rel=1e-9, abs=tolerance), name


@given(cases(), st.floats(0.1, 10.0))
def test_all_money_scaled_scales_the_cost(case, factor):
    """Every price and amount times a factor, the present cost times that factor."""
    bought, used, price_list, finance = case
    scaled_prices = Prices(
        **{
            field.name: replace(
                price := getattr(price_list, field.name),
                amount=price.amount * factor,
                path=tuple((year, value * factor) for year, value in price.path),
            )
            for field in fields(Prices)
        }
    )
    scaled_bought = tuple(
        replace(
            thing,
            amount=thing.amount * factor,
            replacement_amount=None
            if thing.replacement_amount is None
            else thing.replacement_amount * factor,
            residual_value=None if thing.residual_value is None else thing.residual_value * factor,
        )
        for thing in bought
    )
    flow = cash_flow(*case)
    scaled = cash_flow(scaled_bought, used, scaled_prices, finance)
    assert scaled.present_cost == pytest.approx(
        factor * flow.present_cost, rel=1e-9, abs=1e-9 * factor * scale_of(flow)
    )


@given(cases())
def test_a_grant_never_raises_the_cost(case):
    """A grant lowers the present cost of an investment, or leaves it, at rates that are not negative."""
    bought, _, _, finance = case
    finance = replace(finance, discount_rate=abs(finance.discount_rate), inflation=abs(finance.inflation))
    for thing in bought:
        if thing.grant is not None and thing.grant.years_after_purchase == 0:
            without = investment_present_cost(replace(thing, grant=None), finance)
            assert investment_present_cost(thing, finance) <= without + 1e-6
