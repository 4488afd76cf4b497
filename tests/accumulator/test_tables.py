"""The compiled property table against the property library, between its knots."""

import math

import numpy as np
import pytest
from iapws import IAPWS97

from evenfire.accumulator.balance import liquid_fill_of, pressure_of, state_at
from evenfire.accumulator.tables import (
    DENSITY_LIQUID,
    DENSITY_VAPOUR,
    ENERGY_PER_MASS,
    ENERGY_PER_VOLUME,
    ENTHALPY_LIQUID,
    ENTHALPY_VAPOUR,
    LARGEST_TABLE_PA,
    SMALLEST_TABLE_PA,
    TABLE_RELATIVE_ERROR,
    TEMPERATURE,
    saturation_table,
    table_value,
)
from evenfire.water import saturation

TABLE = saturation_table()


def value(which, pressure_pa):
    return table_value(TABLE.grid, TABLE.coefficients, which, pressure_pa)


def test_interpolation_error_is_below_what_is_stated():
    """At 20 000 pressures every property is within 1e-6 of IF97 (1e-5 is asked)."""
    assert TABLE_RELATIVE_ERROR < 1e-5
    span = (math.log(SMALLEST_TABLE_PA), math.log(LARGEST_TABLE_PA))
    pressure = np.clip(np.exp(np.linspace(*span, 20_000)), SMALLEST_TABLE_PA, LARGEST_TABLE_PA)
    at = saturation(pressure)
    v_liquid, v_vapour = 1 / at.density_liquid_kg_m3, 1 / at.density_vapour_kg_m3
    u_liquid, u_vapour = at.internal_energy_liquid_j_kg, at.internal_energy_vapour_j_kg
    k = (u_vapour - u_liquid) / (v_vapour - v_liquid)
    for which, exact in (
        (TEMPERATURE, at.temperature_k),
        (ENTHALPY_LIQUID, at.enthalpy_liquid_j_kg),
        (ENTHALPY_VAPOUR, at.enthalpy_vapour_j_kg),
        (DENSITY_LIQUID, at.density_liquid_kg_m3),
        (DENSITY_VAPOUR, at.density_vapour_kg_m3),
        (ENERGY_PER_MASS, u_liquid - v_liquid * k),
        (ENERGY_PER_VOLUME, k),
    ):
        table = np.array([value(which, each) for each in pressure])
        assert np.max(np.abs(table / exact - 1.0)) < TABLE_RELATIVE_ERROR


@pytest.mark.parametrize("pressure_mpa", [0.1, 0.73, 1.6, 4.0, 9.9])
def test_table_agrees_with_an_independent_library(pressure_mpa):
    """h'' and rho' from the table are those of iapws."""
    assert value(ENTHALPY_VAPOUR, pressure_mpa * 1e6) == pytest.approx(
        IAPWS97(P=pressure_mpa, x=1).h * 1e3, rel=1e-7
    )
    assert value(DENSITY_LIQUID, pressure_mpa * 1e6) == pytest.approx(
        IAPWS97(P=pressure_mpa, x=0).rho, rel=1e-7
    )


def test_outside_the_table_there_is_no_value():
    """Pressures outside 0.2 to 160 bar give NaN, never an extrapolation."""
    for pressure in (-1.0, 0.0, 0.19e5, 161e5, math.nan):
        assert math.isnan(value(TEMPERATURE, pressure))


def test_pressure_of_a_state_is_found_from_any_guess():
    """A state built at a pressure and fill is recognised from guesses all over the table."""
    for pressure in (0.3e5, 5e5, 13.88e5, 101e5, 150e5):
        for fill in (0.02, 0.4, 0.9, 0.99):
            mass, energy = state_at(TABLE.grid, TABLE.coefficients, 7.0, pressure, fill)
            for guess in (0.25e5, 5e5, 155e5, 1e9, -1.0):
                found = pressure_of(TABLE.grid, TABLE.coefficients, 7.0, mass, energy, guess)
                assert found == pytest.approx(pressure, rel=1e-9)
            assert liquid_fill_of(TABLE.grid, TABLE.coefficients, 7.0, mass, pressure) == pytest.approx(fill)


def test_states_that_are_not_two_phase_have_no_pressure():
    """A flooded, a dry and an impossible state give NaN."""
    mass, energy = state_at(TABLE.grid, TABLE.coefficients, 1.0, 10e5, 0.999)
    assert math.isnan(
        pressure_of(TABLE.grid, TABLE.coefficients, 1.0, mass + 30.0, energy + 30.0 * 500e3, 10e5)
    )
    mass, energy = state_at(TABLE.grid, TABLE.coefficients, 1.0, 10e5, 0.001)
    assert math.isnan(pressure_of(TABLE.grid, TABLE.coefficients, 1.0, mass - 2.0, energy - 0.5e6, 10e5))
    assert math.isnan(pressure_of(TABLE.grid, TABLE.coefficients, 1.0, 800.0, -1e9, 10e5))
