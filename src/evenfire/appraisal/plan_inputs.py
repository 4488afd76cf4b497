"""From a case and its record to the plan's inputs: SI to the model's units, prices to present costs."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from evenfire.appraisal.vessels import WindowTable
from evenfire.boiler import operating_modes, start_fuel_j_lhv, working_pressure_factor
from evenfire.case.case import BoilerOffer, Case
from evenfire.demand.series import DemandRecord, StorageNeed, TypicalDays
from evenfire.money.present_rates import PresentRates, investment_present_cost, present_rates
from evenfire.money.terms import Investment
from evenfire.plan.inputs import (
    AdequacyCut,
    PlanBoiler,
    PlanDay,
    PlanInputs,
    PlanMode,
    PlanRates,
    VesselSegment,
)
from evenfire.units import DAYS_PER_YEAR, J_PER_MWH, KG_PER_TONNE, SECONDS_PER_HOUR, kg_s_to_t_h

FloatArray = NDArray[np.float64]

K = 1000.0
"""Currency per k."""


def plan_inputs(
    case: Case,
    record: DemandRecord,
    typical: TypicalDays,
    need: StorageNeed,
    tables: tuple[WindowTable, ...],
) -> PlanInputs:
    """Everything the plan of any alternative needs, in the model's units."""
    rates = present_rates(case.prices, case.finance)
    pressures = sorted({table.boiler_pa for table in tables} - {case.conditions.boiler_today_pa})
    working_pa = [case.conditions.boiler_today_pa, *pressures]
    fuel_k_mwh = fuel_present_k_mwh(case, rates)
    return PlanInputs(
        step_h=case.plan.step_s / SECONDS_PER_HOUR,
        days=plan_days(typical),
        transitions_per_year=transitions_per_year(typical),
        boilers=tuple(_plan_boiler(case, offer, working_pa, rates) for offer in case.boilers),
        pressures=len(working_pa),
        vessel_segments=tuple(
            segment
            for number, table in enumerate(tables)
            for segment in _segments(case, number, table, working_pa.index(table.boiler_pa))
        ),
        vessel_maintenance_k=0.0
        if case.vessel is None
        else rates.maintenance * case.vessel.maintenance_cost / K,
        cuts=_cuts(need),
        peak_t_h=kg_s_to_t_h(float(record.flow_kg_s.max())),
        rates=PlanRates(
            fuel_k_mwh=fuel_k_mwh,
            steam_k_t=(
                rates.electricity_per_j * case.fan_power_w_per_kg_s * KG_PER_TONNE
                + rates.water_per_kg * KG_PER_TONNE * (1.0 + _blowdown(case))
            )
            / K,
            unmet_k_t=rates.unmet_steam_per_kg * KG_PER_TONNE / K,
        ),
    )


def plan_days(typical: TypicalDays) -> tuple[PlanDay, ...]:
    """Typical days in the plan's units."""
    return tuple(
        PlanDay(name=day.name, days_per_year=day.days_per_year, demand_t_h=kg_s_to_t_h_array(day.flow_kg_s))
        for day in typical.days
    )


def kg_s_to_t_h_array(flow_kg_s: FloatArray) -> FloatArray:
    """Flows for the model [t/h]."""
    return flow_kg_s * (SECONDS_PER_HOUR / KG_PER_TONNE)


def fuel_present_k_mwh(case: Case, rates: PresentRates) -> float:
    """Present cost of a yearly MWh of fuel with its carbon [k]."""
    return (rates.fuel_per_j_lhv + rates.carbon_per_kg * case.fuel.co2_kg_per_j_lhv) * J_PER_MWH / K


def _blowdown(case: Case) -> float:
    return case.boilers[0].spec.blowdown_fraction


def transitions_per_year(typical: TypicalDays) -> FloatArray:
    """How often a year each typical day follows each other one, shape (days, days).

    Every complete day of the record is read as the typical day that stands for it; the last is followed by
    the first.
    """
    counts = np.zeros((len(typical.days), len(typical.days)))
    following = (*typical.assigned[1:], typical.assigned[0])
    np.add.at(counts, (list(typical.assigned), list(following)), 1.0)
    return counts * (DAYS_PER_YEAR / len(typical.assigned))


