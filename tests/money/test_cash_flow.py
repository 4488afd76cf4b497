"""Cash flow year by year: what is paid when."""

import numpy as np
import pytest

from evenfire.money.annuity import annuity, steam_cost_per_kg
from evenfire.money.cash_flow import cash_flow
from evenfire.money.terms import Grant, Investment, Price, Tax
from tests.money.terms_for_tests import finance, prices, quantities


def only(thing: Investment, **terms):
    """Cash flow of one investment and nothing else."""
    return cash_flow((thing,), quantities(), prices(), finance(**terms))


def years(count: int, **paid: float) -> list[float]:
    """Amounts of years 0 to count, given as y3=100.0."""
    amounts = [0.0] * (count + 1)
    for year, amount in paid.items():
        amounts[int(year[1:])] = amount
    return amounts


def test_lines_without_grants_and_tax():
    """An ordinary case has the ten lines that the report shows, in order, and no others."""
    assert list(only(Investment(name="boiler", amount=1.0, life_years=20)).lines) == [
        "investment",
        "replacement",
        "residual value",
        "fuel",
        "carbon",
        "electricity",
        "water",
        "unmet steam",
        "burner starts",
        "maintenance",
    ]


def test_operation_starts_in_year_1_and_prices_escalate_from_the_price_date():
    """Year 0 has no running cost; year n costs amount * (1 + escalation) ** n, each line by its own."""
    flow = cash_flow(
        (),
        quantities(fuel_j_lhv=10.0, co2_kg=2.0, water_kg=5.0, burner_start_cost=7.0, maintenance_cost=100.0),
        prices(
            fuel_per_j_lhv=Price(amount=3.0, escalation=0.1),
            carbon_per_kg=Price(amount=4.0, escalation=-0.5),
            water_per_kg=Price(amount=1.0),
            maintenance=Price(amount=1.0, escalation=0.02),
        ),
        finance(horizon_years=2),
    )
    assert flow.lines["fuel"] == pytest.approx([0.0, 33.0, 36.3])
    assert flow.lines["carbon"] == pytest.approx([0.0, 4.0, 2.0])
    assert flow.lines["water"] == pytest.approx([0.0, 5.0, 5.0])
    assert flow.lines["burner starts"] == pytest.approx([0.0, 7.14, 7.2828])
    assert flow.lines["maintenance"] == pytest.approx([0.0, 102.0, 104.04])


def test_price_path_leads_in_straight_lines_and_then_escalates():
    """From 70 now to 100 in year 3 by 10 a year, then to 80 in year 4, then 5 % more each year."""
    flow = cash_flow(
        (),
        quantities(co2_kg=1.0),
        prices(carbon_per_kg=Price(amount=70.0, escalation=0.05, path=((3, 100.0), (4, 80.0)))),
        finance(horizon_years=6),
    )
    assert flow.lines["carbon"] == pytest.approx([0.0, 80.0, 90.0, 100.0, 80.0, 84.0, 88.2])


def test_path_beyond_the_horizon_counts_up_to_it():
    """A price known for year 10 shapes the years before it though the horizon is 2."""
    flow = cash_flow(
        (),
        quantities(co2_kg=1.0),
        prices(carbon_per_kg=Price(amount=0.0, path=((10, 100.0),))),
        finance(horizon_years=2),
    )
    assert flow.lines["carbon"] == pytest.approx([0.0, 10.0, 20.0])


def test_contingency_is_on_purchase_replacement_and_residual_value():
    """A thing of 100 with 10 % contingency and a life of 6 in 15 years: bought twice more, half left."""
    flow = only(Investment(name="pump", amount=100.0, life_years=6), contingency=0.1)
    assert flow.investment == pytest.approx(110.0)
    assert flow.lines["replacement"] == pytest.approx(years(15, y6=110.0, y12=110.0))
    assert flow.lines["residual value"] == pytest.approx(years(15, y15=-55.0))


def test_life_that_ends_at_the_horizon_needs_no_replacement():
    """At the horizon nothing is bought and nothing is left, after one life as after three."""
    assert (
        not only(Investment(name="vessel", amount=100.0, life_years=15))
        .yearly("replacement", "residual value")
        .any()
    )
    flow = only(Investment(name="vessel", amount=100.0, life_years=5))
    assert flow.lines["replacement"] == pytest.approx(years(15, y5=100.0, y10=100.0))
    assert not flow.lines["residual value"].any()


