"""``evenfire replay``: what each recommended plant does when it is run."""

from __future__ import annotations

from pathlib import Path

from rich.console import Console

from evenfire.case.load import load_case
from evenfire.cli.appraise import appraised, print_appraisal, status_of
from evenfire.errors import ExitStatus
from evenfire.report.folder import REPLAY_FILES, check_output_folder, write_replay


def run(case_path: Path, out: Path | None, *, replace: bool, quiet: bool) -> ExitStatus:
    """Plan with what earlier runs have, replay every alternative, and write the folder."""
    console = Console(quiet=quiet, highlight=False)
    case = load_case(case_path)
    folder = out if out is not None else case.folder / "replay"
    check_output_folder(folder, replace, REPLAY_FILES)
    result = appraised(console, case, fresh=False, whole_record=False)
    write_replay(result, folder, replace)
    print_appraisal(console, result)
    console.print(f"Written: {folder / 'replay.json'}", soft_wrap=True)
    return status_of(result)
