"""The day around the worst event of a replay: steam, and the pressures of vessel, boilers and process."""

from __future__ import annotations

import datetime as dt
from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.ticker import MultipleLocator

from evenfire.appraisal.results import AlternativeResult, Replayed
from evenfire.report.figures_dispatch import ATMOSPHERE_BAR
from evenfire.report.figures_paper import BLUE, FILLS, INK, VERMILION, Drawing, drawing, label
from evenfire.report.tables import clock
from evenfire.report.trade_units import gauge

_DAY_S = 86_400.0


def worst_drawing(
    key: str, result: AlternativeResult, run: Replayed, boiler_order: tuple[str, ...]
) -> Drawing:
    """A day of the replay: that of the worst event, or of the highest demand where there was none."""
    worst = run.worst
    per_day = max(1, round(_DAY_S / worst.step_s))
    start = dt.datetime.fromisoformat(worst.start)
    short = worst.demand_t_h - worst.supplied_t_h
    at = int(np.argmax(short)) if run.events else int(np.argmax(worst.demand_t_h))
    first = at // per_day * per_day
    span = slice(first, min(len(worst.demand_t_h), first + per_day))
    hours = np.arange(span.stop - span.start) * worst.step_s / 3600.0
    date = (start + dt.timedelta(seconds=first * worst.step_s)).date().isoformat()

    def draw(panels: Sequence[Axes]) -> None:
        steam, pressure = panels
        floor = np.zeros(span.stop - span.start)
        for row, boiler in enumerate(result.boilers):
            roof = floor + worst.output_t_h[row, span]
            colour, hatch, line = FILLS[boiler_order.index(boiler.name) % len(FILLS)]
            steam.fill_between(
                hours,
                floor,
                roof,
                step="post",
                color=colour,
                hatch=hatch,
                edgecolor=line,
                linewidth=0.3,
                label=label(boiler.name),
            )
            floor = roof
        steam.step(hours, worst.demand_t_h[span], where="post", color=INK, linewidth=0.8, label="demand")
        steam.set_ylabel("steam [t/h]")
        steam.legend(loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=4, borderaxespad=0.0)
        if result.vessel is not None:
            pressure.plot(hours, worst.vessel_bar_abs[span] - ATMOSPHERE_BAR, color=BLUE, label="vessel")
        pressure.plot(
            hours,
            worst.boiler_bar_abs[span] - ATMOSPHERE_BAR,
            color=INK,
            linestyle="--",
            linewidth=0.8,
            label="boilers",
        )
        pressure.plot(
            hours,
            worst.process_bar_abs[span] - ATMOSPHERE_BAR,
            color=VERMILION,
            linestyle=":",
            label="process",
        )
        pressure.set_ylabel("pressure [bar g]")
        pressure.legend(loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=4, borderaxespad=0.0)
        pressure.set_xlim(0.0, 24.0)
        pressure.xaxis.set_major_locator(MultipleLocator(3.0))
        pressure.xaxis.set_major_formatter(lambda hour, _: clock(60.0 * hour))
        pressure.set_xlabel("time of day [h:min]")

    kind = "the day of its worst event" if run.events else "the day of the highest demand"
    title = f"{result.name}: replay of {kind}, {date}"
    description = (
        "Boiler output stacked under the demand line, and pressures. Lowest process pressure of the whole "
        f"replay: {gauge(run.lowest_process_bar_abs)} bar g."
    )
    return drawing(key, title, description, [2.4, 1.9], draw)
