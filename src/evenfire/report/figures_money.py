"""Figure of where the money goes."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from matplotlib.axes import Axes

from evenfire.appraisal.results import AlternativeResult, Appraisal
from evenfire.report.figures_paper import FILLS, INK, NOT_MET, Drawing, drawing, label
from evenfire.report.formats import thousands

UNMET_LINE = "unmet steam"
"""This cost line has the colour that unmet steam has in every figure."""


def cost_line_names(alternatives: Sequence[AlternativeResult]) -> tuple[str, ...]:
    """Names of all cost lines of all alternatives, in the order in which they first appear."""
    return tuple(dict.fromkeys(line.name for each in alternatives for line in each.headline_cost_lines))


def money_drawing(appraisal: Appraisal) -> Drawing:
    """Net present cost of every planned alternative, stacked by cost line."""
    planned = [each for each in appraisal.alternatives if each.planned]
    currency = appraisal.case.finance.currency
    names = cost_line_names(planned)
    amounts = np.array([[_amount(each, name) for each in planned] for name in names]) / 1000.0
    shown_lines = [at for at in range(len(names)) if np.abs(amounts[at]).max(initial=0.0) > 0.0]
    places = np.arange(len(planned))[::-1]

    def draw(panels: Sequence[Axes]) -> None:
        axes = panels[0]
        above, below = np.zeros(len(planned)), np.zeros(len(planned))
        for order, at in enumerate(shown_lines):
            colour, hatch, line = NOT_MET if names[at] == UNMET_LINE else FILLS[order % len(FILLS)]
            start = np.where(amounts[at] >= 0.0, above, below)
            axes.barh(
                places,
                amounts[at],
                left=start,
                height=0.62,
                color=colour,
                hatch=hatch,
                edgecolor=line,
                linewidth=0.6,
                label=label(names[at]),
            )
            above += np.maximum(amounts[at], 0.0)
            below += np.minimum(amounts[at], 0.0)
        for place, each, end in zip(places, planned, above, strict=True):
            bold = "bold" if each.name == appraisal.best else "normal"
            axes.annotate(
                thousands(each.headline_cost),
                (end, place),
                xytext=(4, 0),
                textcoords="offset points",
                va="center",
                fontweight=bold,
            )
        axes.axvline(0.0, color=INK, linewidth=0.8)
        axes.set_yticks(places, [label(each.name) for each in planned])
        axes.tick_params(axis="y", length=0)
        axes.grid(axis="y", visible=False)
        axes.set_xlim(right=1.1 * float(above.max(initial=1.0)))
        axes.xaxis.set_major_formatter(lambda value, _: f"{value:,.0f}".replace("-", "−"))
        axes.set_xlabel(f"net present cost [thousand {label(currency)}]")
        axes.legend(loc="lower left", bbox_to_anchor=(0.0, 1.0), ncols=4)

    totals = "; ".join(f"{each.name} {thousands(each.headline_cost)}" for each in planned)
    return drawing(
        "money",
        "Where the money goes",
        f"Net present cost in thousand {currency}: {totals}. The tables of costs hold every line.",
        (1.1 + 0.42 * max(len(planned), 1) + 0.2 * (len(shown_lines) // 4),),
        draw,
    )


def _amount(alternative: AlternativeResult, name: str) -> float:
    return sum(line.present_cost for line in alternative.headline_cost_lines if line.name == name)
