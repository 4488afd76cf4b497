"""The rows of a record file as they stand, before anything is read into them."""

from __future__ import annotations

import difflib
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from evenfire.errors import Notice, Problem, RecordError

if TYPE_CHECKING:
    import pandas as pd

ROWS_NAMED = 5


@dataclass(frozen=True, slots=True, kw_only=True)
class Table:
    """Cells of the columns asked for, and what was found out about the file."""

    cells: pd.DataFrame
    lines: NDArray[np.int64]
    """Row number of each row as an editor or spreadsheet shows it, shape (rows,)."""
    notices: tuple[Notice, ...]


def rows_named(lines: NDArray[np.int64], chosen: NDArray[np.bool_]) -> str:
    """Row numbers in words, the first few named and the rest counted.

    >>> rows_named(np.arange(2, 12), np.arange(10) > 2)
    'rows 5, 6, 7, 8, 9 and 2 more'
    """
    rows = lines[np.flatnonzero(chosen)]
    named = ", ".join(str(row) for row in rows[:ROWS_NAMED])
    rest = f" and {rows.size - ROWS_NAMED} more" if rows.size > ROWS_NAMED else ""
    return f"row{'s' if rows.size > 1 else ''} {named}{rest}"


def check_columns(source: str, wanted: tuple[str, ...], present: list[str]) -> None:
    """Refuse a table without a wanted column, or with one twice, offering the nearest name (R103)."""
    problems = []
    for column in wanted:
        if present.count(column) == 1:
            continue
        found = "no such column" if column not in present else "stands there twice"
        problems.append(
            Problem(
                code="R103",
                where=f"{source}: column '{column}'",
                found=found,
                allowed=_nearest(column, present) if column not in present else "rename one of them",
            )
        )
    if problems:
        raise RecordError(*problems)


def _nearest(wanted: str, present: list[str]) -> str:
    shown = ", ".join(present[:30]) + (f" and {len(present) - 30} more" if len(present) > 30 else "")
    lowered = {column.lower(): column for column in present}
    near = difflib.get_close_matches(wanted.lower(), lowered, n=1, cutoff=0.5)
    if near:
        return f"did you mean '{lowered[near[0]]}'? The file has: {shown}"
    return f"the file has: {shown}"
