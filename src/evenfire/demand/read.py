"""Read a measured steam record from a file, refusing what it cannot read with certainty."""

from __future__ import annotations

import datetime as dt
import difflib
import gzip
import zlib
from dataclasses import dataclass
from pathlib import Path
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from evenfire.demand.gaps import GAP_RULES, gaps_filled
from evenfire.demand.series import DemandRecord, FloatArray
from evenfire.errors import Notice, Problem, RecordError
from evenfire.units import SECONDS_PER_DAY

if TYPE_CHECKING:
    import pandas as pd

KG_S_PER_UNIT = {"kg/s": 1.0, "kg/h": 1.0 / 3600.0, "t/h": 1000.0 / 3600.0, "lb/h": 0.45359237 / 3600.0}
"""Kilograms per second in one unit of flow; the pound is exact by the agreement of 1959."""

ROWS_NAMED = 5


@dataclass(frozen=True, slots=True, kw_only=True)
class RecordFormat:
    """What the columns of a record file mean."""

    time_column: str
    flow_column: str
    flow_unit: str
    """``kg/h``, ``t/h``, ``lb/h`` or ``kg/s``."""
    gaps: str
    """What to do where values are missing: ``refuse``, ``hold``, ``interpolate`` or ``zero``."""
    largest_gap_s: float
    """Longest gap that may be filled [s]."""


def demand_record(path: Path, form: RecordFormat) -> DemandRecord:
    """Steam demand record read from a CSV file, plain or compressed with gzip.

    Use it for a file with one row per step: a time stamp at the start of the step and the mean flow
    of the step. Missing rows and empty cells are gaps; they are refused or filled as ``form`` says,
    and what was filled is stated in the record's notices.

    Parameters
    ----------
    path
        File with a header line, comma separated, UTF-8.
    form
        Columns, unit and rule for gaps.

    Returns
    -------
    DemandRecord
        Complete and regular, in kg/s.

    Raises
    ------
    RecordError
        All problems found at once, each with the rows concerned: R101 file, R102 damaged file, R103
        column, R104 not a number, R105 negative or infinite flow, R106 time stamp, R107 order, R108
        duplicates, R109 step, R110 gaps, R111 gap too long, R112 record too short, R113 unknown unit or
        rule, R115 no steam at all.

    Notes
    -----
    The step is the most frequent distance between time stamps; every other distance must be a whole
    multiple of it. Rows are numbered as an editor shows them, the header being row 1.
    """
    problems = _form_problems(path, form)
    if problems:
        raise RecordError(*problems)
    table = _table(path, form)
    lines = np.arange(2, len(table) + 2)
    stamps, stamp_problems = _stamps(path, table[form.time_column], lines)
    flow, flow_problems = _flow(path, form, table[form.flow_column], lines)
    problems = stamp_problems + flow_problems
    if not stamp_problems:
        problems += _length_problems(path, stamps)
        problems += _order_problems(path, stamps, lines)
    if problems:
        raise RecordError(*problems)
    return _regular_record(path, form, stamps, flow, lines)


def _form_problems(path: Path, form: RecordFormat) -> list[Problem]:
    problems = []
    if not path.is_file():
        found = "is a folder" if path.is_dir() else "no such file"
        problems.append(_problem("R101", path, "", found, "give the path of a record file"))
    if form.flow_unit not in KG_S_PER_UNIT:
        allowed = "must be one of " + ", ".join(KG_S_PER_UNIT)
        problems.append(_problem("R113", path, "flow unit", f"found '{form.flow_unit}'", allowed))
    if form.gaps not in GAP_RULES:
        allowed = "must be one of " + ", ".join(GAP_RULES)
        problems.append(_problem("R113", path, "rule for gaps", f"found '{form.gaps}'", allowed))
    if form.time_column == form.flow_column:
        found = f"time and flow are both '{form.time_column}'"
        problems.append(_problem("R103", path, "columns", found, "name two different columns"))
    return problems


