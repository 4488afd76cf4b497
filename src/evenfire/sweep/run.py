"""A sweep of one case: every point planned, break-evens and stretches, the ranking of inputs."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from itertools import pairwise, product
from pathlib import Path
from typing import Any

from evenfire.case.case import Case
from evenfire.case.load import load_case
from evenfire.sweep.axis import Axis, axes_inputs
from evenfire.sweep.engine import Watch, results
from evenfire.sweep.journal import PLANS_FOLDER, Journal
from evenfire.sweep.ranking import rank_strands, ranked_inputs
from evenfire.sweep.results import (
    PointAlternative,
    SweepBreakEven,
    SweepPoint,
    SweepResult,
    SweepStretch,
    VariedInput,
    package_versions,
)
from evenfire.sweep.strand import Changes, Strand, line_shares, strand_key, strand_record
from evenfire.sweep.study import costs_are_straight, study, swept_case

_TIE = 1e-9

Point = tuple[tuple[float, ...], tuple[PointAlternative, ...]]


@dataclass(frozen=True, slots=True, kw_only=True)
class SweepRequest:
    """What is to be swept."""

    case: Path
    axes: tuple[Axis, ...]
    rank_percent: float | None = None
    """Also rank inputs, each lowered and raised by this share of its value [%]; None to leave it out."""


def sweep(
    request: SweepRequest,
    kept: Path,
    *,
    processes: int = 1,
    cluster: str | None = None,
    watch: Watch | None = None,
) -> tuple[SweepResult, Callable[[], None]]:
    """Plan a case at every point of a grid of its inputs.

    Parameters
    ----------
    request : SweepRequest
    kept : Path
        Folder for what is done so far; an interrupted sweep with the same request goes on from there.
    processes : int
        Processes of this machine.
    cluster : str, optional
        Address of a Dask scheduler to use instead.
    watch : callable, optional
        Called with the number of parts done and of all.

    Returns
    -------
    SweepResult
    callable
        Removes the folder of results so far, to be called when the result is safe.

    Raises
    ------
    SweepError
        S104, S105 for inputs that cannot be varied together, S106 for a cluster that does not answer.
    CaseError
        C123 for an unknown path, and what the case refuses at any value of one input.
    """
    case, notices = swept_case(load_case(request.case))
    request = replace(request, axes=_named(request))
    for each in request.axes:
        for value in each.values:
            load_case(request.case, {each.path: value})
    along, straight = _along(request)
    plans = None if cluster is not None else kept / PLANS_FOLDER
    strands = _strands(request, case, along, straight, plans)
    ranks = rank_strands(request.case, case, request.rank_percent, plans)
    journal = Journal(kept, repr((request, case.input_hashes, package_versions())))
    records = results(
        strand_record,
        (*strands, *ranks),
        strand_key,
        journal,
        processes=processes,
        cluster=cluster,
        watch=watch,
    )
    own = records[: len(strands)]
    points = _points(request, strands, own)
    evens, stretches = _lines(request, case, along, straight, strands, own, points)
    result = SweepResult(
        case_name=case.name,
        currency=case.finance.currency,
        fuel_basis=case.fuel_price_basis,
        inputs=tuple(
            VariedInput(path=found.path, unit=found.unit, stated=found.value, values=each.values)
            for found, each in zip(axes_inputs(request.case, request.axes), request.axes, strict=True)
        ),
        along=along,
        straight=straight,
        points=points,
        break_evens=evens,
        stretches=stretches,
        ranking=ranked_inputs(case, ranks, records[len(strands) :], request.rank_percent),
        asked_gap=case.plan.gap,
        notices=(*case.notices, *notices),
        input_hashes=case.input_hashes,
        versions=package_versions(),
    )
    return result, journal.remove


def _named(request: SweepRequest) -> tuple[Axis, ...]:
    """The axes with paths as the program writes them."""
    inputs = axes_inputs(request.case, request.axes)
    return tuple(replace(each, path=found.path) for each, found in zip(request.axes, inputs, strict=True))


def _along(request: SweepRequest) -> tuple[int, bool]:
    """The input along which costs are straight, the last of several; else the last input."""
    for index in reversed(range(len(request.axes))):
        each = request.axes[index]
        shares = line_shares(tuple(((each.path, value),) for value in each.values))
        low, high = (study(request.case, {each.path: value}).inputs for value in (each.low, each.high))
        if all(
            costs_are_straight(low, high, ((share, study(request.case, {each.path: value}).inputs),))
            for share, value in _middle_first(tuple(zip(shares, each.values, strict=True)))
        ):
            return index, True
    return max(0, len(request.axes) - 1), False


def _middle_first(places: tuple[tuple[float, float], ...]) -> tuple[tuple[float, float], ...]:
    """Places with those farthest from the ends first: there a bent cost is seen at once."""
    return tuple(sorted(places, key=lambda place: abs(place[0] - 0.5)))


def _strands(
    request: SweepRequest, case: Case, along: int, straight: bool, plans: Path | None
) -> tuple[Strand, ...]:
    """One strand per line of points where costs are straight, else one per point."""
    if not request.axes:
        return ()
    others = [each for index, each in enumerate(request.axes) if index != along]
    line = request.axes[along]
    rows: list[tuple[Changes, ...]] = []
    for fixed in product(*(each.values for each in others)):
        about = tuple((each.path, value) for each, value in zip(others, fixed, strict=True))
        row = tuple((*about, (line.path, value)) for value in line.values)
        rows += [row] if straight else [(point,) for point in row]
    return tuple(
        Strand(
            case=request.case,
            points=row,
            along_line=straight,
            gap=case.plan.gap,
            time_limit_s=case.plan.time_limit_s,
            plans_folder=plans,
        )
        for row in rows
    )


def _points(
    request: SweepRequest, strands: tuple[Strand, ...], records: tuple[Any, ...]
) -> tuple[SweepPoint, ...]:
    """Every point in the order of the axes, the last one fastest."""
    found: dict[tuple[float, ...], SweepPoint] = {}
    for strand, record in zip(strands, records, strict=True):
        for changes, rows in zip(strand.points, record["points"], strict=True):
            values = tuple(dict(changes)[each.path] for each in request.axes)
            alternatives = tuple(_alternative(row) for row in rows)
            found[values] = SweepPoint(
                values=values, alternatives=alternatives, winner=winner_of(alternatives)
            )
    return tuple(found[values] for values in product(*(each.values for each in request.axes)) if values)


def _alternative(row: dict[str, Any]) -> PointAlternative:
    return PointAlternative(
        name=row["name"],
        standing=row["standing"],
        boilers=tuple(row.get("boilers", ())),
        **{
            name: row.get(name)
            for name in (
                "net_present_cost",
                "bound",
                "gap",
                "investment",
                "vessel_volume_m3",
                "charged_bar_g",
                "discharged_bar_g",
                "fuel_mwh_per_year",
                "burner_starts_per_year",
                "unmet_steam_t_per_year",
            )
        },
    )


def winner_of(alternatives: tuple[PointAlternative, ...]) -> str | None:
    """The alternative with the least net present cost; of equal ones the first."""
    costs = [x.net_present_cost for x in alternatives if x.net_present_cost is not None]
    if not costs:
        return None
    least = min(costs) + _TIE * abs(min(costs))
    return next(
        x.name for x in alternatives if x.net_present_cost is not None and x.net_present_cost <= least
    )


def _lines(
    request: SweepRequest,
    case: Case,
    along: int,
    straight: bool,
    strands: tuple[Strand, ...],
    records: tuple[Any, ...],
    points: tuple[SweepPoint, ...],
) -> tuple[tuple[SweepBreakEven, ...], tuple[SweepStretch, ...]]:
    """Break-evens and stretches along one input, for every value of the other."""
    if not request.axes:
        return (), ()
    line = request.axes[along]
    evens: list[SweepBreakEven] = []
    stretches: list[SweepStretch] = []
    if not straight:
        rows: dict[tuple[float, ...], list[SweepPoint]] = {}
        for point in points:
            rows.setdefault(_others(point.values, along), []).append(point)
        for at, row in rows.items():
            evens += _sampled_break_evens(row, along, at)
            stretches += _sampled_stretches(row, along, at)
        return tuple(evens), tuple(stretches)
    for strand, record in zip(strands, records, strict=True):
        at = tuple(value for path, value in strand.points[0] if path != line.path)

        def place(share: float) -> float:
            return line.high if share == 1.0 else line.low + (line.high - line.low) * share

        evens += [
            SweepBreakEven(**each | {x: place(each[x]) for x in ("value", "low", "high")}, at=at)
            for each in record["break_evens"]
        ]
        stretches += [
            SweepStretch(
                low=place(each["low"]),
                high=place(each["high"]),
                winner=each["winner"],
                rivals=tuple(each["rivals"]),
                at=at,
            )
            for each in record["stretches"]
        ]
    return tuple(evens), tuple(stretches)


def _others(values: tuple[float, ...], along: int) -> tuple[float, ...]:
    return values[:along] + values[along + 1 :]


def _sampled_break_evens(row: list[SweepPoint], along: int, at: tuple[float, ...]) -> list[SweepBreakEven]:
    """Changes of the lead of any two alternatives between neighbouring points, which alone are known."""
    found = []
    for left, right in pairwise(row):
        for i, first in enumerate(left.alternatives):
            for j in range(i + 1, len(left.alternatives)):
                leads = [_lead(point.alternatives[i], point.alternatives[j]) for point in (left, right)]
                if leads[0] is None or leads[1] is None or leads[0] * leads[1] >= 0.0:
                    continue
                second = left.alternatives[j]
                below, above = (first, second) if leads[0] > 0 else (second, first)
                low, high = left.values[along], right.values[along]
                sure = _surely_first(left, below.name, above.name)
                sure = sure and _surely_first(right, above.name, below.name)
                found.append(
                    SweepBreakEven(
                        cheaper_below=below.name,
                        cheaper_above=above.name,
                        value=low + (high - low) * leads[0] / (leads[0] - leads[1]),
                        low=low,
                        high=high,
                        proven=sure,
                        at=at,
                    )
                )
    return found


def _lead(first: PointAlternative, second: PointAlternative) -> float | None:
    if first.net_present_cost is None or second.net_present_cost is None:
        return None
    return second.net_present_cost - first.net_present_cost


def _surely_first(point: SweepPoint, winner: str, loser: str) -> bool:
    by_name = {x.name: x for x in point.alternatives}
    cost, bound = by_name[winner].net_present_cost, by_name[loser].bound
    return cost is not None and bound is not None and cost < bound


def _sampled_stretches(row: list[SweepPoint], along: int, at: tuple[float, ...]) -> list[SweepStretch]:
    """Neighbouring points with one winner; between points of different winners lies no stretch."""
    found: list[SweepStretch] = []
    for point in row:
        value = point.values[along]
        if point.winner is None:
            continue
        cost = next(x.net_present_cost for x in point.alternatives if x.name == point.winner) or 0.0
        rivals = tuple(
            x.name
            for x in point.alternatives
            if x.name != point.winner and x.net_present_cost is not None and (x.bound or -cost) < cost
        )
        if found and found[-1].winner == point.winner:
            names = {*found[-1].rivals, *rivals}
            found[-1] = replace(
                found[-1],
                high=value,
                rivals=tuple(x.name for x in point.alternatives if x.name in names),
            )
        else:
            found.append(SweepStretch(low=value, high=value, winner=point.winner, rivals=rivals, at=at))
    return found
