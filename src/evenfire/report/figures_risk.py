"""Figure of random scenarios: what every alternative costs, and how often more than the cheapest."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes

from evenfire.report.figures_paper import MARKERS, Drawing, drawing, label
from evenfire.report.formats import percent, thousands
from evenfire.sweep.risk_results import RiskResult

_SHARES = np.linspace(0.0, 1.0, 201)


def regret_drawing(result: RiskResult) -> Drawing:
    """Share of scenarios in which an alternative costs no more than so much above the cheapest."""
    regret = result.costs - result.costs.min(axis=1)[:, None]

    def draw(panels: Sequence[Axes]) -> None:
        axes = panels[0]
        for number, each in enumerate(result.alternatives):
            colour, marker = MARKERS[number % len(MARKERS)]
            amounts = np.quantile(regret[:, number], _SHARES) / 1000.0
            axes.plot(
                amounts,
                100.0 * _SHARES,
                color=colour,
                marker=marker,
                markersize=3.5,
                markevery=25,
                linewidth=1.2,
                label=label(each.name),
            )
        axes.set_xlabel(f"costs more than the cheapest by up to [thousand {label(result.currency)}]")
        axes.set_ylabel("share of scenarios [%]")
        axes.xaxis.set_major_formatter(lambda value, _: f"{value:,.0f}".replace("-", "−"))
        axes.legend(loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=3)

    words = "; ".join(
        f"{each.name}: cheapest in {percent(each.probability_cheapest)}, regret at most "
        f"{thousands(each.largest_regret)}"
        for each in result.alternatives
    )
    return drawing(
        "risk-regret",
        "Regret over all scenarios",
        "Share of scenarios in which an alternative costs no more than so much above the cheapest one of the "
        f"same scenario. Thousand {result.currency}: {words}.",
        (3.4,),
        draw,
    )
