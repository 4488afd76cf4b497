"""The simulation against analytic cases, independent integration, and its own books."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from iapws import IAPWS97
from scipy.integrate import solve_ivp

from evenfire.accumulator.balance import state_at
from evenfire.accumulator.tables import saturation_table
from evenfire.boiler.curve import fuel_curve
from evenfire.boiler.cycling import cycling_starts_per_s, standing_steam_kg_s
from evenfire.replay.controls import ControlKind, Controls, GivenOutputs
from evenfire.replay.simulate import Replay
from evenfire.replay.starting_controls import usual_controls
from evenfire.replay.vessel_step import vessel_after
from tests.boiler.boilers import FIVE_TONNES, boiler
from tests.replay.plants import RULES, plant, record

WEEK = 7 * 1440
BAND = ControlKind.PRESSURE_BAND


def with_given(controls: Controls, output_kg_s: np.ndarray) -> Controls:
    """The same plant on outputs fixed beforehand."""
    return replace(
        controls,
        burners=replace(controls.burners, kind=ControlKind.GIVEN),
        given=GivenOutputs(output_kg_s=output_kg_s),
    )


def lowest_firing(controls: Controls) -> Controls:
    """Controls whose gain never asks for more than the smallest continuous firing."""
    return replace(controls, burners=replace(controls.burners, gain=0.1))


def peaky_flow(seed: int, steps: int = WEEK) -> np.ndarray:
    """A base load with random peaks of ten minutes [kg/s]."""
    rng = np.random.default_rng(seed)
    return 0.4 + np.repeat(rng.random(steps // 10) ** 6 * 3.0, 10)


@pytest.mark.parametrize("step_s", [5.0, 60.0, 900.0])
def test_a_constant_demand_burns_the_curve_s_fuel(step_s: float) -> None:
    """At three quarters of the rating the boiler fires without a stop, on its curve's fuel at that load."""
    load = 0.75 * FIVE_TONNES.rated_kg_s
    steps = round(2 * 86_400 / step_s)
    made = plant()
    result = Replay(made, record(np.full(steps, load), step_s)).run(usual_controls(made, BAND))
    curve = fuel_curve(FIVE_TONNES, 10.0e5, 376.15)
    fuel_w = float(np.interp(load, curve.output_kg_s, curve.fuel_w_lhv))

    assert result.unmet_kg == 0.0
    assert result.boilers[0].starts == 1
    assert result.fuel_j == pytest.approx(fuel_w * result.duration_s, rel=2e-3)


