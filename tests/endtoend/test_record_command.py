"""``evenfire record``: a case or a bare data file becomes record.json and a page, or a clear refusal."""

from __future__ import annotations

import csv
import gzip
import itertools
import json
import re
import sys
from pathlib import Path
from typing import Any

import pytest

from evenfire.cli.main import main
from tests.report.page_reader import read_page

CANNERY = Path(__file__).parents[2] / "cases" / "cannery"
COLUMNS = ("--time-column", "time", "--flow-column", "steam_kg_h", "--unit", "kg/h")


def _run(monkeypatch: pytest.MonkeyPatch, *arguments: str) -> int:
    monkeypatch.setattr(sys, "argv", ["evenfire", "record", *arguments])
    with pytest.raises(SystemExit) as stopped:
        main()
    return int(stopped.value.code or 0)


def _document(folder: Path) -> dict[str, Any]:
    content: dict[str, Any] = json.loads((folder / "record.json").read_text())
    return content


@pytest.fixture(scope="module")
def flow_kg_h() -> list[float]:
    """The cannery's flow, read with nothing but the standard library."""
    with gzip.open(CANNERY / "steam.csv.gz", "rt") as lines:
        return [float(row["steam_kg_h"]) for row in csv.DictReader(lines)]


@pytest.fixture(scope="module")
def cannery(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The folder written for the cannery's case."""
    out = tmp_path_factory.mktemp("record") / "out"
    with pytest.MonkeyPatch.context() as monkeypatch:
        assert _run(monkeypatch, str(CANNERY), "--out", str(out), "--quiet") == 0
    return out


def test_the_figures_are_those_of_the_file(cannery: Path, flow_kg_h: list[float]) -> None:
    """Steam, mean, peak and step of the document are what the file's rows add up to."""
    found = _document(cannery)

    assert found["step_s"] == 60.0
    assert found["steam_t"] == pytest.approx(sum(flow_kg_h) / 60.0 / 1000.0, rel=1e-9)
    assert found["mean_kg_h"] == pytest.approx(sum(flow_kg_h) / len(flow_kg_h), rel=1e-9)
    assert found["peak_kg_h"] == pytest.approx(max(flow_kg_h), rel=1e-9)
    assert found["coverage_percent"] == 100.0
    assert found["problems"] == []


def test_storage_need_is_the_largest_draw_of_a_plain_pass(cannery: Path, flow_kg_h: list[float]) -> None:
    """Between and at its breakpoints the curve is what a level recursion over every row finds."""
    curve = _document(cannery)["storage_need"]
    capacities = [point["capacity_kg_h"] for point in curve]
    assert capacities == sorted(capacities)
    asked = [capacities[3], 7500.0, (capacities[-3] + capacities[-2]) / 2.0, capacities[-1]]
    for capacity in asked:
        level = highest = 0.0
        for flow in flow_kg_h:
            level = max(0.0, level + (flow - capacity) / 60.0)
            highest = max(highest, level)
        low, high = next(
            (a, b)
            for a, b in itertools.pairwise(curve)
            if a["capacity_kg_h"] <= capacity <= b["capacity_kg_h"]
        )
        share = (capacity - low["capacity_kg_h"]) / (high["capacity_kg_h"] - low["capacity_kg_h"])
        read_off = low["storage_kg"] + share * (high["storage_kg"] - low["storage_kg"])
        assert read_off == pytest.approx(highest, rel=1e-8, abs=1e-4)


def test_peaks_are_every_stretch_above_the_boilers(cannery: Path, flow_kg_h: list[float]) -> None:
    """As many peaks as there are runs above 7.5 t/h, the first with the most steam above it."""
    found = _document(cannery)
    runs = [list(run) for above, run in itertools.groupby(flow_kg_h, lambda x: x > 7500.0) if above]
    steam = sorted((sum(run) / 60.0 - 7500.0 * len(run) / 60.0 for run in runs), reverse=True)

    assert found["peaks_above_kg_h"] == pytest.approx(7500.0, rel=1e-12)
    assert found["peaks_count"] == len(runs)
    assert [peak["steam_above_kg"] for peak in found["peaks"][:20]] == pytest.approx(steam[:20], rel=1e-8)


def test_typical_days_have_weights_and_errors(cannery: Path) -> None:
    """The weights make a year, and the stated energy error follows from the days' own means."""
    found = _document(cannery)
    days = found["typical_days"]["days"]
    mean = sum(day["days_per_year"] * day["mean_kg_h"] for day in days) / 365.0

    assert sum(day["days_per_year"] for day in days) == pytest.approx(365.0, rel=1e-9)
    assert found["typical_days"]["errors"]["energy_percent"] == pytest.approx(
        100.0 * (mean / found["mean_kg_h"] - 1.0), abs=1e-8
    )


def test_the_page_is_self_contained_and_shows_every_figure(cannery: Path) -> None:
    """Record, duration curve, peaks, week, ramps and storage need as inline SVG; nothing is loaded."""
    text = (cannery / "record.html").read_text()
    page = read_page(text)
    ids = [attributes["id"] for _, attributes in page.elements if "id" in attributes]

    assert page.unbalanced == []
    assert page.count("svg") == 6
    assert len(ids) == len(set(ids))
    assert {"script", "link", "img", "image", "iframe"} & {tag for tag, _ in page.elements} == set()
    assert re.findall(r"https?://[^\s\"<]+", text.replace("http://www.w3.org/2000/svg", "")) == []
    assert "Pressurised steam and hot water kill" in page.text
    assert re.search(r"\bdesign", page.text, re.IGNORECASE) is None


def test_the_same_record_gives_the_same_bytes(
    cannery: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Nothing in either file depends on when or where it was written."""
    again = tmp_path / "again"
    assert _run(monkeypatch, str(CANNERY / "case.toml"), "--out", str(again)) == 0
    for name in ("record.json", "record.html"):
        assert (again / name).read_bytes() == (cannery / name).read_bytes()


def test_a_bare_file_says_the_same_as_its_case(
    cannery: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """With columns, unit and boiler capacity on the command line the file alone gives the same figures."""
    out = tmp_path / "out"
    file = str(CANNERY / "steam.csv.gz")
    assert _run(monkeypatch, file, *COLUMNS, "--boilers-kg-h", "7500", "--out", str(out)) == 0
    bare, case = _document(out), _document(cannery)
    for key in ("steam_t", "peak_kg_h", "problems", "storage_need", "peaks_count", "ramps"):
        assert bare[key] == case[key], key
    assert bare["typical_days"]["errors"]["cost_percent"] is None
    assert abs(case["typical_days"]["errors"]["cost_percent"]) <= 0.5


def test_what_a_bare_file_lacks_is_asked_for_with_its_header(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """Every missing option is named at once, beside the columns that the file has."""
    assert (
        _run(monkeypatch, str(CANNERY / "steam.csv.gz"), "--unit", "kg/h", "--out", str(tmp_path / "x")) == 2
    )
    said = capsys.readouterr().err
    for words in ("--time-column", "--flow-column", "steam_kg_h", "R132"):
        assert words in said
    assert "--unit would" not in said
    assert not (tmp_path / "x").exists()


def test_options_of_a_file_are_refused_with_a_case(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """A case says how its file is read; an option that would contradict it is not ignored."""
    assert _run(monkeypatch, str(CANNERY), "--unit", "t/h", "--out", str(tmp_path / "x")) == 2
    assert "--unit" in (said := capsys.readouterr().err)
    assert "R133" in said


def test_an_ambiguous_file_is_refused_until_it_is_told(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """Days of a month below 13 can be read in two ways: both are shown, and --date-order settles it."""
    file = tmp_path / "log.csv"
    rows = [f"{day:02d}/02/2026 {hour:02d}:00,{hour * 100 + 1}" for day in range(1, 4) for hour in range(24)]
    file.write_text("\n".join(["time,steam_kg_h", *rows]) + "\n")

    assert _run(monkeypatch, str(file), *COLUMNS, "--out", str(tmp_path / "x")) == 2
    assert "R123" in capsys.readouterr().err
    assert _run(monkeypatch, str(file), *COLUMNS, "--date-order", "dmy", "--out", str(tmp_path / "x")) == 0
    found = _document(tmp_path / "x")
    assert found["start"] == "2026-02-01T00:00:00"
    assert found["days"] == 3.0


def test_gaps_and_spikes_are_named_with_their_rows(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """A filled gap and a spike stand among the problems, each with code, rows and what was done."""
    file = tmp_path / "log.csv"
    flow = [1000.0 + 10.0 * (step % 7) for step in range(2 * 96)]
    flow[100] = 9000.0
    rows = [
        f"2026-02-{2 + step // 96:02d}T{step % 96 // 4:02d}:{15 * (step % 4):02d},{value:g}"
        for step, value in enumerate(flow)
        if step not in (50, 51)
    ]
    file.write_text("\n".join(["time,steam_kg_h", *rows]) + "\n")
    options = ("--gaps", "interpolate", "--largest-gap-minutes", "60", "--out", str(tmp_path / "x"))

    assert _run(monkeypatch, str(file), *COLUMNS, *options) == 0
    found = _document(tmp_path / "x")
    problems = {problem["code"]: problem for problem in found["problems"]}
    assert found["coverage_percent"] == pytest.approx(100.0 * 190 / 192, rel=1e-9)
    assert problems["R191"]["rows"] == [
        {"first": 51, "last": 52, "from": "2026-02-02T12:30:00", "to": "2026-02-02T13:00:00"}
    ]
    assert problems["R191"]["done"] == "filled as stated"
    assert [(row["first"], row["last"]) for row in problems["R142"]["rows"]] == [(101, 101)]


def test_a_record_without_a_complete_day_is_still_studied(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    """From noon to the next afternoon there is no calendar day: no typical days, and a word why."""
    file = tmp_path / "log.csv"
    rows = [f"2026-02-{2 + hour // 24:02d}T{hour % 24:02d}:00,{500 + hour}" for hour in range(12, 42)]
    file.write_text("\n".join(["time,steam_kg_h", *rows]) + "\n")

    assert _run(monkeypatch, str(file), *COLUMNS, "--out", str(tmp_path / "x")) == 0
    found = _document(tmp_path / "x")
    assert found["typical_days"] is None
    assert "R117" in {problem["code"] for problem in found["problems"]}


def test_only_a_record_folder_is_replaced(
    cannery: Path, tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """An existing folder is kept without --replace, and one that holds something else in any case."""
    out = tmp_path / "out"
    out.mkdir()
    (out / "record.json").write_text("old")
    assert _run(monkeypatch, str(CANNERY), "--out", str(out)) == 2
    assert "O101" in capsys.readouterr().err
    assert (out / "record.json").read_text() == "old"
    assert _run(monkeypatch, str(CANNERY), "--out", str(out), "--replace") == 0
    assert (out / "record.json").read_bytes() == (cannery / "record.json").read_bytes()
    (out / "appraisal.json").write_text("mine")
    assert _run(monkeypatch, str(CANNERY), "--out", str(out), "--replace") == 2
    assert "O103" in capsys.readouterr().err
