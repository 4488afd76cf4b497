"""Year-by-year cost of a unit of each yearly quantity: the one home of prices over time.

Both the cash flow and the present cost rates are built from these arrays.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from evenfire.money.terms import Finance, Price, Prices, YearlyQuantities

FloatArray = NDArray[np.float64]

RUNNING_LINES = ("fuel", "carbon", "electricity", "water", "unmet steam", "burner starts", "maintenance")
"""Cost lines that follow from yearly quantities."""


def discount_factors(finance: Finance) -> FloatArray:
    """Present value of one unit of money at the end of each year [1], shape (horizon + 1,)."""
    years = np.arange(finance.horizon_years + 1)
    return np.asarray((1.0 + finance.discount_rate) ** -years.astype(float))


def yearly_price(price: Price, finance: Finance) -> FloatArray:
    """What a unit costs in each year, on the basis of the finance, shape (horizon + 1,).

    Year 0 holds no operation and so the price zero. A path leads in straight lines from the amount
    in year 0 through its points; the escalation holds after the last point, or throughout without one.

    Examples
    --------
    >>> finance = Finance(
    ...     currency="EUR", price_date="2026-10", horizon_years=4, discount_rate=0.08, rate_basis="real"
    ... )
    >>> yearly_price(Price(amount=70.0, escalation=0.1, path=((2, 90.0),)), finance)
    array([  0. ,  80. ,  90. ,  99. , 108.9])
    """
    years = np.arange(finance.horizon_years + 1, dtype=float)
    point_years = np.array([0.0, *(year for year, _ in price.path)])
    point_amounts = np.array([price.amount, *(amount for _, amount in price.path)])
    years_after_path = np.maximum(years - point_years[-1], 0.0)
    amounts: FloatArray = np.interp(years, point_years, point_amounts)
    amounts = amounts * (1.0 + price.escalation) ** years_after_path
    amounts[0] = 0.0
    return amounts


def running_unit_costs(prices: Prices, finance: Finance) -> dict[str, FloatArray]:
    """Cost before tax of one unit of a yearly quantity in each year, by line of `RUNNING_LINES`."""
    price_of_line = {
        "fuel": prices.fuel_per_j_lhv,
        "carbon": prices.carbon_per_kg,
        "electricity": prices.electricity_per_j,
        "water": prices.water_per_kg,
        "unmet steam": prices.unmet_steam_per_kg,
        "burner starts": prices.maintenance,
        "maintenance": prices.maintenance,
    }
    return {line: yearly_price(price_of_line[line], finance) for line in RUNNING_LINES}


def quantity_of_line(quantities: YearlyQuantities) -> dict[str, float]:
    """The yearly quantity that each of `RUNNING_LINES` prices."""
    return {
        "fuel": quantities.fuel_j_lhv,
        "carbon": quantities.co2_kg,
        "electricity": quantities.electricity_j,
        "water": quantities.water_kg,
        "unmet steam": quantities.unmet_steam_kg,
        "burner starts": quantities.burner_start_cost,
        "maintenance": quantities.maintenance_cost,
    }


def tax_rate(finance: Finance) -> float:
    """Share of a deductible cost that less tax gives back [1]; zero without tax."""
    return finance.tax.rate if finance.tax is not None else 0.0
