"""Writes results into their folder: whole or not at all, and over nothing that is not their own."""

from __future__ import annotations

import secrets
import shutil
from collections.abc import Iterator
from contextlib import contextmanager
from pathlib import Path

from evenfire.appraisal.plant_sheet import PlantSheet
from evenfire.appraisal.record_study import RecordStudy
from evenfire.appraisal.results import Appraisal
from evenfire.errors import OutputError, Problem
from evenfire.report.document import document_text
from evenfire.report.page import report_page
from evenfire.report.page_plant import plant_page
from evenfire.report.page_record import record_page
from evenfire.report.page_risk import risk_page
from evenfire.report.page_sweep import sweep_page
from evenfire.report.record_document import record_document_text
from evenfire.report.replay_document import replay_document_text, set_point_table, trace_table
from evenfire.report.risk_document import risk_document_text, risk_table
from evenfire.report.sweep_document import sweep_document_text, sweep_table
from evenfire.report.tables import dispatch_table
from evenfire.sweep.results import SweepResult
from evenfire.sweep.risk_results import RiskResult

DOCUMENT_FILE = "appraisal.json"
DISPATCH_FILE = "dispatch.csv"
PAGE_FILE = "report.html"
SET_POINTS_FILE = "set_points.csv"
OUTPUT_FILES = (DOCUMENT_FILE, DISPATCH_FILE, SET_POINTS_FILE, PAGE_FILE)
RECORD_DOCUMENT_FILE = "record.json"
RECORD_PAGE_FILE = "record.html"
RECORD_FILES = (RECORD_DOCUMENT_FILE, RECORD_PAGE_FILE)
PLANT_PAGE_FILE = "plant.html"
PLANT_FILES = (PLANT_PAGE_FILE,)


REPLAY_DOCUMENT_FILE = "replay.json"
TRACE_FILE = "trace.csv"
REPLAY_FILES = (REPLAY_DOCUMENT_FILE, SET_POINTS_FILE, TRACE_FILE)
SWEEP_DOCUMENT_FILE = "sweep.json"
SWEEP_TABLE_FILE = "sweep.csv"
SWEEP_PAGE_FILE = "sweep.html"
SWEEP_FILES = (SWEEP_DOCUMENT_FILE, SWEEP_TABLE_FILE, SWEEP_PAGE_FILE)
RISK_DOCUMENT_FILE = "risk.json"
RISK_TABLE_FILE = "risk.csv"
RISK_PAGE_FILE = "risk.html"
RISK_FILES = (RISK_DOCUMENT_FILE, RISK_TABLE_FILE, RISK_PAGE_FILE)


def check_output_folder(folder: Path, replace: bool, own: tuple[str, ...] = OUTPUT_FILES) -> None:
    """Refuse an output folder that could not be written at the end, before long work begins.

    Use it right after the command line is read. It leaves nothing behind.

    Parameters
    ----------
    folder
        Where the results are to go.
    replace
        Whether results that are already there may be replaced.
    own
        Names of the files that may be replaced: those that the same command writes.

    Raises
    ------
    OutputError
        O101 the folder exists and may not be replaced, O102 a file has its name, O103 it holds things
        that the command does not write, O104 its parent does not exist, O105 the parent cannot be written.
    """
    target = folder.resolve()
    if target.is_dir():
        _check_replaceable(folder, target, replace, own)
    elif target.exists():
        raise _refusal("O102", folder, "is a file", "give the name of a folder")
    if not target.parent.is_dir():
        raise _refusal(
            "O104", folder, f"there is no folder {target.parent} to put it in", "create that folder first"
        )
    with _sibling(folder, target):
        pass


