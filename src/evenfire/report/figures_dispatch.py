"""Figures of the planned dispatch of a typical day: steam, boiler states, vessel pressure."""

from __future__ import annotations

import dataclasses
from collections.abc import Iterator, Sequence
from typing import Any

import numpy as np
from matplotlib.axes import Axes
from matplotlib.patches import Patch
from matplotlib.ticker import MultipleLocator

from evenfire.appraisal.results import AlternativeResult, DaySchedule, VesselChoice
from evenfire.demand.series import FloatArray
from evenfire.report.figures_paper import (
    BLACK,
    BLUE,
    FAINT,
    FILLS,
    FROM_VESSEL,
    NOT_MET,
    VERMILION,
    Drawing,
    drawing,
    label,
)
from evenfire.report.formats import short
from evenfire.report.tables import boiler_names, clock
from evenfire.report.trade_units import bar_g
from evenfire.units import ATMOSPHERE_PA, PA_PER_BAR

STATES: tuple[tuple[str, str, str], ...] = (
    ("cold", "#ffffff", ""),
    ("standby", "#d9dedb", "---"),
    ("cycling", "#F0E442", "////"),
    ("firing", "#4a5a63", ""),
)
"""State, colour and hatch."""
PEAK_HOURS = 3.0
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
    title = f"{alternative.name}: planned dispatch of the {day.day}, {day.date}"
    return _drawing(key, title, alternative, day, 0.0, boiler_order)


def peak_drawing(
    key: str, alternative: AlternativeResult, day: DaySchedule, boiler_order: tuple[str, ...]
) -> Drawing:
    """The hours around the highest step of a day, large enough to follow step by step."""
    steps = round(60.0 * PEAK_HOURS / day.step_minutes)
    first = int(np.clip(int(day.demand_t_h.argmax()) - steps // 3, 0, max(0, day.demand_t_h.size - steps)))
    stretch = slice(first, first + steps)
    part = dataclasses.replace(
        day,
        demand_t_h=day.demand_t_h[stretch],
        output_t_h=day.output_t_h[:, stretch],
        state=tuple(states[stretch] for states in day.state),
        stored_t=day.stored_t[stretch],
        vessel_bar_abs=day.vessel_bar_abs[stretch],
        unmet_t_h=day.unmet_t_h[stretch],
        vented_t_h=day.vented_t_h[stretch],
    )
    title = f"{alternative.name}: the highest peak of the {day.day}, {day.date}, close up"
    return _drawing(key, title, alternative, part, first * day.step_minutes / 60.0, boiler_order)


def _drawing(
    key: str,
    title: str,
    alternative: AlternativeResult,
    day: DaySchedule,
    start_h: float,
    boiler_order: tuple[str, ...],
) -> Drawing:
    names = boiler_names(alternative)
    step_h = day.step_minutes / 60.0
    hours: FloatArray = start_h + np.arange(day.demand_t_h.size + 1, dtype=np.float64) * step_h
    vessel = alternative.vessel

    def draw(panels: Sequence[Axes]) -> None:
        _draw_steam(panels[0], day, hours, names, boiler_order)
        _draw_states(panels[1], day, hours, names)
        if vessel is not None:
            _draw_pressure(panels[2], day, hours, vessel)
        last = panels[-1]
        last.set_xlim(hours[0], hours[-1])
        last.xaxis.set_major_locator(MultipleLocator(3.0 if hours[-1] - hours[0] > 6.0 else 0.5))
        last.xaxis.set_major_formatter(lambda hour, _: clock(60.0 * hour))
        last.set_xlabel("time of day [h:min]")

    heights = [2.3, 0.42 + 0.2 * len(names)] + ([1.3] if vessel is not None else [])
    heights[-1] += 0.4
    return drawing(key, title, _description(day, alternative), heights, draw)


def _draw_steam(
    axes: Axes, day: DaySchedule, hours: FloatArray, names: tuple[str, ...], boiler_order: tuple[str, ...]
) -> None:
    floor = np.zeros(day.demand_t_h.size)
    for boiler, name in enumerate(names):
        roof = floor + day.output_t_h[boiler]
        _band(axes, hours, floor, roof, label(name), FILLS[boiler_order.index(name) % len(FILLS)])
        floor = roof
    met = day.demand_t_h - day.unmet_t_h
    if day.vessel_bar_abs.size:
        _band(axes, hours, np.minimum(floor, met), met, "from the vessel", FROM_VESSEL)
    if day.unmet_t_h.max(initial=0.0) > 0.0:
        _band(axes, hours, met, day.demand_t_h, "not met", NOT_MET)
    axes.stairs(day.demand_t_h, hours, color=BLACK, linewidth=0.8, baseline=None, label="demand")
    axes.set_ylim(bottom=0.0)
    axes.set_ylabel("steam [t/h]")
    axes.legend(loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=4)


def _draw_pressure(axes: Axes, day: DaySchedule, hours: FloatArray, vessel: VesselChoice) -> None:
    axes.plot(hours[:-1], day.vessel_bar_abs, color=BLUE, linewidth=1.4)
    window = vessel.charged_bar_abs - vessel.discharged_bar_abs
    axes.set_ylim(vessel.discharged_bar_abs - 0.25 * window, vessel.charged_bar_abs + 0.25 * window)
    limits = ((vessel.charged_bar_abs, "charged", "bottom"), (vessel.discharged_bar_abs, "discharged", "top"))
    for limit, words, side in limits:
        axes.axhline(limit, color=VERMILION, linewidth=1.0, linestyle="--")
        axes.annotate(
            words,
            (hours[0], limit),
            xytext=(3, -1 if side == "top" else 1),
            textcoords="offset points",
            va=side,
            fontsize=8,
            color=FAINT,
        )
    axes.set_ylabel("vessel [bar abs]")
    gauge = axes.secondary_yaxis("right", functions=(_to_gauge, _to_absolute))
    gauge.set_ylabel("[bar g]")


def _band(
    axes: Axes, hours: FloatArray, floor: FloatArray, roof: FloatArray, words: str, fill: tuple[str, str, str]
) -> None:
    colour, hatch, line = fill
    axes.stairs(
        roof,
        hours,
        baseline=floor,
        fill=True,
        facecolor=colour,
        hatch=hatch,
        edgecolor=line,
        linewidth=0.0,
        label=words,
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
    axes.set_yticks([-boiler for boiler in range(len(names))], [label(name) for name in names])
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
    text = f"Demand peaks at {short(float(day.demand_t_h.max()))} t/h; boilers together give at most "
    text += f"{short(float(day.output_t_h.sum(axis=0).max(initial=0.0)))} t/h."
    if day.vessel_bar_abs.size:
        low, high = float(day.vessel_bar_abs.min()), float(day.vessel_bar_abs.max())
        text += f" Vessel pressure lies between {short(low)} and {short(high)} bar abs "
        text += f"({short(bar_g(low))} and {short(bar_g(high))} bar g)."
    unmet = float(day.unmet_t_h.max(initial=0.0))
    return text + (f" Up to {short(unmet)} t/h is not met." if unmet > 0.0 else " All demand is met.")


def _to_gauge(pressure_bar_abs: Any) -> Any:
    return pressure_bar_abs - ATMOSPHERE_BAR


def _to_absolute(pressure_bar_g: Any) -> Any:
    return pressure_bar_g + ATMOSPHERE_BAR
