"""What a person must say about a record file, or may leave to be detected."""

from __future__ import annotations

import zoneinfo
from dataclasses import dataclass

from evenfire.errors import Problem

POUND_KG = 0.45359237
"""The avoirdupois pound, exact by the agreement of 1959 [kg]."""

FLOW_KG_S = {"kg/s": 1.0, "kg/h": 1.0 / 3600.0, "t/h": 1000.0 / 3600.0, "lb/h": POUND_KG / 3600.0}
"""Mass flow units [kg/s]."""
COUNTER_KG = {"kg": 1.0, "t": 1000.0, "lb": POUND_KG}
"""Units of a counter that only rises [kg]."""
AMOUNT_KG = {"kg/step": 1.0, "t/step": 1000.0, "lb/step": POUND_KG}
"""Units of steam per logged step [kg]."""
POWER_W = {"kW": 1.0e3, "MW": 1.0e6}
"""Heat or fuel power units [W]."""
FUEL_M3_S = {"m3/h": 1.0 / 3600.0}
"""Fuel volume flow units [m3/s]."""
FLOW_UNITS = (*FLOW_KG_S, *COUNTER_KG, *AMOUNT_KG, *POWER_W, *FUEL_M3_S)

GAP_RULES = ("refuse", "hold", "interpolate", "zero")
FIXED_TIME = "fixed"
"""The word for a clock that is never changed to summer time."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Meter:
    """A further column to add to, or take from, the flow column, in the same unit."""

    column: str
    factor: float
    """1 to add, -1 to take away; other factors for a share [1]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class HeatMeter:
    """How steam follows from a heat or fuel meter."""

    heat_j_per_kg: float
    """Heat taken up per kilogram of steam: steam less feedwater enthalpy [J/kg]."""
    boiler_efficiency: float | None = None
    """Steam heat over fuel heat on the fuel meter's basis [1]; None for a meter of steam heat."""
    fuel_j_per_m3: float | None = None
    """Calorific value on the same basis, for a fuel meter in m3/h [J/m3]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class RecordFormat:
    """What the columns of a record file mean.

    A field left at its empty default is detected where the file decides it; where it does not, the
    file is refused and both readings are shown.
    """

    time_column: str
    flow_column: str
    flow_unit: str
    """One of ``FLOW_UNITS``: a mean flow, a counter (kg, t, lb), steam per step, heat or fuel."""
    gaps: str
    """What to do where values are missing: ``refuse``, ``hold``, ``interpolate`` or ``zero``."""
    largest_gap_s: float
    """Longest gap that may be filled [s]."""
    clock_column: str = ""
    """Column of the time of day where ``time_column`` holds the date alone."""
    sheet: str = ""
    """Sheet of a workbook; the only one when left out."""
    header_row: int = 1
    """Row of the column names, as an editor counts."""
    delimiter: str = ""
    decimal: str = ""
    """``.`` or ``,``."""
    encoding: str = ""
    date_order: str = ""
    """``ymd``, ``dmy`` or ``mdy``."""
    zone: str = ""
    """Zone of local time, e.g. ``Europe/Berlin``, or ``fixed`` for a clock without summer time."""
    stamp: str = "start"
    """Whether a time stamp stands at the ``start`` or the ``end`` of its step."""
    logging: str = "regular"
    """``regular``, or ``on change``: a value holds until the next row."""
    step_s: float = 0.0
    """Step onto which a record logged on change is averaged [s]; 0 for a regular one."""
    further_meters: tuple[Meter, ...] = ()
    status_column: str = ""
    good_status: tuple[str, ...] = ()
    """Words in ``status_column`` that mean a good value; rows with others count as missing."""
    missing_values: tuple[str, ...] = ()
    """Cells of the flow columns that mean no value, e.g. ``Bad`` or ``-9999``."""
    negative_flow: str = "refuse"
    """``refuse``, or ``zero`` to take negative flow as none."""
    counter_rollover: float = 0.0
    """Reading after which the counter starts again at 0, in its own unit; 0 when it never does."""
    heat: HeatMeter | None = None
    """Needed for kW, MW and m3/h."""
    share_before_meter: float = 0.0
    """Share of all steam made that leaves ahead of the meter, as the deaerator's does [1]."""

    @property
    def meters(self) -> tuple[Meter, ...]:
        """All flow columns with their factors, ``flow_column`` first."""
        return (Meter(column=self.flow_column, factor=1.0), *self.further_meters)

    @property
    def text_columns(self) -> tuple[str, ...]:
        """Columns that are read as text."""
        named = (self.time_column, self.clock_column, self.status_column)
        return tuple(column for column in named if column)

    @property
    def columns(self) -> tuple[str, ...]:
        """Every column that is read."""
        return self.text_columns + tuple(meter.column for meter in self.meters)


