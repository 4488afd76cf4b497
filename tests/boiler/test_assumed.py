"""Defaults: arithmetic of their sources, scaling with the rating, refusals."""

import pytest
from iapws import IAPWS97

from evenfire.boiler import (
    FUEL_KINDS,
    assumed_cold_start_s,
    assumed_ramp_kg_s2,
    assumed_stack_slope_per_k,
    assumed_standing_loss_w,
    assumed_water_content_m3,
    buffer_kg,
    cold_start_energy_j,
    combustion_air_kg_s,
    fuel_spec,
    purge_energy_j,
    steam_heat_j_kg,
)
from evenfire.errors import OutOfRangeError


@pytest.mark.parametrize(
    ("rated_mw", "loss_kw"),
    [(1.0, 11.30), (2.0, 18.36), (5.0, 34.86), (10.0, 56.63), (20.0, 92.00), (50.0, 174.73)],
)
def test_standing_loss_is_the_casing_loss_of_the_standard(rated_mw, loss_kw):
    """0.0113 Q^0.7 in MW for oil and gas (B14; EN 12953-11 from memory)."""
    rated_kg_s = rated_mw * 1e6 / steam_heat_j_kg(10e5, 378.15, 0.0)
    assert assumed_standing_loss_w(rated_kg_s, 10e5) / 1e3 == pytest.approx(loss_kw, abs=0.005)


def test_purge_of_a_seven_megawatt_burner():
    """60 s of air at full firing, heated from 20 to 150 degC, carry off 21.7 MJ (B18, hand example)."""
    air_kg_s = combustion_air_kg_s(7e6)
    assert purge_energy_j(air_kg_s, 60.0, 423.15, 293.15) == pytest.approx(21.7e6, rel=0.01)
    assert combustion_air_kg_s(14e6) == pytest.approx(2.0 * air_kg_s, rel=1e-12)


def test_buffer_of_a_boiler_from_properties():
    """20 m3 of water and steam space at 10 bar, three quarters full, give 127.2 kg over 1 bar (B22)."""
    assert buffer_kg(15.0, 10e5, 1e5) == pytest.approx(127.2, rel=1e-3)


def test_cold_start_heats_water_and_steel():
    """10 m3 from 20 degC to 10 bar: liquid enthalpy by iapws, and 1.3 kg of steel per kg of water."""
    hot, cold = IAPWS97(P=1.0, x=0), IAPWS97(P=1.0, T=293.15)
    water_kg = 10.0 * hot.rho
    expected = water_kg * ((hot.h - cold.h) * 1e3 + 1.3 * 490.0 * (hot.T - 293.15)) / 0.89
    assert cold_start_energy_j(10.0, 10e5, 0.89) == pytest.approx(expected, rel=1e-7)
    assert assumed_cold_start_s(expected, 0.9e6) == pytest.approx(expected / 0.9e6)


def test_defaults_scale_with_the_rating():
    """Twice the rating has twice the water and ramp and 2^0.7 the standing loss."""
    assert assumed_water_content_m3(2.0) == pytest.approx(2.0 * assumed_water_content_m3(1.0))
    assert assumed_ramp_kg_s2(2.0) == pytest.approx(2.0 * assumed_ramp_kg_s2(1.0))
    assert assumed_standing_loss_w(2.0, 10e5) == pytest.approx(2.0**0.7 * assumed_standing_loss_w(1.0, 10e5))


def test_every_fuel_has_a_stack_slope():
    """Electricity has none; every fuel that burns loses 0.3 to 0.7 points per 10 K."""
    for kind in FUEL_KINDS:
        slope = assumed_stack_slope_per_k(kind)
        assert slope == 0.0 if kind == "electricity" else 3e-4 < slope < 7e-4


def test_refusals():
    """Unknown fuel, a band wider than the pressure, a dry boiler, an impossible fill or efficiency."""
    with pytest.raises(OutOfRangeError, match=r"'coal'.*natural_gas.*\[P115\]"):
        fuel_spec("coal")
    with pytest.raises(OutOfRangeError, match=r"pressure band.*\[P117\]"):
        buffer_kg(10.0, 2e5, 3e5)
    with pytest.raises(OutOfRangeError, match=r"water content.*\[P114\]"):
        buffer_kg(0.0, 10e5, 1e5)
    with pytest.raises(OutOfRangeError, match=r"fill of the boiler.*\[P121\]"):
        buffer_kg(10.0, 10e5, 1e5, fill=1.0)
    with pytest.raises(OutOfRangeError, match=r"efficiency at lowest firing.*\[P110\]"):
        cold_start_energy_j(10.0, 10e5, 1.1)
