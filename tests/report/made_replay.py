"""A replay made by hand for a made alternative: the plan's own figures, and a short trace."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from evenfire.appraisal.results import (
    AlternativeResult,
    Replayed,
    ReplayedSize,
    ReplayEvent,
    ReplayTrace,
    SetPoint,
)


def with_replay(result: AlternativeResult) -> AlternativeResult:
    """The alternative with a replay that realises its plan."""
    steps = 2 * 1440
    boilers = len(result.boilers)
    rng = np.random.default_rng(1)
    demand = 2.0 + rng.random(steps)
    vessel = result.vessel
    size = ReplayedSize(
        boilers=tuple(boiler.name for boiler in result.boilers),
        vessel_volume_m3=0.0 if vessel is None else vessel.volume_m3,
        charged_bar_abs=None if vessel is None else vessel.charged_bar_abs,
        discharged_bar_abs=None if vessel is None else vessel.discharged_bar_abs,
        planned_cost=result.net_present_cost or 0.0,
        replayed_cost=result.net_present_cost or 0.0,
        unmet_steam_t_per_year=result.unmet_steam_t_per_year,
    )
    run = Replayed(
        net_present_cost=result.net_present_cost or 0.0,
        net_present_saving=result.net_present_saving or 0.0,
        cost_lines=result.cost_lines,
        fuel_parts=result.fuel_parts,
        fuel_mwh_per_year=result.fuel_mwh_per_year,
        fuel_saved_mwh_per_year=result.fuel_saved_mwh_per_year,
        fuel_saved_percent=result.fuel_saved_percent,
        co2_t_per_year=result.co2_t_per_year,
        co2_saved_t_per_year=result.co2_saved_t_per_year,
        steam_t_per_year=result.steam_t_per_year,
        steam_cost_per_t=result.steam_cost_per_t,
        burner_starts_per_year=result.burner_starts_per_year,
        firing_hours_per_year=result.firing_hours_per_year,
        unmet_steam_t_per_year=result.unmet_steam_t_per_year,
        vented_steam_t_per_year=0.0,
        payback=result.payback,
        passes=True,
        lowest_process_bar_abs=4.2,
        lowest_boiler_bar_abs=8.7,
        boiler_low_hours_per_year=1.5,
        release_limited_hours_per_year=0.0,
        vessel_empty_hours_per_year=2.0,
        mass_closure_relative=3e-14,
        energy_closure_relative=1e-15,
        planned_saving=result.net_present_saving or 0.0,
        realised_share=None if not result.net_present_saving else 1.0,
        margin_percent=None if vessel is None else 25.0,
        band_cost=1.01 * (result.net_present_cost or 0.0),
        trials=96,
        learnt_cost_per_t=35.1,
        judged_cost_per_t=35.2,
        set_points=(SetPoint(name="reducing valve", value="4.00", unit="bar g", purpose="holds pressure"),),
        sizes=(size, replace(size, vessel_volume_m3=1.25 * size.vessel_volume_m3)),
        events=(
            ReplayEvent(start="2026-02-02T06:10:00", minutes=4.0, unmet_kg=37.0, lowest_process_bar_abs=4.2),
        ),
        worst=ReplayTrace(
            start="2026-02-02T00:00:00",
            step_s=60.0,
            demand_t_h=demand,
            supplied_t_h=np.minimum(demand, 2.95),
            output_t_h=np.full((boilers, steps), 2.5 / max(1, boilers)),
            vessel_bar_abs=np.full(steps, np.nan if vessel is None else 7.0),
            boiler_bar_abs=np.full(steps, 10.0),
            process_bar_abs=np.full(steps, 5.0),
        ),
    )
    return replace(result, replayed=run)
