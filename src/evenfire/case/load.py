"""Reads a case from its file into SI, refusing what cannot be meant."""

from __future__ import annotations

import hashlib
import re
import tomllib
from collections.abc import Mapping
from pathlib import Path
from typing import Any

from evenfire.case.case import Case
from evenfire.case.change import changed_case
from evenfire.case.checks import draft_problems
from evenfire.case.convert import case_in_si
from evenfire.case.draft import Draft, case_draft
from evenfire.case.schema import CaseFile
from evenfire.errors import CaseError, Problem

CASE_FILE = "case.toml"
LARGEST_CASE_BYTES = 5_000_000


def load_case(path: str | Path, changes: Mapping[str, float] | None = None) -> Case:
    """Case read from its folder or file, checked as a whole and converted to SI.

    Use it at the start of every run. A record is not read here, only found and hashed.

    Parameters
    ----------
    path : str or Path
        A folder with ``case.toml``, or the file itself.
    changes : Mapping[str, float], optional
        Numeric inputs to replace before the case is checked, by path and in the unit of the key:
        ``{"fuel.price_per_mwh": 60.0}``; see :func:`evenfire.case.change.changed_case`.

    Returns
    -------
    Case
        Everything in SI. What the case did not state and was assumed is in its notices.

    Raises
    ------
    CaseError
        Every problem of the file at once: C101 no such file, C102 not TOML, C103 unknown key, C104 missing
        key, C105 to C109 a value of the wrong kind, range, choice or form, C110 to C135 values that
        contradict each other, C123 a path that does not exist, C130 no record file; and R-codes where
        [record] or [schedule] contradicts itself.

    Examples
    --------
    >>> load_case("no/such")
    Traceback (most recent call last):
        ...
    evenfire.errors.CaseError: no/such: no such file or folder; give a case folder or its case.toml [C101]
    """
    file = _case_file(Path(path))
    content = _content(file)
    raw = _table(content, file)
    name = str(file)
    if changes:
        raw = changed_case(raw, changes, name)
    draft, problems = case_draft(raw, name)
    problems += draft_problems(draft)
    record_file, record_problems = _record_file(draft, file)
    problems += record_problems
    if problems:
        raise CaseError(*problems)
    return case_in_si(
        CaseFile.model_validate(raw),
        file,
        record_file,
        (_hash(file, content), *(() if record_file is None else (_hash(record_file),))),
    )


def _case_file(path: Path) -> Path:
    if path.is_dir():
        path = path / CASE_FILE
    if not path.is_file():
        raise CaseError(
            Problem(
                code="C101",
                where=str(path),
                found="no such file or folder",
                allowed=f"give a case folder or its {CASE_FILE}",
            )
        )
    return path


def _content(file: Path) -> bytes:
    try:
        size = file.stat().st_size
        content = file.read_bytes() if size <= LARGEST_CASE_BYTES else b""
    except OSError as error:
        raise CaseError(
            Problem(
                code="C101",
                where=str(file),
                found=f"cannot be read ({error.strerror})",
                allowed="give a file that may be read",
            )
        ) from error
    if size > LARGEST_CASE_BYTES:
        raise CaseError(
            Problem(
                code="C102",
                where=str(file),
                found=f"found {size / 1e6:.0f} MB",
                allowed="a case file is a few kB of TOML; the record belongs in its own file",
            )
        )
    return content


def _table(content: bytes, file: Path) -> dict[str, Any]:
    try:
        return tomllib.loads(content.decode("utf-8-sig"))
    except UnicodeDecodeError as error:
        line = content[: error.start].count(b"\n") + 1
        raise CaseError(
            Problem(
                code="C102",
                where=f"{file}: line {line}",
                found="a byte that is not UTF-8",
                allowed="save the file as UTF-8 text",
            )
        ) from error
    except tomllib.TOMLDecodeError as error:
        place = re.search(r"\s*\(at (?:line (\d+), column (\d+)|end of document)\)$", str(error))
        where, words = str(file), str(error)
        if place is not None:
            words = words[: place.start()]
            where += f": line {place[1]}, column {place[2]}" if place[1] else ": end of file"
        raise CaseError(
            Problem(
                code="C102", where=where, found=f"not TOML: {words}", allowed="mend the line; see toml.io"
            )
        ) from error


def _record_file(draft: Draft, file: Path) -> tuple[Path | None, list[Problem]]:
    if draft.record is None:
        return None, []
    record_file = file.parent / draft.record.file
    if record_file.is_file():
        return record_file, []
    return record_file, [
        Problem(
            code="C130",
            where=f"{draft.file}: record.file",
            found=f"found '{draft.record.file}', but there is no file {record_file}",
            allowed="name a file beside the case",
        )
    ]


def _hash(file: Path, content: bytes | None = None) -> tuple[str, str]:
    return file.name, hashlib.sha256(file.read_bytes() if content is None else content).hexdigest()
