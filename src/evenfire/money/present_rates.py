"""Present cost per unit of a yearly quantity, and of one investment: what the plan's objective adds up."""

from __future__ import annotations

from dataclasses import dataclass

from evenfire.money.checks import require_sound
from evenfire.money.purchases import purchase_lines
from evenfire.money.terms import Finance, Investment, Prices
from evenfire.money.yearly_costs import discount_factors, running_unit_costs, tax_rate


@dataclass(frozen=True, slots=True, kw_only=True)
class PresentRates:
    """Present cost over the horizon, after tax, of one unit used in every year of operation."""

    fuel_per_j_lhv: float
    """Fuel alone; its carbon is ``carbon_per_kg`` [currency a/J]."""
    carbon_per_kg: float
    electricity_per_j: float
    water_per_kg: float
    unmet_steam_per_kg: float
    burner_starts: float
    """Per currency a year at the price date's prices [a]."""
    maintenance: float
    """Per currency a year at the price date's prices [a]."""


def present_rates(prices: Prices, finance: Finance) -> PresentRates:
    """Present cost over the horizon per unit of each yearly quantity.

    For an objective that is linear in yearly quantities. Quantity times rate, plus
    `investment_present_cost` of everything bought, is the present cost of the cash flow exactly.
    Formula: sum over years of price times discount factor, times one less the tax rate.

    Parameters
    ----------
    prices : Prices
        What the quantities cost and how that changes.
    finance : Finance
        Horizon, rates and tax.

    Returns
    -------
    PresentRates
        One rate for every quantity [currency per yearly unit].

    Raises
    ------
    MoneyError
        M101, M102, M103, M105, M106: all problems of the terms at once.

    References
    ----------
    Fuller and Petersen, NIST Handbook 135, 1996 edition (modified uniform present value factors).

    Examples
    --------
    >>> from evenfire.money.terms import Price
    >>> price = Price(amount=1.0, escalation=0.03)
    >>> rates = present_rates(
    ...     Prices(
    ...         fuel_per_j_lhv=price, carbon_per_kg=price, electricity_per_j=price, water_per_kg=price,
    ...         unmet_steam_per_kg=price, maintenance=price,
    ...     ),
    ...     Finance(
    ...         currency="EUR", price_date="2026-10", horizon_years=15, discount_rate=0.08, rate_basis="real"
    ...     ),
    ... )
    >>> rates.carbon_per_kg
    10.482592
    """
    require_sound(finance, prices=prices)
    factors = discount_factors(finance)
    kept = 1.0 - tax_rate(finance)
    rate = {line: kept * float(factors @ cost) for line, cost in running_unit_costs(prices, finance).items()}
    return PresentRates(
        fuel_per_j_lhv=rate["fuel"],
        carbon_per_kg=rate["carbon"],
        electricity_per_j=rate["electricity"],
        water_per_kg=rate["water"],
        unmet_steam_per_kg=rate["unmet steam"],
        burner_starts=rate["burner starts"],
        maintenance=rate["maintenance"],
    )


def investment_present_cost(investment: Investment, finance: Finance) -> float:
    """Present cost of one investment: purchase with contingency and replacements, less residual value.

    For the fixed cost of a thing in an objective; grant and tax count where the terms have them.
    It is proportional to the amount as long as no replacement or residual value is stated.

    Parameters
    ----------
    investment : Investment
        What is bought.
    finance : Finance
        Horizon, rates, contingency, inflation and tax.

    Returns
    -------
    float
        Present cost [currency].

    Raises
    ------
    MoneyError
        M101, M102, M104, M105, M106: all problems of the terms at once.

    Examples
    --------
    >>> investment_present_cost(
    ...     Investment(name="boiler", amount=100.0, life_years=20),
    ...     Finance(
    ...         currency="EUR", price_date="2026-10", horizon_years=10, discount_rate=0.03, rate_basis="real"
    ...     ),
    ... )  # 100 - 50 * 0.744094
    62.7953
    """
    require_sound(finance, investments=(investment,))
    factors = discount_factors(finance)
    return sum(float(factors @ amounts) for amounts in purchase_lines(investment, finance).values())
