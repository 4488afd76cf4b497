"""A plan priced: its yearly quantities, its cash flow, and its result against the reference."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from evenfire.accumulator import WindowPerformance, pressure_at_stored_kg
from evenfire.appraisal.plan_inputs import K, vessel_investment
from evenfire.appraisal.results import (
    AlternativeResult,
    BoilerUse,
    CostLine,
    DaySchedule,
    FuelPart,
    Payback,
    Standing,
    VesselChoice,
)
from evenfire.appraisal.vessels import (
    WindowTable,
    boiler_working_pa,
    table_price,
    vessel_performance,
)
from evenfire.boiler import steam_heat_j_kg
from evenfire.case.case import BoilerOffer, Case
from evenfire.demand.series import DemandRecord, TypicalDays
from evenfire.demand.storage_need import shortfall_kg
from evenfire.money.cash_flow import CashFlow, cash_flow
from evenfire.money.factors import capital_recovery_factor
from evenfire.money.payback import payback
from evenfire.money.terms import YearlyQuantities
from evenfire.plan.flows import YearlyFlows, yearly_flows
from evenfire.plan.fuel_parts import fuel_parts
from evenfire.plan.inputs import PlanInputs
from evenfire.plan.outcome import DayDispatch, Plan, PlanOutcome, Stop
from evenfire.units import J_PER_MWH, KG_PER_TONNE, kg_s_to_kg_h, pa_to_bar_abs


@dataclass(frozen=True, slots=True, kw_only=True)
class Priced:
    """A plan with its quantities and money."""

    plan: Plan
    flows: YearlyFlows
    offers: tuple[BoilerOffer, ...]
    performance: WindowPerformance | None
    boiler_pa: float
    quantities: YearlyQuantities
    cash: CashFlow


def priced(
    case: Case,
    inputs: PlanInputs,
    tables: tuple[WindowTable, ...],
    plan: Plan,
    flows: YearlyFlows | None = None,
) -> Priced:
    """Quantities and cash flow of a plan, or of its plant with the flows of a replay."""
    flows = yearly_flows(inputs, plan) if flows is None else flows
    offers = tuple(next(offer for offer in case.boilers if offer.spec.name == name) for name in plan.boilers)
    investments = [offer.investment for offer in offers if offer.investment is not None]
    performance, window = None, None
    if plan.segment is not None:
        table = tables[inputs.vessel_segments[plan.segment].window]
        window = table.window
        performance = vessel_performance(case, plan.volume_m3, window)
        investments.append(vessel_investment(case, table_price(table, plan.volume_m3)))
    quantities = _quantities(case, flows, offers, with_vessel=performance is not None)
    return Priced(
        plan=plan,
        flows=flows,
        offers=offers,
        performance=performance,
        boiler_pa=boiler_working_pa(case, window),
        quantities=quantities,
        cash=cash_flow(tuple(investments), quantities, case.prices, case.finance),
    )


def _quantities(
    case: Case, flows: YearlyFlows, offers: tuple[BoilerOffer, ...], *, with_vessel: bool
) -> YearlyQuantities:
    steam_kg = sum(boiler.steam_t for boiler in flows.boilers) * KG_PER_TONNE
    vessel_upkeep = case.vessel.maintenance_cost if with_vessel and case.vessel is not None else 0.0
    fuel_j = flows.fuel_mwh * J_PER_MWH
    return YearlyQuantities(
        fuel_j_lhv=fuel_j,
        co2_kg=fuel_j * case.fuel.co2_kg_per_j_lhv,
        electricity_j=case.fan_power_w_per_kg_s * steam_kg,
        water_kg=steam_kg * (1.0 + case.boilers[0].spec.blowdown_fraction),
        unmet_steam_kg=flows.unmet_t * KG_PER_TONNE,
        burner_start_cost=sum(
            boiler.burner_starts * offer.start_wear_cost
            for boiler, offer in zip(flows.boilers, offers, strict=True)
        ),
        maintenance_cost=sum(offer.maintenance_cost for offer in offers) + vessel_upkeep,
    )


def stated_mwh(case: Case, fuel_mwh_lhv: float) -> float:
    """Fuel energy on the case's own basis [MWh]."""
    return fuel_mwh_lhv / case.fuel.lhv_to_hhv if case.fuel_price_basis == "hhv" else fuel_mwh_lhv


def blowdown_share(case: Case) -> float:
    """Heat of the blowdown over all heat the boilers add at today's pressure [1]."""
    site, blowdown = case.conditions, case.boilers[0].spec.blowdown_fraction
    steam_alone = steam_heat_j_kg(site.boiler_today_pa, site.feedwater_k, 0.0)
    return 1.0 - steam_alone / steam_heat_j_kg(site.boiler_today_pa, site.feedwater_k, blowdown)


