"""What is assumed of a boiler where a case does not say; every use belongs into the report as "assumed".

Each default scales with the rating. They describe forced-draught shell boilers of 1 to 30 t/h.
"""

from __future__ import annotations

from evenfire.boiler.fuels import fuel_spec
from evenfire.boiler.heat import steam_heat_j_kg
from evenfire.boiler.stack_loss import stack_slope_per_k
from evenfire.errors import out_of_range
from evenfire.water import flash_steam_kg_m3, liquid_enthalpy_j_kg, saturation

ASSUMED_FEEDWATER_K = 378.15
"""Feedwater from a deaerator at 105 degC; used only to turn a rating into a heat flow."""

CASING_LOSS_COEFFICIENT_MW = 0.0113
CASING_LOSS_EXPONENT = 0.7
WATER_CONTENT_M3_PER_KG_S = 7.2
"""Two cubic metres of water per t/h of rating (common practice for shell boilers)."""
DRY_MASS_PER_WATER_MASS = 1.3
STEEL_HEAT_CAPACITY_J_KG_K = 490.0
RATED_OVER_RAMP_S = 120.0
"""Seconds for a change of output by the full rating (common practice; burner actuators need 30 to 60 s)."""

PURGE_AIR_M3_PER_M3_GAS = 9.55
PURGE_LAMBDA = 1.15
GAS_LHV_J_M3 = 36.0e6
AIR_DENSITY_KG_M3 = 1.293
AIR_HEAT_CAPACITY_J_KG_K = 1010.0


def assumed_standing_loss_w(rated_kg_s: float, working_pa: float) -> float:
    """Heat a hot boiler loses while not firing [W]: the casing loss, 0.0113 Q^0.7 with Q and loss in MW.

    Notes
    -----
    Covers radiation and convection of an oil or gas boiler; draught through an open damper comes on top,
    so it is a low estimate for boilers without an air damper.

    References
    ----------
    EN 12953-11:2003 and EN 12952-15:2003 (from memory).

    Examples
    --------
    >>> round(assumed_standing_loss_w(5 / 3.6, 10e5) / 1000, 1)
    25.8
    """
    rated_mw = rated_kg_s * steam_heat_j_kg(working_pa, ASSUMED_FEEDWATER_K, 0.0) / 1.0e6
    return CASING_LOSS_COEFFICIENT_MW * float(rated_mw**CASING_LOSS_EXPONENT) * 1.0e6


def assumed_water_content_m3(rated_kg_s: float) -> float:
    """Water in a shell boiler at its normal level [m3]: 2 m3 per t/h of rating (common practice).

    >>> round(assumed_water_content_m3(5 / 3.6), 6)
    10.0
    """
    return WATER_CONTENT_M3_PER_KG_S * rated_kg_s


def buffer_kg(water_content_m3: float, pressure_pa: float, band_pa: float, fill: float = 0.75) -> float:
    """Steam a boiler's own water gives off between burner cut-out and cut-in pressure [kg].

    The band lies half above and half below the working pressure. Feed and fire are off.

    Parameters
    ----------
    water_content_m3 : float
        Water at the normal level [m3].
    pressure_pa, band_pa : float
        Absolute working pressure and the pressure band around it [Pa].
    fill : float
        Water over water and steam space, at the working pressure [1].

    Raises
    ------
    OutOfRangeError
        P114 for a water content not above 0; P117 for a band outside 0 to the working pressure; P121 for a
        fill outside (0, 1).

    Notes
    -----
    With the feed pump on during the off time the buffer is smaller, by about (h' - h_feed)/(h'' - h') of
    the feed in that time.

    Examples
    --------
    15 m3 of water at 10 bar, three quarters full, a band of 1 bar:

    >>> round(buffer_kg(15.0, 10e5, 1e5), 1)
    127.2
    """
    if not water_content_m3 > 0.0:
        raise out_of_range("P114", "water content of the boiler", water_content_m3, "m3", 0.0, float("inf"))
    if not 0.0 < band_pa < pressure_pa:
        raise out_of_range("P117", "burner pressure band", band_pa, "Pa", 0.0, pressure_pa)
    if not 0.0 < fill < 1.0:
        raise out_of_range("P121", "fill of the boiler", fill, "", 0.0, 1.0)
    _, rising = flash_steam_kg_m3(pressure_pa, pressure_pa + band_pa / 2.0, fill, steps=4)
    _, falling = flash_steam_kg_m3(pressure_pa, pressure_pa - band_pa / 2.0, fill, steps=4)
    return water_content_m3 / fill * float(rising[-1] - falling[-1])


