"""The errors a person can mend, and notices that travel with results into the report.

The command line catches :class:`EvenfireError` alone; any other exception is our own defect.
Codes are never renumbered or reused; each has a section in docs/errors.md.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum


class ExitStatus(IntEnum):
    """What the process tells its caller."""

    DONE = 0
    DEFECT = 1
    REFUSED = 2
    GAP_MISSED = 4
    REPLAY_REFUSED = 5
    INTERRUPTED = 130


@dataclass(frozen=True, slots=True, kw_only=True)
class Problem:
    """One thing wrong with an input, in words for the person who can mend it."""

    code: str
    """Stable code such as ``C104``."""
    where: str
    """File and key path or row, e.g. ``case.toml: boiler 'Old boiler', rating_kg_h``."""
    found: str
    """What was found, with its unit."""
    allowed: str
    """What would be accepted, or what to do."""

    def __str__(self) -> str:
        return f"{self.where}: {self.found}; {self.allowed} [{self.code}]"


@dataclass(frozen=True, slots=True, kw_only=True)
class Notice:
    """A remark that belongs beside a result: something assumed, filled, simplified or odd."""

    code: str
    text: str
    severity: str = "note"
    """``note``, ``assumed`` or ``warning``."""


class EvenfireError(Exception):
    """Base of every error that a user can mend."""

    exit_status = ExitStatus.REFUSED
    most_shown = 20

    def __init__(self, *problems: Problem) -> None:
        if not problems:
            raise ValueError("an EvenfireError needs at least one Problem")
        self.problems = problems
        shown = [str(problem) for problem in problems[: self.most_shown]]
        if len(problems) > self.most_shown:
            shown.append(f"... and {len(problems) - self.most_shown} more")
        super().__init__("\n".join(shown))


class CaseError(EvenfireError):
    """The case file or its tables cannot be used as they are."""


class RecordError(EvenfireError):
    """The measured record cannot be used as it is."""


class OutOfRangeError(EvenfireError):
    """A physical input lies outside the range in which the formula is valid."""


class MoneyError(EvenfireError):
    """A rate, price, investment or horizon with which no honest amount can be computed."""


class OutputError(EvenfireError):
    """The output folder cannot be written."""


class SweepError(EvenfireError):
    """A sweep that cannot be run as asked."""


class QuoteError(EvenfireError):
    """A table of quotes that cannot be used as it is."""


class InfeasibleError(EvenfireError):
    """No plant that the case allows can do what it asks."""


def out_of_range(code: str, name: str, value: float, unit: str, low: float, high: float) -> OutOfRangeError:
    """The error for a physical quantity outside ``[low, high]``."""
    return OutOfRangeError(
        Problem(
            code=code,
            where=name,
            found=f"found {value:g} {unit}",
            allowed=f"must lie between {low:g} and {high:g} {unit}",
        )
    )
