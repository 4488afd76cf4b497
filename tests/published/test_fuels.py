"""Guideline tables of calorific values and CO2: IPCC 2006 Vol. 2 and the UK conversion factors of 2023."""

import pytest
from printed import Printed

from evenfire.boiler import fuel_spec

IPCC = "IPCC 2006 Guidelines, Vol. 2, Table 2.2"
UK = "UK government GHG conversion factors 2023 v1.1, kg CO2 per kWh"


@pytest.mark.parametrize(
    ("kind", "printed"),
    [
        ("natural_gas", Printed("56.1", "kg/GJ", IPCC)),
        ("gas_oil", Printed("74.1", "kg/GJ", IPCC)),
        ("heavy_fuel_oil", Printed("77.4", "kg/GJ", f"{IPCC} (from memory)")),
        ("lpg", Printed("63.1", "kg/GJ", IPCC)),
    ],
)
def test_co2_is_the_default_of_the_guidelines(kind, printed):
    """CO2 per net joule is the guidelines' default (F1 to F4)."""
    printed.check(fuel_spec(kind).co2_kg_per_j_lhv * 1e9)


@pytest.mark.parametrize(
    ("kind", "gross", "net"),
    [
        ("natural_gas", Printed("0.18256", "kg/kWh", UK), Printed("0.20226", "kg/kWh", UK)),
        ("gas_oil", Printed("0.25359", "kg/kWh", UK), Printed("0.26978", "kg/kWh", UK)),
        ("heavy_fuel_oil", Printed("0.26709", "kg/kWh", UK), Printed("0.28413", "kg/kWh", UK)),
        ("lpg", Printed("0.21419", "kg/kWh", UK), Printed("0.22999", "kg/kWh", UK)),
    ],
)
def test_net_over_gross_and_co2_agree_with_the_national_factors(kind, gross, net):
    """Net over gross is that of the UK factors (F6 to F9), whose CO2 lies within 2 % of the IPCC's (F12)."""
    fuel = fuel_spec(kind)
    gross.check(net.value * fuel.lhv_to_hhv)
    assert fuel.co2_kg_per_j_lhv * 3.6e6 == pytest.approx(net.value, rel=0.02)


def test_natural_gas_is_close_to_pure_methane():
    """Natural gas has nearly methane's net over gross value, 802.3 / 890.6 kJ/mol (F11, from memory)."""
    assert fuel_spec("natural_gas").lhv_to_hhv == pytest.approx(802.3 / 890.6, rel=3e-3)


def test_basis_trap():
    """A boiler of 95.0 % net is one of 85.75 % gross on UK 2023 gas (F13)."""
    Printed("85.75", "%", f"{UK}: 95.0 x 0.90260").check(95.0 * fuel_spec("natural_gas").lhv_to_hhv)
