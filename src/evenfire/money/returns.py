"""What an alternative earns against the reference: net saving, ratio and rates of return."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from evenfire.money.cash_flow import CashFlow
from evenfire.money.compare import yearly_saving
from evenfire.money.payback import CHEAP_BUT_DEAR, NEVER, ROUNDING, SAME, SAVES_AT_ONCE
from evenfire.money.rate_of_return import internal_rates_of_return, modified_rate_of_return
from evenfire.money.yearly_costs import discount_factors

FloatArray = NDArray[np.float64]

NO_RATE = "no rate of return: the net saving has one sign at every rate"
SEVERAL_RATES = "several rates of return: compare net present costs"
LOAN_RATE = "the rate is that of a loan: good while it lies below the discount rate"
TOUCHES_ZERO = "the net saving only touches zero at this rate and has one sign around it"
NO_EXTRA_INVESTMENT = "no extra investment over the life"
NO_RUNNING_SAVING = "no saving in running costs"


@dataclass(frozen=True, slots=True, kw_only=True)
class InternalRates:
    """Internal rates of return, all of them, and what they mean."""

    rates: tuple[float, ...]
    """Per year, on the basis of the cash flows, rising [1]."""
    note: str
    """Empty where there is one rate and it means what readers expect."""

    @property
    def rate(self) -> float | None:
        """The internal rate of return [1]; None unless there is one and it needs no reserve."""
        return self.rates[0] if not self.note else None


@dataclass(frozen=True, slots=True, kw_only=True)
class Returns:
    """Measures of an alternative against the reference."""

    net_saving: float
    """Present cost of the reference less that of the alternative [currency]."""
    internal: InternalRates
    modified_rate: float | None
    """Modified internal rate of return [1]; None without an outlay or without a saving."""
    savings_to_investment: float | None
    """Present saving in running costs over present extra investment [1]; None with a note."""
    adjusted_rate: float | None
    """Adjusted internal rate of return [1]; None with a note."""
    ratio_note: str
    """Why there is no ratio or adjusted rate; empty where both stand."""


def returns(reference: CashFlow, alternative: CashFlow) -> Returns:
    """Net saving, savings-to-investment ratio and rates of return against the reference.

    For a report's table beside the net present cost, which alone ranks alternatives that exclude
    each other. Extra investment is everything of `CashFlow.yearly_capital`: purchase, replacements,
    less residual value and grants. With running saving S and extra investment I of each year,
    ``ratio = sum(S v**n) / sum(I v**n)`` at the discount rate and ``adjusted rate =
    (sum(S (1 + reinvestment) ** (N - n)) / sum(I v**n)) ** (1 / N) - 1``, which is
    ``(1 + d) ratio ** (1 / N) - 1`` where savings are reinvested at the discount rate d.

    Parameters
    ----------
    reference, alternative : CashFlow
        Costs under the same finance.

    Returns
    -------
    Returns
        Numbers where they mean something, notes where they do not.

    Raises
    ------
    MoneyError
        M108 if the two cash flows are not on the same basis.

    References
    ----------
    10 CFR 436.20 (net savings), 436.21 (savings-to-investment ratio) and 436.22 (adjusted internal
    rate of return); Fuller and Petersen, NIST Handbook 135, 1996 edition.

    Examples
    --------
    >>> from evenfire.money.terms import Finance
    >>> finance = Finance(
    ...     currency="EUR", price_date="2026-10", horizon_years=15, discount_rate=0.03, rate_basis="real"
    ... )
    >>> today = CashFlow(finance=finance, lines={"fuel": np.array([0.0] + 15 * [60_000.0])})
    >>> storage = CashFlow(
    ...     finance=finance,
    ...     lines={
    ...         "investment": np.array([100_000.0] + 15 * [0.0]),
    ...         "fuel": np.array([0.0] + 15 * [35_000.0]),
    ...     },
    ... )
    >>> result = returns(today, storage)
    >>> result.savings_to_investment, result.adjusted_rate
    (2.984484, 0.107886)
    """
    saving = yearly_saving(reference, alternative)
    finance = reference.finance
    reinvestment = finance.discount_rate if finance.reinvestment_rate is None else finance.reinvestment_rate
    noise = ROUNDING * float(np.abs(reference.yearly_total).sum() + np.abs(alternative.yearly_total).sum())
    saving = np.where(np.abs(saving) <= noise, 0.0, saving)
    factors = discount_factors(finance)
    running_saving = reference.yearly_running - alternative.yearly_running
    investment = float(factors @ (alternative.yearly_capital - reference.yearly_capital))
    ratio, adjusted, ratio_note = None, None, ""
    if investment <= noise:
        ratio_note = NO_EXTRA_INVESTMENT
    else:
        ratio = float(factors @ running_saving) / investment
        years_to_end = finance.horizon_years - np.arange(finance.horizon_years + 1)
        end_value = float(running_saving @ (1.0 + reinvestment) ** years_to_end)
        if end_value > 0.0:
            adjusted = (end_value / investment) ** (1.0 / finance.horizon_years) - 1.0
        else:
            ratio_note = NO_RUNNING_SAVING
    return Returns(
        net_saving=float(factors @ saving),
        internal=_internal_rates(saving),
        modified_rate=modified_rate_of_return(saving, finance.discount_rate, reinvestment),
        savings_to_investment=ratio,
        adjusted_rate=adjusted,
        ratio_note=ratio_note,
    )


def _internal_rates(saving: FloatArray) -> InternalRates:
    moving = saving[saving != 0.0]
    rates = internal_rates_of_return(saving)
    if moving.size == 0:
        note = SAME
    elif np.all(moving > 0.0):
        note = SAVES_AT_ONCE
    elif np.all(moving < 0.0):
        note = NEVER
    elif not rates:
        note = NO_RATE
    elif len(rates) > 1:
        note = SEVERAL_RATES
    elif moving[0] * moving[-1] > 0.0:
        note = TOUCHES_ZERO
    elif moving[0] > 0.0:
        note = f"{CHEAP_BUT_DEAR}: {LOAN_RATE}"
    else:
        note = ""
    return InternalRates(rates=rates, note=note)
