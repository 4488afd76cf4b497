"""The exact answer in a price: solves placed where they are needed until the whole range is proven."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

from evenfire.plan.outcome import Plan, Stop
from evenfire.sweep.curve import CostCurve, PlanLine, ProvenPoint


@dataclass(frozen=True, slots=True, kw_only=True)
class Solved:
    """What one search found at one price."""

    plan: Plan | None
    bound_k: float | None
    stop: Stop


_FUTILE = 1.5
"""Where searches stop short of the gap, another is made only where the curve misses it by this much more."""

Solve = Callable[[str, float, tuple[Plan, ...]], Solved]
"""Plans an alternative at a share of the price range, starting from known plans."""
LineOf = Callable[[Plan], tuple[float, float]]
"""A plan's cost at the low and the high end of the range [k]."""
Allows = Callable[[str, Plan], bool]
"""Whether an alternative may have a plan."""


@dataclass(frozen=True, slots=True, kw_only=True)
class PriceAnswer:
    """Curves of every alternative, and the plans that their lines name."""

    curves: tuple[CostCurve, ...]
    plans: tuple[Plan, ...]
    infeasible: frozenset[str]
    """Alternatives proven to have no plan at any price."""
    solves: int


class PriceRecursion:
    """Finds each alternative's least cost over a range of prices by a few solves; construct, then ``run``.

    Eisner and Severance's recursion, carried through with gaps: both ends are solved first; then, while the
    cheapest known plan costs more than ``gap`` above the chords of proven bounds anywhere, the place where
    it does so most is solved. The excess is convex between two bends of the cheapest plans' cost, so it is
    largest at a bend: the crossing of two plans' lines, as in the recursion without gaps.

    Parameters
    ----------
    alternatives : sequence of str
        In the order in which they are planned; later ones start from the plans of earlier ones.
    solve, line_of, allows : callables
    gap : float
        Relative gap to be proven over the whole range [1].
    most_solves : int
        Per alternative; what is then left open stays visible as gap.

    References
    ----------
    Eisner and Severance, Journal of the ACM 23 (1976) 619-635; Gusfield, Sensitivity Analysis for
    Combinatorial Optimization, 1980.
    """

    def __init__(
        self,
        alternatives: Sequence[str],
        solve: Solve,
        line_of: LineOf,
        allows: Allows,
        *,
        gap: float,
        most_solves: int,
    ) -> None:
        self._solve = solve
        self._line_of = line_of
        self._allows = allows
        self._gap = gap
        self._most_solves = most_solves
        self._plans: list[Plan] = []
        self._costs: list[tuple[float, float]] = []
        self._proven: dict[str, list[ProvenPoint]] = {name: [] for name in alternatives}
        self._solved: dict[str, set[float]] = {name: set() for name in alternatives}
        self._missed = dict.fromkeys(alternatives, 0.0)
        self._infeasible: set[str] = set()

    def run(self, shares: Sequence[float] = ()) -> PriceAnswer:
        """Solve until every alternative is proven over the range, and at `shares` in any case.

        Parameters
        ----------
        shares : sequence of float
            Places whose gap counts besides the bends, such as those that are to be shown.
        """
        for share in (0.0, 1.0):
            for name in self._proven:
                self._solve_at(name, share)
        for name in self._proven:
            self._refine(name, tuple(shares))
        return PriceAnswer(
            curves=tuple(self._curve(name) for name in self._proven),
            plans=tuple(self._plans),
            infeasible=frozenset(self._infeasible),
            solves=sum(len(places) for places in self._solved.values()),
        )

    def _refine(self, name: str, shares: tuple[float, ...]) -> None:
        while name not in self._infeasible and len(self._solved[name]) < self._most_solves:
            curve = self._curve(name)
            wanted = {*shares, *curve.kinks()} - self._solved[name]
            worst = max(wanted, key=lambda share: (curve.gap(share), share), default=None)
            if worst is None or curve.gap(worst) <= max(self._gap, _FUTILE * self._missed[name]):
                return
            self._solve_at(name, worst)

    def _solve_at(self, name: str, share: float) -> None:
        self._solved[name].add(share)
        if name in self._infeasible:
            return
        found = self._solve(name, share, self._known(name, share))
        if found.stop is Stop.INFEASIBLE:
            self._infeasible.add(name)
            return
        if found.bound_k is not None:
            self._proven[name].append(ProvenPoint(share=share, bound_k=found.bound_k))
        if found.plan is not None and not any(found.plan is plan for plan in self._plans):
            self._plans.append(found.plan)
            self._costs.append(self._line_of(found.plan))
        if found.stop is not Stop.GAP_REACHED:
            self._missed[name] = max(self._missed[name], self._curve(name).gap(share))

    def _known(self, name: str, share: float) -> tuple[Plan, ...]:
        """The cheapest known plan that an alternative may have, if there is one."""
        curve = self._curve(name)
        return (self._plans[curve.line_at(share).plan],) if curve.lines else ()

    def _curve(self, name: str) -> CostCurve:
        return CostCurve(
            alternative=name,
            lines=tuple(
                PlanLine(plan=number, cost_low_k=low, cost_high_k=high)
                for number, (low, high) in enumerate(self._costs)
                if name not in self._infeasible and self._allows(name, self._plans[number])
            ),
            proven=tuple(self._proven[name]),
        )