def fuel_by_purpose(case: Case, flows: YearlyFlows) -> tuple[FuelPart, ...]:
    """What a year's fuel is burnt for, on the case's basis."""
    parts = fuel_parts(flows, blowdown_share(case))
    return tuple(
        FuelPart(name=name, mwh_per_year=float(stated_mwh(case, mwh)))
        for name, mwh in (
            ("steam used", parts.steam),
            ("blowdown", parts.blowdown),
            ("standing loss", parts.standing),
            ("purging at burner starts", parts.purge),
            ("cold starts", parts.cold_starts),
            ("standing loss of the vessel", parts.vessel_loss),
            ("vessel gives more than it takes", parts.vessel_credit),
            ("higher boiler pressure", parts.boiler_pressure),
        )
    )


def alternative_result(
    case: Case,
    inputs: PlanInputs,
    outcome: PlanOutcome,
    price: Priced,
    reference: Priced,
    record: DemandRecord,
    typical: TypicalDays,
) -> AlternativeResult:
    """Everything the report shows of one planned alternative."""
    cash, flows = price.cash, price.flows
    cost = cash.present_cost
    fuel = stated_mwh(case, flows.fuel_mwh)
    fuel_reference = stated_mwh(case, reference.flows.fuel_mwh)
    supplied_t = flows.demand_t - flows.unmet_t
    bound = None if outcome.bound_k is None else outcome.bound_k * K
    optimum = cost if outcome.cost_k is None else outcome.cost_k * K
    firm_kg_s = sum(offer.spec.rated_kg_s for offer in price.offers)
    vessel = price.performance
    return AlternativeResult(
        name=outcome.alternative,
        standing=Standing.PLANNED if outcome.stop is Stop.GAP_REACHED else Standing.GAP_NOT_REACHED,
        note=""
        if outcome.stop is Stop.GAP_REACHED
        else f"stopped before the asked gap: {outcome.stop.value}",
        solver_status=outcome.stop.value,
        net_present_cost=cost,
        bound=bound,
        gap=None if bound is None else max(0.0, (optimum - bound) / optimum),
        investment=cash.investment,
        cost_lines=cost_lines(case, cash),
        fuel_mwh_per_year=fuel,
        fuel_parts=fuel_by_purpose(case, flows),
        co2_t_per_year=price.quantities.co2_kg / KG_PER_TONNE,
        steam_t_per_year=supplied_t,
        burner_starts_per_year=sum(boiler.burner_starts for boiler in flows.boilers),
        firing_hours_per_year=sum(boiler.firing_hours for boiler in flows.boilers),
        unmet_steam_t_per_year=flows.unmet_t,
        vented_steam_t_per_year=flows.vented_t,
        fuel_saved_mwh_per_year=fuel_reference - fuel,
        fuel_saved_percent=100.0 * (fuel_reference - fuel) / fuel_reference if fuel_reference else 0.0,
        co2_saved_t_per_year=(reference.quantities.co2_kg - price.quantities.co2_kg) / KG_PER_TONNE,
        net_present_saving=reference.cash.present_cost - cost,
        payback=payback_of(reference, price),
        steam_cost_per_t=steam_cost_per_t(case, cash, flows),
        boilers=tuple(
            BoilerUse(
                name=boiler.name,
                rating_kg_h=kg_s_to_kg_h(offer.spec.rated_kg_s),
                existing=offer.existing,
                steam_t_per_year=boiler.steam_t,
                firing_hours_per_year=boiler.firing_hours,
                burner_starts_per_year=boiler.burner_starts,
            )
            for boiler, offer in zip(flows.boilers, price.offers, strict=True)
        ),
        boiler_working_bar_abs=pa_to_bar_abs(price.boiler_pa),
        vessel=None if vessel is None else _vessel_choice(vessel),
        record_shortfall_t=shortfall_kg(
            record.flow_kg_s,
            record.step_s,
            firm_kg_s,
            0.0 if vessel is None else vessel.steam_capacity_kg,
            0.0 if vessel is None else vessel.release_limit_kg_s,
        )
        / KG_PER_TONNE,
        schedule=tuple(
            _schedule(inputs, price, d, dispatch, typical) for d, dispatch in enumerate(price.plan.dispatch)
        ),
        solve_seconds=outcome.seconds,
    )


def cost_lines(case: Case, cash: CashFlow) -> tuple[CostLine, ...]:
    """The lines of a net present cost."""
    return tuple(
        CostLine(name=name, per_year=_first_year(case, cash, name), present_cost=cash.line_present_cost(name))
        for name in cash.lines
    )


def steam_cost_per_t(case: Case, cash: CashFlow, flows: YearlyFlows) -> float | None:
    """Annuity of the net present cost over the steam supplied in a year [currency/t]."""
    supplied_t = flows.demand_t - flows.unmet_t
    if supplied_t <= 0.0:
        return None
    annuity = capital_recovery_factor(case.finance.discount_rate, case.finance.horizon_years)
    return float(cash.present_cost * annuity / supplied_t)


