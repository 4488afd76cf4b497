"""As many typical days as stated errors ask for."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import asdict, dataclass, field, replace

import numpy as np

from evenfire.demand.series import DemandRecord, FloatArray, TypicalDay, TypicalDays
from evenfire.demand.typical_days import (
    KINDS,
    Days,
    complete_days,
    curve_distance,
    day_kind,
    distances_to_mean,
    nearest_to_mean,
    peak_days,
    typical_day,
    with_errors,
)
from evenfire.errors import Problem, RecordError
from evenfire.units import DAYS_PER_YEAR

CANDIDATES = 8
"""Days nearest to a group's mean that may stand for it."""
MOST_COMBINATIONS = 200_000
GROWTH = 0.25
"""Share of further days added before errors are looked at again; at least one."""


@dataclass(frozen=True, slots=True, kw_only=True)
class DayErrors:
    """What typical days get wrong against all complete days at the same step, averaging left out."""

    energy: float
    """Relative, signed [1]."""
    duration_curve: float
    """Mean absolute difference of the load duration curves over mean demand [1]."""
    peak_steam: float
    """Steam above the stated capacity, relative to that of all days, signed [1]; 0 where there is none."""
    peak_time: float
    """Time above the stated capacity, relative to that of all days, signed [1]; 0 where there is none."""
    cost: float | None
    """What the caller's cost comparison gave, signed [1]; None where it was not asked."""


@dataclass(frozen=True, slots=True, kw_only=True)
class EnoughDays:
    """Typical days, their errors, and whether these are within the tolerances."""

    days: TypicalDays
    errors: DayErrors
    met: bool
    tried: tuple[tuple[int, DayErrors], ...] = field(repr=False)
    """Number of days and errors of every attempt, the last being the result."""


@dataclass(frozen=True, slots=True, kw_only=True)
class DayTolerances:
    """Largest errors allowed, as absolute values [1]."""

    energy: float = 0.01
    duration_curve: float = 0.03
    peak_steam: float = 0.1
    peak_time: float = 0.1
    cost: float = 0.005


@dataclass(frozen=True, slots=True, kw_only=True)
class _Group:
    """Days of one kind that one day stands for."""

    kind: str
    members: tuple[int, ...]
    chosen: int
    """Position of the day that stands for all."""
    spread: float
    """Sum of the distances of all members to it [kg/s steps]."""


def enough_typical_days(
    record: DemandRecord,
    step_s: float,
    capacity_kg_s: float,
    tolerances: DayTolerances,
    most_days: int,
    cost_error: Callable[[TypicalDays], float] | None = None,
    day_costs: FloatArray | None = None,
) -> EnoughDays:
    """Typical days, added until every stated error is within its tolerance.

    Use it where the cost of a plan must be right to a fraction of a percent. It starts with the days of
    :func:`~evenfire.demand.typical_days.typical_days` and splits the group whose days differ most.

    Parameters
    ----------
    record
        The measured record.
    step_s
        Step of the typical days [s].
    capacity_kg_s
        Firm boiler capacity above which peaks are compared [kg/s].
    tolerances
        Largest errors.
    most_days
        Number of days at which to stop.
    cost_error
        Relative cost error of a set of days [1]: the same fixed plant dispatched on them and on the
        whole record. Called only when the other errors are within their tolerances.
    day_costs
        What every complete day costs by itself, shape (plants, days), any unit: the days that stand for
        others are then chosen so that the weighted days cost what all days do.

    Returns
    -------
    EnoughDays
        ``met`` is False when ``most_days`` were not enough.

    Raises
    ------
    RecordError
        R116, R117 as for typical days; R119 for a negative tolerance or no room for a day of each kind.

    Notes
    -----
    Groups hold days of one kind. A group is split between its representative and the day farthest
    from it; each half is then represented by the day nearest to its mean. With ``day_costs`` one of the
    eight nearest may stand for it instead: of all combinations whose steam and costs are within half of
    their tolerances the one nearest to the means is taken, else the one with the least error. The
    distance of two days is the difference of their steam plus that of their sorted flows, all in
    absolute values. With every day a group of its own the errors but the cost error are zero. What
    averaging to ``step_s`` costs is in ``days.peak_error``, not here.

    Examples
    --------
    >>> import datetime as dt
    >>> flow = np.repeat(1.0 + np.arange(28) % 9, 24)
    >>> record = DemandRecord(start=dt.datetime(2026, 2, 2), step_s=3600.0, flow_kg_s=flow, source="")
    >>> found = enough_typical_days(record, 3600.0, 6.0, DayTolerances(), 28)
    >>> found.met, len(found.days.days) < 28, abs(found.errors.duration_curve) < 0.03
    (True, True, True)
    """
    _check(record.source, tolerances, most_days)
    days = complete_days(record, step_s)
    peaks = peak_days(record, days)
    groups = _first_groups(days, peaks)
    tried: list[tuple[int, DayErrors]] = []
    while True:
        if day_costs is not None:
            groups = _matched(groups, peaks, days, day_costs, tolerances)
        chosen = with_errors(record, step_s, *_typical(groups, peaks, days))
        errors = _errors(chosen, days, capacity_kg_s)
        met = _within(errors, tolerances)
        if met and cost_error is not None:
            errors = replace(errors, cost=float(cost_error(chosen)))
            met = abs(errors.cost or 0.0) <= tolerances.cost
        count = len(chosen.days)
        tried.append((count, errors))
        open_groups = sum(len(group.members) > 1 for group in groups)
        room = most_days - count
        if met or open_groups == 0 or room < 1:
            return EnoughDays(days=chosen, errors=errors, met=met, tried=tuple(tried))
        for _ in range(min(room, max(1, int(GROWTH * count)))):
            groups = _split(groups, days)


