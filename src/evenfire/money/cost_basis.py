"""Cost of equipment that nobody has quoted: published correlations and the capacity exponent."""

from __future__ import annotations

import difflib
import math
from collections.abc import Iterator
from dataclasses import dataclass

from evenfire.errors import MoneyError, Notice, Problem
from evenfire.money.correlations import CORRELATIONS, Correlation
from evenfire.money.terms import CostBasis
from evenfire.units import pa_to_bar_g

ACCURACY = "AACE 18R-97 class 5"
ACCURACY_LOW = -0.5
ACCURACY_HIGH = 1.0


@dataclass(frozen=True, slots=True, kw_only=True)
class CostEstimate:
    """An installed cost from a published correlation."""

    amount: float
    """Installed [currency of the case]."""
    low: float
    """Lower end of the accuracy class [currency]."""
    high: float
    """Upper end of the accuracy class [currency]."""
    notice: Notice
    """Source, basis, range and accuracy, to be shown wherever the amount is."""


def estimated_cost(
    basis: CostBasis, *, size: float, pressure_pa: float, diameter_m: float | None = None
) -> CostEstimate:
    """Installed cost of one piece of equipment by a published correlation.

    Only where there is neither a quote nor a cost curve of the case's own, and always shown as an
    estimate. Formula: cost in the source's dollars times the installation factor, times the
    index at the price date over the source's index, times location factor and exchange rate.

    Parameters
    ----------
    basis : CostBasis
        Which correlation, and how it is brought to the case's place and date.
    size : float
        Size in the correlation's ``size_unit`` (SI).
    pressure_pa : float
        Design pressure, absolute [Pa].
    diameter_m : float, optional
        Inside diameter [m]; needed by the vessel correlations by volume.

    Returns
    -------
    CostEstimate
        Amount, range of accuracy and the notice that belongs beside it.

    Raises
    ------
    MoneyError
        M110 outside the correlation's range of size or pressure, M111 for an unknown correlation,
        M112 for a factor or index that is missing, not positive or does not belong.

    Notes
    -----
    Class 5 of AACE 18R-97 (-50 % to +100 %) is stated for all of them, whatever the source claims: the
    index's makers advise against carrying costs over more than about five years, and the boilers and
    vessels in these sources are those of process plants rather than of a steam supply. Shipping,
    foundations beyond the usual and taxes are left out.

    References
    ----------
    Sources in :data:`evenfire.money.correlations.CORRELATIONS`; Vatavuk, Updating the CE plant cost
    index, Chemical Engineering 109 (January 2002) 62-70; AACE International Recommended Practice 18R-97.

    Examples
    --------
    >>> estimate = estimated_cost(
    ...     CostBasis(correlation="horizontal vessel by volume", cost_index=397.0, currency_per_usd=1.0),
    ...     size=50.0, pressure_pa=19.01325e5, diameter_m=2.5,
    ... )
    >>> estimate.amount
    261510.32
    """
    problems = list(_name_problems(basis))
    if problems:
        raise MoneyError(*problems)
    correlation = CORRELATIONS[basis.correlation]
    pressure_bar_g = pa_to_bar_g(pressure_pa)
    problems = [
        *_factor_problems(basis, correlation),
        *_range_problems(correlation, size, pressure_bar_g, diameter_m),
    ]
    if problems:
        raise MoneyError(*problems)
    factor = _installation_factor(basis, correlation) or 1.0
    cost_usd = correlation.cost_usd(size, pressure_bar_g, diameter_m or 0.0) * factor
    amount = (
        cost_usd * basis.cost_index / correlation.basis_index * basis.location_factor * basis.currency_per_usd
    )
    return CostEstimate(
        amount=amount,
        low=amount * (1.0 + ACCURACY_LOW),
        high=amount * (1.0 + ACCURACY_HIGH),
        notice=Notice(code="M113", text=_estimate_text(basis, correlation), severity="assumed"),
    )


