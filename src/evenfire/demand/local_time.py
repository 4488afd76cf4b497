"""Local time with summer time turned into a clock that runs evenly."""

from __future__ import annotations

import datetime as dt
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from evenfire.demand.record_format import FIXED_TIME, RecordFormat
from evenfire.demand.table import rows_named
from evenfire.errors import Notice, Problem, RecordError

if TYPE_CHECKING:
    import pandas as pd

StampArray = NDArray[np.datetime64]
HOUR_NS = 3_600_000_000_000


def elapsed_local_time(
    stamps: pd.Series[pd.Timestamp],
    first_text: str | None,
    form: RecordFormat,
    where: str,
    lines: NDArray[np.int64],
) -> tuple[StampArray, list[Notice]]:
    """Time stamps on a clock that runs evenly, equal to local time at the first row.

    Use it on parsed time stamps. Stamps with a zone are instants; without one they are local time of
    the stated zone, and the hour that autumn repeats is told apart by where the clock goes back.
    After a change of the clock the even clock differs from local time by an hour, which a notice says.

    Parameters
    ----------
    stamps
        Time stamps, naive or with a zone, shape (rows,).
    first_text
        First cell as written, for stamps read from text with a zone.
    form
        Record format; ``zone`` is used.
    where
        File and column, for messages.
    lines
        Row numbers, shape (rows,).

    Returns
    -------
    tuple
        Time stamps, shape (rows,), datetime64[ns]; notices (R197).

    Raises
    ------
    RecordError
        R124 when a time does not exist in the zone, or a repeated hour can be read in two ways.
    """
    import pandas as pd

    named = form.zone if form.zone != FIXED_TIME else ""
    if isinstance(stamps.dtype, pd.DatetimeTZDtype):
        if not form.zone and _is_utc(stamps, first_text):
            found = "time stamps in UTC"
            allowed = f"state the site's zone, or '{FIXED_TIME}' to take days from midnight to midnight UTC"
            raise RecordError(Problem(code="R124", where=where, found=found, allowed=allowed))
        instants = stamps.dt.tz_convert("UTC")
        offset = _first_offset(stamps, first_text, named)
    elif named:
        instants = _localized(stamps, named, where, lines).dt.tz_convert("UTC")
        offset = _first_offset(instants, None, named)
    else:
        return stamps.to_numpy(dtype="datetime64[ns]"), []
    even = instants.dt.tz_localize(None).to_numpy(dtype="datetime64[ns]") + np.timedelta64(offset)
    notices = []
    if named:
        local = instants.dt.tz_convert(named).dt.tz_localize(None).to_numpy(dtype="datetime64[ns]")
        moved = local != even
        if moved.any():
            day = str(local[int(moved.argmax())].astype("datetime64[D]"))
            text = (
                f"{where}: clocks change in this record, first on {day}. Times are kept as they ran on "
                f"the first day; {moved.mean():.0%} of the rows differ from local time by an hour."
            )
            notices.append(Notice(code="R197", text=text))
    return even, notices


def hour_lost_or_gap(before: np.datetime64, missing_ns: int) -> bool:
    """Whether an hour that no row covers may be the one that summer time skips.

    Use it where no zone is stated. It holds for exactly one hour from 01:00, 02:00 or 03:00 on a
    Sunday in March, September or October, when clocks go forward in one of the hemispheres.

    >>> hour_lost_or_gap(np.datetime64("2026-03-29T02:00"), HOUR_NS)
    True
    >>> hour_lost_or_gap(np.datetime64("2026-03-28T02:00"), HOUR_NS)
    False
    """
    moment = before.astype("datetime64[s]").astype(dt.datetime)
    on_the_hour = moment.hour in (1, 2, 3) and moment.minute == 0 and moment.second == 0
    in_season = moment.weekday() == 6 and moment.month in (3, 9, 10)
    return missing_ns == HOUR_NS and on_the_hour and in_season


def _is_utc(stamps: pd.Series[pd.Timestamp], first_text: str | None) -> bool:
    if first_text is not None:
        return first_text.endswith("Z")
    return str(stamps.dt.tz) == "UTC"


def _first_offset(stamps: pd.Series[pd.Timestamp], first_text: str | None, named: str) -> dt.timedelta:
    """Local time less UTC at the first row."""
    import pandas as pd

    first = stamps.iloc[0]
    if named:
        first = first.tz_convert(named)
    elif first_text is not None:
        first = pd.Timestamp(first_text)
    return first.utcoffset() or dt.timedelta()


def _localized(
    stamps: pd.Series[pd.Timestamp], zone: str, where: str, lines: NDArray[np.int64]
) -> pd.Series[pd.Timestamp]:
    count = len(stamps)
    summer = stamps.dt.tz_localize(zone, ambiguous=np.ones(count, dtype=bool), nonexistent="NaT")
    winter = stamps.dt.tz_localize(zone, ambiguous=np.zeros(count, dtype=bool), nonexistent="NaT")
    skipped = summer.isna().to_numpy()
    if skipped.any():
        found = (
            f"{rows_named(lines, skipped)} lie in the hour that {zone} skips, "
            f"first {stamps.iloc[int(skipped.argmax())]}"
        )
        allowed = f"state '{FIXED_TIME}' if the logger's clock is never changed, or the right zone"
        raise RecordError(Problem(code="R124", where=where, found=found, allowed=allowed))
    doubtful = np.flatnonzero((summer != winter).to_numpy())
    if doubtful.size == 0:
        return summer
    is_summer = np.ones(count, dtype=bool)
    times = stamps.to_numpy(dtype="datetime64[ns]")
    nights = times[doubtful].astype("datetime64[D]")
    for night in np.unique(nights):
        rows = doubtful[nights == night]
        back = np.flatnonzero(np.diff(times[rows]).astype(np.int64) <= 0)
        if back.size != 1:
            _refuse_night(times[rows], back.size, zone, where, lines[rows])
        is_summer[rows[int(back[0]) + 1 :]] = False
    return stamps.dt.tz_localize(zone, ambiguous=is_summer)


def _refuse_night(times: StampArray, turns: int, zone: str, where: str, lines: NDArray[np.int64]) -> None:
    if turns == 0:
        found = (
            f"rows {lines[0]} to {lines[-1]}, from {times[0].astype('datetime64[s]')}, lie in the hour that "
            f"{zone} has twice but stand there once: they may be summer time or winter time"
        )
        allowed = f"add the missing hour, or state '{FIXED_TIME}' if the logger's clock is never changed"
    else:
        found = f"the hour that {zone} has twice goes back {turns} times in rows {lines[0]} to {lines[-1]}"
        allowed = "sort the rows by time, summer time first"
    raise RecordError(Problem(code="R124", where=where, found=found, allowed=allowed))
