"""What must hold for any boiler."""

from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from evenfire.boiler import (
    actual_rating_kg_s,
    buffer_kg,
    convex_pieces,
    cycling_starts_per_s,
    efficiency_factor,
    from_and_at_100c_rating_kg_s,
    fuel_curve,
    operating_modes,
    steam_heat_j_kg,
    working_pressure_factor,
)
from evenfire.plant import BoilerSpec, EfficiencyPoint

pressures = st.floats(2e5, 30e5)
feedwater = st.floats(283.15, 390.0)


@st.composite
def boilers(draw: st.DrawFn) -> BoilerSpec:
    """Any boiler that the physics accepts at every pressure of 2 to 30 bar."""
    turndown = draw(st.floats(1.0, 12.0))
    inner = draw(st.lists(st.floats(0.02, 0.98), max_size=6, unique_by=lambda load: round(load, 2)))
    loads = [1.0 / turndown, *(load for load in sorted(inner) if 1.0 / turndown + 0.01 < load < 0.99)]
    if loads[-1] < 1.0:
        loads.append(1.0)
    return BoilerSpec(
        name="Any",
        rated_kg_s=draw(st.floats(0.05, 20.0)),
        largest_working_pa=31e5,
        turndown=turndown,
        efficiency_points=tuple(
            EfficiencyPoint(load_fraction=load, efficiency_lhv=draw(st.floats(0.6, 0.9))) for load in loads
        ),
        efficiency_at_pa=draw(pressures),
        standing_loss_w=draw(st.floats(0.0, 2e5)),
        purge_energy_j=2e7,
        buffer_kg=draw(st.floats(1.0, 500.0)),
        burner_band_pa=1.0e5,
        minimum_firing_s=0.0,
        minimum_off_s=draw(st.floats(0.0, 3600.0)),
        cold_start_s=3600.0,
        cold_start_energy_j=1e9,
        ramp_kg_s2=0.01,
        blowdown_fraction=draw(st.floats(0.0, 0.2)),
        stack_slope_per_k=draw(st.floats(0.0, 7e-4)),
    )


@settings(deadline=None)
@given(spec=boilers(), pressure=pressures, feedwater_k=feedwater)
def test_fuel_never_beats_its_heat(spec, pressure, feedwater_k):
    """Fuel is never less than the heat in the steam, and the range is rated/turndown to rated."""
    curve = fuel_curve(spec, pressure, feedwater_k)
    heat = steam_heat_j_kg(pressure, feedwater_k, spec.blowdown_fraction)
    assert (curve.fuel_w_lhv >= curve.output_kg_s * heat * (1.0 - 1e-9)).all()
    assert curve.output_kg_s[-1] == pytest.approx(spec.rated_kg_s)
    assert curve.output_kg_s[0] == pytest.approx(spec.rated_kg_s / spec.turndown)


@settings(deadline=None)
@given(spec=boilers(), pressure=pressures, feedwater_k=feedwater)
def test_pieces_are_convex_and_together_the_curve(spec, pressure, feedwater_k):
    """Pieces share their ends, keep every point, are convex, and no two neighbours are convex together."""
    curve = fuel_curve(spec, pressure, feedwater_k)
    pieces = convex_pieces(curve)
    joined = np.concatenate([pieces[0].output_kg_s, *(piece.output_kg_s[1:] for piece in pieces[1:])])
    assert (joined == curve.output_kg_s).all()
    for piece in pieces:
        slopes = np.diff(piece.fuel_w_lhv) / np.diff(piece.output_kg_s)
        assert (np.diff(slopes) >= -1e-9 * np.abs(slopes[:-1])).all()
    for one, two in pairwise(pieces):
        last = np.diff(one.fuel_w_lhv)[-1] / np.diff(one.output_kg_s)[-1]
        first = np.diff(two.fuel_w_lhv)[0] / np.diff(two.output_kg_s)[0]
        assert first < last


@settings(deadline=None)
@given(spec=boilers(), pressure=pressures, feedwater_k=feedwater)
def test_modes_cover_all_outputs_without_a_jump(spec, pressure, feedwater_k):
    """From standby to rated output the modes join in output, fuel and starts."""
    modes = operating_modes(spec, pressure, feedwater_k)
    assert modes[0].high_kg_s == 0.0
    assert modes[-1].high_kg_s == pytest.approx(spec.rated_kg_s)
    for before, after in pairwise(modes):
        assert before.high_kg_s == pytest.approx(after.low_kg_s, abs=1e-12)
        assert before.fuel_w_lhv[-1] == pytest.approx(after.fuel_w_lhv[0], rel=1e-9)
        assert before.starts_per_s_high == pytest.approx(after.starts_per_s_low, abs=1e-12)


@settings(deadline=None)
@given(spec=boilers(), low=pressures, high=pressures, feedwater_k=feedwater)
def test_hotter_water_costs_efficiency(spec, low, high, feedwater_k):
    """A higher working pressure never raises the efficiency, and at the points' own the factor is one."""
    low, high = sorted((low, high))
    assert efficiency_factor(spec, high) <= efficiency_factor(spec, low) + 1e-12
    assert working_pressure_factor(spec, spec.efficiency_at_pa, feedwater_k) == pytest.approx(1.0, rel=1e-12)


@settings(deadline=None)
@given(
    firing=st.floats(0.01, 10.0),
    buffer=st.floats(0.1, 1e3),
    minimum_off=st.floats(0.0, 1e4),
    standing=st.floats(0.0, 0.1),
)
def test_starts_are_concave_and_bounded(firing, buffer, minimum_off, standing):
    """Starts are not negative, concave, at most (Q + q0)/(4 B), and at most one per minimum off time."""
    starts = cycling_starts_per_s(np.linspace(0.0, firing, 41), firing, buffer, minimum_off, standing)
    scale = (firing + standing) / (4.0 * buffer)
    assert (starts >= 0.0).all()
    assert starts.max() <= scale * (1.0 + 1e-12)
    assert starts.max() * minimum_off <= 1.0 + 1e-12
    assert (np.diff(starts, 2) <= 1e-9 * scale).all()


@settings(deadline=None)
@given(rating=st.floats(0.01, 50.0), pressure=pressures, feedwater_k=feedwater)
def test_ratings_convert_back(rating, pressure, feedwater_k):
    """From and at 100 degC to actual and back is the identity; cold feedwater makes less."""
    actual = actual_rating_kg_s(rating, pressure, feedwater_k)
    assert from_and_at_100c_rating_kg_s(actual, pressure, feedwater_k) == pytest.approx(rating, rel=1e-12)
    if feedwater_k < 373.0:
        assert actual < rating


@settings(deadline=None)
@given(water=st.floats(0.1, 50.0), pressure=pressures, band=st.floats(0.05, 0.5), fill=st.floats(0.3, 0.9))
def test_buffer_grows_with_water_and_band(water, pressure, band, fill):
    """The buffer is proportional to the water and grows with the pressure band."""
    band_pa = band * pressure
    one = buffer_kg(water, pressure, band_pa, fill)
    assert one > 0.0
    assert buffer_kg(2.0 * water, pressure, band_pa, fill) == pytest.approx(2.0 * one, rel=1e-12)
    assert buffer_kg(water, pressure, 1.1 * band_pa, fill) > one
