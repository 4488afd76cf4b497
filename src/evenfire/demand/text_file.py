"""Delimited text files: encoding, delimiter and the shape of every row."""

from __future__ import annotations

import codecs
import csv
import gzip
import io
import warnings
import zlib
from collections.abc import Hashable
from pathlib import Path
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from evenfire.demand.numbers_in_text import may_be_thousands
from evenfire.demand.record_format import RecordFormat
from evenfire.demand.table import Table, check_columns, rows_named
from evenfire.errors import Notice, Problem, RecordError

if TYPE_CHECKING:
    import pandas as pd

DELIMITERS = (",", ";", "\t", "|")
NAMES = {",": "comma", ";": "semicolon", "\t": "tab", "|": "bar"}
GZIP_START = b"\x1f\x8b"
BLOCK = 1 << 23
"""Bytes looked at together when rows are measured."""


def text_table(path: Path, form: RecordFormat) -> Table:
    """Cells of a delimited text file, plain or compressed with gzip.

    Use it for exports of data loggers and historians. A delimiter that is not stated is the one that
    gives all the columns asked for. Every row must have as many cells as the header (one empty cell
    more, from a delimiter at the end of each row, is accepted). A last row without a line break may be
    cut off in its last cell: it is left out with a notice unless that cell is not needed.

    Raises
    ------
    RecordError
        R102 for a file that cannot be unpacked, decoded or is empty, R103 for a column, R121 when two
        delimiters would fit, R131 for rows of another width.
    """
    notices: list[Notice] = []
    content = _utf8_content(path, form, notices)
    header_from, header_to = _header_span(path, form, content)
    header_line = content[header_from:header_to].decode("utf-8")
    delimiter, names = _columns(path.name, form, header_line, notices)
    body = content[header_to + 1 :]
    last_row_cut = bool(body) and not body.endswith(b"\n")
    width = _checked_width(path.name, form, body, delimiter, len(names))
    names += [""] * (width - len(names))
    del content
    table = _cells_of(body, delimiter, names, form, form.columns, form.text_columns)
    doubtful = tuple(
        meter.column for meter in form.meters if _must_stay_text(table[meter.column], form.decimal)
    )
    if doubtful:
        table[list(doubtful)] = _cells_of(body, delimiter, names, form, doubtful, doubtful)
    lines = np.arange(len(table), dtype=np.int64) + form.header_row + 1
    if last_row_cut and max(names.index(column) for column in form.columns) == width - 1:
        text = (
            f"{path.name} does not end with a line break, so its last row ({lines[-1]}) may be cut off "
            "and was left out."
        )
        notices.append(Notice(code="R193", text=text, severity="assumed"))
        table, lines = table.iloc[:-1], lines[:-1]
    filled = table.notna().any(axis=1).to_numpy()
    return Table(cells=table[filled], lines=lines[filled], notices=tuple(notices))


def _must_stay_text(cells: pd.Series[Any], decimal: str) -> bool:
    """Whether a column was not read as numbers, or its numbers might be written in another way."""
    if cells.dtype.kind not in "iuf" or decimal == ",":
        return True
    return not decimal and may_be_thousands(cells.to_numpy(dtype=np.float64))


def _cells_of(
    body: bytes,
    delimiter: str,
    names: list[str],
    form: RecordFormat,
    columns: tuple[str, ...],
    text_columns: tuple[str, ...],
) -> pd.DataFrame:
    import pandas as pd

    texts: dict[Hashable, str] = {str(names.index(column)): "str" for column in text_columns}
    missing: dict[str, list[str]] = {
        str(names.index(meter.column)): list(form.missing_values) for meter in form.meters
    }
    with warnings.catch_warnings():
        warnings.simplefilter("ignore", pd.errors.DtypeWarning)  # such columns are read again as text
        table = pd.read_csv(
            io.BytesIO(body),
            sep=delimiter,
            header=None,
            names=[str(at) for at in range(len(names))],
            usecols=[str(names.index(column)) for column in columns],
            dtype=texts,
            na_values=missing,
            skip_blank_lines=False,
            skipinitialspace=True,
        )
    table.columns = pd.Index([names[int(str(at))] for at in table.columns])
    return table


def _utf8_content(path: Path, form: RecordFormat, notices: list[Notice]) -> bytes:
    """Content of the file as UTF-8 with single line feeds."""
    try:
        content = path.read_bytes()
        if path.suffix == ".gz" or content.startswith(GZIP_START):
            content = gzip.decompress(content)
    except (gzip.BadGzipFile, zlib.error, EOFError, OSError) as error:
        allowed = "export the file again, or compress it again"
        raise RecordError(_problem("R102", path.name, f"cannot be unpacked ({error})", allowed)) from error
    encoding = form.encoding or _encoding(content)
    try:
        if encoding not in ("utf-8", "utf-8-sig"):
            content = content.decode(encoding).removeprefix("\ufeff").encode("utf-8")
            if not form.encoding:
                text = f"{path.name} was read as {encoding}."
                notices.append(Notice(code="R192", text=text))
        else:
            content = content.removeprefix(codecs.BOM_UTF8)
            content.decode("utf-8")
    except (UnicodeDecodeError, LookupError) as error:
        allowed = "state the encoding, e.g. utf-8, utf-16 or cp1252"
        raise RecordError(_problem("R102", path.name, f"cannot be decoded ({error})", allowed)) from error
    if b"\x00" in content:
        allowed = "give a text file, .xlsx or .parquet"
        raise RecordError(_problem("R102", path.name, "is not text", allowed))
    if b"\r" in content:
        content = content.replace(b"\r\n", b"\n").replace(b"\r", b"\n")
    return content


