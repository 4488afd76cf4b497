"""Sensible settings to start from, before they are tuned."""

from __future__ import annotations

import numpy as np

from evenfire.plant import PlantSpec
from evenfire.replay.controls import BurnerSettings, ControlKind, Controls, ValveSettings

SURPLUS_LEVEL = 0.6
HOLD_LEVEL = 0.3
PROTECT_LEVEL = -1.0
"""One band below cut-in: beyond it water is carried over and burners lock out (common practice)."""
_SMOOTHING_S = 1200.0


def usual_controls(plant: PlantSpec, kind: ControlKind) -> Controls:
    """Controls as commissioned without tuning, every boiler kept hot on every day.

    Parameters
    ----------
    plant : PlantSpec
    kind : ControlKind

    Notes
    -----
    Common practice: the largest boiler leads; firing covers its whole range within the band; the vessel
    is charged in the upper part of the boilers' band and called upon in its lower part.
    """
    ratings = [boiler.rated_kg_s for boiler in plant.boilers]
    order = tuple(int(b) for b in np.argsort(ratings, kind="stable")[::-1])
    vessel = plant.vessel is not None
    burners = BurnerSettings(
        kind=kind,
        smoothing_s=_SMOOTHING_S,
        level_set=(1.0 if kind is ControlKind.PRESSURE_BAND else 0.6) if vessel else 1.0,
        gain=1.0,
        start_level=0.5 if vessel else 0.0,
        stop_level=0.95 if vessel else 1.0,
        stagger=0.25 if vessel else 0.3,
    )
    return Controls(
        burners=burners,
        valves=ValveSettings(surplus=SURPLUS_LEVEL, hold=HOLD_LEVEL, protect=PROTECT_LEVEL),
        sequence=order,
        service=np.ones((len(plant.boilers), 7), dtype=np.bool_),
    )
