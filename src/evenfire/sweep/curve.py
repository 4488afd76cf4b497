"""Least cost of an alternative as a function of one price: what plans prove above, what bounds prove below.

While only prices change, every plan costs a straight line in the price, and the least cost of an
alternative is the least of all its plans' lines: concave and piecewise linear. So the lines of known
plans lie above it everywhere, and the chords between proven bounds lie below it.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class PlanLine:
    """A plan's cost at both ends of a range of prices; straight in between."""

    plan: int
    """Which plan it is, in the order in which the plans were found."""
    cost_low_k: float
    cost_high_k: float

    def at(self, share: float) -> float:
        """Cost at a share of the way from the low to the high end [k]."""
        return (1.0 - share) * self.cost_low_k + share * self.cost_high_k


@dataclass(frozen=True, slots=True, kw_only=True)
class ProvenPoint:
    """A lower bound of an alternative's least cost at one price."""

    share: float
    """Place of the price in its range, from 0 to 1."""
    bound_k: float


@dataclass(frozen=True, slots=True, kw_only=True)
class CostCurve:
    """What is known of an alternative's least cost over a range of prices, scaled to shares from 0 to 1.

    Notes
    -----
    Concavity makes the bound valid: at ``t`` between ``r`` and ``s`` the least cost is at least the chord
    between its values there, hence at least the chord between their bounds. Outside the outermost proven
    points nothing is proven.
    """

    alternative: str
    lines: tuple[PlanLine, ...]
    """Empty where no plan is known."""
    proven: tuple[ProvenPoint, ...]

    def line_at(self, share: float) -> PlanLine:
        """The cheapest known plan at a price; of equal ones the first found."""
        return min(self.lines, key=lambda line: (line.at(share), line.plan))

    def cost_k(self, share: float) -> float:
        """Cost of the cheapest known plan [k], infinite where there is none."""
        return min((line.at(share) for line in self.lines), default=float("inf"))

    def bound_k(self, share: float) -> float:
        """Proven lower bound of the least cost [k], minus infinity outside the proven points."""
        places, bounds = self._hull()
        if not len(places) or share < places[0] or share > places[-1]:
            return -float("inf")
        return float(np.interp(share, places, bounds))

    def gap(self, share: float) -> float:
        """(cost - bound) / cost [1]."""
        cost, bound = self.cost_k(share), self.bound_k(share)
        if not np.isfinite(cost) or not np.isfinite(bound):
            return float("inf")
        return max(0.0, cost - bound) / abs(cost) if cost else 0.0

    def kinks(self) -> tuple[float, ...]:
        """Shares inside the range at which the cheapest known plan changes, rising."""
        share: float = 0.0
        found: list[float] = []
        if not self.lines:
            return ()
        at = min(self.lines, key=lambda line: (line.cost_low_k, line.cost_high_k))
        while True:
            meeting = [
                (place, line.cost_high_k - line.cost_low_k, line)
                for line in self.lines
                if (place := _crossing(at, line)) is not None and share < place < 1.0
            ]
            if not meeting:
                return tuple(found)
            share, _, at = min(meeting, key=lambda x: (x[0], x[1]))
            found.append(share)

    def corners(self) -> tuple[float, ...]:
        """Every share at which cost or bound may bend, both ends included, rising."""
        return tuple(sorted({0.0, *self.kinks(), *(float(x) for x in self._hull()[0]), 1.0}))

    def _hull(self) -> tuple[FloatArray, FloatArray]:
        """Least concave function above the proven points: what concavity makes of them together."""
        best: dict[float, float] = {}
        for point in self.proven:
            best[point.share] = max(point.bound_k, best.get(point.share, -np.inf))
        hull: list[tuple[float, float]] = []
        for place, bound in sorted(best.items()):
            while len(hull) > 1 and _bends_up(hull[-2], hull[-1], (place, bound)):
                hull.pop()
            hull.append((place, bound))
        return np.array([x for x, _ in hull]), np.array([y for _, y in hull])


def _crossing(first: PlanLine, second: PlanLine) -> float | None:
    """Where `second` becomes the cheaper of two lines, None where it never does."""
    lead_low = second.cost_low_k - first.cost_low_k
    lead_high = second.cost_high_k - first.cost_high_k
    if lead_high >= lead_low:
        return None
    return lead_low / (lead_low - lead_high)


def _bends_up(left: tuple[float, float], middle: tuple[float, float], right: tuple[float, float]) -> bool:
    slope_before = (middle[1] - left[1]) * (right[0] - middle[0])
    slope_after = (right[1] - middle[1]) * (middle[0] - left[0])
    return slope_after >= slope_before