def write_appraisal(appraisal: Appraisal, folder: Path, replace: bool) -> None:
    """Write ``appraisal.json``, ``dispatch.csv``, ``set_points.csv`` and ``report.html`` into a folder.

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
    texts = {
        DOCUMENT_FILE: document_text(appraisal),
        DISPATCH_FILE: dispatch_table(appraisal),
        SET_POINTS_FILE: set_point_table(appraisal),
        PAGE_FILE: report_page(appraisal),
    }
    _write_texts(texts, folder, replace)


def write_replay(appraisal: Appraisal, folder: Path, replace: bool) -> None:
    """Write ``replay.json``, ``set_points.csv`` and ``trace.csv`` into a folder, as for an appraisal.

    Parameters
    ----------
    appraisal
        Whose replays to write.
    folder
        Where to; created, its parent must exist.
    replace
        Whether a replay's results that are already there may be replaced.

    Raises
    ------
    OutputError
        As for :func:`check_output_folder`.
    """
    texts = {
        REPLAY_DOCUMENT_FILE: replay_document_text(appraisal),
        SET_POINTS_FILE: set_point_table(appraisal),
        TRACE_FILE: trace_table(appraisal),
    }
    _write_texts(texts, folder, replace)


def write_record(
    study: RecordStudy, inputs: tuple[tuple[str, str], ...], folder: Path, replace: bool
) -> None:
    """Write ``record.json`` and ``record.html`` into a folder, by the same rules as an appraisal.

    Parameters
    ----------
    study
        What to write.
    inputs
        Name and SHA-256 of every input file.
    folder
        Where to; created, its parent must exist.
    replace
        Whether a record's results that are already there may be replaced.

    Raises
    ------
    OutputError
        As for :func:`check_output_folder`.
    """
    texts = {
        RECORD_DOCUMENT_FILE: record_document_text(study, inputs),
        RECORD_PAGE_FILE: record_page(study, inputs),
    }
    _write_texts(texts, folder, replace)


def write_plant(sheet: PlantSheet, folder: Path, replace: bool) -> None:
    """Write ``plant.html`` into a folder, by the same rules as an appraisal.

    Parameters
    ----------
    sheet
        What to write.
    folder
        Where to; created, its parent must exist.
    replace
        Whether a plant's page that is already there may be replaced.

    Raises
    ------
    OutputError
        As for :func:`check_output_folder`.
    """
    _write_texts({PLANT_PAGE_FILE: plant_page(sheet)}, folder, replace)


def write_sweep(result: SweepResult, folder: Path, replace: bool) -> None:
    """Write ``sweep.json``, ``sweep.csv`` and ``sweep.html`` into a folder, by the rules of an appraisal.

    Parameters
    ----------
    result
        What to write.
    folder
        Where to; created, its parent must exist.
    replace
        Whether a sweep's results that are already there may be replaced.

    Raises
    ------
    OutputError
        As for :func:`check_output_folder`.
    """
    texts = {
        SWEEP_DOCUMENT_FILE: sweep_document_text(result),
        SWEEP_TABLE_FILE: sweep_table(result),
        SWEEP_PAGE_FILE: sweep_page(result),
    }
    _write_texts(texts, folder, replace)


def write_risk(result: RiskResult, folder: Path, replace: bool) -> None:
    """Write ``risk.json``, ``risk.csv`` and ``risk.html`` into a folder, by the rules of an appraisal.

    Parameters
    ----------
    result
        What to write.
    folder
        Where to; created, its parent must exist.
    replace
        Whether scenarios that are already there may be replaced.

    Raises
    ------
    OutputError
        As for :func:`check_output_folder`.
    """
    texts = {
        RISK_DOCUMENT_FILE: risk_document_text(result),
        RISK_TABLE_FILE: risk_table(result),
        RISK_PAGE_FILE: risk_page(result),
    }
    _write_texts(texts, folder, replace)


def _write_texts(texts: dict[str, str], folder: Path, replace: bool) -> None:
    check_output_folder(folder, replace, tuple(texts))
    target = folder.resolve()
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


def _check_replaceable(folder: Path, target: Path, replace: bool, own: tuple[str, ...]) -> None:
    if not replace:
        raise _refusal("O101", folder, "already exists", "give another folder, or --replace to replace it")
    foreign = sorted(entry.name for entry in target.iterdir() if entry.name not in own)
    if foreign:
        shown = ", ".join(f"'{name}'" for name in foreign[:3]) + (" and more" if len(foreign) > 3 else "")
        raise _refusal(
            "O103",
            folder,
            f"holds {shown}, which this command did not write",
            "move that out, or give another folder; only its own results are ever replaced",
        )


def _refusal(code: str, folder: Path, found: str, allowed: str) -> OutputError:
    return OutputError(Problem(code=code, where=f"output folder {folder}", found=found, allowed=allowed))
