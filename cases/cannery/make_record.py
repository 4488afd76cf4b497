"""Make the steam record of an invented retort cannery, the same bytes every time.

Six retorts on two filling lines sterilise cans. A retort takes steam at full valve while it vents
and comes up to temperature, then little while it holds. The three retorts of a line are often
started together, above all at the start of a shift and after a break: that makes the peaks. Nobody's
plant, nobody's data.

    python make_record.py                          writes steam.csv.gz, 56 days
    python make_record.py --days 365 --out FILE    a year
"""

from __future__ import annotations

import argparse
import datetime as dt
import gzip
import io
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

START = dt.datetime(2026, 2, 2)  # a Monday
SEED = 20_260_202
MINUTES_PER_DAY = 1440

FloatArray = NDArray[np.float64]


class Day:
    """One day of one-minute steam flow with its own random numbers, so that days do not shift each other."""

    def __init__(self, number: int) -> None:
        self.rng = np.random.default_rng([SEED, number])
        self.flow_kg_h: FloatArray = np.zeros(MINUTES_PER_DAY)

    def uniform(self, low: float, high: float) -> float:
        return low + (high - low) * float(self.rng.random())

    def add(self, first_minute: float, minutes: float, flow_kg_h: float) -> None:
        """Add a constant flow; what would run past midnight is left out."""
        first = int(first_minute)
        self.flow_kg_h[first : min(first + round(minutes), MINUTES_PER_DAY)] += flow_kg_h

    def ripple(self) -> None:
        """Slow drift and measuring noise, in proportion to the flow."""
        drift = np.repeat(self.rng.random(MINUTES_PER_DAY // 15) - 0.5, 15)
        noise = self.rng.random(MINUTES_PER_DAY) - 0.5
        self.flow_kg_h *= 1.0 + 0.05 * drift + 0.03 * noise


def add_retort_cycle(day: Day, start_minute: float, vent_minutes: float) -> None:
    """One sterilising cycle: vent, come-up, hold; cooling takes no steam."""
    come_up = day.uniform(4.0, 7.0)
    held_from = start_minute + vent_minutes + come_up
    day.add(start_minute, vent_minutes, day.uniform(2500.0, 2850.0))
    day.add(start_minute + vent_minutes, come_up, day.uniform(1300.0, 1700.0))
    day.add(held_from, day.uniform(38.0, 50.0), day.uniform(300.0, 390.0))


def line_starts(day: Day, first_minute: float, last_minute: float) -> list[float]:
    """When the three retorts of one filling line are loaded, cycle after cycle until the shift ends."""
    starts = []
    cycle = first_minute
    together = True
    while cycle < last_minute:
        spread = 2.0 if together else 24.0
        starts += [cycle + day.uniform(0.0, spread) for _ in range(3)]
        cycle += day.uniform(88.0, 112.0)
        together = day.uniform(0.0, 1.0) < 0.3
    return starts


def run_retorts(day: Day, asked_starts: list[float]) -> None:
    """Start a loaded retort once at most two others vent or have just vented: the interlock of the plant."""
    venting_until = [0.0, 0.0, 0.0]
    for asked in sorted(asked_starts):
        start = float(int(max(asked, min(venting_until))))
        vent_minutes = float(round(day.uniform(4.0, 6.5)))
        venting_until.remove(min(venting_until))
        venting_until.append(start + vent_minutes + 5.0)
        add_retort_cycle(day, start, vent_minutes)


def make_workday(day: Day) -> None:
    """Two shifts, 06:00 to 22:00, and cleaning in the evening."""
    day.add(0, MINUTES_PER_DAY, day.uniform(340.0, 420.0))
    day.add(330, 990, day.uniform(180.0, 260.0))
    for shift in (360, 840):
        day.add(shift - 20, 35, day.uniform(800.0, 1050.0))
        day.add(shift + 15, 425, day.uniform(740.0, 900.0))
    starts = line_starts(day, 380 + day.uniform(0.0, 8.0), 780)
    starts += line_starts(day, 425 + day.uniform(0.0, 15.0), 800)
    starts += line_starts(day, 858 + day.uniform(0.0, 8.0), 1250)
    starts += line_starts(day, 905 + day.uniform(0.0, 15.0), 1260)
    run_retorts(day, starts)
    for _ in range(3):
        day.add(1325 + day.uniform(0.0, 70.0), day.uniform(12.0, 22.0), day.uniform(900.0, 1400.0))


def make_saturday(day: Day) -> None:
    """One shift on one line, then the weekly cleaning."""
    day.add(0, MINUTES_PER_DAY, day.uniform(240.0, 300.0))
    day.add(345, 360, day.uniform(420.0, 540.0))
    run_retorts(day, line_starts(day, 385 + day.uniform(0.0, 10.0), 660))
    for start in (720, 765, 815):
        day.add(start + day.uniform(0.0, 15.0), day.uniform(20.0, 30.0), day.uniform(1100.0, 1600.0))


def make_sunday(day: Day) -> None:
    """Tracing, tanks and losses; boilers kept warm for Monday."""
    day.add(0, MINUTES_PER_DAY, day.uniform(170.0, 230.0))
    day.add(540 + day.uniform(0.0, 200.0), day.uniform(60.0, 180.0), day.uniform(60.0, 130.0))


def make_flow(days: int) -> FloatArray:
    """Steam flow [kg/h] of each minute, in steps of 10 kg/h as the meter shows it."""
    flows = []
    for number in range(days):
        day = Day(number)
        weekday = (START + dt.timedelta(days=number)).weekday()
        {5: make_saturday, 6: make_sunday}.get(weekday, make_workday)(day)
        day.ripple()
        flows.append(np.round(day.flow_kg_h, -1))
    return np.concatenate(flows)


def write_record(path: Path, days: int) -> None:
    """Write the record as CSV, compressed without a time stamp when the name ends in ``.gz``."""
    lines = ["time,steam_kg_h"]
    for minute, flow in enumerate(make_flow(days)):
        stamp = START + dt.timedelta(minutes=minute)
        lines.append(f"{stamp:%Y-%m-%dT%H:%M},{flow:.0f}")
    content = ("\n".join(lines) + "\n").encode()
    if path.suffix == ".gz":
        packed = io.BytesIO()
        with gzip.GzipFile(filename="", mode="wb", fileobj=packed, compresslevel=9, mtime=0) as stream:
            stream.write(content)
        content = packed.getvalue()
    path.write_bytes(content)


if __name__ == "__main__":
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("--days", type=int, default=56)
    parser.add_argument("--out", type=Path, default=Path(__file__).with_name("steam.csv.gz"))
    arguments = parser.parse_args()
    write_record(arguments.out, arguments.days)
