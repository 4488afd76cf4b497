"""A damaged record file gives a stated correction or a clear error, never a wrong number."""

import datetime as dt
import gzip
import re
import tempfile
from pathlib import Path

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from evenfire.demand.read import demand_record
from evenfire.demand.record_format import RecordFormat
from evenfire.errors import RecordError

START = dt.datetime(2026, 2, 12)
STEPS = 3 * 48
STEP = dt.timedelta(minutes=30)
FLOW = [1000 + (at * 7919) % 4321 for at in range(STEPS)]
TRUTH = {START + at * STEP: float(flow) for at, flow in enumerate(FLOW)}
LINES = ["time,steam", *(f"{time:%Y-%m-%dT%H:%M},{flow:.0f}" for time, flow in TRUTH.items())]
CONTENT = ("\n".join(LINES) + "\n").encode()


def form(gaps):
    """Format of the file."""
    return RecordFormat(
        time_column="time", flow_column="steam", flow_unit="kg/h", gaps=gaps, largest_gap_s=86_400.0
    )


def assert_true_or_refused(content, gaps="hold", name="steam.csv"):
    """Every step is as it was, but for those that the notices count as filled; or the file is refused."""
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / name
        path.write_bytes(content)
        try:
            record = demand_record(path, form(gaps))
        except RecordError:
            return
    filled = 0
    for notice in record.notices:
        if notice.code == "R191":
            found = re.match(r"(\d+) of", notice.text)
            assert found
            filled += int(found[1])
    wrong = sum(
        1
        for at, flow in enumerate(record.flow_kg_s)
        if not np.isclose(flow * 3600.0, TRUTH[record.start + at * STEP], rtol=1e-12)
    )
    assert wrong <= filled
    assert gaps != "refuse" or wrong == 0


@given(cut=st.integers(0, len(CONTENT)), gaps=st.sampled_from(["hold", "refuse"]))
def test_file_cut_anywhere(cut, gaps):
    """A cut inside the last number does not shorten the number."""
    assert_true_or_refused(CONTENT[:cut], gaps)


@given(cut=st.integers(0, 900))
@settings(max_examples=40)
def test_compressed_file_cut_anywhere(cut):
    """A compressed file cut short is refused."""
    assert_true_or_refused(gzip.compress(CONTENT)[:cut], name="steam.csv.gz")


@given(at=st.integers(0, len(CONTENT)), byte=st.integers(0, 255))
def test_a_stray_byte_that_is_no_part_of_a_number(at, byte):
    """Any byte that could not belong to another number is noticed or harmless."""
    if bytes([byte]) not in (*(b"%d" % digit for digit in range(10)), b".", b"e", b"E"):
        assert_true_or_refused(CONTENT[:at] + bytes([byte]) + CONTENT[at:])


@given(at=st.integers(0, len(CONTENT) - 1))
def test_a_lost_byte_that_is_no_digit(at):
    """A lost delimiter, line break or sign of the date is noticed."""
    if not CONTENT[at : at + 1].isdigit():
        assert_true_or_refused(CONTENT[:at] + CONTENT[at + 1 :])


@given(data=st.data(), gaps=st.sampled_from(["hold", "interpolate", "zero", "refuse"]))
def test_lost_repeated_and_exchanged_rows(data, gaps):
    """Lost rows are filled and counted; repeated and exchanged rows are refused."""
    lines = list(LINES)
    for _ in range(data.draw(st.integers(1, 4))):
        at = data.draw(st.integers(1, len(lines) - 1))
        other = data.draw(st.integers(1, len(lines) - 1))
        match data.draw(st.sampled_from(["lose", "repeat", "exchange"])):
            case "lose":
                del lines[at]
            case "repeat":
                lines.insert(other, lines[at])
            case "exchange":
                lines[at], lines[other] = lines[other], lines[at]
    assert_true_or_refused(("\n".join(lines) + "\n").encode(), gaps)


@given(
    row=st.integers(1, STEPS),
    cell=st.text(max_size=6).filter(lambda text: not any(c.isdigit() for c in text)),
)
def test_a_cell_of_other_text(row, cell):
    """A cell of words, signs or nothing is a gap or an error."""
    lines = list(LINES)
    lines[row] = lines[row].split(",")[0] + "," + cell
    assert_true_or_refused(("\n".join(lines) + "\n").encode("utf-8", "surrogatepass"))


@given(
    flow=st.lists(st.decimals(0, 20_000, places=2), min_size=96, max_size=96),
    decimal=st.sampled_from(".,"),
    delimiter=st.sampled_from(";\t|"),
    written=st.sampled_from(["%Y-%m-%dT%H:%M", "%d.%m.%Y %H:%M", "%m/%d/%Y %I:%M:%S %p"]),
    encoding=st.sampled_from(["utf-8", "utf-8-sig", "utf-16"]),
)
@settings(max_examples=60)
def test_every_dialect_gives_the_same_record(flow, decimal, delimiter, written, encoding):
    """What is written in one dialect comes back as the same numbers."""
    times = [START + dt.timedelta(days=1, minutes=15 * at) for at in range(96)]
    lines = [f"time{delimiter}steam"]
    for time, value in zip(times, flow, strict=True):
        lines.append(f"{time.strftime(written)}{delimiter}{value:.2f}".replace(".", "·"))
    text = "\n".join(lines) + "\n"
    dates = "." if "." in written else "·"
    text = "\n".join(
        line.rsplit(delimiter, 1)[0].replace("·", dates)
        + delimiter
        + line.rsplit(delimiter, 1)[1].replace("·", decimal)
        for line in text.splitlines()
    )
    with tempfile.TemporaryDirectory() as folder:
        path = Path(folder) / "steam.txt"
        path.write_bytes((text + "\n").encode(encoding))
        if max(flow) == 0:
            return
        record = demand_record(path, form("refuse"))
    np.testing.assert_allclose(record.flow_kg_s * 3600.0, [float(value) for value in flow], rtol=1e-12)
    assert record.start == times[0]
