"""What meters measure: heat, fuel, amounts, counters, sums, status words."""

import numpy as np
import pandas as pd
import pytest

from evenfire.demand.read import demand_record
from evenfire.demand.record_format import HeatMeter, Meter
from tests.demand.record_files import FLOW_KG_H, TIMES, assert_reads, cells, codes, form, refusal, write


def test_heat_meter_needs_the_heat_of_the_steam(tmp_path):
    """kW over kJ/kg; 627 kW over 2257 kJ/kg is 1000 kg/h."""
    path = write(tmp_path / "steam.csv", cells(np.full(96, 2257.0 / 3.6), TIMES[:96]))
    path.write_text(path.read_text().replace("626.9", f"{2257.0 / 3.6:.9f}"), encoding="utf-8")
    assert_reads(path, np.full(96, 1000.0), flow_unit="kW", heat=HeatMeter(heat_j_per_kg=2.257e6))
    assert "R128" in refusal(path, flow_unit="kW")
    assert "1000 and 4000 kJ/kg" in refusal(path, flow_unit="kW", heat=HeatMeter(heat_j_per_kg=2257.0))


def test_fuel_meter_is_a_marked_fallback(tmp_path):
    """100 m3/h of 36 MJ/m3 at 90 % and 2.5 MJ/kg make 1296 kg/h, with a warning."""
    path = write(tmp_path / "gas.csv", cells(np.full(96, 100.0), TIMES[:96]))
    heat = HeatMeter(heat_j_per_kg=2.5e6, boiler_efficiency=0.9, fuel_j_per_m3=36e6)
    record = assert_reads(path, np.full(96, 1296.0), flow_unit="m3/h", heat=heat)
    warned = [notice for notice in record.notices if notice.code == "R198"]
    assert warned[0].severity == "warning"
    assert "derived from a fuel meter" in warned[0].text
    assert "R128" in refusal(path, flow_unit="m3/h", heat=HeatMeter(heat_j_per_kg=2.5e6))


def test_steam_per_step_is_divided_by_the_step(tmp_path):
    """250 kg in a quarter hour are 1000 kg/h."""
    path = write(tmp_path / "steam.csv", cells())
    assert_reads(path, FLOW_KG_H * 4.0, flow_unit="kg/step")


def counter_cells(start_reading=1234.5):
    """A counter in kg read at the start of every step, and once more at the end."""
    readings = start_reading + np.concatenate([[0.0], np.cumsum(FLOW_KG_H * 0.25)])
    times = pd.date_range(TIMES[0], periods=readings.size, freq="15min")
    return times, readings


def write_counter(path, times, readings):
    """Write readings with enough digits."""
    return write(
        path, {"time": list(times.strftime("%Y-%m-%dT%H:%M")), "steam": [f"{x:.4f}" for x in readings]}
    )


def test_counter_gives_the_flow_between_its_readings(tmp_path):
    """Differences over the step; one step fewer than readings."""
    assert_reads(write_counter(tmp_path / "steam.csv", *counter_cells()), flow_unit="kg")


def test_counter_rollover_is_added_when_stated_and_a_gap_when_not(tmp_path):
    """A fall from 99999 to 0 is bridged only by the stated rollover."""
    times, readings = counter_cells()
    readings = readings % 100_000.0
    falls = int((np.diff(readings) < 0).sum())
    assert falls > 1
    path = write_counter(tmp_path / "steam.csv", times, readings)
    record = assert_reads(path, flow_unit="kg", counter_rollover=100_000.0)
    assert f"passed 100000 kg {falls} times" in record.notices[0].text
    assert "missing values" in refusal(path, flow_unit="kg")
    filled = demand_record(path, form(flow_unit="kg", gaps="hold"))
    same = np.isclose(filled.flow_kg_s * 3600.0, FLOW_KG_H, rtol=1e-6)
    assert (~same).sum() <= falls
    assert codes(filled) == ["R195", "R191"]


