"""The schedule section of a case file: demand described as equipment, shifts and batches."""

from __future__ import annotations

from typing import Annotated, Literal

from evenfire.case.schema_section import Section, entry, quantity

Weekday = Literal["mon", "tue", "wed", "thu", "fri", "sat", "sun"]
CLOCK = r"^([01]\d|2[0-3]):[0-5]\d$"


class Shift(Section):
    """A time of work that comes back on the same days of every week."""

    name: Annotated[str, entry("Name of the shift.", shortest=1)]
    weekdays: Annotated[tuple[Weekday, ...], entry("Days on which it starts.", shortest=1)]
    start: Annotated[str, entry("Time of day at which it starts.", pattern=CLOCK, form="as '06:00'")]
    hours: Annotated[float, quantity("h", "How long it lasts.", above=0.0, at_most=24.0)]
    flow_kg_h: Annotated[
        float,
        quantity("kg/h", "Steam for heating, tanks and losses while it lasts.", at_least=0.0, at_most=1.0e6),
    ] = 0.0


class Resource(Section):
    """Units of which a batch needs one, such as vessels or a loading crane."""

    name: Annotated[str, entry("Name of the resource.", shortest=1)]
    units: Annotated[int, quantity("1", "How many there are.", at_least=1, at_most=1000)]


class Phase(Section):
    """One part of a batch with constant steam flow."""

    name: Annotated[str, entry("Name of the phase.", shortest=1)]
    minutes: Annotated[float, quantity("min", "How long it lasts.", above=0.0, at_most=10_000.0)]
    spread_percent: Annotated[
        float,
        quantity("%", "The duration varies evenly by this much either way.", at_least=0.0, below=100.0),
    ] = 0.0
    flow_kg_h: Annotated[
        float | None,
        quantity("kg/h", "Steam flow; or give steam_kg, or mass_kg.", at_least=0.0, at_most=1.0e6),
    ] = None
    steam_kg: Annotated[
        float | None, quantity("kg", "Steam of the whole phase.", at_least=0.0, at_most=1.0e6)
    ] = None
    mass_kg: Annotated[
        float | None,
        quantity(
            "kg", "Mass heated, vessel included; needs the three keys below.", at_least=0.0, at_most=1.0e6
        ),
    ] = None
    heat_capacity_kj_per_kg_k: Annotated[
        float | None, quantity("kJ/(kg K)", "Its mean specific heat.", at_least=0.1, at_most=20.0)
    ] = None
    temperature_rise_k: Annotated[
        float | None, quantity("K", "By how much it is heated.", at_least=0.0, at_most=400.0)
    ] = None
    heat_loss_percent: Annotated[
        float, quantity("%", "Share of the steam's heat that is lost.", at_least=0.0, at_most=90.0)
    ] = 0.0


class Batch(Section):
    """A batch that is made a number of times in each of its shifts."""

    name: Annotated[str, entry("Name of the batch.", shortest=1)]
    shifts: Annotated[tuple[str, ...], entry("Names of the shifts in which it is made.", shortest=1)]
    phases: Annotated[tuple[Phase, ...], entry("Its phases, in order.", shortest=1)]
    starts_minutes: Annotated[
        tuple[float, ...],
        entry("Fixed starts, minutes after the start of the shift; or give batches_per_shift."),
    ] = ()
    batches_per_shift: Annotated[
        int, quantity("1", "Number of random starts in each shift.", at_least=0, at_most=10_000)
    ] = 0
    earliest_start_minutes: Annotated[
        float,
        quantity("min", "Earliest random start after the start of the shift.", at_least=0.0, at_most=1440.0),
    ] = 0.0
    latest_start_minutes: Annotated[
        float,
        quantity("min", "Latest random start after the start of the shift.", at_least=0.0, at_most=1440.0),
    ] = 0.0
    resource: Annotated[str, entry("Resource of which it needs a unit, and waits for one.")] = ""
    held_phases: Annotated[
        int, quantity("1", "Number of phases for which the unit is held; 0 for all.", at_least=0, at_most=100)
    ] = 0
    turnaround_minutes: Annotated[
        float, quantity("min", "Time a unit needs between two batches.", at_least=0.0, at_most=1440.0)
    ] = 0.0
    may_start_earlier_minutes: Annotated[
        float,
        quantity(
            "min", "How much earlier a fixed start may be put to spare peaks.", at_least=0.0, at_most=1440.0
        ),
    ] = 0.0
    may_start_later_minutes: Annotated[
        float,
        quantity(
            "min", "How much later a fixed start may be put to spare peaks.", at_least=0.0, at_most=1440.0
        ),
    ] = 0.0


class Schedule(Section):
    """Demand described as equipment: alone where there is no [record], else on top of it."""

    name: Annotated[str, entry("What the schedule describes.", shortest=1)] = "batches"
    seed: Annotated[
        int, quantity("1", "The same seed draws the same demand.", at_least=0, at_most=2_000_000_000)
    ] = 1
    base_kg_h: Annotated[
        float, quantity("kg/h", "Steam that flows all the time.", at_least=0.0, at_most=1.0e6)
    ] = 0.0
    closed_dates: Annotated[
        tuple[str, ...], entry("Days on which no shift starts, in quotes as '2026-12-25'.")
    ] = ()
    first_monday: Annotated[
        str,
        entry(
            "Monday on which the drawn demand begins; only without [record].",
            pattern=r"^(\d{4}-\d{2}-\d{2})?$",
            form="in quotes, as '2026-02-02'",
        ),
    ] = ""
    weeks: Annotated[
        int | None, quantity("1", "Weeks to draw; only without [record].", at_least=1, at_most=520)
    ] = None
    size_for_week_percent: Annotated[
        float | None,
        quantity(
            "%",
            "Draw the weeks and go on with the one whose storage need so many percent of them do not exceed,"
            " 95 for the P95 week; only without [record].",
            above=0.0,
            at_most=100.0,
        ),
    ] = None
    step_seconds: Annotated[
        float | None,
        quantity("s", "Step of the drawn demand; only without [record].", at_least=1.0, at_most=3600.0),
    ] = None
    shift: Annotated[tuple[Shift, ...], entry("The shifts.", shortest=1)]
    resource: Annotated[tuple[Resource, ...], entry("What batches wait for.")] = ()
    batch: Annotated[tuple[Batch, ...], entry("The batches.", shortest=1)]
