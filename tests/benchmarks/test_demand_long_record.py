"""A year at 10 s: read, checked and reduced; run by hand with ``pytest tests/benchmarks -s``."""

import subprocess
import sys
import time

import numpy as np
import pandas as pd

STEPS = 365 * 8640
LARGEST_MB = 1500.0
SCRIPT = """
import resource, sys
from pathlib import Path
from evenfire.demand.quality import record_quality
from evenfire.demand.read import RecordFormat, demand_record
from evenfire.demand.storage_need import storage_need
from evenfire.demand.typical_days import typical_days

form = RecordFormat(
    time_column="time", flow_column="steam", flow_unit="kg/h", gaps="refuse", largest_gap_s=0.0
)
record = demand_record(Path(sys.argv[1]), form)
record_quality(record)
storage_need(record.flow_kg_s, record.step_s)
typical_days(record, 300.0)
print(resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024.0)
"""


def year_of_flow(seed=1):
    """Peaks of ten minutes with noise, in steps of 10 kg/h."""
    rng = np.random.default_rng(seed)
    flow = np.repeat(rng.random(STEPS // 60) ** 4 * 9000.0, 60) + 500.0 * rng.random(STEPS)
    return np.round(flow, -1)


def test_year_at_ten_seconds_fits_into_memory(tmp_path):
    """Import, quality sheet, storage need and typical days of 3.15 million rows in under 1.5 GB."""
    path = tmp_path / "year.csv"
    times = pd.date_range("2026-01-01", periods=STEPS, freq="10s").strftime("%Y-%m-%dT%H:%M:%S")
    pd.DataFrame({"time": times, "steam": year_of_flow().astype(int)}).to_csv(path, index=False)
    command = [sys.executable, "-c", SCRIPT, str(path)]
    done = subprocess.run(command, capture_output=True, text=True, check=True)
    print(f"largest memory {float(done.stdout):.0f} MB")
    assert float(done.stdout) < LARGEST_MB


def test_storage_need_takes_no_longer_than_reading(tmp_path):
    """S(C) of a year at 10 s against pandas reading the same file; few pieces come out of many rows."""
    from evenfire.demand.storage_need import storage_need

    flow = year_of_flow()
    path = tmp_path / "year.csv"
    times = pd.date_range("2026-01-01", periods=STEPS, freq="10s").strftime("%Y-%m-%dT%H:%M:%S")
    pd.DataFrame({"time": times, "steam": flow.astype(int)}).to_csv(path, index=False)
    storage_need(flow[:1000] / 3600.0, 10.0)
    start = time.perf_counter()
    pd.to_datetime(pd.read_csv(path)["time"])
    reading = time.perf_counter() - start
    start = time.perf_counter()
    need = storage_need(flow / 3600.0, 10.0)
    computing = time.perf_counter() - start
    print(f"reading {reading:.2f} s, storage need {computing:.2f} s, {len(need.pieces)} pieces")
    assert len(need.pieces) < 1000
    assert computing < 2.0 * reading
