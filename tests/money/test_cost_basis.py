"""Estimates from correlations: shown as such, rising with size and pressure."""

import numpy as np
import pytest

from evenfire.money.correlations import CORRELATIONS
from evenfire.money.cost_basis import estimated_cost
from evenfire.money.terms import CostBasis
from evenfire.units import bar_g_to_pa


def basis(name: str, **changes) -> CostBasis:
    """A basis at the source's own date, in dollars."""
    terms = {"correlation": name, "cost_index": CORRELATIONS[name].basis_index, "currency_per_usd": 1.0}
    if not CORRELATIONS[name].installed:
        terms["installation_factor"] = 2.5
    return CostBasis(**(terms | changes))


def amount(name: str, size: float, bar_g: float, **changes) -> float:
    """Estimated cost of a vessel two metres across, or a boiler."""
    estimate = estimated_cost(
        basis(name, **changes), size=size, pressure_pa=bar_g_to_pa(bar_g), diameter_m=2.0
    )
    return estimate.amount


@pytest.mark.parametrize("name", CORRELATIONS)
def test_cost_rises_with_size_and_never_falls_with_pressure(name):
    """Over the whole range of its source; some copies in circulation make large boilers cheaper."""
    correlation = CORRELATIONS[name]
    sizes = np.geomspace(correlation.smallest, correlation.largest, 50)
    sizes[-1] = correlation.largest
    costs = [amount(name, size, correlation.lowest_bar_g) for size in sizes]
    assert np.all(np.diff(costs) > 0.0)
    pressures = np.linspace(correlation.lowest_bar_g, correlation.highest_bar_g - 1e-9, 50)
    costs = [amount(name, correlation.smallest, pressure) for pressure in pressures]
    assert np.all(np.diff(costs) >= -1e-5 * costs[0])


@pytest.mark.parametrize("name", CORRELATIONS)
def test_estimate_says_what_it_is(name):
    """The notice names source, date, index, range and accuracy, and coefficients not compared."""
    correlation = CORRELATIONS[name]
    estimate = estimated_cost(
        basis(name, cost_index=800.0),
        size=correlation.largest,
        pressure_pa=bar_g_to_pa(20.0),
        diameter_m=2.0,
    )
    assert estimate.notice.severity == "assumed"
    for part in (correlation.source, correlation.basis_date, "index", "800", "class 5", "-50 % to +100 %"):
        assert part in estimate.notice.text
    assert ("not compared" in estimate.notice.text) is not correlation.confirmed
    assert (estimate.low, estimate.high) == pytest.approx((0.5 * estimate.amount, 2.0 * estimate.amount))


def test_place_date_and_currency_are_factors():
    """Twice the index, three times the location factor, half the currency: three times the cost."""
    name = "steam boiler by heat output"
    here = amount(name, 5.0e6, 10.0)
    there = amount(
        name,
        5.0e6,
        10.0,
        cost_index=2.0 * CORRELATIONS[name].basis_index,
        location_factor=3.0,
        currency_per_usd=0.5,
    )
    assert there == pytest.approx(3.0 * here, rel=1e-12)


def test_installation_factor_of_the_source_holds_until_one_is_stated():
    """A pressure vessel by shell mass is installed at four times its price, or at the stated factor."""
    name = "pressure vessel by shell mass"
    assert amount(name, 5000.0, 10.0, installation_factor=None) == pytest.approx(
        4.0 * amount(name, 5000.0, 10.0, installation_factor=1.0)
    )
