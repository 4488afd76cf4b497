"""Figures of a sweep: costs along one input, winners over two, inputs ranked by what they move."""

from __future__ import annotations

from collections.abc import Sequence
from itertools import pairwise

import numpy as np
from matplotlib.axes import Axes

from evenfire.report.figures_paper import FAINT, FILLS, INK, MARKERS, Drawing, drawing, label
from evenfire.report.formats import plain, thousands
from evenfire.sweep.results import SweepResult, VariedInput

SHOWN_RANKED = 12


def axis_words(each: VariedInput, currency: str) -> str:
    """An input with its unit, for an axis: a long path is cut."""
    unit = each.unit.replace("currency", currency)
    return f"{label(each.path)} [{unit}]" if unit else label(each.path)


def cost_drawing(result: SweepResult) -> Drawing:
    """Net present cost of every alternative along the one input of a sweep, with the proven bounds."""
    axis = result.inputs[0]
    names = [each.name for each in result.points[0].alternatives]

    def draw(panels: Sequence[Axes]) -> None:
        axes = panels[0]
        for stretch in result.stretches[1:]:
            axes.axvline(stretch.low, color=FAINT, linewidth=0.8, linestyle=":")
        for number, name in enumerate(names):
            rows = [next(x for x in point.alternatives if x.name == name) for point in result.points]
            cost = np.array([np.nan if x.net_present_cost is None else x.net_present_cost for x in rows])
            bound = np.array([np.nan if x.bound is None else x.bound for x in rows])
            if np.isnan(cost).all():
                continue
            colour, marker = MARKERS[number % len(MARKERS)]
            axes.fill_between(axis.values, bound / 1000.0, cost / 1000.0, color=colour, alpha=0.25, lw=0)
            axes.plot(
                axis.values,
                cost / 1000.0,
                color=colour,
                marker=marker,
                markersize=3.5,
                markevery=max(1, len(axis.values) // 8),
                linewidth=1.2,
                label=label(name),
            )
        if axis.stated is not None and axis.values[0] <= axis.stated <= axis.values[-1]:
            axes.axvline(axis.stated, color=INK, linewidth=0.9, linestyle="--")
        axes.set_xlabel(axis_words(axis, result.currency))
        axes.set_ylabel(f"net present cost [thousand {label(result.currency)}]")
        axes.yaxis.set_major_formatter(lambda value, _: f"{value:,.0f}".replace("-", "−"))
        axes.legend(loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=3)

    return drawing(
        "sweep-cost",
        "Net present cost along the input",
        "Each line is the cheapest plan of an alternative at each value; the band below it ends at the "
        "proven bound. Dotted lines: the cheapest alternative changes. Dashed line: the value in the case.",
        (3.6,),
        draw,
    )


def winner_drawing(result: SweepResult) -> Drawing:
    """Which alternative is the cheapest over two inputs."""
    first, second = result.inputs
    names = [each.name for each in result.points[0].alternatives]
    winners = {point.values: point.winner for point in result.points}

    def draw(panels: Sequence[Axes]) -> None:
        axes = panels[0]
        shown = set()
        for x, left, right in _cells(first.values):
            for y, bottom, top in _cells(second.values):
                name = winners[x, y]
                if name is None:
                    continue
                colour, hatch, line = FILLS[names.index(name) % len(FILLS)]
                axes.fill(
                    [left, right, right, left],
                    [bottom, bottom, top, top],
                    facecolor=colour,
                    hatch=hatch,
                    edgecolor=line,
                    linewidth=0.3,
                    label="" if name in shown else label(name),
                )
                shown.add(name)
        axes.set_xlabel(axis_words(first, result.currency))
        axes.set_ylabel(axis_words(second, result.currency))
        axes.grid(visible=False)
        axes.legend(loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=4)

    won = ", ".join(dict.fromkeys(x.winner for x in result.points if x.winner is not None))
    return drawing(
        "sweep-winner",
        "The cheapest alternative over both inputs",
        f"Every field is one planned point, coloured by its cheapest alternative. Winners: {won}.",
        (3.8,),
        draw,
    )


def _cells(values: tuple[float, ...]) -> list[tuple[float, float, float]]:
    """Every value with the middle of the way to its neighbours."""
    middles = [(a + b) / 2 for a, b in pairwise(values)]
    return list(zip(values, [values[0], *middles], [*middles, values[-1]], strict=True))


def ranking_drawing(result: SweepResult) -> Drawing:
    """How far each input moves the saving of the winner, low and high."""
    ranked = result.ranking[:SHOWN_RANKED]
    places = np.arange(len(ranked))[::-1]

    def draw(panels: Sequence[Axes]) -> None:
        axes = panels[0]
        for place, each in zip(places, ranked, strict=True):
            for number, end in enumerate((each.low, each.high)):
                if end.saving is None:
                    continue
                colour, marker = MARKERS[1 + number]
                words = "" if place != places[0] else ("low" if number == 0 else "high")
                axes.plot(
                    [end.saving / 1000.0], [place], color=colour, marker=marker, linestyle="", label=words
                )
            ends = [x.saving / 1000.0 for x in (each.low, each.high) if x.saving is not None]
            if len(ends) == 2:
                axes.plot(ends, [place, place], color=FAINT, linewidth=3.0, alpha=0.5, zorder=1)
        axes.set_yticks(places, [label(each.name) for each in ranked])
        axes.set_xlabel(f"saving against the reference [thousand {label(result.currency)}]")
        axes.xaxis.set_major_formatter(lambda value, _: f"{value:,.0f}".replace("-", "−"))
        axes.legend(loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=2)

    words = "; ".join(
        f"{each.name} {thousands(each.low.saving)} to {thousands(each.high.saving)}" for each in ranked
    )
    low, high = ranked[0].low.factor, ranked[0].high.factor
    return drawing(
        "sweep-ranking",
        "Which input matters",
        "Net present saving of the cheapest alternative beside the reference, in thousand "
        f"{result.currency}, with each input at {plain(100 * low)} and {plain(100 * high)} % of its value, "
        f"planned anew: {words}.",
        (0.9 + 0.3 * len(ranked),),
        draw,
    )
