"""Make the steam record of an invented textile dyehouse, the same bytes every time.

Eight jet machines heat their baths with steam, a stenter and a dryer take a steady share. The meter
logs a mean every 15 minutes, so the true peaks of a heat-up are higher than the record shows.
Nobody's plant, nobody's data.

    python make_record.py                          writes steam.csv, 56 days
    python make_record.py --days 365 --out FILE    a year
"""

from __future__ import annotations

import argparse
import datetime as dt
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

START = dt.datetime(2026, 3, 2)  # a Monday
SEED = 20_260_302
MINUTES_PER_DAY = 1440
STEP_MINUTES = 15
MACHINES = 8

FloatArray = NDArray[np.float64]


def dyeing_flow(rng: np.random.Generator, first_minute: int, last_minute: int) -> FloatArray:
    """One-minute flow [kg/h] of all machines, each running batch after batch through its shifts."""
    flow: FloatArray = np.zeros(MINUTES_PER_DAY)
    for machine in range(MACHINES):
        start = first_minute + int(25 * rng.random()) + (0 if machine < 4 else 75)
        while start < last_minute:
            heat_up = 22 + int(12 * rng.random())
            flow[start : start + heat_up] += 860.0 + 170.0 * rng.random()
            flow[start + heat_up : start + heat_up + 60] += 110.0
            rinse = start + heat_up + 95
            flow[rinse : rinse + 12] += 300.0 + 80.0 * rng.random()
            start += heat_up + 170 + int(70 * rng.random())
    return flow


def day_flow(number: int) -> FloatArray:
    """Steam flow [kg/h] of each quarter hour of one day, in steps of 5 kg/h."""
    rng = np.random.default_rng([SEED, number])
    weekday = (START + dt.timedelta(days=number)).weekday()
    flow: FloatArray = np.full(MINUTES_PER_DAY, 150.0 + 40.0 * rng.random())
    if weekday < 5:
        flow += dyeing_flow(rng, 345, 1230)
        flow[360:1380] += 740.0 + 120.0 * rng.random()
    elif weekday == 5:
        flow += dyeing_flow(rng, 360, 620)
        flow[360:900] += 560.0 + 120.0 * rng.random()
    quarter = flow.reshape(-1, STEP_MINUTES).mean(axis=1)
    quarter *= 1.0 + 0.04 * (rng.random(quarter.size) - 0.5)
    return 5.0 * np.round(quarter / 5.0)


def write_record(path: Path, days: int) -> None:
    """Write the record as CSV."""
    lines = ["time,steam_kg_h"]
    for step, flow in enumerate(np.concatenate([day_flow(number) for number in range(days)])):
        stamp = START + dt.timedelta(minutes=step * STEP_MINUTES)
        lines.append(f"{stamp:%Y-%m-%dT%H:%M},{flow:.0f}")
    path.write_text("\n".join(lines) + "\n", encoding="utf-8", newline="\n")


if __name__ == "__main__":
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("--days", type=int, default=56)
    parser.add_argument("--out", type=Path, default=Path(__file__).with_name("steam.csv"))
    arguments = parser.parse_args()
    write_record(arguments.out, arguments.days)
