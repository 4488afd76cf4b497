"""Results of a long run kept on disk as they come, so that an interrupted run goes on where it stopped."""

from __future__ import annotations

import hashlib
import json
import os
import shutil
from pathlib import Path
from typing import Any

from evenfire.errors import OutputError, Problem

JOURNAL_FILE = "done.jsonl"
PLANS_FOLDER = "plans"


class Journal:
    """A folder beside the output that holds what is done of a run; construct, then ``put`` and ``get``.

    Parameters
    ----------
    folder : Path
        Made if it does not exist. What another run (other inputs, other request) left in it is removed.
    fingerprint : str
        Whatever decides on the results of the run.

    Notes
    -----
    One line of JSON per result, written and flushed whole; a line cut by a crash is dropped when read, so
    that result alone is computed again.
    """

    def __init__(self, folder: Path, fingerprint: str) -> None:
        self._folder = folder
        self._file = folder / JOURNAL_FILE
        self._done: dict[str, Any] = {}
        head = {"run": hashlib.sha256(fingerprint.encode()).hexdigest()}
        try:
            lines = self._lines()
            if not lines or lines[0] != head:
                shutil.rmtree(folder, ignore_errors=True)
                folder.mkdir(parents=True, exist_ok=True)
                lines = [head]
            self._done = {entry["key"]: entry["result"] for entry in lines[1:]}
            whole = "".join(json.dumps(entry) + "\n" for entry in lines)
            self._file.write_text(whole, encoding="utf-8")
        except OSError as error:
            raise OutputError(
                Problem(
                    code="O105",
                    where=f"folder {folder} of results so far",
                    found=f"cannot be written ({error.strerror or error})",
                    allowed="give an output folder on a disk that is not full, where you may write",
                )
            ) from error

    def __contains__(self, key: str) -> bool:
        return key in self._done

    def get(self, key: str) -> Any:
        """The result kept under a key."""
        return self._done[key]

    def put(self, key: str, result: Any) -> None:
        """Keep a result; it is on disk when this returns."""
        line = json.dumps({"key": key, "result": result}) + "\n"
        with self._file.open("a", encoding="utf-8") as stream:
            stream.write(line)
            stream.flush()
            os.fsync(stream.fileno())
        self._done[key] = json.loads(line)["result"]

    def remove(self) -> None:
        """Forget everything: the run's results are in their output folder."""
        shutil.rmtree(self._folder, ignore_errors=True)

    def _lines(self) -> list[Any]:
        if not self._file.is_file():
            return []
        found = []
        for line in self._file.read_text(encoding="utf-8", errors="replace").splitlines():
            try:
                found.append(json.loads(line))
            except json.JSONDecodeError:
                break
        return found
