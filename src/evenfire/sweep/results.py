"""What a sweep found, in trade units: the library's result and the report's only input."""

from __future__ import annotations

from dataclasses import dataclass
from importlib.metadata import version

from evenfire.errors import Notice

_PACKAGES = ("evenfire", "highspy", "numpy", "numba", "scipy")


def package_versions() -> tuple[tuple[str, str], ...]:
    """Versions of everything that decides on numbers."""
    return tuple((package, version(package)) for package in _PACKAGES)


@dataclass(frozen=True, slots=True, kw_only=True)
class PointAlternative:
    """One alternative at one point of a sweep."""

    name: str
    standing: str
    """``planned``, ``gap not reached``, ``infeasible`` or ``no plan found``."""
    net_present_cost: float | None
    bound: float | None
    """Proven lower bound of the net present cost [currency]."""
    gap: float | None
    """(cost - bound) / cost [1]."""
    investment: float | None
    """First purchases with contingency at the point's prices [currency]."""
    boilers: tuple[str, ...]
    vessel_volume_m3: float | None
    """None where the cheapest plant has no vessel."""
    charged_bar_g: float | None
    discharged_bar_g: float | None
    fuel_mwh_per_year: float | None
    """On the case's own calorific basis."""
    burner_starts_per_year: float | None
    unmet_steam_t_per_year: float | None


@dataclass(frozen=True, slots=True, kw_only=True)
class SweepPoint:
    """Every alternative at one combination of values."""

    values: tuple[float, ...]
    """One per varied input, in its unit."""
    alternatives: tuple[PointAlternative, ...]
    winner: str | None
    """Least net present cost; of equal ones the first. None where nothing is planned."""


@dataclass(frozen=True, slots=True, kw_only=True)
class SweepBreakEven:
    """A value of the input ``SweepResult.along`` at which two alternatives cost the same."""

    cheaper_below: str
    cheaper_above: str
    value: float
    low: float
    high: float
    """The true break-even lies between ``low`` and ``high`` if ``proven``."""
    proven: bool
    at: tuple[float, ...]
    """Values of the other varied input; empty where one alone is varied."""


@dataclass(frozen=True, slots=True, kw_only=True)
class SweepStretch:
    """A stretch of the input ``SweepResult.along`` with one cheapest alternative."""

    low: float
    high: float
    winner: str
    rivals: tuple[str, ...]
    """Alternatives that the proven bounds do not exclude somewhere on the stretch."""
    at: tuple[float, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class VariedInput:
    """One input that a sweep varies."""

    path: str
    unit: str
    stated: float | None
    """As in the case; None where the case leaves it out."""
    values: tuple[float, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class SweepResult:
    """Everything one sweep found."""

    case_name: str
    currency: str
    fuel_basis: str
    inputs: tuple[VariedInput, ...]
    along: int
    """Index of the input along which break-evens and stretches are given."""
    straight: bool
    """Whether every cost is straight in that input: break-evens hold between points too."""
    points: tuple[SweepPoint, ...]
    break_evens: tuple[SweepBreakEven, ...]
    stretches: tuple[SweepStretch, ...]
    ranking: tuple[RankedInput, ...]
    """Inputs one at a time, the one that moves the answer most first; empty where not asked for."""
    asked_gap: float
    notices: tuple[Notice, ...]
    input_hashes: tuple[tuple[str, str], ...]
    versions: tuple[tuple[str, str], ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class RankedEnd:
    """One end of a ranked input."""

    factor: float
    """Times the stated values [1]."""
    net_present_cost: tuple[float | None, ...]
    """Per alternative of the case [currency]."""
    winner: str | None
    saving: float | None
    """Against the reference, of what is cheapest beside it in the case as stated [currency]."""


@dataclass(frozen=True, slots=True, kw_only=True)
class RankedInput:
    """One input, or several of a kind together, low and high."""

    name: str
    paths: tuple[str, ...]
    low: RankedEnd
    high: RankedEnd
    swing: float
    """Difference of the saving between both ends [currency]."""
    gap: float
    """Largest proven gap of any planned alternative at either end [1]."""
