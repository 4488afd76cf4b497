"""What a plant's controls are set to: the only thing about a replay that a person may choose."""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import Enum

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]


class ControlKind(Enum):
    """How the burners are told what to do."""

    PRESSURE_BAND = "pressure band"
    """Firing falls as the pressure of the vessel (without one, of the boilers) rises, as plants have it."""
    SMOOTHED_DEMAND = "smoothed demand, trimmed by pressure"
    """Firing follows the smoothed steam meter, trimmed by that pressure."""
    GIVEN = "given outputs"
    """Outputs fixed beforehand step by step: foresight, to compare with, never a result."""


@dataclass(frozen=True, slots=True, kw_only=True)
class BurnerSettings:
    """How firing follows level and demand.

    The level is the place of the pressure in its band [1]: of the vessel between discharged and charged,
    without a vessel of the boilers between cut-in and cut-out.
    """

    kind: ControlKind
    smoothing_s: float
    """Time constant of the smoothed steam meter [s]."""
    level_set: float
    """Level at which firing equals the smoothed demand (pressure band: at which it is nothing) [1]."""
    gain: float
    """Firing added per unit of level below ``level_set``, over the rating of the boilers in service [1]."""
    start_level: float
    """Level below which the first boiler is lit [1]."""
    stop_level: float
    """Level above which the first boiler is put out [1]."""
    stagger: float
    """How much lower both levels are for each further boiler in the sequence [1]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class ValveSettings:
    """Where the valves around the vessel open, as places in the boilers' pressure band [1]."""

    surplus: float
    """Boiler level above which steam is passed into the vessel."""
    hold: float
    """Boiler level below which the reducing valve throttles, so that the vessel serves the peak."""
    protect: float
    """Boiler level below which steam to the process is throttled whatever it needs."""


@dataclass(frozen=True, slots=True, kw_only=True)
class GivenOutputs:
    """Boiler outputs per step of the record, for comparison with a plan that saw the future."""

    output_kg_s: FloatArray = field(repr=False)
    """Shape (boilers, steps): 0 for off, NaN for on its own pressure switch [kg/s]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Controls:
    """Everything that runs a plant by itself."""

    burners: BurnerSettings
    valves: ValveSettings
    sequence: tuple[int, ...]
    """Boilers in the order in which they are lit, as places in ``PlantSpec.boilers``."""
    service: NDArray[np.bool_] = field(repr=False)
    """Whether each boiler is kept hot on each weekday (Monday first), shape (boilers, 7)."""
    given: GivenOutputs | None = None
