"""What an appraisal found, in trade units: the library's result and the report's only input.

These classes are an edge of the program, so their fields carry trade units. Fuel energy is on the
basis (net or gross calorific value) that the case states; ``Appraisal.fuel_basis`` names it.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from enum import Enum

import numpy as np
from numpy.typing import NDArray

from evenfire.case.case import Case
from evenfire.demand.enough_days import DayErrors
from evenfire.demand.series import DemandRecord, StorageNeed, TypicalDays
from evenfire.errors import Notice

FloatArray = NDArray[np.float64]


class Standing(Enum):
    """What an alternative's result is."""

    PLANNED = "planned"
    """A plan within the asked gap."""
    GAP_NOT_REACHED = "gap not reached"
    """A feasible plan, stopped before the asked gap."""
    INFEASIBLE = "infeasible"
    """No plant of this alternative meets its constraints."""
    NO_PLAN = "no plan found"
    """Stopped before any feasible plan was found."""


@dataclass(frozen=True, slots=True, kw_only=True)
class CostLine:
    """One line of the net present cost."""

    name: str
    per_year: float
    """At the price date's prices [currency/a]; 0 for investment lines."""
    present_cost: float
    """Discounted over the horizon [currency]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class FuelPart:
    """What a share of the fuel is burnt for."""

    name: str
    """In words, e.g. ``standing loss``; the definitions are in docs/physics.md."""
    mwh_per_year: float
    """On the case's fuel basis; negative for a saving [MWh/a]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class BoilerUse:
    """One boiler of the chosen plant and what it does in a year."""

    name: str
    rating_kg_h: float
    existing: bool
    steam_t_per_year: float
    firing_hours_per_year: float
    burner_starts_per_year: float


@dataclass(frozen=True, slots=True, kw_only=True)
class VesselChoice:
    """The chosen accumulator, for an investment decision only."""

    volume_m3: float
    charged_bar_abs: float
    discharged_bar_abs: float
    steam_capacity_kg: float
    release_limit_kg_h: float
    standing_loss_kw: float
    diameter_m: float
    cylinder_length_m: float
    wall_thickness_mm: float
    """Estimate for cost only, thin-wall formula."""
    shell_mass_t: float
    """Estimate for cost only."""


@dataclass(frozen=True, slots=True, kw_only=True)
class WholeRecord:
    """An alternative planned on every day of the record, each followed by the next."""

    step_s: float
    days: int
    net_present_cost: float | None
    bound: float | None
    """Proven lower bound for the record as a whole [currency]."""
    gap: float | None
    boilers: tuple[str, ...]
    vessel_volume_m3: float | None
    stopped: str
    """Why the search ended."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Payback:
    """Payback against the reference: a number, or an honest word."""

    simple_years: float | None
    discounted_years: float | None
    note: str
    """Empty where both numbers stand; else why one does not, e.g. ``saves from the first day``."""


@dataclass(frozen=True, slots=True, kw_only=True)
class SetPoint:
    """One line of the sheet a controls contractor needs."""

    name: str
    value: str
    unit: str
    purpose: str


@dataclass(frozen=True, slots=True, kw_only=True)
class ReplayEvent:
    """A stretch in which the process got less steam than it asked for."""

    start: str
    """Local time, ISO 8601."""
    minutes: float
    unmet_kg: float
    lowest_process_bar_abs: float


@dataclass(frozen=True, slots=True, kw_only=True)
class ReplayedSize:
    """One of the near-optimal plants that were run."""

    boilers: tuple[str, ...]
    vessel_volume_m3: float
    charged_bar_abs: float | None
    discharged_bar_abs: float | None
    planned_cost: float
    """Net present cost with foresight [currency]."""
    replayed_cost: float
    unmet_steam_t_per_year: float


@dataclass(frozen=True, slots=True, kw_only=True)
class ReplayTrace:
    """Some days of the replay, one value per step of the record."""

    start: str
    step_s: float
    demand_t_h: FloatArray = field(repr=False)
    supplied_t_h: FloatArray = field(repr=False)
    output_t_h: FloatArray = field(repr=False)
    """Shape (boilers, steps)."""
    vessel_bar_abs: FloatArray = field(repr=False)
    """NaN without a vessel."""
    boiler_bar_abs: FloatArray = field(repr=False)
    process_bar_abs: FloatArray = field(repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class Replayed:
    """What the recommended plant of an alternative did over the whole record without foresight."""

    net_present_cost: float
    net_present_saving: float
    """Against the replayed reference [currency]."""
    cost_lines: tuple[CostLine, ...]
    fuel_parts: tuple[FuelPart, ...]
    """By purpose, adding up to ``fuel_mwh_per_year``."""
    fuel_mwh_per_year: float
    fuel_saved_mwh_per_year: float
    fuel_saved_percent: float
    co2_t_per_year: float
    co2_saved_t_per_year: float
    steam_t_per_year: float
    """Supplied to the process."""
    steam_cost_per_t: float | None
    """Annuity of the net present cost over yearly steam supplied [currency/t]."""
    burner_starts_per_year: float
    firing_hours_per_year: float
    unmet_steam_t_per_year: float
    vented_steam_t_per_year: float
    payback: Payback
    passes: bool
    """Unmet steam within what the plan leaves unmet and the case's tolerance."""
    lowest_process_bar_abs: float
    lowest_boiler_bar_abs: float
    boiler_low_hours_per_year: float
    """Boiler pressure so low that carry-over of water must be feared."""
    release_limited_hours_per_year: float
    vessel_empty_hours_per_year: float
    mass_closure_relative: float
    energy_closure_relative: float
    planned_saving: float
    """The plan's net present saving against the planned reference [currency]."""
    realised_share: float | None
    """Replayed over planned saving [1]; None for the reference and where the plan saves nothing."""
    margin_percent: float | None
    """How much larger the recommended vessel is than the optimum with foresight; None without a vessel."""
    band_cost: float
    """Net present cost of the same plant on a tuned pressure band, as plants have it today [currency]."""
    trials: int
    learnt_cost_per_t: float
    """Operating cost per tonne of demand over the horizon, on the weeks the settings were learnt on."""
    judged_cost_per_t: float
    """The same on the weeks they were not."""
    set_points: tuple[SetPoint, ...]
    sizes: tuple[ReplayedSize, ...]
    events: tuple[ReplayEvent, ...]
    worst: ReplayTrace = field(repr=False)
    """A week around the worst event, or around the highest demand."""


