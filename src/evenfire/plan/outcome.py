"""What the plan of one alternative is, and how far it is proven."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from enum import Enum

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
BoolArray = NDArray[np.bool_]


class Stop(Enum):
    """Why the search stopped."""

    GAP_REACHED = "asked gap reached"
    TIME_LIMIT = "time limit"
    INTERRUPTED = "interrupted"
    INFEASIBLE = "proven infeasible"
    SOLVER_LIMIT = "solver limit"
    SOLVER_ERROR = "solver error"


class Has(Enum):
    """What the search has."""

    PLAN = "a plan"
    NOTHING = "no plan"


@dataclass(frozen=True, slots=True, kw_only=True)
class Progress:
    """How far the search has come [k]."""

    alternative: str
    cost_k: float | None
    bound_k: float | None
    seconds: float
    stage: str

    @property
    def gap(self) -> float | None:
        """(cost - bound) / cost, or None while either is unknown [1]."""
        if self.cost_k is None or self.bound_k is None or self.cost_k <= 0:
            return None
        return max(0.0, (self.cost_k - self.bound_k) / self.cost_k)


Watcher = Callable[[Progress], None]


@dataclass(frozen=True, slots=True, kw_only=True)
class DayDispatch:
    """Dispatch of one typical day; arrays over (boilers, steps) or (steps,)."""

    in_service: BoolArray = field(repr=False)
    """Boiler hot on this day, shape (boilers,)."""
    mode: NDArray[np.int64] = field(repr=False)
    """Index into the boiler's modes, -1 when cold, shape (boilers, steps)."""
    output_t_h: FloatArray = field(repr=False)
    start: BoolArray = field(repr=False)
    """Burner start from not firing to firing, shape (boilers, steps)."""
    stored_t: FloatArray = field(repr=False)
    """At the start of each step."""
    charge_t_h: FloatArray = field(repr=False)
    discharge_t_h: FloatArray = field(repr=False)
    unmet_t_h: FloatArray = field(repr=False)
    vented_t_h: FloatArray = field(repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Plan:
    """A feasible point of the model: sizes, window and dispatch."""

    boilers: tuple[str, ...]
    segment: int | None
    """Index of the vessel segment chosen."""
    volume_m3: float
    dispatch: tuple[DayDispatch, ...]
    """One per typical day, boilers in the order of ``boilers``."""


@dataclass(frozen=True, slots=True, kw_only=True)
class PlanOutcome:
    """The search's result for one alternative."""

    alternative: str
    stop: Stop
    has: Has
    cost_k: float | None
    bound_k: float | None
    plan: Plan | None
    largest_violation: float
    """Largest violation of any constraint by the plan, evaluated outside the solver, in model units."""
    solver: str
    """Which method gave the plan and the bound, in words."""
    shortlist: tuple[Plan, ...] = field(default=(), repr=False)
    """Other plants near the optimum, larger vessels among them, cheapest first."""
    seconds: float = field(compare=False)

    @property
    def gap(self) -> float | None:
        """(cost - bound) / cost [1], None where either is unknown."""
        if self.cost_k is None or self.bound_k is None:
            return None
        if self.cost_k <= 0:
            return 0.0 if self.cost_k <= self.bound_k else float("inf")
        return max(0.0, (self.cost_k - self.bound_k) / self.cost_k)
