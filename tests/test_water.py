"""Water and steam against the independent library iapws, and what the property room refuses."""

import numpy as np
import pytest
from iapws import IAPWS97

from evenfire.errors import OutOfRangeError
from evenfire.water import (
    flash_steam_kg_m3,
    liquid_enthalpy_j_kg,
    saturation,
    saturation_pressure_pa,
    saturation_temperature_k,
)


@pytest.mark.parametrize("pressure_mpa", [0.001, 0.101325, 0.5, 1.0, 2.1, 4.0, 12.0, 16.0])
def test_saturated_states_agree_with_an_independent_library(pressure_mpa):
    """Temperature, enthalpies, densities and internal energies of both phases are those of iapws."""
    at = saturation(pressure_mpa * 1e6)
    liquid, vapour = IAPWS97(P=pressure_mpa, x=0), IAPWS97(P=pressure_mpa, x=1)
    assert float(at.temperature_k) == pytest.approx(liquid.T, rel=1e-9)
    for ours, theirs in (
        (at.enthalpy_liquid_j_kg, liquid.h * 1e3),
        (at.enthalpy_vapour_j_kg, vapour.h * 1e3),
        (at.density_liquid_kg_m3, liquid.rho),
        (at.density_vapour_kg_m3, vapour.rho),
        (at.internal_energy_liquid_j_kg, liquid.u * 1e3),
        (at.internal_energy_vapour_j_kg, vapour.u * 1e3),
    ):
        assert float(ours) == pytest.approx(theirs, rel=1e-8)


def test_clapeyron_slope():
    """dp/dT along saturation is (h''-h')/(T (v''-v')) to the 1e-4 of IF97's own consistency (P15)."""
    for pressure in (1e5, 5e5, 16e5, 40e5):
        at = saturation(pressure)
        slope = float(
            (at.enthalpy_vapour_j_kg - at.enthalpy_liquid_j_kg)
            / (at.temperature_k * (1 / at.density_vapour_kg_m3 - 1 / at.density_liquid_kg_m3))
        )
        step = 1e-3 * pressure
        below, above = saturation_temperature_k([pressure - step, pressure + step])
        assert 2 * step / float(above - below) == pytest.approx(slope, rel=1e-4)


def test_arrays_keep_their_shape_and_scalars_theirs():
    """A table in, a table out; a number in, a number's shape out."""
    assert saturation(np.full((2, 3), 1e6)).enthalpy_vapour_j_kg.shape == (2, 3)
    assert saturation(1e6).enthalpy_vapour_j_kg.shape == ()
    assert liquid_enthalpy_j_kg([300.0, 350.0], 1e6).shape == (2,)
    assert float(saturation_pressure_pa(saturation_temperature_k(7e5))) == pytest.approx(7e5, rel=1e-6)


def test_boiling_water_is_liquid_and_above_it_is_refused():
    """At boiling temperature the enthalpy is h'; a kelvin above it is refused."""
    boiling = float(saturation_temperature_k(1e6))
    assert float(liquid_enthalpy_j_kg(boiling, 1e6)) == pytest.approx(762_682.84, abs=0.01)
    with pytest.raises(OutOfRangeError, match=r"at 1e\+06 Pa absolute, where water would be steam.*\[P103\]"):
        liquid_enthalpy_j_kg([400.0, boiling + 1.0], 1e6)


@pytest.mark.parametrize(
    ("call", "message"),
    [
        (lambda: saturation([1e6, 300e5]), r"found 3e\+07 Pa; must lie between 1000 and 2e\+07 Pa \[P101\]"),
        (lambda: saturation(float("nan")), r"found nan Pa.*\[P101\]"),
        (lambda: saturation(-1.0), r"\[P101\]"),
        (lambda: saturation_temperature_k(float("inf")), r"\[P101\]"),
        (lambda: saturation_pressure_pa(700.0), r"saturation temperature.*\[P102\]"),
        (lambda: liquid_enthalpy_j_kg(200.0, 1e6), r"water temperature: found 200 K.*\[P102\]"),
        (lambda: flash_steam_kg_m3(10e5, float("nan"), 0.9), r"\[P101\]"),
    ],
)
def test_states_outside_the_tables_are_refused(call, message):
    """Nothing is extrapolated: every state outside the tables names its limits."""
    with pytest.raises(OutOfRangeError, match=message):
        call()


def test_a_result_that_is_not_finite_is_refused(monkeypatch):
    """Should the property library return inf inside an array, as it does out of range, it is refused."""
    monkeypatch.setattr("evenfire.water.PropsSI", lambda *given: np.where(given[2] > 5e5, np.inf, 1.0))
    with pytest.raises(OutOfRangeError, match=r"no finite value at 600000.*\[P104\]"):
        saturation_temperature_k([4e5, 6e5])
