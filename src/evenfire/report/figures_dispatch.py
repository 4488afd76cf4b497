"""Figures of the planned dispatch of a typical day: steam, boiler states, vessel pressure."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.patches import Patch

from evenfire.appraisal.results import AlternativeResult, DaySchedule
from evenfire.demand.series import FloatArray
from evenfire.report.figures_paper import (
    BLACK,
    BLUE,
    FAINT,
    FILLS,
    GREEN,
    VERMILION,
    Drawing,
    drawing,
    shown,
)
from evenfire.report.formats import digits
from evenfire.report.tables import boiler_names
from evenfire.report.trade_units import bar_g
from evenfire.units import ATMOSPHERE_PA, PA_PER_BAR

STATES: tuple[tuple[str, str, str], ...] = (
    ("cold", "#ffffff", ""),
    ("standby", "#d9dedb", "---"),
    ("cycling", "#F0E442", "////"),
    ("firing", "#4a5a63", ""),
)
"""State, colour and hatch."""
ATMOSPHERE_BAR = ATMOSPHERE_PA / PA_PER_BAR


def shown_days(alternative: AlternativeResult) -> tuple[DaySchedule, ...]:
    """The ordinary working day and the day with the highest demand; one if they are the same."""
    days = alternative.schedule
    if not days:
        return ()
    workdays = [day for day in days if day.day.startswith("workday")] or list(days)
    ordinary = max(workdays, key=lambda day: day.days_per_year)
    peak = max(days, key=lambda day: float(day.demand_t_h.max()))
    return (ordinary,) if peak is ordinary else (ordinary, peak)


def dispatch_drawing(
    key: str, alternative: AlternativeResult, day: DaySchedule, boiler_order: tuple[str, ...]
) -> Drawing:
    """Planned dispatch of one day; a boiler has the same colour in every figure."""
    names = boiler_names(alternative)
    hours: FloatArray = np.arange(day.demand_t_h.size + 1, dtype=np.float64) * day.step_minutes / 60.0
    vessel = alternative.vessel

    def draw(panels: Sequence[Axes]) -> None:
        _draw_steam(panels[0], day, hours, names, boiler_order)
        _draw_states(panels[1], day, hours, names)
        if vessel is not None:
            axes = panels[2]
            axes.plot(hours[:-1], day.vessel_bar_abs, color=BLUE, linewidth=1.4)
            for limit in (vessel.charged_bar_abs, vessel.discharged_bar_abs):
                axes.axhline(limit, color=VERMILION, linewidth=1.0, linestyle="--")
            axes.set_ylabel("vessel [bar abs]")
            gauge = axes.secondary_yaxis("right", functions=(_to_gauge, _to_absolute))
            gauge.set_ylabel("[bar g]")
        last = panels[-1]
        last.set_xlim(0.0, hours[-1])
        last.set_xticks(np.arange(0.0, hours[-1] + 0.01, 3.0))
        last.set_xlabel("time of day [h]")

    heights = [2.3, 0.42 + 0.2 * len(names)] + ([1.3] if vessel is not None else [])
    heights[-1] += 0.4
    return drawing(
        key,
        f"{alternative.name}: planned dispatch of the {day.day}, {day.date}",
        _description(day, alternative),
        heights,
        draw,
    )


def _draw_steam(
    axes: Axes, day: DaySchedule, hours: FloatArray, names: tuple[str, ...], boiler_order: tuple[str, ...]
) -> None:
    floor = np.zeros(day.demand_t_h.size)
    for boiler, name in enumerate(names):
        colour, hatch = FILLS[boiler_order.index(name) % len(FILLS)]
        roof = floor + day.output_t_h[boiler]
        _band(axes, hours, floor, roof, shown(name), colour, hatch)
        floor = roof
    met = day.demand_t_h - day.unmet_t_h
    if day.vessel_bar_abs.size:
        _band(axes, hours, np.minimum(floor, met), met, "from the vessel", GREEN, "\\\\\\\\")
    if day.unmet_t_h.max(initial=0.0) > 0.0:
        _band(axes, hours, met, day.demand_t_h, "not met", VERMILION, "xxxx")
    axes.stairs(day.demand_t_h, hours, color=BLACK, linewidth=1.0, baseline=None, label="demand")
    axes.set_ylim(bottom=0.0)
    axes.set_ylabel("steam [t/h]")
    axes.legend(loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=3)


def _band(
    axes: Axes, hours: FloatArray, floor: FloatArray, roof: FloatArray, label: str, colour: str, hatch: str
) -> None:
    axes.fill_between(
        hours,
        np.append(floor, floor[-1]),
        np.append(roof, roof[-1]),
        step="post",
        facecolor=colour,
        hatch=hatch,
        edgecolor="white",
        linewidth=0.0,
        label=label,
    )


def _draw_states(axes: Axes, day: DaySchedule, hours: FloatArray, names: tuple[str, ...]) -> None:
    for boiler in range(len(names)):
        for state, colour, hatch in STATES:
            stretches = [
                (hours[first], hours[after] - hours[first])
                for found, first, after in _runs(day.state[boiler])
                if found == state
            ]
            if stretches:
                axes.broken_barh(
                    stretches,
                    (-boiler - 0.38, 0.76),
                    facecolor=colour,
                    hatch=hatch,
                    edgecolor=FAINT,
                    linewidth=0.4,
                )
    axes.set_yticks([-boiler for boiler in range(len(names))], [shown(name) for name in names])
    axes.set_ylim(-len(names) + 0.45, 0.55)
    axes.tick_params(axis="y", length=0)
    axes.grid(axis="y", visible=False)
    handles = [
        Patch(facecolor=colour, hatch=hatch, edgecolor=FAINT, linewidth=0.4, label=state)
        for state, colour, hatch in STATES
    ]
    axes.legend(handles=handles, loc="lower left", bbox_to_anchor=(0.0, 0.98), ncols=4)


def _runs(states: Sequence[str]) -> Iterator[tuple[str, int, int]]:
    """Stretches of one state: (state, first step, step after the last)."""
    first = 0
    for step in range(1, len(states) + 1):
        if step == len(states) or states[step] != states[first]:
            yield states[first], first, step
            first = step


def _description(day: DaySchedule, alternative: AlternativeResult) -> str:
    text = f"Demand peaks at {digits(float(day.demand_t_h.max()))} t/h; boilers together give at most "
    text += f"{digits(float(day.output_t_h.sum(axis=0).max(initial=0.0)))} t/h."
    if day.vessel_bar_abs.size:
        low, high = float(day.vessel_bar_abs.min()), float(day.vessel_bar_abs.max())
        text += f" Vessel pressure lies between {digits(low)} and {digits(high)} bar abs "
        text += f"({digits(bar_g(low))} and {digits(bar_g(high))} bar g)."
    unmet = float(day.unmet_t_h.max(initial=0.0))
    return text + (f" Up to {digits(unmet)} t/h is not met." if unmet > 0.0 else " All demand is met.")


def _to_gauge(pressure_bar_abs: Any) -> Any:
    return pressure_bar_abs - ATMOSPHERE_BAR


def _to_absolute(pressure_bar_g: Any) -> Any:
    return pressure_bar_g + ATMOSPHERE_BAR
