"""Discount factors of equal, growing and single amounts, in the names of the life-cycle-cost guides.

Year 0 is the investment; every amount is paid at the end of its year.
"""

from __future__ import annotations

import math

from evenfire.errors import MoneyError, Problem
from evenfire.money.checks import rate_problems, year_problems


def single_present_value(rate: float, year: int) -> float:
    """Present value of one unit of money paid at the end of a year (SPV).

    For a replacement or a residual value; for equal yearly amounts use `uniform_present_value`.
    Formula: ``(1 + rate) ** -year``.

    Parameters
    ----------
    rate : float
        Discount rate per year [1].
    year : int
        Year of the payment, 0 for the investment [a].

    Returns
    -------
    float
        Present value [1].

    Raises
    ------
    MoneyError
        M101 for a rate of -1 (-100 %) or less, M102 for a year below 0.

    References
    ----------
    Fuller and Petersen, Life-Cycle Costing Manual for the Federal Energy Management Program, NIST
    Handbook 135, 1996 edition, discount formulas.

    Examples
    --------
    >>> single_present_value(0.03, 10)
    0.744094
    """
    _require(*rate_problems(rate, "discount rate", year), *year_problems(year, 0, "year"))
    return (1.0 + rate) ** -year


def uniform_present_value(rate: float, years: int) -> float:
    """Present value of one unit of money at the end of each of several years (UPV).

    For a yearly cost whose price does not change on the basis of the rate. Formula:
    ``(1 - (1 + rate) ** -years) / rate``, and `years` at rate zero.

    Parameters
    ----------
    rate : float
        Discount rate per year [1].
    years : int
        Number of yearly amounts, the first at the end of year 1 [a].

    Returns
    -------
    float
        Present value [a].

    Raises
    ------
    MoneyError
        M101 for a rate of -1 (-100 %) or less, M102 for fewer than 1 year.

    References
    ----------
    NIST Handbook 135, 1996 edition, discount formulas.

    Examples
    --------
    >>> uniform_present_value(0.08, 15)
    8.559479
    """
    return escalating_present_value(rate, 0.0, years)


def escalating_present_value(rate: float, escalation: float, years: int) -> float:
    """Present value of a yearly amount of one unit at today's price that grows every year (UPV*).

    The first amount, at the end of year 1, has grown once. Formula, with
    ``q = (1 + escalation) / (1 + rate)``: ``q (1 - q ** years) / (1 - q)``, which is the guides'
    ``(1 + e) / (d - e) (1 - q ** years)``, and `years` where both rates are equal.

    Parameters
    ----------
    rate, escalation : float
        Discount rate and growth per year, both real or both nominal [1].
    years : int
        Number of yearly amounts [a].

    Returns
    -------
    float
        Present value [a].

    Raises
    ------
    MoneyError
        M101 for a rate or an escalation of -1 (-100 %) or less, M102 for fewer than 1 year.

    Notes
    -----
    Computed through ``expm1`` and ``log1p``, so nearly equal rates lose no digits.

    References
    ----------
    NIST Handbook 135, 1996 edition, discount formulas (modified uniform present value).

    Examples
    --------
    >>> escalating_present_value(0.08, 0.03, 15)
    10.482592
    >>> escalating_present_value(0.05, 0.05, 10)
    10.0
    """
    _require(
        *rate_problems(rate, "discount rate", years),
        *rate_problems(escalation, "escalation", years),
        *year_problems(years, 1, "years"),
    )
    log_ratio = math.log1p(escalation) - math.log1p(rate)
    if log_ratio == 0.0:
        return float(years)
    return math.exp(log_ratio) * math.expm1(years * log_ratio) / math.expm1(log_ratio)


def capital_recovery_factor(rate: float, years: int) -> float:
    """Equal yearly amount that pays back one unit of money spent today, with interest.

    Turns a present cost into an annuity. Formula: ``rate / (1 - (1 + rate) ** -years)``.

    Parameters
    ----------
    rate : float
        Discount rate per year [1].
    years : int
        Number of yearly amounts [a].

    Returns
    -------
    float
        Yearly amount per unit of present cost [1/a].

    Raises
    ------
    MoneyError
        M101 for a rate of -1 (-100 %) or less, M102 for fewer than 1 year.

    References
    ----------
    NIST Handbook 135, 1996 edition, discount formulas (uniform capital recovery).

    Examples
    --------
    >>> capital_recovery_factor(0.08, 15)
    0.116830
    """
    return 1.0 / uniform_present_value(rate, years)


def _require(*problems: Problem) -> None:
    if problems:
        raise MoneyError(*problems)
