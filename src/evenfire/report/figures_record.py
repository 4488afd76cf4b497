"""Figures of a record's study: its peaks, its week, its ramps, and the storage it needs."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.colors import LinearSegmentedColormap

from evenfire.demand.peaks import Peak
from evenfire.demand.quality import Ramp, weekly_map
from evenfire.demand.series import DemandRecord, StorageNeed
from evenfire.report.figures_paper import (
    BLUE,
    INK,
    ORANGE,
    PURPLE,
    SKY,
    VERMILION,
    Drawing,
    drawing,
)
from evenfire.report.formats import number, short
from evenfire.units import KG_PER_TONNE, kg_s_to_t_h

SHOWN_PEAKS = 60
DAYS = ("Mon", "Tue", "Wed", "Thu", "Fri", "Sat", "Sun")
HEAT = LinearSegmentedColormap.from_list("heat", ["#ffffff", SKY, BLUE, "#1f3a4d"])
DARK = 0.55
"""Share of the highest cell from which figures in a cell are white."""


def peaks_drawing(peaks: tuple[Peak, ...], capacity_kg_s: float) -> Drawing:
    """Peaks above a capacity, ranked by the steam above it, and how long each lasts."""
    shown = peaks[:SHOWN_PEAKS]
    rank = np.arange(1, len(shown) + 1)
    steam = np.array([peak.steam_above_kg for peak in shown]) / KG_PER_TONNE
    minutes = np.array([peak.duration_s for peak in shown]) / 60.0

    def draw(panels: Sequence[Axes]) -> None:
        panels[0].bar(rank, steam, color=BLUE, width=0.8)
        panels[0].set_ylabel("steam above\ncapacity [t]")
        panels[1].bar(rank, minutes, color=ORANGE, width=0.8)
        panels[1].set_ylabel("duration [min]")
        panels[1].set_xlabel("rank by steam above capacity")
        panels[1].set_xlim(0.4, max(len(shown), 10) + 0.6)

    capacity = short(kg_s_to_t_h(capacity_kg_s))
    words = (
        f"Demand passes {capacity} t/h in {number(len(peaks))} stretches. The largest asks for "
        f"{short(float(steam[0]))} t above it; the longest of those shown lasts "
        f"{short(float(minutes.max()))} min."
        if shown
        else f"Demand never passes {capacity} t/h."
    )
    return drawing("peaks", f"Peaks above {capacity} t/h, largest first", words, (1.5, 1.3), draw)


def week_drawing(record: DemandRecord) -> Drawing:
    """Mean and highest demand of every hour of the week, in figures and colours."""
    mean, highest = (flow * kg_s_to_t_h(1.0) for flow in weekly_map(record))

    def draw(panels: Sequence[Axes]) -> None:
        for axes, values, words in zip(
            panels, (mean, highest), ("mean [t/h]", "highest step [t/h]"), strict=True
        ):
            top = max(float(np.nanmax(values)), 1e-9)
            axes.pcolormesh(np.arange(25), np.arange(8), values, cmap=HEAT, vmin=0.0, vmax=top, linewidth=0)
            for day, hour in zip(*np.nonzero(np.isfinite(values)), strict=True):
                value = float(values[day, hour])
                axes.text(
                    hour + 0.5,
                    day + 0.5,
                    number(value, 1) if top < 99.5 else number(value),
                    ha="center",
                    va="center",
                    fontsize=6.5,
                    color="white" if value > DARK * top else INK,
                )
            axes.set_yticks(np.arange(7) + 0.5, DAYS)
            axes.invert_yaxis()
            axes.grid(False)
            axes.set_title(words)
        panels[-1].set_xticks(np.arange(0, 25, 2))
        panels[-1].set_xlabel("hour of the day")

    at = np.unravel_index(int(np.nanargmax(mean)), mean.shape)
    return drawing(
        "week",
        "The week, hour by hour",
        f"The busiest hour on average is {DAYS[at[0]]} from {at[1]}:00 with {short(float(mean[at]))} t/h.",
        (1.9, 2.1),
        draw,
    )


def ramps_drawing(ramps: tuple[Ramp, ...]) -> Drawing:
    """Largest rise, usual rise and largest fall within a minute, five and fifteen."""
    at = np.arange(len(ramps))
    series = (
        ("largest rise", [kg_s_to_t_h(ramp.largest_rise_kg_s) for ramp in ramps], VERMILION),
        ("rise passed in 1 % of the record", [kg_s_to_t_h(ramp.usual_rise_kg_s) for ramp in ramps], ORANGE),
        ("largest fall", [kg_s_to_t_h(ramp.largest_fall_kg_s) for ramp in ramps], PURPLE),
    )

    def draw(panels: Sequence[Axes]) -> None:
        axes = panels[0]
        for place, (words, values, colour) in enumerate(series):
            axes.bar(at + 0.26 * (place - 1), values, width=0.24, color=colour, label=words)
        axes.set_xticks(at, [f"{short(ramp.within_s / 60.0)} min" for ramp in ramps])
        axes.set_ylabel("change of demand [t/h]")
        axes.set_xlabel("within")
        axes.legend(loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=3)

    named = "; ".join(
        f"within {short(ramp.within_s / 60.0)} min demand rises by up to "
        f"{short(kg_s_to_t_h(ramp.largest_rise_kg_s))} t/h"
        for ramp in ramps
    )
    words = named[:1].upper() + named[1:] + "." if named else "The step is too long to show ramps."
    return drawing("ramps", "How fast demand changes", words, (2.2,), draw)


def need_drawing(need: StorageNeed, capacity_kg_s: float, capacity_words: str) -> Drawing:
    """S(C) from the mean demand to the peak, with the capacity in question."""
    capacity = need.capacity_kg_s * kg_s_to_t_h(1.0)
    storage = need.storage_kg / KG_PER_TONNE
    asked = kg_s_to_t_h(capacity_kg_s)
    right = 1.04 * max(float(capacity[-1]), asked)
    there = float(np.interp(asked, capacity, storage))
    lit = asked >= capacity[0]
    high = there if lit and there > 0.0 else float(storage[0])
    top = 4.0 * high if high > 0.0 else 1.0

    def draw(panels: Sequence[Axes]) -> None:
        axes = panels[0]
        line_x, line_y = np.append(capacity, right), np.append(storage, 0.0)
        axes.fill_between(line_x, line_y, color=VERMILION, alpha=0.15, linewidth=0)
        axes.plot(line_x, line_y, color=INK, linewidth=1.4, marker=".", label="storage the record needs")
        axes.axvline(asked, color=VERMILION, linewidth=1.2, linestyle="--", label=capacity_words)
        axes.set_xlim(min(float(capacity[0]), 0.97 * asked), right)
        axes.set_ylim(0.0, min(top, 1.05 * float(storage[0])) if storage[0] > 0.0 else top)
        axes.set_xlabel("firm boiler capacity [t/h]")
        axes.set_ylabel("steam from storage [t]")
        axes.legend(loc="upper right")

    words = (
        f"At {short(asked)} t/h ({capacity_words}) the record needs {short(there)} t of steam from storage; "
        f"from {short(float(capacity[-1]))} t/h on it needs none."
        if lit
        else f"{short(asked)} t/h ({capacity_words}) is less than the mean demand, so no storage is enough."
    )
    return drawing("need", "Storage that the record needs", words, (2.9,), draw)
