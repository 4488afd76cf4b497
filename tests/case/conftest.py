"""Cases written to a temporary folder."""

from __future__ import annotations

from collections.abc import Callable
from pathlib import Path

import pytest

from evenfire.case.load import load_case
from evenfire.case.page import EXAMPLE
from evenfire.errors import CaseError

CASES = Path(__file__).parents[2] / "cases"

CaseWriter = Callable[..., Path]


@pytest.fixture
def write_case(tmp_path: Path) -> CaseWriter:
    """Writes the cannery's case, or another text, with replacements, beside a two-row record."""

    def write(*replacements: tuple[str, str], text: str | None = None, record: str = "steam.csv.gz") -> Path:
        content = (CASES / "cannery" / "case.toml").read_text() if text is None else text
        for old, new in replacements:
            assert old in content, old
            content = content.replace(old, new)
        (tmp_path / "case.toml").write_text(content)
        (tmp_path / record).write_text("time,steam_kg_h\n2026-02-02T00:00,380\n2026-02-02T00:01,380\n")
        return tmp_path

    return write


@pytest.fixture
def write_example(write_case: CaseWriter) -> CaseWriter:
    """Writes the shortest case of the handbook with replacements."""

    def write(*replacements: tuple[str, str]) -> Path:
        return write_case(*replacements, text=EXAMPLE, record="steam.csv")

    return write


@pytest.fixture
def problems_of() -> Callable[..., tuple[str, ...]]:
    """What is wrong with a case, one line per problem, the folder left out."""

    def problems(folder: Path, changes: dict[str, float] | None = None) -> tuple[str, ...]:
        with pytest.raises(CaseError) as caught:
            load_case(folder, changes)
        return tuple(str(problem).replace(f"{folder}/", "") for problem in caught.value.problems)

    return problems
