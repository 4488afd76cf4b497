"""Published cost correlations of boilers and vessels.

Check rows C1 to C11. Rows and coefficients that the check list knows from memory only are named so.
"""

import pytest
from printed import Printed

from evenfire.money.correlations import (
    CORRELATIONS,
    logarithmic_cost,
    steam_boiler_pressure_factor,
    vessel_pressure_factor,
)
from evenfire.money.cost_basis import capacity_scaled_cost, estimated_cost
from evenfire.money.terms import CostBasis
from evenfire.units import bar_g_to_pa, t_h_to_kg_s

TURTON = "Turton et al., Appendix A"
TOWLER = "Towler and Sinnott"


def cost_in_source_dollars(name, size, bar_g, diameter_m=None, installation_factor=None):
    """Estimate at the source's own index, place and currency."""
    basis = CostBasis(
        correlation=name,
        cost_index=CORRELATIONS[name].basis_index,
        currency_per_usd=1.0,
        installation_factor=installation_factor,
    )
    return estimated_cost(basis, size=size, pressure_pa=bar_g_to_pa(bar_g), diameter_m=diameter_m).amount


@pytest.mark.parametrize(
    ("kilowatt", "text"),
    [(1200, "252097.6"), (3000, "433837.6"), (5000, "648969.7"), (7000, "879880.2"), (9400, "1178541.2")],
)
def test_purchased_steam_boiler(kilowatt, text):
    """Purchased cost by heat output, times the bare-module factor 2.19 (C1, C2)."""
    installed = cost_in_source_dollars("steam boiler by heat output", 1000.0 * kilowatt, 10.0)
    Printed(text, "USD", f"{TURTON}, Table A.1 (C1)").check(installed / 2.19)


def test_bare_module_steam_boiler():
    """7 000 kW installed is 1 926 937.5 dollars of 2001 (C2)."""
    installed = cost_in_source_dollars("steam boiler by heat output", 7.0e6, 18.0)
    assert installed == pytest.approx(1_926_937.5, rel=1e-6)


@pytest.mark.parametrize(("bar_g", "text"), [(25, "1.096771"), (30, "1.249998"), (40, "1.699996")])
def test_steam_boiler_pressure_factor(bar_g, text):
    """Pressure factor above 20 bar g (C3)."""
    Printed(text, "1", f"{TURTON}, Table A.2 (C3)").check(steam_boiler_pressure_factor(bar_g))


def test_steam_boiler_pressure_factor_has_no_jump():
    """The factor joins 1 at 20 bar g; one copy of the table in circulation jumps to 0.01 there (C3)."""
    assert steam_boiler_pressure_factor(20.0) == 1.0
    assert steam_boiler_pressure_factor(20.0 + 1e-9) == pytest.approx(0.99999858, abs=5e-9)


@pytest.mark.parametrize(
    ("volume", "text"),
    [(5, "7322.27"), (10, "10582.79"), (20, "15883.87"), (50, "28791.17"), (100, "47173.71")],
)
def test_purchased_horizontal_vessel(volume, text):
    """Purchased cost by volume (C4)."""
    Printed(text, "USD", f"{TURTON}, Table A.1 (C4)").check(logarithmic_cost(3.5565, 0.3776, 0.0905, volume))


@pytest.mark.parametrize(
    ("volume", "text"),
    [(5, "7300.61"), (10, "11305.77"), (20, "18310.73"), (50, "37102.06"), (100, "66680.68")],
)
def test_vertical_vessel_at_low_pressure(volume, text):
    """A thin vertical vessel costs 2.25 + 1.82 times its purchased cost (C5)."""
    installed = cost_in_source_dollars("vertical vessel by volume", volume, 0.0, diameter_m=0.5)
    Printed(text, "USD", f"{TURTON}, Table A.1 (C5)").check(installed / (2.25 + 1.82))


@pytest.mark.parametrize(
    ("bar_g", "diameter", "text"),
    [(10, 2.0, "2.570230"), (18, 2.5, "4.995399"), (24, 2.5, "6.440500"), (30, 3.0, "9.377739")],
)
def test_vessel_pressure_factor(bar_g, diameter, text):
    """Pressure factor of vessels (C6; formula seen in two copies)."""
    Printed(text, "1", f"{TURTON}, equation A.2 (C6)").check(vessel_pressure_factor(bar_g, diameter))


def test_bare_module_horizontal_vessel():
    """50 m3, 2.5 m across, 18 bar g is 261 510.32 dollars of 2001 installed (C7)."""
    installed = cost_in_source_dollars("horizontal vessel by volume", 50.0, 18.0, diameter_m=2.5)
    Printed("261510.32", "USD", f"{TURTON} (C7)").check(installed)


@pytest.mark.parametrize(
    ("from_size", "to_size", "text"), [(1, 2, "1.515717"), (5, 8, "1.325782"), (1, 10, "3.981072")]
)
def test_six_tenths_rule(from_size, to_size, text):
    """Capacity exponent 0.6 (C8)."""
    scaled = capacity_scaled_cost(1.0, from_size=from_size, to_size=to_size)
    Printed(text, "1", "Peters and Timmerhaus, six-tenths rule (C8)").check(scaled)


def test_packaged_boilers():
    """10 t/h: 193 000 dollars of 2007 (C9), 224 000 of 2010 (C10, from memory)."""
    steam = t_h_to_kg_s(10.0)
    cost = cost_in_source_dollars("packaged boiler by steam, 2007", steam, 15.0, installation_factor=1.0)
    assert cost == pytest.approx(193_000.0, rel=1e-9)
    cost = cost_in_source_dollars("packaged boiler by steam, 2010", steam, 15.0, installation_factor=1.0)
    assert cost == pytest.approx(224_000.0, rel=1e-9)


@pytest.mark.parametrize(("kg", "text"), [(1000, "21199.2"), (5000, "53400.2"), (20000, "150558.0")])
def test_pressure_vessel_by_shell_mass(kg, text):
    """Horizontal vessel by shell mass (C11, from memory)."""
    cost = cost_in_source_dollars("pressure vessel by shell mass", kg, 10.0, installation_factor=1.0)
    Printed(text, "USD", f"{TOWLER}, Table 7.2 (C11)").check(cost)


def test_index_carries_the_cost_to_its_year():
    """Cost follows the index: 2001 (397) to 2022 (816.0, published annual average) is a factor 2.0554."""
    basis = CostBasis(correlation="steam boiler by heat output", cost_index=816.0, currency_per_usd=1.0)
    carried = estimated_cost(basis, size=7.0e6, pressure_pa=bar_g_to_pa(10.0)).amount
    Printed("2.0554", "1", "annual averages of the plant cost index").check(carried / 1_926_937.5)
