"""Year-by-year amounts of one investment: purchase, replacements, residual value, grant and tax.

Both the cash flow and the present cost rates are built from these arrays.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from evenfire.money.terms import Finance, Investment

FloatArray = NDArray[np.float64]

PURCHASE_LINES = ("investment", "replacement", "residual value", "grants", "tax on investment")
"""Cost lines that follow from investments."""


@dataclass(frozen=True, slots=True, kw_only=True)
class _Unit:
    """One bought thing from its purchase to its end, on the basis of the finance."""

    bought: int
    ends: int
    taxed_price: float
    """Price that tax law lets the owner deduct over time, in money of the year of purchase."""


def investment_price_growth(investment: Investment, finance: Finance) -> float:
    """Change per year of what the investment costs, on the basis of the finance [1]."""
    if investment.escalation is not None:
        return investment.escalation
    return finance.inflation if finance.rate_basis == "nominal" else 0.0


def fixed_sum_factor(finance: Finance) -> float:
    """What a sum fixed in nominal money is worth after one year, on the basis of the finance [1]."""
    return 1.0 / (1.0 + finance.inflation) if finance.rate_basis == "real" else 1.0


def purchase_lines(investment: Investment, finance: Finance) -> dict[str, FloatArray]:
    """Costs of one investment in each year, by line of `PURCHASE_LINES`, each of shape (horizon + 1,).

    Costs are positive; residual value, grant and tax relief are negative. The purchase and every
    replacement carry the contingency. Replacements fall due each ``life_years`` after the purchase,
    before the horizon; the horizon itself gets none. The straight-line residual value is the unused
    share of the last unit's life times its price at the horizon.

    Notes
    -----
    A grant lowers the depreciated price. Depreciation, grants and later payments are sums fixed in
    nominal money, so inflation erodes them in a real calculation. What is not yet depreciated when
    a unit ends is deducted then, against its residual value at the horizon.
    """
    horizon = finance.horizon_years
    lines = {line: np.zeros(horizon + 1) for line in PURCHASE_LINES}
    price_index = (1.0 + investment_price_growth(investment, finance)) ** np.arange(horizon + 1, dtype=float)
    fixed_sum = fixed_sum_factor(finance)
    first = investment.year
    price = investment.amount * price_index[first]
    for delay, share in investment.payments:
        lines["investment"][first + delay] += price * (1.0 + finance.contingency) * share * fixed_sum**delay
    granted = 0.0
    if investment.grant is not None:
        delay = investment.grant.years_after_purchase
        granted = price * investment.grant.share
        lines["grants"][first + delay] -= granted * fixed_sum**delay

    replacement = (
        investment.amount if investment.replacement_amount is None else investment.replacement_amount
    )
    replacement_price = replacement * (1.0 + finance.contingency) * price_index
    later = range(first + investment.life_years, horizon, investment.life_years)
    lines["replacement"][list(later)] = replacement_price[list(later)]
    bought = [first, *later]
    if investment.residual_value is None:
        last_price = replacement if later else investment.amount
        unused = 1.0 - (horizon - bought[-1]) / investment.life_years
        residual = unused * last_price * (1.0 + finance.contingency)
    else:
        residual = investment.residual_value
    lines["residual value"][horizon] = -residual * price_index[horizon]

    units = [
        _Unit(
            bought=year,
            ends=min(year + investment.life_years, horizon),
            taxed_price=price * (1.0 + finance.contingency) - granted
            if year == first
            else replacement_price[year],
        )
        for year in bought
    ]
    lines["tax on investment"] = _tax_on_units(units, -float(lines["residual value"][horizon]), finance)
    return lines


def _tax_on_units(units: list[_Unit], residual_value: float, finance: Finance) -> FloatArray:
    tax = np.zeros(finance.horizon_years + 1)
    if finance.tax is None:
        return tax
    fixed_sum = fixed_sum_factor(finance)
    for unit in units:
        age = unit.ends - unit.bought
        shares = np.zeros(age + 1)
        deducted = finance.tax.depreciation_shares[:age]
        shares[1 : 1 + len(deducted)] = deducted
        shares[age] += 1.0 - sum(deducted)
        deductions = unit.taxed_price * shares * fixed_sum ** np.arange(age + 1)
        tax[unit.bought : unit.ends + 1] -= finance.tax.rate * deductions
    tax[-1] += finance.tax.rate * residual_value
    return tax
