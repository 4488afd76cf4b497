"""One boiler of a case file in SI, what it does not state assumed by rating, pressure and fuel."""

from __future__ import annotations

from dataclasses import replace

from evenfire.boiler import (
    actual_rating_kg_s,
    assumed_cold_start_s,
    assumed_ramp_kg_s2,
    assumed_stack_slope_per_k,
    assumed_standing_loss_w,
    assumed_water_content_m3,
    buffer_kg,
    cold_start_energy_j,
    combustion_air_kg_s,
    fuel_curve,
    lowest_firing_efficiency_lhv,
    purge_energy_j,
)
from evenfire.case.assumptions import Assumed, AssumedValues
from evenfire.case.efficiency import ASSUMED_O2_PERCENT, efficiency_points, stack_readings
from evenfire.case.schema_boiler import BoilerType, RatedBoiler
from evenfire.case.schema_site import Fuel, Steam
from evenfire.case.water_side import blowdown_fraction
from evenfire.plant import BoilerSpec
from evenfire.units import J_PER_KWH, PA_PER_BAR, bar_g_to_pa, degc_to_k, kg_h_to_kg_s

SECONDS_PER_MINUTE = 60.0
ASSUMED_PURGE_S = 60.0
ASSUMED_PURGE_GAS_DEGC = 150.0


def boiler_spec(
    name: str, rated: RatedBoiler, kind: BoilerType, steam: Steam, fuel: Fuel
) -> tuple[BoilerSpec, tuple[Assumed, ...]]:
    """The boiler in SI, and what was assumed of it.

    Parameters
    ----------
    name : str
        What messages call it.
    rated : RatedBoiler
        Keys of its one rating.
    kind : BoilerType
        Keys it shares with others of its kind.
    steam, fuel : Steam, Fuel
        Sections of the case.

    Raises
    ------
    OutOfRangeError
        Where values that are each allowed leave the range of a formula together.
    """
    assumed = AssumedValues()
    bare = _without_starts(name, rated, kind, steam, fuel, assumed)
    return _with_starts(bare, rated, kind, steam, fuel, assumed), tuple(assumed.values)


def _without_starts(
    name: str, rated: RatedBoiler, kind: BoilerType, steam: Steam, fuel: Fuel, assumed: AssumedValues
) -> BoilerSpec:
    """The boiler as it fires and stands; what a start costs follows from its fuel curve."""
    working_pa = bar_g_to_pa(steam.boiler_pressure_bar_g)
    rated_kg_s = kg_h_to_kg_s(rated.rating_kg_h)
    if kind.rating_basis == "from_and_at_100c":
        feedwater_k = degc_to_k(steam.feedwater_temperature_degc)
        rated_kg_s = actual_rating_kg_s(rated_kg_s, working_pa, feedwater_k)
    efficiency_pa = bar_g_to_pa(
        assumed.stated_or(
            "efficiency_pressure_bar_g",
            kind.efficiency_pressure_bar_g,
            steam.boiler_pressure_bar_g,
            "bar g",
            "steam.boiler_pressure_bar_g",
        )
    )
    standing_loss_kw = assumed.stated_or(
        "standing_loss_kw",
        rated.standing_loss_kw,
        assumed_standing_loss_w(rated_kg_s, working_pa) / 1000.0,
        "kW",
        "casing loss of a shell boiler, by rating",
    )
    ramp_percent_per_minute = assumed.stated_or(
        "ramp_percent_per_minute",
        kind.ramp_percent_per_minute,
        assumed_ramp_kg_s2(rated_kg_s) / rated_kg_s * 100.0 * SECONDS_PER_MINUTE,
        "% of rating/min",
        "common practice",
    )
    return BoilerSpec(
        name=name,
        rated_kg_s=rated_kg_s,
        largest_working_pa=bar_g_to_pa(kind.design_pressure_bar_g),
        turndown=kind.turndown_ratio,
        efficiency_points=efficiency_points(rated, kind, steam, fuel, rated_kg_s, efficiency_pa, assumed),
        efficiency_at_pa=efficiency_pa,
        standing_loss_w=standing_loss_kw * 1000.0,
        purge_energy_j=0.0,
        buffer_kg=buffer_kg(
            _water_content_m3(rated, rated_kg_s, assumed),
            working_pa,
            kind.burner_pressure_band_bar * PA_PER_BAR,
        ),
        burner_band_pa=kind.burner_pressure_band_bar * PA_PER_BAR,
        minimum_firing_s=kind.minimum_firing_minutes * SECONDS_PER_MINUTE,
        minimum_off_s=kind.minimum_off_minutes * SECONDS_PER_MINUTE,
        cold_start_s=0.0,
        cold_start_energy_j=0.0,
        ramp_kg_s2=rated_kg_s * ramp_percent_per_minute / 100.0 / SECONDS_PER_MINUTE,
        blowdown_fraction=blowdown_fraction(steam),
        stack_slope_per_k=_stack_slope_per_k(kind, steam, fuel, assumed),
    )


