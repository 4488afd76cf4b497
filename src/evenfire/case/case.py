"""A case as the models see it: plain frozen data in SI, read from files by :mod:`evenfire.case.load`."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass
from pathlib import Path

from evenfire.demand.batch_schedule import BatchSchedule
from evenfire.demand.record_format import RecordFormat
from evenfire.errors import Notice
from evenfire.money.terms import Finance, Investment, Prices
from evenfire.plant import BoilerSpec, FuelSpec, SteamConditions, VesselRules, WindowSpec


@dataclass(frozen=True, slots=True, kw_only=True)
class BoilerOffer:
    """A boiler that stands or can be bought, with what it costs to have."""

    spec: BoilerSpec
    existing: bool
    investment: Investment | None
    """None for an existing boiler."""
    maintenance_cost: float
    """Per year while it stands [currency/a]."""
    start_wear_cost: float
    """Per burner start [currency]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class VesselOffer:
    """What accumulator vessels this site could buy."""

    rules: VesselRules
    windows: tuple[WindowSpec, ...]
    smallest_m3: float
    largest_m3: float
    reference_m3: float
    reference_pa: float
    reference_cost: float
    """Installed cost at the reference volume and design pressure [currency]."""
    volume_exponent: float
    """Cost scales with (volume / reference) ** volume_exponent."""
    pressure_cost_per_pa: float
    """Relative change of cost per pascal of charged pressure above the reference [1/Pa]."""
    life_years: int
    maintenance_cost: float
    """Inspection and maintenance per year while a vessel stands [currency/a]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class StartLimit:
    """How far the fixed starts of a batch may be shifted to spare peaks."""

    batch: str
    earlier_s: float
    later_s: float


@dataclass(frozen=True, slots=True, kw_only=True)
class ScheduleRequest:
    """Demand to be drawn from a batch schedule, alone or on top of the record."""

    schedule: BatchSchedule
    seed: int
    first_monday: dt.date | None
    """None where the schedule comes on top of the record, whose days and steps it then takes."""
    weeks: int
    """Weeks to draw; 0 on top of a record."""
    step_s: float
    """Step of the drawn demand [s]; 0 on top of a record."""
    week_share: float | None
    """Go on with the week whose storage need this share of the weeks does not exceed [1]; None for all."""
    start_limits: tuple[StartLimit, ...]
    """Batches whose fixed starts may be shifted."""


@dataclass(frozen=True, slots=True, kw_only=True)
class PlanRequest:
    """How the plan is to be made."""

    step_s: float
    time_limit_s: float
    """Per alternative [s]."""
    gap: float
    """Asked relative gap [1]."""
    typical_days_error: float
    """Largest error in operating cost of the typical days [1]."""
    reference: str
    alternatives: tuple[str, ...]
    unmet_tolerance_kg_per_year: float


@dataclass(frozen=True, slots=True, kw_only=True)
class ReplayRequest:
    """How plans are tried on the whole record."""

    trials: int
    """Runs over half the record to tune the controls of one plant."""
    seed: int


@dataclass(frozen=True, slots=True, kw_only=True)
class UncertainQuantity:
    """A quantity of the case that scenarios change by a random factor."""

    name: str
    distribution: str
    """``uniform``, ``triangular`` or ``lognormal``."""
    low_deviation: float
    """Deviation from the stated value [1]; of growth, per year."""
    likely_deviation: float
    """Peak of a triangular distribution [1]."""
    high_deviation: float
    yearly_volatility: float
    """Standard deviation of the logarithm of the random walk per year [1]."""
    correlation: float
    """Of its normal score with that of the fuel price [1]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class RiskRequest:
    """Random scenarios of what is uncertain."""

    scenarios: int
    seed: int
    uncertain: tuple[UncertainQuantity, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Case:
    """One site and one question."""

    folder: Path
    name: str
    question: str
    record_file: Path | None
    """None where a batch schedule alone makes the demand."""
    record_format: RecordFormat | None
    schedule: ScheduleRequest | None
    """None where the record alone makes the demand."""
    conditions: SteamConditions
    fuel: FuelSpec
    boilers: tuple[BoilerOffer, ...]
    """Existing ones first, then the catalogue, each in file order."""
    vessel: VesselOffer | None
    prices: Prices
    finance: Finance
    fan_power_w_per_kg_s: float
    """Electric power of fan and feed pump per steam flow [W s/kg]."""
    plan: PlanRequest
    replay: ReplayRequest
    risk: RiskRequest | None
    """None where the case says nothing of what is uncertain."""
    notices: tuple[Notice, ...]
    """Every number that the program assumed because the case did not state it."""
    fuel_price_basis: str
    """``lhv`` or ``hhv``: the basis on which the case states and the outputs show fuel energy."""
    input_hashes: tuple[tuple[str, str], ...]
    """(file name, sha256) of every input."""
