"""Siegert against hand values and against a combustion balance with independent gas properties."""

import pytest
from CoolProp.CoolProp import PropsSI

from evenfire.boiler import (
    StackReading,
    check_points_against_stack,
    efficiency_points_from_stack,
    o2_from_co2_percent,
    siegert_coefficients,
    stack_loss,
    with_economiser,
)
from evenfire.errors import OutOfRangeError

from .boilers import points

AIR_K = 293.15
AIR_NITROGEN_PER_OXYGEN = 79.05 / 20.95


@pytest.mark.parametrize(
    ("kind", "stack_degc", "o2", "percent"),
    [
        ("natural_gas", 230.0, 3.0, 9.590),
        ("natural_gas", 130.0, 3.0, 5.0233),
        ("natural_gas", 230.0, 5.0, 10.5525),
        ("gas_oil", 230.0, 3.0, 9.4033),
    ],
)
def test_siegert_by_hand(kind, stack_degc, o2, percent):
    """(Tg - Ta)(A2/(21 - O2) + B) for four hand cases (B4 to B7)."""
    assert 100.0 * stack_loss(kind, stack_degc + 273.15, AIR_K, o2) == pytest.approx(percent, abs=5e-5)


def sensible_j_mol(gas: str, stack_k: float) -> float:
    """Enthalpy of a flue gas component over that of the air temperature, as a thin gas."""
    return sum(
        sign * PropsSI("Hmolar", "T", kelvin, "P", 100.0, gas) for sign, kelvin in ((1, stack_k), (-1, AIR_K))
    )


def balance_loss(moles: dict[str, float], lhv_j: float, stack_k: float, o2_percent: float) -> float:
    """Stack loss of a fuel of so many moles C, H2, S, O2 and water, from its own combustion."""
    needed = moles["C"] + moles["H2"] / 2.0 + moles.get("S", 0.0) - moles.get("O2", 0.0)
    products = moles["C"] + moles.get("S", 0.0)
    # o2_percent = excess / (products + nitrogen + excess), dry
    share = o2_percent / 100.0
    excess = (
        share
        * (products + needed * AIR_NITROGEN_PER_OXYGEN)
        / (1.0 - share * (1.0 + AIR_NITROGEN_PER_OXYGEN))
    )
    heat = (
        products * sensible_j_mol("CarbonDioxide", stack_k)
        + (needed + excess) * AIR_NITROGEN_PER_OXYGEN * sensible_j_mol("Nitrogen", stack_k)
        + excess * sensible_j_mol("Oxygen", stack_k)
        + (moles["H2"] + moles.get("H2O", 0.0)) * vapour_j_mol(stack_k)
    )
    return heat / lhv_j


def vapour_j_mol(stack_k: float) -> float:
    """Water vapour that does not condense: heat capacity of the thin gas at the mean temperature."""
    return PropsSI("Cpmolar", "T", max(0.5 * (stack_k + AIR_K), 380.0), "P", 100.0, "Water") * (
        stack_k - AIR_K
    )


FUELS = {
    "natural_gas": ({"C": 1.0, "H2": 2.0}, 802.3e3),
    "lpg": ({"C": 3.0, "H2": 4.0}, 2043.1e3),
    "gas_oil": ({"C": 860 / 12.011, "H2": 136 / 2.016}, 42.6e6),
    "heavy_fuel_oil": ({"C": 860 / 12.011, "H2": 110 / 2.016, "S": 20 / 32.06, "O2": 5 / 32.0}, 40.4e6),
    "wood": ({"C": 425 / 12.011, "H2": 51 / 2.016, "O2": 374 / 32.0, "H2O": 150 / 18.015}, 15.6e6),
}
"""Moles per mole or per kilogram, and the net calorific value of the same amount [J]."""


@pytest.mark.parametrize("kind", list(FUELS))
@pytest.mark.parametrize("stack_degc", [130.0, 200.0, 260.0])
@pytest.mark.parametrize("o2", [2.0, 5.0, 9.0])
def test_siegert_agrees_with_a_combustion_balance(kind, stack_degc, o2):
    """Every fuel's Siegert loss lies within a point (half the indirect method's 2) of its balance."""
    moles, lhv_j = FUELS[kind]
    stack_k = stack_degc + 273.15
    assert 100.0 * stack_loss(kind, stack_k, AIR_K, o2) == pytest.approx(
        100.0 * balance_loss(moles, lhv_j, stack_k, o2), abs=1.0
    )


