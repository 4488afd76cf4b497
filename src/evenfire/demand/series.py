"""The measured record and its weighted typical days, as plain frozen data."""

from __future__ import annotations

import datetime as dt
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from evenfire.errors import Notice

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class Gap:
    """Steps of a record that no meter measured, and how they were filled."""

    first_step: int
    last_step: int
    """Both ends included."""
    rule: str
    """``hold``, ``interpolate``, ``zero``, or ``spread`` for the known rise of a counter."""


@dataclass(frozen=True, slots=True, kw_only=True)
class DemandRecord:
    """Steam demand at the step at which it was logged, complete and regular."""

    start: dt.datetime
    """Local time at the start of the first step."""
    step_s: float
    """Length of a step [s]."""
    flow_kg_s: FloatArray = field(repr=False)
    """Mean demand of each step [kg/s], shape (steps,)."""
    source: str
    """Name of the file the record came from."""
    notices: tuple[Notice, ...] = ()
    """What was found and done on import (gaps filled, rows dropped), in numbers."""
    gaps: tuple[Gap, ...] = field(default=(), repr=False)
    """Every filled gap, in order of time."""

    @property
    def days(self) -> float:
        """Length of the record [days]."""
        return len(self.flow_kg_s) * self.step_s / 86_400.0


@dataclass(frozen=True, slots=True, kw_only=True)
class TypicalDay:
    """One real day of the record that stands for several."""

    name: str
    """``workday``, ``saturday``, ``sunday`` or ``peak day`` (numbered where there are several)."""
    date: dt.date
    days_per_year: float
    """Weight: how many days of a year this day stands for."""
    flow_kg_s: FloatArray = field(repr=False)
    """Mean demand of each step of the day [kg/s], shape (steps_per_day,)."""


@dataclass(frozen=True, slots=True, kw_only=True)
class TypicalDays:
    """Weighted real days and what they get wrong."""

    step_s: float
    days: tuple[TypicalDay, ...]
    assigned: tuple[int, ...] = field(repr=False)
    """Position in ``days`` of the day that stands for each complete calendar day of the record, in order."""
    energy_error: float
    """(steam of the weighted days - steam of the record) / steam of the record [1]."""
    duration_curve_error: float
    """Mean absolute difference of the two load duration curves over mean demand [1]."""
    peak_error: float
    """(largest step of the typical days - largest raw step of the record) / the latter [1]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class StorageNeedPiece:
    """One linear piece of S(C): the interval of the record that needs the most steam from storage."""

    energy_kg: float
    """Steam demand of the interval [kg]."""
    duration_s: float
    """Length of the interval [s]."""
    first_step: int
    last_step: int
    """Interval of the record, both ends included."""


@dataclass(frozen=True, slots=True, kw_only=True)
class StorageNeed:
    """S(C): steam that storage must hold for firm boiler capacity C, convex and piecewise linear.

    ``storage_kg[i]`` is exact at ``capacity_kg_s[i]``; between two breakpoints S is the line of
    ``pieces[i]``: ``energy_kg - capacity * duration_s``.
    """

    capacity_kg_s: FloatArray = field(repr=False)
    """Breakpoints, rising, from the mean demand (or the asked lower end) to the peak [kg/s]."""
    storage_kg: FloatArray = field(repr=False)
    pieces: tuple[StorageNeedPiece, ...] = field(repr=False)
    """One per interval between breakpoints."""