def test_replacement_follows_inflation_in_nominal_money_and_stands_still_in_real():
    """The same real price is a higher nominal one; a price change of its own takes inflation's place."""
    thing = Investment(name="burner", amount=100.0, life_years=10)
    nominal = only(thing, inflation=0.02)
    assert nominal.lines["replacement"][10] == pytest.approx(100.0 * 1.02**10)
    assert nominal.lines["residual value"][15] == pytest.approx(-50.0 * 1.02**15)
    real = only(thing, inflation=0.02, rate_basis="real")
    assert real.lines["replacement"][10] == 100.0
    cheaper = Investment(name="burner", amount=100.0, life_years=10, escalation=-0.03)
    assert only(cheaper, inflation=0.02).lines["replacement"][10] == pytest.approx(100.0 * 0.97**10)


def test_purchase_in_a_later_year_has_its_life_from_then():
    """An old boiler due in year 5: paid at that year's price, ten of twenty years left at year 15."""
    flow = only(Investment(name="boiler", amount=100.0, life_years=20, year=5), inflation=0.02)
    assert flow.investment == 0.0
    assert flow.lines["investment"] == pytest.approx(years(15, y5=100.0 * 1.02**5))
    assert flow.lines["residual value"] == pytest.approx(years(15, y15=-50.0 * 1.02**15))


def test_payments_of_a_contract_are_fixed_sums():
    """30 % with the order and 70 % a year later: in nominal money as signed, in real money less."""
    thing = Investment(name="boiler", amount=100.0, life_years=15, payments=((0, 0.3), (1, 0.7)))
    assert only(thing, inflation=0.05).lines["investment"] == pytest.approx(years(15, y0=30.0, y1=70.0))
    real = only(thing, inflation=0.05, rate_basis="real")
    assert real.lines["investment"] == pytest.approx(years(15, y0=30.0, y1=70.0 / 1.05))


def test_stated_replacement_and_residual_value_take_the_place_of_the_rule():
    """A refit cheaper than the purchase, and a resale value of its own at the price date's prices."""
    thing = Investment(
        name="boiler", amount=100.0, life_years=10, replacement_amount=40.0, residual_value=7.0
    )
    flow = only(thing, contingency=0.5, inflation=0.02)
    assert flow.lines["replacement"][10] == pytest.approx(60.0 * 1.02**10)
    assert flow.lines["residual value"][15] == pytest.approx(-7.0 * 1.02**15)
    rule = Investment(name="boiler", amount=100.0, life_years=10, replacement_amount=40.0)
    assert only(rule).lines["residual value"][15] == pytest.approx(-20.0)


def test_grant_is_on_the_price_without_contingency():
    """A quarter of 100 comes back a year after the purchase, whatever the contingency."""
    thing = Investment(
        name="vessel", amount=100.0, life_years=15, grant=Grant(share=0.25, years_after_purchase=1)
    )
    flow = only(thing, contingency=0.2)
    assert flow.lines["grants"] == pytest.approx(years(15, y1=-25.0))
    assert flow.investment == pytest.approx(120.0)


def test_replacements_get_no_grant():
    """Only the first purchase is granted."""
    thing = Investment(name="pump", amount=100.0, life_years=5, grant=Grant(share=1.0))
    assert only(thing).lines["grants"] == pytest.approx(years(15, y0=-100.0))


def test_tax_gives_back_its_share_of_running_costs():
    """A quarter of every running cost comes back in its year, on a line of its own."""
    flow = cash_flow(
        (),
        quantities(fuel_j_lhv=10.0, maintenance_cost=20.0),
        prices(fuel_per_j_lhv=Price(amount=3.0)),
        finance(horizon_years=2, tax=Tax(rate=0.25, depreciation_shares=(1.0,))),
    )
    assert flow.lines["tax on running costs"] == pytest.approx([0.0, -12.5, -12.5])
    assert flow.yearly_running == pytest.approx([0.0, 37.5, 37.5])


