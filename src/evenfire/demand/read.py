"""Read a measured steam record from a file, refusing what cannot be read with certainty."""

from __future__ import annotations

import datetime as dt
from pathlib import Path

from evenfire.demand.flows import meter_readings
from evenfire.demand.gaps import gaps_filled
from evenfire.demand.grid import averaged_grid, length_problem, order_problems, regular_grid
from evenfire.demand.record_format import RecordFormat as RecordFormat
from evenfire.demand.record_format import format_problems
from evenfire.demand.series import DemandRecord
from evenfire.demand.stamps import record_stamps
from evenfire.demand.table import Table
from evenfire.errors import Notice, Problem, RecordError
from evenfire.units import SECONDS_PER_DAY

BINARY = (".xlsx", ".parquet")
SHORT_DAYS = 28.0


def demand_record(path: Path, form: RecordFormat) -> DemandRecord:
    """Steam demand record read from a file of a data logger or historian.

    Use it for delimited text (plain or gzip), .xlsx and .parquet. Whatever the file does not decide
    by itself must be stated in ``form``; otherwise it is refused with the readings it could have.
    Whatever was detected, left out, filled or assumed stands in the record's notices in numbers.

    Parameters
    ----------
    path
        Record file.
    form
        Columns, unit, rule for gaps, and what else must be stated.

    Returns
    -------
    DemandRecord
        Complete and regular, in kg/s. Its clock runs evenly: it is local time on the first day and
        does not follow later changes to or from summer time.

    Raises
    ------
    RecordError
        All problems found at once, each with the rows concerned: R101 file, R102 unreadable, R103
        column, R104 not a number, R105 negative or infinite flow, R106 time stamp, R107 order, R108
        duplicates, R109 step, R110 gaps, R111 gap too long, R112 too short, R113 word or number of the
        format, R115 no steam at all, R121 delimiter, R122 decimal sign, R123 date order, R124 zone,
        R125 gap or summer time, R126 status, R127 counter, R128 heat meter, R129 sheet, R130 package,
        R131 width of rows.

    Notes
    -----
    A damaged file is refused or corrected as stated; what can not be seen is a number that was
    changed into another plausible number.
    """
    source = path.name
    problems = format_problems(form, source)
    if not path.is_file():
        found = "is a folder" if path.is_dir() else "no such file"
        problems.append(
            Problem(code="R101", where=source, found=found, allowed="give the path of a record file")
        )
    if problems:
        raise RecordError(*problems)
    table = _table(path, form)
    readings, problems = meter_readings(table, form, source)
    try:
        stamps, stamp_notices = record_stamps(table, form, source)
        problems += order_problems(stamps, form, source, table.lines)
    except RecordError as refused:
        problems += refused.problems
    if problems:
        raise RecordError(*problems)
    grid_of = regular_grid if form.logging == "regular" else averaged_grid
    grid = grid_of(stamps, readings, form, source, table.lines)
    if problems := length_problem(grid, source):
        raise RecordError(*problems)
    flow, gap_notices, gaps = gaps_filled(
        grid.flow_kg_s, grid.start, grid.step_s, form.gaps, form.largest_gap_s, source
    )
    notices = (*table.notices, *stamp_notices, *readings.notices, *grid.notices, *gap_notices)
    if form.share_before_meter:
        notices = (*notices, _share_notice(form.share_before_meter, source))
    return DemandRecord(
        start=grid.start,
        step_s=grid.step_s,
        flow_kg_s=flow / (1.0 - form.share_before_meter),
        source=source,
        notices=notices + _length_notices(grid.start, flow.size * grid.step_s),
        gaps=tuple(sorted((*grid.spread, *gaps), key=lambda gap: gap.first_step)),
    )


def _table(path: Path, form: RecordFormat) -> Table:
    if path.suffix.lower() in BINARY:
        from evenfire.demand.binary_file import binary_table

        return binary_table(path, form)
    from evenfire.demand.text_file import text_table

    return text_table(path, form)


def _share_notice(share: float, source: str) -> Notice:
    text = f"{source}: raised to all steam made; {share:.1%} of it leaves ahead of the meter (deaerator)."
    return Notice(code="R201", text=text)


def _length_notices(start: dt.datetime, length_s: float) -> tuple[Notice, ...]:
    days = length_s / SECONDS_PER_DAY
    if days >= SHORT_DAYS:
        return ()
    text = f"The record covers {days:.1f} days from {start:%Y-%m-%d}; a year is scaled up from these alone."
    return (Notice(code="R190", text=text, severity="warning"),)
