"""The question of every case: at which fuel price does the answer change, and which input matters?"""

from __future__ import annotations

from pathlib import Path

from evenfire.case.change import numeric_input
from evenfire.sweep.axis import Axis
from evenfire.sweep.run import SweepRequest

USUAL_PATH = "fuel.price_per_mwh"
USUAL_COUNT = 13
USUAL_RANK_PERCENT = 20.0


def usual_request(path: Path) -> SweepRequest:
    """The fuel price from half to double of what the case states, and the ranking of inputs by 20 %.

    Where the fuel costs nothing, inputs are ranked alone.

    Parameters
    ----------
    path : Path
        Case folder or file.
    """
    stated = numeric_input(path, USUAL_PATH).value
    axes = () if not stated else (Axis(path=USUAL_PATH, low=stated / 2, high=stated * 2, count=USUAL_COUNT),)
    return SweepRequest(case=path, axes=axes, rank_percent=USUAL_RANK_PERCENT)
