"""What a steam plant is: plain frozen data in SI units, shared by every room above.

No behaviour lives here; physics is in ``boiler`` and ``accumulator``, prices in ``money``.
"""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True, kw_only=True)
class SteamConditions:
    """Pressures and temperatures of the site."""

    process_pa: float
    """Absolute pressure the process needs [Pa]."""
    boiler_today_pa: float
    """Absolute boiler working pressure today [Pa]."""
    feedwater_k: float
    """Feedwater temperature at the boiler inlet [K]."""
    charging_drop_pa: float
    """Pressure drop from boiler to charged vessel [Pa]."""
    discharging_drop_pa: float
    """Pressure drop from discharged vessel to process (reducing valve and pipe) [Pa]."""
    ambient_k: float
    """Temperature around boilers and vessel [K]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class FuelSpec:
    """A fuel (or electricity) with its conversion factors."""

    kind: str
    lhv_to_hhv: float
    """Net over gross calorific value [1]; 1 for electricity."""
    co2_kg_per_j_lhv: float
    """CO2 per joule of net calorific value [kg/J]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class EfficiencyPoint:
    """One point of a part-load efficiency curve."""

    load_fraction: float
    """Steam output over rated output [1]."""
    efficiency_lhv: float
    """Steam heat over fuel heat on net calorific value, radiation included, blowdown excluded [1]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class BoilerSpec:
    """One steam boiler as the models see it."""

    name: str
    rated_kg_s: float
    """Actual steam output at working pressure and site feedwater temperature [kg/s]."""
    largest_working_pa: float
    """Highest absolute pressure the boiler may work at [Pa]."""
    turndown: float
    """Rated output over smallest continuous firing output [1], >= 1."""
    efficiency_points: tuple[EfficiencyPoint, ...]
    """From the smallest continuous firing load to full load, rising in load_fraction."""
    efficiency_at_pa: float
    """Absolute pressure at which the efficiency points hold [Pa]."""
    standing_loss_w: float
    """Heat lost while hot and not firing [W]."""
    purge_energy_j: float
    """Heat of the boiler carried off by purge air at each burner start [J]."""
    buffer_kg: float
    """Steam the boiler's own water gives between burner cut-out and cut-in pressure [kg]."""
    burner_band_pa: float
    """Pressure between burner cut-out and cut-in, half above and half below the working pressure [Pa]."""
    minimum_firing_s: float
    """Shortest time at or above smallest continuous firing once lit [s]."""
    minimum_off_s: float
    """Shortest burner-off time [s]."""
    cold_start_s: float
    """Time from cold to steam [s]."""
    cold_start_energy_j: float
    """Fuel energy (net) to bring a cold boiler to pressure [J]."""
    ramp_kg_s2: float
    """Largest change of output while firing [kg/s per s]."""
    blowdown_fraction: float
    """Blowdown over steam output [1]."""
    stack_slope_per_k: float
    """Efficiency lost per kelvin of hotter stack, net basis [1/K]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class WindowSpec:
    """A pressure window of the accumulator."""

    charged_pa: float
    discharged_pa: float


@dataclass(frozen=True, slots=True, kw_only=True)
class VesselRules:
    """How a vessel of any volume would be shaped, filled and limited on this site."""

    charged_fill: float
    """Liquid volume fraction at the charged state [1]."""
    length_to_diameter: float
    """Cylindrical length over diameter [1]."""
    release_kg_m2_h_per_bar: float
    """Release limit per free water surface and bar absolute at the discharged state [kg/(m2 h bar)]."""
    heat_loss_w_m2k: float
    """Heat loss through the insulated surface [W/(m2 K)]."""
    make_up_k: float
    """Temperature of the make-up water that keeps the inventory [K]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class VesselSpec:
    """One accumulator vessel as chosen."""

    volume_m3: float
    window: WindowSpec
    rules: VesselRules


@dataclass(frozen=True, slots=True, kw_only=True)
class PlantSpec:
    """A complete plant: what a plan chooses and a replay runs."""

    boilers: tuple[BoilerSpec, ...]
    vessel: VesselSpec | None
    boiler_working_pa: float
    """Absolute pressure all boilers work at [Pa]."""
    conditions: SteamConditions
    fuel: FuelSpec