def combustion_air_kg_s(firing_w_lhv: float) -> float:
    """Air of natural gas firing at 15 % excess air [kg/s].

    Parameters
    ----------
    firing_w_lhv : float
        Fuel power on net calorific value [W].

    Examples
    --------
    >>> round(combustion_air_kg_s(7e6), 2)
    2.76
    """
    return firing_w_lhv / GAS_LHV_J_M3 * PURGE_AIR_M3_PER_M3_GAS * PURGE_LAMBDA * AIR_DENSITY_KG_M3


def purge_energy_j(air_kg_s: float, duration_s: float, gas_side_k: float, ambient_k: float) -> float:
    """Heat that purge air carries off per burner start [J]: m cp (T_gas side - T_ambient).

    Parameters
    ----------
    air_kg_s : float
        Air flow while purging [kg/s].
    duration_s : float
        Pre-purge and post-purge together [s].
    gas_side_k, ambient_k : float
        Temperature at which the purge air leaves, and enters [K].

    Notes
    -----
    Duration and temperature are assumptions unless stated: 60 s and 150 degC. US practice asks for at least
    four air changes of a fire-tube boiler (from memory: NFPA 85).

    Examples
    --------
    >>> round(purge_energy_j(combustion_air_kg_s(7e6), 60.0, 423.15, 293.15) / 1e6, 1)
    21.8
    """
    return air_kg_s * duration_s * AIR_HEAT_CAPACITY_J_KG_K * (gas_side_k - ambient_k)


def cold_start_energy_j(
    water_content_m3: float, working_pa: float, efficiency_lhv: float, initial_k: float = 293.15
) -> float:
    """Fuel (net) that brings a cold boiler to its working pressure [J].

    Water from ``initial_k`` to boiling, and 1.3 kg of steel per kg of water (common practice) with it,
    over the efficiency at lowest firing.

    Parameters
    ----------
    water_content_m3 : float
        Water at the normal level, hot [m3].
    working_pa : float
        Absolute working pressure [Pa].
    efficiency_lhv : float
        At lowest firing [1].
    initial_k : float
        Temperature of the cold boiler [K].
    """
    if not 0.0 < efficiency_lhv <= 1.0:
        raise out_of_range("P110", "efficiency at lowest firing", efficiency_lhv, "", 0.0, 1.0)
    at = saturation(working_pa)
    water_kg = water_content_m3 * float(at.density_liquid_kg_m3)
    water_j = water_kg * (float(at.enthalpy_liquid_j_kg) - float(liquid_enthalpy_j_kg(initial_k, working_pa)))
    steel_j = (
        water_kg
        * DRY_MASS_PER_WATER_MASS
        * STEEL_HEAT_CAPACITY_J_KG_K
        * (float(at.temperature_k) - initial_k)
    )
    return (water_j + steel_j) / efficiency_lhv


def assumed_cold_start_s(cold_start_energy_j: float, lowest_firing_w_lhv: float) -> float:
    """Time from cold to steam [s]: the cold-start fuel burnt at lowest firing, as shell boilers ask for.

    >>> assumed_cold_start_s(7.2e9, 1e6)
    7200.0
    """
    return cold_start_energy_j / lowest_firing_w_lhv


def assumed_ramp_kg_s2(rated_kg_s: float) -> float:
    """Largest change of output while firing [kg/s per s]: the rating in 120 s (common practice).

    >>> assumed_ramp_kg_s2(1.2)
    0.01
    """
    return rated_kg_s / RATED_OVER_RAMP_S


def assumed_stack_slope_per_k(fuel_kind: str, o2_percent: float = 3.0) -> float:
    """Efficiency (net) lost per kelvin of hotter stack [1/K] by the Siegert formula; 0 for electricity.

    Raises
    ------
    OutOfRangeError
        P115 for an unknown fuel; P116 for an oxygen content outside 0 to 18 %.
    """
    if fuel_spec(fuel_kind).kind == "electricity":
        return 0.0
    return stack_slope_per_k(fuel_kind, o2_percent)
