"""Published figures for accumulators and pressure vessels."""

import pytest
from printed import Printed

from evenfire.accumulator import cylinder_thickness_m, steam_capacity_kg
from evenfire.water import saturation

GAUGE_BAR = 1.01325


def test_water_needed_for_a_published_example():
    """2 650 kg of steam from 10 to 6 bar gauge need "approximately 66 000 kg" of water (AP7)."""
    charged_bar, discharged_bar, fill = 10.0 + GAUGE_BAR, 6.0 + GAUGE_BAR, 0.9
    per_m3 = steam_capacity_kg(1.0, charged_bar, discharged_bar, fill)
    water_kg = 2650.0 / per_m3 * fill * float(saturation(charged_bar * 1e5).density_liquid_kg_m3)
    printed = Printed("66e3", "kg", "public encyclopaedia, steam accumulator, worked example")
    printed.check(water_kg)


def test_sliding_pressure_storage_density():
    """Windows of practice store 20 to 30 kWh of latent heat per m3 (AP5, Steinmann and Eck, from memory)."""
    for charged_bar, discharged_bar in ((10.0, 5.0), (16.0, 8.0), (19.0, 11.0), (21.0, 13.0)):
        at = saturation((charged_bar + discharged_bar) / 2.0 * 1e5)
        latent_kwh_kg = float(at.enthalpy_vapour_j_kg - at.enthalpy_liquid_j_kg) / 3.6e6
        assert 20.0 <= steam_capacity_kg(1.0, charged_bar, discharged_bar) * latent_kwh_kg <= 30.0


def test_flash_share_of_a_published_table():
    """Water boiling at 1 150 kPa flashes 16.5 % at atmospheric pressure (AP3, public engineering table)."""
    high, low = saturation(1150e3), saturation(101.33e3)
    flash = (high.enthalpy_liquid_j_kg - low.enthalpy_liquid_j_kg) / (
        low.enthalpy_vapour_j_kg - low.enthalpy_liquid_j_kg
    )
    table_made_with_older_steam_data = 0.1
    assert 100.0 * float(flash) == pytest.approx(16.5, abs=table_made_with_older_steam_data)


@pytest.mark.parametrize(
    ("pressure_pa", "radius_m", "stress_pa", "joint", "expected_mm"),
    [
        (1.8e6, 1.25, 138e6, 0.85, "19.359835"),
        (1.3e6, 1.00, 138e6, 0.85, "11.156883"),
        (2.4e6, 1.50, 138e6, 1.00, "26.362039"),
    ],
)
def test_wall_thickness_follows_the_code_formula(pressure_pa, radius_m, stress_pa, joint, expected_mm):
    """ASME VIII-1 UG-27(c)(1) by hand (C13, C15), and its inverse P = S E t / (R + 0.6 t) (C16)."""
    thickness = cylinder_thickness_m(pressure_pa, radius_m, stress_pa, joint)
    Printed(expected_mm, "mm", "ASME VIII-1 UG-27(c)(1), hand calculation").check(thickness * 1e3)
    assert stress_pa * joint * thickness / (radius_m + 0.6 * thickness) == pytest.approx(
        pressure_pa, rel=1e-12
    )


def test_wall_thickness_agrees_with_the_european_formula():
    """EN 13445-3, e = P D / (2 f z - P), lies within 0.2 % at 18 bar (C18, C19, from memory)."""
    asme = cylinder_thickness_m(1.8e6, 1.25, 138e6, 0.85)
    european = 1.8e6 * 2.5 / (2.0 * 138e6 * 0.85 - 1.8e6)
    assert asme == pytest.approx(european, rel=2e-3)
