"""Lint, format, types and the order of the rooms, in the same run as every other test."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]


def _run(*command: str) -> None:
    done = subprocess.run(command, cwd=ROOT, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout + done.stderr


def test_lint() -> None:
    """Ruff finds nothing."""
    _run(sys.executable, "-m", "ruff", "check", "src", "tests", "cases")


def test_format() -> None:
    """Every file is formatted."""
    _run(sys.executable, "-m", "ruff", "format", "--check", "src", "tests", "cases")


def test_types() -> None:
    """The package passes mypy in strict mode."""
    _run(sys.executable, "-m", "mypy")


def test_rooms_import_downward_only() -> None:
    """The layers of DEVELOPERS.md hold."""
    _run(str(Path(sys.executable).parent / "lint-imports"))


@pytest.mark.parametrize(
    ("library", "rooms"),
    [
        ("CoolProp", {"water.py"}),
        ("pyomo", {"plan"}),
        ("highspy", {"plan"}),
        ("pydantic", {"case"}),
        ("matplotlib", {"report"}),
        ("jinja2", {"report"}),
    ],
)
def test_library_has_one_home(library: str, rooms: set[str]) -> None:
    """Each library with a home of its own is imported nowhere else."""
    package = ROOT / "src" / "evenfire"
    users = {
        path.relative_to(package).parts[0]
        for path in package.rglob("*.py")
        for line in path.read_text().splitlines()
        if line.strip().startswith((f"import {library}", f"from {library}"))
    }

    assert users <= rooms


def test_top_level_holds_only_what_was_agreed() -> None:
    """Nothing is committed beside the agreed files and folders."""
    listed = subprocess.run(
        ["git", "ls-files"], cwd=ROOT, capture_output=True, text=True, check=True
    ).stdout.splitlines()
    top = {line.split("/")[0] for line in listed if not line.startswith(".")}

    assert top <= {"README.md", "DEVELOPERS.md", "pyproject.toml", "src", "tests", "cases", "docs"}


def test_help_loads_no_heavy_library() -> None:
    """``import evenfire`` and the help load none of the libraries that take long to import."""
    code = (
        "import sys, evenfire, evenfire.cli.main; "
        "heavy = {'pandas', 'pyomo', 'highspy', 'CoolProp', 'matplotlib', 'numba', 'pydantic', 'scipy'}; "
        "print(sorted(heavy & set(sys.modules)))"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)

    assert done.stdout.strip() == "[]"
