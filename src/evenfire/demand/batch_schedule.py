"""Demand described as equipment: what a batch takes, when batches start, when people work."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass

from evenfire.errors import OutOfRangeError, Problem, RecordError
from evenfire.units import SECONDS_PER_DAY


@dataclass(frozen=True, slots=True, kw_only=True)
class Phase:
    """One part of a batch with constant steam flow."""

    name: str
    duration_s: float
    flow_kg_s: float
    duration_spread: float = 0.0
    """The duration varies evenly by up to this share either way [1]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Shift:
    """A time of work that comes back on the same days of every week."""

    name: str
    weekdays: tuple[int, ...]
    """Days on which it starts, Monday being 0."""
    start_s: float
    """Start after midnight [s]."""
    duration_s: float
    flow_kg_s: float = 0.0
    """Steam for heating, tanks and losses while it lasts [kg/s]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Resource:
    """Units of which a batch needs one: vessels, a loading crane, a place at the filling line."""

    name: str
    units: int


@dataclass(frozen=True, slots=True, kw_only=True)
class Batch:
    """A batch that is made a number of times in each of its shifts."""

    name: str
    phases: tuple[Phase, ...]
    shifts: tuple[str, ...]
    """Names of its shifts."""
    starts_s: tuple[float, ...] = ()
    """Fixed starts after the start of the shift [s]; empty for random ones."""
    batches_per_shift: int = 0
    """Number of random starts."""
    window_s: tuple[float, float] = (0.0, 0.0)
    """Earliest and latest random start after the start of the shift [s]; alike: all ready at once."""
    resource: str = ""
    """Resource that a batch waits for, in the order in which batches are ready; empty for none."""
    held_phases: int = 0
    """Number of phases for which a unit is held; 0 for all."""
    turnaround_s: float = 0.0
    """Time that a unit needs between two batches [s]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class BatchSchedule:
    """All equipment of a site, or new equipment beside a measured record."""

    name: str
    shifts: tuple[Shift, ...]
    batches: tuple[Batch, ...]
    resources: tuple[Resource, ...] = ()
    base_kg_s: float = 0.0
    """Steam that flows all the time: losses, tracing [kg/s]."""
    closed_dates: tuple[dt.date, ...] = ()
    """Days on which no shift starts."""


def heating_steam_kg(
    mass_kg: float, heat_capacity_j_kgk: float, rise_k: float, latent_j_per_kg: float, loss_share: float
) -> float:
    """Steam [kg] that heats a batch by condensing: m c dT / (latent heat x (1 - losses)).

    Use it where a batch is known by its mass rather than by a flow. The condensate leaves at steam
    temperature; steam blown into the batch gives up more heat, so less is needed.

    Parameters
    ----------
    mass_kg
        Mass heated, vessel included [kg].
    heat_capacity_j_kgk
        Mean specific heat capacity [J/(kg K)].
    rise_k
        Temperature rise [K].
    latent_j_per_kg
        Latent heat at the pressure in the heating surface [J/kg].
    loss_share
        Share of the steam's heat that is lost [1], 0 to 0.9.

    Returns
    -------
    float
        Steam [kg].

    Raises
    ------
    OutOfRangeError
        P160 when a quantity is negative, the latent heat below 1000 or above 2501 kJ/kg, or the loss
        outside 0 to 0.9.

    Examples
    --------
    Two tonnes of water from 20 to 80 degC with steam of 4 bar gauge (2107 kJ/kg) and 10 % loss:

    >>> round(heating_steam_kg(2000.0, 4180.0, 60.0, 2.107e6, 0.1), 1)
    264.5
    """
    limits = (
        ("mass", mass_kg, "kg", 0.0, 1e6),
        ("heat capacity", heat_capacity_j_kgk, "J/(kg K)", 100.0, 2e4),
        ("temperature rise", rise_k, "K", 0.0, 400.0),
        ("latent heat", latent_j_per_kg, "J/kg", 1.0e6, 2.501e6),
        ("share of heat lost", loss_share, "", 0.0, 0.9),
    )
    problems = [
        Problem(
            code="P160",
            where=name,
            found=f"found {value:g} {unit}".rstrip(),
            allowed=f"must lie between {low:g} and {high:g} {unit}".rstrip(),
        )
        for name, value, unit, low, high in limits
        if not low <= value <= high
    ]
    if problems:
        raise OutOfRangeError(*problems)
    return mass_kg * heat_capacity_j_kgk * rise_k / (latent_j_per_kg * (1.0 - loss_share))


def heating_phase(name: str, duration_s: float, steam_kg: float) -> Phase:
    """Phase that takes a given mass of steam [kg] evenly over its duration [s].

    >>> heating_phase("heat up", 900.0, 270.0).flow_kg_s
    0.3
    """
    if not duration_s > 0.0:
        problem = _problem(f"phase '{name}', duration", f"found {duration_s:g} s", "must be positive")
        raise RecordError(problem)
    return Phase(name=name, duration_s=duration_s, flow_kg_s=steam_kg / duration_s)


