"""Random scenarios: present cost factors of every uncertain cost, seeded."""

from __future__ import annotations

import hashlib
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtr, ndtri

from evenfire.case.case import Case, RiskRequest, UncertainQuantity
from evenfire.money.yearly_costs import RUNNING_LINES, discount_factors, running_unit_costs

FloatArray = NDArray[np.float64]

GROWTH = "steam demand growth"
LEADER = "fuel price"
LINES_OF = {
    "fuel price": ("fuel",),
    "carbon price": ("carbon",),
    "electricity price": ("electricity",),
    "water price": ("water",),
    "price of unmet steam": ("unmet steam",),
    "maintenance": ("maintenance",),
}
"""Cost lines that each uncertain quantity scales."""
GROWING_LINES = ("fuel", "carbon", "electricity", "water", "unmet steam")
PURCHASES = {"cost of new boilers": "boilers", "cost of vessels": "vessel"}
SCALED_LINES = (*RUNNING_LINES, *PURCHASES.values())
"""What a scenario scales: the present cost of every one of these."""

_LOG_TENTH = float(ndtri(0.9))


@dataclass(frozen=True, slots=True, kw_only=True)
class Scenarios:
    """Scenarios drawn for a case."""

    draws: tuple[FloatArray, ...]
    """Deviation per quantity of the request [1], each of shape (scenarios,)."""
    factors: FloatArray
    """Present cost of each of ``SCALED_LINES`` over its present cost in the case [1], (scenarios, lines)."""


def scenarios(case: Case, request: RiskRequest) -> Scenarios:
    """Draw scenarios, and what each does to the present cost of every cost line.

    A quantity has random numbers of its own, by its name: stating another, or more scenarios, leaves the
    numbers of the first ones as they are.

    Parameters
    ----------
    case : Case
    request : RiskRequest
        The case's, or one with another number of scenarios or seed.

    Notes
    -----
    With discount factor d and stated unit cost u in year n, a line's factor is sum(d u m) / sum(d u), where
    the multiplier m is (1 + deviation) times the walk, times (1 + growth)**n for lines that follow demand.
    The walk is exp(v sum(z) - v**2 n / 2), whose expectation is one in every year. A line that costs nothing
    keeps the factor one.
    """
    n = request.scenarios
    leading = next((each for each in request.uncertain if each.name == LEADER), None)
    lead_score = None if leading is None else _normals(request.seed, LEADER, "level", n)
    draws = tuple(_draw(request.seed, each, lead_score, n) for each in request.uncertain)
    by_name = {each.name: (each, drawn) for each, drawn in zip(request.uncertain, draws, strict=True)}
    growth = by_name[GROWTH][1] if GROWTH in by_name else None
    discounted = {
        line: discount_factors(case.finance) * cost
        for line, cost in running_unit_costs(case.prices, case.finance).items()
    }
    factors = np.ones((n, len(SCALED_LINES)))
    years = np.arange(case.finance.horizon_years + 1, dtype=float)
    for column, line in enumerate(RUNNING_LINES):
        grown = growth if line in GROWING_LINES else None
        walker = next((each for each, _ in by_name.values() if line in LINES_OF.get(each.name, ())), None)
        walk = None
        if walker is not None and walker.yearly_volatility:
            walk = _walk(request.seed, walker, n, len(years))
        whole = float(discounted[line].sum())
        if (grown is not None or walk is not None) and whole:
            multiplier = np.ones((n, len(years)))
            if grown is not None:
                multiplier *= (1.0 + grown[:, None]) ** years
            if walk is not None:
                multiplier *= walk
            factors[:, column] = multiplier @ discounted[line] / whole
        if walker is not None:
            factors[:, column] *= 1.0 + by_name[walker.name][1]
    for name, line in PURCHASES.items():
        if name in by_name:
            factors[:, SCALED_LINES.index(line)] = 1.0 + by_name[name][1]
    return Scenarios(draws=draws, factors=factors)


def _draw(seed: int, each: UncertainQuantity, lead_score: FloatArray | None, n: int) -> FloatArray:
    score = _normals(seed, each.name, "level", n)
    if lead_score is not None and each.correlation:
        score = each.correlation * lead_score + np.sqrt(1.0 - each.correlation**2) * score
    return deviation(each, score)


def deviation(each: UncertainQuantity, score: FloatArray) -> FloatArray:
    """The deviation [1] whose distribution a standard normal score is mapped to."""
    low, high = each.low_deviation, each.high_deviation
    if each.distribution == "lognormal":
        middle = 0.5 * (np.log1p(low) + np.log1p(high))
        spread = (np.log1p(high) - np.log1p(low)) / (2.0 * _LOG_TENTH)
        return np.asarray(np.expm1(middle + spread * score))
    share = ndtr(score)
    if each.distribution == "uniform":
        return np.asarray(low + (high - low) * share)
    rise = (each.likely_deviation - low) / (high - low)
    below = low + np.sqrt(share * (high - low) * (each.likely_deviation - low))
    above = high - np.sqrt((1.0 - share) * (high - low) * (high - each.likely_deviation))
    return np.asarray(np.where(share < rise, below, above))


def _walk(seed: int, each: UncertainQuantity, n: int, years: int) -> FloatArray:
    """Multiplier of a price in every year, shape (scenarios, years); one in year 0."""
    v = each.yearly_volatility
    steps = _normals(seed, each.name, "walk", n * (years - 1)).reshape(n, years - 1)
    walk = np.ones((n, years))
    walk[:, 1:] = np.exp(v * np.cumsum(steps, axis=1) - 0.5 * v**2 * np.arange(1, years))
    return walk


def _normals(seed: int, name: str, purpose: str, count: int) -> FloatArray:
    words = hashlib.sha256(f"{name}, {purpose}".encode()).digest()[:8]
    source = np.random.SeedSequence([seed, int.from_bytes(words, "big")])
    return np.random.Generator(np.random.PCG64(source)).standard_normal(count)
