"""A replay in trade units, against the replayed reference and beside what the plan promised."""

from __future__ import annotations

import datetime as dt

import numpy as np

from evenfire.appraisal.priced import (
    Priced,
    cost_lines,
    fuel_by_purpose,
    payback_of,
    stated_mwh,
    steam_cost_per_t,
)
from evenfire.appraisal.replayed import ReplayChoice, ReplayedPlant
from evenfire.appraisal.results import Replayed, ReplayedSize, ReplayEvent, ReplayTrace
from evenfire.appraisal.set_points import set_points
from evenfire.case.case import Case
from evenfire.demand.series import DemandRecord
from evenfire.units import (
    DAYS_PER_YEAR,
    KG_PER_TONNE,
    PA_PER_BAR,
    SECONDS_PER_DAY,
    SECONDS_PER_HOUR,
    kg_s_to_t_h,
    pa_to_bar_abs,
)

_WORST_DAYS = 7.0
_LEAST_SAVING = 1e-6
"""Planned savings below this share of the reference's cost have no share that could be realised."""


def replay_figures(
    case: Case,
    record: DemandRecord,
    choice: ReplayChoice,
    reference: ReplayChoice,
    planned: Priced,
    planned_reference: Priced,
    optimum_m3: float,
) -> Replayed:
    """Everything shown of one alternative's replay.

    Parameters
    ----------
    case : Case
    record : DemandRecord
        The one that was replayed.
    choice, reference : ReplayChoice
        The alternative's and the reference's.
    planned, planned_reference : Priced
        Plans of the chosen plant and of the reference's optimum.
    optimum_m3 : float
        Vessel volume of the alternative's optimum with foresight.
    """
    chosen, result = choice.chosen, choice.chosen.result
    flows, cash = chosen.price.flows, chosen.price.cash
    years = result.duration_s / SECONDS_PER_DAY / DAYS_PER_YEAR
    before = reference.chosen.price
    saving = before.cash.present_cost - cash.present_cost
    promised = planned_reference.cash.present_cost - planned.cash.present_cost
    significant = abs(promised) > _LEAST_SAVING * planned_reference.cash.present_cost
    hours = SECONDS_PER_HOUR * years
    return Replayed(
        net_present_cost=cash.present_cost,
        net_present_saving=saving,
        cost_lines=cost_lines(case, cash),
        fuel_parts=fuel_by_purpose(case, flows),
        fuel_mwh_per_year=stated_mwh(case, flows.fuel_mwh),
        fuel_saved_mwh_per_year=stated_mwh(case, before.flows.fuel_mwh - flows.fuel_mwh),
        fuel_saved_percent=100.0 * (1.0 - flows.fuel_mwh / before.flows.fuel_mwh),
        co2_t_per_year=chosen.price.quantities.co2_kg / KG_PER_TONNE,
        co2_saved_t_per_year=(before.quantities.co2_kg - chosen.price.quantities.co2_kg) / KG_PER_TONNE,
        steam_t_per_year=flows.demand_t - flows.unmet_t,
        steam_cost_per_t=steam_cost_per_t(case, cash, flows),
        burner_starts_per_year=sum(boiler.burner_starts for boiler in flows.boilers),
        firing_hours_per_year=sum(boiler.firing_hours for boiler in flows.boilers),
        unmet_steam_t_per_year=flows.unmet_t,
        vented_steam_t_per_year=flows.vented_t,
        payback=payback_of(before, chosen.price),
        passes=choice.passes,
        lowest_process_bar_abs=pa_to_bar_abs(result.lowest_process_pa),
        lowest_boiler_bar_abs=pa_to_bar_abs(result.lowest_boiler_pa),
        boiler_low_hours_per_year=result.boiler_low_s / hours,
        release_limited_hours_per_year=result.release_limited_s / hours,
        vessel_empty_hours_per_year=result.vessel_empty_s / hours,
        mass_closure_relative=result.mass_closure,
        energy_closure_relative=result.energy_closure,
        planned_saving=promised,
        realised_share=saving / promised if significant else None,
        margin_percent=100.0 * (chosen.plan.volume_m3 / optimum_m3 - 1.0) if optimum_m3 else None,
        band_cost=choice.band.price.cash.present_cost,
        trials=chosen.tuned.trials,
        learnt_cost_per_t=chosen.tuned.learnt_cost_per_t,
        judged_cost_per_t=chosen.tuned.judged_cost_per_t,
        set_points=set_points(chosen.plant, chosen.tuned.controls),
        sizes=tuple(_size(each) for each in choice.tried),
        events=tuple(
            ReplayEvent(
                start=_moment(record, event.first_step),
                minutes=(event.last_step - event.first_step + 1) * record.step_s / 60.0,
                unmet_kg=event.unmet_kg,
                lowest_process_bar_abs=pa_to_bar_abs(event.lowest_process_pa),
            )
            for event in result.events
        ),
        worst=_worst(record, chosen),
    )


def _size(each: ReplayedPlant) -> ReplayedSize:
    window = None if each.plant.vessel is None else each.plant.vessel.window
    return ReplayedSize(
        boilers=each.plan.boilers,
        vessel_volume_m3=each.plan.volume_m3,
        charged_bar_abs=None if window is None else pa_to_bar_abs(window.charged_pa),
        discharged_bar_abs=None if window is None else pa_to_bar_abs(window.discharged_pa),
        planned_cost=each.planned.cash.present_cost,
        replayed_cost=each.price.cash.present_cost,
        unmet_steam_t_per_year=each.price.flows.unmet_t,
    )


def _moment(record: DemandRecord, step: int) -> str:
    return (record.start + dt.timedelta(seconds=step * record.step_s)).isoformat()


def _worst(record: DemandRecord, chosen: ReplayedPlant) -> ReplayTrace:
    """Whole days around the worst event; without one around the highest demand."""
    steps = len(record.flow_kg_s)
    events = chosen.result.events
    at = events[0].first_step if events else int(np.argmax(record.flow_kg_s))
    per_day = round(SECONDS_PER_DAY / record.step_s)
    first = max(0, min(at // per_day * per_day - 3 * per_day, steps - round(_WORST_DAYS * per_day)))
    span = slice(first, min(steps, first + round(_WORST_DAYS * per_day)))
    trace = chosen.result.trace
    return ReplayTrace(
        start=_moment(record, first),
        step_s=record.step_s,
        demand_t_h=record.flow_kg_s[span] * kg_s_to_t_h(1.0),
        supplied_t_h=trace.supplied_kg_s[span].astype(np.float64) * kg_s_to_t_h(1.0),
        output_t_h=trace.output_kg_s[:, span].astype(np.float64) * kg_s_to_t_h(1.0),
        vessel_bar_abs=trace.vessel_pa[span].astype(np.float64) / PA_PER_BAR,
        boiler_bar_abs=trace.boiler_pa[span].astype(np.float64) / PA_PER_BAR,
        process_bar_abs=trace.process_pa[span].astype(np.float64) / PA_PER_BAR,
    )
