"""What one way to supply steam costs, year by year."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from evenfire.money.checks import require_sound
from evenfire.money.purchases import PURCHASE_LINES, purchase_lines
from evenfire.money.terms import Finance, Investment, Prices, YearlyQuantities
from evenfire.money.yearly_costs import (
    RUNNING_LINES,
    discount_factors,
    quantity_of_line,
    running_unit_costs,
    tax_rate,
)

FloatArray = NDArray[np.float64]

RUNNING_TAX_LINE = "tax on running costs"


@dataclass(frozen=True, slots=True, kw_only=True)
class CashFlow:
    """Costs of every year by line, on the basis of ``finance.rate_basis``; income is negative."""

    finance: Finance
    lines: Mapping[str, FloatArray] = field(repr=False)
    """Name to costs of years 0 to the horizon [currency], each of shape (horizon + 1,).

    ``grants`` and the two lines of tax stand only where the terms ask for them.
    """

    def yearly(self, *names: str) -> FloatArray:
        """Sum of the named lines in each year [currency], shape (horizon + 1,); absent ones are zero."""
        total = np.zeros(self.finance.horizon_years + 1)
        for name in names:
            if name in self.lines:
                total += self.lines[name]
        return total

    @property
    def yearly_total(self) -> FloatArray:
        """Cost of each year [currency], shape (horizon + 1,)."""
        return self.yearly(*self.lines)

    @property
    def yearly_running(self) -> FloatArray:
        """Running cost of each year with its tax [currency], shape (horizon + 1,)."""
        return self.yearly(*RUNNING_LINES, RUNNING_TAX_LINE)

    @property
    def yearly_capital(self) -> FloatArray:
        """Investment, replacement, residual value, grants and their tax [currency], shape (horizon + 1,)."""
        return self.yearly(*PURCHASE_LINES)

    @property
    def investment(self) -> float:
        """Outlay of year 0 with contingency, before any grant [currency]."""
        return float(self.yearly("investment")[0])

    @property
    def present_cost(self) -> float:
        """Net present cost over the horizon [currency]."""
        return float(discount_factors(self.finance) @ self.yearly_total)

    def line_present_cost(self, name: str) -> float:
        """Present cost over the horizon of one line [currency]; zero for a line that does not stand."""
        return float(discount_factors(self.finance) @ self.yearly(name))


def cash_flow(
    investments: tuple[Investment, ...], quantities: YearlyQuantities, prices: Prices, finance: Finance
) -> CashFlow:
    """Costs of every year, from what is bought and what a year of operation uses.

    For the table that a finance department checks. Year 0 is the investment, years 1 to the horizon
    are operation, every amount falls at the end of its year. Amounts are nominal or real as
    ``finance.rate_basis`` says, and rates, escalations and price paths must be stated likewise.

    Parameters
    ----------
    investments : tuple of Investment
        What is bought; what already stands costs nothing here.
    quantities : YearlyQuantities
        What each year of operation uses.
    prices : Prices
        What the quantities cost and how that changes.
    finance : Finance
        Horizon, rates, contingency, inflation and tax.

    Returns
    -------
    CashFlow
        Lines ``investment``, ``replacement``, ``residual value``, ``fuel``, ``carbon``,
        ``electricity``, ``water``, ``unmet steam``, ``burner starts`` and ``maintenance``; with a
        grant also ``grants``, with tax also ``tax on investment`` and ``tax on running costs``.

    Raises
    ------
    MoneyError
        M101 to M107, all problems of the terms at once.

    Notes
    -----
    Tax assumes that the owner's other income uses up every deduction in its year, and that unmet
    steam is lost taxable income. Costs of existing plant before year 0 are sunk and left out.

    References
    ----------
    Fuller and Petersen, NIST Handbook 135, 1996 edition (life-cycle cost method).

    Examples
    --------
    >>> from evenfire.money.terms import Price
    >>> free = Price(amount=0.0)
    >>> flow = cash_flow(
    ...     (Investment(name="vessel", amount=100_000.0, life_years=20),),
    ...     YearlyQuantities(
    ...         fuel_j_lhv=3.6e12, co2_kg=0.0, electricity_j=0.0, water_kg=0.0, unmet_steam_kg=0.0,
    ...         burner_start_cost=0.0, maintenance_cost=0.0,
    ...     ),
    ...     Prices(
    ...         fuel_per_j_lhv=Price(amount=30.0 / 3.6e9, escalation=0.03), carbon_per_kg=free,
    ...         electricity_per_j=free, water_per_kg=free, unmet_steam_per_kg=free,
    ...         maintenance=Price(amount=1.0),
    ...     ),
    ...     Finance(
    ...         currency="EUR", price_date="2026-10", horizon_years=15, discount_rate=0.08,
    ...         rate_basis="nominal",
    ...     ),
    ... )
    >>> flow.line_present_cost("fuel")  # 30 000 a year * 10.482592
    314477.76
    >>> print(flow.lines["residual value"][15])
    -25000.0
    """
    require_sound(finance, prices=prices, investments=investments, quantities=quantities)
    lines = {line: np.zeros(finance.horizon_years + 1) for line in PURCHASE_LINES}
    for investment in investments:
        for line, amounts in purchase_lines(investment, finance).items():
            lines[line] += amounts
    unit_costs = running_unit_costs(prices, finance)
    amounts_used = quantity_of_line(quantities)
    lines |= {line: amounts_used[line] * unit_costs[line] for line in RUNNING_LINES}
    running = np.sum([lines[line] for line in RUNNING_LINES], axis=0)
    lines[RUNNING_TAX_LINE] = -tax_rate(finance) * running
    if finance.tax is None:
        del lines["tax on investment"], lines[RUNNING_TAX_LINE]
    if all(investment.grant is None for investment in investments):
        del lines["grants"]
    return CashFlow(finance=finance, lines=lines)
