"""Dispatch of every typical day as one table that a spreadsheet can filter and pivot."""

from __future__ import annotations

import csv
import io
from collections import Counter
from collections.abc import Iterator

from evenfire.appraisal.results import AlternativeResult, Appraisal, DaySchedule

FORMULA_SIGNS = ("=", "+", "-", "@")
MINUTES_PER_HOUR = 60


def dispatch_table(appraisal: Appraisal) -> str:
    """Planned dispatch as CSV text: one row per alternative, typical day and step.

    A boiler has the same two columns in every alternative, empty where the alternative does not have
    it. A step stands for ``hours_per_year`` hours, so steam per year [t] is the sum of a flow column
    times that column; rows can be added up without counting anything twice.

    Parameters
    ----------
    appraisal
        Alternatives without a plan have no rows.

    Returns
    -------
    str
        UTF-8 text with a header line. User text stands on one line, and where it would make a
        spreadsheet see a formula it starts with an apostrophe.
    """
    boilers = boiler_columns(appraisal)
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    head = ["alternative", "day", "date", "days_per_year", "time", "hours_per_year", "demand_t_h"]
    for boiler in boilers:
        head += [f"output_t_h [{_one_line(boiler)}]", f"state [{_one_line(boiler)}]"]
    head += ["unmet_t_h", "vented_t_h", "stored_t", "vessel_bar_abs"]
    writer.writerow(head)
    for alternative in appraisal.alternatives:
        for schedule in alternative.schedule:
            writer.writerows(_rows(alternative, schedule, boilers))
    return text.getvalue()


def boiler_columns(appraisal: Appraisal) -> tuple[str, ...]:
    """Names of all boilers of all alternatives, in the order in which they first appear."""
    names = (name for each in appraisal.alternatives for name in boiler_names(each))
    return tuple(dict.fromkeys(names))


def boiler_names(alternative: AlternativeResult) -> tuple[str, ...]:
    """Names of an alternative's boilers, a number added to the second and later of one name."""
    seen: Counter[str] = Counter()
    names = []
    for boiler in alternative.boilers:
        seen[boiler.name] += 1
        names.append(boiler.name if seen[boiler.name] == 1 else f"{boiler.name} ({seen[boiler.name]})")
    return tuple(names)


def _rows(
    alternative: AlternativeResult, schedule: DaySchedule, boilers: tuple[str, ...]
) -> Iterator[list[str]]:
    position = {name: at for at, name in enumerate(boiler_names(alternative))}
    steps_per_hour = MINUTES_PER_HOUR / schedule.step_minutes
    start = [
        as_text(alternative.name),
        as_text(schedule.day),
        schedule.date,
        _number(schedule.days_per_year, 10),
    ]
    for step, demand in enumerate(schedule.demand_t_h):
        row = [
            *start,
            clock(step * schedule.step_minutes),
            _number(schedule.days_per_year / steps_per_hour, 10),
            _number(float(demand)),
        ]
        for name in boilers:
            at = position.get(name)
            row += (
                ["", ""]
                if at is None
                else [_number(float(schedule.output_t_h[at, step])), schedule.state[at][step]]
            )
        row += [
            _number(float(schedule.unmet_t_h[step])),
            _number(float(schedule.vented_t_h[step])),
            _number(float(schedule.stored_t[step])),
            _number(float(schedule.vessel_bar_abs[step])) if schedule.vessel_bar_abs.size else "",
        ]
        yield row


def clock(minutes: float) -> str:
    """Time of day from minutes after midnight; seconds are shown where there are any.

    >>> clock(65.0), clock(0.5)
    ('01:05', '00:00:30')
    """
    whole_minutes, seconds = divmod(round(minutes * 60.0), 60)
    hours, left = divmod(whole_minutes, MINUTES_PER_HOUR)
    return f"{hours:02d}:{left:02d}" + (f":{seconds:02d}" if seconds else "")


def _number(value: float, digits: int = 6) -> str:
    return f"{value + 0.0:.{digits}g}"


def as_text(words: str) -> str:
    """User text on one line, with an apostrophe where a spreadsheet would take it for a formula."""
    line = _one_line(words)
    return f"'{line}" if line.startswith(FORMULA_SIGNS) else line


def _one_line(words: str) -> str:
    return " ".join(words.split())
