"""How far charging raises the water level, and the fill that it may start from."""

from __future__ import annotations

import numpy as np

from evenfire.errors import OutOfRangeError, Problem, out_of_range
from evenfire.water import saturation


def fill_after_charging(
    liquid_fill: float, low_pa: float, high_pa: float, charging_enthalpy_j_kg: float
) -> float:
    """Liquid volume fraction after charging steam from one pressure to a higher one [1].

    Charging at constant enthalpy h has a closed form: with U/V = a m + k (m the density of both phases),
    m2 = (m1 (a1 - h) + k1 - k2) / (a2 - h). A result above 1 means the vessel floods on the way.

    Parameters
    ----------
    liquid_fill : float
        Before charging, at ``low_pa`` [1], 0 to 1.
    low_pa, high_pa : float
        Absolute pressure before and after [Pa].
    charging_enthalpy_j_kg : float
        Enthalpy of the charging steam [J/kg], more than that of the boiling water.

    Raises
    ------
    OutOfRangeError
        P121 for a fill outside 0 to 1, P125 for charging steam not richer than boiling water.

    References
    ----------
    Derived from the balances; equal to integrating dU = h dm.

    Examples
    --------
    >>> round(fill_after_charging(0.75, 5e5, 10e5, 2780.6672e3), 6)
    0.820508
    """
    if not 0.0 <= liquid_fill <= 1.0:
        raise out_of_range("P121", "liquid fill before charging", liquid_fill, "", 0.0, 1.0)
    (a1, a2), (k1, k2), liquid, vapour = _lines(low_pa, high_pa, charging_enthalpy_j_kg)
    before = liquid_fill * liquid[0] + (1.0 - liquid_fill) * vapour[0]
    after = (before * (a1 - charging_enthalpy_j_kg) + k1 - k2) / (a2 - charging_enthalpy_j_kg)
    return float((after - vapour[1]) / (liquid[1] - vapour[1]))


def largest_fill_before_charging(low_pa: float, high_pa: float, charging_enthalpy_j_kg: float) -> float:
    """Liquid volume fraction from which charging to a higher pressure just fills the vessel [1].

    With ``low_pa`` the charged pressure and ``high_pa`` the boiler's, the charged fill must stay below it, or
    a surplus valve that fails open floods the vessel.

    Examples
    --------
    >>> round(largest_fill_before_charging(10e5, 11e5, 2780.6672e3), 3)
    0.986
    """
    (a1, a2), (k1, k2), liquid, vapour = _lines(low_pa, high_pa, charging_enthalpy_j_kg)
    before = (liquid[1] * (a2 - charging_enthalpy_j_kg) + k2 - k1) / (a1 - charging_enthalpy_j_kg)
    return float((before - vapour[0]) / (liquid[0] - vapour[0]))


def _lines(
    low_pa: float, high_pa: float, charging_enthalpy_j_kg: float
) -> tuple[tuple[float, float], tuple[float, float], tuple[float, float], tuple[float, float]]:
    at = saturation(np.array([low_pa, high_pa]))
    if not charging_enthalpy_j_kg > at.enthalpy_liquid_j_kg.max():
        raise OutOfRangeError(
            Problem(
                code="P125",
                where="charging steam",
                found=f"found {charging_enthalpy_j_kg:g} J/kg",
                allowed=f"must exceed that of boiling water, {at.enthalpy_liquid_j_kg.max():g} J/kg",
            )
        )
    v_liquid = 1.0 / at.density_liquid_kg_m3
    k = (at.internal_energy_vapour_j_kg - at.internal_energy_liquid_j_kg) / (
        1.0 / at.density_vapour_kg_m3 - v_liquid
    )
    a = at.internal_energy_liquid_j_kg - v_liquid * k
    liquid, vapour = at.density_liquid_kg_m3, at.density_vapour_kg_m3
    return (
        (float(a[0]), float(a[1])),
        (float(k[0]), float(k[1])),
        (float(liquid[0]), float(liquid[1])),
        (float(vapour[0]), float(vapour[1])),
    )
