"""Refusal of rates, prices, investments and quantities that make no sense, all problems at once."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import fields

from evenfire.errors import MoneyError, Problem
from evenfire.money.terms import Finance, Grant, Investment, Price, Prices, Tax, YearlyQuantities

MOST_DECADES = 100.0
"""Powers of ten by which a rate may change money over its years; far beyond any real one."""
SUM_TOLERANCE = 1e-6
"""How far shares typed as percentages may miss a sum of one."""


def require_sound(
    finance: Finance,
    *,
    prices: Prices | None = None,
    investments: tuple[Investment, ...] = (),
    quantities: YearlyQuantities | None = None,
) -> None:
    """Raise one `MoneyError` with every problem of the given terms; return silently if there is none.

    Raises
    ------
    MoneyError
        M101 rate, M102 horizon, M103 price, M104 investment, M105 share, M106 basis name,
        M107 quantity.
    """
    problems = [*_finance_problems(finance)]
    if prices is not None:
        for field in fields(prices):
            problems += _price_problems(getattr(prices, field.name), f"price {field.name}", finance)
    for investment in investments:
        problems += _investment_problems(investment, finance)
    if quantities is not None:
        problems += _quantity_problems(quantities)
    if problems:
        raise MoneyError(*problems)


def rate_problems(rate: float, where: str, years: float = 1.0) -> Iterator[Problem]:
    """The problem of a yearly rate of -100 % or less, not a number, or absurd over so many years."""
    if not (math.isfinite(rate) and rate > -1.0):
        yield Problem(
            code="M101",
            where=where,
            found=f"found {rate:g} per year",
            allowed="must be a finite number above -1 (-100 % per year)",
        )
    elif abs(years) * abs(math.log10(1.0 + rate)) > MOST_DECADES:
        yield Problem(
            code="M101",
            where=where,
            found=f"found {rate:g} per year over {years:g} a",
            allowed=f"must not change money by more than a factor of 1e{MOST_DECADES:g} over its years",
        )


def year_problems(years: int, fewest: int, where: str) -> Iterator[Problem]:
    """The problem of a number of years below the fewest that make sense."""
    if not (years >= fewest and years == int(years)):
        yield Problem(
            code="M102",
            where=where,
            found=f"found {years} a",
            allowed=f"must be a whole number of years, at least {fewest}",
        )


def _finance_problems(finance: Finance) -> Iterator[Problem]:
    yield from year_problems(finance.horizon_years, 1, "finance, horizon_years")
    years = finance.horizon_years
    yield from rate_problems(finance.discount_rate, "finance, discount_rate", years)
    yield from rate_problems(finance.inflation, "finance, inflation", years)
    if finance.reinvestment_rate is not None:
        yield from rate_problems(finance.reinvestment_rate, "finance, reinvestment_rate", years)
    if finance.rate_basis not in ("real", "nominal"):
        yield Problem(
            code="M106",
            where="finance, rate_basis",
            found=f"found '{finance.rate_basis}'",
            allowed="must be 'real' or 'nominal'",
        )
    if not (math.isfinite(finance.contingency) and finance.contingency >= 0.0):
        yield Problem(
            code="M105",
            where="finance, contingency",
            found=f"found {finance.contingency:g}",
            allowed="must be a share of at least 0",
        )
    if finance.tax is not None:
        yield from _tax_problems(finance.tax)


def _tax_problems(tax: Tax) -> Iterator[Problem]:
    if not 0.0 <= tax.rate < 1.0:
        yield Problem(
            code="M105",
            where="finance, tax rate",
            found=f"found {tax.rate:g}",
            allowed="must be a share of at least 0 and below 1",
        )
    shares = tax.depreciation_shares
    if not (shares and min(shares) >= 0.0 and abs(sum(shares) - 1.0) <= SUM_TOLERANCE):
        yield Problem(
            code="M105",
            where="finance, tax depreciation_shares",
            found=f"found {len(shares)} shares with the sum {sum(shares):g}",
            allowed="must be shares of at least 0 that sum to 1",
        )


def _price_problems(price: Price, where: str, finance: Finance) -> Iterator[Problem]:
    yield from rate_problems(price.escalation, f"{where}, escalation", finance.horizon_years)
    if not math.isfinite(price.amount):
        yield Problem(
            code="M103", where=where, found=f"found {price.amount:g}", allowed="must be a finite number"
        )
    previous = 0
    for year, amount in price.path:
        if year <= previous or not math.isfinite(amount):
            yield Problem(
                code="M103",
                where=f"{where}, path",
                found=f"found a price of {amount:g} in year {year} after year {previous}",
                allowed="must be finite prices in rising years, the first after year 0",
            )
        previous = year


def _investment_problems(investment: Investment, finance: Finance) -> Iterator[Problem]:
    where = f"investment '{investment.name}'"
    yield from year_problems(investment.life_years, 1, f"{where}, life_years")
    if investment.escalation is not None:
        yield from rate_problems(investment.escalation, f"{where}, escalation", finance.horizon_years)
    for name in ("amount", "replacement_amount", "residual_value"):
        amount = getattr(investment, name)
        if amount is not None and not (math.isfinite(amount) and amount >= 0.0):
            yield Problem(
                code="M104",
                where=f"{where}, {name}",
                found=f"found {amount:g} {finance.currency}",
                allowed=f"must be at least 0 {finance.currency}",
            )
    shares = [share for _, share in investment.payments]
    if not (shares and min(shares) >= 0.0 and abs(sum(shares) - 1.0) <= SUM_TOLERANCE):
        yield Problem(
            code="M105",
            where=f"{where}, payments",
            found=f"found shares with the sum {sum(shares):g}",
            allowed="must be shares of at least 0 that sum to 1",
        )
    if not 0 <= investment.year < finance.horizon_years:
        yield Problem(
            code="M104",
            where=f"{where}, year",
            found=f"found year {investment.year}",
            allowed=f"must lie between year 0 and year {finance.horizon_years - 1}",
        )
    for delay, _ in investment.payments:
        yield from _delay_problems(delay, investment, finance, f"{where}, payments")
    if investment.grant is not None:
        yield from _grant_problems(investment.grant, investment, finance, where)


def _grant_problems(grant: Grant, investment: Investment, finance: Finance, where: str) -> Iterator[Problem]:
    if not 0.0 <= grant.share <= 1.0:
        yield Problem(
            code="M105",
            where=f"{where}, grant share",
            found=f"found {grant.share:g}",
            allowed="must be a share between 0 and 1",
        )
    yield from _delay_problems(grant.years_after_purchase, investment, finance, f"{where}, grant")


def _delay_problems(delay: int, investment: Investment, finance: Finance, where: str) -> Iterator[Problem]:
    if not (delay >= 0 and investment.year + delay <= finance.horizon_years):
        yield Problem(
            code="M104",
            where=where,
            found=f"found a payment {delay} a after the purchase in year {investment.year}",
            allowed=f"must be paid between the purchase and year {finance.horizon_years}",
        )


def _quantity_problems(quantities: YearlyQuantities) -> Iterator[Problem]:
    for field in fields(quantities):
        amount = getattr(quantities, field.name)
        if not (math.isfinite(amount) and amount >= 0.0):
            yield Problem(
                code="M107",
                where=f"yearly quantity {field.name}",
                found=f"found {amount:g}",
                allowed="must be a finite number of at least 0",
            )
