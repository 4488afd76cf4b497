"""Workbooks (.xlsx) and Parquet files as tables."""

from __future__ import annotations

import importlib.util
import zipfile
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np

from evenfire.demand.record_format import RecordFormat
from evenfire.demand.table import Table, check_columns
from evenfire.errors import Problem, RecordError

if TYPE_CHECKING:
    import pandas as pd

PACKAGES = {".xlsx": "openpyxl", ".parquet": "pyarrow"}


def binary_table(path: Path, form: RecordFormat) -> Table:
    """Cells of one sheet of a workbook, or of a Parquet file.

    Use it for files that keep numbers and times as such; cells that hold text are read like those of
    a text file. Rows are numbered as a spreadsheet shows them.

    Raises
    ------
    RecordError
        R102 for a file that cannot be read, R103 for a column, R129 for a sheet, R130 when the package
        that reads the format is not installed.
    """
    package = PACKAGES[path.suffix.lower()]
    if importlib.util.find_spec(package) is None:
        allowed = f"install it (pip install {package}), or export the record as CSV"
        found = f"a {path.suffix} file needs the package {package}"
        raise RecordError(_problem("R130", path.name, found, allowed))
    try:
        cells = _sheet(path, form) if path.suffix.lower() == ".xlsx" else _parquet(path, form)
    except (zipfile.BadZipFile, OSError, ValueError, KeyError) as error:
        allowed = "save or export the file again"
        raise RecordError(_problem("R102", path.name, f"cannot be read ({error})", allowed)) from error
    lines = np.arange(len(cells), dtype=np.int64) + form.header_row + 1
    filled = cells.notna().any(axis=1).to_numpy()
    return Table(cells=cells[filled], lines=lines[filled], notices=())


def _sheet(path: Path, form: RecordFormat) -> pd.DataFrame:
    import pandas as pd

    with pd.ExcelFile(path, engine="openpyxl") as workbook:
        sheets = [str(name) for name in workbook.sheet_names]
        if form.sheet not in sheets and (form.sheet or len(sheets) > 1):
            found = f"no sheet '{form.sheet}'" if form.sheet else f"{len(sheets)} sheets"
            allowed = "name one of the sheets: " + ", ".join(sheets)
            raise RecordError(_problem("R129", path.name, found, allowed))
        sheet = form.sheet or sheets[0]
        rows = pd.read_excel(workbook, sheet_name=sheet, header=None, nrows=form.header_row)
        names = [] if len(rows) < form.header_row else [str(cell).strip() for cell in rows.iloc[-1]]
        check_columns(path.name, form.columns, names)
        options: dict[str, Any] = {
            "header": None,
            "skiprows": form.header_row,
            "usecols": sorted(names.index(column) for column in form.columns),
            "na_values": list(form.missing_values),
        }
        cells = pd.read_excel(workbook, sheet_name=sheet, **options)
    cells.columns = pd.Index([names[at] for at in options["usecols"]])
    return cells


def _parquet(path: Path, form: RecordFormat) -> pd.DataFrame:
    import pandas as pd
    import pyarrow  # type: ignore[import-untyped]  # has no types
    import pyarrow.parquet  # type: ignore[import-untyped]  # has no types

    try:
        present = [str(name) for name in pyarrow.parquet.read_schema(path).names]
    except pyarrow.ArrowInvalid as error:
        allowed = "export the file again"
        raise RecordError(_problem("R102", path.name, f"cannot be read ({error})", allowed)) from error
    check_columns(path.name, form.columns, present)
    cells = pd.read_parquet(path, columns=list(form.columns))
    if form.time_column not in cells.columns:
        cells = cells.reset_index()
    missing = set(form.missing_values)
    for meter in form.meters:
        column = cells[meter.column]
        if missing and not pd.api.types.is_numeric_dtype(column):
            cells[meter.column] = column.mask(column.isin(missing))
    return cells


def _problem(code: str, source: str, found: str, allowed: str) -> Problem:
    return Problem(code=code, where=source, found=found, allowed=allowed)
