"""Writes an appraisal into its folder: whole or not at all, and over nothing that is not its own."""

from __future__ import annotations

import secrets
import shutil
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from evenfire.appraisal.results import Appraisal
from evenfire.errors import OutputError, Problem
from evenfire.report.document import document_text
from evenfire.report.page import report_page
from evenfire.report.tables import dispatch_table

DOCUMENT_FILE = "appraisal.json"
DISPATCH_FILE = "dispatch.csv"
PAGE_FILE = "report.html"
OUTPUT_FILES = (DOCUMENT_FILE, DISPATCH_FILE, PAGE_FILE)


def check_output_folder(folder: Path, replace: bool) -> None:
    """Refuse an output folder that could not be written at the end, before long work begins.

    Use it right after the command line is read. It leaves nothing behind.

    Parameters
    ----------
    folder
        Where the appraisal is to go.
    replace
        Whether an appraisal that is already there may be replaced.

    Raises
    ------
    OutputError
        O101 the folder exists and may not be replaced, O102 a file has its name, O103 it holds things
        that no appraisal wrote, O104 its parent does not exist, O105 the parent cannot be written.
    """
    target = folder.resolve()
    if target.is_dir():
        _check_replaceable(folder, target, replace)
    elif target.exists():
        raise _refusal("O102", folder, "is a file", "give the name of a folder")
    if not target.parent.is_dir():
        raise _refusal(
            "O104", folder, f"there is no folder {target.parent} to put it in", "create that folder first"
        )
    with _sibling(folder, target):
        pass


def write_appraisal(appraisal: Appraisal, folder: Path, replace: bool) -> None:
    """Write ``appraisal.json``, ``dispatch.csv`` and ``report.html`` into a folder.

    Everything is written into a hidden sibling first and renamed at the end, so that a failure or an
    interruption leaves either the old folder or the new one, never a half of either.

    Parameters
    ----------
    appraisal
        What to write.
    folder
        Where to; created, its parent must exist.
    replace
        Whether an appraisal that is already there may be replaced.

    Raises
    ------
    OutputError
        As for :func:`check_output_folder`.
    """
    check_output_folder(folder, replace)
    target = folder.resolve()
    texts = {
        DOCUMENT_FILE: document_text(appraisal),
        DISPATCH_FILE: dispatch_table(appraisal),
        PAGE_FILE: report_page(appraisal),
    }
    with _sibling(folder, target) as beside:
        new = beside / "new"
        new.mkdir()
        for name, text in texts.items():
            (new / name).write_bytes(text.encode("utf-8"))
        _put_in_place(new, target, beside / "old")


def _put_in_place(new: Path, target: Path, old: Path) -> None:
    """Rename `new` to `target`; what stood there moves to `old` and comes back on failure."""
    if target.exists():
        target.rename(old)
    try:
        new.rename(target)
    except BaseException:
        if old.exists():
            old.rename(target)
        raise


@contextmanager
def _sibling(folder: Path, target: Path) -> Iterator[Path]:
    """An empty hidden folder beside `target`, removed at the end with whatever it then holds."""
    beside = target.parent / f".evenfire-{secrets.token_hex(6)}"
    try:
        beside.mkdir()
        yield beside
    except OSError as error:
        raise _refusal(
            "O105",
            folder,
            f"cannot be written ({error.strerror or error})",
            "give a folder on a disk that is not full, where you may write",
        ) from error
    finally:
        shutil.rmtree(beside, ignore_errors=True)


def _check_replaceable(folder: Path, target: Path, replace: bool) -> None:
    if not replace:
        raise _refusal("O101", folder, "already exists", "give another folder, or --replace to replace it")
    foreign = sorted(entry.name for entry in target.iterdir() if entry.name not in OUTPUT_FILES)
    if foreign:
        shown = ", ".join(f"'{name}'" for name in foreign[:3]) + (" and more" if len(foreign) > 3 else "")
        raise _refusal(
            "O103",
            folder,
            f"holds {shown}, which no appraisal wrote",
            "move that out, or give another folder; only an appraisal is ever replaced",
        )


def _refusal(code: str, folder: Path, found: str, allowed: str) -> OutputError:
    return OutputError(Problem(code=code, where=f"output folder {folder}", found=found, allowed=allowed))
