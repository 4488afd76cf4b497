"""Files as sites really have them: encodings, delimiters, dates, decimal signs, workbooks."""

import gzip

import numpy as np
import pandas as pd
import pytest

from tests.demand.record_files import FLOW_KG_H, TIMES, assert_reads, cells, codes, refusal, write


@pytest.mark.parametrize("delimiter", [",", ";", "\t", "|"])
@pytest.mark.parametrize("encoding", ["utf-8", "utf-8-sig", "utf-16", "cp1252"])
@pytest.mark.parametrize("end", ["\n", "\r\n", "\r"])
def test_delimiter_encoding_and_line_ends_are_found(tmp_path, delimiter, encoding, end):
    """Every mixture is read alike, with a column name that only the right encoding spells."""
    columns = {"time": cells()["time"], "größe": cells()["steam"]}
    path = write(tmp_path / "steam.csv", columns, delimiter, encoding, end)
    assert_reads(path, flow_column="größe")


@pytest.mark.parametrize(
    "written",
    ["%d.%m.%Y %H:%M:%S", "%d/%m/%Y %H:%M", "%m/%d/%Y %I:%M %p", "%Y/%m/%d %H:%M", "%Y-%m-%d %H:%M:%S.%f"],
)
def test_date_order_is_proved_by_a_day_above_twelve(tmp_path, written):
    """Day first, month first and year first are told apart; what was decided is stated."""
    record = assert_reads(write(tmp_path / "steam.csv", cells(written=written)))
    assert codes(record) == ([] if written.startswith("%Y") else ["R192"])


def test_open_date_order_is_refused_with_both_readings(tmp_path):
    """Ten days into a month decide nothing."""
    times = pd.date_range("2026-02-02", periods=5 * 96, freq="15min")
    columns = cells(FLOW_KG_H[: 5 * 96], times, "%d/%m/%Y %H:%M")
    path = write(tmp_path / "steam.csv", columns)
    text = refusal(path)
    assert "'03/02/2026 00:00' in row 98 is 03 February 2026 or 02 March 2026" in text
    assert "R123" in text
    assert_reads(path, FLOW_KG_H[: 5 * 96], date_order="dmy")


def test_stated_date_order_must_not_contradict_the_file(tmp_path):
    """A stated order that the dates disprove is refused."""
    path = write(tmp_path / "steam.csv", cells(written="%d/%m/%Y %H:%M"))
    assert "row 1058 has the day before month" in refusal(path, date_order="mdy")
    assert "R123" in refusal(write(tmp_path / "iso.csv", cells()), date_order="dmy")


def test_mixed_date_orders_are_refused(tmp_path):
    """Day first and month first in one file are both named."""
    columns = cells(written="%d/%m/%Y %H:%M")
    columns["time"][1200] = TIMES[1200].strftime("%m/%d/%Y %H:%M")
    assert "but month before day in row 1202" in refusal(write(tmp_path / "steam.csv", columns))


def test_years_of_two_digits_need_a_stated_order(tmp_path):
    """26 may be a year or a day."""
    path = write(tmp_path / "steam.csv", cells(written="%d.%m.%y %H:%M"))
    assert "a year of two digits in row 2" in refusal(path)
    assert_reads(path, date_order="dmy")


def test_midnight_without_a_time_of_day_is_midnight(tmp_path):
    """Some exports drop 00:00."""
    columns = cells(written="%d.%m.%Y %H:%M")
    columns["time"] = [time.removesuffix(" 00:00") for time in columns["time"]]
    assert_reads(write(tmp_path / "steam.csv", columns))


def test_date_and_clock_in_two_columns(tmp_path):
    """Date and time of day are joined."""
    columns = {"time": list(TIMES.strftime("%Y-%m-%d")), "clock": list(TIMES.strftime("%H:%M"))}
    columns["steam"] = cells()["steam"]
    assert_reads(write(tmp_path / "steam.csv", columns), clock_column="clock")


def test_decimal_comma_is_found_and_stated(tmp_path):
    """Semicolons between cells, a comma before the decimals."""
    path = write(tmp_path / "steam.csv", cells(decimal=","), ";")
    record = assert_reads(path)
    assert [notice.text for notice in record.notices if "decimal comma" in notice.text]


def test_decimal_comma_between_commas_is_refused(tmp_path):
    """Unquoted, a decimal comma makes a third cell; it is never read as a column."""
    assert "R131" in refusal(write(tmp_path / "steam.csv", cells(decimal=",")))


