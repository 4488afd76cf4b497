"""The invented records of the cases: made again byte for byte, and shaped as the cases say."""

import gzip
import runpy
from pathlib import Path

import numpy as np
import pytest

from evenfire.demand.read import RecordFormat, demand_record

CASES = Path(__file__).parents[2] / "cases"
FORM = RecordFormat(
    time_column="time", flow_column="steam_kg_h", flow_unit="kg/h", gaps="refuse", largest_gap_s=0.0
)


def content(path):
    """Bytes of a file, unpacked."""
    return gzip.decompress(path.read_bytes()) if path.suffix == ".gz" else path.read_bytes()


@pytest.mark.parametrize("name", ["cannery/steam.csv.gz", "dyehouse/steam.csv"])
def test_record_is_made_again_byte_for_byte(tmp_path, name):
    """The committed record is what its script writes."""
    script = runpy.run_path(str((CASES / name).with_name("make_record.py")))
    again = tmp_path / Path(name).name
    script["write_record"](again, 56)
    assert content(again) == content(CASES / name)


def test_longer_record_starts_like_the_short_one(tmp_path):
    """Days have random numbers of their own: asking for more days changes none of the first."""
    script = runpy.run_path(str(CASES / "cannery" / "make_record.py"))
    np.testing.assert_array_equal(script["make_flow"](9)[: 7 * 1440], script["make_flow"](7))


def test_cannery_has_the_peaks_its_case_speaks_of():
    """Mean near 2 t/h; most workdays peak at 9 to 12 t/h; Sundays idle at 0.15 to 0.4 t/h."""
    record = demand_record(CASES / "cannery" / "steam.csv.gz", FORM)
    days = record.flow_kg_s.reshape(56, 1440) * 3.6
    workdays = days[[day for day in range(56) if day % 7 < 5]]
    sundays = days[6::7]
    assert record.step_s == 60.0
    assert 1.7 < days.mean() < 2.3
    assert np.mean((workdays.max(axis=1) > 9.0) & (workdays.max(axis=1) < 12.5)) > 0.9
    assert ((workdays > 7.5).sum(axis=1) >= 20).mean() > 0.9
    assert sundays.min() >= 0.15
    assert sundays.max() <= 0.4


def test_dyehouse_overloads_its_boiler_of_four_tonnes_per_hour():
    """Mean near 1.2 t/h with quarter-hour peaks between 4.5 and 5.5 t/h."""
    record = demand_record(CASES / "dyehouse" / "steam.csv", FORM)
    flow_t_h = record.flow_kg_s * 3.6
    assert record.step_s == 900.0
    assert 1.1 < flow_t_h.mean() < 1.4
    assert 4.5 < flow_t_h.max() < 5.5
