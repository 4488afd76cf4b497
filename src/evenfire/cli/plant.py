"""``evenfire plant``: what the equipment of a case does, as tables on a terminal and as a page."""

from __future__ import annotations

from pathlib import Path

from rich.box import SIMPLE_HEAD
from rich.console import Console
from rich.table import Table

from evenfire.appraisal.plant_sheet import BoilerSheet, PlantSheet, VesselSheet, plant_sheet
from evenfire.case.load import load_case
from evenfire.errors import ExitStatus
from evenfire.report.cautions import CAUTIONS
from evenfire.report.folder import PLANT_FILES, check_output_folder, write_plant
from evenfire.report.page_plant import rise_words, ruled_out
from evenfire.report.trade_units import gauge

SHOWN_LOADS = (0.1, 0.25, 0.5, 0.75, 1.0)
"""Loads of the printed table, over the rating."""


def run(case_path: Path, out: Path | None, *, replace: bool, quiet: bool) -> ExitStatus:
    """Print what the equipment of a case does and write its page."""
    console = Console(quiet=quiet, highlight=False)
    case = load_case(case_path)
    folder = out if out is not None else case.folder / "plant"
    check_output_folder(folder, replace, PLANT_FILES)
    sheet = plant_sheet(case)
    write_plant(sheet, folder, replace)
    console.print(
        f"{sheet.site}: boilers at {gauge(sheet.boiler_bar_abs)} bar g, feedwater "
        f"{sheet.feedwater_degc:g} degC; fuel and efficiency on net calorific value",
        soft_wrap=True,
    )
    console.print(_loads(sheet.boilers))
    console.print(_boilers(sheet.boilers))
    if sheet.vessel is not None:
        console.print(_windows(sheet, sheet.vessel))
    assumed = sum(notice.severity == "assumed" for notice in sheet.notices)
    if assumed:
        console.print(f"{assumed} inputs were assumed, not stated; the page lists them.", soft_wrap=True)
    for caution in CAUTIONS:
        console.print(caution, soft_wrap=True)
    console.print(f"Written: {folder / PLANT_FILES[0]}", soft_wrap=True)
    return ExitStatus.DONE


def _table(title: str) -> Table:
    return Table(title=title, title_justify="left", box=SIMPLE_HEAD, padding=(0, 1, 0, 0), pad_edge=False)


def _loads(boilers: tuple[BoilerSheet, ...]) -> Table:
    """Efficiency, fuel and burner starts of every boiler at a few loads."""
    table = _table("At a share of rating: efficiency [%], fuel [MW], burner starts [1/h]")
    table.add_column("boiler", no_wrap=True)
    for share in SHOWN_LOADS:
        table.add_column(f"{share:.0%}", justify="right")
    for boiler in boilers:
        table.add_row(boiler.name, *(_at_load(boiler, share) for share in SHOWN_LOADS))
    return table


def _at_load(boiler: BoilerSheet, share: float) -> str:
    found = boiler.at(share)
    return f"{100.0 * found.efficiency:.1f}\n{found.fuel_mw:.2f}\n{found.starts_per_h:.1f}"


def _boilers(boilers: tuple[BoilerSheet, ...]) -> Table:
    table = _table("Losses, starts and buffer")
    table.add_column("boiler", no_wrap=True)
    for head in (
        "lowest\nfiring\nkg/h",
        "standing\nloss\nkW",
        "most\nstarts\n1/h",
        "fuel per\nstart\nkWh",
        "fuel per\ncold start\nkWh",
        "own\nbuffer\nkg",
    ):
        table.add_column(head, justify="right", no_wrap=True)
    for boiler in boilers:
        table.add_row(
            boiler.name,
            f"{boiler.lowest_firing_kg_h:,.0f}",
            f"{boiler.standing_loss_kw:.1f}",
            f"{boiler.most_starts_per_h:.1f}",
            f"{boiler.start_fuel_kwh:.1f}",
            f"{boiler.cold_start_fuel_kwh:,.0f}",
            f"{boiler.buffer_kg:.0f}",
        )
    return table


def _windows(sheet: PlantSheet, vessel: VesselSheet) -> Table:
    table = _table(
        f"Accumulator of {vessel.volume_m3:g} m³, {vessel.diameter_m:.2f} m in diameter; wall and mass are "
        "estimates for cost only; too weak: boilers that may not work at the pressure"
    )
    for head in (
        "window\nbar g",
        "boiler\nbar g",
        "steam\nkg",
        "release\nt/h",
        "level\n% D",
        "surface\nm²",
        "loss\nkW",
        "wall\nmm",
        "mass\nt",
        "fuel\n+ %",
        "too\nweak",
    ):
        table.add_column(head, justify="right", no_wrap=True)
    for window in vessel.windows:
        table.add_row(
            f"{gauge(window.charged_bar_abs)}-{gauge(window.discharged_bar_abs)}",
            gauge(window.boiler_bar_abs),
            f"{window.steam_capacity_kg:,.0f}",
            f"{window.release_limit_kg_h / 1000.0:.1f}",
            f"{100.0 * window.level_charged:.0f}-{100.0 * window.level_discharged:.0f}",
            f"{window.free_surface_m2:.1f}",
            f"{window.standing_loss_kw:.1f}",
            f"{window.wall_thickness_mm:.1f}",
            f"{window.shell_mass_t:.1f}",
            rise_words(window.fuel_rise_percent),
            str(len(ruled_out(sheet.boilers, window.fuel_rise_percent))),
        )
    return table
