"""The command line in-process: what it writes, what it refuses, and its exit status."""

from __future__ import annotations

import json
import sys
from pathlib import Path

import pytest

from evenfire.cli.main import main
from tests.small_case import write_small_case


def _run(monkeypatch: pytest.MonkeyPatch, *arguments: str) -> int:
    monkeypatch.setattr(sys, "argv", ["evenfire", *arguments])
    with pytest.raises(SystemExit) as stopped:
        main()
    return int(stopped.value.code or 0)


def test_appraise_writes_the_folder(
    small_case_folder: Path,
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> None:
    """A case becomes a folder of report, JSON and dispatch; the table and the verdict are printed."""
    out = tmp_path / "out"
    status = _run(monkeypatch, "appraise", str(small_case_folder), "--out", str(out))
    printed = capsys.readouterr().out
    document = json.loads((out / "appraisal.json").read_text())

    assert status == 0
    assert {path.name for path in out.iterdir()} >= {"appraisal.json", "dispatch.csv", "report.html"}
    assert [entry["name"] for entry in document["alternatives"]] == [
        "as is",
        "bigger boiler",
        "further boiler",
        "storage",
        "free choice",
    ]
    assert document["verdict"] in printed.replace("\n", " ") or document["verdict"].split(".")[0] in printed
    for entry in document["alternatives"]:
        assert entry["bound"] <= entry["planned"]["net_present_cost"] * (1 + 1e-9)
        assert entry["replay"]["mass_closure_relative"] < 1e-9
        assert sum(line["present_cost"] for line in entry["cost_lines"]) == pytest.approx(
            entry["net_present_cost"], rel=1e-9
        )
        assert 0 <= entry["gap"] <= 0.0101


def test_an_existing_folder_is_kept(
    small_case_folder: Path,
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> None:
    """Without ``--replace`` an existing output folder is refused before any work and left as it was."""
    (tmp_path / "kept.txt").write_text("mine")
    status = _run(monkeypatch, "appraise", str(small_case_folder), "--out", str(tmp_path))

    assert status == 2
    assert "--replace" in capsys.readouterr().err
    assert [path.name for path in tmp_path.iterdir()] == ["kept.txt"]


@pytest.mark.parametrize(
    ("old", "new", "said"),
    [
        ('flow_column = "steam_kg_h"', 'flow_column = "steam"', "steam_kg_h"),
        ("discharged_pressures_bar_g = [3.6, 4.5]", "discharged_pressures_bar_g = [9.0]", "discharged"),
        ("charged_pressures_bar_g = [8.5]", "charged_pressures_bar_g = [14.0]", "design_pressure"),
        ("price_per_mwh = 45.0", "price_per_mwh = -45.0", "price_per_mwh"),
        ("price_per_mwh = 45.0", "price_per_mhw = 45.0", "price_per_mwh"),
        ("discount_rate_percent = 8.0", "discount_rate_percent = -100.0", "discount_rate_percent"),
        ("horizon_years = 15", "horizon_years = 0", "horizon_years"),
        ('file = "steam.csv"', 'file = "gone.csv"', "gone.csv"),
        ('reference = "as is"', 'reference = "as it was"', "as it was"),
    ],
)
def test_bad_input_is_refused_with_a_word(
    old: str,
    new: str,
    said: str,
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> None:
    """Wrong cases end with exit status 2, a line that names the place, and no output folder."""
    folder = write_small_case(tmp_path / "case", days=14)
    text = (folder / "case.toml").read_text()
    assert old in text
    (folder / "case.toml").write_text(text.replace(old, new))
    status = _run(monkeypatch, "appraise", str(folder), "--out", str(tmp_path / "out"))
    error = capsys.readouterr().err

    assert status == 2
    assert said in error
    assert "Traceback" not in error
    assert not (tmp_path / "out").exists()


@pytest.mark.parametrize(
    ("damage", "said"),
    [
        (lambda lines: [*lines[:5], lines[6], lines[5], *lines[7:]], "backwards"),
        (lambda lines: [*lines[:5], lines[4], *lines[5:]], "twice"),
        (lambda lines: [lines[0], lines[1].split(",")[0] + ",-5", *lines[2:]], "negative"),
        (lambda lines: lines[:2], "one day"),
        (lambda lines: [*lines[:9], *lines[12:]], "gap"),
    ],
)
def test_bad_records_are_refused_with_a_word(
    damage: object,
    said: str,
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> None:
    """Unsorted, repeated, negative, short and gappy records name the rows and end with status 2."""
    folder = write_small_case(tmp_path / "case")
    lines = (folder / "steam.csv").read_text().splitlines()
    assert callable(damage)
    (folder / "steam.csv").write_text("\n".join(damage(lines)) + "\n")
    status = _run(monkeypatch, "appraise", str(folder), "--out", str(tmp_path / "out"))
    error = capsys.readouterr().err

    assert status == 2
    assert "steam.csv" in error
    assert said in error
    assert not (tmp_path / "out").exists()


def test_no_feasible_plant_is_said(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """Where the reference itself cannot meet the peaks, one line says what to change; nothing is written."""
    folder = write_small_case(tmp_path / "case")
    text = (folder / "case.toml").read_text()
    text = text.replace('reference = "as is"', 'reference = "storage"')
    text = text.replace(
        '["as is", "bigger boiler", "further boiler", "storage", "free choice"]', '["storage"]'
    )
    text = text.replace("largest_volume_m3 = 60.0", "largest_volume_m3 = 5.5")
    (folder / "case.toml").write_text(text)
    status = _run(monkeypatch, "appraise", str(folder), "--out", str(tmp_path / "out"))

    assert status == 2
    assert "storage" in capsys.readouterr().err
    assert not (tmp_path / "out").exists()


def test_schema_is_json_schema(monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]) -> None:
    """``evenfire schema`` prints a JSON Schema an editor can use."""
    assert _run(monkeypatch, "schema") == 0
    schema = json.loads(capsys.readouterr().out)
    assert schema["type"] == "object"
    assert "existing_boiler" in schema["properties"]


def test_help_names_every_command_with_an_example(
    monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """The help of each command ends with an example that can be typed."""
    from evenfire.cli.main import app

    names = [
        command.name or command.callback.__name__ for command in app.registered_commands if command.callback
    ]
    for name in names:
        assert _run(monkeypatch, name, "--help") == 0
        assert f"Example: evenfire {name}" in capsys.readouterr().out.replace("\n", " ")
