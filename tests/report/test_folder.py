"""The output folder is written whole or not at all, and over nothing that is not an appraisal."""

from __future__ import annotations

import errno
import os
import subprocess
import sys
from pathlib import Path

import pytest

from evenfire.appraisal.results import Appraisal
from evenfire.errors import OutputError
from evenfire.report import folder as folder_room
from evenfire.report.folder import check_output_folder, write_appraisal

NAMES = ["appraisal.json", "dispatch.csv", "report.html", "set_points.csv"]


@pytest.fixture
def quick_page(monkeypatch: pytest.MonkeyPatch) -> None:
    """A page that takes no time, where the test is about files."""
    monkeypatch.setattr(folder_room, "report_page", lambda appraisal: "<p>new</p>")


@pytest.fixture
def old_folder(tmp_path: Path) -> Path:
    """A folder with an appraisal of an earlier run."""
    folder = tmp_path / "appraisal"
    folder.mkdir()
    for name in NAMES:
        (folder / name).write_text("old")
    return folder


def names(folder: Path) -> list[str]:
    return sorted(entry.name for entry in folder.iterdir())


@pytest.fixture(scope="module")
def written(appraisal: Appraisal, tmp_path_factory: pytest.TempPathFactory) -> Path:
    """A folder written in full, alone in its parent."""
    folder = tmp_path_factory.mktemp("written") / "appraisal"
    write_appraisal(appraisal, folder, replace=False)
    return folder


def test_folder_holds_its_files_and_nothing_else_remains(written: Path) -> None:
    """A written folder holds the document, the table and the page; nothing else is left beside it."""
    assert names(written) == NAMES
    assert names(written.parent) == ["appraisal"]


@pytest.mark.usefixtures("quick_page")
def test_existing_folder_is_refused_without_replace(appraisal: Appraisal, old_folder: Path) -> None:
    """An existing folder stays as it is unless replacing was asked for."""
    with pytest.raises(OutputError, match=r"already exists.*--replace.*O101"):
        write_appraisal(appraisal, old_folder, replace=False)
    assert (old_folder / "report.html").read_text() == "old"


@pytest.mark.usefixtures("quick_page")
def test_replace_replaces_the_whole_folder(appraisal: Appraisal, old_folder: Path) -> None:
    """With replace every file is new and nothing of the old folder remains."""
    write_appraisal(appraisal, old_folder, replace=True)
    assert (old_folder / "report.html").read_text() == "<p>new</p>"
    assert names(old_folder) == NAMES
    assert names(old_folder.parent) == ["appraisal"]


@pytest.mark.usefixtures("quick_page")
def test_replace_keeps_its_hands_off_other_peoples_files(appraisal: Appraisal, old_folder: Path) -> None:
    """A folder with a file that no appraisal wrote is refused even with replace."""
    (old_folder / "quotes.xlsx").write_text("precious")
    with pytest.raises(OutputError, match=r"holds 'quotes\.xlsx'.*O103"):
        write_appraisal(appraisal, old_folder, replace=True)
    assert (old_folder / "quotes.xlsx").read_text() == "precious"
    assert (old_folder / "report.html").read_text() == "old"


def test_file_of_that_name_is_refused(tmp_path: Path) -> None:
    """A file where the folder should go is refused with and without replace."""
    (tmp_path / "appraisal").write_text("a file")
    for replace in (False, True):
        with pytest.raises(OutputError, match=r"is a file.*O102"):
            check_output_folder(tmp_path / "appraisal", replace)


def test_missing_parent_is_refused(tmp_path: Path) -> None:
    """A parent folder that does not exist is named, not made."""
    with pytest.raises(OutputError, match=r"no folder .*nowhere.*O104"):
        check_output_folder(tmp_path / "nowhere" / "appraisal", replace=False)
    assert names(tmp_path) == []


