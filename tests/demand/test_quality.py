"""The quality sheet: what it finds in records with known faults, and that it leaves good ones alone."""

import datetime as dt
from pathlib import Path

import numpy as np
import pytest

from evenfire.demand.peaks import peak_resolution, ranked_peaks
from evenfire.demand.quality import record_quality, weekly_map
from evenfire.demand.read import demand_record
from evenfire.demand.sensor_faults import saturation
from evenfire.demand.series import DemandRecord, Gap
from evenfire.errors import RecordError
from tests.demand.record_files import assert_reads, cells, form, write

CASES = Path(__file__).parents[2] / "cases"


def record(flow, step_s=60.0, gaps=(), start=dt.datetime(2026, 2, 2)):
    """A record of the given flow."""
    return DemandRecord(
        start=start, step_s=step_s, flow_kg_s=np.array(flow, dtype=float), source="test", gaps=tuple(gaps)
    )


def good_flow(seed=3, days=14):
    """A noisy demand with many peaks and no fault."""
    rng = np.random.default_rng(seed)
    flow = 0.3 + 0.1 * rng.random(days * 1440)
    for at in rng.integers(0, flow.size - 20, 30 * days):
        flow[at : at + 8] += 0.5 * rng.random()
    return flow


def found_codes(sheet):
    """Codes of the sheet's notices."""
    return {notice.code for notice in sheet.notices}


def test_good_record_has_nothing_to_report():
    """No fault is found where there is none."""
    assert found_codes(record_quality(record(good_flow()))) == set()


@pytest.mark.parametrize("name", ["cannery/steam.csv.gz", "dyehouse/steam.csv"])
def test_invented_records_are_free_of_faults(name):
    """The cases' records show no spike, dropout, flat line or top of range."""
    measured = demand_record(CASES / name, form(flow_column="steam_kg_h"))
    assert found_codes(record_quality(measured)) <= {"R146"}


def test_quarter_hours_are_coarse_for_the_dyehouse_and_minutes_fine_for_the_cannery():
    """Heat-ups of half an hour are two steps of 15 minutes; retorts vent for several minutes."""
    dyehouse = demand_record(CASES / "dyehouse" / "steam.csv", form(flow_column="steam_kg_h"))
    cannery = demand_record(CASES / "cannery" / "steam.csv.gz", form(flow_column="steam_kg_h"))
    assert peak_resolution(dyehouse).coarse
    assert not peak_resolution(cannery).coarse


def test_spike_dropout_and_hanging_sensor_are_each_found_where_they_are():
    """Three planted faults come back with their places."""
    flow = good_flow()
    flow[5000] = 10.0
    flow[6000:6003] = [1.0, 0.0, 1.0]
    flow[9000:9300] = 0.35
    sheet = record_quality(record(flow))
    assert [spike.first_step for spike in sheet.spikes] == [5000]
    assert [drop.first_step for drop in sheet.dropouts] == [6001]
    assert [(flat.first_step, flat.last_step) for flat in sheet.flat_lines] == [(9000, 9299)]
    assert {"R142", "R143", "R144"} <= found_codes(sheet)
    text = next(notice.text for notice in sheet.notices if notice.code == "R142")
    assert "first 2026-02-05 11:20:00 at 36000 kg/h" in text


def test_held_gap_is_no_hanging_sensor():
    """Four hours filled by holding are a gap, not a flat line, and lower the coverage."""
    flow = good_flow()
    flow[3000:3240] = flow[2999]
    gap = Gap(first_step=3000, last_step=3239, rule="hold")
    sheet = record_quality(record(flow, gaps=[gap]))
    assert sheet.flat_lines == ()
    assert sheet.coverage == pytest.approx(1.0 - 240 / flow.size)
    assert sheet.longest_gap_s == 14_400.0
    assert "R141" in found_codes(sheet)


def test_gaps_of_a_file_reach_the_sheet(tmp_path):
    """What the import filled is named step by step."""
    columns = cells()
    columns["steam"][40] = columns["steam"][41] = ""
    measured = demand_record(write(tmp_path / "steam.csv", columns), form(gaps="interpolate"))
    assert record_quality(measured).gaps == (Gap(first_step=40, last_step=41, rule="interpolate"),)
    assert assert_reads(write(tmp_path / "whole.csv", cells())).gaps == ()


def exponential_peaks(seed, top=np.inf):
    """A year of daily peaks with exponential heights over 2 kg/s, cut at a top of range."""
    rng = np.random.default_rng(seed)
    flow = 0.5 + 0.2 * rng.random(365 * 96)
    heights = 2.0 + rng.exponential(0.5, 365)
    for day, height in enumerate(heights):
        flow[day * 96 + 40 : day * 96 + 43] = height * np.array([0.7, 1.0, 0.8])
    return np.minimum(flow, top), heights.max()