def _check(source: str, tolerances: DayTolerances, most_days: int) -> None:
    where = f"{source}: number of typical days"
    problems = [
        Problem(
            code="R119",
            where=where,
            found=f"found a tolerance of {value:g} for the error in {name.replace('_', ' ')}",
            allowed="must not be negative",
        )
        for name, value in asdict(tolerances).items()
        if not value >= 0.0
    ]
    least = len(KINDS) + 2
    if most_days < least:
        allowed = f"allow at least {least}: three kinds and two peak days"
        problems.append(Problem(code="R119", where=where, found=f"found {most_days} days", allowed=allowed))
    if problems:
        raise RecordError(*problems)


def _first_groups(days: Days, peaks: list[int]) -> list[_Group]:
    groups = []
    for kind in KINDS:
        members = tuple(
            at for at, date in enumerate(days.dates) if at not in peaks and day_kind(date) == kind
        )
        if members:
            groups.append(_group(kind, members, days))
    return groups


def _group(kind: str, members: tuple[int, ...], days: Days) -> _Group:
    chosen = members[nearest_to_mean(days.flow_kg_s[list(members)])]
    spread = float(_distances(members, chosen, days).sum())
    return _Group(kind=kind, members=members, chosen=chosen, spread=spread)


def _matched(
    groups: list[_Group], peaks: list[int], days: Days, day_costs: FloatArray, tolerances: DayTolerances
) -> list[_Group]:
    """Groups whose chosen days together have the steam and the costs of all days, as nearly as can be.

    Every combination of the days nearest to their groups' means is looked at.
    """
    figures = np.vstack([days.flow_kg_s.sum(axis=1), day_costs])
    whole = figures.sum(axis=1)
    allowed = np.array([tolerances.energy] + [tolerances.cost] * len(day_costs)) / 2.0
    count = max(1, min(CANDIDATES, int(MOST_COMBINATIONS ** (1.0 / max(1, len(groups))))))
    totals = figures[:, peaks].sum(axis=1)[:, None] - whole[:, None]
    away = np.zeros(1)
    candidates = []
    for group in groups:
        flow = days.flow_kg_s[list(group.members)]
        distance = distances_to_mean(flow)
        nearest = np.argsort(distance, kind="stable")[:count]
        candidates.append([group.members[at] for at in nearest])
        own = len(group.members) * figures[:, candidates[-1]]
        totals = (totals[:, :, None] + own[:, None, :]).reshape(len(figures), -1)
        away = (away[:, None] + len(group.members) * distance[nearest][None, :]).ravel()
    scale = np.where(whole == 0.0, 1.0, np.abs(whole))
    excess = (np.abs(totals) / scale[:, None] / np.maximum(allowed, 1e-12)[:, None]).max(axis=0)
    best = int(np.lexsort((away, np.maximum(excess, 1.0)))[0])
    picked = np.unravel_index(best, tuple(len(each) for each in candidates))
    return [
        replace(group, chosen=each[at]) for group, each, at in zip(groups, candidates, picked, strict=True)
    ]


