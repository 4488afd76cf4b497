"""A plant as numbers for the compiled simulation, from the same physics as the plan's."""

from __future__ import annotations

import math
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from evenfire.accumulator.balance import liquid_fill_of, state_at
from evenfire.accumulator.geometry import free_surface_m2, level_m, vessel_shape
from evenfire.accumulator.tables import saturation_table
from evenfire.accumulator.vessel import LEVEL_CONTROL_S, SteamAccumulator
from evenfire.boiler.cycling import standing_steam_kg_s, start_fuel_j_lhv
from evenfire.boiler.modes import operating_modes
from evenfire.plant import PlantSpec
from evenfire.units import PA_PER_BAR, SECONDS_PER_HOUR
from evenfire.water import saturation

FloatArray = NDArray[np.float64]

CURVE_POINTS = 64


@dataclass(frozen=True, slots=True, kw_only=True)
class BoilerHouse:
    """All boilers on one header."""

    rated_kg_s: FloatArray = field(repr=False)
    lowest_kg_s: FloatArray = field(repr=False)
    """Smallest continuous firing."""
    fuel_w: FloatArray = field(repr=False)
    """Fuel power at evenly spaced outputs from lowest to rated, shape (boilers, points)."""
    standing_w: FloatArray = field(repr=False)
    """Fuel that makes good the standing loss of a hot boiler, burner off."""
    standing_kg_s: FloatArray = field(repr=False)
    """The same as steam of the boiler's own water."""
    start_j: FloatArray = field(repr=False)
    cold_start_j: FloatArray = field(repr=False)
    minimum_firing_s: FloatArray = field(repr=False)
    minimum_off_s: FloatArray = field(repr=False)
    ramp_kg_s2: FloatArray = field(repr=False)
    buffer_kg: FloatArray = field(repr=False)
    band_pa: FloatArray = field(repr=False)
    working_pa: float
    least_pa: float
    """Header pressure at which no more can be drawn: that of the process and the valve's drop."""


@dataclass(frozen=True, slots=True, kw_only=True)
class VesselHouse:
    """The vessel and its limits; a volume of zero stands for none."""

    volume_m3: float
    loss_w_per_k: float
    ambient_k: float
    charging_enthalpy_j_kg: float
    make_up_enthalpy_j_kg: float
    level_control_s: float
    charged_pa: float
    discharged_pa: float
    start_mass_kg: float
    start_energy_j: float
    start_log_pressure: float
    """State at the start of a record: midway between discharged and charged pressure."""
    release_kg_s_per_pa: float
    """Release limit per pascal of vessel pressure, at the free surface of the discharged level."""
    inventory_log_pressure: FloatArray = field(repr=False)
    inventory_kg: FloatArray = field(repr=False)


def boiler_house(plant: PlantSpec) -> BoilerHouse:
    """The boilers of a plant at its working pressure.

    Raises
    ------
    OutOfRangeError
        As :func:`evenfire.boiler.modes.operating_modes`.
    """
    working, feedwater = plant.boiler_working_pa, plant.conditions.feedwater_k
    curves, standing = [], []
    for spec in plant.boilers:
        modes = operating_modes(spec, working, feedwater)
        firing = [mode for mode in modes if mode.firing]
        output = np.concatenate([mode.output_kg_s for mode in firing])
        fuel = np.concatenate([mode.fuel_w_lhv for mode in firing])
        points = np.linspace(firing[0].low_kg_s, firing[-1].high_kg_s, CURVE_POINTS)
        curves.append(np.interp(points, output, fuel))
        standing.append(float(modes[0].fuel_w_lhv[0]))
    specs = plant.boilers
    return BoilerHouse(
        rated_kg_s=np.array([x.rated_kg_s for x in specs]),
        lowest_kg_s=np.array([x.rated_kg_s / x.turndown for x in specs]),
        fuel_w=np.array(curves).reshape(len(specs), CURVE_POINTS),
        standing_w=np.array(standing),
        standing_kg_s=np.array([standing_steam_kg_s(x, working) for x in specs]),
        start_j=np.array([start_fuel_j_lhv(x, working) for x in specs]),
        cold_start_j=np.array([x.cold_start_energy_j for x in specs]),
        minimum_firing_s=np.array([x.minimum_firing_s for x in specs]),
        minimum_off_s=np.array([x.minimum_off_s for x in specs]),
        ramp_kg_s2=np.array([x.ramp_kg_s2 for x in specs]),
        buffer_kg=np.array([x.buffer_kg for x in specs]),
        band_pa=np.array([x.burner_band_pa for x in specs]),
        working_pa=working,
        least_pa=plant.conditions.process_pa + plant.conditions.discharging_drop_pa,
    )


def vessel_house(plant: PlantSpec) -> VesselHouse:
    """The vessel of a plant, charged with the boilers' steam.

    Raises
    ------
    OutOfRangeError
        As :class:`evenfire.accumulator.vessel.SteamAccumulator`.
    """
    spec = plant.vessel
    if spec is None:
        return VesselHouse(
            volume_m3=0.0,
            loss_w_per_k=0.0,
            ambient_k=plant.conditions.ambient_k,
            charging_enthalpy_j_kg=0.0,
            make_up_enthalpy_j_kg=0.0,
            level_control_s=LEVEL_CONTROL_S,
            charged_pa=0.0,
            discharged_pa=0.0,
            start_mass_kg=0.0,
            start_energy_j=0.0,
            start_log_pressure=0.0,
            release_kg_s_per_pa=0.0,
            inventory_log_pressure=np.zeros(2),
            inventory_kg=np.zeros(2),
        )
    enthalpy = float(saturation(plant.boiler_working_pa).enthalpy_vapour_j_kg)
    vessel = SteamAccumulator(spec, enthalpy, plant.conditions.ambient_k)
    shape = vessel_shape(spec.volume_m3, spec.rules.length_to_diameter)
    lowest_kg = float(vessel.inventory_kg[0])
    at = saturation(spec.window.discharged_pa)
    fill = (lowest_kg / spec.volume_m3 - float(at.density_vapour_kg_m3)) / float(
        at.density_liquid_kg_m3 - at.density_vapour_kg_m3
    )
    surface = free_surface_m2(shape, level_m(shape, fill))
    start_pa = (spec.window.charged_pa + spec.window.discharged_pa) / 2.0
    held = float(np.interp(start_pa, vessel.inventory_pressure_pa, vessel.inventory_kg))
    table = saturation_table()
    start_fill = liquid_fill_of(table.grid, table.coefficients, spec.volume_m3, held, start_pa)
    mass, energy = state_at(table.grid, table.coefficients, spec.volume_m3, start_pa, start_fill)
    release = spec.rules.release_kg_m2_h_per_bar * surface / SECONDS_PER_HOUR / PA_PER_BAR
    return VesselHouse(
        volume_m3=spec.volume_m3,
        loss_w_per_k=vessel.loss_w_per_k,
        ambient_k=vessel.ambient_k,
        charging_enthalpy_j_kg=enthalpy,
        make_up_enthalpy_j_kg=vessel.make_up_enthalpy_j_kg,
        level_control_s=vessel.level_control_s,
        charged_pa=spec.window.charged_pa,
        discharged_pa=spec.window.discharged_pa,
        start_mass_kg=mass,
        start_energy_j=energy,
        start_log_pressure=math.log(start_pa),
        release_kg_s_per_pa=release,
        inventory_log_pressure=np.log(vessel.inventory_pressure_pa),
        inventory_kg=vessel.inventory_kg,
    )
