"""Which boilers are hot on which day, cold starts between days included."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
Service = tuple[str, ...]
"""Names of the boilers that are hot on a day."""


def cheapest_services(
    day_cost_k: tuple[Mapping[Service, float], ...],
    cold_start_k: Mapping[str, float],
    transitions_per_year: FloatArray,
) -> tuple[float, tuple[Service, ...]]:
    """The choice of hot boilers per day with the least sum of days and cold starts.

    Parameters
    ----------
    day_cost_k : tuple of mappings
        Cost of each day by service [k].
    cold_start_k : mapping
        Present cost of one cold start a year by boiler [k].
    transitions_per_year : array of shape (days, days)
        How often a year day i is followed by day j.

    Returns
    -------
    tuple
        Total [k] and the service of every day.
    """
    if _is_cycle(transitions_per_year):
        return _along_cycle(day_cost_k, cold_start_k, transitions_per_year)
    return _over_all(day_cost_k, cold_start_k, transitions_per_year)


def _warming_k(cold_start_k: Mapping[str, float], before: Service, after: Service) -> float:
    return sum(cold_start_k[name] for name in after if name not in before)


def _is_cycle(transitions: FloatArray) -> bool:
    """Whether every day is followed by the next one alone, the last by the first."""
    days = len(transitions)
    following = np.roll(np.eye(days, dtype=bool), 1, axis=1)
    return days > 2 and not transitions[~following].any()


def _along_cycle(
    day_cost_k: tuple[Mapping[Service, float], ...],
    cold_start_k: Mapping[str, float],
    transitions: FloatArray,
) -> tuple[float, tuple[Service, ...]]:
    """Shortest closed walk through the days, from every first service in turn."""
    days = len(day_cost_k)
    best_total, best = float("inf"), tuple(next(iter(costs)) for costs in day_cost_k)
    for first in day_cost_k[0]:
        reached: dict[Service, tuple[float, tuple[Service, ...]]] = {first: (day_cost_k[0][first], (first,))}
        for day in range(1, days):
            weight = float(transitions[day - 1, day])
            following: dict[Service, tuple[float, tuple[Service, ...]]] = {}
            for service, cost in day_cost_k[day].items():
                paid, way = min(
                    (
                        (total + weight * _warming_k(cold_start_k, before, service), walked)
                        for before, (total, walked) in reached.items()
                    ),
                    key=lambda x: x[0],
                )
                following[service] = (paid + cost, (*way, service))
            reached = following
        for last, (total, way) in reached.items():
            closed = total + float(transitions[-1, 0]) * _warming_k(cold_start_k, last, first)
            if closed < best_total:
                best_total, best = closed, way
    return best_total, best


def _over_all(
    day_cost_k: tuple[Mapping[Service, float], ...],
    cold_start_k: Mapping[str, float],
    transitions: FloatArray,
) -> tuple[float, tuple[Service, ...]]:
    """Depth first, cheapest service of each day first, cut where what is left cannot be better."""
    ranked = [sorted(costs, key=costs.__getitem__) for costs in day_cost_k]
    least = [costs[order[0]] for costs, order in zip(day_cost_k, ranked, strict=True)]
    rest = [sum(least[day:]) for day in range(len(least) + 1)]
    best_total, best = float("inf"), tuple(order[0] for order in ranked)

    def between(earlier: tuple[Service, ...], service: Service) -> float:
        day = len(earlier)
        return sum(
            float(transitions[other, day]) * _warming_k(cold_start_k, hot, service)
            + float(transitions[day, other]) * _warming_k(cold_start_k, service, hot)
            for other, hot in enumerate(earlier)
        )

    def descend(earlier: tuple[Service, ...], paid: float) -> None:
        nonlocal best_total, best
        day = len(earlier)
        if day == len(least):
            if paid < best_total:
                best_total, best = paid, earlier
            return
        for service in ranked[day]:
            cost = paid + day_cost_k[day][service]
            if cost + rest[day + 1] >= best_total:
                break
            cost += between(earlier, service)
            if cost + rest[day + 1] < best_total:
                descend((*earlier, service), cost)

    descend((), 0.0)
    return best_total, best
