"""Calorific values and CO2 of the fuels a case can name."""

from __future__ import annotations

from evenfire.errors import OutOfRangeError, Problem
from evenfire.plant import FuelSpec

J_PER_GJ = 1.0e9

_LHV_TO_HHV_AND_CO2_KG_PER_GJ: dict[str, tuple[float, float]] = {
    "natural_gas": (0.18256 / 0.20226, 56.1),
    "gas_oil": (0.25359 / 0.26978, 74.1),
    "heavy_fuel_oil": (0.26709 / 0.28413, 77.4),
    "lpg": (0.21419 / 0.22999, 63.1),
    "wood": (0.91, 0.0),
    "electricity": (1.0, 0.0),
}

FUEL_KINDS = tuple(_LHV_TO_HHV_AND_CO2_KG_PER_GJ)


def fuel_spec(kind: str) -> FuelSpec:
    """Conversion factors of a named fuel; a case may override both.

    ============== ========== ================== ===================================================
    kind           LHV / HHV  kg CO2 / GJ (LHV)  source
    ============== ========== ================== ===================================================
    natural_gas    0.90260    56.1               ratio [1]_, CO2 [2]_ Table 2.2
    gas_oil        0.93999    74.1               ratio [1]_, CO2 [2]_ Table 2.2
    heavy_fuel_oil 0.94003    77.4               ratio [1]_, CO2 [2]_ Table 2.2 (from memory)
    lpg            0.93130    63.1               ratio [1]_, CO2 [2]_ Table 2.2
    wood           0.91       0 (112 biogenic)   ratio derived at 15.6 GJ/t (about 15 % moisture); CO2 [2]_
                                                 reports it apart from fossil CO2 (112 from memory)
    electricity    1          0 at the site      state the grid's factor in the case if it counts
    ============== ========== ================== ===================================================

    Parameters
    ----------
    kind : str
        One of ``FUEL_KINDS``.

    Raises
    ------
    OutOfRangeError
        P115 for a kind not in the table.

    References
    ----------
    .. [1] UK government GHG conversion factors for company reporting 2023, v1.1: kg CO2 per kWh gross
       over kg CO2 per kWh net.
    .. [2] IPCC 2006 Guidelines for National Greenhouse Gas Inventories, Vol. 2.

    Examples
    --------
    >>> gas = fuel_spec("natural_gas")
    >>> round(gas.lhv_to_hhv, 4), round(gas.co2_kg_per_j_lhv * 1e9, 1)
    (0.9026, 56.1)
    """
    if kind not in _LHV_TO_HHV_AND_CO2_KG_PER_GJ:
        raise OutOfRangeError(
            Problem(
                code="P115",
                where="fuel kind",
                found=f"found '{kind}'",
                allowed=f"must be one of {', '.join(FUEL_KINDS)}",
            )
        )
    lhv_to_hhv, co2_kg_per_gj = _LHV_TO_HHV_AND_CO2_KG_PER_GJ[kind]
    return FuelSpec(kind=kind, lhv_to_hhv=lhv_to_hhv, co2_kg_per_j_lhv=co2_kg_per_gj / J_PER_GJ)
