"""Checks of the site's pressures and temperatures against each other."""

from __future__ import annotations

from collections.abc import Iterator

from evenfire.accumulator import largest_fill_before_charging
from evenfire.case.draft import Draft
from evenfire.case.water_side import LARGEST_BLOWDOWN_OVER_FEEDWATER_PERCENT
from evenfire.errors import Problem
from evenfire.units import bar_g_to_pa, k_to_degc
from evenfire.water import saturation, saturation_temperature_k


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
    if (
        steam.blowdown_basis == "feedwater"
        and steam.blowdown_percent > LARGEST_BLOWDOWN_OVER_FEEDWATER_PERCENT
    ):
        yield Problem(
            code="C137",
            where=f"{draft.file}: steam.blowdown_percent",
            found=f"found {steam.blowdown_percent:g} % of feedwater",
            allowed=f"must be at most {LARGEST_BLOWDOWN_OVER_FEEDWATER_PERCENT:g} % with blowdown_basis ="
            " 'feedwater', which is 50 % of steam",
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


def flooding_problems(draft: Draft) -> Iterator[Problem]:
    """Charged pressures from which the boilers' full pressure would fill the vessel to the last litre."""
    steam, vessel = draft.steam, draft.vessel
    if steam is None or vessel is None or list(steam_problems(draft)):
        return
    for position, charged_bar_g in enumerate(vessel.charged_pressures_bar_g):
        boiler_bar_g = max(steam.boiler_pressure_bar_g, charged_bar_g + steam.charging_pressure_drop_bar)
        boiler_pa = bar_g_to_pa(boiler_bar_g)
        largest = largest_fill_before_charging(
            bar_g_to_pa(charged_bar_g), boiler_pa, float(saturation(boiler_pa).enthalpy_vapour_j_kg)
        )
        if vessel.charged_fill_percent / 100.0 >= largest:
            yield Problem(
                code="C138",
                where=f"{draft.file}: vessel.charged_fill_percent",
                found=f"found {vessel.charged_fill_percent:g} %",
                allowed=f"must be below {100.0 * largest:.1f} %, or charging on from"
                f" charged_pressures_bar_g[{position}] = {charged_bar_g:g} bar g to boilers at"
                f" {boiler_bar_g:g} bar g floods the vessel",
            )
