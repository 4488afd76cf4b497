"""What the reader of record files accepts, refuses and says."""

import gzip

import numpy as np
import pandas as pd
import pytest

from evenfire.demand.read import RecordFormat, demand_record
from evenfire.errors import RecordError


def form(**changes):
    """The format of the files in these tests, with changes."""
    stated = {
        "time_column": "time",
        "flow_column": "steam_kg_h",
        "flow_unit": "kg/h",
        "gaps": "refuse",
        "largest_gap_s": 3600.0,
    }
    return RecordFormat(**(stated | changes))


def day_of_rows(step="15min", flow=3600.0):
    """Time stamps and flows of a complete day."""
    times = pd.date_range("2026-02-02", periods=pd.Timedelta("1D") // pd.Timedelta(step), freq=step)
    return [[time.isoformat(), f"{flow:g}"] for time in times]


def write(path, rows, header="time,steam_kg_h"):
    """Write rows as CSV and return the path."""
    path.write_text("\n".join([header, *(",".join(row) for row in rows)]) + "\n", encoding="utf-8")
    return path


def problems_of(path, **changes):
    """The problems with which a file is refused."""
    with pytest.raises(RecordError) as refused:
        demand_record(path, form(**changes))
    return refused.value.problems


def test_plain_and_compressed_files_give_the_same_record(tmp_path):
    """Compression with gzip changes nothing."""
    plain = write(tmp_path / "steam.csv", day_of_rows())
    packed = tmp_path / "steam.csv.gz"
    packed.write_bytes(gzip.compress(plain.read_bytes()))
    one, other = demand_record(plain, form()), demand_record(packed, form())
    np.testing.assert_array_equal(one.flow_kg_s, other.flow_kg_s)
    assert (one.start, one.step_s, one.days) == (other.start, other.step_s, 1.0)


@pytest.mark.parametrize(
    ("unit", "kg_s"), [("kg/s", 3600.0), ("kg/h", 1.0), ("t/h", 1000.0), ("lb/h", 0.45359237)]
)
def test_every_unit_is_converted(tmp_path, unit, kg_s):
    """3600 of each unit in kg/s; the pound is 0.45359237 kg exactly."""
    record = demand_record(write(tmp_path / "steam.csv", day_of_rows()), form(flow_unit=unit))
    assert record.flow_kg_s == pytest.approx(np.full(96, kg_s), rel=1e-12)


def test_missing_file_and_unknown_words_are_refused_together(tmp_path):
    """One run names the file, the unit and the rule for gaps."""
    found = problems_of(tmp_path / "none.csv", flow_unit="lbs", gaps="guess")
    assert [problem.code for problem in found] == ["R113", "R113", "R101"]


def test_damaged_gzip_is_refused(tmp_path):
    """A compressed file cut short is refused, not read in part."""
    packed = gzip.compress(write(tmp_path / "steam.csv", day_of_rows()).read_bytes())
    cut = tmp_path / "cut.csv.gz"
    cut.write_bytes(packed[: len(packed) // 2])
    assert problems_of(cut)[0].code == "R102"
    plain = tmp_path / "plain.csv.gz"
    plain.write_text("time,steam_kg_h\n", encoding="utf-8")
    assert problems_of(plain)[0].code == "R102"


def test_unknown_column_offers_the_nearest(tmp_path):
    """The nearest name of the file is offered."""
    path = write(tmp_path / "steam.csv", day_of_rows(), header="Time,steam_flow_kg_h")
    found = problems_of(path)
    assert [problem.code for problem in found] == ["R103", "R103"]
    assert "did you mean 'Time'?" in found[0].allowed
    assert "did you mean 'steam_flow_kg_h'?" in found[1].allowed


def test_all_problems_of_the_cells_come_at_once(tmp_path):
    """Words, infinite and negative values and bad time stamps are all named with their rows."""
    rows = day_of_rows()
    rows[3][1], rows[5][1], rows[9][0] = "bad", "-12", "noon"
    found = problems_of(write(tmp_path / "steam.csv", rows))
    assert [problem.code for problem in found] == ["R104", "R105", "R106"]
    assert "no number in row 5, first 'bad'" in found[0].found
    assert "row 7, lowest -12 kg/h" in found[1].found
    assert "row 11, first 'noon'" in found[2].found
    rows = day_of_rows()
    rows[7][1] = "inf"
    assert "infinite flow in row 9" in problems_of(write(tmp_path / "steam.csv", rows))[0].found


def test_unsorted_and_repeated_stamps_are_refused(tmp_path):
    """Order and duplicates are two problems, each with its rows."""
    rows = day_of_rows()
    rows[10], rows[11] = rows[11], rows[10]
    rows.insert(20, rows[19])
    found = problems_of(write(tmp_path / "steam.csv", rows))
    assert [problem.code for problem in found] == ["R107", "R108"]
    assert "row 13" in found[0].found
    assert "row 22" in found[1].found


def test_irregular_step_is_refused(tmp_path):
    """A stamp off the grid is named."""
    rows = day_of_rows()
    rows[10][0] = "2026-02-02T02:31:00"
    found = problems_of(write(tmp_path / "steam.csv", rows))
    assert found[0].code == "R109"
    assert "rows 12, 13" in found[0].found


def test_gaps_are_refused_by_default(tmp_path):
    """Missing rows and empty cells are both named."""
    rows = day_of_rows()
    rows[40][1] = ""
    del rows[10:13]
    found = problems_of(write(tmp_path / "steam.csv", rows))
    assert [problem.code for problem in found] == ["R110", "R110"]
    assert "the longest 2700 s after row 11" in found[0].found
    assert "row 39" in found[1].found


@pytest.mark.parametrize(
    ("rule", "expected"),
    [("hold", [1.0, 1.0, 1.0, 4.0]), ("interpolate", [1.0, 2.0, 3.0, 4.0]), ("zero", [1.0, 0.0, 0.0, 4.0])],
)
def test_gaps_are_filled_by_the_stated_rule_and_counted(tmp_path, rule, expected):
    """Two missing steps, one row and one cell, filled as stated and reported in numbers."""
    rows = day_of_rows()
    rows[3][1], rows[2][1] = "14400", ""
    del rows[1]
    record = demand_record(write(tmp_path / "steam.csv", rows), form(gaps=rule))
    assert record.flow_kg_s[:4] == pytest.approx(expected, rel=1e-12)
    filled = [notice.text for notice in record.notices if notice.code == "R191"]
    assert filled[0].startswith("2 of 96 steps (2.08%) were missing, in 1 gaps, the longest 1800 s")


def test_gap_longer_than_allowed_is_refused(tmp_path):
    """Missing rows and empty cells count alike against the longest gap allowed."""
    rows = day_of_rows()
    cells = [[time, "" if 10 <= at < 15 else flow] for at, (time, flow) in enumerate(rows)]
    for name, damaged in (("rows.csv", rows[:10] + rows[15:]), ("cells.csv", cells)):
        found = problems_of(write(tmp_path / name, damaged), gaps="hold")
        assert found[0].code == "R111"
        assert "4500 s" in found[0].found


def test_gap_at_the_start_has_nothing_to_hold(tmp_path):
    """The first value is missing: neither rule may invent it."""
    rows = day_of_rows()
    rows[0][1] = ""
    path = write(tmp_path / "steam.csv", rows)
    for rule in ("hold", "interpolate"):
        assert "starts with a gap" in problems_of(path, gaps=rule)[0].found
    assert demand_record(path, form(gaps="zero")).flow_kg_s[0] == 0.0


@pytest.mark.parametrize(("count", "code"), [(0, "R112"), (1, "R112"), (95, "R112")])
def test_short_records_are_refused(tmp_path, count, code):
    """No row, one row and less than a day are no record."""
    assert problems_of(write(tmp_path / "steam.csv", day_of_rows()[:count]))[0].code == code


def test_empty_file_is_refused(tmp_path):
    """A file without a header is no record."""
    empty = tmp_path / "empty.csv"
    empty.touch()
    assert "is empty" in problems_of(empty)[0].found


def test_record_without_steam_is_refused(tmp_path):
    """Zeros all through mean the wrong column or a dead meter."""
    assert problems_of(write(tmp_path / "steam.csv", day_of_rows(flow=0.0)))[0].code == "R115"


def test_short_record_carries_a_notice(tmp_path):
    """One day stands for a year only with a warning."""
    record = demand_record(write(tmp_path / "steam.csv", day_of_rows()), form())
    assert [(notice.code, notice.severity) for notice in record.notices] == [("R190", "warning")]
