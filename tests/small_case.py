"""A small case on disk that a whole appraisal runs through in seconds, and its appraisal."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pandas as pd
import pytest

from evenfire.appraisal.appraise import appraise
from evenfire.appraisal.results import Appraisal
from evenfire.case.load import load_case

SMALL_CASE = """
[site]
name = "Small works (invented)"
question = "Which plant?"
[record]
file = "steam.csv"
time_column = "time"
flow_column = "steam_kg_h"
flow_unit = "kg/h"
gaps = "refuse"
[steam]
process_pressure_bar_g = 3.0
boiler_pressure_bar_g = 9.0
feedwater_temperature_degc = 103.0
blowdown_percent = 4.0
charging_pressure_drop_bar = 0.5
discharging_pressure_drop_bar = 0.5
ambient_temperature_degc = 20.0
[fuel]
kind = "natural_gas"
calorific_basis = "hhv"
price_per_mwh = 45.0
price_escalation_percent_per_year = 1.0
carbon_price_per_t = 60.0
carbon_escalation_percent_per_year = 2.0
[[existing_boiler]]
name = "Old boiler"
rating_kg_h = 3000
rating_basis = "actual"
design_pressure_bar_g = 13.0
turndown_ratio = 4.0
calorific_basis = "lhv"
efficiency_points = [
  { load_percent = 25, efficiency_percent = 88.0 },
  { load_percent = 100, efficiency_percent = 90.0 },
]
minimum_firing_minutes = 15.0
minimum_off_minutes = 5.0
start_wear_cost = 4.0
maintenance_per_year = 9000
[new_boiler]
rating_basis = "actual"
design_pressure_bar_g = 13.0
turndown_ratio = 5.0
calorific_basis = "lhv"
efficiency_points = [
  { load_percent = 20, efficiency_percent = 93.0 },
  { load_percent = 100, efficiency_percent = 94.5 },
]
minimum_firing_minutes = 15.0
minimum_off_minutes = 5.0
start_wear_cost = 5.0
life_years = 20
sizes = [
  { rating_kg_h = 3000, installed_cost = 210000, maintenance_per_year = 9500 },
  { rating_kg_h = 6000, installed_cost = 310000, maintenance_per_year = 11000 },
]
[vessel]
smallest_volume_m3 = 5.0
largest_volume_m3 = 60.0
charged_fill_percent = 90.0
length_to_diameter_ratio = 3.5
release_limit_kg_m2_h_per_bar = 220.0
heat_loss_w_m2_k = 0.6
reference_volume_m3 = 40.0
reference_design_pressure_bar_g = 10.0
reference_installed_cost = 170000
volume_exponent = 0.62
cost_change_percent_per_bar = 2.5
life_years = 25
maintenance_per_year = 3000
charged_pressures_bar_g = [8.5]
discharged_pressures_bar_g = [3.6, 4.5]
[money]
currency = "EUR"
price_date = "2026-10"
horizon_years = 15
discount_rate_percent = 8.0
rate_basis = "nominal"
contingency_percent = 10.0
maintenance_escalation_percent_per_year = 2.0
electricity_price_per_mwh = 140.0
electricity_escalation_percent_per_year = 1.5
fan_and_pump_kwh_per_t_steam = 3.5
water_price_per_m3 = 2.6
water_escalation_percent_per_year = 2.0
unmet_steam_price_per_t = 300.0
[plan]
step_minutes = 15
gap_percent = 1.0
time_limit_seconds = 20
reference = "as is"
alternatives = ["as is", "bigger boiler", "further boiler", "storage", "free choice"]
unmet_steam_tolerance_t_per_year = 5.0
"""


def write_small_case(folder: Path, days: int = 14) -> Path:
    """The small case with a seeded record of quarter hours: two shifts, short peaks, quiet week-ends."""
    rng = np.random.default_rng(7)
    stamps = pd.date_range("2026-03-02", periods=days * 96, freq="15min")
    hour = stamps.hour.to_numpy()
    working = (stamps.day_of_week.to_numpy() < 5) & (hour >= 6) & (hour < 22)
    flow = np.where(working, 1500.0, 300.0) + rng.normal(0.0, 80.0, len(stamps))
    flow += np.where(working & (rng.random(len(stamps)) < 0.08), 2600.0, 0.0)
    frame = pd.DataFrame(
        {"time": stamps.strftime("%Y-%m-%dT%H:%M:%S"), "steam_kg_h": np.maximum(flow, 50.0).round(-1)}
    )
    folder.mkdir(parents=True, exist_ok=True)
    frame.to_csv(folder / "steam.csv", index=False)
    (folder / "case.toml").write_text(SMALL_CASE)
    return folder


@pytest.fixture(scope="session")
def small_case_folder(tmp_path_factory: pytest.TempPathFactory) -> Path:
    return write_small_case(tmp_path_factory.mktemp("cases") / "small")


@pytest.fixture(scope="session")
def small_appraisal(small_case_folder: Path) -> Appraisal:
    return appraise(load_case(small_case_folder))
