"""Real and nominal rates, and a cash flow on the other of the two bases."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from evenfire.errors import MoneyError
from evenfire.money.cash_flow import CashFlow
from evenfire.money.checks import rate_problems


def nominal_rate(real_rate: float, inflation: float) -> float:
    """Nominal rate that contains a real rate and inflation.

    For discount rates and escalations alike. Formula: ``(1 + real) (1 + inflation) - 1``.

    Parameters
    ----------
    real_rate, inflation : float
        Per year [1].

    Returns
    -------
    float
        Nominal rate per year [1].

    Raises
    ------
    MoneyError
        M101 for a rate of -1 (-100 %) or less.

    References
    ----------
    Fisher, The Theory of Interest, 1930; Fuller and Petersen, NIST Handbook 135, 1996 edition.

    Examples
    --------
    >>> nominal_rate(0.05, 0.03)
    0.0815
    """
    _require_rates(real_rate, inflation)
    return (1.0 + real_rate) * (1.0 + inflation) - 1.0


def real_rate(nominal_rate: float, inflation: float) -> float:
    """Real rate that is left of a nominal rate after inflation.

    The inverse of `nominal_rate`. Formula: ``(1 + nominal) / (1 + inflation) - 1``.

    Parameters
    ----------
    nominal_rate, inflation : float
        Per year [1].

    Returns
    -------
    float
        Real rate per year [1].

    Raises
    ------
    MoneyError
        M101 for a rate of -1 (-100 %) or less.

    References
    ----------
    As for `nominal_rate`.

    Examples
    --------
    >>> real_rate(0.0815, 0.03)
    0.05
    """
    _require_rates(nominal_rate, inflation)
    return (1.0 + nominal_rate) / (1.0 + inflation) - 1.0


def restated(flow: CashFlow, rate_basis: str) -> CashFlow:
    """The same cash flow in real or in nominal money; its present cost is the same.

    For a table on the basis that the reader's house uses. Amounts of year n are multiplied or
    divided by ``(1 + inflation) ** n`` and the rates converted.

    Parameters
    ----------
    flow : CashFlow
        On either basis.
    rate_basis : str
        ``real`` (money of the price date) or ``nominal``.

    Returns
    -------
    CashFlow
        On the basis asked for.

    Examples
    --------
    >>> from evenfire.money.terms import Finance
    >>> finance = Finance(
    ...     currency="EUR", price_date="2026-10", horizon_years=2, discount_rate=0.0815,
    ...     rate_basis="nominal", inflation=0.03,
    ... )
    >>> flow = CashFlow(finance=finance, lines={"fuel": np.array([0.0, 103.0, 106.09])})
    >>> restated(flow, "real").lines["fuel"]
    array([  0., 100., 100.])
    """
    finance = flow.finance
    if rate_basis == finance.rate_basis:
        return flow
    to_nominal = rate_basis == "nominal"
    convert = nominal_rate if to_nominal else real_rate
    index = (1.0 + finance.inflation) ** np.arange(finance.horizon_years + 1, dtype=float)
    reinvestment = finance.reinvestment_rate
    return CashFlow(
        finance=replace(
            finance,
            rate_basis=rate_basis,
            discount_rate=convert(finance.discount_rate, finance.inflation),
            reinvestment_rate=None if reinvestment is None else convert(reinvestment, finance.inflation),
        ),
        lines={
            name: amounts * index if to_nominal else amounts / index for name, amounts in flow.lines.items()
        },
    )


def _require_rates(*rates: float) -> None:
    problems = [problem for rate in rates for problem in rate_problems(rate, "rate or inflation")]
    if problems:
        raise MoneyError(*problems)
