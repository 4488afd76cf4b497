"""``replay.json``, ``set_points.csv`` and ``trace.csv``: what the plants did when they were run."""

from __future__ import annotations

import datetime as dt
import json
from dataclasses import asdict
from typing import Any

import pandas as pd

from evenfire.appraisal.results import AlternativeResult, Appraisal, Replayed
from evenfire.report.cautions import CAUTIONS
from evenfire.report.tables import as_text
from evenfire.report.trade_units import repeating_command

SCHEMA_VERSION = 1


def replay_entry(result: AlternativeResult, run: Replayed) -> dict[str, Any]:
    """Everything a replay found about one alternative, without its trace."""
    return {
        "passes": run.passes,
        "fuel_mwh_per_year": run.fuel_mwh_per_year,
        "burner_starts_per_year": run.burner_starts_per_year,
        "firing_hours_per_year": run.firing_hours_per_year,
        "unmet_steam_t_per_year": run.unmet_steam_t_per_year,
        "vented_steam_t_per_year": run.vented_steam_t_per_year,
        "net_present_cost": run.net_present_cost,
        "net_present_cost_on_pressure_band": run.band_cost,
        "planned_saving": run.planned_saving,
        "realised_saving": run.net_present_saving,
        "realised_share": run.realised_share,
        "margin": None if run.margin_percent is None else run.margin_percent / 100.0,
        "lowest_process_pressure_bar_abs": run.lowest_process_bar_abs,
        "lowest_boiler_pressure_bar_abs": run.lowest_boiler_bar_abs,
        "boiler_low_hours_per_year": run.boiler_low_hours_per_year,
        "release_limited_hours_per_year": run.release_limited_hours_per_year,
        "vessel_empty_hours_per_year": run.vessel_empty_hours_per_year,
        "mass_closure_relative": run.mass_closure_relative,
        "energy_closure_relative": run.energy_closure_relative,
        "tuning": {
            "trials": run.trials,
            "learnt_cost_per_t": run.learnt_cost_per_t,
            "judged_cost_per_t": run.judged_cost_per_t,
        },
        "set_points": [asdict(row) for row in run.set_points],
        "near_optimal_plants": [asdict(size) | {"boilers": list(size.boilers)} for size in run.sizes],
        "worst_events": [asdict(event) for event in run.events],
        "vessel_volume_m3": 0.0 if result.vessel is None else result.vessel.volume_m3,
    }


def replay_document_text(appraisal: Appraisal) -> str:
    """``replay.json``."""
    content = {
        "schema_version": SCHEMA_VERSION,
        "case": appraisal.case.name,
        "reference": appraisal.reference,
        "best": appraisal.best,
        "cautions": list(CAUTIONS),
        "alternatives": [
            {"name": result.name} | replay_entry(result, result.replayed)
            for result in appraisal.alternatives
            if result.replayed is not None
        ],
        "command": repeating_command(appraisal).replace(" appraise ", " replay ", 1),
        "input_hashes_sha256": dict(appraisal.case.input_hashes),
        "versions": dict(appraisal.versions),
    }
    return json.dumps(content, indent=2, ensure_ascii=False, allow_nan=False) + "\n"


def set_point_table(appraisal: Appraisal) -> str:
    """``set_points.csv``: one line per setting and alternative."""
    rows = [
        {"alternative": as_text(result.name)} | {key: as_text(text) for key, text in asdict(row).items()}
        for result in appraisal.alternatives
        if result.replayed is not None
        for row in result.replayed.set_points
    ]
    return pd.DataFrame(rows).to_csv(index=False, lineterminator="\n")


def trace_table(appraisal: Appraisal) -> str:
    """``trace.csv``: a week around each alternative's worst event, step by step."""
    frames = []
    for result in appraisal.alternatives:
        if result.replayed is None:
            continue
        worst = result.replayed.worst
        start = dt.datetime.fromisoformat(worst.start)
        steps = len(worst.demand_t_h)
        frame = pd.DataFrame(
            {
                "alternative": result.name,
                "time": [
                    (start + dt.timedelta(seconds=step * worst.step_s)).isoformat() for step in range(steps)
                ],
                "demand_t_h": worst.demand_t_h,
                "supplied_t_h": worst.supplied_t_h,
                "output_t_h": worst.output_t_h.sum(axis=0),
                "process_pressure_bar_abs": worst.process_bar_abs,
                "boiler_pressure_bar_abs": worst.boiler_bar_abs,
                "vessel_pressure_bar_abs": worst.vessel_bar_abs,
            }
        )
        frames.append(frame)
    return pd.concat(frames).to_csv(index=False, lineterminator="\n", float_format="%.5g")
