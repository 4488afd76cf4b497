"""Heat a boiler adds to each kilogram of steam, and the working pressure's effect on its fuel."""

from __future__ import annotations

from evenfire.errors import OutOfRangeError, Problem, out_of_range
from evenfire.plant import BoilerSpec
from evenfire.water import liquid_enthalpy_j_kg, saturation, saturation_temperature_k

LARGEST_BLOWDOWN_FRACTION = 0.5


def steam_heat_j_kg(working_pa: float, feedwater_k: float, blowdown_fraction: float) -> float:
    """Heat the boiler adds per kilogram of dry saturated steam, that of the blowdown water included.

    h''(p) - h_feed + b (h'(p) - h_feed), with b the blowdown over the steam output.

    Parameters
    ----------
    working_pa : float
        Absolute working pressure [Pa].
    feedwater_k : float
        Feedwater temperature at the boiler inlet [K], below boiling.
    blowdown_fraction : float
        Blowdown over *steam* [1], 0 to 0.5. A ratio r stated over feedwater is b = r / (1 - r).

    Returns
    -------
    float
        [J/kg of steam].

    Raises
    ------
    OutOfRangeError
        P101 to P103 for water states outside the tables, P112 for a blowdown fraction outside 0 to 0.5.

    Notes
    -----
    Steam is taken as dry; a carry-over of 2 % water would lower the heat per kilogram by about 1.5 %.

    References
    ----------
    US DOE Steam Tip Sheet 9 (blowdown over feedwater), EN 12953-11 (useful heat includes blowdown).

    Examples
    --------
    >>> round(steam_heat_j_kg(10e5, 378.15, 0.0))
    2336256
    """
    if not 0.0 <= blowdown_fraction <= LARGEST_BLOWDOWN_FRACTION:
        raise out_of_range(
            "P112", "blowdown over steam", blowdown_fraction, "", 0.0, LARGEST_BLOWDOWN_FRACTION
        )
    at = saturation(working_pa)
    feed = float(liquid_enthalpy_j_kg(feedwater_k, working_pa))
    steam = float(at.enthalpy_vapour_j_kg) - feed
    return steam + blowdown_fraction * (float(at.enthalpy_liquid_j_kg) - feed)


def blowdown_over_steam(blowdown_over_feedwater: float) -> float:
    """Blowdown over steam [1] from blowdown over feedwater [1]: r / (1 - r).

    Raises
    ------
    OutOfRangeError
        P112 for a ratio outside 0 to 1/3.

    References
    ----------
    US DOE Steam Tip Sheet 9: feedwater = steam / (1 - blowdown over feedwater).

    Examples
    --------
    3 200 of 53 200 lb/h of feedwater are 6.4 % of the steam.

    >>> round(blowdown_over_steam(3200 / 53200), 6)
    0.064
    """
    largest = LARGEST_BLOWDOWN_FRACTION / (1.0 + LARGEST_BLOWDOWN_FRACTION)
    if not 0.0 <= blowdown_over_feedwater <= largest:
        raise out_of_range("P112", "blowdown over feedwater", blowdown_over_feedwater, "", 0.0, largest)
    return blowdown_over_feedwater / (1.0 - blowdown_over_feedwater)


