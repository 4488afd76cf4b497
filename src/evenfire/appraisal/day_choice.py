"""How many typical days: as many as make operation cost what it costs over every day of the record."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from evenfire.appraisal.plan_inputs import kg_s_to_t_h_array, plan_days, plan_inputs, transitions_per_year
from evenfire.appraisal.vessels import WindowTable
from evenfire.case.case import Case
from evenfire.demand.enough_days import DayTolerances, EnoughDays, enough_typical_days
from evenfire.demand.series import DemandRecord, StorageNeed, TypicalDays
from evenfire.demand.typical_days import complete_days, typical_days
from evenfire.errors import Notice
from evenfire.plan.day import NO_STORE, Store
from evenfire.plan.inputs import PlanDay, PlanInputs, WindowCurves, window_curves
from evenfire.plan.operation import Operation, Plant
from evenfire.units import DAYS_PER_YEAR, SECONDS_PER_HOUR

MOST_DAYS = 12
"""Planning time grows with the days; beyond this the error is stated instead."""
_QUANTUM_STAGE = 1
"""Grid of the recursion: halving its quantum moves the errors of both example cases by 0.02 % at most."""


def chosen_days(
    case: Case, record: DemandRecord, need: StorageNeed, tables: tuple[WindowTable, ...]
) -> EnoughDays:
    """Typical days, added until the same plants cost the same on them as on every day of the record.

    Two plants are operated: today's boilers as they are, and, where the case offers a vessel, today's
    boilers with the cheapest vessel that covers the record's peaks (the largest where none does). The error
    is the one larger in size, of operating cost alone: fixed costs would only make it look smaller.

    Parameters
    ----------
    case : Case
    record : DemandRecord
    need : StorageNeed
        Of the whole record.
    tables : tuple of WindowTable
        Vessels on offer.

    Returns
    -------
    EnoughDays
        ``errors.cost`` is always stated; ``met`` is False where ``MOST_DAYS`` are not enough.

    Notes
    -----
    Days are operated by the recursion that also bounds plans, each cyclic by itself, with the boilers hot
    that are cheapest and cold starts between days as the record orders them. What averaging to the plan's
    step costs is not in this error.
    """
    inputs = plan_inputs(case, record, typical_days(record, case.plan.step_s), need, tables)
    whole = every_day(inputs, record)
    plants = compared_plants(inputs)
    operation = Operation(whole, joined=False)
    truth, day_costs = [], []
    for plant in plants:
        total, services = operation.bound(plant, _QUANTUM_STAGE)
        truth.append(total)
        day_costs.append(operation.day_bounds_k(plant, services, _QUANTUM_STAGE))

    def cost_error(days: TypicalDays) -> float:
        few = replace(inputs, days=plan_days(days), transitions_per_year=transitions_per_year(days))
        errors = [
            (operating_cost_k(few, plant) - true) / abs(true) if true else 0.0
            for plant, true in zip(plants, truth, strict=True)
        ]
        return max(errors, key=abs)

    found = enough_typical_days(
        record,
        case.plan.step_s,
        sum(offer.spec.rated_kg_s for offer in case.boilers if offer.existing),
        # How deep and how many the peaks are shows in what is not met, so cost alone decides on them.
        DayTolerances(peak_steam=np.inf, peak_time=np.inf, cost=case.plan.typical_days_error),
        MOST_DAYS,
        cost_error,
        np.array(day_costs),
    )
    if found.errors.cost is None:
        found = replace(found, errors=replace(found.errors, cost=cost_error(found.days)))
    return found


def day_notices(case: Case, found: EnoughDays) -> tuple[Notice, ...]:
    """A warning where the typical days miss the asked error in cost."""
    cost, asked = found.errors.cost, case.plan.typical_days_error
    if cost is None or abs(cost) <= asked:
        return ()
    text = (
        f"{len(found.days.days)} typical days miss the operating cost of all days of the record by "
        f"{100.0 * cost:+.2f} %; asked were {100.0 * asked:g} %. Costs closer than that are not told apart"
    )
    return (Notice(code="N203", text=text, severity="warning"),)


def operating_cost_k(inputs: PlanInputs, plant: Plant) -> float:
    """Present cost of operating a plant over all days of the inputs [k]."""
    return Operation(inputs, joined=False).bound(plant, _QUANTUM_STAGE)[0]


def compared_plants(inputs: PlanInputs) -> tuple[Plant, ...]:
    """Today's boilers without and, where there is one on offer, with a vessel."""
    boilers = tuple(boiler.name for boiler in inputs.boilers if boiler.existing)
    as_is = Plant(boilers=boilers, pressure=0, store=NO_STORE)
    offers = [
        (curves, *_vessel_m3(inputs, boilers, curves))
        for curves in window_curves(inputs.vessel_segments).values()
        if all(inputs.boiler(name).pressure_allowed[curves.pressure] for name in boilers)
    ]
    if not offers:
        return (as_is,)
    curves, volume, _ = min(offers, key=lambda x: (not x[2], x[0].at(x[0].fixed_cost_k, x[1])))
    store = Store(
        capacity_t=curves.at(curves.capacity_t, volume),
        release_t_h=curves.at(curves.release_t_h, volume),
        loss_t_h=curves.at(curves.loss_t_h, volume),
        credit_k_t=inputs.rates.fuel_k_mwh * curves.charging_credit_mwh_t,
    )
    return (as_is, Plant(boilers=boilers, pressure=curves.pressure, store=store))


def _vessel_m3(inputs: PlanInputs, boilers: tuple[str, ...], curves: WindowCurves) -> tuple[float, bool]:
    """Smallest volume that covers the record's peaks, or the largest, and whether it covers them."""
    firm = sum(inputs.boiler(name).rated_t_h for name in boilers)
    stored = max((cut.energy_t - cut.duration_h * firm for cut in inputs.cuts), default=0.0)
    needs = ((curves.capacity_t, stored), (curves.release_t_h, inputs.peak_t_h - firm))
    volume = max(
        float(curves.volume_m3[0]),
        *(float(np.interp(need, values, curves.volume_m3)) for values, need in needs),
    )
    return volume, all(float(values[-1]) >= need for values, need in needs)


def every_day(inputs: PlanInputs, record: DemandRecord) -> PlanInputs:
    """The inputs with every complete day of the record, each followed by the next, the last by the first."""
    days = complete_days(record, inputs.step_h * SECONDS_PER_HOUR)
    weight = DAYS_PER_YEAR / len(days.dates)
    return replace(
        inputs,
        days=tuple(
            PlanDay(name=date.isoformat(), days_per_year=weight, demand_t_h=kg_s_to_t_h_array(flow))
            for date, flow in zip(days.dates, days.flow_kg_s, strict=True)
        ),
        transitions_per_year=np.roll(np.eye(len(days.dates)), 1, axis=1) * weight,
    )