def test_parent_that_cannot_be_written_is_refused_early(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """A parent in which nothing can be made is refused by the check before long work."""

    def refuse(self: Path, *_: object, **__: object) -> None:
        raise PermissionError(errno.EACCES, "Permission denied", str(self))

    monkeypatch.setattr(Path, "mkdir", refuse)
    with pytest.raises(OutputError, match=r"cannot be written \(Permission denied\).*O105"):
        check_output_folder(tmp_path / "appraisal", replace=False)


def test_check_leaves_nothing_behind(tmp_path: Path) -> None:
    """The early check makes no folder that stays."""
    check_output_folder(tmp_path / "appraisal", replace=False)
    assert names(tmp_path) == []


@pytest.mark.usefixtures("quick_page")
@pytest.mark.parametrize("failure", [OSError(errno.ENOSPC, "No space left on device"), KeyboardInterrupt()])
@pytest.mark.parametrize("replace", [False, True])
def test_failure_while_writing_leaves_the_old_state(
    appraisal: Appraisal,
    old_folder: Path,
    monkeypatch: pytest.MonkeyPatch,
    failure: BaseException,
    replace: bool,
) -> None:
    """A full disk or Ctrl-C at the last file leaves the old folder, or none, and no half of a new one."""
    target = old_folder if replace else old_folder.parent / "fresh"
    write_bytes = Path.write_bytes

    def fail_at_the_page(self: Path, data: bytes) -> int:
        if self.name == "report.html":
            write_bytes(self, data[:3])
            raise failure
        return write_bytes(self, data)

    monkeypatch.setattr(Path, "write_bytes", fail_at_the_page)
    with pytest.raises((OutputError, KeyboardInterrupt), match=r"No space left.*O105|^$"):
        write_appraisal(appraisal, target, replace)
    assert names(old_folder.parent) == ["appraisal"]
    assert [(old_folder / name).read_text() for name in NAMES] == ["old"] * len(NAMES)


@pytest.mark.usefixtures("quick_page")
@pytest.mark.parametrize("failure", [OSError(errno.EIO, "Input/output error"), KeyboardInterrupt()])
def test_failure_of_the_last_rename_brings_the_old_folder_back(
    appraisal: Appraisal, old_folder: Path, monkeypatch: pytest.MonkeyPatch, failure: BaseException
) -> None:
    """When the new folder cannot take its place, the old one returns to it."""
    rename = Path.rename

    def fail_for_the_new(self: Path, target: Path) -> Path:
        if self.name == "new":
            raise failure
        return rename(self, target)

    monkeypatch.setattr(Path, "rename", fail_for_the_new)
    with pytest.raises((OutputError, KeyboardInterrupt), match=r"Input/output error.*O105|^$"):
        write_appraisal(appraisal, old_folder, replace=True)
    assert names(old_folder.parent) == ["appraisal"]
    assert [(old_folder / name).read_text() for name in NAMES] == ["old"] * len(NAMES)


@pytest.mark.usefixtures("quick_page")
def test_defect_in_the_page_writes_nothing(
    appraisal: Appraisal, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """A failure while the texts are made leaves no folder at all."""

    def broken(_: Appraisal) -> str:
        raise ZeroDivisionError("broken page")

    monkeypatch.setattr(folder_room, "report_page", broken)
    with pytest.raises(ZeroDivisionError, match="broken page"):
        write_appraisal(appraisal, tmp_path / "appraisal", replace=False)
    assert names(tmp_path) == []


def test_same_appraisal_gives_the_same_bytes_in_another_process(written: Path, tmp_path: Path) -> None:
    """Two processes with different hash seeds write identical files."""
    program = (
        "import sys; from pathlib import Path; from evenfire.report.folder import write_appraisal; "
        "from tests.report.made_appraisal import made_appraisal; "
        "write_appraisal(made_appraisal(), Path(sys.argv[1]), replace=False)"
    )
    root = Path(__file__).parents[2]
    environment = os.environ | {
        "PYTHONHASHSEED": "4321",
        "PYTHONPATH": os.pathsep.join((str(root), str(root / "src"))),
    }
    subprocess.run(
        [sys.executable, "-c", program, str(tmp_path / "there")], check=True, env=environment, cwd=root
    )
    for name in NAMES:
        assert (written / name).read_bytes() == (tmp_path / "there" / name).read_bytes()
