"""IAPWS R7-97(2012), the release's own verification tables (as transcribed in public test suites)."""

import pytest
from printed import Printed

from evenfire.water import (
    liquid_enthalpy_j_kg,
    saturation,
    saturation_pressure_pa,
    saturation_temperature_k,
)

RELEASE = "IAPWS R7-97(2012)"


@pytest.mark.parametrize(
    ("temperature_k", "pressure_pa", "printed"),
    [
        (300.0, 3.0e6, Printed("115.331273", "kJ/kg", f"{RELEASE}, Table 5, h at 300 K, 3 MPa")),
        (500.0, 3.0e6, Printed("975.542239", "kJ/kg", f"{RELEASE}, Table 5, h at 500 K, 3 MPa")),
    ],
)
def test_liquid_enthalpy_is_region_1_of_the_release(temperature_k, pressure_pa, printed):
    """Liquid enthalpy equals the release's table to its last digit (P1, P3)."""
    printed.check(float(liquid_enthalpy_j_kg(temperature_k, pressure_pa)) / 1e3)


@pytest.mark.parametrize(
    ("temperature_k", "printed"),
    [
        (300.0, Printed("0.353658941e-2", "MPa", f"{RELEASE}, Table 35, 300 K")),
        (500.0, Printed("0.263889776e1", "MPa", f"{RELEASE}, Table 35, 500 K")),
        (600.0, Printed("0.123443146e2", "MPa", f"{RELEASE}, Table 35, 600 K")),
    ],
)
def test_saturation_pressure_is_region_4_of_the_release(temperature_k, printed):
    """Boiling pressure equals the release's table to its last digit (P7)."""
    printed.check(float(saturation_pressure_pa(temperature_k)) / 1e6)


@pytest.mark.parametrize(
    ("pressure_mpa", "printed"),
    [
        (0.1, Printed("0.372755919e3", "K", f"{RELEASE}, Table 36, 0.1 MPa")),
        (1.0, Printed("0.453035632e3", "K", f"{RELEASE}, Table 36, 1 MPa")),
        (10.0, Printed("0.584149488e3", "K", f"{RELEASE}, Table 36, 10 MPa")),
    ],
)
def test_saturation_temperature_is_region_4_of_the_release(pressure_mpa, printed):
    """Boiling temperature equals the release's table to its last digit (P8), by both functions."""
    printed.check(float(saturation_temperature_k(pressure_mpa * 1e6)))
    printed.check(float(saturation(pressure_mpa * 1e6).temperature_k))