def _distances(members: tuple[int, ...], other: int, days: Days) -> FloatArray:
    away = np.sort(days.flow_kg_s[list(members)], axis=1) - np.sort(days.flow_kg_s[other])
    distances: FloatArray = np.abs(away.sum(axis=1)) + np.abs(away).sum(axis=1)
    return distances


def _split(groups: list[_Group], days: Days) -> list[_Group]:
    """Groups with the widest one halved; the same groups when each holds a single day."""
    open_groups = [group for group in groups if len(group.members) > 1]
    if not open_groups:
        return groups
    widest = max(open_groups, key=lambda group: group.spread)
    to_chosen = _distances(widest.members, widest.chosen, days)
    farthest = max(
        (member for member in widest.members if member != widest.chosen),
        key=lambda member: to_chosen[widest.members.index(member)],
    )
    to_farthest = _distances(widest.members, farthest, days)
    near: list[int] = []
    far: list[int] = []
    for at, member in enumerate(widest.members):
        nearer = member != farthest and (member == widest.chosen or to_chosen[at] <= to_farthest[at])
        (near if nearer else far).append(member)
    halves = [_group(widest.kind, tuple(half), days) for half in (near, far)]
    return [group for group in groups if group is not widest] + halves


def _typical(
    groups: list[_Group], peaks: list[int], days: Days
) -> tuple[tuple[TypicalDay, ...], tuple[int, ...]]:
    """The days that stand for the groups, and which of them stands for each day of the record."""
    weight = DAYS_PER_YEAR / len(days.dates)
    chosen: list[TypicalDay] = []
    assigned = [0] * len(days.dates)
    for kind in KINDS:
        of_kind = sorted((g for g in groups if g.kind == kind), key=lambda group: -len(group.members))
        for number, group in enumerate(of_kind, start=1):
            name = kind if len(of_kind) == 1 else f"{kind} {number}"
            for member in group.members:
                assigned[member] = len(chosen)
            chosen.append(typical_day(name, group.chosen, days, weight * len(group.members)))
    for number, at in enumerate(peaks, start=1):
        name = "peak day" if len(peaks) == 1 else f"peak day {number}"
        assigned[at] = len(chosen)
        chosen.append(typical_day(name, at, days, weight))
    return tuple(chosen), tuple(assigned)


def _errors(chosen: TypicalDays, days: Days, capacity_kg_s: float) -> DayErrors:
    flow = np.array([day.flow_kg_s for day in chosen.days])
    weight = np.array([day.days_per_year for day in chosen.days]) / DAYS_PER_YEAR
    whole = days.flow_kg_s
    mean = float(whole.mean())
    step_weight = np.repeat(weight / flow.shape[1], flow.shape[1])
    return DayErrors(
        energy=float(weight @ flow.mean(axis=1)) / mean - 1.0,
        duration_curve=curve_distance(flow.ravel(), step_weight, whole.ravel()) / mean,
        peak_steam=_relative(_above(flow, capacity_kg_s), weight, _above(whole, capacity_kg_s)),
        peak_time=_relative(_time_above(flow, capacity_kg_s), weight, _time_above(whole, capacity_kg_s)),
        cost=None,
    )


def _above(flow: FloatArray, capacity_kg_s: float) -> FloatArray:
    above: FloatArray = np.maximum(flow - capacity_kg_s, 0.0)
    return above


def _time_above(flow: FloatArray, capacity_kg_s: float) -> FloatArray:
    return (flow > capacity_kg_s).astype(np.float64)


def _relative(of_days: FloatArray, weight: FloatArray, of_all: FloatArray) -> float:
    truth = float(of_all.mean())
    return float(weight @ of_days.mean(axis=1)) / truth - 1.0 if truth > 0.0 else 0.0


def _within(errors: DayErrors, tolerances: DayTolerances) -> bool:
    return (
        abs(errors.energy) <= tolerances.energy
        and errors.duration_curve <= tolerances.duration_curve
        and abs(errors.peak_steam) <= tolerances.peak_steam
        and abs(errors.peak_time) <= tolerances.peak_time
    )
