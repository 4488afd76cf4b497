"""Stack loss by the Siegert formula."""

from __future__ import annotations

from dataclasses import dataclass

from evenfire.errors import OutOfRangeError, Problem, out_of_range

OXYGEN_IN_AIR_PERCENT = 21.0
LARGEST_OXYGEN_PERCENT = 18.0


@dataclass(frozen=True, slots=True, kw_only=True)
class SiegertCoefficients:
    """Coefficients of the Siegert formula for one fuel, in percent and kelvin."""

    a1: float
    """For CO2 in dry flue gas: loss = (Tg - Ta) (a1 / CO2 + b)."""
    a2: float
    """For O2 in dry flue gas: loss = (Tg - Ta) (a2 / (21 - O2) + b)."""
    b: float


SIEGERT_COEFFICIENTS: dict[str, SiegertCoefficients] = {
    "natural_gas": SiegertCoefficients(a1=0.37, a2=0.66, b=0.009),
    "gas_oil": SiegertCoefficients(a1=0.50, a2=0.68, b=0.007),
    "lpg": SiegertCoefficients(a1=0.42, a2=0.63, b=0.008),
}


def stack_slope_per_k(fuel_kind: str, o2_percent: float = 3.0) -> float:
    """Efficiency (net) lost per kelvin of hotter stack [1/K].

    (A2 / (21 - O2) + B) / 100.

    Raises
    ------
    OutOfRangeError
        P115 for a fuel without coefficients; P116 for an oxygen content outside 0 to 18 %.

    References
    ----------
    German 1. BImSchV, Annex 2 (from memory; natural gas values seen in public code).

    Examples
    --------
    >>> round(stack_slope_per_k("natural_gas") * 1e4, 3)
    4.567
    """
    coefficients = siegert_coefficients(fuel_kind)
    if not 0.0 <= o2_percent <= LARGEST_OXYGEN_PERCENT:
        raise out_of_range("P116", "oxygen in dry flue gas", o2_percent, "%", 0.0, LARGEST_OXYGEN_PERCENT)
    return (coefficients.a2 / (OXYGEN_IN_AIR_PERCENT - o2_percent) + coefficients.b) / 100.0


def siegert_coefficients(fuel_kind: str) -> SiegertCoefficients:
    """The Siegert coefficients of a fuel.

    Raises
    ------
    OutOfRangeError
        P115 for a fuel without published coefficients.
    """
    if fuel_kind not in SIEGERT_COEFFICIENTS:
        raise OutOfRangeError(
            Problem(
                code="P115",
                where="fuel kind for the stack loss",
                found=f"found '{fuel_kind}'",
                allowed=f"must be one of {', '.join(SIEGERT_COEFFICIENTS)}",
            )
        )
    return SIEGERT_COEFFICIENTS[fuel_kind]
