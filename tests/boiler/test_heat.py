"""Heat per kilogram of steam, ratings and the working pressure, against an independent property library."""

import pytest
from iapws import IAPWS97

from evenfire.boiler import (
    actual_rating_kg_s,
    blowdown_over_steam,
    deaerator_steam_share,
    efficiency_factor,
    from_and_at_100c_rating_kg_s,
    fuel_curve,
    steam_heat_j_kg,
    working_pressure_factor,
)
from evenfire.errors import OutOfRangeError

from .boilers import boiler


@pytest.mark.parametrize("pressure_bar", [3.0, 10.0, 16.0, 30.0])
@pytest.mark.parametrize("blowdown", [0.0, 0.05])
def test_steam_heat_is_the_balance_of_an_independent_library(pressure_bar, blowdown):
    """h'' - h_feed + b (h' - h_feed) by iapws."""
    pressure_mpa, feed_k = pressure_bar / 10.0, 376.15
    steam, water = IAPWS97(P=pressure_mpa, x=1), IAPWS97(P=pressure_mpa, x=0)
    feed = IAPWS97(P=pressure_mpa, T=feed_k)
    expected = steam.h - feed.h + blowdown * (water.h - feed.h)
    assert steam_heat_j_kg(pressure_bar * 1e5, feed_k, blowdown) == pytest.approx(expected * 1e3, rel=1e-8)


def test_actual_rating_by_hand():
    """5 t/h from and at 100 degC by iapws enthalpies, and back."""
    latent = IAPWS97(P=0.101325, x=1).h - IAPWS97(P=0.101325, x=0).h
    needed = IAPWS97(P=1.0, x=1).h - IAPWS97(P=1.0, T=378.15).h
    actual = actual_rating_kg_s(5.0 / 3.6, 10e5, 378.15)
    assert actual == pytest.approx(5.0 / 3.6 * latent / needed, rel=1e-8)
    assert from_and_at_100c_rating_kg_s(actual, 10e5, 378.15) == pytest.approx(5.0 / 3.6, rel=1e-12)


def test_deaerator_closes_heat_and_mass():
    """One kilogram of boiler steam: what the deaerator takes heats the feedwater."""
    blowdown, pressure_pa = 0.04, 10e5
    share = deaerator_steam_share(378.15, 333.15, pressure_pa, blowdown)
    feed_kg = 1.0 + blowdown
    entering_kg = feed_kg - share
    steam, hot, cold = (
        IAPWS97(P=1.0, x=1).h,
        IAPWS97(P=1.0, T=378.15).h,
        IAPWS97(P=1.0, T=333.15).h,
    )
    assert entering_kg * cold + share * steam == pytest.approx(feed_kg * hot, rel=1e-9)


def test_higher_working_pressure_costs_fuel():
    """From 10 to 16 bar the stack is 21.5 K hotter, about a point of efficiency, and the steam richer."""
    spec = boiler()
    hotter_k = IAPWS97(P=1.6, x=0).T - IAPWS97(P=1.0, x=0).T
    lost = spec.stack_slope_per_k * hotter_k
    assert efficiency_factor(spec, 16e5) == pytest.approx(1.0 - lost / 0.906, rel=1e-7)
    heat = steam_heat_j_kg(16e5, 376.15, 0.04) / steam_heat_j_kg(10e5, 376.15, 0.04)
    assert working_pressure_factor(spec, 16e5, 376.15) == pytest.approx(heat / (1.0 - lost / 0.906), rel=1e-7)
    assert working_pressure_factor(spec, 10e5, 376.15) == pytest.approx(1.0, rel=1e-12)


def test_constant_pressure_factor_errs_as_documented():
    """The factor of full load, used at every load, errs by |shift| * |d eta| / eta^2 and no more."""
    spec = boiler()
    at_points = fuel_curve(spec, 10e5, 376.15).fuel_w_lhv
    at_16_bar = fuel_curve(spec, 16e5, 376.15).fuel_w_lhv
    heat = steam_heat_j_kg(16e5, 376.15, 0.04) / steam_heat_j_kg(10e5, 376.15, 0.04)
    shift = 0.906 * (1.0 - efficiency_factor(spec, 16e5))
    for point, low, high in zip(spec.efficiency_points, at_points, at_16_bar, strict=True):
        eta = point.efficiency_lhv
        exact = low * heat * eta / (eta - shift)
        bound = shift * abs(0.906 - eta) / eta**2
        assert abs(high / exact - 1.0) <= 1.05 * bound + 1e-12
        assert bound < 3e-4


def test_refusals_name_the_limit():
    """Feedwater above boiling, blowdown beyond reason, pressure above the boiler's own are refused."""
    with pytest.raises(
        OutOfRangeError, match=r"must not exceed the boiling temperature of 453\.036 K \[P103\]"
    ):
        steam_heat_j_kg(10e5, 460.0, 0.0)
    with pytest.raises(OutOfRangeError, match=r"between 0 and 0\.5 .*\[P112\]"):
        steam_heat_j_kg(10e5, 376.15, 0.6)
    with pytest.raises(OutOfRangeError, match=r"\[P112\]"):
        blowdown_over_steam(0.5)
    with pytest.raises(OutOfRangeError, match=r"'Five'.*2e\+06 Pa.*1\.7e\+06 Pa absolute \[P113\]"):
        working_pressure_factor(boiler(), 20e5, 376.15)
    with pytest.raises(OutOfRangeError, match=r"deaerator.*\[P102\]"):
        deaerator_steam_share(370.0, 375.0, 10e5, 0.0)
    with pytest.raises(OutOfRangeError, match=r"\[P101\]"):
        steam_heat_j_kg(float("nan"), 376.15, 0.0)