def capacity_scaled_cost(cost: float, *, from_size: float, to_size: float, exponent: float = 0.6) -> float:
    """Cost of equipment of another size by the capacity exponent.

    From one known price to a neighbouring size; not over more than a few times the size. Formula:
    ``cost * (to_size / from_size) ** exponent``.

    Parameters
    ----------
    cost : float
        Known cost [currency].
    from_size, to_size : float
        Size of the known and of the wanted equipment, in one unit.
    exponent : float
        0.6 by the six-tenths rule [1].

    Returns
    -------
    float
        Cost at the wanted size [currency].

    Raises
    ------
    MoneyError
        M110 for a size that is not positive.

    References
    ----------
    Peters and Timmerhaus, Plant Design and Economics for Chemical Engineers, chapter 6.

    Examples
    --------
    >>> capacity_scaled_cost(100_000.0, from_size=5.0, to_size=8.0)
    132578.2
    """
    if not (from_size > 0.0 and to_size > 0.0):
        raise MoneyError(
            Problem(
                code="M110",
                where="cost scaled by capacity",
                found=f"found sizes {from_size:g} and {to_size:g}",
                allowed="both sizes must be above 0",
            )
        )
    return float(cost * (to_size / from_size) ** exponent)


def _installation_factor(basis: CostBasis, correlation: Correlation) -> float | None:
    if basis.installation_factor is not None:
        return basis.installation_factor
    return correlation.installation_factor


def _estimate_text(basis: CostBasis, correlation: Correlation) -> str:
    doubt = "" if correlation.confirmed else "; coefficients not compared with a second copy of the source"
    return (
        f"Cost estimated as '{correlation.name}' from {correlation.source}{doubt};"
        f" {correlation.basis_date} US dollars, index {correlation.basis_index:g} carried to"
        f" {basis.cost_index:g}; valid from {correlation.smallest:g} to {correlation.largest:g}"
        f" {correlation.size_unit}; accuracy {ACCURACY},"
        f" {100 * ACCURACY_LOW:+.0f} % to {100 * ACCURACY_HIGH:+.0f} %. Ask for quotes before deciding."
    )


def _name_problems(basis: CostBasis) -> Iterator[Problem]:
    if basis.correlation not in CORRELATIONS:
        names = ", ".join(f"'{name}'" for name in CORRELATIONS)
        near = difflib.get_close_matches(basis.correlation, CORRELATIONS, n=1, cutoff=0.0)
        yield Problem(
            code="M111",
            where="cost basis, correlation",
            found=f"found '{basis.correlation}'",
            allowed=f"must be one of {names}; nearest is '{near[0]}'",
        )


def _factor_problems(basis: CostBasis, correlation: Correlation) -> Iterator[Problem]:
    for name in ("cost_index", "currency_per_usd", "location_factor", "installation_factor"):
        value = getattr(basis, name)
        if value is not None and not (math.isfinite(value) and value > 0.0):
            yield Problem(
                code="M112", where=f"cost basis, {name}", found=f"found {value:g}", allowed="must be above 0"
            )
    if correlation.installed and basis.installation_factor is not None:
        yield Problem(
            code="M112",
            where="cost basis, installation_factor",
            found=f"found {basis.installation_factor:g} for '{correlation.name}'",
            allowed="must be left out: this correlation gives the installed cost",
        )
    if not correlation.installed and _installation_factor(basis, correlation) is None:
        yield Problem(
            code="M112",
            where="cost basis, installation_factor",
            found=f"found none for '{correlation.name}'",
            allowed="must be stated: the source gives the cost of the equipment alone",
        )


def _range_problems(
    correlation: Correlation, size: float, pressure_bar_g: float, diameter_m: float | None
) -> Iterator[Problem]:
    where = f"cost by '{correlation.name}'"
    if not correlation.smallest <= size <= correlation.largest:
        yield Problem(
            code="M110",
            where=f"{where}, {correlation.size_name}",
            found=f"found {size:g} {correlation.size_unit}",
            allowed=f"must lie between {correlation.smallest:g} and {correlation.largest:g}"
            f" {correlation.size_unit}; use a quote or a cost curve instead",
        )
    if not correlation.lowest_bar_g <= pressure_bar_g <= correlation.highest_bar_g:
        yield Problem(
            code="M110",
            where=f"{where}, design pressure",
            found=f"found {pressure_bar_g:g} bar g",
            allowed=f"must lie between {correlation.lowest_bar_g:g} and {correlation.highest_bar_g:g} bar g;"
            " use a quote or a cost curve instead",
        )
    if correlation.needs_diameter and not (diameter_m is not None and diameter_m > 0.0):
        yield Problem(
            code="M110",
            where=f"{where}, diameter",
            found="found none" if diameter_m is None else f"found {diameter_m:g} m",
            allowed="must be stated and above 0 m",
        )
