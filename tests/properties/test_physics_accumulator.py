"""What must hold for any accumulator."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from evenfire.accumulator import (
    fill_after_charging,
    free_surface_m2,
    level_m,
    liquid_volume_m3,
    steam_capacity_kg,
    vessel_shape,
    window_performance,
)
from evenfire.accumulator.balance import (
    charge_to_pressure_kg,
    liquid_fill_of,
    next_state,
    pressure_of,
    state_at,
    steam_to_pressure_kg,
)
from evenfire.accumulator.tables import saturation_table
from evenfire.accumulator.vessel import SteamAccumulator
from evenfire.plant import VesselRules, VesselSpec, WindowSpec
from evenfire.water import saturation

TABLE = saturation_table()
GRID, COEFFICIENTS = TABLE.grid, TABLE.coefficients
volumes = st.floats(1.0, 200.0)
fills = st.floats(0.2, 0.95)


@st.composite
def windows(draw: st.DrawFn) -> WindowSpec:
    """A window of 1 to 40 bar, at least a twentieth wide."""
    low = draw(st.floats(1.2e5, 30e5))
    return WindowSpec(charged_pa=min(low * draw(st.floats(1.05, 5.0)), 40e5), discharged_pa=low)


def rules(fill: float, heat_loss: float = 0.6) -> VesselRules:
    return VesselRules(
        charged_fill=fill,
        length_to_diameter=3.5,
        release_kg_m2_h_per_bar=220.0,
        heat_loss_w_m2k=heat_loss,
        make_up_k=293.15,
    )


def boiler_steam_j_kg(window: WindowSpec) -> float:
    return float(saturation(window.charged_pa * 1.05).enthalpy_vapour_j_kg)


@settings(deadline=None)
@given(window=windows(), fill=fills, volume=volumes)
def test_capacity_is_proportional_to_volume_and_grows_with_the_window(window, fill, volume):
    """Twice the vessel holds twice the steam; a lower discharged pressure gives more, never all."""
    charged, discharged = window.charged_pa / 1e5, window.discharged_pa / 1e5
    one = steam_capacity_kg(volume, charged, discharged, fill)
    assert one > 0.0
    assert steam_capacity_kg(2.0 * volume, charged, discharged, fill) == pytest.approx(2.0 * one, rel=1e-12)
    assert steam_capacity_kg(volume, charged, max(0.9 * discharged, 1.0), fill) > one
    at = saturation(window.charged_pa)
    assert one < volume * (fill * at.density_liquid_kg_m3 + (1 - fill) * at.density_vapour_kg_m3)


@settings(deadline=None)
@given(window=windows(), middle=st.floats(0.05, 0.95), fill=fills)
def test_capacities_of_adjoining_windows_add_up(window, middle, fill):
    """From charged to halfway and on to discharged is the same steam as at once."""
    high, low = window.charged_pa / 1e5, window.discharged_pa / 1e5
    between = low + middle * (high - low)
    upper = window_performance(
        1.0,
        WindowSpec(charged_pa=window.charged_pa, discharged_pa=between * 1e5),
        rules(fill),
        boiler_steam_j_kg(window),
        293.15,
    )
    lower = steam_capacity_kg(1.0, between, low, upper.fill_discharged)
    assert upper.steam_capacity_kg + lower == pytest.approx(steam_capacity_kg(1.0, high, low, fill), rel=1e-6)


@settings(deadline=None)
@given(window=windows(), fill=fills, volume=volumes)
def test_performance_is_consistent(window, fill, volume):
    """Cycle masses close, levels fall, limits are positive, the stored-steam curve falls to nothing."""
    vessel = window_performance(volume, window, rules(fill), boiler_steam_j_kg(window), 293.15)
    assert vessel.steam_capacity_kg == pytest.approx(vessel.taken_up_kg + vessel.make_up_kg, rel=1e-12)
    assert vessel.fill_discharged < vessel.fill_charged
    assert vessel.level_fraction_discharged < vessel.level_fraction_charged
    assert 0.9 < vessel.discharge_per_charge < 1.1
    assert vessel.release_limit_kg_s > 0.0
    assert vessel.standing_loss_kg_s < vessel.standing_loss_w / 1.0e6
    assert (np.diff(vessel.curve_stored_kg) < 0.0).all()
    assert vessel.curve_stored_kg[-1] == 0.0


@settings(deadline=None)
@given(window=windows(), fill=st.floats(0.2, 0.8))
def test_charging_raises_the_level(window, fill):
    """Steam that condenses adds water: the level after charging is higher."""
    after = fill_after_charging(fill, window.discharged_pa, window.charged_pa, boiler_steam_j_kg(window))
    assert after > fill


@settings(deadline=None)
@given(volume=volumes, ratio=st.floats(1.0, 10.0), fill=st.floats(0.001, 0.999))
def test_level_and_volume_are_inverse(volume, ratio, fill):
    """The level of a fill holds that fill, and the surface fits into the vessel."""
    shape = vessel_shape(volume, ratio)
    level = level_m(shape, fill)
    assert liquid_volume_m3(shape, level) == pytest.approx(fill * volume, rel=1e-9)
    longest = shape.cylinder_length_m + 0.5 * shape.diameter_m
    assert 0.0 < free_surface_m2(shape, level) < longest * shape.diameter_m


@settings(deadline=None)
@given(volume=volumes, pressure=st.floats(0.25e5, 159e5), fill=st.floats(0.01, 0.99))
def test_states_are_recognised(volume, pressure, fill):
    """A state built from pressure and fill gives both back."""
    mass, energy = state_at(GRID, COEFFICIENTS, volume, pressure, fill)
    found = pressure_of(GRID, COEFFICIENTS, volume, mass, energy, 10e5)
    assert found == pytest.approx(pressure, rel=1e-9)
    assert liquid_fill_of(GRID, COEFFICIENTS, volume, mass, found) == pytest.approx(fill, rel=1e-6)


@settings(deadline=None)
@given(window=windows(), fill=fills, charged=st.booleans())
def test_steam_to_a_pressure_brings_the_vessel_there(window, fill, charged):
    """Charging by the closed form ends at the target exactly; drawing within a hundredth."""
    start = window.discharged_pa if charged else window.charged_pa
    target = window.charged_pa if charged else window.discharged_pa
    fill = 0.6 * fill if charged else fill
    mass, energy = state_at(GRID, COEFFICIENTS, 10.0, start, fill)
    steam_j_kg = boiler_steam_j_kg(window)
    if charged:
        taken = charge_to_pressure_kg(GRID, COEFFICIENTS, 10.0, mass, energy, steam_j_kg, target)
        found = pressure_of(GRID, COEFFICIENTS, 10.0, mass + taken, energy + taken * steam_j_kg, start)
        assert found == pytest.approx(target, rel=1e-9)
    else:
        drawn = steam_to_pressure_kg(GRID, COEFFICIENTS, 10.0, mass, energy, start, target)
        exact = steam_capacity_kg(10.0, start / 1e5, target / 1e5, fill)
        assert drawn == pytest.approx(exact, rel=1e-2)
        state = mass, energy, start
        for _ in range(50):
            state = next_state(
                GRID, COEFFICIENTS, 10.0, 0.0, 293.0, *state[:3], 0.0, 0.0, exact / 50.0, 0.0, 0.0, 0.0, 1.0
            )
        assert state[2] == pytest.approx(target, rel=1e-4)


@settings(deadline=None, max_examples=50)
@given(
    flows=st.lists(st.tuples(st.floats(0.0, 0.4), st.floats(0.0, 0.4)), min_size=1, max_size=60),
    heat_loss=st.floats(0.0, 5.0),
)
def test_any_run_conserves_mass_and_energy(flows, heat_loss):
    """What flowed in less what flowed out, with make-up, drain and loss, is what the vessel gained."""
    spec = VesselSpec(
        volume_m3=40.0, window=WindowSpec(charged_pa=10e5, discharged_pa=5e5), rules=rules(0.8, heat_loss)
    )
    vessel = SteamAccumulator(spec, 2780.667e3, 293.15)
    charge, discharge = (np.array(each) for each in zip(*flows, strict=True))
    run = vessel.run(charge, discharge, 60.0)
    mass = 60.0 * (charge - discharge) + run.make_up_kg - run.drain_kg
    energy = (
        60.0 * charge * vessel.charging_enthalpy_j_kg
        + run.make_up_kg * vessel.make_up_enthalpy_j_kg
        - run.discharge_j
        - run.drain_j
        - run.loss_j
    )
    assert np.diff(run.mass_kg) == pytest.approx(mass, abs=1e-9 * run.mass_kg[0])
    assert np.diff(run.energy_j) == pytest.approx(energy, abs=1e-9 * run.energy_j[0])
    assert ((run.liquid_fill > 0.0) & (run.liquid_fill < 1.0)).all()