def test_depreciation_is_on_price_with_contingency_less_grant():
    """(110 - 20) over three years at 50 % tax gives 15 a year."""
    thing = Investment(name="vessel", amount=100.0, life_years=15, grant=Grant(share=0.2))
    tax = Tax(rate=0.5, depreciation_shares=(1 / 3, 1 / 3, 1 / 3))
    flow = only(thing, contingency=0.1, tax=tax)
    assert flow.lines["tax on investment"] == pytest.approx(years(15, y1=-15.0, y2=-15.0, y3=-15.0))


def test_what_is_not_depreciated_when_a_thing_ends_is_deducted_then():
    """A life of two with four years of depreciation: the rest is written off at each replacement."""
    thing = Investment(name="burner", amount=100.0, life_years=2)
    tax = Tax(rate=0.5, depreciation_shares=(0.25,) * 4)
    flow = only(thing, horizon_years=4, tax=tax)
    assert flow.lines["tax on investment"] == pytest.approx([0.0, -12.5, -37.5, -12.5, -37.5])


def test_residual_value_above_book_value_is_taxed():
    """Written off over two years, worth 50 at year 5 of ten: half of the 50 goes to tax at 50 %."""
    thing = Investment(name="vessel", amount=100.0, life_years=10)
    tax = Tax(rate=0.5, depreciation_shares=(0.5, 0.5))
    flow = only(thing, horizon_years=5, tax=tax)
    assert flow.lines["tax on investment"] == pytest.approx([0.0, -25.0, -25.0, 0.0, 0.0, 25.0])


def test_depreciation_may_pause_for_a_year():
    """Shares of zero are allowed between others."""
    tax = Tax(rate=0.5, depreciation_shares=(0.5, 0.0, 0.5))
    flow = only(Investment(name="vessel", amount=100.0, life_years=15), tax=tax)
    assert flow.lines["tax on investment"] == pytest.approx(years(15, y1=-25.0, y3=-25.0))


def test_inflation_erodes_depreciation_and_late_grants_in_real_money():
    """Sums fixed in nominal money shrink year by year in money of the price date."""
    thing = Investment(
        name="vessel", amount=100.0, life_years=2, grant=Grant(share=0.5, years_after_purchase=2)
    )
    tax = Tax(rate=0.5, depreciation_shares=(0.5, 0.5))
    flow = only(thing, horizon_years=2, rate_basis="real", inflation=0.1, tax=tax)
    assert flow.lines["grants"] == pytest.approx([0.0, 0.0, -50.0 / 1.21])
    assert flow.lines["tax on investment"] == pytest.approx([0.0, -12.5 / 1.1, -12.5 / 1.21])


def test_negative_price_of_power_is_income():
    """Power prices may be negative; the line then lowers the cost."""
    flow = cash_flow(
        (), quantities(electricity_j=10.0), prices(electricity_per_j=Price(amount=-2.0)), finance()
    )
    assert flow.present_cost == pytest.approx(-20.0 * 8.559479, rel=1e-6)


def test_horizon_of_one_year():
    """The shortest horizon: buy, run once, keep what is left."""
    flow = cash_flow(
        (Investment(name="hire", amount=100.0, life_years=4),),
        quantities(maintenance_cost=10.0),
        prices(),
        finance(horizon_years=1, discount_rate=0.0),
    )
    assert flow.yearly_total == pytest.approx([100.0, -65.0])
    assert flow.present_cost == pytest.approx(35.0)


def test_line_that_does_not_stand_costs_nothing():
    """Asking for grants where there are none gives zero."""
    assert only(Investment(name="boiler", amount=1.0, life_years=20)).line_present_cost("grants") == 0.0


def test_steam_cost_is_the_annuity_per_kilogram():
    """100 000 over 15 years at 8 % for 1 000 t a year is 11.68 a tonne."""
    flow = only(Investment(name="boiler", amount=100_000.0, life_years=15))
    assert annuity(flow) == pytest.approx(11_682.954494, rel=1e-9)
    assert 1000.0 * steam_cost_per_kg(flow, 1.0e6) == pytest.approx(11.682954494, rel=1e-9)
    assert np.isclose(annuity(flow) * 8.559479, flow.present_cost, rtol=1e-6)
