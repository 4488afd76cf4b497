"""Fuel against output: points, interpolation, convex pieces, operating modes."""

from itertools import pairwise

import numpy as np
import pytest

from evenfire.boiler import (
    FuelCurve,
    convex_pieces,
    cycling_starts_per_s,
    efficiency_lhv,
    fuel_curve,
    operating_modes,
    start_fuel_j_lhv,
    steam_heat_j_kg,
)
from evenfire.errors import OutOfRangeError

from .boilers import boiler, points

WORKING_PA, FEEDWATER_K = 10e5, 376.15


def fuel_of_modes(modes, output_kg_s):
    """Least fuel over the firing modes that can give the output, one binary per mode."""
    return min(
        np.interp(output_kg_s, mode.output_kg_s, mode.fuel_w_lhv)
        for mode in modes
        if mode.firing and mode.low_kg_s <= output_kg_s <= mode.high_kg_s
    )


def test_fuel_at_the_stated_points_is_heat_over_efficiency():
    """F = q dh / eta at each efficiency point."""
    spec = boiler()
    curve = fuel_curve(spec, WORKING_PA, FEEDWATER_K)
    heat = steam_heat_j_kg(WORKING_PA, FEEDWATER_K, 0.04)
    for point, output, fuel in zip(spec.efficiency_points, curve.output_kg_s, curve.fuel_w_lhv, strict=True):
        assert output == pytest.approx(point.load_fraction * spec.rated_kg_s, rel=1e-12)
        assert fuel == pytest.approx(output * heat / point.efficiency_lhv, rel=1e-12)


def test_two_points_recover_a_boiler_with_constant_losses_at_every_load():
    """With a constant stack share and casing loss the straight line in fuel is exact between points."""
    stack, casing = 0.08, 0.01

    def eta(load: float) -> float:
        return load * (1.0 - stack) / (load + casing)

    spec = boiler(efficiency_points=points((0.25, eta(0.25)), (1.0, eta(1.0))))
    loads = np.linspace(0.25, 1.0, 31)
    assert efficiency_lhv(spec, loads * spec.rated_kg_s, WORKING_PA) == pytest.approx(eta(loads), rel=1e-12)


def test_interpolating_efficiency_instead_would_differ_as_documented():
    """Midway between 89 % at quarter and 91 % at half load the two ways differ by 0.36 % of the fuel."""
    spec = boiler()
    ours = float(efficiency_lhv(spec, 0.375 * spec.rated_kg_s, WORKING_PA))
    assert 100.0 * (ours / 0.90 - 1.0) == pytest.approx(0.36, abs=0.005)
    documented = (0.91 - 0.89) * 0.25 / (4.0 * 0.90 * 0.375)
    assert ours / 0.90 - 1.0 == pytest.approx(documented, rel=0.04)


def test_turndown_cuts_the_curve_inside_the_points():
    """A turndown of 2 starts the curve at half load, wherever the points begin."""
    spec = boiler(turndown=2.0)
    curve = fuel_curve(spec, WORKING_PA, FEEDWATER_K)
    assert curve.output_kg_s / spec.rated_kg_s == pytest.approx([0.5, 0.75, 1.0], rel=1e-12)


def test_on_off_burner_is_a_curve_of_one_point():
    """A turndown of 1 leaves rated output alone, and the firing mode with it."""
    spec = boiler(turndown=1.0)
    assert len(fuel_curve(spec, WORKING_PA, FEEDWATER_K).output_kg_s) == 1
    firing = operating_modes(spec, WORKING_PA, FEEDWATER_K)[-1]
    assert firing.firing
    assert firing.low_kg_s == firing.high_kg_s == pytest.approx(spec.rated_kg_s)


@pytest.mark.parametrize("seed", range(20))
def test_pieces_of_a_crooked_curve_are_convex_and_exact_on_a_fine_grid(seed):
    """For random efficiency points the least fuel over the pieces is the curve itself at 2 000 outputs."""
    rng = np.random.default_rng(seed)
    loads = np.linspace(0.2, 1.0, 9)
    spec = boiler(
        turndown=5.0,
        efficiency_points=points(*zip(loads, rng.uniform(0.80, 0.95, 9), strict=True)),
    )
    curve = fuel_curve(spec, WORKING_PA, FEEDWATER_K)
    pieces = convex_pieces(curve)
    modes = operating_modes(spec, WORKING_PA, FEEDWATER_K)
    assert len(pieces) > 1
    for piece in pieces:
        slopes = np.diff(piece.fuel_w_lhv) / np.diff(piece.output_kg_s)
        assert (np.diff(slopes) >= -1e-9 * np.abs(slopes[:-1])).all()
    for output in np.linspace(curve.output_kg_s[0], curve.output_kg_s[-1], 2000):
        expected = np.interp(output, curve.output_kg_s, curve.fuel_w_lhv)
        assert fuel_of_modes(modes, output) == pytest.approx(expected, rel=1e-12)