def deaerator_steam_share(
    feedwater_k: float, water_in_k: float, working_pa: float, blowdown_fraction: float
) -> float:
    """Steam the deaerator takes over steam the boiler makes [1].

    Water at ``water_in_k`` is heated to ``feedwater_k`` by condensing boiler steam in it: per kilogram of
    feedwater (h_feed - h_in)/(h'' - h_in), times 1 + b kilograms of feedwater per kilogram of steam. A record
    metered behind the deaerator's branch must be divided by one minus this share to be the boilers' output;
    a record metered at the boilers holds it already.

    Raises
    ------
    OutOfRangeError
        P101 to P103 for water states outside the tables, P112 for a blowdown fraction outside 0 to 0.5, P102
        for water that enters hotter than it leaves.

    References
    ----------
    Heat and mass balance of a direct-contact heater; vent steam left out.

    Examples
    --------
    >>> round(deaerator_steam_share(378.15, 333.15, 10e5, 0.04), 4)
    0.0778
    """
    if not 0.0 <= blowdown_fraction <= LARGEST_BLOWDOWN_FRACTION:
        raise out_of_range(
            "P112", "blowdown over steam", blowdown_fraction, "", 0.0, LARGEST_BLOWDOWN_FRACTION
        )
    if water_in_k > feedwater_k:
        raise out_of_range("P102", "water into the deaerator", water_in_k, "K", 273.16, feedwater_k)
    entering = float(liquid_enthalpy_j_kg(water_in_k, working_pa))
    leaving = float(liquid_enthalpy_j_kg(feedwater_k, working_pa))
    steam = float(saturation(working_pa).enthalpy_vapour_j_kg)
    return (1.0 + blowdown_fraction) * (leaving - entering) / (steam - entering)


def efficiency_shift(spec: BoilerSpec, working_pa: float) -> float:
    """Efficiency gained (positive) or lost (negative) by working at another pressure than the points' [1].

    The stack follows the water side kelvin for kelvin, so the shift is
    -stack_slope_per_k (T_sat(p) - T_sat(p0)).

    Notes
    -----
    One to one is the upper bound of how far the stack follows: a boiler with an economiser follows less.

    Raises
    ------
    OutOfRangeError
        P101 for a pressure outside the tables, P113 above the boiler's largest working pressure.
    """
    if working_pa > spec.largest_working_pa * (1.0 + 1.0e-9):
        raise OutOfRangeError(
            Problem(
                code="P113",
                where=f"boiler '{spec.name}', working pressure",
                found=f"found {working_pa:g} Pa absolute",
                allowed=f"must not exceed the boiler's largest of {spec.largest_working_pa:g} Pa absolute",
            )
        )
    hotter = saturation_temperature_k(working_pa) - saturation_temperature_k(spec.efficiency_at_pa)
    return -spec.stack_slope_per_k * float(hotter)


def efficiency_factor(spec: BoilerSpec, working_pa: float) -> float:
    """Efficiency at a working pressure over efficiency at the pressure of the efficiency points [1].

    (eta + shift) / eta with eta at full load and the shift of :func:`efficiency_shift`.

    Notes
    -----
    Taking the factor of full load for every load errs by |shift| * |eta_full - eta(load)| / eta**2
    relative: with 20 K hotter water, a slope of 4.6e-4 per K and 5 points between loads, 5e-4 of the fuel.

    Raises
    ------
    OutOfRangeError
        P110 if the shifted efficiency leaves (0, 1]; P113 above the boiler's largest working pressure.
    """
    full_load = spec.efficiency_points[-1].efficiency_lhv
    shifted = full_load + efficiency_shift(spec, working_pa)
    if not 0.0 < shifted <= 1.0:
        raise out_of_range(
            "P110", f"boiler '{spec.name}', efficiency (net) at working pressure", shifted, "", 0.0, 1.0
        )
    return shifted / full_load


def working_pressure_factor(spec: BoilerSpec, working_pa: float, feedwater_k: float) -> float:
    """Fuel at a working pressure over fuel at the pressure of the efficiency points, same steam flow [1].

    dh(p) / dh(p0) over :func:`efficiency_factor`. One constant factor for the whole firing range keeps the
    fuel curve's shape, and so the plan's pieces, the same at every pressure.

    Raises
    ------
    OutOfRangeError
        As :func:`efficiency_factor` and :func:`steam_heat_j_kg`.
    """
    here = steam_heat_j_kg(working_pa, feedwater_k, spec.blowdown_fraction)
    there = steam_heat_j_kg(spec.efficiency_at_pa, feedwater_k, spec.blowdown_fraction)
    return here / there / efficiency_factor(spec, working_pa)