@pytest.mark.parametrize("kind", list(FUELS))
def test_carbon_dioxide_and_oxygen_forms_agree(kind):
    """A CO2 reading turned into O2 gives the loss of the CO2 form; impossible CO2 is refused."""
    coefficients = siegert_coefficients(kind)
    co2 = 9.0
    loss = stack_loss(kind, 480.0, AIR_K, o2_from_co2_percent(kind, co2))
    assert loss == pytest.approx(
        (480.0 - AIR_K) * (coefficients.a1 / co2 + coefficients.b) / 100.0, rel=1e-12
    )
    with pytest.raises(OutOfRangeError, match=r"carbon dioxide in dry flue gas.*\[P116\]"):
        o2_from_co2_percent(kind, 25.0)


def test_efficiency_from_readings_closes_the_heat_balance():
    """Fuel = steam + casing + stack at every load."""
    readings = [
        StackReading(load_fraction=0.25, stack_k=455.0, o2_percent=6.0),
        StackReading(load_fraction=1.0, stack_k=500.0, o2_percent=3.0),
    ]
    rated_w, casing_w = 3.25e6, 26e3
    for point, reading in zip(
        efficiency_points_from_stack("natural_gas", readings, AIR_K, rated_w, casing_w), readings, strict=True
    ):
        steam_w = point.load_fraction * rated_w
        fuel_w = steam_w / point.efficiency_lhv
        stack_w = fuel_w * stack_loss("natural_gas", reading.stack_k, AIR_K, reading.o2_percent)
        assert fuel_w == pytest.approx(steam_w + casing_w + stack_w, rel=1e-12)


def test_economiser_of_the_hand_example():
    """From 230 to 130 degC at 3 % O2 an economiser gains 4.567 points (B5 less B4)."""
    before = [StackReading(load_fraction=1.0, stack_k=503.15, o2_percent=3.0)]
    after = with_economiser(before, 378.15, 0.8)
    gained = [
        efficiency_points_from_stack("natural_gas", each, AIR_K, 1e6, 0.0)[0].efficiency_lhv
        for each in (after, before)
    ]
    assert 100.0 * (gained[0] - gained[1]) == pytest.approx(4.567, abs=5e-4)


def test_efficiency_above_what_the_stack_leaves_is_refused():
    """At 230 degC and 3 % O2 the stack takes 9.6 %: 92 % cannot be, 90 % can."""
    readings = [StackReading(load_fraction=1.0, stack_k=503.15, o2_percent=3.0)]
    check_points_against_stack(points((1.0, 0.90)), "natural_gas", readings, AIR_K)
    with pytest.raises(OutOfRangeError, match=r"100% load.*0\.92.*must not exceed 0\.9041.*\[P110\]"):
        check_points_against_stack(points((1.0, 0.92)), "natural_gas", readings, AIR_K)


def test_refusals():
    """Air for flue gas, a stack colder than air, unknown fuel, unordered readings, water hotter than gas."""
    with pytest.raises(OutOfRangeError, match=r"between 0 and 18 % \[P116\]"):
        stack_loss("natural_gas", 480.0, AIR_K, 20.9)
    with pytest.raises(OutOfRangeError, match=r"stack temperature.*\[P118\]"):
        stack_loss("natural_gas", 280.0, AIR_K, 3.0)
    with pytest.raises(OutOfRangeError, match=r"'electricity'.*natural_gas, gas_oil.*\[P115\]"):
        stack_loss("electricity", 480.0, AIR_K, 3.0)
    reading = StackReading(load_fraction=1.0, stack_k=480.0, o2_percent=3.0)
    with pytest.raises(OutOfRangeError, match=r"rising load above 0 \[P111\]"):
        efficiency_points_from_stack("natural_gas", [reading, reading], AIR_K, 1e6, 0.0)
    with pytest.raises(OutOfRangeError, match=r"\[P114\]"):
        efficiency_points_from_stack("natural_gas", [reading], AIR_K, 1e6, -1.0)
    with pytest.raises(OutOfRangeError, match=r"water into the economiser.*\[P119\]"):
        with_economiser([reading], 490.0, 0.5)
    with pytest.raises(OutOfRangeError, match=r"effectiveness.*\[P119\]"):
        with_economiser([reading], 378.0, 1.0)
