"""Boiler ratings "from and at 100 degC" and actual."""

from __future__ import annotations

from evenfire.boiler.heat import steam_heat_j_kg
from evenfire.units import ATMOSPHERE_PA
from evenfire.water import saturation


def actual_rating_kg_s(from_and_at_100c_kg_s: float, working_pa: float, feedwater_k: float) -> float:
    """Actual steam output of a boiler rated "from and at 100 degC" [kg/s].

    The rating states a heat flow as the steam it would make from water at 100 degC at atmospheric pressure
    (2256.5 kJ/kg). The same heat at the working pressure and from colder feedwater makes less steam:
    q = q_100 * (h'' - h')(1 atm) / (h''(p) - h_feed). Blowdown is not part of a rating.

    Raises
    ------
    OutOfRangeError
        P101 to P103 for water states outside the tables.

    References
    ----------
    The boiler horsepower, 34.5 lb/h from and at 212 F = 33 475 Btu/h (US DOE Steam Tip Sheet 16).

    Examples
    --------
    5 t/h from and at 100 degC are 4.83 t/h at 10 bar from feedwater at 105 degC.

    >>> round(actual_rating_kg_s(5.0, 10e5, 378.15), 3)
    4.829
    """
    return from_and_at_100c_kg_s * _latent_heat_j_kg() / steam_heat_j_kg(working_pa, feedwater_k, 0.0)


def from_and_at_100c_rating_kg_s(actual_kg_s: float, working_pa: float, feedwater_k: float) -> float:
    """Rating "from and at 100 degC" of an actual steam output [kg/s]; inverse of :func:`actual_rating_kg_s`.

    >>> round(from_and_at_100c_rating_kg_s(actual_rating_kg_s(5.0, 10e5, 378.15), 10e5, 378.15), 9)
    5.0
    """
    return actual_kg_s * steam_heat_j_kg(working_pa, feedwater_k, 0.0) / _latent_heat_j_kg()


def _latent_heat_j_kg() -> float:
    at = saturation(ATMOSPHERE_PA)
    return float(at.enthalpy_vapour_j_kg - at.enthalpy_liquid_j_kg)
