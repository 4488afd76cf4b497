"""Constants and converters between SI (used inside) and the trade's units (used at every edge).

Only ``case``, ``report`` and ``plan`` convert; every other room computes in SI.
"""

from __future__ import annotations

ATMOSPHERE_PA = 101_325.0
"""Standard atmosphere; the offset between gauge and absolute pressure."""

PA_PER_BAR = 1.0e5
J_PER_KWH = 3.6e6
J_PER_MWH = 3.6e9
SECONDS_PER_HOUR = 3600.0
SECONDS_PER_DAY = 86_400.0
HOURS_PER_YEAR = 8760.0
DAYS_PER_YEAR = 365.0
KG_PER_TONNE = 1000.0
ZERO_CELSIUS_K = 273.15


def bar_g_to_pa(pressure_bar_g: float) -> float:
    """Absolute pressure [Pa] from gauge pressure [bar g].

    >>> bar_g_to_pa(0.0)
    101325.0
    """
    return pressure_bar_g * PA_PER_BAR + ATMOSPHERE_PA


def pa_to_bar_g(pressure_pa: float) -> float:
    """Gauge pressure [bar g] from absolute pressure [Pa]."""
    return (pressure_pa - ATMOSPHERE_PA) / PA_PER_BAR


def bar_abs_to_pa(pressure_bar_abs: float) -> float:
    """Absolute pressure [Pa] from absolute pressure [bar]."""
    return pressure_bar_abs * PA_PER_BAR


def pa_to_bar_abs(pressure_pa: float) -> float:
    """Absolute pressure [bar] from absolute pressure [Pa]."""
    return pressure_pa / PA_PER_BAR


def degc_to_k(temperature_degc: float) -> float:
    """Temperature [K] from temperature [degC]."""
    return temperature_degc + ZERO_CELSIUS_K


def k_to_degc(temperature_k: float) -> float:
    """Temperature [degC] from temperature [K]."""
    return temperature_k - ZERO_CELSIUS_K


def kg_h_to_kg_s(flow_kg_h: float) -> float:
    """Mass flow [kg/s] from mass flow [kg/h]."""
    return flow_kg_h / SECONDS_PER_HOUR


def kg_s_to_kg_h(flow_kg_s: float) -> float:
    """Mass flow [kg/h] from mass flow [kg/s]."""
    return flow_kg_s * SECONDS_PER_HOUR


def kg_s_to_t_h(flow_kg_s: float) -> float:
    """Mass flow [t/h] from mass flow [kg/s]."""
    return flow_kg_s * SECONDS_PER_HOUR / KG_PER_TONNE


def t_h_to_kg_s(flow_t_h: float) -> float:
    """Mass flow [kg/s] from mass flow [t/h]."""
    return flow_t_h * KG_PER_TONNE / SECONDS_PER_HOUR
