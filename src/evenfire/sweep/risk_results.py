"""What random scenarios found, in trade units: the library's result and the report's only input."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from evenfire.errors import Notice

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class AlternativeRisk:
    """One alternative over all scenarios."""

    name: str
    base_cost: float
    """Net present cost at the case's own values [currency]."""
    gap: float
    """Proven gap of the plan there [1]."""
    probability_cheapest: float
    """Share of scenarios [1]; equal costs share a scenario."""
    probability_error: float
    """Standard error of that share from the number of scenarios [1]."""
    expected_cost: float
    p10_cost: float
    """Not exceeded in one of ten scenarios [currency]."""
    p50_cost: float
    p90_cost: float
    expected_regret: float
    """Mean of what it costs more than the cheapest alternative of each scenario [currency]."""
    largest_regret: float


@dataclass(frozen=True, slots=True, kw_only=True)
class RiskInput:
    """One uncertain quantity as stated and as drawn."""

    name: str
    distribution: str
    low_percent: float
    likely_percent: float
    high_percent: float
    yearly_volatility_percent: float
    correlation_with_fuel_price: float
    drawn_p10_percent: float
    drawn_p50_percent: float
    drawn_p90_percent: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Replanned:
    """The first scenarios with every alternative planned anew."""

    scenarios: int
    alternatives: tuple[AlternativeRisk, ...]
    saved_by_replanning: tuple[float, ...]
    """Mean over those scenarios of cost as planned less cost planned anew, per alternative [currency]."""
    largest_gap: float


@dataclass(frozen=True, slots=True, kw_only=True)
class RiskResult:
    """Everything the scenarios of one case found."""

    case_name: str
    currency: str
    scenarios: int
    seed: int
    inputs: tuple[RiskInput, ...]
    alternatives: tuple[AlternativeRisk, ...]
    likeliest_cheapest: str
    least_expected_regret: str
    least_largest_regret: str
    replanned: Replanned | None
    """None where it was not asked for."""
    draws: FloatArray
    """Deviations in percent, shape (scenarios, inputs)."""
    costs: FloatArray
    """Net present cost of every alternative as planned, shape (scenarios, alternatives) [currency]."""
    notices: tuple[Notice, ...]
    input_hashes: tuple[tuple[str, str], ...]
    versions: tuple[tuple[str, str], ...]
