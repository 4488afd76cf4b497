"""A case with numeric inputs changed, and the plan's inputs made from it; what did not change is kept."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace
from functools import lru_cache
from pathlib import Path

import numpy as np

from evenfire.appraisal.alternatives import RULES
from evenfire.appraisal.case_record import case_record
from evenfire.appraisal.day_choice import chosen_days
from evenfire.appraisal.plan_inputs import plan_inputs
from evenfire.appraisal.vessels import WindowTable, window_tables
from evenfire.case.case import Case, ScheduleRequest, VesselOffer
from evenfire.case.load import load_case
from evenfire.demand.record_format import RecordFormat
from evenfire.demand.series import DemandRecord, StorageNeed, TypicalDays
from evenfire.demand.storage_need import storage_need
from evenfire.errors import Notice, Problem, SweepError
from evenfire.plan.inputs import AlternativeRules, PlanInputs, PlanRates
from evenfire.plant import SteamConditions

_KEPT_RECORDS = 4
_KEPT_TABLES = 16
_ROUNDING = 1e-11
STAGGERED = "staggered starts"


@dataclass(frozen=True, slots=True, kw_only=True)
class Study:
    """One case ready to be planned."""

    case: Case
    record: DemandRecord
    inputs: PlanInputs
    tables: tuple[WindowTable, ...]

    def rules(self, alternative: str) -> AlternativeRules:
        """What an alternative of the case may choose."""
        return RULES[alternative](self.inputs)


def study(path: Path, changes: Mapping[str, float]) -> Study:
    """The case at `path` with numeric inputs changed by path, ready to be planned.

    The typical days are those of the case as it is written, so that points of a sweep differ in what was
    changed alone.

    Parameters
    ----------
    path : Path
        Case folder or file.
    changes : mapping
        New values by dotted path, in the unit of the key.

    Raises
    ------
    CaseError, RecordError
        As for an appraisal of the changed case.
    """
    case, _ = swept_case(load_case(path, changes))
    record, typical, need = _demand(path, case.record_format, case.schedule, case.plan.step_s)
    tables = _tables(case.vessel, case.conditions, _Whole(case))
    return Study(
        case=case, record=record, inputs=plan_inputs(case, record, typical, need, tables), tables=tables
    )


def swept_case(case: Case) -> tuple[Case, tuple[Notice, ...]]:
    """The case without the alternative that needs another demand than the rest, and that it is left out.

    Raises
    ------
    SweepError
        S111 where nothing else is left, or where it is the reference.
    """
    if STAGGERED not in case.plan.alternatives:
        return case, ()
    left = tuple(name for name in case.plan.alternatives if name != STAGGERED)
    if not left or case.plan.reference == STAGGERED:
        raise SweepError(
            Problem(
                code="S111",
                where=f"{case.folder}: plan.reference and plan.alternatives",
                found=f"'{STAGGERED}', which has a demand of its own",
                allowed="name another reference and at least one more alternative",
            )
        )
    notice = Notice(
        code="S190",
        text=f"'{STAGGERED}' has a demand of its own and is left out of sweeps and scenarios",
        severity="warning",
    )
    return replace(case, plan=replace(case.plan, alternatives=left)), (notice,)


class _Whole:
    """Carries a case past the cache's key: vessels depend on the vessel's and the site's figures alone."""

    def __init__(self, case: Case) -> None:
        self.case = case

    def __eq__(self, other: object) -> bool:
        return isinstance(other, _Whole)

    def __hash__(self) -> int:
        return 0


@lru_cache(maxsize=_KEPT_TABLES)
def _tables(
    vessel: VesselOffer | None, conditions: SteamConditions, whole: _Whole
) -> tuple[WindowTable, ...]:
    return window_tables(whole.case)


@lru_cache(maxsize=_KEPT_RECORDS)
def _demand(
    path: Path, form: RecordFormat | None, schedule: ScheduleRequest | None, step_s: float
) -> tuple[DemandRecord, TypicalDays, StorageNeed]:
    written = load_case(path)
    plan = replace(written.plan, step_s=step_s)
    case = replace(written, record_format=form, schedule=schedule, plan=plan)
    record = case_record(case)
    need = storage_need(record.flow_kg_s, record.step_s)
    tables = _tables(case.vessel, case.conditions, _Whole(case))
    return record, chosen_days(case, record, need, tables).days, need


def same_plants(first: PlanInputs, second: PlanInputs) -> bool:
    """Whether the same plans are possible at two points: all that differs is what things cost."""
    return _equal(_without_costs(first), _without_costs(second))


def costs_are_straight(
    low: PlanInputs, high: PlanInputs, between: tuple[tuple[float, PlanInputs], ...]
) -> bool:
    """Whether every cost lies on the straight line between two points, at the shares given.

    Where this holds the least cost is concave between the two points (docs/sweeps.md).

    Parameters
    ----------
    low, high : PlanInputs
        At shares 0 and 1.
    between : tuple of (share, PlanInputs)
    """
    first, last = _costs(low), _costs(high)
    scale = np.maximum(np.maximum(np.abs(first), np.abs(last)), 1e-300)
    return all(
        same_plants(low, inputs)
        and bool((np.abs(_costs(inputs) - (1.0 - share) * first - share * last) <= _ROUNDING * scale).all())
        for share, inputs in ((1.0, high), *between)
    )


def _costs(inputs: PlanInputs) -> np.ndarray[tuple[int], np.dtype[np.float64]]:
    """Every coefficient of the objective."""
    rates = inputs.rates
    return np.array(
        [
            rates.fuel_k_mwh,
            rates.steam_k_t,
            rates.unmet_k_t,
            inputs.vessel_maintenance_k,
            *(cost for x in inputs.boilers for cost in (x.fixed_cost_k, x.start_wear_k)),
            *(cost for x in inputs.vessel_segments for cost in x.fixed_cost_k),
        ]
    )


def _without_costs(inputs: PlanInputs) -> PlanInputs:
    return replace(
        inputs,
        rates=PlanRates(fuel_k_mwh=0.0, steam_k_t=0.0, unmet_k_t=0.0),
        vessel_maintenance_k=0.0,
        boilers=tuple(replace(x, fixed_cost_k=0.0, start_wear_k=0.0) for x in inputs.boilers),
        vessel_segments=tuple(replace(x, fixed_cost_k=(0.0, 0.0)) for x in inputs.vessel_segments),
    )


def _equal(first: PlanInputs, second: PlanInputs) -> bool:
    days = [
        (x.name, x.days_per_year, y.name, y.days_per_year, np.array_equal(x.demand_t_h, y.demand_t_h))
        for x, y in zip(first.days, second.days, strict=False)
    ]
    return (
        len(first.days) == len(second.days)
        and all(a == c and b == d and same for a, b, c, d, same in days)
        and np.array_equal(first.transitions_per_year, second.transitions_per_year)
        and (first.step_h, first.pressures, first.cuts, first.peak_t_h)
        == (second.step_h, second.pressures, second.cuts, second.peak_t_h)
        and first.boilers == second.boilers
        and first.vessel_segments == second.vessel_segments
    )
