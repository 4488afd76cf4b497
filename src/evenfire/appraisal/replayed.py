"""Plan and replay meet here: which of an alternative's plants costs least when it is really run."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from evenfire.appraisal.plan_inputs import K
from evenfire.appraisal.priced import Priced, priced
from evenfire.appraisal.vessels import WindowTable, boiler_working_pa
from evenfire.case.case import Case
from evenfire.demand.series import DemandRecord, TypicalDays
from evenfire.demand.typical_days import complete_days
from evenfire.plan.flows import BoilerFlows, YearlyFlows
from evenfire.plan.inputs import PlanInputs
from evenfire.plan.outcome import Plan, PlanOutcome
from evenfire.plant import PlantSpec, VesselSpec
from evenfire.replay.controls import ControlKind
from evenfire.replay.results import ReplayResult
from evenfire.replay.simulate import Replay
from evenfire.replay.starting_controls import usual_controls
from evenfire.replay.tuning import OperatingWeights, Tuned, tuned
from evenfire.units import DAYS_PER_YEAR, J_PER_MWH, KG_PER_TONNE, SECONDS_PER_DAY, SECONDS_PER_HOUR

TUNED_PLANTS = 2
"""Plants of a short list that get controls of their own, besides the optimum."""


@dataclass(frozen=True, slots=True, kw_only=True)
class ReplayedPlant:
    """One plant run by its controls, priced like a plan."""

    plan: Plan
    plant: PlantSpec
    tuned: Tuned
    result: ReplayResult
    price: Priced
    planned: Priced
    """The same plant with foresight."""


@dataclass(frozen=True, slots=True, kw_only=True)
class ReplayChoice:
    """What the replay recommends of an alternative."""

    chosen: ReplayedPlant
    tried: tuple[ReplayedPlant, ...]
    """The optimum first, then others of the short list."""
    band: ReplayedPlant
    """The chosen plant on a tuned pressure band alone, as plants have it today."""
    passes: bool
    """Unmet steam within the plan's and the case's tolerance."""


def replayed_choice(
    case: Case,
    inputs: PlanInputs,
    record: DemandRecord,
    typical: TypicalDays,
    tables: tuple[WindowTable, ...],
    outcome: PlanOutcome,
) -> ReplayChoice:
    """Run the optimum and its near-optimal plants over the whole record and take the cheapest that works.

    Controls are tuned for the optimum; the others run on them first, and the best of those get controls of
    their own. The chosen plant has the least replayed net present cost among plants whose unmet steam lies
    within what its own plan leaves unmet and the case's tolerance; where none does, the cheapest of all.

    Parameters
    ----------
    case : Case
    inputs : PlanInputs
    record : DemandRecord
    typical : TypicalDays
        Of the inputs.
    tables : tuple of WindowTable
    outcome : PlanOutcome
        With a plan.

    Raises
    ------
    ValueError
        If the outcome has no plan.
    """
    if outcome.plan is None:
        raise ValueError("an outcome without a plan cannot be replayed")

    def ran(plan: Plan, found: Tuned | None, kind: ControlKind) -> ReplayedPlant:
        plant = plant_spec(case, tables, inputs, plan)
        if found is None:
            start = replace(usual_controls(plant, kind), service=services(plan, record, typical))
            found = tuned(
                plant,
                record,
                start,
                operating_weights(case, inputs, plan),
                trials=case.replay.trials,
                seed=case.replay.seed,
            )
        else:
            own = usual_controls(plant, kind)
            found = replace(
                found,
                controls=replace(
                    own, burners=found.controls.burners, service=services(plan, record, typical)
                ),
            )
        result = Replay(plant, record).run(found.controls)
        flows = replayed_flows(result)
        planned = priced(case, inputs, tables, plan)
        return ReplayedPlant(
            plan=plan,
            plant=plant,
            tuned=found,
            result=result,
            price=priced(case, inputs, tables, plan, flows),
            planned=planned,
        )

    def passes(each: ReplayedPlant) -> bool:
        tolerated = each.planned.flows.unmet_t + case.plan.unmet_tolerance_kg_per_year / KG_PER_TONNE
        return each.price.flows.unmet_t <= tolerated + 1e-9

    first = ran(outcome.plan, None, ControlKind.SMOOTHED_DEMAND)
    others = [ran(plan, first.tuned, ControlKind.SMOOTHED_DEMAND) for plan in outcome.shortlist]
    others.sort(key=lambda each: (not passes(each), each.price.cash.present_cost))
    retuned = [ran(each.plan, None, ControlKind.SMOOTHED_DEMAND) for each in others[:TUNED_PLANTS]]
    tried = (first, *retuned, *others[TUNED_PLANTS:])
    chosen = min(tried, key=lambda each: (not passes(each), each.price.cash.present_cost))
    return ReplayChoice(
        chosen=chosen,
        tried=tried,
        band=ran(chosen.plan, None, ControlKind.PRESSURE_BAND),
        passes=passes(chosen),
    )


def plant_spec(case: Case, tables: tuple[WindowTable, ...], inputs: PlanInputs, plan: Plan) -> PlantSpec:
    """The plant that a plan chooses."""
    specs = {offer.spec.name: offer.spec for offer in case.boilers}
    vessel = window = None
    if plan.segment is not None and case.vessel is not None:
        window = tables[inputs.vessel_segments[plan.segment].window].window
        vessel = VesselSpec(volume_m3=plan.volume_m3, window=window, rules=case.vessel.rules)
    return PlantSpec(
        boilers=tuple(specs[name] for name in plan.boilers),
        vessel=vessel,
        boiler_working_pa=boiler_working_pa(case, window),
        conditions=case.conditions,
        fuel=case.fuel,
    )


def operating_weights(case: Case, inputs: PlanInputs, plan: Plan) -> OperatingWeights:
    """Present cost over the horizon of what a run of the record uses, repeated every year [currency]."""
    return OperatingWeights(
        fuel_per_j=inputs.rates.fuel_k_mwh * K / J_PER_MWH,
        start=np.array([inputs.boiler(name).start_wear_k * K for name in plan.boilers]),
        unmet_per_kg=inputs.rates.unmet_k_t * K / KG_PER_TONNE,
    )


def services(plan: Plan, record: DemandRecord, typical: TypicalDays) -> NDArray[np.bool_]:
    """Boilers kept hot by weekday: those hot on any typical day that stands for such a weekday."""
    hot = np.zeros((len(plan.boilers), 7), dtype=np.bool_)
    dates = complete_days(record, typical.step_s).dates
    for date, day in zip(dates, typical.assigned, strict=True):
        hot[:, date.weekday()] |= plan.dispatch[day].in_service
    seen = {date.weekday() for date in dates}
    for weekday in range(7):
        if weekday not in seen:
            hot[:, weekday] = True
    return hot


def replayed_flows(result: ReplayResult) -> YearlyFlows:
    """A run of the record as a year, by the record's share of it."""
    years = result.duration_s / SECONDS_PER_DAY / DAYS_PER_YEAR
    return YearlyFlows(
        boilers=tuple(
            BoilerFlows(
                name=run.name,
                steam_t=run.steam_kg / KG_PER_TONNE / years,
                firing_fuel_mwh=run.firing_fuel_j / J_PER_MWH / years,
                cycling_fuel_mwh=0.0,
                standing_fuel_mwh=run.standing_fuel_j / J_PER_MWH / years,
                start_fuel_mwh=run.start_fuel_j / J_PER_MWH / years,
                cold_start_fuel_mwh=run.cold_start_fuel_j / J_PER_MWH / years,
                pressure_fuel_mwh=0.0,
                burner_starts=run.starts / years,
                firing_hours=run.firing_s / SECONDS_PER_HOUR / years,
            )
            for run in result.boilers
        ),
        vessel_credit_mwh=0.0,
        charged_t=result.charged_kg / KG_PER_TONNE / years,
        vessel_loss_t=(result.charged_kg - result.discharged_kg) / KG_PER_TONNE / years,
        unmet_t=result.unmet_kg / KG_PER_TONNE / years,
        vented_t=result.vented_kg / KG_PER_TONNE / years,
        demand_t=result.demand_kg / KG_PER_TONNE / years,
    )
