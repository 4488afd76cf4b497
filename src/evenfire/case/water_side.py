"""Blowdown and deaerator of a case: water and heat beside the steam that leaves the boiler house."""

from __future__ import annotations

from evenfire.boiler import blowdown_over_steam, deaerator_steam_share
from evenfire.case.schema_site import Steam
from evenfire.units import bar_g_to_pa, degc_to_k

LARGEST_BLOWDOWN_OVER_FEEDWATER_PERCENT = 33.0


def blowdown_fraction(steam: Steam) -> float:
    """Blowdown over steam made [1], from either basis."""
    stated = steam.blowdown_percent / 100.0
    return blowdown_over_steam(stated) if steam.blowdown_basis == "feedwater" else stated


def deaerator_share(inlet_degc: float | None, steam: Steam) -> float:
    """Deaerator steam that the record's meter misses over all steam made [1]; 0 where none is stated."""
    if inlet_degc is None:
        return 0.0
    return deaerator_steam_share(
        degc_to_k(steam.feedwater_temperature_degc),
        degc_to_k(inlet_degc),
        bar_g_to_pa(steam.boiler_pressure_bar_g),
        blowdown_fraction(steam),
    )
