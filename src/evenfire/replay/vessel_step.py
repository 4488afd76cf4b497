"""One step of the vessel's two-phase balance for the replay: amounts in, state out, compiled.

The state is mass, energy and ln(p). Mass and energy are moved by exactly the amounts that the step reports,
so the balances close to rounding whatever the pressure solution's own error is.
"""

from __future__ import annotations

import math

import numpy as np
import numpy.typing as npt
from numba import njit

from evenfire.accumulator.tables import (
    ENERGY_PER_MASS,
    ENERGY_PER_VOLUME,
    ENTHALPY_LIQUID,
    ENTHALPY_VAPOUR,
    TEMPERATURE,
    spline_value,
)

FloatArray = npt.NDArray[np.float64]

LOG_PRESSURE_TOLERANCE = 1.0e-10
NEWTON_STEPS = 12


@njit(cache=True, inline="always")  # type: ignore[untyped-decorator]  # numba has no types
def _cubic(
    grid: FloatArray, coefficients: FloatArray, which: int, log_pressure: float
) -> tuple[float, float]:
    """Value and slope of one property."""
    last = coefficients.shape[1]
    interval = min(max(int((log_pressure - grid[0]) / grid[1]), 0), last - 1)
    x = log_pressure - grid[0] - interval * grid[1]
    c0 = coefficients[which, interval, 0]
    c1 = coefficients[which, interval, 1]
    c2 = coefficients[which, interval, 2]
    return (
        ((c0 * x + c1) * x + c2) * x + coefficients[which, interval, 3],
        (3.0 * c0 * x + 2.0 * c1) * x + c2,
    )


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def vessel_after(
    grid: FloatArray,
    coefficients: FloatArray,
    volume_m3: float,
    loss_w_per_k: float,
    ambient_k: float,
    mass_kg: float,
    energy_j: float,
    log_pressure: float,
    charge_kg: float,
    charge_enthalpy_j_kg: float,
    discharge_kg: float,
    make_up_kg: float,
    make_up_enthalpy_j_kg: float,
    drain_kg: float,
    step_s: float,
) -> tuple[float, float, float, float, float, float]:
    """State after given amounts, by the midpoint rule: mass, energy, ln(p), and energy that left [J].

    The last three values are the energy of discharged steam, of drained water and the heat lost. ln(p) is NaN
    where the state leaves the table.
    """
    moved = charge_kg + make_up_kg - discharge_kg - drain_kg
    gain = charge_kg * charge_enthalpy_j_kg + make_up_kg * make_up_enthalpy_j_kg
    a, slope_a = _cubic(grid, coefficients, ENERGY_PER_MASS, log_pressure)
    _, slope_k = _cubic(grid, coefficients, ENERGY_PER_VOLUME, log_pressure)
    stiffness = slope_a * mass_kg + slope_k * volume_m3
    steam, steam_slope = _cubic(grid, coefficients, ENTHALPY_VAPOUR, log_pressure)
    water, water_slope = _cubic(grid, coefficients, ENTHALPY_LIQUID, log_pressure)
    kelvin, kelvin_slope = _cubic(grid, coefficients, TEMPERATURE, log_pressure)
    loss_rate = loss_w_per_k * step_s
    change = gain - discharge_kg * steam - drain_kg * water - loss_rate * (kelvin - ambient_k)
    half = 0.5 * (change - a * moved) / stiffness
    middle = log_pressure + half
    if abs(half) > 1.0e-4:
        steam, _ = _cubic(grid, coefficients, ENTHALPY_VAPOUR, middle)
        water, _ = _cubic(grid, coefficients, ENTHALPY_LIQUID, middle)
        kelvin, _ = _cubic(grid, coefficients, TEMPERATURE, middle)
    else:
        steam += steam_slope * half
        water += water_slope * half
        kelvin += kelvin_slope * half
    discharge_j = discharge_kg * steam
    drain_j = drain_kg * water
    loss_j = loss_rate * (kelvin - ambient_k)
    mass_kg += moved
    energy_j += gain - discharge_j - drain_j - loss_j
    x = log_pressure + 2.0 * half
    first, last = grid[0], grid[0] + grid[1] * coefficients.shape[1]
    for _ in range(NEWTON_STEPS):
        if not first <= x <= last:
            return mass_kg, energy_j, math.nan, discharge_j, drain_j, loss_j
        a, slope_a = _cubic(grid, coefficients, ENERGY_PER_MASS, x)
        k, slope_k = _cubic(grid, coefficients, ENERGY_PER_VOLUME, x)
        correction = (a * mass_kg + k * volume_m3 - energy_j) / (slope_a * mass_kg + slope_k * volume_m3)
        x -= correction
        if abs(correction) < LOG_PRESSURE_TOLERANCE:
            break
    return mass_kg, energy_j, x, discharge_j, drain_j, loss_j


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def to_target_kg(
    grid: FloatArray,
    coefficients: FloatArray,
    volume_m3: float,
    mass_kg: float,
    energy_j: float,
    enthalpy_j_kg: float,
    target_log_pressure: float,
) -> float:
    """Steam of one enthalpy to take out so that the vessel comes to a pressure; negative to put in [kg]."""
    a = spline_value(grid, coefficients, ENERGY_PER_MASS, target_log_pressure)
    k = spline_value(grid, coefficients, ENERGY_PER_VOLUME, target_log_pressure)
    amount: float = (energy_j - a * mass_kg - k * volume_m3) / (enthalpy_j_kg - a)
    return amount