def format_problems(form: RecordFormat, source: str) -> list[Problem]:
    """What cannot be right in a record format, whatever the file holds.

    Use it before a file is opened. Codes: R113 for a word or number that is not allowed, R103 for a
    column named twice, R124 for an unknown zone, R128 for a missing or impossible heat meter.

    >>> form = RecordFormat(
    ...     time_column="time", flow_column="flow", flow_unit="kg/min", gaps="refuse", largest_gap_s=0.0
    ... )
    >>> [problem.found for problem in format_problems(form, "steam.csv")]
    ["found 'kg/min'"]
    """
    choices = {
        "flow unit": (form.flow_unit, FLOW_UNITS),
        "rule for gaps": (form.gaps, GAP_RULES),
        "stamp": (form.stamp, ("start", "end")),
        "logging": (form.logging, ("regular", "on change")),
        "negative flow": (form.negative_flow, ("refuse", "zero")),
        "decimal": (form.decimal, ("", ".", ",")),
        "date order": (form.date_order, ("", "ymd", "dmy", "mdy")),
    }
    problems = [
        _problem(
            "R113", source, name, f"found '{word}'", "must be one of " + ", ".join(w for w in words if w)
        )
        for name, (word, words) in choices.items()
        if word not in words
    ]
    problems += _number_problems(form, source)
    twice = sorted({column for column in form.columns if form.columns.count(column) > 1})
    problems += [
        _problem("R103", source, f"column '{column}'", "is named for two purposes", "name different columns")
        for column in twice
    ]
    if form.zone not in ("", FIXED_TIME) and form.zone not in zoneinfo.available_timezones():
        allowed = f"give a name such as Europe/Berlin, or '{FIXED_TIME}' for a clock without summer time"
        problems.append(_problem("R124", source, "zone", f"found '{form.zone}'", allowed))
    return problems + _heat_problems(form, source)


def _number_problems(form: RecordFormat, source: str) -> list[Problem]:
    problems = []
    if form.header_row < 1:
        problems.append(
            _problem("R113", source, "header row", f"found {form.header_row}", "rows count from 1")
        )
    if len(form.delimiter) > 1:
        allowed = "must be one character"
        problems.append(_problem("R113", source, "delimiter", f"found '{form.delimiter}'", allowed))
    on_change = form.logging == "on change"
    if on_change and not (form.step_s > 0.0 and 86_400.0 % form.step_s == 0.0):
        allowed = "a record logged on change needs a step that divides a day, e.g. 60 s"
        problems.append(_problem("R113", source, "step", f"found {form.step_s:g} s", allowed))
    if form.logging == "regular" and form.step_s != 0.0:
        allowed = "leave it out: the step of a regular record is read from its time stamps"
        problems.append(_problem("R113", source, "step", f"found {form.step_s:g} s", allowed))
    if on_change and (form.flow_unit in AMOUNT_KG or form.stamp == "end"):
        found = f"unit '{form.flow_unit}' with stamps at the {form.stamp}"
        allowed = "a record logged on change holds each value from its time stamp on"
        problems.append(_problem("R113", source, "logging", found, allowed))
    if form.counter_rollover < 0.0 or (form.counter_rollover and form.flow_unit not in COUNTER_KG):
        found = f"found {form.counter_rollover:g} for the unit '{form.flow_unit}'"
        allowed = "must be positive, and only a counter (" + ", ".join(COUNTER_KG) + ") has one"
        problems.append(_problem("R113", source, "counter rollover", found, allowed))
    if form.status_column and not form.good_status:
        allowed = "list the words that mean a good value"
        problems.append(_problem("R126", source, "good status", "found none", allowed))
    return problems


def _heat_problems(form: RecordFormat, source: str) -> list[Problem]:
    needs_heat = form.flow_unit in POWER_W or form.flow_unit in FUEL_M3_S
    if needs_heat != (form.heat is not None):
        found = f"unit '{form.flow_unit}' {'without' if needs_heat else 'with'} a heat meter's data"
        allowed = "kW, MW and m3/h need the heat per kilogram of steam; other units do not"
        return [_problem("R128", source, "heat meter", found, allowed)]
    if form.heat is None:
        return []
    problems = []
    if not 1.0e6 <= form.heat.heat_j_per_kg <= 4.0e6:
        found = f"found {form.heat.heat_j_per_kg / 1e3:g} kJ/kg"
        allowed = "steam takes up between 1000 and 4000 kJ/kg above feedwater"
        problems.append(_problem("R128", source, "heat per kilogram of steam", found, allowed))
    efficiency = form.heat.boiler_efficiency
    if efficiency is not None and not 0.3 <= efficiency <= 1.1:
        allowed = "must lie between 0.3 and 1.1"
        problems.append(_problem("R128", source, "boiler efficiency", f"found {efficiency:g}", allowed))
    by_volume = form.flow_unit in FUEL_M3_S
    if by_volume and (efficiency is None or not (form.heat.fuel_j_per_m3 or 0.0) > 0.0):
        allowed = "m3/h needs a calorific value per m3 and a boiler efficiency on the same basis"
        problems.append(_problem("R128", source, "fuel meter", "found not both", allowed))
    return problems


def _problem(code: str, source: str, where: str, found: str, allowed: str) -> Problem:
    return Problem(code=code, where=f"{source}: {where}", found=found, allowed=allowed)
