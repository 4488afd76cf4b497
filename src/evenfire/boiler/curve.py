"""Fuel against steam output over the firing range, and its convex pieces."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import pairwise

import numpy as np
import numpy.typing as npt

from evenfire.boiler.heat import efficiency_factor, steam_heat_j_kg, working_pressure_factor
from evenfire.errors import OutOfRangeError, Problem
from evenfire.plant import BoilerSpec, EfficiencyPoint

FloatArray = npt.NDArray[np.float64]

CONVEXITY_TOLERANCE = 1.0e-9
LOAD_TOLERANCE = 1.0e-6


@dataclass(frozen=True, slots=True, kw_only=True)
class FuelCurve:
    """Fuel power against steam output, piecewise linear through its points."""

    output_kg_s: FloatArray
    """Rising steam output [kg/s]."""
    fuel_w_lhv: FloatArray
    """Fuel power on net calorific value at each output [W]."""


def fuel_curve(spec: BoilerSpec, working_pa: float, feedwater_k: float) -> FuelCurve:
    """Fuel power of a firing boiler from its smallest continuous to its rated output.

    At each efficiency point F = q dh / eta; between points F is linear in q. With a constant stack loss
    share s and a constant casing loss L the balance F (1 - s) = q dh + L is itself linear in q, so a
    straight line in fuel is the physical interpolation; a straight line in efficiency would bend the fuel
    curve the wrong way (concave wherever efficiency rises) between every two points.

    Parameters
    ----------
    spec : BoilerSpec
        Its efficiency points must span 1/turndown to full load.
    working_pa : float
        Absolute working pressure [Pa].
    feedwater_k : float
        Feedwater temperature [K].

    Returns
    -------
    FuelCurve
        Points at 1/turndown, every efficiency point above it, and full load.

    Raises
    ------
    OutOfRangeError
        P110 for an efficiency outside (0, 1] on net calorific value (gross and net mixed up), P111 where
        the points do not span the firing range or do not rise in load, P113 above the boiler's largest
        working pressure, P114 for a rating or turndown that is not positive or below 1.

    Notes
    -----
    Interpolating efficiency instead would differ by about (d_eta * d_load) / (4 eta * load) of the fuel
    midway between two points, e.g. 0.36 % between 89 % at quarter and 91 % at half load.

    References
    ----------
    US DOE Steam Tip Sheet 16 (casing loss constant in watts); the interpolation follows from the balance.
    """
    loads, fuel_per_rated_heat = _fuel_shape(spec)
    rated_heat_w = spec.rated_kg_s * steam_heat_j_kg(
        spec.efficiency_at_pa, feedwater_k, spec.blowdown_fraction
    )
    factor = working_pressure_factor(spec, working_pa, feedwater_k)
    return FuelCurve(
        output_kg_s=loads * spec.rated_kg_s, fuel_w_lhv=fuel_per_rated_heat * rated_heat_w * factor
    )


def efficiency_lhv(spec: BoilerSpec, load_kg_s: npt.ArrayLike, working_pa: float) -> FloatArray:
    """Efficiency on net calorific value of a firing boiler at given outputs [1].

    Raises
    ------
    OutOfRangeError
        P111 for an output outside rated/turndown to rated; otherwise as :func:`fuel_curve`.
    """
    loads, fuel_per_rated_heat = _fuel_shape(spec)
    load = np.asarray(load_kg_s, dtype=np.float64)
    low, high = float(loads[0]) * spec.rated_kg_s, spec.rated_kg_s
    inside = (load >= low * (1.0 - LOAD_TOLERANCE)) & (load <= high * (1.0 + LOAD_TOLERANCE))
    if not inside.all():
        worst = float(load[~inside].flat[0]) if load.ndim else float(load)
        raise OutOfRangeError(
            Problem(
                code="P111",
                where=f"boiler '{spec.name}', firing load",
                found=f"found {worst:g} kg/s",
                allowed=f"must lie between {low:g} and {high:g} kg/s",
            )
        )
    fraction = load / spec.rated_kg_s
    at_points_pressure = fraction / np.interp(fraction, loads, fuel_per_rated_heat)
    return np.asarray(at_points_pressure * efficiency_factor(spec, working_pa))


def lowest_firing_efficiency_lhv(spec: BoilerSpec, working_pa: float) -> float:
    """Efficiency on net calorific value at the smallest continuous firing output [1].

    Heat that keeps a boiler hot, or makes good a purge, is paid for at this efficiency.
    """
    return float(efficiency_lhv(spec, spec.rated_kg_s / spec.turndown, working_pa))


def convex_pieces(curve: FuelCurve) -> tuple[FuelCurve, ...]:
    """The firing range split, from low to high output, into the longest convex pieces.

    The split is exact: the pieces share their end points and together are the curve itself, so a model
    with one binary per piece represents a non-convex curve without error.

    Returns
    -------
    tuple of FuelCurve
        One piece for a convex curve (slopes never fall by more than 1e-9 of themselves).
    """
    output, fuel = curve.output_kg_s, curve.fuel_w_lhv
    if len(output) <= 2:
        return (curve,)
    slopes = np.diff(fuel) / np.diff(output)
    falls = slopes[1:] < slopes[:-1] - CONVEXITY_TOLERANCE * np.abs(slopes[:-1])
    ends = [0, *(int(place) + 1 for place in np.flatnonzero(falls)), len(output) - 1]
    return tuple(
        FuelCurve(output_kg_s=output[one : two + 1], fuel_w_lhv=fuel[one : two + 1])
        for one, two in pairwise(ends)
    )


def _fuel_shape(spec: BoilerSpec) -> tuple[FloatArray, FloatArray]:
    """Load fractions of the fuel curve's points, and fuel over rated steam heat at each."""
    points = _checked_points(spec)
    loads = np.array([point.load_fraction for point in points])
    efficiencies = np.array([point.efficiency_lhv for point in points])
    smallest = 1.0 / spec.turndown
    inner = loads[(loads > smallest + LOAD_TOLERANCE) & (loads < 1.0 - LOAD_TOLERANCE)]
    kept = np.concatenate(([smallest], inner, [1.0])) if smallest < 1.0 - LOAD_TOLERANCE else np.array([1.0])
    return kept, np.interp(kept, loads, loads / efficiencies)


