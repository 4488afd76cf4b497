"""The risk section as the scenarios see it, and what cannot be meant in it."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator

from evenfire.case.case import RiskRequest, UncertainQuantity
from evenfire.case.draft import Draft
from evenfire.case.schema_risk import LEADING, WALKING, Risk, Uncertain
from evenfire.errors import Problem


def risk_request(risk: Risk) -> RiskRequest:
    """The section with shares in place of percent."""
    return RiskRequest(
        scenarios=risk.scenarios,
        seed=risk.seed,
        uncertain=tuple(
            UncertainQuantity(
                name=each.quantity,
                distribution=each.distribution,
                low_deviation=each.low_percent / 100.0,
                likely_deviation=each.likely_percent / 100.0,
                high_deviation=each.high_percent / 100.0,
                yearly_volatility=each.yearly_volatility_percent / 100.0,
                correlation=each.correlation_with_fuel_price,
            )
            for each in risk.uncertain
        ),
    )


def risk_problems(draft: Draft) -> Iterator[Problem]:
    """What cannot be meant in a risk section: C151."""
    if draft.risk is None:
        return
    rows = draft.risk.uncertain
    for name, times in Counter(each.quantity for each in rows).items():
        if times > 1:
            yield _problem(draft, name, "quantity", f"stated {times} times", "state each quantity once")
    led = any(each.quantity == LEADING for each in rows)
    for each in rows:
        for key, found, allowed in _row_problems(each, led=led):
            yield _problem(draft, each.quantity, key, found, allowed)


def _row_problems(each: Uncertain, *, led: bool) -> Iterator[tuple[str, str, str]]:
    low, likely, high = each.low_percent, each.likely_percent, each.high_percent
    if low >= high:
        yield "low_percent", f"found {low:g} %", f"must be below high_percent, {high:g} %"
    elif each.distribution == "triangular" and not low <= likely <= high:
        yield "likely_percent", f"found {likely:g} %", f"must lie between {low:g} and {high:g} %"
    if each.distribution != "triangular" and likely != 0.0:
        yield "likely_percent", f"found {likely:g} %", "belongs to distribution = 'triangular' alone"
    if each.yearly_volatility_percent and each.quantity not in WALKING:
        yield (
            "yearly_volatility_percent",
            f"found {each.yearly_volatility_percent:g} %",
            f"belongs to {', '.join(WALKING)} alone",
        )
    if each.correlation_with_fuel_price and (each.quantity == LEADING or not led):
        yield (
            "correlation_with_fuel_price",
            f"found {each.correlation_with_fuel_price:g}",
            "needs another quantity 'fuel price' in the same section",
        )


def _problem(draft: Draft, name: str, key: str, found: str, allowed: str) -> Problem:
    return Problem(
        code="C151", where=f"{draft.file}: risk.uncertain '{name}', {key}", found=found, allowed=allowed
    )
