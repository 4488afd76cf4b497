"""A case so small that one point of a sweep is planned in a fraction of a second."""

from __future__ import annotations

from pathlib import Path

from tests.small_case import write_small_case

_ALL = 'alternatives = ["as is", "bigger boiler", "further boiler", "storage", "free choice"]'


def write_tiny_case(folder: Path, *alternatives: str) -> Path:
    """One day in steps of an hour; "as is" alone unless other alternatives are named."""
    write_small_case(folder, days=1)
    file = folder / "case.toml"
    names = ", ".join(f'"{name}"' for name in alternatives or ("as is",))
    text = file.read_text()
    assert _ALL in text
    text = text.replace(_ALL, f"alternatives = [{names}]").replace("step_minutes = 15", "step_minutes = 60")
    file.write_text(text)
    return folder
