"""Figures of what boilers and vessel do by themselves: curves against load, and pressure windows."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes
from matplotlib.patches import Circle, Polygon

from evenfire.appraisal.plant_sheet import BoilerSheet, VesselSheet, WindowSheet
from evenfire.report.figures_paper import (
    BLUE,
    INK,
    MARKERS,
    SKY,
    VERMILION,
    Drawing,
    drawing,
    label,
)
from evenfire.report.formats import digits, number
from evenfire.report.trade_units import bar_g, gauge

CIRCLES_PER_ROW = 6
LINES_WITHOUT_CROWDING = 7


def load_drawing(boilers: tuple[BoilerSheet, ...]) -> Drawing:
    """Efficiency and fuel of every boiler against its steam output, cycling included."""

    def draw(panels: Sequence[Axes]) -> None:
        efficiency, fuel = panels
        for at, boiler in enumerate(boilers):
            colour, style = _line(at, boiler)
            efficiency.plot(
                boiler.load_t_h, 100.0 * boiler.efficiency, color=colour, linestyle=style, linewidth=1.3
            )
            fuel.plot(
                boiler.load_t_h,
                boiler.fuel_mw,
                color=colour,
                linestyle=style,
                linewidth=1.3,
                label=label(boiler.name),
            )
            for axes, values in ((efficiency, 100.0 * boiler.efficiency), (fuel, boiler.fuel_mw)):
                lowest = boiler.lowest_firing_kg_h / 1000.0
                axes.plot(
                    lowest,
                    np.interp(lowest, boiler.load_t_h, values),
                    marker="o",
                    markersize=4.0,
                    color=colour,
                )
        efficiency.set_ylabel("efficiency, net [%]")
        efficiency.set_ylim(bottom=_lowest_percent(boilers))
        fuel.set_ylabel("fuel, net [MW]")
        fuel.set_ylim(bottom=0.0)
        fuel.set_xlim(left=0.0)
        fuel.set_xlabel("steam output [t/h]")
        efficiency.legend(*fuel.get_legend_handles_labels(), loc="lower left", bbox_to_anchor=(0, 1), ncols=4)

    words = "; ".join(
        f"{boiler.name} {number(100.0 * boiler.full_load_efficiency, 1)} % at full load" for boiler in boilers
    )
    return drawing(
        "load",
        "Efficiency and fuel against load",
        f"At today's boiler pressure, on net calorific value. Dots stand at the smallest continuous firing; "
        f"left of them the burner fires on and off, its purging and the standing loss counted. {words}.",
        (2.7 + 0.17 * (len(boilers) // 4), 2.2),
        draw,
    )


def starts_drawing(boilers: tuple[BoilerSheet, ...]) -> Drawing:
    """Burner starts per hour of every boiler below its smallest continuous firing."""

    def draw(panels: Sequence[Axes]) -> None:
        axes = panels[0]
        for at, boiler in enumerate(boilers):
            colour, style = _line(at, boiler)
            axes.plot(
                boiler.cycling_t_h,
                boiler.starts_per_h,
                color=colour,
                linestyle=style,
                linewidth=1.3,
                label=label(boiler.name),
            )
            axes.plot(
                boiler.plan_cycling_t_h,
                boiler.plan_starts_per_h,
                color=colour,
                linestyle="none",
                marker="o",
                markersize=3.5,
            )
        axes.set_xlim(left=0.0)
        axes.set_ylim(bottom=0.0)
        axes.set_xlabel("steam output [t/h]")
        axes.set_ylabel("burner starts [1/h]")
        axes.legend(loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=4)

    words = "; ".join(
        f"{boiler.name} at most {number(boiler.most_starts_per_h, 1)} "
        f"at {number(boiler.most_starts_at_kg_h)} kg/h"
        for boiler in boilers
    )
    return drawing(
        "starts",
        "Burner starts per hour against load",
        f"A steady load below the smallest continuous firing, on the boiler's own buffer. The plan takes "
        f"straight lines between the dots. {words}.",
        (2.5 + 0.17 * (len(boilers) // 4),),
        draw,
    )


def window_drawing(vessel: VesselSheet) -> Drawing:
    """Steam capacity and release limit of the vessel against its pressure window."""
    ends = sorted({window.discharged_bar_abs for window in vessel.windows})

    def draw(panels: Sequence[Axes]) -> None:
        capacity, release = panels
        for at, discharged in enumerate(ends):
            colour, marker = MARKERS[at % len(MARKERS)]
            own = sorted(
                (each for each in vessel.windows if each.discharged_bar_abs == discharged),
                key=lambda each: each.charged_bar_abs,
            )
            charged = [bar_g(each.charged_bar_abs) for each in own]
            for axes, values in (
                (capacity, [each.steam_capacity_kg / 1000.0 for each in own]),
                (release, [each.release_limit_kg_h / 1000.0 for each in own]),
            ):
                axes.plot(
                    charged,
                    values,
                    color=colour,
                    marker=marker,
                    markersize=5.0,
                    linewidth=1.2,
                    label=f"discharged to {gauge(discharged)} bar g",
                )
        capacity.set_ylabel("steam capacity [t]")
        release.set_ylabel("release limit [t/h]")
        release.set_xlabel("charged pressure [bar g]")
        for axes in panels:
            axes.set_ylim(bottom=0.0)
        capacity.legend(loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=3)

    largest = max(vessel.windows, key=lambda each: each.steam_capacity_kg)
    return drawing(
        "window",
        f"Steam capacity against pressure window, {digits(vessel.volume_m3)} m³",
        f"Capacity goes with the volume; the release limit goes with the water surface and the discharged "
        f"pressure. Most steam: {number(largest.steam_capacity_kg)} kg from {gauge(largest.charged_bar_abs)} "
        f"to {gauge(largest.discharged_bar_abs)} bar g.",
        (2.3, 2.0),
        draw,
    )


def level_drawing(vessel: VesselSheet) -> Drawing:
    """Water level and free surface of the vessel at both ends of every window, in cross-section."""
    rows = -(-len(vessel.windows) // CIRCLES_PER_ROW)

    def draw(panels: Sequence[Axes]) -> None:
        for row, axes in enumerate(panels):
            shown = vessel.windows[row * CIRCLES_PER_ROW : (row + 1) * CIRCLES_PER_ROW]
            for at, window in enumerate(shown):
                _cross_section(axes, 1.3 * at, window)
            axes.set_xlim(-0.65, 1.3 * CIRCLES_PER_ROW - 0.65)
            axes.set_ylim(-0.95, 0.62)
            axes.set_aspect("equal")
            axes.axis("off")

    lowest = min(vessel.windows, key=lambda each: each.level_discharged)
    return drawing(
        "level",
        "Water level and free surface at both ends of each window",
        f"Cross-section of the horizontal vessel, {digits(vessel.diameter_m)} m in diameter: dark up to the "
        f"discharged level, light up to the charged level, {number(100.0 * vessel.charged_fill)} % of the "
        f"volume. Steam leaves through the free surface, drawn red at the discharged level. Lowest "
        f"level: {number(100.0 * lowest.level_discharged)} % of the diameter.",
        (1.75,) * rows,
        draw,
    )


def _cross_section(axes: Axes, middle: float, window: WindowSheet) -> None:
    for level, colour in ((window.level_charged, SKY), (window.level_discharged, BLUE)):
        half = np.arccos(1.0 - 2.0 * level)
        angle = np.linspace(-np.pi / 2.0 - half, -np.pi / 2.0 + half, 60)
        outline = np.column_stack([middle + 0.5 * np.cos(angle), 0.5 * np.sin(angle)])
        axes.add_patch(Polygon(outline, closed=True, facecolor=colour, edgecolor="none"))
    axes.add_patch(Circle((middle, 0.0), 0.5, facecolor="none", edgecolor=INK, linewidth=1.2))
    height = window.level_discharged - 0.5
    width = np.sqrt(0.25 - height**2)
    axes.plot([middle - width, middle + width], [height, height], color=VERMILION, linewidth=2.0)
    axes.text(
        middle,
        -0.57,
        f"{gauge(window.charged_bar_abs)} to {gauge(window.discharged_bar_abs)} bar g\n"
        f"{digits(window.free_surface_m2)} m² free",
        ha="center",
        va="top",
        fontsize=7.5,
        color=INK,
    )


def _line(at: int, boiler: BoilerSheet) -> tuple[str, str]:
    """Colour and style of a boiler: full lines for those in place, broken ones for those on offer."""
    colour, _ = MARKERS[at % len(MARKERS)]
    if at >= LINES_WITHOUT_CROWDING and not boiler.existing:
        return colour, ":"
    return colour, "-" if boiler.existing else "--"


def _lowest_percent(boilers: tuple[BoilerSheet, ...]) -> float:
    """Lower end of the efficiency axis: near no load every boiler falls to nothing."""
    firing = min(boiler.lowest_firing_efficiency for boiler in boilers)
    return 10.0 * float(np.floor(10.0 * firing - 2.5))
