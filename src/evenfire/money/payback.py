"""After how many years an alternative has earned back what it cost more than the reference."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from evenfire.money.cash_flow import CashFlow
from evenfire.money.compare import yearly_saving
from evenfire.money.yearly_costs import discount_factors

FloatArray = NDArray[np.float64]

SAME = "same as the reference"
SAVES_AT_ONCE = "saves from the first day"
CHEAP_BUT_DEAR = "costs less to buy but more to run"
NEVER = "never pays back"
NEVER_DISCOUNTED = "never pays back at the discount rate"
ONLY_BY_RESIDUAL_VALUE = "pays back only by its residual value"
FALLS_BEHIND = "pays back, but a later outlay puts it behind again"

ROUNDING = 1e-12
"""Amounts below this share of all money that moves are rounding."""


@dataclass(frozen=True, slots=True, kw_only=True)
class PaybackResult:
    """Payback against the reference: numbers where they mean something, words where they do not."""

    simple_years: float | None
    discounted_years: float | None
    note: str
    """Empty where both numbers stand without reserve."""


def payback(reference: CashFlow, alternative: CashFlow) -> PaybackResult:
    """Simple and discounted payback of an alternative against the reference.

    For a first impression only: payback ignores everything after it, so choose by net present cost.
    Yearly savings are cumulated from year 0, as they are and discounted; payback is the first year in
    which the sum is no longer negative, linear inside that year.

    Parameters
    ----------
    reference, alternative : CashFlow
        Costs on the same basis, horizon, rate and currency.

    Returns
    -------
    PaybackResult
        Years, or None with a note: ``saves from the first day`` (costs no more to buy and less to
        run), ``costs less to buy but more to run``, ``never pays back`` (within the horizon),
        ``never pays back at the discount rate``, ``same as the reference``. A note beside numbers
        says that only the residual value pays back, or that a later outlay puts it behind again.

    Raises
    ------
    MoneyError
        M108 if the two cash flows are not on the same basis.

    Notes
    -----
    Savings follow price changes, replacements and, in the last year, the residual value. Inside a
    year the discounted saving is spread evenly; the other usual convention, the number of periods of
    an annuity, spreads the undiscounted one and differs in the fourth digit (5.0116 against 5.0111
    years for 100 000 that save 25 000 a year at 8 %).

    References
    ----------
    Fuller and Petersen, NIST Handbook 135, 1996 edition (simple and discounted payback).

    Examples
    --------
    >>> from evenfire.money.terms import Finance
    >>> finance = Finance(
    ...     currency="EUR", price_date="2026-10", horizon_years=15, discount_rate=0.08, rate_basis="nominal"
    ... )
    >>> today = CashFlow(finance=finance, lines={"fuel": np.array([0.0] + 15 * [60_000.0])})
    >>> storage = CashFlow(
    ...     finance=finance,
    ...     lines={
    ...         "investment": np.array([100_000.0] + 15 * [0.0]),
    ...         "fuel": np.array([0.0] + 15 * [35_000.0]),
    ...     },
    ... )
    >>> result = payback(today, storage)
    >>> result.simple_years, result.discounted_years
    (4.0, 5.011568)
    """
    saving = yearly_saving(reference, alternative)
    magnitude = np.abs(reference.yearly_total).sum() + np.abs(alternative.yearly_total).sum()
    noise = ROUNDING * float(magnitude)
    if np.all(np.abs(saving) <= noise):
        return PaybackResult(simple_years=None, discounted_years=None, note=SAME)
    running_saving = float((reference.yearly_running - alternative.yearly_running).sum())
    if saving[0] > noise and running_saving < -noise:
        return PaybackResult(simple_years=None, discounted_years=None, note=CHEAP_BUT_DEAR)
    if np.all(np.cumsum(saving) >= -noise):
        return PaybackResult(simple_years=None, discounted_years=None, note=SAVES_AT_ONCE)

    discounted_saving = saving * discount_factors(reference.finance)
    simple = _years_to_recover(saving, noise)
    discounted = _years_to_recover(discounted_saving, noise)
    if simple is None:
        note = NEVER
    elif discounted is None:
        note = NEVER_DISCOUNTED
    elif np.cumsum(discounted_saving)[-1] < -noise:
        note = FALLS_BEHIND
    elif _years_to_recover(_without_residual_value(reference, alternative), noise) is None:
        note = ONLY_BY_RESIDUAL_VALUE
    else:
        note = ""
    return PaybackResult(simple_years=simple, discounted_years=discounted, note=note)


def _without_residual_value(reference: CashFlow, alternative: CashFlow) -> FloatArray:
    residual = alternative.yearly("residual value") - reference.yearly("residual value")
    return (yearly_saving(reference, alternative) + residual) * discount_factors(reference.finance)


def _years_to_recover(saving: FloatArray, noise: float) -> float | None:
    cumulated = np.cumsum(saving)
    behind = cumulated < -noise
    if not behind.any():
        return 0.0
    outlay = int(np.argmax(behind))
    recovered = np.flatnonzero(cumulated[outlay:] >= -noise)
    if recovered.size == 0:
        return None
    year = outlay + int(recovered[0])
    return year - 1 + float(-cumulated[year - 1] / saving[year])
