"""Numbers of the flow columns, combined and converted as the record format says."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from evenfire.demand.numbers_in_text import numbers_in_cells
from evenfire.demand.record_format import (
    AMOUNT_KG,
    COUNTER_KG,
    FLOW_KG_S,
    FUEL_M3_S,
    POWER_W,
    HeatMeter,
    Meter,
    RecordFormat,
)
from evenfire.demand.series import FloatArray
from evenfire.demand.table import Table, rows_named
from evenfire.errors import Notice, Problem


@dataclass(frozen=True, slots=True, kw_only=True)
class Readings:
    """What the meters read at each row, in SI."""

    values: FloatArray = field(repr=False)
    """Combined flow [kg/s] or steam per step [kg], NaN where missing, shape (rows,); for a counter the
    steam [kg] since the last row with a reading, NaN also across a reset, the first being 0."""
    missing: NDArray[np.bool_] = field(repr=False)
    """Rows without a usable reading, shape (rows,)."""
    notices: tuple[Notice, ...]


def meter_readings(table: Table, form: RecordFormat, source: str) -> tuple[Readings, list[Problem]]:
    """Values of all flow columns of a table, combined into one and converted to kilograms.

    Use it on the raw cells; time is not looked at. A row counts as missing when one of its meters has
    no value or its status is not good.

    Parameters
    ----------
    table
        Cells and row numbers.
    form
        Columns, unit, status words, counter.
    source
        Name of the file, for messages.

    Returns
    -------
    tuple
        The readings, and all problems: R104, R122 cells; R105 infinite or negative; R115 no steam;
        R126 status; R127 counter.
    """
    notices: list[Notice] = []
    good, problems = _good_rows(table, form, source, notices)
    columns = []
    for meter in form.meters:
        where = f"{source}: column '{meter.column}'"
        numbers, more_notices, more_problems = _numbers(table, meter, form, where)
        notices += more_notices
        problems += more_problems
        infinite = np.isinf(numbers)
        if infinite.any():
            found = f"infinite flow in {rows_named(table.lines, infinite)}"
            allowed = "must be finite; leave the cell empty where the meter was wrong"
            problems.append(Problem(code="R105", where=where, found=found, allowed=allowed))
        columns.append(numbers)
    missing = ~good | np.isnan(columns).any(axis=0)
    values: FloatArray = np.zeros(missing.size)
    for meter, numbers in zip(form.meters, columns, strict=True):
        numbers[missing] = np.nan
        if form.flow_unit in COUNTER_KG and not problems:
            where = f"{source}: column '{meter.column}'"
            numbers, more_problems = _rises(numbers, form, where, table.lines, notices)
            problems += more_problems
        values += meter.factor * _kg_per_unit(form) * numbers
    if not problems or form.flow_unit not in COUNTER_KG:
        problems += _sign_problems(values, table, form, source, notices)
    if form.further_meters:
        notices.append(_sum_notice(form, source))
    if form.heat is not None:
        notices.append(_heat_notice(form, form.heat, source))
    return Readings(values=values, missing=missing, notices=tuple(notices)), problems


def _sign_problems(
    values: FloatArray, table: Table, form: RecordFormat, source: str, notices: list[Notice]
) -> list[Problem]:
    """Refuse negative flow or take it as none, as stated; refuse a record without any steam."""
    where = (
        f"{source}: column '{form.flow_column}'" if not form.further_meters else f"{source}: sum of meters"
    )
    negative = (values < 0.0) & np.isfinite(values)
    if negative.any():
        lowest = f"lowest {values[negative].min() / _kg_per_unit(form):g} {form.flow_unit}"
        found = f"negative flow in {rows_named(table.lines, negative)}, {lowest}"
        if form.negative_flow == "refuse":
            allowed = "correct it, leave the cell empty, or state that negative flow counts as zero"
            return [Problem(code="R105", where=where, found=found, allowed=allowed)]
        values[negative] = 0.0
        notices.append(Notice(code="R196", text=f"{where}: {found}; taken as zero.", severity="assumed"))
    known = values[~np.isnan(values)]
    if known.size and known.max() <= 0.0:
        found = "no steam flow in the whole record"
        return [Problem(code="R115", where=where, found=found, allowed="name the flow column")]
    return []


def _numbers(
    table: Table, meter: Meter, form: RecordFormat, where: str
) -> tuple[FloatArray, list[Notice], list[Problem]]:
    import pandas as pd

    cells = table.cells[meter.column]
    if pd.api.types.is_numeric_dtype(cells) and not pd.api.types.is_bool_dtype(cells):
        numbers = cells.to_numpy(dtype=np.float64, na_value=np.nan, copy=True)
        for word in form.missing_values:
            try:
                numbers[numbers == float(word)] = np.nan
            except ValueError:
                continue
        return numbers, [], []
    return numbers_in_cells(cells, form.decimal, where, table.lines)


def _good_rows(
    table: Table, form: RecordFormat, source: str, notices: list[Notice]
) -> tuple[NDArray[np.bool_], list[Problem]]:
    if not form.status_column:
        return np.ones(len(table.cells), dtype=np.bool_), []
    words = table.cells[form.status_column].astype("str").str.strip()
    good = words.isin(form.good_status).to_numpy(dtype=bool)
    where = f"{source}: column '{form.status_column}'"
    counts = words[~good].value_counts()
    shown = ", ".join(f"'{word}' {count} times" for word, count in counts.head(10).items())
    if not good.any():
        found = f"no row is good; found {shown}"
        allowed = "list the words that mean a good value; stated are " + ", ".join(form.good_status)
        return good, [Problem(code="R126", where=where, found=found, allowed=allowed)]
    if not good.all():
        text = f"{where}: {int((~good).sum())} rows are not good and count as missing: {shown}."
        notices.append(Notice(code="R194", text=text, severity="assumed"))
    return good, []


def _rises(
    numbers: FloatArray, form: RecordFormat, where: str, lines: NDArray[np.int64], notices: list[Notice]
) -> tuple[FloatArray, list[Problem]]:
    """What a counter has added since the last row with a reading, NaN across a reset."""
    rises = np.zeros(numbers.size)
    rises[np.isnan(numbers)] = np.nan
    valid = np.flatnonzero(~np.isnan(numbers))
    change = np.diff(numbers[valid])
    back = np.zeros(numbers.size, dtype=np.bool_)
    back[valid[1:]] = change < 0.0
    falls = int(back.sum())
    if falls > max(5, valid.size // 100):
        found = f"falls {falls} times in {valid.size} rows, first in {rows_named(lines, back)}"
        allowed = (
            f"a counter only rises: state '{form.flow_unit}/step' if each row holds the steam of its own step"
        )
        return rises, [Problem(code="R127", where=where, found=found, allowed=allowed)]
    if falls and form.counter_rollover:
        over = numbers[valid] > form.counter_rollover
        if over.any():
            found = f"readings up to {numbers[valid].max():g} {form.flow_unit}"
            allowed = f"the stated rollover is {form.counter_rollover:g} {form.flow_unit}"
            return rises, [Problem(code="R127", where=where, found=found, allowed=allowed)]
        change[change < 0.0] += form.counter_rollover
        text = f"{where}: the counter passed {form.counter_rollover:g} {form.flow_unit} {falls} times."
        notices.append(Notice(code="R195", text=text))
    elif falls:
        change[change < 0.0] = np.nan
        text = (
            f"{where}: the counter falls in {rows_named(lines, back)}; the steam since the row before is "
            "not known and counts as missing. State a rollover if the counter starts again by itself."
        )
        notices.append(Notice(code="R195", text=text, severity="assumed"))
    rises[valid[1:]] = change
    return rises, []


def _kg_per_unit(form: RecordFormat) -> float:
    """Kilograms (per second, or as such for counters and amounts) of steam in one unit."""
    factors = FLOW_KG_S | COUNTER_KG | AMOUNT_KG
    if form.heat is None:
        return factors[form.flow_unit]
    efficiency = 1.0 if form.heat.boiler_efficiency is None else form.heat.boiler_efficiency
    if form.flow_unit in POWER_W:
        power_w = POWER_W[form.flow_unit]
    else:
        power_w = FUEL_M3_S[form.flow_unit] * (form.heat.fuel_j_per_m3 or 0.0)
    return power_w * efficiency / form.heat.heat_j_per_kg


def _sum_notice(form: RecordFormat, source: str) -> Notice:
    terms = " ".join(f"{'-' if m.factor < 0 else '+'} {abs(m.factor):g} × '{m.column}'" for m in form.meters)
    return Notice(code="R200", text=f"{source}: demand is {terms.removeprefix('+ ')}.")


def _heat_notice(form: RecordFormat, heat: HeatMeter, source: str) -> Notice:
    per_kg = f"{heat.heat_j_per_kg / 1e3:g} kJ/kg"
    if heat.boiler_efficiency is None:
        text = f"{source}: steam is heat over {per_kg}, constant."
        return Notice(code="R198", text=text, severity="assumed")
    text = (
        f"{source}: steam is derived from a fuel meter with a constant efficiency of "
        f"{heat.boiler_efficiency:.1%} and {per_kg}. It shows what the burner did, not what the "
        "process took: peaks that the boiler's water and pressure band carried are hidden or delayed."
    )
    return Notice(code="R198", text=text, severity="warning")
