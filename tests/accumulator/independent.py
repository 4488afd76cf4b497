"""The vessel balance over the independent property library iapws, integrated by scipy."""

from functools import lru_cache

import numpy as np
from iapws.iapws97 import _PSat_T, _Region1, _Region2, _TSat_P
from scipy.integrate import solve_ivp
from scipy.optimize import brentq


@lru_cache(maxsize=200_000)
def phases(temperature_k: float) -> tuple[float, float, float, float, float, float]:
    """v', v'' [m3/kg], u', u'', h', h'' [J/kg] on the saturation line below 623 K."""
    pressure_mpa = _PSat_T(temperature_k)
    liquid, vapour = _Region1(temperature_k, pressure_mpa), _Region2(temperature_k, pressure_mpa)
    h_liquid, h_vapour = liquid["h"] * 1e3, vapour["h"] * 1e3
    return (
        liquid["v"],
        vapour["v"],
        h_liquid - pressure_mpa * 1e6 * liquid["v"],
        h_vapour - pressure_mpa * 1e6 * vapour["v"],
        h_liquid,
        h_vapour,
    )


def boiling_k(pressure_pa: float) -> float:
    return _TSat_P(pressure_pa / 1e6)


def boiling_pa(temperature_k: float) -> float:
    return _PSat_T(temperature_k) * 1e6


def state(pressure_pa: float, fill: float) -> tuple[float, float]:
    """Mass [kg] and energy [J] per cubic metre."""
    v1, v2, u1, u2, _, _ = phases(boiling_k(pressure_pa))
    return fill / v1 + (1 - fill) / v2, fill / v1 * u1 + (1 - fill) / v2 * u2


def temperature_of(mass: float, energy: float) -> float:
    """Temperature at which both phases share mass and energy per cubic metre."""

    def excess(temperature_k: float) -> float:
        v1, v2, u1, u2, _, _ = phases(temperature_k)
        quality = (1.0 / mass - v1) / (v2 - v1)
        return mass * (u1 + quality * (u2 - u1)) - energy

    return brentq(excess, 300.0, 622.0, xtol=1e-10, rtol=1e-14)


def fill_of(mass: float, temperature_k: float) -> float:
    v1, v2, *_ = phases(temperature_k)
    return (mass - 1 / v2) / (1 / v1 - 1 / v2)


def discharged_kg_m3(high_pa: float, low_pa: float, fill: float) -> float:
    """Steam released between two pressures per cubic metre: dU/dm = h''(T(m, U)), by DOP853."""
    mass, energy = state(high_pa, fill)
    low_k = boiling_k(low_pa)

    def slope(_: float, released_and_energy: np.ndarray) -> list[float]:
        temperature = temperature_of(mass - released_and_energy[0], released_and_energy[1])
        return [1.0, -phases(temperature)[5]]

    def reached(_: float, released_and_energy: np.ndarray) -> float:
        return temperature_of(mass - released_and_energy[0], released_and_energy[1]) - low_k

    reached.terminal = True
    solution = solve_ivp(
        slope,
        (0.0, 0.5 * mass),
        [0.0, energy],
        method="DOP853",
        events=reached,
        rtol=1e-9,
        atol=1e-9,
        max_step=4.0,
    )
    return float(solution.y_events[0][0][0])


def driven(
    start,
    volume,
    charge,
    charge_enthalpy,
    discharge,
    loss_w_per_k,
    ambient_k,
    make_up,
    make_up_enthalpy,
    times,
):
    """(mass, pressure) of a vessel driven by flows that are functions of time, at the given times."""

    def slope(time: float, mass_and_energy: np.ndarray) -> list[float]:
        mass, energy = mass_and_energy
        temperature = temperature_of(mass / volume, energy / volume)
        into, out, water = charge(time), discharge(time), make_up(time)
        return [
            into + water - out,
            into * charge_enthalpy
            + water * make_up_enthalpy
            - out * phases(temperature)[5]
            - loss_w_per_k * (temperature - ambient_k),
        ]

    solution = solve_ivp(
        slope, (times[0], times[-1]), start, t_eval=times, rtol=1e-8, atol=1e-3, max_step=60.0
    )
    mass, energy = solution.y
    pressure = [boiling_pa(temperature_of(m / volume, u / volume)) for m, u in zip(mass, energy, strict=True)]
    return mass, np.array(pressure)