def test_pieces_are_as_few_as_possible():
    """Slopes 1 2 3 | 1 2 | 0.5 make three pieces."""
    output = np.arange(7.0)
    curve = FuelCurve(output_kg_s=output, fuel_w_lhv=np.cumsum([5.0, 1, 2, 3, 1, 2, 0.5]))
    assert [list(piece.output_kg_s) for piece in convex_pieces(curve)] == [
        [0.0, 1.0, 2.0, 3.0],
        [3.0, 4.0, 5.0],
        [5.0, 6.0],
    ]


def test_cannery_like_boiler_is_convex():
    """Efficiency with its best at three quarters load is one convex piece."""
    assert len(convex_pieces(fuel_curve(boiler(), WORKING_PA, FEEDWATER_K))) == 1


def test_modes_join_without_a_jump():
    """Hot standby, cycling and firing agree in fuel and starts where they meet, over the whole range."""
    modes = operating_modes(boiler(), WORKING_PA, FEEDWATER_K)
    assert [mode.name for mode in modes] == [
        "hot standby",
        "cycling 1",
        "cycling 2",
        "cycling 3",
        "cycling 4",
        "firing",
    ]
    for before, after in pairwise(modes):
        assert before.high_kg_s == pytest.approx(after.low_kg_s)
        assert before.fuel_w_lhv[-1] == pytest.approx(after.fuel_w_lhv[0])
        assert before.starts_per_s_high == pytest.approx(after.starts_per_s_low, abs=1e-12)


def test_standby_pays_the_standing_loss_at_lowest_firing():
    """28 kW at 89 % are 31.5 kW of fuel; one purge of 20 MJ costs 20 / 0.89."""
    spec = boiler()
    standby = operating_modes(spec, WORKING_PA, FEEDWATER_K)[0]
    assert standby.fuel_w_lhv[0] == pytest.approx(28e3 / 0.89, rel=1e-12)
    assert start_fuel_j_lhv(spec, WORKING_PA) == pytest.approx(20e6 / 0.89, rel=1e-12)


def test_standby_starts_make_good_the_standing_loss():
    """On standby each start refills the buffer once: starts times its heat is the standing loss, to 5 %."""
    spec = boiler()
    standby = operating_modes(spec, WORKING_PA, FEEDWATER_K)[0]
    latent = 2777.11954e3 - 762.68284e3
    assert standby.starts_per_s_low * spec.buffer_kg * latent == pytest.approx(28e3, rel=0.05)


def test_chords_of_the_starts_err_as_documented():
    """Starts between the five points lie below the parabola by at most Q/(64 B)."""
    spec = boiler(standing_loss_w=0.0)
    modes = operating_modes(spec, WORKING_PA, FEEDWATER_K)[1:5]
    firing_kg_s = modes[-1].high_kg_s
    loads = np.linspace(0.0, firing_kg_s, 4001)
    chords = np.interp(
        loads,
        [mode.low_kg_s for mode in modes] + [firing_kg_s],
        [mode.starts_per_s_low for mode in modes] + [modes[-1].starts_per_s_high],
    )
    below = cycling_starts_per_s(loads, firing_kg_s, spec.buffer_kg) - chords
    assert below.min() >= -1e-15
    assert below.max() == pytest.approx(firing_kg_s / (64.0 * spec.buffer_kg), rel=1e-6)


def test_refusals():
    """Gross taken for net, points that do not span the range, loads outside, all problems at once."""
    with pytest.raises(
        OutOfRangeError, match=r"'Five', efficiency at 100% load.*1\.02.*gross and net mixed up.*P110"
    ):
        fuel_curve(boiler(efficiency_points=points((0.25, 0.9), (1.0, 1.02))), WORKING_PA, FEEDWATER_K)
    with pytest.raises(OutOfRangeError, match=r"from 0\.4 to 1 of rated output; must span 0\.25 .*P111"):
        fuel_curve(boiler(efficiency_points=points((0.4, 0.9), (1.0, 0.9))), WORKING_PA, FEEDWATER_K)
    with pytest.raises(OutOfRangeError, match=r"loads do not rise.*P111"):
        fuel_curve(boiler(efficiency_points=points((0.4, 0.9), (0.2, 0.9))), WORKING_PA, FEEDWATER_K)
    with pytest.raises(OutOfRangeError, match=r"found none.*P111"):
        fuel_curve(boiler(efficiency_points=()), WORKING_PA, FEEDWATER_K)
    with pytest.raises(OutOfRangeError, match=r"firing load: found 0\.1 kg/s; must lie between 0\.347.*P111"):
        efficiency_lhv(boiler(), 0.1, WORKING_PA)
    with pytest.raises(OutOfRangeError) as both:
        fuel_curve(boiler(rated_kg_s=-1.0, turndown=0.5), WORKING_PA, FEEDWATER_K)
    assert [problem.code for problem in both.value.problems] == ["P114", "P114"]
    with pytest.raises(OutOfRangeError, match=r"efficiency \(net\) at working pressure.*P110"):
        fuel_curve(boiler(efficiency_points=points((0.25, 0.99), (1.0, 0.999))), 3e5, FEEDWATER_K)