def _encoding(content: bytes) -> str:
    """Encoding by its mark, else UTF-8 where the bytes are valid, else the Western European code page."""
    if content.startswith((codecs.BOM_UTF16_LE, codecs.BOM_UTF16_BE)):
        return "utf-16"
    try:
        content.decode("utf-8")
    except UnicodeDecodeError:
        return "cp1252"
    return "utf-8"


def _header_span(path: Path, form: RecordFormat, content: bytes) -> tuple[int, int]:
    start = 0
    for _ in range(form.header_row - 1):
        start = content.find(b"\n", start) + 1
        if start == 0:
            start = len(content)
            break
    end = content.find(b"\n", start)
    end = len(content) if end < 0 else end
    if not content[start:end].strip():
        found = "is empty" if not content.strip() else f"row {form.header_row} is empty"
        allowed = "give a file whose header row names the columns"
        raise RecordError(_problem("R102", path.name, found, allowed))
    return start, end


def _columns(source: str, form: RecordFormat, header: str, notices: list[Notice]) -> tuple[str, list[str]]:
    """Delimiter and column names of the header row."""
    candidates = (form.delimiter,) if form.delimiter else DELIMITERS
    split = {mark: _cells(header, mark) for mark in candidates}
    fitting = [mark for mark, names in split.items() if set(form.columns) <= set(names)]
    if not fitting:
        most = max(candidates, key=lambda mark: len(split[mark]))
        check_columns(source, form.columns, split[most])
    if len(fitting) > 1:
        found = "the header can be split by " + " or by ".join(NAMES[mark] for mark in fitting)
        raise RecordError(_problem("R121", source, found, "state the delimiter"))
    delimiter = fitting[0]
    check_columns(source, form.columns, split[delimiter])
    if not form.delimiter and delimiter != ",":
        text = f"Columns of {source} are separated by a {NAMES[delimiter]}."
        notices.append(Notice(code="R192", text=text))
    return delimiter, split[delimiter]


def _cells(line: str, delimiter: str) -> list[str]:
    return [cell.strip() for cell in next(csv.reader([line], delimiter=delimiter, skipinitialspace=True))]


def _checked_width(source: str, form: RecordFormat, body: bytes, delimiter: str, width: int) -> int:
    """Number of cells of every row: the header's, or one more where each row ends with a delimiter."""
    first = body[: body.find(b"\n")] if b"\n" in body else body
    if first.endswith(delimiter.encode()) and len(_cells(first.decode("utf-8"), delimiter)) == width + 1:
        width += 1
    measure = _quoted_rows_of_other_width if b'"' in body else _rows_of_other_width
    rows = measure(body, delimiter, width)
    if rows.size:
        lines = np.arange(int(rows[-1]) + 1, dtype=np.int64) + form.header_row + 1
        chosen = np.zeros(lines.size, dtype=np.bool_)
        chosen[rows] = True
        allowed = f"every row needs {width} cells like the header; a decimal comma needs quotes or semicolons"
        found = f"another number of cells in {rows_named(lines, chosen)}"
        raise RecordError(_problem("R131", source, found, allowed))
    return width


def _rows_of_other_width(body: bytes, delimiter: str, width: int) -> NDArray[np.int64]:
    """Positions of rows, blank ones apart, that do not have ``width`` cells; for text without quotes."""
    mark = delimiter.encode()[0]
    wrong = []
    first_row, start = 0, 0
    while start < len(body):
        end = body.rfind(b"\n", start, start + BLOCK) + 1
        if end <= start:
            end = body.find(b"\n", start) + 1 or len(body)
        block = np.frombuffer(body, dtype=np.uint8, count=end - start, offset=start)
        breaks = np.flatnonzero(block == 10)
        if breaks.size == 0 or breaks[-1] != block.size - 1:
            breaks = np.append(breaks, block.size)
        marks = np.searchsorted(np.flatnonzero(block == mark), breaks)
        length = np.diff(breaks, prepend=-1) - 1
        differs = (np.diff(marks, prepend=0) != width - 1) & (length > 0)
        wrong.append(np.flatnonzero(differs) + first_row)
        first_row += breaks.size
        start = end
    return np.concatenate(wrong) if wrong else np.empty(0, dtype=np.int64)


def _quoted_rows_of_other_width(body: bytes, delimiter: str, width: int) -> NDArray[np.int64]:
    """As :func:`_rows_of_other_width` for text with quotes; a line break inside quotes is refused too."""
    rows = csv.reader(io.StringIO(body.decode("utf-8")), delimiter=delimiter, skipinitialspace=True)
    wrong = [
        at for at, row in enumerate(rows) if row and (len(row) != width or any("\n" in cell for cell in row))
    ]
    return np.array(wrong, dtype=np.int64)


def _problem(code: str, source: str, found: str, allowed: str) -> Problem:
    return Problem(code=code, where=source, found=found, allowed=allowed)
