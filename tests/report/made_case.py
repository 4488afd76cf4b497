"""An invented case in SI, written out by hand, for tests of the report."""

from __future__ import annotations

from pathlib import Path

from evenfire.case.case import BoilerOffer, Case, PlanRequest, ReplayRequest, VesselOffer
from evenfire.demand.read import RecordFormat
from evenfire.errors import Notice
from evenfire.money.terms import Finance, Investment, Price, Prices
from evenfire.plant import (
    BoilerSpec,
    EfficiencyPoint,
    FuelSpec,
    SteamConditions,
    VesselRules,
    WindowSpec,
)


def _boiler(name: str, rated_kg_h: float, turndown: float, best_efficiency_lhv: float) -> BoilerSpec:
    return BoilerSpec(
        name=name,
        rated_kg_s=rated_kg_h / 3600.0,
        largest_working_pa=17.0e5,
        turndown=turndown,
        efficiency_points=(
            EfficiencyPoint(load_fraction=1.0 / turndown, efficiency_lhv=best_efficiency_lhv - 0.02),
            EfficiencyPoint(load_fraction=0.7, efficiency_lhv=best_efficiency_lhv),
            EfficiencyPoint(load_fraction=1.0, efficiency_lhv=best_efficiency_lhv - 0.006),
        ),
        efficiency_at_pa=10.0e5,
        standing_loss_w=25_000.0,
        purge_energy_j=15.0e6,
        buffer_kg=60.0,
        burner_band_pa=1.0e5,
        minimum_firing_s=600.0,
        minimum_off_s=300.0,
        cold_start_s=2700.0,
        cold_start_energy_j=4.0e9,
        ramp_kg_s2=0.005,
        blowdown_fraction=0.04,
        stack_slope_per_k=4.5e-4,
    )


def _standing(name: str, rated_kg_h: float, turndown: float, best_efficiency_lhv: float) -> BoilerOffer:
    return BoilerOffer(
        spec=_boiler(name, rated_kg_h, turndown, best_efficiency_lhv),
        existing=True,
        investment=None,
        maintenance_cost=12_000.0,
        start_wear_cost=5.0,
    )


def _offered(name: str, rated_kg_h: float, installed_cost: float) -> BoilerOffer:
    return BoilerOffer(
        spec=_boiler(name, rated_kg_h, 5.0, 0.952),
        existing=False,
        investment=Investment(name=name, amount=installed_cost, life_years=20),
        maintenance_cost=12_500.0,
        start_wear_cost=6.0,
    )


def made_case(name: str = "Retort hall (invented)", alternatives: tuple[str, ...] = ()) -> Case:
    """A plant with two boilers, three offers and a vessel on offer."""
    return Case(
        folder=Path("cases/retort hall"),
        name=name,
        question="Peaks of 12 t/h against 7.5 t/h of boilers: what is the cheapest way to supply them?",
        record_file=Path("cases/retort hall/steam.csv"),
        schedule=None,
        record_format=RecordFormat(
            time_column="time", flow_column="steam_kg_h", flow_unit="kg/h", gaps="hold", largest_gap_s=600.0
        ),
        conditions=SteamConditions(
            process_pa=5.01325e5,
            boiler_today_pa=10.01325e5,
            feedwater_k=376.15,
            charging_drop_pa=0.5e5,
            discharging_drop_pa=0.6e5,
            ambient_k=293.15,
        ),
        fuel=FuelSpec(kind="natural_gas", lhv_to_hhv=0.9, co2_kg_per_j_lhv=5.6e-8),
        boilers=(
            _standing("Boiler 1, 5 t/h", 5000.0, 4.0, 0.913),
            _standing("Boiler 2, 2.5 t/h", 2500.0, 2.5, 0.86),
            _offered("New boiler 4 t/h", 4000.0, 265_000.0),
            _offered("New boiler 5 t/h", 5000.0, 300_000.0),
            _offered("New boiler 8 t/h", 8000.0, 394_000.0),
        ),
        vessel=VesselOffer(
            rules=VesselRules(
                charged_fill=0.9,
                length_to_diameter=3.5,
                release_kg_m2_h_per_bar=220.0,
                heat_loss_w_m2k=0.6,
                make_up_k=376.15,
            ),
            windows=(
                WindowSpec(charged_pa=9.51325e5, discharged_pa=5.61325e5),
                WindowSpec(charged_pa=13.01325e5, discharged_pa=5.61325e5),
            ),
            smallest_m3=5.0,
            largest_m3=100.0,
            reference_m3=40.0,
            reference_pa=11.01325e5,
            reference_cost=172_000.0,
            volume_exponent=0.62,
            pressure_cost_per_pa=2.5e-7,
            life_years=25,
            maintenance_cost=3500.0,
        ),
        prices=Prices(
            fuel_per_j_lhv=Price(amount=46.0 / 3.6e9 / 0.9, escalation=0.01),
            carbon_per_kg=Price(amount=0.07, escalation=0.02),
            electricity_per_j=Price(amount=140.0 / 3.6e9, escalation=0.015),
            water_per_kg=Price(amount=0.0026, escalation=0.02),
            unmet_steam_per_kg=Price(amount=0.4),
            maintenance=Price(amount=1.0, escalation=0.02),
        ),
        finance=Finance(
            currency="EUR",
            price_date="2026-10",
            horizon_years=15,
            discount_rate=0.08,
            rate_basis="nominal",
            contingency=0.1,
        ),
        fan_power_w_per_kg_s=12_600.0,
        replay=ReplayRequest(trials=24, seed=1),
        risk=None,
        plan=PlanRequest(
            step_s=300.0,
            time_limit_s=30.0,
            gap=0.001,
            typical_days_error=0.005,
            reference="as is",
            alternatives=alternatives,
            unmet_tolerance_kg_per_year=5000.0,
        ),
        notices=(
            Notice(
                code="C190",
                text="boiler 'Boiler 1, 5 t/h', standing_loss_kw: not stated, assumed 25 kW "
                "(casing loss at this rating)",
                severity="assumed",
            ),
            Notice(
                code="C190",
                text="money, unmet_steam_escalation_percent_per_year: not stated, assumed 0 %/a (default)",
                severity="assumed",
            ),
        ),
        fuel_price_basis="hhv",
        input_hashes=(("case.toml", "0f" * 32), ("steam.csv", "a7" * 32)),
    )