def payback_of(reference: Priced, price: Priced) -> Payback:
    """Payback of what is priced against the reference."""
    back = payback(reference.cash, price.cash)
    return Payback(simple_years=back.simple_years, discounted_years=back.discounted_years, note=back.note)


def _first_year(case: Case, cash: CashFlow, name: str) -> float:
    """A running line at the price date's prices, 0 for lines of investment [currency/a]."""
    unescalated = {
        "fuel": case.prices.fuel_per_j_lhv,
        "carbon": case.prices.carbon_per_kg,
        "electricity": case.prices.electricity_per_j,
        "water": case.prices.water_per_kg,
        "unmet steam": case.prices.unmet_steam_per_kg,
        "burner starts": case.prices.maintenance,
        "maintenance": case.prices.maintenance,
    }
    if name not in unescalated:
        return 0.0
    return float(cash.lines[name][1]) / (1.0 + unescalated[name].escalation)


def _vessel_choice(vessel: WindowPerformance) -> VesselChoice:
    return VesselChoice(
        volume_m3=vessel.volume_m3,
        charged_bar_abs=pa_to_bar_abs(vessel.window.charged_pa),
        discharged_bar_abs=pa_to_bar_abs(vessel.window.discharged_pa),
        steam_capacity_kg=vessel.steam_capacity_kg,
        release_limit_kg_h=kg_s_to_kg_h(vessel.release_limit_kg_s),
        standing_loss_kw=vessel.standing_loss_w / 1000.0,
        diameter_m=vessel.diameter_m,
        cylinder_length_m=vessel.cylinder_length_m,
        wall_thickness_mm=vessel.wall_thickness_m * 1000.0,
        shell_mass_t=vessel.shell_mass_kg / KG_PER_TONNE,
    )


def _schedule(
    inputs: PlanInputs, price: Priced, d: int, dispatch: DayDispatch, typical: TypicalDays
) -> DaySchedule:
    day = inputs.days[d]
    boilers = [inputs.boiler(name) for name in price.plan.boilers]
    vessel = price.performance
    pressure = np.zeros(0)
    if vessel is not None:
        stored_kg = np.clip(dispatch.stored_t * KG_PER_TONNE, 0.0, vessel.steam_capacity_kg)
        pressure = pressure_at_stored_kg(vessel, stored_kg) / 1e5

    def state(row: int, t: int) -> str:
        k = int(dispatch.mode[row, t])
        if k < 0:
            return "cold"
        name = boilers[row].modes[k].name
        return "standby" if name == "cycling" and dispatch.output_t_h[row, t] <= 1e-9 else name

    return DaySchedule(
        day=day.name,
        date=typical.days[d].date.isoformat(),
        days_per_year=day.days_per_year,
        step_minutes=typical.step_s / 60.0,
        demand_t_h=day.demand_t_h,
        output_t_h=dispatch.output_t_h,
        state=tuple(tuple(state(row, t) for t in range(len(day.demand_t_h))) for row in range(len(boilers))),
        stored_t=dispatch.stored_t,
        vessel_bar_abs=pressure,
        unmet_t_h=dispatch.unmet_t_h,
        vented_t_h=dispatch.vented_t_h,
    )


def unplanned_result(outcome: PlanOutcome, reference: Priced) -> AlternativeResult:
    """An alternative without a plan, in the same shape."""
    infeasible = outcome.stop is Stop.INFEASIBLE
    return AlternativeResult(
        name=outcome.alternative,
        standing=Standing.INFEASIBLE if infeasible else Standing.NO_PLAN,
        note=(
            "no boilers and vessel on offer meet the peaks of the record together"
            if infeasible
            else f"stopped before any plan was found: {outcome.stop.value}"
        ),
        solver_status=outcome.stop.value,
        net_present_cost=None,
        bound=None if outcome.bound_k is None else outcome.bound_k * K,
        gap=None,
        investment=0.0,
        cost_lines=(),
        fuel_mwh_per_year=0.0,
        fuel_parts=(),
        co2_t_per_year=0.0,
        steam_t_per_year=0.0,
        burner_starts_per_year=0.0,
        firing_hours_per_year=0.0,
        unmet_steam_t_per_year=0.0,
        vented_steam_t_per_year=0.0,
        fuel_saved_mwh_per_year=0.0,
        fuel_saved_percent=0.0,
        co2_saved_t_per_year=0.0,
        net_present_saving=None,
        payback=Payback(simple_years=None, discounted_years=None, note="no plan"),
        steam_cost_per_t=None,
        boilers=(),
        boiler_working_bar_abs=pa_to_bar_abs(reference.boiler_pa),
        vessel=None,
        record_shortfall_t=0.0,
        schedule=(),
        solve_seconds=outcome.seconds,
    )