def _plan_boiler(case: Case, offer: BoilerOffer, working_pa: list[float], rates: PresentRates) -> PlanBoiler:
    spec, conditions = offer.spec, case.conditions
    today = working_pa[0]
    step_s = case.plan.step_s
    lowest_kg_s = spec.rated_kg_s / spec.turndown
    # Above half of smallest continuous firing a cycling burner burns most of the time and its starts
    # get rarer: counted as lit, so that entering from standby costs a start as it does in the plant.
    modes = tuple(
        PlanMode(
            name=mode.name.split(" ")[0],
            lit=mode.firing or mode.low_kg_s >= 0.499 * lowest_kg_s,
            output_t_h=tuple(kg_s_to_t_h_array(mode.output_kg_s).tolist()),
            fuel_mwh_h=tuple((mode.fuel_w_lhv / 1e6).tolist()),
            starts_per_h_low=mode.starts_per_s_low * SECONDS_PER_HOUR,
            starts_per_h_high=mode.starts_per_s_high * SECONDS_PER_HOUR,
        )
        for mode in operating_modes(spec, today, conditions.feedwater_k)
        if mode.high_kg_s > 0.0
    )
    allowed = tuple(pressure <= spec.largest_working_pa + 1.0 for pressure in working_pa)
    base = working_pressure_factor(spec, today, conditions.feedwater_k)
    return PlanBoiler(
        name=spec.name,
        existing=offer.existing,
        rated_t_h=kg_s_to_t_h(spec.rated_kg_s),
        modes=modes,
        fixed_cost_k=(
            (0.0 if offer.investment is None else investment_present_cost(offer.investment, case.finance))
            + rates.maintenance * offer.maintenance_cost
        )
        / K,
        start_wear_k=rates.burner_starts * offer.start_wear_cost / K,
        start_fuel_mwh=start_fuel_j_lhv(spec, today) / J_PER_MWH,
        cold_start_fuel_mwh=spec.cold_start_energy_j / J_PER_MWH,
        minimum_firing_steps=_steps(spec.minimum_firing_s, step_s),
        minimum_off_steps=_steps(spec.minimum_off_s, step_s),
        ramp_t_h=kg_s_to_t_h(spec.ramp_kg_s2 * step_s),
        pressure_factor=tuple(
            working_pressure_factor(spec, pressure, conditions.feedwater_k) / base if fits else 1.0
            for pressure, fits in zip(working_pa, allowed, strict=True)
        ),
        pressure_allowed=allowed,
    )


def _steps(duration_s: float, step_s: float) -> int:
    """Whole steps that cover a duration."""
    return max(1, int(np.ceil(duration_s / step_s - 1e-9)))


def vessel_investment(case: Case, price: float) -> Investment:
    """The vessel as something bought."""
    if case.vessel is None:
        raise ValueError("the case offers no vessel")
    return Investment(name="steam accumulator", amount=price, life_years=case.vessel.life_years)


def _segments(case: Case, number: int, table: WindowTable, pressure: int) -> list[VesselSegment]:
    """One segment between each pair of neighbouring volumes of the table."""
    cost_k = [
        investment_present_cost(vessel_investment(case, price), case.finance) / K for price in table.price
    ]
    fuel_mwh_t = _full_load_fuel_mwh_t(case)
    segments = []
    for i in range(len(table.volume_m3) - 1):
        low, high = table.performance[i], table.performance[i + 1]
        segments.append(
            VesselSegment(
                window=number,
                pressure=pressure,
                volume_m3=(table.volume_m3[i], table.volume_m3[i + 1]),
                fixed_cost_k=(cost_k[i], cost_k[i + 1]),
                capacity_t=(low.steam_capacity_kg / KG_PER_TONNE, high.steam_capacity_kg / KG_PER_TONNE),
                release_t_h=(kg_s_to_t_h(low.release_limit_kg_s), kg_s_to_t_h(high.release_limit_kg_s)),
                loss_t_h=(kg_s_to_t_h(low.standing_loss_kg_s), kg_s_to_t_h(high.standing_loss_kg_s)),
                charging_credit_mwh_t=fuel_mwh_t * (low.discharge_per_charge - 1.0),
            )
        )
    return segments


def _full_load_fuel_mwh_t(case: Case) -> float:
    """Fuel for a tonne of steam at full load of the first boiler [MWh/t]: the worth of steam saved."""
    firing = [
        mode
        for mode in operating_modes(
            case.boilers[0].spec, case.conditions.boiler_today_pa, case.conditions.feedwater_k
        )
        if mode.firing
    ][-1]
    return float(firing.fuel_w_lhv[-1] / 1e6 / kg_s_to_t_h(float(firing.output_kg_s[-1])))


def _cuts(need: StorageNeed) -> tuple[AdequacyCut, ...]:
    """Every critical interval of the raw record."""
    return tuple(
        AdequacyCut(energy_t=piece.energy_kg / KG_PER_TONNE, duration_h=piece.duration_s / SECONDS_PER_HOUR)
        for piece in need.pieces
    )
