"""Alternatives whose plans are a list of lines, so that every least cost is known by enumeration."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from evenfire.plan.outcome import Plan, Stop
from evenfire.sweep.price_answer import PriceRecursion, Solved


@dataclass(frozen=True, slots=True, kw_only=True)
class Catalogue:
    """(cost at the low end, cost at the high end) of every plan by alternative, and how well it is solved."""

    lines: dict[str, list[tuple[float, float]]]
    gap: float = 0.0

    def least(self, name: str, share: float) -> float:
        """The least cost, from every line."""
        return min((1 - share) * a + share * b for a, b in self.lines[name])

    def recursion(self, *, most_solves: int = 400) -> PriceRecursion:
        """The recursion over this catalogue; solves stop at the dearest plan that the gap allows."""
        plans = {
            (name, number): Plan(boilers=(name, str(number)), segment=None, volume_m3=0.0, dispatch=())
            for name, lines in self.lines.items()
            for number in range(len(lines))
        }

        def solve(name: str, share: float, known: tuple[Plan, ...]) -> Solved:
            costs = np.array([(1 - share) * a + share * b for a, b in self.lines[name]])
            bound = costs.min() * (1 - self.gap / 2)
            good = np.flatnonzero(costs - bound <= self.gap * costs + 1e-12 * costs)
            chosen = good[np.argmax(costs[good])]
            return Solved(plan=plans[name, int(chosen)], bound_k=float(bound), stop=Stop.GAP_REACHED)

        return PriceRecursion(
            tuple(self.lines),
            solve,
            lambda plan: self.lines[plan.boilers[0]][int(plan.boilers[1])],
            lambda name, plan: plan.boilers[0] == name,
            gap=max(self.gap, 1e-12),
            most_solves=most_solves,
        )
