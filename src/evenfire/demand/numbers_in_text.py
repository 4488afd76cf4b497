"""Numbers from cells of text: decimal point or decimal comma, decided or refused."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from evenfire.demand.series import FloatArray
from evenfire.demand.table import rows_named
from evenfire.errors import Notice, Problem

if TYPE_CHECKING:
    import pandas as pd

OTHER = {".": ",", ",": "."}
WORDS = {".": "decimal point", ",": "decimal comma"}


def numbers_in_cells(
    cells: pd.Series[str], decimal: str, where: str, lines: NDArray[np.int64]
) -> tuple[FloatArray, list[Notice], list[Problem]]:
    """Numbers in text cells, NaN where a cell is empty.

    Use it where a column is not numbers already. Two readings are tried: a decimal point with commas
    between thousands, and a decimal comma with points between thousands. One that all cells fit is
    taken; when both fit and give different numbers, both are shown and the column is refused.

    Parameters
    ----------
    cells
        Text, shape (rows,), missing where empty.
    decimal
        ``.`` or ``,`` where stated, else empty.
    where
        File and column, for messages.
    lines
        Row numbers, shape (rows,).

    Returns
    -------
    tuple
        Numbers, shape (rows,); notices (R192); problems (R104 no number, R122 two readings).

    Notes
    -----
    Thousands are separated in all numbers of a column or in none; a group never starts with 0.

    Examples
    --------
    >>> import pandas as pd
    >>> numbers, notices, problems = numbers_in_cells(
    ...     pd.Series(["1.250,5", "80,25"]), "", "steam.csv", np.array([2, 3])
    ... )
    >>> numbers.tolist(), notices[0].text
    ([1250.5, 80.25], 'steam.csv is read with a decimal comma.')
    >>> _, _, problems = numbers_in_cells(pd.Series(["1,250", "2,500"]), "", "steam.csv", np.array([2, 3]))
    >>> print(problems[0].found)
    '1,250' in row 2 is 1.25 with a decimal comma or 1250 with a decimal point
    """
    text = cells.astype("str").str.strip()
    present = (cells.notna() & (text != "")).to_numpy(dtype=bool)
    read = {mark: _read_as(text, present, mark) for mark in ((decimal,) if decimal else (".", ","))}
    fits = {mark: not np.isnan(numbers[present]).any() for mark, numbers in read.items()}
    fitting = [mark for mark, fit in fits.items() if fit]
    notices: list[Notice] = []
    problems: list[Problem] = []
    if len(fitting) == 2:
        differ = present & (read["."] != read[","])
        if differ.any():
            at = int(differ.argmax())
            found = (
                f"'{text.iloc[at]}' in row {lines[at]} is {read[','][at]:g} with a decimal comma "
                f"or {read['.'][at]:g} with a decimal point"
            )
            problems.append(Problem(code="R122", where=where, found=found, allowed="state the decimal sign"))
    if not fitting:
        best = min(read, key=lambda mark: int(np.isnan(read[mark][present]).sum()))
        wrong = present & np.isnan(read[best])
        found = f"no number in {rows_named(lines, wrong)}, first '{text.iloc[int(wrong.argmax())]}'"
        allowed = (
            f"must be numbers, with a {WORDS[best]} as in the rest; leave a cell empty if it has no value"
        )
        problems.append(Problem(code="R104", where=where, found=found, allowed=allowed))
        return read[best], notices, problems
    if fitting == [","] and not decimal:
        notices.append(Notice(code="R192", text=f"{where} is read with a decimal comma."))
    return read[fitting[0]], notices, problems


def may_be_thousands(numbers: FloatArray) -> bool:
    """Whether numbers read with a decimal point might be written with points between thousands.

    Use it on numbers parsed directly, to decide whether their text must be looked at: only cells of
    the form 1.234 can be either.

    >>> may_be_thousands(np.array([1.25, 980.0])), may_be_thousands(np.array([1.25, 0.98]))
    (True, False)
    """
    size = np.abs(numbers[np.isfinite(numbers)])
    if size.size == 0 or size.max() >= 1000.0:
        return False
    fraction = size[size != np.floor(size)]
    if fraction.size and fraction.min() < 1.0:
        return False
    thousandths = size * 1000.0
    return bool(np.all(np.abs(thousandths - np.round(thousandths)) < 1e-7))


def _read_as(text: pd.Series[str], present: NDArray[np.bool_], decimal: str) -> FloatArray:
    """Numbers under one reading of the signs, NaN where a cell does not fit it."""
    import pandas as pd

    point, group = f"\\{decimal}", f"\\{OTHER[decimal]}"
    tail = rf"(?:{point}\d*)?(?:[eE][+-]?\d+)?"
    grouped = text.str.fullmatch(rf"[+-]?[1-9]\d{{0,2}}(?:{group}\d{{3}})+{tail}").to_numpy(dtype=bool)
    plain = text.str.fullmatch(rf"[+-]?(?:\d+{tail}|{point}\d+)").to_numpy(dtype=bool)
    if (grouped & present).any():
        plain = plain & text.str.fullmatch(rf"[+-]?\d{{1,3}}(?:{point}.*)?").to_numpy(dtype=bool)
    fits = present & (plain | grouped)
    numbers = np.full(len(text), np.nan)
    cleaned = text[fits].str.replace(OTHER[decimal], "", regex=False).str.replace(decimal, ".", regex=False)
    numbers[fits] = pd.to_numeric(cleaned).to_numpy(dtype=np.float64)
    return numbers
