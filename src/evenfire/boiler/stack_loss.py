"""Stack loss by the Siegert formula, and efficiency points from stack readings."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from evenfire.errors import OutOfRangeError, Problem, out_of_range
from evenfire.plant import EfficiencyPoint

OXYGEN_IN_AIR_PERCENT = 21.0
LARGEST_OXYGEN_PERCENT = 18.0
LARGEST_STACK_K = 773.15


@dataclass(frozen=True, slots=True, kw_only=True)
class SiegertCoefficients:
    """Coefficients of the Siegert formula for one fuel: percent of the net calorific value per kelvin."""

    a1: float
    """For CO2 in dry flue gas [%]: loss = (Tg - Ta) (a1 / CO2 + b)."""
    a2: float
    """For O2 in dry flue gas [%]: loss = (Tg - Ta) (a2 / (21 - O2) + b)."""
    b: float


SIEGERT_COEFFICIENTS: dict[str, SiegertCoefficients] = {
    "natural_gas": SiegertCoefficients(a1=0.37, a2=0.66, b=0.009),
    "gas_oil": SiegertCoefficients(a1=0.50, a2=0.68, b=0.007),
    "lpg": SiegertCoefficients(a1=0.42, a2=0.63, b=0.008),
    "heavy_fuel_oil": SiegertCoefficients(a1=0.54, a2=0.71, b=0.0046),
    "wood": SiegertCoefficients(a1=0.70, a2=0.71, b=0.0074),
}
"""Gas, gas oil and LPG: German 1. BImSchV, Annex 2 (from memory; gas seen in public code). Heavy fuel oil
and wood (15 % moisture): no published values found; derived, see :func:`siegert_coefficients`."""


@dataclass(frozen=True, slots=True, kw_only=True)
class StackReading:
    """What an analyser shows at one load."""

    load_fraction: float
    """Steam output over rated output [1]."""
    stack_k: float
    """Flue gas temperature behind the last heating surface [K]."""
    o2_percent: float
    """Oxygen in dry flue gas [% by volume]."""


def stack_loss(fuel_kind: str, stack_k: float, air_k: float, o2_percent: float) -> float:
    """Heat that leaves through the stack over fuel heat on net calorific value [1].

    (Tg - Ta) (A2 / (21 - O2) + B) / 100.

    Parameters
    ----------
    fuel_kind : str
        One with Siegert coefficients.
    stack_k, air_k : float
        Flue gas and combustion air temperature [K].
    o2_percent : float
        Oxygen in dry flue gas [%].

    Raises
    ------
    OutOfRangeError
        P115 for a fuel without coefficients; P116 for oxygen outside 0 to 18 %; P118 for a stack colder than
        the air or hotter than 773.15 K.

    Notes
    -----
    Reads 0.3 to 0.7 points low against a combustion balance of pure methane; no condensation.

    Examples
    --------
    >>> round(100 * stack_loss("natural_gas", 503.15, 293.15, 3.0), 3)
    9.59
    """
    if not air_k <= stack_k <= LARGEST_STACK_K:
        raise out_of_range("P118", "stack temperature", stack_k, "K", air_k, LARGEST_STACK_K)
    return (stack_k - air_k) * stack_slope_per_k(fuel_kind, o2_percent)


def stack_slope_per_k(fuel_kind: str, o2_percent: float = 3.0) -> float:
    """Efficiency (net) lost per kelvin of hotter stack [1/K]: (A2 / (21 - O2) + B) / 100.

    Raises
    ------
    OutOfRangeError
        P115 for a fuel without coefficients; P116 for an oxygen content outside 0 to 18 %.

    Examples
    --------
    >>> round(stack_slope_per_k("natural_gas") * 1e4, 3)
    4.567
    """
    coefficients = siegert_coefficients(fuel_kind)
    if not 0.0 <= o2_percent <= LARGEST_OXYGEN_PERCENT:
        raise out_of_range("P116", "oxygen in dry flue gas", o2_percent, "%", 0.0, LARGEST_OXYGEN_PERCENT)
    return (coefficients.a2 / (OXYGEN_IN_AIR_PERCENT - o2_percent) + coefficients.b) / 100.0


def o2_from_co2_percent(fuel_kind: str, co2_percent: float) -> float:
    """Oxygen [%] that belongs to a CO2 reading in dry flue gas [%]: 21 - A2 CO2 / A1.

    The O2 and the CO2 form of the Siegert formula give the same loss by this relation.

    Raises
    ------
    OutOfRangeError
        P115 for a fuel without coefficients; P116 for a CO2 content outside what the fuel can give with
        0 to 18 % of oxygen.

    Examples
    --------
    >>> round(o2_from_co2_percent("natural_gas", 10.0), 2)
    3.16
    """
    coefficients = siegert_coefficients(fuel_kind)
    per_oxygen = coefficients.a1 / coefficients.a2
    largest = OXYGEN_IN_AIR_PERCENT * per_oxygen
    smallest = (OXYGEN_IN_AIR_PERCENT - LARGEST_OXYGEN_PERCENT) * per_oxygen
    if not smallest <= co2_percent <= largest:
        raise out_of_range("P116", "carbon dioxide in dry flue gas", co2_percent, "%", smallest, largest)
    return OXYGEN_IN_AIR_PERCENT - co2_percent / per_oxygen


def siegert_coefficients(fuel_kind: str) -> SiegertCoefficients:
    """The Siegert coefficients of a fuel.

    For a fuel with the dry flue gas volume V_d and the water vapour volume V_w of stoichiometric combustion
    per kilogram, A2 = 2100 V_d c_d / LHV, B = 100 V_w c_w / LHV, A1 = A2 CO2_max / 21, with the heat
    capacities c_d = 1.36 and c_w = 1.52 kJ/(m3 K). So for heavy fuel oil (86 % C, 11 % H, 2 % S, 40.4 MJ/kg)
    and for wood (dry: 50 % C, 6 % H, 44 % O; 15 % moisture, 15.6 MJ/kg).

    Raises
    ------
    OutOfRangeError
        P115 for a fuel without coefficients.
    """
    if fuel_kind not in SIEGERT_COEFFICIENTS:
        raise OutOfRangeError(
            Problem(
                code="P115",
                where="fuel kind for the stack loss",
                found=f"found '{fuel_kind}'",
                allowed=f"must be one of {', '.join(SIEGERT_COEFFICIENTS)}",
            )
        )
    return SIEGERT_COEFFICIENTS[fuel_kind]


def efficiency_points_from_stack(
    fuel_kind: str,
    readings: Sequence[StackReading],
    air_k: float,
    rated_heat_w: float,
    casing_loss_w: float,
) -> tuple[EfficiencyPoint, ...]:
    """Efficiency points on net calorific value from stack readings and a casing loss constant in watts.

    Balance F (1 - stack loss) = Q + L with the steam heat Q = load * rated and the casing loss L, so
    eta = Q / F = (1 - stack loss) Q / (Q + L).

    Parameters
    ----------
    fuel_kind : str
    readings : sequence of StackReading
        In rising load.
    air_k : float
        Combustion air [K].
    rated_heat_w : float
        Heat in steam and blowdown at rated output [W].
    casing_loss_w : float
        Heat lost by radiation and convection at any load [W].

    Raises
    ------
    OutOfRangeError
        P111 for a load not above 0 or not rising; P115, P116, P118 as :func:`stack_loss`; P114 for a rated
        heat not above 0 or a negative casing loss.

    References
    ----------
    EN 12953-11 (indirect method); US DOE Steam Tip Sheet 16 (casing loss constant in watts).

    Examples
    --------
    >>> reading = StackReading(load_fraction=1.0, stack_k=503.15, o2_percent=3.0)
    >>> points = efficiency_points_from_stack("natural_gas", [reading], 293.15, 3.24e6, 25.8e3)
    >>> round(points[0].efficiency_lhv, 4)
    0.8970
    """
    if not rated_heat_w > 0.0:
        raise out_of_range("P114", "rated heat", rated_heat_w, "W", 0.0, np.inf)
    if not 0.0 <= casing_loss_w < np.inf:
        raise out_of_range("P114", "casing loss", casing_loss_w, "W", 0.0, np.inf)
    _check_rising([reading.load_fraction for reading in readings])
    points = []
    for reading in readings:
        kept = 1.0 - stack_loss(fuel_kind, reading.stack_k, air_k, reading.o2_percent)
        heat_w = reading.load_fraction * rated_heat_w
        points.append(
            EfficiencyPoint(
                load_fraction=reading.load_fraction,
                efficiency_lhv=kept * heat_w / (heat_w + casing_loss_w),
            )
        )
    return tuple(points)


def with_economiser(
    readings: Sequence[StackReading], water_in_k: float, effectiveness: float
) -> tuple[StackReading, ...]:
    """The readings behind an added economiser: Tg' = Tg - effectiveness (Tg - T_water).

    Parameters
    ----------
    water_in_k : float
        Feedwater temperature into the economiser [K].
    effectiveness : float
        Temperature drop of the gas over the largest possible one [1], 0 to 1.

    Raises
    ------
    OutOfRangeError
        P119 for an effectiveness outside [0, 1) or water hotter than the stack.

    Examples
    --------
    >>> before = [StackReading(load_fraction=1.0, stack_k=503.15, o2_percent=3.0)]
    >>> round(with_economiser(before, 378.15, 0.8)[0].stack_k, 2)
    403.15
    """
    if not 0.0 <= effectiveness < 1.0:
        raise out_of_range("P119", "economiser effectiveness", effectiveness, "", 0.0, 1.0)
    for reading in readings:
        if water_in_k > reading.stack_k:
            raise out_of_range("P119", "water into the economiser", water_in_k, "K", 0.0, reading.stack_k)
    return tuple(
        replace(reading, stack_k=reading.stack_k - effectiveness * (reading.stack_k - water_in_k))
        for reading in readings
    )


def check_points_against_stack(
    points: Sequence[EfficiencyPoint], fuel_kind: str, readings: Sequence[StackReading], air_k: float
) -> None:
    """Refuse typed efficiencies above what the stated stack readings allow, 1 - stack loss.

    The limit is interpolated between readings and held beyond the first and last one.

    Raises
    ------
    OutOfRangeError
        P110 for each point above its limit; P111 for readings not rising in load; P115, P116, P118 as
        :func:`stack_loss`.
    """
    loads = [reading.load_fraction for reading in readings]
    _check_rising(loads)
    limits = [1.0 - stack_loss(fuel_kind, each.stack_k, air_k, each.o2_percent) for each in readings]
    problems = []
    for point in points:
        limit = float(np.interp(point.load_fraction, loads, limits))
        if point.efficiency_lhv > limit:
            problems.append(
                Problem(
                    code="P110",
                    where=f"efficiency at {point.load_fraction:.0%} load",
                    found=f"found {point.efficiency_lhv:.4g} on net calorific value",
                    allowed=f"must not exceed {limit:.4g}, what the stack loss leaves at that load",
                )
            )
    if problems:
        raise OutOfRangeError(*problems)


def _check_rising(loads: Sequence[float]) -> None:
    if not loads or not loads[0] > 0.0 or bool((np.diff(loads) <= 0.0).any()):
        raise OutOfRangeError(
            Problem(
                code="P111",
                where="stack readings",
                found=f"found loads {', '.join(f'{load:g}' for load in loads) or 'none'}",
                allowed="give readings in rising load above 0",
            )
        )