def test_missing_counter_readings_lose_no_steam(tmp_path):
    """The rise across the gap is spread evenly, if interpolation is stated; holding is refused."""
    times, readings = counter_cells()
    kept = np.ones(readings.size, dtype=bool)
    kept[100:103] = False
    path = write_counter(tmp_path / "steam.csv", times[kept], readings[kept])
    assert "R110" in refusal(path, flow_unit="kg")
    assert "spread it evenly" in refusal(path, flow_unit="kg", gaps="hold")
    record = demand_record(path, form(flow_unit="kg", gaps="interpolate"))
    assert record.flow_kg_s.sum() == pytest.approx(FLOW_KG_H.sum() / 3600.0, rel=1e-9)
    np.testing.assert_allclose(record.flow_kg_s[99:103] * 3600.0, FLOW_KG_H[99:103].mean(), rtol=1e-6)


def test_steam_per_step_given_as_a_counter_is_refused(tmp_path):
    """A column that falls all the time is no counter; the other reading is offered."""
    path = write(tmp_path / "steam.csv", cells())
    assert "state 'kg/step' if each row holds the steam of its own step" in refusal(path, flow_unit="kg")


def test_several_counters_with_a_missing_reading_stay_consistent(tmp_path):
    """A row that one counter misses counts for neither, so no rise is lost or doubled."""
    times, readings = counter_cells()
    columns = {
        "time": list(times.strftime("%Y-%m-%dT%H:%M")),
        "steam": [f"{x:.4f}" for x in readings],
        "other": [f"{2 * x:.4f}" for x in readings],
    }
    columns["other"][50] = ""
    path = write(tmp_path / "steam.csv", columns)
    further = (Meter(column="other", factor=1.0),)
    record = demand_record(path, form(flow_unit="kg", gaps="interpolate", further_meters=further))
    assert record.flow_kg_s.sum() == pytest.approx(3.0 * FLOW_KG_H.sum() / 3600.0, rel=1e-9)


def test_meters_are_added_and_subtracted(tmp_path):
    """Two boilers less the steam sold to a neighbour."""
    columns = cells() | {"second": ["500.0"] * 1536, "sold": ["100.0"] * 1536}
    path = write(tmp_path / "steam.csv", columns)
    further = (Meter(column="second", factor=1.0), Meter(column="sold", factor=-1.0))
    record = assert_reads(path, FLOW_KG_H + 400.0, further_meters=further)
    assert "demand is 1 × 'steam' + 1 × 'second' - 1 × 'sold'" in record.notices[0].text


def test_negative_flow_is_refused_or_counted_as_zero_and_said(tmp_path):
    """Drift below zero at idle is taken as none only when stated."""
    columns = cells()
    columns["steam"][3] = columns["steam"][8] = "-4.0"
    path = write(tmp_path / "steam.csv", columns)
    assert "rows 5, 10, lowest -4 kg/h" in refusal(path)
    flow = FLOW_KG_H.copy()
    flow[[3, 8]] = 0.0
    record = assert_reads(path, flow, negative_flow="zero")
    assert codes(record) == ["R196"]


def test_rows_with_a_bad_status_count_as_missing(tmp_path):
    """Only the listed words are good; the others are counted."""
    columns = cells() | {"status": ["Good"] * 1536}
    columns["status"][20] = columns["status"][21] = "Bad"
    columns["steam"][20] = "99999.0"
    path = write(tmp_path / "steam.csv", columns)
    status = {"status_column": "status", "good_status": ("Good",)}
    assert "no value in rows 22, 23" in refusal(path, **status)
    flow = FLOW_KG_H.copy()
    flow[[20, 21]] = flow[19]
    record = assert_reads(path, flow, gaps="hold", **status)
    assert "2 rows are not good and count as missing: 'Bad' 2 times" in record.notices[0].text
    assert "no row is good; found 'Good' 1534 times" in refusal(path, **(status | {"good_status": ("OK",)}))


def test_words_and_numbers_that_mean_no_value(tmp_path):
    """A stated sentinel is a gap, not a flow."""
    columns = cells()
    columns["steam"][20], columns["steam"][21] = "Bad Input", "-9999"
    path = write(tmp_path / "steam.csv", columns)
    flow = FLOW_KG_H.copy()
    flow[[20, 21]] = flow[19]
    assert_reads(path, flow, gaps="hold", missing_values=("Bad Input", "-9999"))
