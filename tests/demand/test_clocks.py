"""When meters are read: ends of steps, changes only, summer time, zones."""

import datetime as dt

import numpy as np
import pandas as pd
import pytest

from evenfire.demand.read import demand_record
from tests.demand.record_files import FLOW_KG_H, TIMES, assert_reads, cells, codes, form, refusal, write

RNG = np.random.default_rng(8)


def test_stamps_at_the_end_of_the_step_move_the_start(tmp_path):
    """The first quarter hour ends at 00:15."""
    path = write(tmp_path / "steam.csv", cells(times=TIMES + pd.Timedelta("15min")))
    assert_reads(path, stamp="end")


def test_change_only_logging_is_averaged_by_the_time_values_held(tmp_path):
    """One-second rows only where the value changes give the same means as the full series."""
    seconds = np.repeat(np.round(3000.0 * RNG.random(1440), 1), 60)
    seconds[RNG.integers(0, seconds.size, 3000)] = 4321.0
    changed = np.flatnonzero(np.diff(seconds, prepend=-1.0) != 0.0)
    changed = np.append(changed, seconds.size)
    times = pd.Timestamp("2026-02-02") + pd.to_timedelta(changed, unit="s")
    values = np.append(seconds, 0.0)[changed]
    path = write(tmp_path / "steam.csv", cells(values, times, "%Y-%m-%d %H:%M:%S"))
    record = assert_reads(path, seconds.reshape(-1, 60).mean(axis=1), logging="on change", step_s=60.0)
    assert codes(record) == ["R199"]
    assert "R111" in refusal(path, logging="on change", step_s=60.0, largest_gap_s=30.0)
    assert "R113" in refusal(path, logging="on change")
    text = refusal(path, gaps="hold")
    assert "of the steps of 1 s: logged on change, or full of gaps" in text
    assert "R109" in text


def test_counter_logged_on_change_keeps_all_steam(tmp_path):
    """Pulses of 100 kg at odd times add up to the same steam."""
    moments = np.unique(np.concatenate([[0.0, 86_400.0], np.round(86_400.0 * RNG.random(900), 1)]))
    times = pd.Timestamp("2026-02-02") + pd.to_timedelta(moments, unit="s")
    readings = 100.0 * np.arange(moments.size)
    columns = {"time": list(times.strftime("%Y-%m-%d %H:%M:%S.%f")), "steam": [f"{x:.1f}" for x in readings]}
    path = write(tmp_path / "steam.csv", columns)
    record = demand_record(path, form(flow_unit="kg", logging="on change", step_s=300.0))
    assert record.flow_kg_s.sum() * 300.0 == pytest.approx(readings[-1], rel=1e-9)
    expected = np.diff(np.interp(np.arange(0.0, 86_401.0, 300.0), moments, readings)) / 300.0
    np.testing.assert_allclose(record.flow_kg_s, expected, atol=1e-9)


def local_day(date, zone="Europe/Berlin", days=2):
    """Hours of local time around a change of the clock, as a logger that follows it writes them."""
    start = pd.Timestamp(date, tz=zone)
    return pd.date_range(start, start + pd.Timedelta(days=days), freq="h", inclusive="left")


def test_the_hour_that_summer_time_skips_is_no_gap(tmp_path):
    """With the zone stated, spring has 24 real hours; without it both readings are shown."""
    times = local_day("2026-03-29")
    flow = FLOW_KG_H[: times.size]
    path = write(tmp_path / "steam.csv", cells(flow, times))
    record = assert_reads(path, flow, dt.datetime(2026, 3, 29), zone="Europe/Berlin")
    assert codes(record) == ["R197"]
    text = refusal(path, gaps="hold")
    assert "a gap in the record, or the hour that summer time skips" in text
    assert "R125" in text
    assert "R110" in refusal(path, zone="fixed")


def test_the_hour_that_autumn_repeats_is_told_apart(tmp_path):
    """The clock goes back once; without a zone the repeated stamps are refused."""
    times = local_day("2026-10-25")
    flow = FLOW_KG_H[: times.size]
    path = write(tmp_path / "steam.csv", cells(flow, times))
    assert_reads(path, flow, dt.datetime(2026, 10, 25), zone="Europe/Berlin")
    assert "R108" in refusal(path)


def test_a_repeated_hour_that_stands_there_once_is_refused(tmp_path):
    """Which of the two hours is missing cannot be known."""
    times = local_day("2026-10-25")
    kept = np.ones(times.size, dtype=bool)
    kept[3] = False
    path = write(tmp_path / "steam.csv", cells(FLOW_KG_H[: times.size][kept], times[kept]))
    assert "they may be summer time or winter time" in refusal(path, zone="Europe/Berlin")


def test_times_in_the_skipped_hour_disprove_the_zone(tmp_path):
    """A clock that shows 02:30 on that night is never changed."""
    times = pd.date_range("2026-03-29", periods=48, freq="h")
    path = write(tmp_path / "steam.csv", cells(FLOW_KG_H[:48], times))
    assert "the hour that Europe/Berlin skips, first 2026-03-29 02:00:00" in refusal(
        path, zone="Europe/Berlin"
    )
    assert_reads(path, FLOW_KG_H[:48], times[0], zone="fixed")


def test_stamps_with_offsets_are_instants(tmp_path):
    """Offsets that change with summer time give one even clock; UTC needs to know the site."""
    times = local_day("2026-03-29")
    flow = FLOW_KG_H[: times.size]
    written = {"time": [time.isoformat() for time in times], "steam": cells(flow, times)["steam"]}
    assert_reads(write(tmp_path / "offset.csv", written), flow, dt.datetime(2026, 3, 29))
    utc = cells(flow, times.tz_convert("UTC"), "%Y-%m-%dT%H:%M:%SZ")
    path = write(tmp_path / "utc.csv", utc)
    assert "time stamps in UTC" in refusal(path)
    assert_reads(path, flow, dt.datetime(2026, 3, 29), zone="Europe/Berlin")
    assert_reads(path, flow, dt.datetime(2026, 3, 28, 23), zone="fixed")


def test_unknown_zone_is_refused(tmp_path):
    """A zone must be one the system knows."""
    assert "R124" in refusal(write(tmp_path / "steam.csv", cells()), zone="Europe/Atlantis")