def test_a_load_below_turndown_cycles_by_the_formula() -> None:
    """Starts per hour are n = (q + q0)(Q - q)/(B (Q + q0)) with the buffer between cut-in and cut-out."""
    low = FIVE_TONNES.rated_kg_s / FIVE_TONNES.turndown
    load = 0.4 * low
    made = plant(boiler(minimum_firing_s=0.0))
    result = Replay(made, record(np.full(6 * 86_400 // 5, load), 5.0)).run(
        lowest_firing(usual_controls(made, BAND))
    )
    standing = standing_steam_kg_s(FIVE_TONNES, 10.0e5)
    expected = float(cycling_starts_per_s(load, low, FIVE_TONNES.buffer_kg, 0.0, standing))

    assert result.boilers[0].starts / result.duration_s == pytest.approx(expected, rel=0.03)
    firing_share = (load + standing) / (low + standing)
    assert result.boilers[0].firing_s / result.duration_s == pytest.approx(firing_share, rel=0.01)


def test_a_cycling_boiler_burns_firing_and_standing_shares() -> None:
    """Fuel of a long cycling run: the share q/Q of lowest firing, standing for the rest, and the purges."""
    low = FIVE_TONNES.rated_kg_s / FIVE_TONNES.turndown
    load = 0.5 * low
    made = plant(boiler(minimum_firing_s=0.0))
    replay = Replay(made, record(np.full(6 * 86_400 // 5, load), 5.0))
    result = replay.run(lowest_firing(usual_controls(made, BAND)))
    run = result.boilers[0]
    curve = fuel_curve(FIVE_TONNES, 10.0e5, 376.15)
    standing_w = FIVE_TONNES.standing_loss_w / 0.89
    start_j = FIVE_TONNES.purge_energy_j / 0.89
    expected = load / low * float(curve.fuel_w_lhv[0]) * result.duration_s
    expected += (result.duration_s - run.firing_s) * standing_w + run.starts * start_j

    assert result.fuel_j == pytest.approx(expected, rel=2e-3)


def test_a_square_wave_fills_and_empties_the_vessel_as_often() -> None:
    """Demand of 3 and 1 t/h by the hour, the boiler given its mean: each hour moves a tonne. No heat loss."""
    wave = np.tile(np.repeat([3.0 / 3.6, 1.0 / 3.6], 60), 48)
    made = plant(volume_m3=60.0)
    assert made.vessel is not None
    made = replace(made, vessel=replace(made.vessel, rules=replace(RULES, heat_loss_w_m2k=0.0)))
    controls = with_given(usual_controls(made, BAND), np.full((1, len(wave)), 2.0 / 3.6))
    result = Replay(made, record(wave)).run(controls)

    assert result.unmet_kg == 0.0
    assert result.discharged_kg == pytest.approx(48 * 1000.0, rel=0.02)
    assert result.boilers[0].starts == 1


def test_discharge_agrees_with_an_independent_integration() -> None:
    """10 m3 from 9.5 bar, 400 kg in half an hour, against solve_ivp on IAPWS-97 by another library."""
    table = saturation_table()
    mass, energy = state_at(table.grid, table.coefficients, 10.0, 9.5e5, 0.85)
    x, flow = math.log(9.5e5), 400.0 / 1800.0
    for _ in range(30):
        mass, energy, x, *_ = vessel_after(
            table.grid,
            table.coefficients,
            10.0,
            0.0,
            293.15,
            mass,
            energy,
            x,
            0.0,
            2.78e6,
            flow * 60.0,
            0.0,
            0.0,
            0.0,
            60.0,
        )

    def phases(p_mpa: float) -> tuple[IAPWS97, IAPWS97]:
        return IAPWS97(P=p_mpa, x=0), IAPWS97(P=p_mpa, x=1)

    def energy_of(p_mpa: float, m: float) -> float:
        liquid, vapour = phases(p_mpa)
        quality = (10.0 / m - liquid.v) / (vapour.v - liquid.v)
        return m * 1e3 * (liquid.u + quality * (vapour.u - liquid.u))

    first_mass = 0.85 * 10.0 / phases(0.95)[0].v + 0.15 * 10.0 / phases(0.95)[1].v

    def slope(_: float, state: np.ndarray) -> list[float]:
        p, m = state
        step = 1e-5
        by_p = (energy_of(p + step, m) - energy_of(p - step, m)) / (2 * step)
        by_m = (energy_of(p, m + 0.1) - energy_of(p, m - 0.1)) / 0.2
        return [(-flow * phases(p)[1].h * 1e3 + flow * by_m) / by_p, -flow]

    path = solve_ivp(slope, (0.0, 1800.0), [0.95, first_mass], rtol=1e-6, atol=1e-8)

    assert math.exp(x) / 1e6 == pytest.approx(float(path.y[0, -1]), rel=1e-4)


@settings(max_examples=25, deadline=None)
@given(
    seed=st.integers(0, 1000),
    volume=st.sampled_from([0.0, 8.0, 40.0]),
    kind=st.sampled_from([ControlKind.PRESSURE_BAND, ControlKind.SMOOTHED_DEMAND]),
    step=st.sampled_from([5.0, 60.0, 900.0]),
    second=st.booleans(),
)
def test_the_books_close(seed: int, volume: float, kind: ControlKind, step: float, second: bool) -> None:
    """Mass and energy to 1e-9 of what passes through, whatever the plant, and never more than was asked."""
    boilers = (FIVE_TONNES, boiler(name="Two", rated_kg_s=0.6, buffer_kg=40.0)) if second else (FIVE_TONNES,)
    made = plant(*boilers, volume_m3=volume)
    result = Replay(made, record(peaky_flow(seed, 2880), step)).run(usual_controls(made, kind))

    assert result.mass_closure < 1e-9
    assert result.energy_closure < 1e-9
    assert result.supplied_kg + result.unmet_kg == pytest.approx(result.demand_kg, rel=1e-9)
    assert result.lowest_process_pa <= 5.0e5


@pytest.mark.parametrize("kind", [ControlKind.PRESSURE_BAND, ControlKind.SMOOTHED_DEMAND])
def test_garbage_in_the_future_changes_nothing_before_it(kind: ControlKind) -> None:
    """The first half of the trace is the same bit for bit whatever comes after."""
    flow = peaky_flow(3)
    changed = flow.copy()
    changed[WEEK // 2 :] = 2.9
    made = plant(volume_m3=30.0)
    first, second = (Replay(made, record(x)).run(usual_controls(made, kind)).trace for x in (flow, changed))
    half = WEEK // 2

    assert np.array_equal(first.output_kg_s[:, :half], second.output_kg_s[:, :half])
    assert np.array_equal(first.vessel_pa[:half], second.vessel_pa[:half])
    assert not np.array_equal(first.output_kg_s[:, half:], second.output_kg_s[:, half:])


def test_steps_of_five_seconds_and_a_minute_agree() -> None:
    """The same demand in finer steps: fuel within 0.5 %."""
    flow = peaky_flow(5)
    made = plant(volume_m3=30.0)
    coarse = Replay(made, record(flow)).run(usual_controls(made, BAND))
    fine = Replay(made, record(np.repeat(flow, 12), 5.0)).run(usual_controls(made, BAND))

    assert fine.fuel_j == pytest.approx(coarse.fuel_j, rel=5e-3)
    assert fine.unmet_kg == pytest.approx(coarse.unmet_kg, abs=0.02 * coarse.demand_kg)


def test_charging_and_discharging_exclude_each_other() -> None:
    """No minute in which steam goes into the vessel and out of it, where a step is one part."""
    made = plant(volume_m3=30.0)
    trace = Replay(made, record(peaky_flow(7))).run(usual_controls(made, BAND)).trace

    assert trace.charge_kg_s.max() > 0.0
    assert trace.discharge_kg_s.max() > 0.0
    assert not ((trace.charge_kg_s > 0.0) & (trace.discharge_kg_s > 0.0)).any()


def test_a_peak_beyond_everything_is_an_event() -> None:
    """Half an hour at twice the rating without a vessel: unmet steam, low process pressure, one event."""
    flow = np.full(WEEK, 0.5)
    flow[3000:3030] = 2.0 * FIVE_TONNES.rated_kg_s
    made = plant()
    result = Replay(made, record(flow)).run(usual_controls(made, BAND))
    (event,) = result.events

    assert 3000 <= event.first_step <= event.last_step < 3030
    assert event.unmet_kg == pytest.approx(result.unmet_kg, rel=1e-3)
    assert event.lowest_process_pa == pytest.approx(result.lowest_process_pa, rel=1e-6)
    # The rating and two bands of the boiler's own water are all it has for the process.
    least = 30 * 60 * FIVE_TONNES.rated_kg_s - 2.0 * FIVE_TONNES.buffer_kg
    assert result.unmet_kg >= least