def _checked_points(spec: BoilerSpec) -> tuple[EfficiencyPoint, ...]:
    problems = []
    where = f"boiler '{spec.name}'"
    if not spec.rated_kg_s > 0.0:
        problems.append(
            Problem(
                code="P114",
                where=f"{where}, rating",
                found=f"found {spec.rated_kg_s:g} kg/s",
                allowed="must be above 0",
            )
        )
    if not spec.turndown >= 1.0:
        problems.append(
            Problem(
                code="P114",
                where=f"{where}, turndown",
                found=f"found {spec.turndown:g}",
                allowed="must be at least 1 (rated over smallest firing output)",
            )
        )
    points = spec.efficiency_points
    for point in points:
        if not 0.0 < point.efficiency_lhv <= 1.0:
            problems.append(
                Problem(
                    code="P110",
                    where=f"{where}, efficiency at {point.load_fraction:.0%} load",
                    found=f"found {point.efficiency_lhv:.4g} on net calorific value",
                    allowed="must lie above 0 and not above 1; are gross and net mixed up?",
                )
            )
    loads = [point.load_fraction for point in points]
    if not loads or any(two <= one for one, two in pairwise(loads)):
        problems.append(
            Problem(
                code="P111",
                where=f"{where}, efficiency points",
                found="found none" if not loads else "loads do not rise",
                allowed="give points in rising load",
            )
        )
    elif not problems and (
        loads[0] > 1.0 / spec.turndown + LOAD_TOLERANCE or abs(loads[-1] - 1.0) > LOAD_TOLERANCE
    ):
        problems.append(
            Problem(
                code="P111",
                where=f"{where}, efficiency points",
                found=f"found points from {loads[0]:.4g} to {loads[-1]:.4g} of rated output",
                allowed=f"must span {1.0 / spec.turndown:.4g} (one over turndown) to 1",
            )
        )
    if problems:
        raise OutOfRangeError(*problems)
    return points