@dataclass(frozen=True, slots=True, kw_only=True)
class DaySchedule:
    """Planned dispatch of one typical day."""

    day: str
    """Name of the typical day."""
    date: str
    days_per_year: float
    step_minutes: float
    demand_t_h: FloatArray = field(repr=False)
    """Shape (steps,)."""
    output_t_h: FloatArray = field(repr=False)
    """Shape (boilers, steps), in the order of ``AlternativeResult.boilers``."""
    state: tuple[tuple[str, ...], ...] = field(repr=False)
    """Operating state per boiler and step: ``cold``, ``standby``, ``cycling`` or ``firing``."""
    stored_t: FloatArray = field(repr=False)
    """Dischargeable steam in the vessel at the start of each step, shape (steps,)."""
    vessel_bar_abs: FloatArray = field(repr=False)
    """Vessel pressure at the start of each step; empty without a vessel."""
    unmet_t_h: FloatArray = field(repr=False)
    vented_t_h: FloatArray = field(repr=False)


@dataclass(frozen=True, slots=True, kw_only=True)
class AlternativeResult:
    """One way to supply the demand, planned."""

    name: str
    standing: Standing
    note: str
    """In words: why there is no plan, or what limits this one; empty otherwise."""
    solver_status: str
    net_present_cost: float | None
    bound: float | None
    """Proven lower bound of the net present cost [currency]."""
    gap: float | None
    """(cost - bound) / cost [1]."""
    investment: float
    """Including contingency, first year only [currency]."""
    cost_lines: tuple[CostLine, ...]
    fuel_mwh_per_year: float
    fuel_parts: tuple[FuelPart, ...]
    """By purpose, adding up to ``fuel_mwh_per_year``."""
    co2_t_per_year: float
    steam_t_per_year: float
    burner_starts_per_year: float
    firing_hours_per_year: float
    unmet_steam_t_per_year: float
    vented_steam_t_per_year: float
    fuel_saved_mwh_per_year: float
    """Against the reference; negative where it uses more."""
    fuel_saved_percent: float
    co2_saved_t_per_year: float
    net_present_saving: float | None
    payback: Payback
    steam_cost_per_t: float | None
    """Annuity of the net present cost over yearly steam supplied [currency/t]."""
    boilers: tuple[BoilerUse, ...]
    boiler_working_bar_abs: float
    vessel: VesselChoice | None
    record_shortfall_t: float
    """Steam of the whole raw record above firm boiler capacity that the vessel cannot cover [t]."""
    schedule: tuple[DaySchedule, ...] = field(repr=False)
    typical_days_difference: float | None = None
    """Operating cost of this plant on typical days over that on every day of the record, less one [1]."""
    replayed: Replayed | None = None
    """None only without a plan."""
    whole_record: WholeRecord | None = None
    """Set where the certificate for the whole record was asked for."""
    solve_seconds: float = field(compare=False)

    @property
    def headline_cost(self) -> float | None:
        """Net present cost as replayed; as planned where nothing was replayed [currency]."""
        return self.net_present_cost if self.replayed is None else self.replayed.net_present_cost

    @property
    def headline_cost_lines(self) -> tuple[CostLine, ...]:
        """Lines of ``headline_cost``."""
        return self.cost_lines if self.replayed is None else self.replayed.cost_lines

    @property
    def headline_fuel_parts(self) -> tuple[FuelPart, ...]:
        """Fuel by purpose as replayed; as planned where nothing was replayed."""
        return self.fuel_parts if self.replayed is None else self.replayed.fuel_parts

    @property
    def planned(self) -> bool:
        """Whether there is a plan at all."""
        return self.standing in (Standing.PLANNED, Standing.GAP_NOT_REACHED)


@dataclass(frozen=True, slots=True, kw_only=True)
class Appraisal:
    """Everything one run found about one case."""

    case: Case
    record: DemandRecord
    typical_days: TypicalDays
    day_errors: DayErrors
    """What the typical days get wrong against every complete day of the record."""
    storage_need: StorageNeed
    alternatives: tuple[AlternativeResult, ...]
    reference: str
    best: str
    """Name of the alternative with the least net present cost."""
    verdict: str
    """One or two sentences."""
    fuel_basis: str
    """``lhv`` or ``hhv``."""
    notices: tuple[Notice, ...]
    versions: tuple[tuple[str, str], ...]
    """(package, version)."""

    def alternative(self, name: str) -> AlternativeResult:
        """The alternative called `name`."""
        return next(result for result in self.alternatives if result.name == name)