@pytest.mark.parametrize(("sign", "other"), [(".", ","), (",", ".")])
def test_groups_of_three_digits_are_refused_with_both_readings(tmp_path, sign, other):
    """1.250 is a thousand or one and a quarter; stating the sign settles it."""
    thousand = np.full(96, 1250.0)
    columns = cells(thousand, TIMES[:96])
    columns["steam"] = [f"1{sign}250"] * 96
    path = write(tmp_path / "steam.csv", columns, ";")
    text = refusal(path)
    assert f"'1{sign}250' in row 2 is" in text
    assert "1.25 with a decimal" in text
    assert "1250 with a decimal" in text
    assert_reads(path, thousand, decimal=other)
    assert_reads(path, thousand / 1000.0, decimal=sign)


def test_thousands_and_decimals_together_are_clear(tmp_path):
    """1.250,5 and 1,250.5 can each be read in one way only."""
    flow = FLOW_KG_H.copy()
    flow[5] = 1250.5
    english = cells(flow)
    english["steam"] = [f"{value:,.1f}" for value in flow]
    swapped = str.maketrans(",.", ".,")
    german = {"time": english["time"], "steam": [cell.translate(swapped) for cell in english["steam"]]}
    assert_reads(write(tmp_path / "english.csv", english, ";"), flow)
    assert_reads(write(tmp_path / "german.csv", german, ";"), flow)


def test_last_row_without_a_line_break_is_left_out_and_said(tmp_path):
    """A number at the end of a cut file may have lost digits."""
    path = write(tmp_path / "steam.csv", cells())
    path.write_bytes(path.read_bytes()[:-2])
    record = assert_reads(path, FLOW_KG_H[:-1])
    assert codes(record) == ["R193"]


def test_delimiter_at_the_end_of_every_row(tmp_path):
    """An empty last cell in every row is accepted."""
    columns = cells()
    columns["steam"] = [cell + "," for cell in columns["steam"]]
    assert_reads(write(tmp_path / "steam.csv", columns))


def test_lines_before_the_header_are_skipped_when_stated(tmp_path):
    """Loggers write their name first."""
    path = write(tmp_path / "steam.csv", cells())
    path.write_bytes(b"Logger 7\nsite,invented,and,more\n" + path.read_bytes())
    assert_reads(path, header_row=3)
    assert "R103" in refusal(path)


def test_column_named_twice_in_the_file_is_refused(tmp_path):
    """Which of the two is meant cannot be known."""
    path = tmp_path / "steam.csv"
    path.write_text("time,steam,steam\n2026-02-02T00:00,1,2\n", encoding="utf-8")
    assert "stands there twice" in refusal(path)


def test_workbook_is_read_and_its_sheet_must_be_clear(tmp_path):
    """Times as dates and numbers as numbers; two sheets need a name."""
    path = tmp_path / "steam.xlsx"
    frame = pd.DataFrame({"time": TIMES, "steam": FLOW_KG_H})
    frame.to_excel(path, sheet_name="log", index=False)
    assert_reads(path)
    with pd.ExcelWriter(path) as book:
        frame.to_excel(book, sheet_name="log", index=False)
        frame.to_excel(book, sheet_name="old", index=False)
    assert "name one of the sheets: log, old" in refusal(path)
    assert_reads(path, sheet="old")


def test_damaged_workbook_is_refused(tmp_path):
    """Bytes that are no workbook."""
    path = tmp_path / "steam.xlsx"
    path.write_bytes(b"not a workbook")
    assert "R102" in refusal(path)


def test_parquet_is_read_from_column_or_index(tmp_path):
    """Time may be a column or the index."""
    frame = pd.DataFrame({"time": TIMES, "steam": FLOW_KG_H})
    frame.to_parquet(tmp_path / "column.parquet")
    frame.set_index("time").to_parquet(tmp_path / "index.parquet")
    assert_reads(tmp_path / "column.parquet")
    assert_reads(tmp_path / "index.parquet")
    (tmp_path / "bad.parquet").write_bytes(b"PAR1 damaged PAR1")
    assert "R102" in refusal(tmp_path / "bad.parquet")


def test_text_that_is_no_text_is_refused(tmp_path):
    """Zero bytes and a compressed file inside a compressed file are not read."""
    path = tmp_path / "steam.csv"
    path.write_bytes(b"time,steam\n\x00\x01")
    assert "is not text" in refusal(path)
    path.write_bytes(gzip.compress(gzip.compress(b"time,steam\n")))
    assert "R102" in refusal(path) or "R103" in refusal(path)
