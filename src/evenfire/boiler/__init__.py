"""Boiler physics: fuel against output, cycling, ratings, fuels, and what is assumed unless stated."""

from evenfire.boiler.assumed import (
    assumed_cold_start_s,
    assumed_ramp_kg_s2,
    assumed_stack_slope_per_k,
    assumed_standing_loss_w,
    assumed_water_content_m3,
    buffer_kg,
    cold_start_energy_j,
    combustion_air_kg_s,
    purge_energy_j,
)
from evenfire.boiler.curve import (
    FuelCurve,
    convex_pieces,
    efficiency_lhv,
    fuel_curve,
    lowest_firing_efficiency_lhv,
)
from evenfire.boiler.cycling import cycling_starts_per_s, standing_steam_kg_s, start_fuel_j_lhv
from evenfire.boiler.fuels import FUEL_KINDS, fuel_spec
from evenfire.boiler.heat import (
    blowdown_over_steam,
    deaerator_steam_share,
    efficiency_factor,
    efficiency_shift,
    steam_heat_j_kg,
    working_pressure_factor,
)
from evenfire.boiler.modes import OperatingMode, operating_modes
from evenfire.boiler.rating import actual_rating_kg_s, from_and_at_100c_rating_kg_s
from evenfire.boiler.stack_loss import (
    SiegertCoefficients,
    StackReading,
    check_points_against_stack,
    efficiency_points_from_stack,
    o2_from_co2_percent,
    siegert_coefficients,
    stack_loss,
    stack_slope_per_k,
    with_economiser,
)

__all__ = [
    "FUEL_KINDS",
    "FuelCurve",
    "OperatingMode",
    "SiegertCoefficients",
    "StackReading",
    "actual_rating_kg_s",
    "assumed_cold_start_s",
    "assumed_ramp_kg_s2",
    "assumed_stack_slope_per_k",
    "assumed_standing_loss_w",
    "assumed_water_content_m3",
    "blowdown_over_steam",
    "buffer_kg",
    "check_points_against_stack",
    "cold_start_energy_j",
    "combustion_air_kg_s",
    "convex_pieces",
    "cycling_starts_per_s",
    "deaerator_steam_share",
    "efficiency_factor",
    "efficiency_lhv",
    "efficiency_points_from_stack",
    "efficiency_shift",
    "from_and_at_100c_rating_kg_s",
    "fuel_curve",
    "fuel_spec",
    "lowest_firing_efficiency_lhv",
    "o2_from_co2_percent",
    "operating_modes",
    "purge_energy_j",
    "siegert_coefficients",
    "stack_loss",
    "stack_slope_per_k",
    "standing_steam_kg_s",
    "start_fuel_j_lhv",
    "steam_heat_j_kg",
    "with_economiser",
    "working_pressure_factor",
]