def _table(path: Path, form: RecordFormat) -> pd.DataFrame:
    import pandas as pd

    try:
        header = pd.read_csv(path, nrows=0, encoding="utf-8")
        columns = [str(column) for column in header.columns]
        problems = [
            _problem("R103", path, f"column '{wanted}'", "no such column", _nearest(wanted, columns))
            for wanted in (form.time_column, form.flow_column)
            if wanted not in columns
        ]
        if problems:
            raise RecordError(*problems)
        table = pd.read_csv(
            path,
            usecols=[form.time_column, form.flow_column],
            dtype={form.time_column: "str"},
            encoding="utf-8",
            skip_blank_lines=False,
            low_memory=False,
        )
    except (gzip.BadGzipFile, zlib.error, EOFError, UnicodeDecodeError, OSError) as error:
        allowed = "export the file again, or repair it; plain CSV must be UTF-8"
        raise RecordError(_problem("R102", path, "", f"cannot be read ({error})", allowed)) from error
    except pd.errors.EmptyDataError as error:
        raise RecordError(_problem("R102", path, "", "is empty", "give a file with a header line")) from error
    except pd.errors.ParserError as error:
        allowed = "every row needs as many cells as the header"
        raise RecordError(_problem("R102", path, "", f"cannot be read ({error})", allowed)) from error
    filled = np.flatnonzero(table.notna().any(axis=1).to_numpy())
    return table.iloc[: filled[-1] + 1] if filled.size else table.iloc[:0]


def _stamps(
    path: Path, cells: pd.Series[str], lines: NDArray[np.int64]
) -> tuple[NDArray[np.datetime64], list[Problem]]:
    import pandas as pd

    zoned = cells.str.contains(r"(?:Z|[+-]\d{2}:?\d{2})$", regex=True, na=False).to_numpy(dtype=bool)
    if zoned.any():
        found = f"time stamps with a zone in {_rows(lines, zoned)}, first '{cells.iloc[int(zoned.argmax())]}'"
        allowed = "give local time without a zone, as 2026-02-02T06:00"
        return np.empty(0, dtype="datetime64[ns]"), [
            _problem("R106", path, f"column '{cells.name}'", found, allowed)
        ]
    parsed = pd.to_datetime(cells, format="ISO8601", errors="coerce")
    wrong = parsed.isna().to_numpy()
    if wrong.any():
        shown = cells.fillna("").iloc[int(wrong.argmax())]
        found = f"no time stamp in {_rows(lines, wrong)}, first '{shown}'"
        allowed = "write every time stamp as 2026-02-02T06:00 or 2026-02-02 06:00:00"
        return np.empty(0, dtype="datetime64[ns]"), [
            _problem("R106", path, f"column '{cells.name}'", found, allowed)
        ]
    return parsed.to_numpy(dtype="datetime64[ns]"), []


def _flow(
    path: Path, form: RecordFormat, cells: pd.Series[float], lines: NDArray[np.int64]
) -> tuple[FloatArray, list[Problem]]:
    import pandas as pd

    where = f"column '{form.flow_column}'"
    flow = pd.to_numeric(cells, errors="coerce").to_numpy(dtype=np.float64, na_value=np.nan)
    problems = []
    wrong = np.isnan(flow) & cells.notna().to_numpy()
    if wrong.any():
        found = f"no number in {_rows(lines, wrong)}, first '{cells.iloc[int(wrong.argmax())]}'"
        allowed = "must be numbers with a decimal point; leave a cell empty where there is no value"
        problems.append(_problem("R104", path, where, found, allowed))
    for wrong, word in ((np.isinf(flow), "infinite"), ((flow < 0.0) & np.isfinite(flow), "negative")):
        if wrong.any():
            lowest = f", lowest {flow[wrong].min():g} {form.flow_unit}" if word == "negative" else ""
            found = f"{word} flow in {_rows(lines, wrong)}{lowest}"
            allowed = "must be finite and not negative; leave the cell empty where the meter was wrong"
            problems.append(_problem("R105", path, where, found, allowed))
    if not problems and np.isfinite(flow).any() and np.nanmax(flow) <= 0.0:
        problems.append(
            _problem("R115", path, where, "no steam flow in the whole record", "name the flow column")
        )
    return flow * KG_S_PER_UNIT[form.flow_unit], problems


def _length_problems(path: Path, stamps: NDArray[np.datetime64]) -> list[Problem]:
    allowed = "give at least one day; eight weeks or more are better"
    if stamps.size < 2:
        found = f"found {stamps.size} rows with values"
        return [_problem("R112", path, "length", found, allowed)]
    return []


