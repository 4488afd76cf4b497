"""What a case and its record state, in the units of the trade and ready to be shown."""

from __future__ import annotations

import shlex
from dataclasses import dataclass

from evenfire.appraisal.results import Appraisal
from evenfire.case.case import BoilerOffer, Case
from evenfire.money.terms import Price
from evenfire.report.formats import number, plain
from evenfire.units import (
    J_PER_KWH,
    J_PER_MWH,
    KG_PER_TONNE,
    PA_PER_BAR,
    bar_abs_to_pa,
    k_to_degc,
    kg_s_to_kg_h,
    pa_to_bar_g,
)

KG_WATER_PER_M3 = 1000.0
SECONDS_PER_MINUTE = 60.0
W_PER_KW = 1000.0
FUEL_BASIS_WORDS = {"lhv": "net calorific value", "hhv": "gross calorific value"}


@dataclass(frozen=True, slots=True, kw_only=True)
class Quantity:
    """One input as shown: name for people, key with its unit for programs."""

    key: str
    words: str
    value: float | str | tuple[str, ...] | None
    """None where there is no such number."""
    unit: str = ""


def input_sections(case: Case) -> tuple[tuple[str, tuple[Quantity, ...]], ...]:
    """Every input that is one number, by section: (section, quantities)."""
    return (
        ("steam", _steam(case)),
        ("fuel", _fuel(case)),
        ("money", _money(case)),
        ("plan", _plan(case)),
        *((("vessel", _vessel(case)),) if case.vessel is not None else ()),
    )


def boiler_quantities(offer: BoilerOffer) -> tuple[Quantity, ...]:
    """What a case states or assumes about one boiler, in the order of the page's table."""
    spec = offer.spec
    best = max(point.efficiency_lhv for point in spec.efficiency_points)
    installed_cost = offer.investment.amount if offer.investment is not None else None
    return (
        Quantity(key="name", words="Boiler", value=spec.name),
        Quantity(key="rating_kg_h", words="Rating", value=kg_s_to_kg_h(spec.rated_kg_s), unit="kg/h"),
        Quantity(key="turndown_ratio", words="Turndown", value=spec.turndown, unit="1"),
        Quantity(
            key="largest_working_pressure_bar_g",
            words="Largest working pressure",
            value=pa_to_bar_g(spec.largest_working_pa),
            unit="bar g",
        ),
        Quantity(
            key="best_efficiency_percent_lhv", words="Best efficiency, net", value=100.0 * best, unit="%"
        ),
        Quantity(
            key="standing_loss_kw", words="Standing loss", value=spec.standing_loss_w / W_PER_KW, unit="kW"
        ),
        Quantity(
            key="purge_energy_kwh",
            words="Purge loss per start",
            value=spec.purge_energy_j / J_PER_KWH,
            unit="kWh",
        ),
        Quantity(key="buffer_kg", words="Own steam buffer", value=spec.buffer_kg, unit="kg"),
        Quantity(key="start_wear_cost", words="Wear per start", value=offer.start_wear_cost, unit="money"),
        Quantity(
            key="maintenance_per_year", words="Upkeep per year", value=offer.maintenance_cost, unit="money"
        ),
        Quantity(key="installed_cost", words="Installed cost", value=installed_cost, unit="money"),
    )


def gauge(pressure_bar_abs: float) -> str:
    """A pressure [bar abs] as gauges show it [bar g], to a tenth.

    >>> gauge(9.51325)
    '8.5'
    """
    return number(bar_g(pressure_bar_abs), 1)


def bar_g(pressure_bar_abs: float) -> float:
    """Gauge pressure [bar g] from absolute pressure [bar abs], for a standard atmosphere.

    >>> round(bar_g(9.51325), 9)
    8.5
    """
    return pa_to_bar_g(bar_abs_to_pa(pressure_bar_abs))


def repeating_command(appraisal: Appraisal) -> str:
    """The command line that repeats an appraisal from the same files."""
    case = appraisal.case
    named = next((name for name, _ in case.input_hashes if name.endswith(".toml")), "case.toml")
    place = case.folder if named == "case.toml" else case.folder / named
    return f"evenfire appraise {shlex.quote(place.as_posix())}"