def test_cut_peaks_are_found_and_their_height_is_estimated():
    """Over forty cut records the true peak is near the likely one and seldom above the high one."""
    ratios, above = [], 0
    for seed in range(40):
        flow, truth = exponential_peaks(seed, top=3.5)
        cut = saturation(record(flow, 900.0))
        assert cut is not None
        assert cut.top_kg_s == 3.5
        ratios.append(cut.likely_peak_kg_s / truth)
        above += truth > cut.high_peak_kg_s
    assert 0.9 < np.median(ratios) < 1.1
    assert above <= 10


def test_uncut_peaks_point_to_no_top_of_range():
    """The same peaks, not cut, are taken as they are; so is a coarse meter that meets its peak often."""
    flow, _ = exponential_peaks(1)
    assert saturation(record(flow, 900.0)) is None
    assert saturation(record(np.round(good_flow(), 1))) is None


def test_peaks_all_cut_leave_the_height_unknown():
    """Nothing stays below the top, so no number is made up."""
    flow = np.full(14 * 96, 0.5) + 0.01 * np.arange(14 * 96) % 0.1
    flow[40::96] = flow[41::96] = 3.0
    sheet = record_quality(record(flow, 900.0))
    assert sheet.saturation is not None
    assert sheet.saturation.likely_peak_kg_s is None
    assert "Too few peaks stayed below it" in " ".join(notice.text for notice in sheet.notices)


def test_peaks_are_ranked_by_steam_above_capacity():
    """Against a loop over the record."""
    measured = record(good_flow())
    peaks = ranked_peaks(measured, 0.6)
    steam = [peak.steam_above_kg for peak in peaks]
    assert steam == sorted(steam, reverse=True)
    assert sum(steam) == pytest.approx(np.maximum(measured.flow_kg_s - 0.6, 0.0).sum() * 60.0)
    for peak in peaks[:50]:
        inside = measured.flow_kg_s[peak.first_step : peak.last_step + 1]
        assert inside.min() > 0.6
        assert inside.max() == peak.highest_kg_s
        assert measured.flow_kg_s[peak.last_step + 1] <= 0.6
    with pytest.raises(RecordError, match=r"must not be negative.*R120"):
        ranked_peaks(measured, -1.0)


def test_capacity_above_the_peak_leaves_no_peaks():
    """Nothing to rank."""
    assert ranked_peaks(record(good_flow()), 99.0) == ()


def test_averaged_peaks_agree_with_convolution():
    """The highest mean over each doubled interval, against numpy's convolution."""
    measured = record(good_flow(days=2))
    found = peak_resolution(measured)
    for length_s, peak in zip(found.averaged_s, found.peak_kg_s, strict=True):
        steps = round(length_s / 60.0)
        mean = np.convolve(measured.flow_kg_s, np.ones(steps) / steps, "valid")
        assert peak == pytest.approx(mean.max(), rel=1e-9)


def test_length_of_rectangular_peaks_is_measured():
    """Peaks of seven minutes are seven minutes long."""
    flow = np.full(2 * 1440, 1.0)
    for at in range(100, 2800, 120):
        flow[at : at + 7] = 5.0 + at / 1e6
    assert peak_resolution(record(flow)).peak_length_s == 420.0


def test_ramps_are_those_of_the_windows():
    """A rise of 2 kg/s in five minutes, 0.4 of it in each."""
    flow = np.full(1440, 1.0)
    flow[500:506] = 1.0 + 0.4 * np.arange(6)
    flow[506:] = 3.0
    rises = {ramp.within_s: ramp.largest_rise_kg_s for ramp in record_quality(record(flow)).ramps}
    assert rises == pytest.approx({60.0: 0.4, 300.0: 2.0, 900.0: 2.0})


def test_hours_without_data_are_empty_in_the_map():
    """Three days of the week: the other four are not zero but unknown, and the sheet says so."""
    measured = record(np.full(3 * 1440, 1.0))
    mean, highest = weekly_map(measured)
    assert (mean[:3] == 1.0).all()
    assert np.isnan(mean[3:]).all()
    assert np.isnan(highest[3:]).all()
    text = next(n.text for n in record_quality(measured).notices if n.code == "R147")
    assert "holds no Thursday, no Friday, no Saturday, no Sunday" in text


def test_meter_resolution_and_idle_time():
    """Steps of 10 kg/h, a quarter of the time at zero."""
    flow = np.tile([0.0, 10.0, 20.0, 2000.0], 360) / 3600.0
    sheet = record_quality(record(flow))
    assert sheet.smallest_change_kg_s * 3600.0 == pytest.approx(10.0)
    assert (sheet.zero_share, sheet.idle_share) == (0.25, 0.5)