def _with_starts(
    bare: BoilerSpec, rated: RatedBoiler, kind: BoilerType, steam: Steam, fuel: Fuel, assumed: AssumedValues
) -> BoilerSpec:
    """The boiler with what its burner starts and cold starts cost."""
    working_pa = bar_g_to_pa(steam.boiler_pressure_bar_g)
    curve = fuel_curve(bare, working_pa, degc_to_k(steam.feedwater_temperature_degc))
    purge_energy_kwh, reason = _purge(rated, kind, steam, fuel, float(curve.fuel_w_lhv[-1]))
    purge_energy_kwh = assumed.stated_or(
        "purge_energy_kwh", rated.purge_energy_kwh, purge_energy_kwh, "kWh/start", reason
    )
    cold_start_fuel_kwh = assumed.stated_or(
        "cold_start_fuel_kwh_lhv",
        rated.cold_start_fuel_kwh_lhv,
        cold_start_energy_j(
            _water_content_m3(rated, bare.rated_kg_s, AssumedValues()),
            working_pa,
            lowest_firing_efficiency_lhv(bare, working_pa),
            degc_to_k(steam.ambient_temperature_degc),
        )
        / J_PER_KWH,
        "kWh/start",
        f"heating water and steel from {steam.ambient_temperature_degc:g} degC at lowest firing",
    )
    cold_start_minutes = assumed.stated_or(
        "cold_start_minutes",
        kind.cold_start_minutes,
        assumed_cold_start_s(cold_start_fuel_kwh * J_PER_KWH, float(curve.fuel_w_lhv[0]))
        / SECONDS_PER_MINUTE,
        "min",
        "that fuel burnt at lowest firing",
    )
    return replace(
        bare,
        purge_energy_j=purge_energy_kwh * J_PER_KWH,
        cold_start_s=cold_start_minutes * SECONDS_PER_MINUTE,
        cold_start_energy_j=cold_start_fuel_kwh * J_PER_KWH,
    )


def _water_content_m3(rated: RatedBoiler, rated_kg_s: float, assumed: AssumedValues) -> float:
    return assumed.stated_or(
        "water_content_m3",
        rated.water_content_m3,
        assumed_water_content_m3(rated_kg_s),
        "m3",
        "common practice for shell boilers, by rating",
    )


def _purge(
    rated: RatedBoiler, kind: BoilerType, steam: Steam, fuel: Fuel, firing_w_lhv: float
) -> tuple[float, str]:
    """Heat that purge air carries off per start [kWh], and in words what it follows from."""
    if fuel.kind == "electricity":
        return 0.0, "no burner"
    duration_s = ASSUMED_PURGE_S if kind.purge_seconds is None else kind.purge_seconds
    gas_degc = (
        ASSUMED_PURGE_GAS_DEGC if kind.purge_gas_temperature_degc is None else kind.purge_gas_temperature_degc
    )
    ambient_k = degc_to_k(steam.ambient_temperature_degc)
    if rated.purge_air_kg_h is None:
        air_kg_s, air = combustion_air_kg_s(firing_w_lhv), "full combustion air"
    else:
        air_kg_s, air = kg_h_to_kg_s(rated.purge_air_kg_h), f"{rated.purge_air_kg_h:g} kg/h of air"
    energy_j = purge_energy_j(air_kg_s, duration_s, degc_to_k(gas_degc), ambient_k)
    return energy_j / J_PER_KWH, f"{duration_s:g} s of {air} leaving at {gas_degc:g} degC"


def _stack_slope_per_k(kind: BoilerType, steam: Steam, fuel: Fuel, assumed: AssumedValues) -> float:
    """Efficiency lost per kelvin of hotter stack [1/K], at the oxygen read at full load where it is known."""
    if fuel.kind == "electricity":
        slope, reason = 0.0, "no stack"
    else:
        readings = stack_readings(kind, fuel)
        o2_percent = readings[-1].o2_percent if readings else ASSUMED_O2_PERCENT
        slope = assumed_stack_slope_per_k(fuel.kind, o2_percent)
        reason = f"Siegert formula at {o2_percent:.3g} % O2"
        if kind.economiser is not None:
            slope *= 1.0 - kind.economiser.effectiveness_percent / 100.0
            reason += " behind the economiser"
    return (
        assumed.stated_or(
            "stack_loss_percent_per_k", kind.stack_loss_percent_per_k, slope * 100.0, "%/K", reason
        )
        / 100.0
    )
