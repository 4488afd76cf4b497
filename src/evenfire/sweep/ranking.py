"""Which input matters: each lowered and raised by the same share of its value, the plans made anew."""

from __future__ import annotations

import math
import re
from collections.abc import Iterator
from pathlib import Path
from typing import Any

from evenfire.case.case import Case
from evenfire.case.change import stated_inputs
from evenfire.errors import Problem, SweepError
from evenfire.sweep.results import RankedEnd, RankedInput
from evenfire.sweep.strand import Record, Strand

LEAST_GAP = 5e-3
"""Gap that is enough to rank inputs; planning to the case's own would take many times as long."""

GROUPS: tuple[tuple[str, str], ...] = (
    ("fuel price", r"fuel\.price_per_mwh"),
    ("carbon price", r"fuel\.carbon_price_per_t"),
    ("fuel price escalation", r"fuel\.price_escalation_percent_per_year"),
    ("discount rate", r"money\.discount_rate_percent"),
    ("electricity price", r"money\.electricity_price_per_mwh"),
    ("water price", r"money\.water_price_per_m3"),
    ("price of unmet steam", r"money\.unmet_steam_price_per_t"),
    ("cost of new boilers", r"new_boiler\.sizes.*\.installed_cost"),
    ("cost of vessels", r"vessel\.reference_installed_cost"),
    ("maintenance", r".*maintenance_per_year"),
    ("wear of burner starts", r".*start_wear_cost"),
)
"""What is ranked: inputs of one kind are changed together."""


def rank_strands(path: Path, case: Case, percent: float | None, plans: Path | None) -> tuple[Strand, ...]:
    """The case as it is, then every group of inputs low and high.

    Raises
    ------
    SweepError
        S107 for a share that is not between 0 and 100 %.
    """
    if percent is None:
        return ()
    if not (math.isfinite(percent) and 0.0 < percent < 100.0):
        raise SweepError(
            Problem(
                code="S107",
                where="--rank-percent",
                found=f"found {percent:g} %",
                allowed="give the share by which inputs are lowered and raised, above 0 and below 100 %",
            )
        )
    return tuple(
        Strand(
            case=path,
            points=(changes,),
            along_line=False,
            gap=max(case.plan.gap, LEAST_GAP),
            time_limit_s=case.plan.time_limit_s,
            plans_folder=plans,
        )
        for changes in (
            (),
            *(
                tuple((name, value * factor) for name, value in inputs)
                for _, inputs in _groups(path)
                for factor in _factors(percent)
            ),
        )
    )


def _factors(percent: float) -> tuple[float, float]:
    return 1.0 - percent / 100.0, 1.0 + percent / 100.0


def _groups(path: Path) -> Iterator[tuple[str, tuple[tuple[str, float], ...]]]:
    """Groups of which the case states at least one input that is not zero."""
    stated = stated_inputs(path)
    for name, pattern in GROUPS:
        found = tuple((each, value) for each, value in stated if re.fullmatch(pattern, each) and value)
        if found:
            yield name, found


def ranked_inputs(
    case: Case, strands: tuple[Strand, ...], records: tuple[Any, ...], percent: float | None
) -> tuple[RankedInput, ...]:
    """What the strands of a ranking found, the input that moves the answer most first."""
    if percent is None or not strands:
        return ()
    base, *ends = [record["points"][0] for record in records]
    contender = _winner([row for row in base if row["name"] != case.plan.reference])
    groups = list(_groups(strands[0].case))
    found = []
    for number, (name, inputs) in enumerate(groups):
        low, high = (
            _end(case, ends[2 * number + which], factor, contender)
            for which, factor in enumerate(_factors(percent))
        )
        gaps = [row["gap"] or 0.0 for which in (0, 1) for row in ends[2 * number + which] if "gap" in row]
        swing = abs((high.saving or 0.0) - (low.saving or 0.0))
        found.append(
            RankedInput(
                name=name,
                paths=tuple(path for path, _ in inputs),
                low=low,
                high=high,
                swing=swing,
                gap=max(gaps, default=0.0),
            )
        )
    return tuple(sorted(found, key=lambda each: -each.swing))


def _winner(rows: list[Record]) -> str | None:
    planned = [row for row in rows if row.get("net_present_cost") is not None]
    return min(planned, key=lambda row: float(row["net_present_cost"]))["name"] if planned else None


def _end(case: Case, rows: list[Record], factor: float, contender: str | None) -> RankedEnd:
    costs = {row["name"]: row.get("net_present_cost") for row in rows}
    reference, best = costs.get(case.plan.reference), costs.get(contender or "")
    return RankedEnd(
        factor=factor,
        net_present_cost=tuple(costs.get(name) for name in case.plan.alternatives),
        winner=_winner(rows),
        saving=None if reference is None or best is None else reference - best,
    )