def _steam(case: Case) -> tuple[Quantity, ...]:
    site = case.conditions
    return (
        _pressure("process_pressure_bar_g", "Process pressure", site.process_pa),
        _pressure("boiler_pressure_bar_g", "Boiler pressure today", site.boiler_today_pa),
        Quantity(
            key="feedwater_temperature_degc",
            words="Feedwater temperature",
            value=k_to_degc(site.feedwater_k),
            unit="°C",
        ),
        Quantity(
            key="blowdown_percent_of_steam",
            words="Blowdown over steam made",
            value=100.0 * case.boilers[0].spec.blowdown_fraction,
            unit="%",
        ),
        Quantity(
            key="charging_pressure_drop_bar",
            words="Pressure drop, boiler to charged vessel",
            value=site.charging_drop_pa / PA_PER_BAR,
            unit="bar",
        ),
        Quantity(
            key="discharging_pressure_drop_bar",
            words="Pressure drop, discharged vessel to process",
            value=site.discharging_drop_pa / PA_PER_BAR,
            unit="bar",
        ),
        Quantity(
            key="ambient_temperature_degc",
            words="Temperature around boilers and vessel",
            value=k_to_degc(site.ambient_k),
            unit="°C",
        ),
    )


def _fuel(case: Case) -> tuple[Quantity, ...]:
    basis = case.fuel_price_basis
    net_share = case.fuel.lhv_to_hhv if basis == "hhv" else 1.0
    fuel, carbon = case.prices.fuel_per_j_lhv, case.prices.carbon_per_kg
    currency = case.finance.currency
    return (
        Quantity(key="kind", words="Fuel", value=case.fuel.kind.replace("_", " ")),
        Quantity(key="calorific_basis", words="Fuel energy is stated on", value=FUEL_BASIS_WORDS[basis]),
        Quantity(
            key="price_per_mwh",
            words="Fuel price",
            value=fuel.amount * J_PER_MWH * net_share,
            unit=f"{currency}/MWh",
        ),
        _escalation("price", "Fuel price, change", fuel),
        Quantity(
            key="lhv_to_hhv", words="Net over gross calorific value", value=case.fuel.lhv_to_hhv, unit="1"
        ),
        Quantity(
            key="co2_kg_per_mwh_lhv",
            words="CO2 of the fuel, net",
            value=case.fuel.co2_kg_per_j_lhv * J_PER_MWH,
            unit="kg/MWh",
        ),
        Quantity(
            key="carbon_price_per_t",
            words="Carbon price",
            value=carbon.amount * KG_PER_TONNE,
            unit=f"{currency}/t",
        ),
        _escalation("carbon", "Carbon price, change", carbon),
    )


def _money(case: Case) -> tuple[Quantity, ...]:
    finance, prices, currency = case.finance, case.prices, case.finance.currency
    return (
        Quantity(key="currency", words="Currency", value=currency),
        Quantity(key="price_date", words="Prices are of", value=finance.price_date),
        Quantity(key="horizon_years", words="Horizon", value=float(finance.horizon_years), unit="years"),
        Quantity(
            key="discount_rate_percent",
            words=f"Discount rate, {finance.rate_basis}",
            value=100.0 * finance.discount_rate,
            unit="%/a",
        ),
        Quantity(key="rate_basis", words="Rates and price changes are", value=finance.rate_basis),
        Quantity(
            key="contingency_percent",
            words="Contingency on investments",
            value=100.0 * finance.contingency,
            unit="%",
        ),
        Quantity(
            key="electricity_price_per_mwh",
            words="Electricity price",
            value=prices.electricity_per_j.amount * J_PER_MWH,
            unit=f"{currency}/MWh",
        ),
        _escalation("electricity", "Electricity price, change", prices.electricity_per_j),
        Quantity(
            key="fan_and_pump_kwh_per_t_steam",
            words="Electricity of fan and feed pump",
            value=case.fan_power_w_per_kg_s * KG_PER_TONNE / J_PER_KWH,
            unit="kWh/t",
        ),
        Quantity(
            key="water_price_per_m3",
            words="Feed water, treated",
            value=prices.water_per_kg.amount * KG_WATER_PER_M3,
            unit=f"{currency}/m³",
        ),
        _escalation("water", "Feed water, change", prices.water_per_kg),
        _escalation("maintenance", "Maintenance and starts, change", prices.maintenance),
        Quantity(
            key="unmet_steam_price_per_t",
            words="Price of unmet steam",
            value=prices.unmet_steam_per_kg.amount * KG_PER_TONNE,
            unit=f"{currency}/t",
        ),
        _escalation("unmet_steam", "Price of unmet steam, change", prices.unmet_steam_per_kg),
    )


