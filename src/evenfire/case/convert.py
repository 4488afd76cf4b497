"""A checked case file in SI."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import product
from pathlib import Path

from evenfire.boiler import fuel_spec
from evenfire.case.assumptions import assumption, default_notices
from evenfire.case.boilers import boiler_offers
from evenfire.case.case import Case, PlanRequest, ReplayRequest, VesselOffer
from evenfire.case.checks import SHIFTABLE, possible_alternatives, starts_shift
from evenfire.case.draft import boiler_place
from evenfire.case.fuel_basis import lhv_to_hhv
from evenfire.case.record import record_format
from evenfire.case.risk import risk_request
from evenfire.case.schedule import schedule_request
from evenfire.case.schema import CaseFile
from evenfire.case.schema_money import AlternativeName, Money
from evenfire.case.schema_section import Section
from evenfire.case.schema_site import Fuel, Steam, Vessel
from evenfire.errors import Notice
from evenfire.money.terms import Finance, Price, Prices
from evenfire.plant import FuelSpec, SteamConditions, VesselRules, WindowSpec
from evenfire.units import J_PER_KWH, J_PER_MWH, KG_PER_TONNE, PA_PER_BAR, bar_g_to_pa, degc_to_k

J_PER_GJ = 1.0e9
WATER_KG_PER_M3 = 1000.0
SECONDS_PER_MINUTE = 60.0


def case_in_si(
    written: CaseFile, file: Path, record_file: Path | None, input_hashes: tuple[tuple[str, str], ...]
) -> Case:
    """The case that the models see, from a case file in which nothing is wrong.

    Parameters
    ----------
    written : CaseFile
        The whole case file, checked.
    file, record_file : Path
        The case file and its record, if it has one.
    input_hashes : tuple of (str, str)
        File name and sha256 of every input.
    """
    form, record_notices = (
        (None, ()) if written.record is None else record_format(written.record, written.steam)
    )
    boilers, boiler_notices = boiler_offers(written, str(file))
    return Case(
        folder=file.parent,
        name=written.site.name,
        question=written.site.question,
        record_file=record_file,
        record_format=form,
        schedule=None
        if written.schedule is None
        else schedule_request(written.schedule, written.steam, alone=written.record is None),
        conditions=_conditions(written.steam),
        fuel=_fuel(written.fuel),
        boilers=boilers,
        vessel=_vessel(written.vessel, written.steam) if written.vessel is not None else None,
        prices=_prices(written.money, written.fuel),
        finance=_finance(written.money),
        fan_power_w_per_kg_s=written.money.fan_and_pump_kwh_per_t_steam * J_PER_KWH / KG_PER_TONNE,
        plan=_plan(written),
        replay=ReplayRequest(trials=written.replay.trials, seed=written.replay.seed),
        risk=None if written.risk is None else risk_request(written.risk),
        notices=(*record_notices, *_notices(written), *boiler_notices),
        fuel_price_basis=written.fuel.calorific_basis,
        input_hashes=input_hashes,
    )


def _conditions(steam: Steam) -> SteamConditions:
    return SteamConditions(
        process_pa=bar_g_to_pa(steam.process_pressure_bar_g),
        boiler_today_pa=bar_g_to_pa(steam.boiler_pressure_bar_g),
        feedwater_k=degc_to_k(steam.feedwater_temperature_degc),
        charging_drop_pa=steam.charging_pressure_drop_bar * PA_PER_BAR,
        discharging_drop_pa=steam.discharging_pressure_drop_bar * PA_PER_BAR,
        ambient_k=degc_to_k(steam.ambient_temperature_degc),
    )


def _fuel(fuel: Fuel) -> FuelSpec:
    published = fuel_spec(fuel.kind)
    stated = fuel.co2_kg_per_gj_lhv
    return FuelSpec(
        kind=fuel.kind,
        lhv_to_hhv=lhv_to_hhv(fuel),
        co2_kg_per_j_lhv=published.co2_kg_per_j_lhv if stated is None else stated / J_PER_GJ,
    )


def _windows(vessel: Vessel) -> tuple[tuple[WindowSpec, ...], list[str]]:
    """Every window that can exist, and in words the pairs that cannot."""
    windows, skipped = [], []
    for charged, discharged in product(vessel.charged_pressures_bar_g, vessel.discharged_pressures_bar_g):
        if charged > discharged:
            windows.append(WindowSpec(charged_pa=bar_g_to_pa(charged), discharged_pa=bar_g_to_pa(discharged)))
        else:
            skipped.append(f"{charged:g} to {discharged:g}")
    return tuple(windows), skipped


def _vessel(vessel: Vessel, steam: Steam) -> VesselOffer:
    make_up_degc = vessel.make_up_temperature_degc
    return VesselOffer(
        rules=VesselRules(
            charged_fill=vessel.charged_fill_percent / 100.0,
            length_to_diameter=vessel.length_to_diameter_ratio,
            release_kg_m2_h_per_bar=vessel.release_limit_kg_m2_h_per_bar,
            heat_loss_w_m2k=vessel.heat_loss_w_m2_k,
            make_up_k=degc_to_k(steam.feedwater_temperature_degc if make_up_degc is None else make_up_degc),
        ),
        windows=_windows(vessel)[0],
        smallest_m3=vessel.smallest_volume_m3,
        largest_m3=vessel.largest_volume_m3,
        reference_m3=vessel.reference_volume_m3,
        reference_pa=bar_g_to_pa(vessel.reference_design_pressure_bar_g),
        reference_cost=vessel.reference_installed_cost,
        volume_exponent=vessel.volume_exponent,
        pressure_cost_per_pa=vessel.cost_change_percent_per_bar / 100.0 / PA_PER_BAR,
        life_years=vessel.life_years,
        maintenance_cost=vessel.maintenance_per_year,
    )


def _prices(money: Money, fuel: Fuel) -> Prices:
    net_share = lhv_to_hhv(fuel) if fuel.calorific_basis == "hhv" else 1.0
    return Prices(
        fuel_per_j_lhv=_price(
            fuel.price_per_mwh, fuel.price_escalation_percent_per_year, J_PER_MWH * net_share
        ),
        carbon_per_kg=_price(fuel.carbon_price_per_t, fuel.carbon_escalation_percent_per_year, KG_PER_TONNE),
        electricity_per_j=_price(
            money.electricity_price_per_mwh, money.electricity_escalation_percent_per_year, J_PER_MWH
        ),
        water_per_kg=_price(
            money.water_price_per_m3, money.water_escalation_percent_per_year, WATER_KG_PER_M3
        ),
        unmet_steam_per_kg=_price(
            money.unmet_steam_price_per_t, money.unmet_steam_escalation_percent_per_year, KG_PER_TONNE
        ),
        maintenance=_price(1.0, money.maintenance_escalation_percent_per_year, 1.0),
    )


def _price(amount: float, escalation_percent: float, quantity: float) -> Price:
    return Price(amount=amount / quantity, escalation=escalation_percent / 100.0)


def _finance(money: Money) -> Finance:
    return Finance(
        currency=money.currency,
        price_date=money.price_date,
        horizon_years=money.horizon_years,
        discount_rate=money.discount_rate_percent / 100.0,
        rate_basis=money.rate_basis,
        contingency=money.contingency_percent / 100.0,
    )


def _plan(written: CaseFile) -> PlanRequest:
    plan = written.plan
    return PlanRequest(
        step_s=plan.step_minutes * SECONDS_PER_MINUTE,
        time_limit_s=plan.time_limit_seconds,
        gap=plan.gap_percent / 100.0,
        typical_days_error=plan.typical_days_error_percent / 100.0,
        reference=plan.reference,
        alternatives=plan.alternatives or _possible_alternatives(written),
        unmet_tolerance_kg_per_year=plan.unmet_steam_tolerance_t_per_year * KG_PER_TONNE,
    )


def _possible_alternatives(written: CaseFile) -> tuple[AlternativeName, ...]:
    """Every alternative for which the case has the sections."""
    sections = {name for name in ("new_boiler", "vessel") if getattr(written, name) is not None}
    if written.schedule is not None and starts_shift(written.schedule):
        sections.add(SHIFTABLE)
    return possible_alternatives(sections)


def _notices(written: CaseFile) -> Iterator[Notice]:
    """What was assumed outside the boilers' own physics, and pairs of pressures that are no window."""
    yield from default_notices(_places(written))
    if written.plan.alternatives is None:
        shown = ", ".join(_possible_alternatives(written))
        yield assumption("plan", "alternatives", shown, "every one that the case's sections allow")
    fuel = written.fuel
    published = fuel_spec(fuel.kind)
    if fuel.lhv_to_hhv is None and fuel.kind != "electricity":
        yield assumption("fuel", "lhv_to_hhv", f"{published.lhv_to_hhv:.4f}", f"published for {fuel.kind}")
    if fuel.co2_kg_per_gj_lhv is None:
        co2 = f"{published.co2_kg_per_j_lhv * J_PER_GJ:.4g} kg/GJ"
        yield assumption(
            "fuel", "co2_kg_per_gj_lhv", co2, _CO2_REASONS.get(fuel.kind, f"published for {fuel.kind}")
        )
    if written.vessel is None:
        return
    if written.vessel.make_up_temperature_degc is None:
        feedwater = f"{written.steam.feedwater_temperature_degc:g} degC"
        yield assumption("vessel", "make_up_temperature_degc", feedwater, "steam.feedwater_temperature_degc")
    skipped = _windows(written.vessel)[1]
    if skipped:
        yield Notice(
            code="C191",
            text=f"vessel: no window {', '.join(skipped)} bar g, as charged is not above discharged",
        )


_CO2_REASONS = {
    "electricity": "none at the site; state the grid's factor if it counts",
    "wood": "fossil part of the fuel; its own carbon is counted apart",
}


def _places(written: CaseFile) -> Iterator[tuple[str, Section]]:
    """Every section of the case that has defaults, and how notices call it."""
    yield "steam", written.steam
    yield "fuel", written.fuel
    for boiler in written.existing_boiler:
        yield boiler_place(boiler.name), boiler
    if written.new_boiler is not None:
        yield "new_boiler", written.new_boiler
    if written.vessel is not None:
        yield "vessel", written.vessel
    yield "money", written.money
    yield "plan", written.plan