def check_schedule(schedule: BatchSchedule) -> None:
    """Refuse a schedule that cannot be meant (R150), all problems at once.

    Use it before a schedule is sampled. Every batch needs phases, known shifts, a start rule that lies
    within each of its shifts, and a known resource; numbers must not be negative.
    """
    problems = []
    if not schedule.base_kg_s >= 0.0:
        problems.append(_negative("base flow", schedule.base_kg_s, "kg/s"))
    for names, word in (
        ([shift.name for shift in schedule.shifts], "shift"),
        ([resource.name for resource in schedule.resources], "resource"),
        ([batch.name for batch in schedule.batches], "batch"),
    ):
        for name in sorted({name for name in names if names.count(name) > 1}):
            problems.append(_problem(f"{word} '{name}'", "stands there twice", "give each its own name"))
    for shift in schedule.shifts:
        problems += _shift_problems(shift)
    for resource in schedule.resources:
        if resource.units < 1:
            found = f"found {resource.units} units"
            problems.append(_problem(f"resource '{resource.name}'", found, "needs at least one"))
    for batch in schedule.batches:
        problems += _batch_problems(batch, schedule)
    if problems:
        raise RecordError(*problems)


def _shift_problems(shift: Shift) -> list[Problem]:
    where = f"shift '{shift.name}'"
    problems = []
    if not shift.weekdays or any(day not in range(7) for day in shift.weekdays):
        found = f"found weekdays {shift.weekdays}"
        problems.append(_problem(where, found, "list days from 0 (Monday) to 6 (Sunday)"))
    if not 0.0 <= shift.start_s < SECONDS_PER_DAY:
        problems.append(_problem(where, f"found a start at {shift.start_s:g} s", "must lie in the day"))
    if not 0.0 < shift.duration_s <= SECONDS_PER_DAY:
        found = f"found a duration of {shift.duration_s:g} s"
        problems.append(_problem(where, found, "must be positive and at most a day"))
    if not shift.flow_kg_s >= 0.0:
        problems.append(_negative(f"{where}, flow", shift.flow_kg_s, "kg/s"))
    return problems


def _batch_problems(batch: Batch, schedule: BatchSchedule) -> list[Problem]:
    where = f"batch '{batch.name}'"
    problems = []
    if not batch.phases:
        problems.append(_problem(where, "found no phase", "give at least one"))
    for phase in batch.phases:
        at = f"{where}, phase '{phase.name}'"
        if not phase.duration_s > 0.0:
            problems.append(_problem(at, f"found {phase.duration_s:g} s", "must last longer than 0 s"))
        if not phase.flow_kg_s >= 0.0:
            problems.append(_negative(at, phase.flow_kg_s, "kg/s"))
        if not 0.0 <= phase.duration_spread < 1.0:
            found = f"found a spread of {phase.duration_spread:g}"
            problems.append(_problem(at, found, "must be at least 0 and below 1"))
    if bool(batch.starts_s) == (batch.batches_per_shift > 0):
        found = f"found {len(batch.starts_s)} fixed starts and {batch.batches_per_shift} random ones"
        problems.append(_problem(where, found, "give fixed starts or a number of random ones"))
    if not batch.turnaround_s >= 0.0:
        problems.append(_negative(f"{where}, turnaround", batch.turnaround_s, "s"))
    if batch.held_phases not in range(len(batch.phases) + 1):
        found = f"found {batch.held_phases} held phases"
        problems.append(_problem(where, found, f"must lie between 0 and {len(batch.phases)}"))
    resources = [resource.name for resource in schedule.resources]
    if batch.resource and batch.resource not in resources:
        allowed = "name one of: " + ", ".join(resources) if resources else "list it among the resources"
        problems.append(_problem(where, f"no resource '{batch.resource}'", allowed))
    shifts = {shift.name: shift for shift in schedule.shifts}
    if not batch.shifts:
        problems.append(_problem(where, "found no shift", "name at least one"))
    for name in batch.shifts:
        if name not in shifts:
            problems.append(_problem(where, f"no shift '{name}'", "name one of: " + ", ".join(shifts)))
            continue
        earliest, latest = batch.window_s
        starts = batch.starts_s or (earliest, latest)
        if min(starts) < 0.0 or max(starts) >= shifts[name].duration_s or earliest > latest:
            found = f"found starts from {min(starts):g} to {max(starts):g} s"
            allowed = f"must lie in order within the {shifts[name].duration_s:g} s of shift '{name}'"
            problems.append(_problem(where, found, allowed))
    return problems


def _negative(where: str, value: float, unit: str) -> Problem:
    return _problem(where, f"found {value:g} {unit}", "must not be negative")


def _problem(where: str, found: str, allowed: str) -> Problem:
    return Problem(code="R150", where=f"batch schedule: {where}", found=found, allowed=allowed)
