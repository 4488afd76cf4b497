"""Where two alternatives cost the same, and which is the cheapest on every stretch of a price."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import combinations, pairwise

from evenfire.sweep.curve import CostCurve

_TIE = 1e-9
"""Costs closer than this, relative to their size, are one cost."""


@dataclass(frozen=True, slots=True, kw_only=True)
class BreakEven:
    """A price at which two alternatives cost the same."""

    cheaper_below: str
    cheaper_above: str
    value: float
    """Where the cheapest known plans cost the same, as a share of the range."""
    low: float
    high: float
    """The true break-even lies in between; where it is not `proven`, one exists at most in between."""
    proven: bool
    """Whether on either side of the interval one alternative is cheaper beyond doubt."""


@dataclass(frozen=True, slots=True, kw_only=True)
class PriceStretch:
    """A stretch of prices with one cheapest alternative."""

    low: float
    high: float
    winner: str
    rivals: tuple[str, ...]
    """Alternatives that the proven bounds do not exclude as the cheapest somewhere on the stretch."""


def break_evens(curves: tuple[CostCurve, ...]) -> tuple[BreakEven, ...]:
    """Every break-even between any two alternatives, in the order of the alternatives and then of price.

    Parameters
    ----------
    curves : tuple of CostCurve
        Alternatives without a plan have none.

    Notes
    -----
    With least costs f and g, known costs F, G above and bounds f0, g0 below, the first is cheaper beyond
    doubt where F < g0. All four are piecewise linear, so the ends of such stretches are found exactly.
    Where the costs of two alternatives are the same over a stretch there is no break-even on it.
    """
    planned = [curve for curve in curves if curve.lines]
    return tuple(found for first, second in combinations(planned, 2) for found in _between(first, second))


def _between(first: CostCurve, second: CostCurve) -> list[BreakEven]:
    places = sorted({*first.corners(), *second.corners()})
    lead = [second.cost_k(x) - first.cost_k(x) for x in places]
    tie = _TIE * max(abs(first.cost_k(x)) for x in places)
    found = []
    for value, sign in _changes(places, lead, tie):
        below, above = (first, second) if sign > 0 else (second, first)
        low, left_sure = _doubt_ends(below, above, places, value, rising=False)
        high, right_sure = _doubt_ends(above, below, places, value, rising=True)
        found.append(
            BreakEven(
                cheaper_below=below.alternative,
                cheaper_above=above.alternative,
                value=value,
                low=low,
                high=high,
                proven=left_sure and right_sure,
            )
        )
    return found


def _changes(places: list[float], lead: list[float], tie: float) -> list[tuple[float, int]]:
    """Where the lead changes its sign, and the sign it had before; ties take the sign before them."""
    changes, sign, last = [], 0, 0
    for i, value in enumerate(lead):
        now = 0 if abs(value) <= tie else (1 if value > 0 else -1)
        if now and sign and now != sign:
            # From the last place of the old sign, through a tie if there is one, to the first of the new.
            x0, x1, y0, y1 = places[i - 1], places[i], lead[i - 1], value
            place = (places[last + 1] + x0) / 2 if i - 1 > last else x0 + (x1 - x0) * y0 / (y0 - y1)
            changes.append((place, sign))
        if now:
            sign, last = now, i
    return changes


def _doubt_ends(
    winner: CostCurve, loser: CostCurve, places: list[float], start: float, *, rising: bool
) -> tuple[float, bool]:
    """The nearest price beyond `start` where `winner` is cheaper beyond doubt, and whether there is one."""
    onward = [x for x in places if x > start] if rising else [x for x in reversed(places) if x < start]
    margin = [loser.bound_k(x) - winner.cost_k(x) for x in (start, *onward)]
    for (x0, x1), (y0, y1) in zip(pairwise((start, *onward)), pairwise(margin), strict=True):
        if y1 > 0:
            return (x0 + (x1 - x0) * -y0 / (y1 - y0) if y0 < 0 else x0), True
    return (1.0 if rising else 0.0), False


def stretches(curves: tuple[CostCurve, ...]) -> tuple[PriceStretch, ...]:
    """The cheapest alternative on every stretch of the range; of equal ones the first.

    Parameters
    ----------
    curves : tuple of CostCurve
        At least one with a plan.
    """
    planned = [curve for curve in curves if curve.lines]
    places = {0.0, 1.0}
    for curve in planned:
        places |= set(curve.corners())
    for first, second in combinations(planned, 2):
        places |= set(_meetings(first, second, sorted(places)))
    ordered = sorted(places)
    found: list[PriceStretch] = []
    for low, high in pairwise(ordered):
        if high - low <= _TIE:
            continue
        winner = _cheapest(planned, (low + high) / 2)
        rivals = _rivals(planned, winner, low, high)
        if found and found[-1].winner == winner.alternative:
            earlier = found.pop()
            names = {*earlier.rivals, *rivals}
            found.append(
                PriceStretch(
                    low=earlier.low,
                    high=high,
                    winner=earlier.winner,
                    rivals=tuple(x.alternative for x in planned if x.alternative in names),
                )
            )
        else:
            found.append(PriceStretch(low=low, high=high, winner=winner.alternative, rivals=rivals))
    return tuple(found)


def _meetings(first: CostCurve, second: CostCurve, places: list[float]) -> list[float]:
    lead = [second.cost_k(x) - first.cost_k(x) for x in places]
    return [
        x0 + (x1 - x0) * y0 / (y0 - y1)
        for (x0, x1), (y0, y1) in zip(pairwise(places), pairwise(lead), strict=True)
        if y0 * y1 < 0
    ]


def _cheapest(planned: list[CostCurve], share: float) -> CostCurve:
    least = min(curve.cost_k(share) for curve in planned)
    return next(curve for curve in planned if curve.cost_k(share) <= least + _TIE * abs(least))


def _rivals(planned: list[CostCurve], winner: CostCurve, low: float, high: float) -> tuple[str, ...]:
    """The margin is not concave, but linear between bends: both ends of a stretch without bends decide."""
    return tuple(
        curve.alternative
        for curve in planned
        if curve is not winner and any(curve.bound_k(x) < winner.cost_k(x) for x in (low, high))
    )
