"""``evenfire plant``: what it prints and draws, against the physics by an independent hand."""

from __future__ import annotations

import re
import sys
from pathlib import Path

import iapws
import numpy as np
import pytest

from evenfire.accumulator import steam_capacity_kg
from evenfire.appraisal.plant_sheet import PlantSheet, plant_sheet
from evenfire.case.load import load_case
from evenfire.cli.main import main
from evenfire.report.page_plant import plant_page
from tests.small_case import SMALL_CASE, write_small_case

CANNERY = Path(__file__).parents[2] / "cases" / "cannery"


@pytest.fixture(scope="module")
def cannery() -> PlantSheet:
    return plant_sheet(load_case(CANNERY))


@pytest.fixture(scope="module")
def page(cannery: PlantSheet) -> str:
    return plant_page(cannery)


def _run(monkeypatch: pytest.MonkeyPatch, *arguments: str) -> int:
    monkeypatch.setattr(sys, "argv", ["evenfire", *arguments])
    with pytest.raises(SystemExit) as stopped:
        main()
    return int(stopped.value.code or 0)


def test_prints_and_writes_one_page(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """Tables, cautions and the marking of wall and mass reach the terminal; the folder holds plant.html."""
    monkeypatch.setenv("COLUMNS", "80")
    status = _run(monkeypatch, "plant", str(CANNERY), "--out", str(tmp_path / "out"))
    printed = " ".join(capsys.readouterr().out.split())

    assert status == 0
    assert [path.name for path in (tmp_path / "out").iterdir()] == ["plant.html"]
    assert "Boiler 2, 2.5 t/h" in printed
    assert "15.0-4.6" in printed
    assert "…" not in printed
    assert "estimates for cost only" in printed
    assert "kill" in printed
    assert "not for construction" in printed


def test_folder_rules_are_those_of_an_appraisal(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, capsys: pytest.CaptureFixture[str]
) -> None:
    """Default folder beside the case; kept without ``--replace``; never over what it did not write."""
    folder = write_small_case(tmp_path / "small", days=2)

    assert _run(monkeypatch, "plant", str(folder), "--quiet") == 0
    assert (folder / "plant" / "plant.html").is_file()
    assert capsys.readouterr().out == ""
    assert _run(monkeypatch, "plant", str(folder)) == 2
    assert "O101" in capsys.readouterr().err
    (folder / "plant" / "mine.txt").write_text("mine")
    assert _run(monkeypatch, "plant", str(folder), "--replace") == 2
    assert "O103" in capsys.readouterr().err
    assert (folder / "plant" / "mine.txt").read_text() == "mine"


def test_needs_no_record(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    """The equipment can be looked at before the record is usable; its file only has to be there."""
    folder = write_small_case(tmp_path / "small", days=2)
    (folder / "steam.csv").write_text("not a record\n")

    assert _run(monkeypatch, "plant", str(folder), "--quiet") == 0


def test_fuel_and_efficiency_at_typed_points(cannery: PlantSheet) -> None:
    """At half load fuel is q dh / 0.91, dh by an independent library with 4 % blowdown."""
    boiler = cannery.boilers[0]
    water = iapws.IAPWS97(P=1.001325, T=376.15).h
    boiling, steam = (iapws.IAPWS97(P=1.001325, x=x).h for x in (0.0, 1.0))
    heat_kj_kg = steam - water + 0.04 * (boiling - water)
    at_half = boiler.at(0.5)

    assert at_half.fuel_mw == pytest.approx(2.5 / 3.6 * heat_kj_kg / 1000.0 / 0.91, rel=1e-3)
    assert at_half.efficiency == pytest.approx(0.91, abs=1e-3)
    assert boiler.lowest_firing_efficiency == pytest.approx(0.89)
    assert boiler.full_load_efficiency == pytest.approx(0.906)


def test_cycling_joins_firing_without_a_jump(cannery: PlantSheet) -> None:
    """Fuel is continuous at lowest firing, starts end there at nothing, and efficiency falls below it."""
    for boiler in cannery.boilers:
        lowest = boiler.lowest_firing_kg_h / 1000.0
        below, above = (np.interp(lowest + step, boiler.load_t_h, boiler.fuel_mw) for step in (-1e-6, 1e-6))
        assert below == pytest.approx(above, rel=1e-4)
        assert boiler.starts_per_h[-1] == pytest.approx(0.0, abs=1e-9)
        low = boiler.load_t_h <= lowest
        assert (np.diff(boiler.efficiency[low]) > 0.0).all()
        inside = np.interp(boiler.plan_cycling_t_h, boiler.cycling_t_h, boiler.starts_per_h)
        assert boiler.plan_starts_per_h == pytest.approx(inside, rel=1e-6, abs=1e-9)


def test_on_off_burner_cycles_up_to_its_rating(tmp_path: Path) -> None:
    """With a turndown of 1 there is no firing range: the curves end at the rating."""
    folder = write_small_case(tmp_path / "small", days=2)
    text = SMALL_CASE.replace("turndown_ratio = 4.0", "turndown_ratio = 1.0")
    (folder / "case.toml").write_text(text)
    boiler = plant_sheet(load_case(folder)).boilers[0]

    assert boiler.load_t_h[-1] == pytest.approx(3.0)
    assert boiler.at(1.0).efficiency == pytest.approx(0.90)
    assert boiler.at(1.0).starts_per_h == pytest.approx(0.0, abs=1e-9)


def test_windows_hold_what_the_vessel_does(cannery: PlantSheet) -> None:
    """Capacity agrees with the function for use by hand; the surface limits the release; levels fall."""
    vessel = cannery.vessel
    assert vessel is not None
    assert len(vessel.windows) == 12
    for window in vessel.windows:
        by_hand = steam_capacity_kg(vessel.volume_m3, window.charged_bar_abs, window.discharged_bar_abs)
        assert window.steam_capacity_kg == pytest.approx(by_hand, rel=1e-9)
        released = 220.0 * window.discharged_bar_abs * window.free_surface_m2
        assert window.release_limit_kg_h == pytest.approx(released, rel=1e-9)
        assert window.level_discharged < window.level_charged < 1.0
        assert vessel.charged_fill < window.largest_fill <= 1.0
    weak = [window.fuel_rise_percent[1] is None for window in vessel.windows]
    assert weak == [window.charged_bar_abs > 11.1 for window in vessel.windows]


def test_page_is_whole_and_loads_nothing(page: str) -> None:
    """Four figures, both cautions, every mark for cost only; no script, no address, unique ids."""
    assert page.count("<svg") == 4
    assert page.count("Pressurised steam and hot water kill") == 2
    assert page.count("estimate for cost only") >= 3
    assert "<script" not in page
    assert not re.search(r'(?:src|href)="(?!#)', page)
    ids = re.findall(r'\bid="([^"]+)"', page)
    assert len(ids) == len(set(ids))
    assert "design pressure" in page.lower()
    assert not re.search(r"\ba design\b|\bthe design\b", page)


def test_page_without_a_vessel(tmp_path: Path) -> None:
    """A case that offers no vessel has no vessel section."""
    folder = write_small_case(tmp_path / "small", days=2)
    before, rest = SMALL_CASE.split("[vessel]")
    text = before + rest[rest.index("[money]") :]
    text = text.replace('"further boiler", "storage", "free choice"', '"further boiler"')
    (folder / "case.toml").write_text(text)
    sheet = plant_sheet(load_case(folder))

    assert sheet.vessel is None
    assert plant_page(sheet).count("<svg") == 2


def test_text_of_a_case_stays_text(tmp_path: Path) -> None:
    """A boiler named like markup is shown, not run, in tables and figures."""
    folder = write_small_case(tmp_path / "small", days=2)
    (folder / "case.toml").write_text(SMALL_CASE.replace("Old boiler", "<b>Old</b> & $x$"))

    shown = plant_page(plant_sheet(load_case(folder)))

    assert "<b>Old</b>" not in shown
    assert "&lt;b&gt;Old&lt;/b&gt; &amp; $x$" in shown