def _order_problems(path: Path, stamps: NDArray[np.datetime64], lines: NDArray[np.int64]) -> list[Problem]:
    distance = np.diff(stamps).astype(np.int64)
    problems = []
    backwards = np.concatenate([[False], distance < 0])
    if backwards.any():
        found = f"time runs backwards in {_rows(lines, backwards)}"
        problems.append(_problem("R107", path, "time", found, "sort the rows by time"))
    repeated = np.zeros(stamps.size, dtype=bool)
    order = np.argsort(stamps, kind="stable")
    repeated[order[1:]] = np.diff(stamps[order]).astype(np.int64) == 0
    if repeated.any():
        found = f"time stamp given before in {_rows(lines, repeated)}"
        allowed = "keep one row per time stamp (the hour repeated in autumn must be given in winter time)"
        problems.append(_problem("R108", path, "time", found, allowed))
    return problems


def _regular_record(
    path: Path,
    form: RecordFormat,
    stamps: NDArray[np.datetime64],
    flow: FloatArray,
    lines: NDArray[np.int64],
) -> DemandRecord:
    distance = np.diff(stamps).astype(np.int64)
    distances, counts = np.unique(distance, return_counts=True)
    step_ns = int(distances[counts.argmax()])
    step_s = step_ns / 1e9
    problems = []
    irregular = np.concatenate([[False], distance % step_ns != 0])
    if irregular.any():
        found = f"step of {step_s:g} s, but another distance in {_rows(lines, irregular)}"
        allowed = "every distance must be a whole multiple of the step"
        raise RecordError(_problem("R109", path, "time", found, allowed))
    missing = int(distance.max()) / 1e9 - step_s
    if missing > form.largest_gap_s or (missing > 0.0 and form.gaps == "refuse"):
        jump = int(distance.argmax())
        code, allowed = (
            ("R110", "export without gaps, or state a rule for gaps: hold, interpolate or zero")
            if form.gaps == "refuse"
            else ("R111", f"the longest gap that may be filled is {form.largest_gap_s:g} s")
        )
        found = (
            f"{int((distance > step_ns).sum())} gaps, the longest {missing:g} s after row {lines[jump]} "
            f"({stamps[jump].astype('datetime64[s]')})"
        )
        problems.append(_problem(code, path, "time", found, allowed))
    if form.gaps == "refuse" and np.isnan(flow).any():
        found = f"no value in {_rows(lines, np.isnan(flow))}"
        allowed = "give every value, or state a rule for gaps: hold, interpolate or zero"
        problems.append(_problem("R110", path, f"column '{form.flow_column}'", found, allowed))
    if problems:
        raise RecordError(*problems)
    position = (stamps - stamps[0]).astype(np.int64) // step_ns
    whole = np.full(int(position[-1]) + 1, np.nan)
    whole[position] = flow
    start = stamps[0].astype("datetime64[us]").astype(dt.datetime)
    if whole.size * step_s < SECONDS_PER_DAY:
        found = f"found {whole.size} steps of {step_s:g} s, {whole.size * step_s / 3600.0:g} h"
        allowed = "give at least one day; eight weeks or more are better"
        raise RecordError(_problem("R112", path, "length", found, allowed))
    filled, notices = gaps_filled(whole, start, step_s, form.gaps, form.largest_gap_s, path.name)
    return DemandRecord(
        start=start,
        step_s=step_s,
        flow_kg_s=filled,
        source=path.name,
        notices=notices + _coverage_notices(start, whole.size * step_s),
    )


def _coverage_notices(start: dt.datetime, length_s: float) -> tuple[Notice, ...]:
    days = length_s / SECONDS_PER_DAY
    if days >= 28.0:
        return ()
    text = f"The record covers {days:.1f} days from {start:%Y-%m-%d}; a year is scaled up from these alone."
    return (Notice(code="R190", text=text, severity="warning"),)


def _rows(lines: NDArray[np.int64], chosen: NDArray[np.bool_]) -> str:
    """Row numbers in words, the first few named and the rest counted."""
    rows = lines[np.flatnonzero(chosen)]
    named = ", ".join(str(row) for row in rows[:ROWS_NAMED])
    rest = f" and {rows.size - ROWS_NAMED} more" if rows.size > ROWS_NAMED else ""
    return f"row{'s' if rows.size > 1 else ''} {named}{rest}"


def _nearest(wanted: str, columns: list[str]) -> str:
    lowered = {column.lower(): column for column in columns}
    near = difflib.get_close_matches(wanted.lower(), lowered, n=1, cutoff=0.5)
    if near:
        return f"did you mean '{lowered[near[0]]}'? The file has: {', '.join(columns)}"
    return f"the file has: {', '.join(columns)}"


def _problem(code: str, path: Path, where: str, found: str, allowed: str) -> Problem:
    place = f"{path.name}: {where}" if where else path.name
    return Problem(code=code, where=place, found=found, allowed=allowed)
