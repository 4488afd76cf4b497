"""The vessels a case could buy: price and performance at a table of volumes per pressure window."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache

import numpy as np
from numpy.typing import NDArray

from evenfire.accumulator import WindowPerformance, window_performance
from evenfire.case.case import Case, VesselOffer
from evenfire.plant import WindowSpec
from evenfire.water import saturation

FloatArray = NDArray[np.float64]

_TABLE_RATIO = 1.12
"""Neighbouring volumes of the table. Chords of V**0.6 lie below the curve by less than 0.05 % then."""


@dataclass(frozen=True, slots=True, kw_only=True)
class WindowTable:
    """One pressure window's vessels at the volumes of the table; linear in between."""

    window: WindowSpec
    boiler_pa: float
    volume_m3: tuple[float, ...]
    price: tuple[float, ...]
    """Installed, before contingency, at the price date's prices [currency]."""
    performance: tuple[WindowPerformance, ...]


def boiler_working_pa(case: Case, window: WindowSpec | None) -> float:
    """Absolute pressure the boilers work at: today's, or what charging the window asks for [Pa]."""
    today = case.conditions.boiler_today_pa
    if window is None:
        return today
    return max(today, window.charged_pa + case.conditions.charging_drop_pa)


def price_on_curve(offer: VesselOffer, volume_m3: float, charged_pa: float) -> float:
    """The case's own cost curve: a power of volume, linear in charged pressure [currency]."""
    pressure = 1.0 + offer.pressure_cost_per_pa * (charged_pa - offer.reference_pa)
    size = float((volume_m3 / offer.reference_m3) ** offer.volume_exponent)
    return offer.reference_cost * size * pressure


def table_volumes_m3(offer: VesselOffer) -> tuple[float, ...]:
    """Volumes of the table, in equal ratios from the smallest to the largest [m3]."""
    span = offer.largest_m3 / offer.smallest_m3
    count = max(1, int(np.ceil(np.log(span) / np.log(_TABLE_RATIO))))
    return tuple(float(v) for v in np.geomspace(offer.smallest_m3, offer.largest_m3, count + 1))


def window_tables(case: Case) -> tuple[WindowTable, ...]:
    """Price and performance of every window at every volume of the table."""
    offer = case.vessel
    if offer is None:
        return ()
    volumes = table_volumes_m3(offer)
    return tuple(
        WindowTable(
            window=window,
            boiler_pa=boiler_working_pa(case, window),
            volume_m3=volumes,
            price=tuple(price_on_curve(offer, volume, window.charged_pa) for volume in volumes),
            performance=tuple(vessel_performance(case, volume, window) for volume in volumes),
        )
        for window in offer.windows
    )


def vessel_performance(case: Case, volume_m3: float, window: WindowSpec) -> WindowPerformance:
    """Physics of one vessel on this site."""
    if case.vessel is None:
        raise ValueError("the case offers no vessel")
    enthalpy = _steam_enthalpy_j_kg(boiler_working_pa(case, window))
    return window_performance(volume_m3, window, case.vessel.rules, enthalpy, case.conditions.ambient_k)


@cache
def _steam_enthalpy_j_kg(pressure_pa: float) -> float:
    return float(np.ravel(saturation(pressure_pa).enthalpy_vapour_j_kg)[0])


def table_price(table: WindowTable, volume_m3: float) -> float:
    """Price of a vessel, linear between the volumes of the table as in the plan [currency]."""
    return float(np.interp(volume_m3, table.volume_m3, table.price))
