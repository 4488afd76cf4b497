"""Rates of return of a row of yearly amounts: every internal rate, and the modified one."""

from __future__ import annotations

import numpy as np
from numpy.polynomial.polynomial import polyder, polyval
from numpy.typing import NDArray
from scipy.optimize import brentq

FloatArray = NDArray[np.float64]

ROUNDING = 1e-12
"""Amounts below this share of the largest one are rounding."""
EVALUATION_ERROR = 4.0 * float(np.finfo(np.float64).eps)
"""Relative rounding of one step of a polynomial's evaluation."""


def internal_rates_of_return(amounts: FloatArray) -> tuple[float, ...]:
    """Every rate above -100 % at which the present value of yearly amounts is zero.

    A row of amounts whose sign changes once has one such rate; with more changes there may be none
    or several, and then none of them says whether the investment is good: compare present values.
    Formula: all r with ``sum(amount[n] * (1 + r) ** -n) == 0``.

    Parameters
    ----------
    amounts : ndarray
        Income positive, outlay negative, of year 0 and on [currency], shape (years + 1,).

    Returns
    -------
    tuple of float
        Rates per year in rising order [1]; empty if there is none.

    Notes
    -----
    The present value is a polynomial in 1/(1 + r) for rates from zero up, and in 1 + r below zero, so
    that the unknown lies between 0 and 1. Between neighbouring zeros of its derivative, found in the
    same way, it rises or falls steadily and holds at most one zero: none is missed, none is counted
    twice. A rate at which the present value only touches zero is found as well.

    References
    ----------
    Descartes' rule of signs bounds the number of rates; the worked example of four rates is a problem
    in Ross, Westerfield and Jordan, Fundamentals of Corporate Finance.

    Examples
    --------
    >>> internal_rates_of_return(np.array([-1.6, 10.0, -10.0]))
    (0.25, 4.0)
    >>> internal_rates_of_return(np.array([-252.0, 1431.0, -3035.0, 2850.0, -1000.0]))
    (0.25, 0.3333, 0.4286, 0.6667)
    """
    significant = np.flatnonzero(np.abs(amounts) > ROUNDING * np.max(np.abs(amounts), initial=0.0))
    if significant.size == 0:
        return ()
    coefficients = np.asarray(amounts[significant[0] : significant[-1] + 1], dtype=float)
    coefficients = coefficients / np.max(np.abs(coefficients))
    growths = [growth for growth in _zeros_between_0_and_1(coefficients[::-1]) if growth < 1.0]
    discounts = _zeros_between_0_and_1(coefficients)
    return tuple(
        [growth - 1.0 for growth in growths] + [1.0 / discount - 1.0 for discount in reversed(discounts)]
    )


def modified_rate_of_return(
    amounts: FloatArray, finance_rate: float, reinvestment_rate: float
) -> float | None:
    """Rate at which the outlays' present value grows to the incomes' value at the end.

    Unlike the internal rate it is unique, and says what the money that comes back earns. Formula:
    ``(future value of incomes / present value of outlays) ** (1 / years) - 1``.

    Parameters
    ----------
    amounts : ndarray
        Income positive, outlay negative, of year 0 and on [currency], shape (years + 1,).
    finance_rate : float
        Rate at which outlays are discounted, per year [1].
    reinvestment_rate : float
        Rate at which incomes grow until the end, per year [1].

    Returns
    -------
    float or None
        Rate per year [1]; None without an outlay or without an income.

    Examples
    --------
    >>> modified_rate_of_return(
    ...     np.array([-120_000.0, 39_000.0, 30_000.0, 21_000.0, 37_000.0, 46_000.0]), 0.10, 0.12
    ... )
    0.126094
    """
    years = np.arange(amounts.size)
    end = amounts.size - 1
    incomes = float(np.maximum(amounts, 0.0) @ (1.0 + reinvestment_rate) ** (end - years))
    outlays = float(-np.minimum(amounts, 0.0) @ (1.0 + finance_rate) ** -years.astype(float))
    if incomes == 0.0 or outlays == 0.0:
        return None
    return float((incomes / outlays) ** (1.0 / end) - 1.0)


def _zeros_between_0_and_1(coefficients: FloatArray) -> list[float]:
    """Zeros in ]0, 1] of the polynomial with rising powers, in rising order."""
    if coefficients.size < 2:
        return []
    slope = polyder(coefficients)
    largest = np.max(np.abs(slope))
    turns = _zeros_between_0_and_1(slope / largest) if largest > 0.0 else []
    points = [0.0, *(turn for turn in turns if turn < 1.0), 1.0]
    signs = [_sign(coefficients, point) for point in points]
    zeros: list[float] = []
    for left, right, left_sign, right_sign in zip(points, points[1:], signs, signs[1:], strict=False):
        if left_sign * right_sign < 0:
            zeros.append(
                float(
                    brentq(
                        lambda x: polyval(x, coefficients), left, right, xtol=1e-300, rtol=1e-15, maxiter=500
                    )
                )
            )
        if right_sign == 0:
            zeros.append(right)
    return zeros


def _sign(coefficients: FloatArray, point: float) -> int:
    """Sign of a polynomial at a point; zero where rounding hides it."""
    value = float(polyval(point, coefficients))
    doubt = EVALUATION_ERROR * coefficients.size * float(polyval(point, np.abs(coefficients)))
    return 0 if abs(value) <= doubt else (1 if value > 0.0 else -1)
