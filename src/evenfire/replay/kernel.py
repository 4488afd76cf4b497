"""The compiled simulation: one pass over the record, burners and valves deciding from what is known by then.

Header: the water of all hot boilers is one buffer of steam ``y`` [kg], empty at cut-in (0), full at cut-out.
In each step the burners decide from the state at its beginning and the steam meter of the step before; the
valves then share out what is made and what the buffer gives. docs/replay.md has the equations.
"""

from __future__ import annotations

import math

import numpy as np
from numba import njit
from numpy.typing import NDArray

from evenfire.replay.vessel_step import to_target_kg, vessel_after
from evenfire.units import ATMOSPHERE_PA

FloatArray = NDArray[np.float64]

BAND, SMOOTHED, GIVEN = 0, 1, 2
SAFETY_LEVEL = 1.5
"""Boiler level at which the safety valve opens, in bands above cut-in [1]."""
LOW_LEVEL = -0.5
"""Boiler level below which carry-over of water must be feared [1]."""
TOTALS = 22
(
    DEMAND,
    SUPPLIED,
    UNMET,
    VENTED,
    MADE,
    STANDING,
    SERVICE,
    CHARGED,
    DISCHARGED,
    MAKE_UP,
    DRAIN,
    VESSEL_LOSS_J,
    LOWEST_PROCESS,
    LOWEST_BOILER,
    BOILER_LOW_S,
    RELEASE_LIMITED_S,
    VESSEL_EMPTY_S,
    VESSEL_FULL_S,
    BUFFER_CHANGE,
    VESSEL_CHANGE_KG,
    VESSEL_ENERGY_LACK_J,
    VESSEL_ENERGY_THROUGH_J,
) = range(TOTALS)
RUN_VALUES = 9
(
    RUN_STEAM,
    RUN_FUEL,
    RUN_STANDING_J,
    RUN_START_J,
    RUN_COLD_J,
    RUN_FIRING,
    RUN_HOT,
    RUN_STARTS,
    RUN_COLD,
) = range(RUN_VALUES)


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def _fuel_w(curve: FloatArray, lowest: float, rated: float, output: float) -> float:
    """Fuel power at an output between lowest and rated, linear between the curve's points."""
    last = curve.size - 1
    if rated <= lowest:
        full: float = curve[last]
        return full
    x = min(max((output - lowest) / (rated - lowest) * last, 0.0), float(last))
    i = min(int(x), last - 1)
    power: float = curve[i] + (x - i) * (curve[i + 1] - curve[i])
    return power


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def _inventory_kg(log_pressures: FloatArray, masses: FloatArray, x: float) -> float:
    """Mass that the vessel holds at a pressure on its way down from the charged state."""
    last = masses.size - 1
    i: int = min(max(int(np.searchsorted(log_pressures, x)) - 1, 0), last - 1)
    share = (x - log_pressures[i]) / (log_pressures[i + 1] - log_pressures[i])
    held: float = masses[i] + min(max(share, 0.0), 1.0) * (masses[i + 1] - masses[i])
    return held


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def run(
    demand_kg_s: FloatArray,
    step_s: float,
    parts: int,
    weekday: NDArray[np.int64],
    kind: int,
    smoothing_s: float,
    level_set: float,
    gain: float,
    start_level: float,
    stop_level: float,
    stagger: float,
    surplus: float,
    hold: float,
    protect: float,
    sequence: NDArray[np.int64],
    service: NDArray[np.bool_],
    given: FloatArray,
    rated: FloatArray,
    lowest: FloatArray,
    fuel: FloatArray,
    standing_w: FloatArray,
    standing_kg_s: FloatArray,
    start_j: FloatArray,
    cold_start_j: FloatArray,
    minimum_firing_s: FloatArray,
    minimum_off_s: FloatArray,
    ramp: FloatArray,
    buffer_kg: FloatArray,
    band_pa: FloatArray,
    working_pa: float,
    least_pa: float,
    process_pa: float,
    grid: FloatArray,
    coefficients: FloatArray,
    volume: float,
    loss_w_per_k: float,
    ambient_k: float,
    charging_enthalpy: float,
    make_up_enthalpy: float,
    level_control_s: float,
    charged_pa: float,
    discharged_pa: float,
    release_per_pa: float,
    inventory_log: FloatArray,
    inventory_kg: FloatArray,
    vessel_mass: float,
    vessel_energy: float,
    vessel_log: float,
) -> tuple[FloatArray, FloatArray, NDArray[np.float32]]:
    """Totals (as named above), per boiler (boilers, values), and traces (boilers + 6, steps).

    Traces: supplied, charge, discharge [kg/s], boiler, process, vessel pressure [Pa], then outputs [kg/s].
    """
    boilers, steps = rated.size, demand_kg_s.size
    totals = np.zeros(TOTALS)
    runs = np.zeros((boilers, RUN_VALUES))
    traces = np.zeros((boilers + 6, steps), dtype=np.float32)
    lit = np.zeros(boilers, dtype=np.bool_)
    since = np.full(boilers, 1.0e9)
    output = np.zeros(boilers)
    hot = np.zeros(boilers, dtype=np.bool_)
    dt = step_s / parts
    smoothed, metered = demand_kg_s[0], demand_kg_s[0]
    follow = 1.0 - math.exp(-dt / smoothing_s) if smoothing_s > 0.0 else 1.0
    has_vessel = volume > 0.0
    first_mass = vessel_mass
    charged_log = math.log(charged_pa) if has_vessel else 0.0
    discharged_log = math.log(discharged_pa) if has_vessel else 0.0
    y = 0.0
    pool = 0.0
    per_pa = 0.0
    day = -1
    first_y = 0.0
    totals[LOWEST_PROCESS] = process_pa
    totals[LOWEST_BOILER] = working_pa
    for t in range(steps):
        if weekday[t] != day:
            day = weekday[t]
            for b in range(boilers):
                if service[b, day] and not hot[b]:
                    hot[b] = True
                    if t > 0:
                        runs[b, RUN_COLD_J] += cold_start_j[b]
                        runs[b, RUN_COLD] += 1.0
                        totals[SERVICE] += 0.5 * buffer_kg[b]
                    y += 0.5 * buffer_kg[b]
                elif hot[b] and not service[b, day]:
                    share = y * buffer_kg[b] / pool if pool > 0.0 else 0.0
                    hot[b], lit[b], output[b], since[b] = False, False, 0.0, 1.0e9
                    y -= share
                    totals[SERVICE] -= share
            pool = 0.0
            per_pa = 0.0
            for b in range(boilers):
                if hot[b]:
                    pool += buffer_kg[b]
                    per_pa += buffer_kg[b] / band_pa[b]
            if t == 0:
                first_y = y
        floor = max(protect * pool, pool / 2.0 - (working_pa - least_pa) * per_pa)
        demand = demand_kg_s[t]
        step_supplied, step_charge, step_discharge = 0.0, 0.0, 0.0
        for _ in range(parts):
            smoothed += follow * (metered - smoothed)
            metered = demand
            boiler_level = y / pool if pool > 0.0 else 0.0
            if has_vessel:
                level = (math.exp(vessel_log) - discharged_pa) / (charged_pa - discharged_pa)
            else:
                level = boiler_level
            capacity = 0.0
            for b in range(boilers):
                if hot[b]:
                    capacity += rated[b]
            wanted = gain * capacity * (level_set - level)
            if kind == SMOOTHED:
                wanted += smoothed
            place = 0
            lit_capacity = 0.0
            for j in range(sequence.size):
                b = sequence[j]
                since[b] += dt
                if not hot[b]:
                    continue
                if kind == GIVEN and not math.isnan(given[b, t]):
                    light = given[b, t] > 0.0
                    out = not light
                elif kind == GIVEN:
                    light = not lit[b] and y <= 0.0 and since[b] >= minimum_off_s[b]
                    out = lit[b] and y >= pool
                else:
                    lower = stagger * place
                    light = not lit[b] and level < start_level - lower and since[b] >= minimum_off_s[b]
                    if has_vessel:
                        light = light or (
                            not lit[b] and boiler_level < -0.25 * (place + 1) and since[b] >= minimum_off_s[b]
                        )
                    out = lit[b] and level > stop_level - lower and since[b] >= minimum_firing_s[b]
                    out = out or (lit[b] and boiler_level >= 1.0)
                if light and not lit[b]:
                    lit[b], since[b], output[b] = True, 0.0, 0.0
                    runs[b, RUN_STARTS] += 1.0
                    runs[b, RUN_START_J] += start_j[b]
                elif out and lit[b]:
                    lit[b], since[b], output[b] = False, 0.0, 0.0
                if lit[b]:
                    lit_capacity += rated[b]
                place += 1
            made = 0.0
            for b in range(boilers):
                if not hot[b]:
                    continue
                runs[b, RUN_HOT] += dt
                if not lit[b]:
                    drained = standing_kg_s[b] * dt
                    y -= drained
                    totals[STANDING] += drained
                    # What standing takes from the buffer the burner makes good later as steam; that steam
                    # is taken off here so that standing costs its own fuel and no more.
                    runs[b, RUN_FUEL] -= drained * fuel[b, 0] / lowest[b]
                    runs[b, RUN_STANDING_J] += standing_w[b] * dt
                    continue
                if kind == GIVEN:
                    output[b] = lowest[b] if math.isnan(given[b, t]) else given[b, t]
                else:
                    target = min(max(wanted * rated[b] / lit_capacity, lowest[b]), rated[b])
                    before = max(output[b], lowest[b])
                    output[b] = min(target, before + ramp[b] * dt)
                made += output[b] * dt
                runs[b, RUN_STEAM] += output[b] * dt
                runs[b, RUN_FUEL] += _fuel_w(fuel[b], lowest[b], rated[b], output[b]) * dt
                runs[b, RUN_FIRING] += dt
            totals[MADE] += made
            asked = demand * dt
            held = y + made
            direct = asked
            discharge, charge = 0.0, 0.0
            if has_vessel:
                direct = min(asked, max(0.0, held - hold * pool))
                rest = asked - direct
                if rest > 0.0:
                    enthalpy = charging_enthalpy
                    there = max(
                        0.0,
                        to_target_kg(
                            grid,
                            coefficients,
                            volume,
                            vessel_mass,
                            vessel_energy,
                            enthalpy,
                            discharged_log,
                        ),
                    )
                    limit = release_per_pa * math.exp(vessel_log) * dt
                    discharge = min(rest, there, limit)
                    if discharge < rest:
                        if there < limit:
                            totals[VESSEL_EMPTY_S] += dt
                        else:
                            totals[RELEASE_LIMITED_S] += dt
                    direct += min(rest - discharge, max(0.0, held - direct - floor))
                elif held - direct > surplus * pool:
                    room = max(
                        0.0,
                        -to_target_kg(
                            grid,
                            coefficients,
                            volume,
                            vessel_mass,
                            vessel_energy,
                            charging_enthalpy,
                            charged_log,
                        ),
                    )
                    charge = min(held - direct - surplus * pool, room)
                    if charge == room:
                        totals[VESSEL_FULL_S] += dt
            else:
                direct = min(asked, max(0.0, held - floor))
            y = held - direct - charge
            vented = max(0.0, y - SAFETY_LEVEL * pool)
            y -= vented
            supplied = direct + discharge
            unmet = asked - supplied
            if unmet < 1.0e-9 * asked:
                unmet = 0.0
            totals[DEMAND] += asked
            totals[SUPPLIED] += supplied
            totals[UNMET] += unmet
            totals[VENTED] += vented
            totals[CHARGED] += charge
            totals[DISCHARGED] += discharge
            if pool > 0.0 and y < LOW_LEVEL * pool:
                totals[BOILER_LOW_S] += dt
            boiler_pa = working_pa + (y - pool / 2.0) / per_pa if per_pa > 0.0 else least_pa
            totals[LOWEST_BOILER] = min(totals[LOWEST_BOILER], boiler_pa)
            if has_vessel:
                lacking = _inventory_kg(inventory_log, inventory_kg, vessel_log) - vessel_mass
                correction = lacking * min(1.0, dt / level_control_s)
                make_up, drain = max(correction, 0.0), max(-correction, 0.0)
                before_energy = vessel_energy
                vessel_mass, vessel_energy, vessel_log, discharge_j, drain_j, loss_j = vessel_after(
                    grid,
                    coefficients,
                    volume,
                    loss_w_per_k,
                    ambient_k,
                    vessel_mass,
                    vessel_energy,
                    vessel_log,
                    charge,
                    charging_enthalpy,
                    discharge,
                    make_up,
                    make_up_enthalpy,
                    drain,
                    dt,
                )
                gained = charge * charging_enthalpy + make_up * make_up_enthalpy
                totals[MAKE_UP] += make_up
                totals[DRAIN] += drain
                totals[VESSEL_LOSS_J] += loss_j
                totals[VESSEL_ENERGY_LACK_J] += (
                    vessel_energy - before_energy - gained + discharge_j + drain_j + loss_j
                )
                totals[VESSEL_ENERGY_THROUGH_J] += gained + discharge_j
            step_supplied += supplied
            step_charge += charge
            step_discharge += discharge
        step_process = process_pa
        if step_supplied < demand * step_s * (1.0 - 1.0e-9):
            # Users take steam in proportion to gauge pressure: none at atmospheric pressure.
            share = step_supplied / (demand * step_s)
            step_process = ATMOSPHERE_PA + (process_pa - ATMOSPHERE_PA) * share
        totals[LOWEST_PROCESS] = min(totals[LOWEST_PROCESS], step_process)
        traces[0, t] = step_supplied / step_s
        traces[1, t] = step_charge / step_s
        traces[2, t] = step_discharge / step_s
        traces[3, t] = boiler_pa
        traces[4, t] = step_process
        traces[5, t] = math.exp(vessel_log) if has_vessel else np.nan
        for b in range(boilers):
            traces[6 + b, t] = output[b]
    totals[BUFFER_CHANGE] = y - first_y
    totals[VESSEL_CHANGE_KG] = vessel_mass - first_mass
    return totals, runs, traces
