"""Net and gross calorific value of the case's fuel."""

from __future__ import annotations

from evenfire.boiler import fuel_spec
from evenfire.case.schema_site import Fuel


def lhv_to_hhv(fuel: Fuel) -> float:
    """Net over gross calorific value of the case's fuel, stated or published [1]."""
    return fuel.lhv_to_hhv if fuel.lhv_to_hhv is not None else fuel_spec(fuel.kind).lhv_to_hhv


def net_efficiency(efficiency_percent: float, basis: str, fuel: Fuel) -> float:
    """Efficiency on net calorific value [1] from a typed one [%] on its basis."""
    efficiency = efficiency_percent / 100.0
    return efficiency / lhv_to_hhv(fuel) if basis == "hhv" else efficiency
