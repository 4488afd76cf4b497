"""Present cost spread evenly over the years, and over the steam they supply."""

from __future__ import annotations

from evenfire.errors import MoneyError, Problem
from evenfire.money.cash_flow import CashFlow
from evenfire.money.factors import capital_recovery_factor


def annuity(flow: CashFlow) -> float:
    """Equal yearly cost with the same present cost as the cash flow.

    For comparing with yearly budgets. Formula: present cost times the capital recovery factor of the
    discount rate and the horizon. On a nominal basis the amounts are equal in nominal money, on a
    real basis in money of the price date; the nominal annuity is the larger number of the two.

    Parameters
    ----------
    flow : CashFlow
        Costs over the horizon.

    Returns
    -------
    float
        Yearly cost [currency/a].

    References
    ----------
    Fuller and Petersen, NIST Handbook 135, 1996 edition (annual value).

    Examples
    --------
    >>> import numpy as np
    >>> from evenfire.money.terms import Finance
    >>> finance = Finance(
    ...     currency="EUR", price_date="2026-10", horizon_years=15, discount_rate=0.08, rate_basis="real"
    ... )
    >>> annuity(CashFlow(finance=finance, lines={"investment": np.array([100_000.0] + 15 * [0.0])}))
    11682.954494
    """
    finance = flow.finance
    return flow.present_cost * capital_recovery_factor(finance.discount_rate, finance.horizon_years)


def steam_cost_per_kg(flow: CashFlow, steam_kg_per_year: float) -> float:
    """What a kilogram of steam costs over the life: annuity over the yearly steam supplied.

    Parameters
    ----------
    flow : CashFlow
        Costs over the horizon, on the basis that also holds for the result.
    steam_kg_per_year : float
        Steam that reaches the process in a year [kg/a].

    Returns
    -------
    float
        Cost of steam [currency/kg].

    Raises
    ------
    MoneyError
        M107 if no steam is supplied.

    Notes
    -----
    Sunk costs of existing plant are not in it, so it is no price at which steam could be sold.
    """
    if not steam_kg_per_year > 0.0:
        raise MoneyError(
            Problem(
                code="M107",
                where="cost per tonne of steam",
                found=f"found {steam_kg_per_year:g} kg of steam a year",
                allowed="must be above 0 kg/a",
            )
        )
    return annuity(flow) / steam_kg_per_year
