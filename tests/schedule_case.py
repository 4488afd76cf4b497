"""A small works without a meter: its batches described, its starts shiftable."""

from __future__ import annotations

from pathlib import Path

from tests.small_case import SMALL_CASE

SCHEDULE = """
[schedule]
name = "laundry (invented)"
seed = 3
base_kg_h = 200.0
closed_dates = ["2026-02-18"]
first_monday = "2026-02-02"
weeks = 3
step_seconds = 300.0

[[schedule.shift]]
name = "early"
weekdays = ["mon", "tue", "wed", "thu", "fri"]
start = "06:00"
hours = 8.0
flow_kg_h = 150.0

[[schedule.resource]]
name = "tunnel washers"
units = 3

[[schedule.batch]]
name = "wash"
shifts = ["early"]
starts_minutes = [0.0, 0.0, 0.0, 180.0, 180.0, 180.0]
resource = "tunnel washers"
may_start_later_minutes = 60.0
phases = [
  { name = "heat", minutes = 20.0, flow_kg_h = 1500.0 },
  { name = "wash", minutes = 40.0, flow_kg_h = 100.0 },
]

[[schedule.batch]]
name = "dry"
shifts = ["early"]
batches_per_shift = 4
earliest_start_minutes = 60.0
latest_start_minutes = 420.0
phases = [{ name = "dry", minutes = 30.0, steam_kg = 120.0, spread_percent = 20.0 }]
"""


def schedule_text(schedule: str = SCHEDULE) -> str:
    """The small works' case with a schedule in place of its record."""
    before, after = SMALL_CASE.split("[record]")
    text = before + "[steam]" + after.split("[steam]")[1] + schedule
    return text.replace(
        'alternatives = ["as is", "bigger boiler", "further boiler", "storage", "free choice"]\n', ""
    )


def write_schedule_case(folder: Path, *changes: tuple[str, str]) -> Path:
    """The case on disk, with texts changed."""
    text = schedule_text()
    for old, new in changes:
        assert old in text, old
        text = text.replace(old, new)
    folder.mkdir(parents=True, exist_ok=True)
    (folder / "case.toml").write_text(text)
    return folder
