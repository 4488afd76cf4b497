"""Which alternative wins, in a sentence or two, and over which fuel prices."""

from __future__ import annotations

from evenfire.appraisal.results import AlternativeResult
from evenfire.appraisal.staggering import NAME
from evenfire.case.case import Case
from evenfire.units import J_PER_MWH, bar_abs_to_pa, pa_to_bar_g


def best_of(results: tuple[AlternativeResult, ...]) -> AlternativeResult:
    """The alternative with the least replayed net present cost of those that pass; of equal ones the first.

    Where none passes its replay, the cheapest of all that are planned.
    """
    planned = [result for result in results if result.headline_cost is not None]
    return min(planned, key=lambda result: (not passes(result), result.headline_cost or 0.0))


def passes(result: AlternativeResult) -> bool:
    """Whether an alternative's replay supplies what its plan promises."""
    return result.replayed is None or result.replayed.passes


def plant_words(result: AlternativeResult) -> str:
    """The plant of an alternative in words."""
    parts = [f"“{boiler.name}”" for boiler in result.boilers]
    if result.vessel is not None:
        vessel = result.vessel
        charged, discharged = (
            pa_to_bar_g(bar_abs_to_pa(p)) for p in (vessel.charged_bar_abs, vessel.discharged_bar_abs)
        )
        parts.append(
            f"a steam accumulator of {vessel.volume_m3:.0f} m³ "
            f"between {charged:.1f} and {discharged:.1f} bar g"
        )
    if not parts:
        return "no boiler at all"
    return " and ".join([", ".join(parts[:-1]), parts[-1]]) if len(parts) > 1 else parts[0]


def fuel_price_range(
    case: Case, results: tuple[AlternativeResult, ...], best: AlternativeResult
) -> tuple[float, float]:
    """Fuel prices per MWh, on the case's basis, between which the planned `best` stays the cheapest plant.

    Every plant as it is planned, so each cost is a line in the price.
    """
    basis = case.fuel.lhv_to_hhv if case.fuel_price_basis == "hhv" else 1.0
    price = case.prices.fuel_per_j_lhv.amount * J_PER_MWH * basis
    if price <= 0:
        return 0.0, float("inf")
    low, high = 0.0, float("inf")
    own = _fuel_cost(best)
    for other in results:
        if other is best or other.headline_cost is None or best.headline_cost is None:
            continue
        slope = (_fuel_cost(other) - own) / price
        lead = other.headline_cost - best.headline_cost
        if lead < 0.0:
            continue
        if slope > 0:
            low = max(low, price - lead / slope)
        elif slope < 0:
            high = min(high, price + lead / -slope)
    return low, high


def _fuel_cost(result: AlternativeResult) -> float:
    """Present cost of the fuel that the headline rests on [currency]."""
    return sum(line.present_cost for line in result.headline_cost_lines if line.name == "fuel")


def verdict_words(case: Case, results: tuple[AlternativeResult, ...], best: AlternativeResult) -> str:
    """The verdict in two sentences."""
    currency = case.finance.currency
    cost = best.headline_cost or 0.0
    twins = [x.name for x in results if x is not best and _same_plant(x, best)]
    same = f" (the same plant as “{twins[0]}”)" if twins else ""
    first = (
        f"“{best.name}”{same}, with {plant_words(best)}, has the least net present cost: "
        f"{cost / 1000:,.0f} thousand {currency} over {case.finance.horizon_years} years"
    )
    reference = next(x for x in results if x.name == case.plan.reference)
    if reference is best:
        first += "; no planned change earns its cost."
    else:
        saving = (reference.headline_cost or 0.0) - cost
        first += f", {saving / 1000:,.0f} thousand less than “{reference.name}”."
    others = tuple(x for x in results if x.name not in twins)
    price_words = _range_words(case, *fuel_price_range(case, others, best))
    rival = _nearest_rival(results, best, twins)
    if not passes(best):
        first += (
            " In its replay it leaves more steam unmet than is tolerated: do not rely on it as it stands."
        )
    if rival is None or rival.headline_cost is None:
        return first
    lead = rival.headline_cost - cost
    second = f"Next is “{rival.name}”, {lead / 1000:,.0f} thousand dearer"
    if not passes(rival):
        second = f"Next is “{rival.name}”, which its replay refuses"
    if rival.replayed is None and rival.bound is not None and rival.bound < cost:
        second += ", though the proven bounds do not exclude that it is cheaper"
    return f"{first} {second}; {price_words}, with every plant as it stands here."


def _range_words(case: Case, low: float, high: float) -> str:
    unit = f"{case.finance.currency}/MWh ({'gross' if case.fuel_price_basis == 'hhv' else 'net'})"
    if high == float("inf"):
        if low <= 0:
            return "the first place holds at any fuel price"
        return f"the first place holds at fuel prices above {low:,.0f} {unit}"
    if low <= 0:
        return f"the first place holds at fuel prices below {high:,.0f} {unit}"
    return f"the first place holds at fuel prices from {low:,.0f} to {high:,.0f} {unit}"


def _same_plant(first: AlternativeResult, second: AlternativeResult) -> bool:
    return (
        first.planned
        and second.planned
        and [x.name for x in first.boilers] == [x.name for x in second.boilers]
        and first.vessel == second.vessel
        and NAME not in (first.name, second.name)
    )


def _nearest_rival(
    results: tuple[AlternativeResult, ...], best: AlternativeResult, twins: list[str]
) -> AlternativeResult | None:
    rivals = [x for x in results if x is not best and x.name not in twins and x.headline_cost is not None]
    return min(rivals, key=lambda x: (not passes(x), x.headline_cost or 0.0)) if rivals else None
