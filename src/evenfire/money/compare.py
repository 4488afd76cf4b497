"""What an alternative saves against the reference, year by year."""

from __future__ import annotations

from dataclasses import fields

import numpy as np
from numpy.typing import NDArray

from evenfire.errors import MoneyError, Problem
from evenfire.money.cash_flow import CashFlow

FloatArray = NDArray[np.float64]


def yearly_saving(reference: CashFlow, alternative: CashFlow) -> FloatArray:
    """Cost of the reference less cost of the alternative in each year.

    Parameters
    ----------
    reference, alternative : CashFlow
        Costs under the same finance.

    Returns
    -------
    ndarray
        Saving of years 0 to the horizon [currency], shape (horizon + 1,); negative where the
        alternative costs more.

    Raises
    ------
    MoneyError
        M108 if the two cash flows differ in currency, price date, horizon, rate or basis.
    """
    require_same_finance(reference, alternative)
    return reference.yearly_total - alternative.yearly_total


def require_same_finance(reference: CashFlow, alternative: CashFlow) -> None:
    """Raise M108 for every term in which two cash flows differ, so that their amounts do not compare."""
    problems = [
        Problem(
            code="M108",
            where=f"comparison with the reference, finance {field.name}",
            found=f"found {getattr(alternative.finance, field.name)!r} against"
            f" {getattr(reference.finance, field.name)!r}",
            allowed="must be the same on both sides of a comparison",
        )
        for field in fields(reference.finance)
        if getattr(alternative.finance, field.name) != getattr(reference.finance, field.name)
    ]
    if problems:
        raise MoneyError(*problems)
