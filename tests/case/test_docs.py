"""What the documents say is what the program does."""

from __future__ import annotations

import ast
import re
import subprocess
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

from evenfire.case.load import load_case
from evenfire.case.page import case_file_page

ROOT = Path(__file__).parents[2]
DOCS = ROOT / "docs"
SEAMS = (
    "plant.py",
    "demand/series.py",
    "money/terms.py",
    "case/case.py",
)


def test_case_handbook_is_current():
    """docs/case-file.md is what the schema says today."""
    assert (DOCS / "case-file.md").read_text() == case_file_page(), (
        "run: python -m evenfire.case.page > docs/case-file.md"
    )


def test_case_handbook_is_written_by_the_command_it_names():
    """The command in the handbook's first lines prints the handbook."""
    ran = subprocess.run(
        [sys.executable, "-m", "evenfire.case.page"], capture_output=True, text=True, check=True, timeout=60
    )
    assert ran.stdout == case_file_page()


def test_shortest_case_of_the_handbook_can_be_read(write_example):
    """The example that a reader copies is a case."""
    case = load_case(write_example())
    assert case.plan.alternatives == ("as is", "storage", "free choice")


def codes_in_source() -> set[str]:
    """Every error and notice code that the program can show."""
    found: set[str] = set()
    for file in (ROOT / "src").rglob("*.py"):
        found |= set(re.findall(r'"([A-Z]\d{3})"', file.read_text()))
    return found


def test_every_code_has_its_section():
    """A user who looks a code up finds it, and no section describes a code that does not exist."""
    sections = re.findall(r"^## ([A-Z]\d{3})$", (DOCS / "errors.md").read_text(), flags=re.MULTILINE)
    assert len(sections) == len(set(sections))
    assert set(sections) == codes_in_source()


def test_every_section_says_something():
    """No code is left with a heading alone."""
    text = (DOCS / "errors.md").read_text()
    for section in re.split(r"^## ", text, flags=re.MULTILINE)[1:]:
        code, _, words = section.partition("\n")
        assert len(words.split()) >= 6, code


def numbers_of(file: Path) -> Iterator[str]:
    """Names of the numeric fields of the dataclasses in a file."""
    for node in ast.walk(ast.parse(file.read_text())):
        if isinstance(node, ast.ClassDef):
            for line in node.body:
                if isinstance(line, ast.AnnAssign) and re.search(
                    r"\bfloat\b|FloatArray", ast.unparse(line.annotation)
                ):
                    yield ast.unparse(line.target)


@pytest.mark.parametrize("seam", SEAMS)
def test_every_number_between_rooms_is_in_the_nomenclature(seam):
    """A numeric field of a seam ends in a unit of the nomenclature or is listed there by name."""
    tables = (DOCS / "nomenclature.md").read_text().split("\n## ")
    rows = {table.split("\n")[0]: re.findall(r"^\|(.+?)\|", table, flags=re.MULTILINE) for table in tables}
    suffixes = [word for row in rows["Units inside the program"] for word in re.findall(r"`(\w+)`", row)]
    names = {word for row in rows["Numbers without a unit"] for word in re.findall(r"`(\w+)`", row)}
    for name in numbers_of(ROOT / "src" / "evenfire" / seam):
        assert name in names or any(name.endswith(suffix) for suffix in suffixes), name


def test_case_dataclass_does_not_load_pydantic():
    """What other rooms import of the case room leaves pydantic unloaded."""
    code = "import sys, evenfire.case.case; sys.exit('pydantic' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", code], check=False, timeout=60).returncode == 0
