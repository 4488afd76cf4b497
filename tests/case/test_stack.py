"""A boiler described by its stack instead of its efficiency."""

from __future__ import annotations

import pytest

from evenfire.case.load import load_case
from evenfire.case.page import EXAMPLE

POINTS = EXAMPLE[EXAMPLE.index("efficiency_points") : EXAMPLE.index("maintenance_per_year = 9000")].strip()
AT_20_DEGC = """\
combustion_air_temperature_degc = 20.0
casing_loss_kw = {casing}
stack_readings = [
  {{ load_percent = 25, stack_temperature_degc = {low}, {gas} }},
  {{ load_percent = 100, stack_temperature_degc = 230, o2_percent = 3.0 }},
]"""


def stack(casing: float = 0.0, low: float = 230.0, gas: str = "o2_percent = 3.0", more: str = "") -> str:
    """Stack readings at two loads as a case states them."""
    return AT_20_DEGC.format(casing=casing, low=low, gas=gas) + more


def test_siegert_alone_without_casing_loss(write_example):
    """Natural gas, 230 degC against 20 degC, 3 % O2: a stack loss of 9.590 % leaves 90.410 %.

    Siegert formula with the coefficients of German 1. BImSchV, Annex 2 (B4).
    """
    spec = load_case(write_example((POINTS, stack()))).boilers[0].spec
    assert [point.efficiency_lhv for point in spec.efficiency_points] == pytest.approx(
        [0.90410, 0.90410], abs=5e-6
    )


def test_more_air_costs_efficiency(write_example):
    """The same stack with 5 % O2 loses 10.5525 % (same source; B6)."""
    spec = load_case(write_example((POINTS, stack(gas="o2_percent = 5.0")))).boilers[0].spec
    assert spec.efficiency_points[0].efficiency_lhv == pytest.approx(1.0 - 0.105525, abs=5e-7)


def test_carbon_dioxide_serves_as_well_as_oxygen(write_example):
    """10 % CO2 in the CO2 form of the formula: (230 - 20) (0.37 / 10 + 0.009) = 9.66 % (same source; B4)."""
    spec = load_case(write_example((POINTS, stack(gas="co2_percent = 10.0")))).boilers[0].spec
    assert spec.efficiency_points[0].efficiency_lhv == pytest.approx(1.0 - 0.0966, abs=1e-9)


def test_casing_loss_weighs_four_times_at_quarter_load(write_example):
    """A casing loss constant in kW is four times the share at a quarter load (US DOE Steam Tip Sheet 16)."""
    spec = load_case(write_example((POINTS, stack(casing=25.0)))).boilers[0].spec
    quarter, full = (0.90410 / point.efficiency_lhv - 1.0 for point in spec.efficiency_points)
    assert quarter / full == pytest.approx(4.0, rel=1e-3)


def test_economiser_cools_the_stack(write_example):
    """Cooling 230 degC to 130 degC at 3 % O2 leaves 5.0233 % (same source; B5): 100 of 210 K."""
    economiser = "\neconomiser = { effectiveness_percent = 47.619047619, water_temperature_degc = 20.0 }"
    spec = load_case(write_example((POINTS, stack(more=economiser)))).boilers[0].spec
    assert spec.efficiency_points[-1].efficiency_lhv == pytest.approx(1.0 - 0.050233, abs=1e-6)


def test_stack_slope_follows_the_oxygen_at_full_load_and_the_economiser(write_example):
    """At 3 % O2 a kelvin costs 0.66/18 + 0.009 = 0.045667 %, half of it behind an economiser of 50 %."""
    economiser = "\neconomiser = { effectiveness_percent = 50.0 }"
    plain = load_case(write_example((POINTS, stack()))).boilers[0].spec
    behind = load_case(write_example((POINTS, stack(more=economiser)))).boilers[0].spec
    assert plain.stack_slope_per_k == pytest.approx(0.00045667, abs=5e-9)
    assert behind.stack_slope_per_k == pytest.approx(plain.stack_slope_per_k / 2.0)


def test_typed_efficiencies_stand_where_the_stack_allows_them(write_example):
    """With both stated the typed points are used and the readings only check them."""
    spec = (
        load_case(write_example((POINTS, f"{POINTS}\n{stack().replace('casing_loss_kw = 0.0', '')}")))
        .boilers[0]
        .spec
    )
    assert [point.efficiency_lhv for point in spec.efficiency_points] == pytest.approx([0.88, 0.90])


def test_what_the_stack_needs_and_the_case_leaves_out_is_assumed_aloud(write_example):
    """Air temperature, casing loss and economiser water are told where they were not stated.

    The casing loss is 0.0113 Q^0.7 MW (EN 12953-11; B14) of 4 t/h x 2332 kJ/kg = 2.59 MW, so 22.0 kW.
    """
    readings = stack(more="\neconomiser = { effectiveness_percent = 50.0 }")
    readings = readings[readings.index("stack_readings") :]
    texts = [notice.text for notice in load_case(write_example((POINTS, readings))).notices]
    notices = [text.removeprefix("boiler 'Boiler 1', ") for text in texts]
    said = {text.split(":")[0]: text.partition(" assumed ")[2].split() for text in notices}
    assert said["combustion_air_temperature_degc"][:2] == ["20", "degC"]
    assert said["economiser.water_temperature_degc"][:2] == ["103", "degC"]
    assert float(said["casing_loss_kw"][0]) == pytest.approx(22.0, abs=0.05)
    assert said["casing_loss_kw"][1] == "kW"


def test_purge_scales_with_its_duration(write_example):
    """Twice the purge time carries off twice the heat, and the notice says from what."""
    base = load_case(write_example())
    longer = load_case(write_example((POINTS, f"{POINTS}\npurge_seconds = 120.0")))
    assert longer.boilers[0].spec.purge_energy_j == pytest.approx(2.0 * base.boilers[0].spec.purge_energy_j)
    assert any("120 s of full combustion air leaving at 150 degC" in notice.text for notice in longer.notices)
