"""What the plan is made from, in the units of the mixed-integer model.

Tonnes, tonnes per hour, megawatt-hours on net calorific value, hours, and thousands of currency
("k") keep every coefficient between about 1e-3 and 1e4, where the solver's tolerances mean
something. ``appraisal`` fills these classes; nothing here knows a file or a price list.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import Enum

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class PlanMode:
    """One operating mode of a hot boiler: a range of output with a convex fuel curve."""

    name: str
    """``cycling`` or ``firing``."""
    lit: bool
    """Whether the burner counts as lit: a burner start leads from a mode that is not to one that is."""
    output_t_h: tuple[float, ...]
    """Breakpoints, rising; a single one for a mode without range."""
    fuel_mwh_h: tuple[float, ...]
    """Fuel at the breakpoints at today's boiler pressure, convex and piecewise linear in between."""
    starts_per_h_low: float
    starts_per_h_high: float
    """Burner starts per hour at both ends of the range, linear in between."""


@dataclass(frozen=True, slots=True, kw_only=True)
class PlanBoiler:
    """A boiler that stands or may be bought."""

    name: str
    existing: bool
    rated_t_h: float
    modes: tuple[PlanMode, ...]
    fixed_cost_k: float
    """Present cost of having it: investment, replacement, residual value, maintenance [k]."""
    start_wear_k: float
    """Present cost of one burner start a year, fuel apart [k a]."""
    start_fuel_mwh: float
    cold_start_fuel_mwh: float
    minimum_firing_steps: int
    minimum_off_steps: int
    ramp_t_h: float
    """Largest rise of output from one step to the next while firing [t/h]."""
    pressure_factor: tuple[float, ...]
    """Fuel over fuel at today's pressure, per boiler pressure of the plan [1]."""
    pressure_allowed: tuple[bool, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class VesselSegment:
    """A range of volumes in one pressure window; every property is linear between its ends."""

    window: int
    pressure: int
    """Index of the boiler pressure this window asks for."""
    volume_m3: tuple[float, float]
    fixed_cost_k: tuple[float, float]
    capacity_t: tuple[float, float]
    release_t_h: tuple[float, float]
    loss_t_h: tuple[float, float]
    """Standing loss in dischargeable steam."""
    charging_credit_mwh_t: float
    """Fuel saved per tonne charged because a vessel gives back more steam than it takes up."""


@dataclass(frozen=True, slots=True, kw_only=True)
class PlanDay:
    """A weighted typical day on the plan's step."""

    name: str
    days_per_year: float
    demand_t_h: FloatArray = field(repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class AdequacyCut:
    """An interval of the raw record: storage + capacity * duration >= energy."""

    energy_t: float
    duration_h: float


@dataclass(frozen=True, slots=True, kw_only=True)
class PlanRates:
    """Present cost over the horizon per unit of a yearly quantity."""

    fuel_k_mwh: float
    """Fuel and its carbon, net calorific value [k a/MWh]."""
    steam_k_t: float
    """Water, treatment and electricity per tonne made [k a/t]."""
    unmet_k_t: float


@dataclass(frozen=True, slots=True, kw_only=True)
class WindowCurves:
    """Vessel properties over all volumes of one pressure window, linear between breakpoints."""

    segments: tuple[int, ...]
    """Indices into ``PlanInputs.vessel_segments``, rising in volume and adjoining."""
    pressure: int
    charging_credit_mwh_t: float
    volume_m3: FloatArray = field(repr=False)
    """Breakpoints, shape (segments + 1,)."""
    fixed_cost_k: FloatArray = field(repr=False)
    capacity_t: FloatArray = field(repr=False)
    release_t_h: FloatArray = field(repr=False)
    loss_t_h: FloatArray = field(repr=False)

    def at(self, values: FloatArray, volume_m3: float) -> float:
        """One of the properties at a volume."""
        return float(np.interp(volume_m3, self.volume_m3, values))

    def segment_at(self, volume_m3: float) -> int:
        """Index of the segment that holds a volume."""
        place = int(np.searchsorted(self.volume_m3, volume_m3, side="right")) - 1
        return self.segments[min(max(place, 0), len(self.segments) - 1)]


def window_curves(segments: tuple[VesselSegment, ...]) -> dict[int, WindowCurves]:
    """The segments gathered by window, each window's in rising volume."""
    curves = {}
    for window in sorted({segment.window for segment in segments}):
        own = sorted(
            (j for j, segment in enumerate(segments) if segment.window == window),
            key=lambda j: segments[j].volume_m3,
        )

        def ends(name: str, own: list[int] = own) -> FloatArray:
            first = getattr(segments[own[0]], name)[0]
            return np.array([first, *(getattr(segments[j], name)[1] for j in own)])

        curves[window] = WindowCurves(
            segments=tuple(own),
            pressure=segments[own[0]].pressure,
            charging_credit_mwh_t=segments[own[0]].charging_credit_mwh_t,
            volume_m3=ends("volume_m3"),
            fixed_cost_k=ends("fixed_cost_k"),
            capacity_t=ends("capacity_t"),
            release_t_h=ends("release_t_h"),
            loss_t_h=ends("loss_t_h"),
        )
    return curves


class VesselUse(Enum):
    """Whether an alternative has a vessel."""

    NONE = "none"
    OPTIONAL = "optional"
    REQUIRED = "required"


@dataclass(frozen=True, slots=True, kw_only=True)
class AlternativeRules:
    """What one alternative may choose."""

    name: str
    required: frozenset[str]
    """Boilers that stand in any case."""
    allowed: frozenset[str]
    """All boilers it may have, the required ones included."""
    fewest_new: int
    most_new: int
    vessel: VesselUse
    adequate: bool
    """Whether the plant must meet every peak of the raw record (adequacy cuts)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class PlanInputs:
    """Everything the plan of any alternative needs."""

    step_h: float
    days: tuple[PlanDay, ...]
    transitions_per_year: FloatArray = field(repr=False)
    """How often a year day i is followed by day j, shape (days, days)."""
    boilers: tuple[PlanBoiler, ...]
    pressures: int
    """Number of boiler pressures; index 0 is today's."""
    vessel_segments: tuple[VesselSegment, ...]
    vessel_maintenance_k: float
    """Present cost of keeping any vessel, apart from its own price [k]."""
    cuts: tuple[AdequacyCut, ...]
    peak_t_h: float
    """Largest demand of the raw record."""
    rates: PlanRates

    def boiler(self, name: str) -> PlanBoiler:
        """The boiler called `name`."""
        return next(boiler for boiler in self.boilers if boiler.name == name)
