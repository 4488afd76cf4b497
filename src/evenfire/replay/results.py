"""What a replay saw, in SI units."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

FloatArray = NDArray[np.float32]


@dataclass(frozen=True, slots=True, kw_only=True)
class BoilerRun:
    """One boiler over the record."""

    name: str
    steam_kg: float
    firing_fuel_j: float
    """Burnt for steam, net calorific value."""
    standing_fuel_j: float
    start_fuel_j: float
    cold_start_fuel_j: float
    firing_s: float
    hot_s: float
    """In service, firing or not."""
    starts: int
    cold_starts: int

    @property
    def fuel_j(self) -> float:
        """All fuel of the boiler, net [J]."""
        return self.firing_fuel_j + self.standing_fuel_j + self.start_fuel_j + self.cold_start_fuel_j


@dataclass(frozen=True, slots=True, kw_only=True)
class ReplayEvent:
    """A stretch in which the process got less steam than it asked for."""

    first_step: int
    last_step: int
    """Steps of the record, both included."""
    unmet_kg: float
    lowest_process_pa: float


@dataclass(frozen=True, slots=True, kw_only=True)
class Trace:
    """Every step of the record: means of flows, values at the end of the step for the rest."""

    supplied_kg_s: FloatArray = field(repr=False)
    output_kg_s: FloatArray = field(repr=False)
    """Shape (boilers, steps)."""
    charge_kg_s: FloatArray = field(repr=False)
    discharge_kg_s: FloatArray = field(repr=False)
    boiler_pa: FloatArray = field(repr=False)
    process_pa: FloatArray = field(repr=False)
    """Lowest of the step."""
    vessel_pa: FloatArray = field(repr=False)
    """NaN without a vessel."""


@dataclass(frozen=True, slots=True, kw_only=True)
class ReplayResult:
    """A plant run by its controls over the whole record."""

    duration_s: float
    demand_kg: float
    supplied_kg: float
    unmet_kg: float
    vented_kg: float
    """Through the safety valve."""
    boilers: tuple[BoilerRun, ...]
    charged_kg: float
    discharged_kg: float
    make_up_kg: float
    drain_kg: float
    vessel_loss_j: float
    lowest_process_pa: float
    lowest_boiler_pa: float
    boiler_low_s: float
    """Boiler pressure more than half a band below cut-in, where carry-over of water must be feared."""
    release_limited_s: float
    """The vessel's free surface could not release what the process asked of it."""
    vessel_empty_s: float
    vessel_full_s: float
    mass_closure: float
    """Mass that the books lack over mass put through [1]."""
    energy_closure: float
    """Energy that the vessel's books lack over energy put through [1]."""
    events: tuple[ReplayEvent, ...]
    """The ten with the most unmet steam, worst first."""
    trace: Trace = field(repr=False)

    @property
    def fuel_j(self) -> float:
        """Fuel of all boilers, net [J]."""
        return sum(boiler.fuel_j for boiler in self.boilers)
