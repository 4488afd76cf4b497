"""Checks of the site's pressures and temperatures against each other."""

from __future__ import annotations

from collections.abc import Iterator

from evenfire.case.draft import Draft
from evenfire.errors import Problem
from evenfire.units import bar_g_to_pa, k_to_degc
from evenfire.water import saturation_temperature_k


def steam_problems(draft: Draft) -> Iterator[Problem]:
    """What is wrong between the site's pressures and temperatures."""
    steam = draft.steam
    if steam is None:
        return
    if steam.boiler_pressure_bar_g <= steam.process_pressure_bar_g:
        yield Problem(
            code="C110",
            where=f"{draft.file}: steam.boiler_pressure_bar_g",
            found=f"found {steam.boiler_pressure_bar_g:g} bar g",
            allowed=f"must be above steam.process_pressure_bar_g, {steam.process_pressure_bar_g:g} bar g",
        )
    yield from boiling_problems(
        steam.feedwater_temperature_degc,
        f"{draft.file}: steam.feedwater_temperature_degc",
        steam.boiler_pressure_bar_g,
        "steam.boiler_pressure_bar_g",
    )


def boiling_problems(
    water_degc: float, where: str, pressure_bar_g: float, pressure_key: str
) -> Iterator[Problem]:
    """The problem of water that would boil at a pressure; nothing where it would not."""
    boiling_degc = k_to_degc(float(saturation_temperature_k(bar_g_to_pa(pressure_bar_g))))
    if water_degc >= boiling_degc:
        yield Problem(
            code="C111",
            where=where,
            found=f"found {water_degc:g} degC",
            allowed=f"must be below boiling at {pressure_key} = {pressure_bar_g:g} bar g,"
            f" {boiling_degc:.1f} degC",
        )