def _plan(case: Case) -> tuple[Quantity, ...]:
    plan = case.plan
    return (
        Quantity(
            key="step_minutes",
            words="Step of the typical days",
            value=plan.step_s / SECONDS_PER_MINUTE,
            unit="min",
        ),
        Quantity(key="gap_percent", words="Asked gap", value=100.0 * plan.gap, unit="%"),
        Quantity(
            key="typical_days_error_percent",
            words="Asked error of the typical days in cost",
            value=100.0 * plan.typical_days_error,
            unit="%",
        ),
        Quantity(
            key="time_limit_seconds", words="Time limit per alternative", value=plan.time_limit_s, unit="s"
        ),
        Quantity(
            key="unmet_steam_tolerance_t_per_year",
            words="Unmet steam that is tolerated",
            value=plan.unmet_tolerance_kg_per_year / KG_PER_TONNE,
            unit="t/a",
        ),
    )


def _vessel(case: Case) -> tuple[Quantity, ...]:
    offer = case.vessel
    if offer is None:
        return ()
    rules, currency = offer.rules, case.finance.currency
    windows = tuple(
        f"{plain(pa_to_bar_g(window.charged_pa))} to {plain(pa_to_bar_g(window.discharged_pa))}"
        for window in offer.windows
    )
    return (
        Quantity(key="smallest_volume_m3", words="Smallest volume", value=offer.smallest_m3, unit="m³"),
        Quantity(key="largest_volume_m3", words="Largest volume", value=offer.largest_m3, unit="m³"),
        Quantity(key="windows_bar_g", words="Windows, charged to discharged", value=windows, unit="bar g"),
        Quantity(
            key="charged_fill_percent",
            words="Fill when charged",
            value=100.0 * rules.charged_fill,
            unit="%",
        ),
        Quantity(
            key="length_to_diameter_ratio",
            words="Cylinder length over diameter",
            value=rules.length_to_diameter,
            unit="1",
        ),
        Quantity(
            key="release_limit_kg_m2_h_per_bar",
            words="Release limit per water surface and bar abs",
            value=rules.release_kg_m2_h_per_bar,
            unit="kg/(m² h bar)",
        ),
        Quantity(key="heat_loss_w_m2_k", words="Heat loss", value=rules.heat_loss_w_m2k, unit="W/(m² K)"),
        Quantity(
            key="make_up_temperature_degc",
            words="Make-up water",
            value=k_to_degc(rules.make_up_k),
            unit="°C",
        ),
        Quantity(
            key="reference_installed_cost",
            words="Installed cost at the reference",
            value=offer.reference_cost,
            unit=currency,
        ),
        Quantity(key="reference_volume_m3", words="Reference volume", value=offer.reference_m3, unit="m³"),
        _pressure("reference_design_pressure_bar_g", "Reference pressure", offer.reference_pa),
        Quantity(
            key="volume_exponent",
            words="Cost rises with volume to the power",
            value=offer.volume_exponent,
            unit="1",
        ),
        Quantity(
            key="cost_change_percent_per_bar",
            words="Cost change with charged pressure",
            value=100.0 * offer.pressure_cost_per_pa * PA_PER_BAR,
            unit="%/bar",
        ),
        Quantity(key="life_years", words="Life", value=float(offer.life_years), unit="years"),
        Quantity(
            key="maintenance_per_year",
            words="Inspection and upkeep",
            value=offer.maintenance_cost,
            unit=f"{currency}/a",
        ),
    )


def _pressure(key: str, words: str, pressure_pa: float) -> Quantity:
    return Quantity(key=key, words=words, value=pa_to_bar_g(pressure_pa), unit="bar g")


def _escalation(key: str, words: str, price: Price) -> Quantity:
    return Quantity(
        key=f"{key}_escalation_percent_per_year", words=words, value=100.0 * price.escalation, unit="%/a"
    )
