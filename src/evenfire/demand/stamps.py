"""Time stamps from cells: order of day and month, decided or refused."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from evenfire.demand.local_time import elapsed_local_time
from evenfire.demand.record_format import RecordFormat
from evenfire.demand.table import Table, rows_named
from evenfire.errors import Notice, Problem, RecordError

if TYPE_CHECKING:
    import pandas as pd

StampArray = NDArray[np.datetime64]

DATE = re.compile(r"(\d{1,4})([-/.])(\d{1,2})\2(\d{1,4})")
YEAR_FIRST = re.compile(r"\d{4}[-/.]")
ZONED = r":\d{2}(?:[.,]\d+)?\s*(?:Z|[+-]\d{2}(?::?\d{2})?)$"
ORDERS = {"dmy": "day before month", "mdy": "month before day"}
CLOCKS = ("%H:%M:%S", "%H:%M", "%H:%M:%S.%f", "%I:%M:%S %p", "%I:%M %p")


def record_stamps(table: Table, form: RecordFormat, source: str) -> tuple[StampArray, list[Notice]]:
    """Time stamps of a table on a clock that runs evenly, starting at local time.

    Use it on the cells of the time column, text or dates. Dates with the year first are read so;
    others need a day above 12 somewhere in the record, or a stated order.

    Parameters
    ----------
    table
        Cells and row numbers.
    form
        Columns, date order, zone.
    source
        Name of the file, for messages.

    Returns
    -------
    tuple
        Time stamps, shape (rows,), datetime64[ns]; notices (R192 date order, R197 summer time).

    Raises
    ------
    RecordError
        R106 no time stamp, R123 date order open or contradicted, R124 zone.

    Notes
    -----
    Times of day are read as 14:05, 14:05:30, 14:05:30.5 or 2:05 PM; a date without a time of day is
    midnight when other rows have one, as spreadsheets write it.
    """
    import pandas as pd

    where = f"{source}: column '{form.time_column}'"
    cells = table.cells[form.time_column]
    if len(cells) == 0:
        return np.empty(0, dtype="datetime64[ns]"), []
    if isinstance(cells.dtype, pd.DatetimeTZDtype):
        return elapsed_local_time(cells, None, form, where, table.lines)
    if form.clock_column:
        cells = cells.astype("str") + " " + table.cells[form.clock_column].astype("str")
    elif cells.dtype.kind == "M":
        stamps = cells.dt.round("ms")
        _refuse(stamps.isna().to_numpy(), cells.astype("str"), where, table.lines)
        return elapsed_local_time(stamps, None, form, where, table.lines)
    text = cells.astype("str")
    if form.date_order in ("", "ymd") and YEAR_FIRST.match(str(text.iloc[0])):
        stamps = _in_form(text, "ymd")
        if not stamps.isna().any():
            return elapsed_local_time(stamps, None, form, where, table.lines)
    text = text.str.strip()
    zoned = text.str.contains(ZONED, regex=True, na=False).to_numpy(dtype=bool)
    if zoned.any():
        _refuse(~zoned, text, where, table.lines)
        instants = pd.to_datetime(text, format="ISO8601", utc=True, errors="coerce")
        _refuse(instants.isna().to_numpy(), text, where, table.lines)
        return elapsed_local_time(instants, str(text.iloc[0]), form, where, table.lines)
    order, notices = _date_order(text, form, where, table.lines)
    stamps = _parsed(text, order)
    _refuse(stamps.isna().to_numpy(), text, where, table.lines)
    local, more = elapsed_local_time(stamps, None, form, where, table.lines)
    return local, notices + more


def _refuse(wrong: NDArray[np.bool_], text: pd.Series[str], where: str, lines: NDArray[np.int64]) -> None:
    if wrong.any():
        shown = text.iloc[int(wrong.argmax())]
        found = f"no time stamp in {rows_named(lines, wrong)}, first '{'' if shown == 'nan' else shown}'"
        allowed = "write every time stamp alike, as 2026-02-02T06:00 or 02.02.2026 06:00:00"
        raise RecordError(Problem(code="R106", where=where, found=found, allowed=allowed))


def _date_order(
    text: pd.Series[str], form: RecordFormat, where: str, lines: NDArray[np.int64]
) -> tuple[str, list[Notice]]:
    """Order of the parts of the dates, stated or proved by the dates themselves."""
    _refuse(~text.str.match(DATE).to_numpy(dtype=bool), text, where, lines)
    parts = text.str.extract(DATE)
    year_first = (parts[0].str.len() == 4).to_numpy(dtype=bool)
    if year_first.all():
        if form.date_order not in ("", "ymd"):
            _order_refused(where, f"the year stands first but '{form.date_order}' is stated", "leave it out")
        return "ymd", []
    short = parts[3].str.len() == 2
    if short.any() and not form.date_order:
        at = int(short.to_numpy(dtype=bool).argmax())
        found = f"a year of two digits in row {lines[at]}, '{text.iloc[at]}'"
        _order_refused(where, found, "state the date order: ymd, dmy or mdy")
    if form.date_order == "ymd":
        return "ymd", []
    one, two = (parts[part].astype("int64").to_numpy() for part in (0, 2))
    late = {"dmy": one > 12, "mdy": two > 12}
    proved = [order for order, proof in late.items() if proof.any()]
    if len(proved) == 2:
        rows = [f"{ORDERS[order]} in row {lines[int(late[order].argmax())]}" for order in proved]
        _order_refused(where, " but ".join(rows), "write all dates in one order")
    if form.date_order:
        if proved and proved != [form.date_order]:
            row = lines[int(late[proved[0]].argmax())]
            found = f"'{form.date_order}' is stated but row {row} has the {ORDERS[proved[0]]}"
            _order_refused(where, found, "state the other order")
        return form.date_order, []
    if not proved:
        at = int((one != two).argmax())
        readings = " or ".join(f"{_parsed(text.iloc[[at]], order).iloc[0]:%d %B %Y}" for order in ORDERS)
        found = f"'{text.iloc[at]}' in row {lines[at]} is {readings}, and no other date decides it"
        _order_refused(where, found, "state the date order: dmy or mdy")
    return proved[0], [Notice(code="R192", text=f"{where} is read with the {ORDERS[proved[0]]}.")]


def _order_refused(where: str, found: str, allowed: str) -> None:
    raise RecordError(Problem(code="R123", where=where, found=found, allowed=allowed))


def _parsed(text: pd.Series[str], order: str) -> pd.Series[pd.Timestamp]:
    """Time stamps of one order, NaT where a cell does not fit; the first cell's form is tried first."""
    import pandas as pd

    stamps = _in_form(text, order)
    while stamps.isna().any():
        left = stamps.isna()
        again = _in_form(text[left], order)
        if again.isna().all():
            again = _in_form(text[left].iloc[1:], order)
            if again.isna().all():
                break
        stamps = stamps.fillna(again)
    return stamps if stamps.dtype.kind == "M" else pd.to_datetime(stamps)


def _in_form(text: pd.Series[str], order: str) -> pd.Series[pd.Timestamp]:
    """Time stamps of the cells that are written like the first one."""
    import pandas as pd

    nothing = pd.Series(pd.NaT, index=text.index, dtype="datetime64[ns]")
    match = DATE.match(str(text.iloc[0])) if len(text) else None
    if match is None:
        return nothing
    mark = match[2]
    year = "%Y" if max(len(match[1]), len(match[4])) == 4 else "%y"
    date = mark.join(year if part == "y" else f"%{part}" for part in order)
    rest = str(text.iloc[0])[match.end() :]
    if not rest:
        return pd.to_datetime(text, format=date, errors="coerce").astype("datetime64[ns]")
    between = rest[: len(rest) - len(rest.lstrip("T "))]
    for clock in CLOCKS:
        form = date + between + clock
        if pd.notna(pd.to_datetime(text.iloc[:1], format=form, errors="coerce").iloc[0]):
            return pd.to_datetime(text, format=form, errors="coerce").astype("datetime64[ns]")
    return nothing
