"""Which inputs are varied, over which values."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass
from pathlib import Path

from evenfire.case.change import NumericInput, numeric_input
from evenfire.errors import Problem, SweepError

MOST_AXES = 2
MOST_VALUES = 1000
_FORM = "give PATH=LOW:HIGH:COUNT, e.g. fuel.price_per_mwh=20:120:11"


@dataclass(frozen=True, slots=True, kw_only=True)
class Axis:
    """One input of the case with the values it takes, in equal steps."""

    path: str
    low: float
    high: float
    count: int

    @property
    def values(self) -> tuple[float, ...]:
        """From low to high, both included, in the unit of the input."""
        last = self.count - 1
        return tuple(
            self.high if i == last else self.low + (self.high - self.low) * i / last
            for i in range(self.count)
        )


def axis(text: str) -> Axis:
    """An axis as written on the command line.

    Parameters
    ----------
    text : str
        ``PATH=LOW:HIGH:COUNT``.

    Raises
    ------
    SweepError
        S101 not of this form, S102 no range, S103 a count outside 2 to 1000.

    Examples
    --------
    >>> axis("fuel.price_per_mwh=20:120:3").values
    (20.0, 70.0, 120.0)
    """
    path, equals, numbers = text.rpartition("=")
    parts = numbers.split(":")
    if not equals or not path.strip() or len(parts) != 3:
        raise _refusal("S101", text, "is not of the form PATH=LOW:HIGH:COUNT", _FORM)
    try:
        low, high = float(parts[0]), float(parts[1])
        count = int(parts[2])
    except ValueError as error:
        raise _refusal("S101", text, f"'{numbers}' holds something that is no number", _FORM) from error
    if not (math.isfinite(low) and math.isfinite(high) and low < high):
        raise _refusal("S102", text, f"found {low:g} to {high:g}", "LOW must be below HIGH, both finite")
    if not 2 <= count <= MOST_VALUES:
        raise _refusal("S103", text, f"found {count} values", f"COUNT must lie between 2 and {MOST_VALUES}")
    return Axis(path=path.strip(), low=low, high=high, count=count)


def axes_inputs(file: Path, axes: tuple[Axis, ...]) -> tuple[NumericInput, ...]:
    """The inputs that axes vary, checked against the case.

    Raises
    ------
    SweepError
        S104 more than two axes, S105 one input on both.
    CaseError
        C123 for a path that is not a numeric input of the case.
    """
    if len(axes) > MOST_AXES:
        raise _refusal(
            "S104", ", ".join(x.path for x in axes), f"{len(axes)} inputs", "one or two inputs may be varied"
        )
    inputs = tuple(numeric_input(file, each.path) for each in axes)
    names = [re.sub(r"\s", "", each.path) for each in inputs]
    if len(set(names)) < len(names):
        raise _refusal("S105", axes[0].path, "is varied twice", "vary two different inputs")
    return inputs


def _refusal(code: str, text: str, found: str, allowed: str) -> SweepError:
    return SweepError(Problem(code=code, where=f"--vary {text}", found=found, allowed=allowed))
