"""Cost of one step on a grid of outputs, for every set of lit boilers.

One quantum of steam per step divides the axis. ``outward`` tables under-estimate the model (domains
grow to the next grid point, chords are lowered by their largest error), so a recursion over them is a
lower bound; inward tables only hold points that the model allows. docs/method.md has the proof.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from itertools import pairwise
from math import ceil, floor

import numpy as np
from numba import njit
from numpy.typing import NDArray

from evenfire.plan.inputs import PlanBoiler, PlanMode, PlanRates

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]
_SNAP = 1e-9


@dataclass(frozen=True, slots=True, kw_only=True)
class StepCosts:
    """Least cost of a step [k per yearly occurrence] by lit set and output in quanta."""

    quantum_t: float
    costs: FloatArray = field(repr=False)
    """Shape (2**boilers, outputs): bit b of the first index says boiler b is lit."""
    most: IntArray = field(repr=False)
    """Largest output of each lit set [quanta], shape (2**boilers,)."""
    start: FloatArray = field(repr=False)
    """Cost of a burner start, shape (boilers,)."""
    split: IntArray = field(repr=False)
    """Output per boiler [quanta], shape (2**boilers, outputs, boilers)."""
    mode: tuple[tuple[IntArray, IntArray], ...] = field(repr=False)
    """Per boiler, mode index by output when not lit and when lit (-1 where impossible)."""


def start_cost_k(boiler: PlanBoiler, pressure: int, rates: PlanRates) -> float:
    """Present cost of one burner start a year [k]."""
    return boiler.start_wear_k + rates.fuel_k_mwh * boiler.pressure_factor[pressure] * boiler.start_fuel_mwh


def mode_costs_k_h(
    boiler: PlanBoiler, mode: PlanMode, pressure: int, rates: PlanRates
) -> tuple[FloatArray, FloatArray]:
    """Breakpoints [t/h] and present cost per hour of operation a year [k] of one mode."""
    output = np.array(mode.output_t_h)
    fuel = np.array(mode.fuel_mwh_h) * boiler.pressure_factor[pressure]
    starts = np.interp(output, [output[0], output[-1]], [mode.starts_per_h_low, mode.starts_per_h_high])
    cost = rates.fuel_k_mwh * fuel + rates.steam_k_t * output + starts * start_cost_k(boiler, pressure, rates)
    return output, cost


def _on_grid(x: FloatArray, y: FloatArray, *, outward: bool) -> tuple[int, FloatArray]:
    """First grid point and values of a convex piecewise-linear function of quanta.

    Outward, the ends grow to the next grid points along the end slopes. An end that falls outward would
    grow below the function's least value there; its last cell takes that least value instead.
    """
    if outward:
        first, last = floor(x[0] + _SNAP), ceil(x[-1] - _SNAP)
    else:
        first, last = ceil(x[0] - _SNAP), floor(x[-1] + _SNAP)
    k = np.arange(first, last + 1)
    if len(x) == 1:
        return first, np.full(len(k), y[0])
    slopes = np.diff(y) / np.diff(x)
    values = np.interp(k, x, y)
    values = np.where(k < x[0], y[0] + slopes[0] * (k - x[0]), values)
    beyond = k > x[-1] + _SNAP
    if slopes[-1] >= 0:
        values = np.where(beyond, y[-1] + slopes[-1] * (k - x[-1]), values)
    elif beyond.any():
        values[-1] = y[-1]
        values[-2:-1] = np.minimum(values[-2:-1], y[-1])
    if outward:
        error: dict[int, float] = {}
        for position, (low, high) in zip(x[1:-1], pairwise(slopes), strict=True):
            cell = floor(position)
            share = position - cell
            error[cell] = error.get(cell, 0.0) + max(0.0, high - low) * share * (1 - share)
        values -= max(error.values(), default=0.0)
    return first, values


def _boiler_grid(
    boiler: PlanBoiler,
    lit: bool,
    pressure: int,
    rates: PlanRates,
    step_h: float,
    quantum_t: float,
    outward: bool,
) -> tuple[FloatArray, IntArray]:
    """Least cost by output in quanta over the modes of one kind, and which mode it is."""
    length = ceil(boiler.rated_t_h * step_h / quantum_t) + 2
    best = np.full(length, np.inf)
    which = np.full(length, -1, dtype=np.int64)
    for index, mode in enumerate(boiler.modes):
        if mode.lit is not lit:
            continue
        output, cost = mode_costs_k_h(boiler, mode, pressure, rates)
        first, values = _on_grid(output * step_h / quantum_t, cost * step_h, outward=outward)
        for k, value in enumerate(values, start=first):
            if value < best[k]:
                best[k], which[k] = value, index
    return best, which


@njit(cache=True, nogil=True)  # type: ignore[untyped-decorator]
def _combine(first: FloatArray, second: FloatArray) -> tuple[FloatArray, IntArray]:
    """Least sum over all splits of an output between two, and the second's share."""
    length = first.size + second.size - 1
    best = np.full(length, np.inf)
    share = np.zeros(length, dtype=np.int64)
    for i in range(first.size):
        if not np.isfinite(first[i]):
            continue
        for j in range(second.size):
            total = first[i] + second[j]
            if total < best[i + j]:
                best[i + j] = total
                share[i + j] = j
    return best, share


def step_costs(
    boilers: tuple[PlanBoiler, ...],
    pressure: int,
    rates: PlanRates,
    step_h: float,
    quantum_t: float,
    *,
    outward: bool,
) -> StepCosts:
    """Tables for the boilers in service on a day.

    Parameters
    ----------
    boilers : tuple of PlanBoiler
        Boilers in service.
    pressure : int
        Index of the boiler pressure.
    rates : PlanRates
    step_h, quantum_t : float
        Length of a step [h] and steam of one quantum [t].
    outward : bool
        True for lower bounds, False for schedules.
    """
    grids = [
        tuple(_boiler_grid(boiler, lit, pressure, rates, step_h, quantum_t, outward) for lit in (False, True))
        for boiler in boilers
    ]
    sets = 1 << len(boilers)
    rows: list[FloatArray] = []
    splits: list[IntArray] = []
    for lit_set in range(sets):
        total = np.zeros(1)
        shares: list[IntArray] = []
        for b, grid in enumerate(grids):
            total, share = _combine(total, grid[(lit_set >> b) & 1][0])
            shares.append(share)
        rows.append(total)
        split = np.zeros((len(total), len(boilers)), dtype=np.int64)
        for k in np.flatnonzero(np.isfinite(total)):
            left = int(k)
            for b in range(len(boilers) - 1, -1, -1):
                split[k, b] = shares[b][left]
                left -= split[k, b]
        splits.append(split)
    width = max(len(row) for row in rows)
    costs = np.full((sets, width), np.inf)
    chosen = np.zeros((sets, width, len(boilers)), dtype=np.int64)
    most = np.zeros(sets, dtype=np.int64)
    for lit_set, (row, split) in enumerate(zip(rows, splits, strict=True)):
        finite = np.flatnonzero(np.isfinite(row))
        if not len(finite):
            continue
        most[lit_set] = finite[-1]
        cost, source = _monotone(row[: finite[-1] + 1], rates.unmet_k_t * quantum_t)
        costs[lit_set, : len(cost)] = cost
        chosen[lit_set, : len(cost)] = split[source]
    return StepCosts(
        quantum_t=quantum_t,
        costs=costs,
        most=most,
        start=np.array([start_cost_k(boiler, pressure, rates) for boiler in boilers]),
        split=chosen,
        mode=tuple((grid[0][1], grid[1][1]) for grid in grids),
    )


def _monotone(row: FloatArray, unmet: float) -> tuple[FloatArray, IntArray]:
    """Cost when more may be made and vented, or less and the rest not met, with the output made."""
    cost = row.copy()
    source = np.arange(len(row))
    for k in range(len(row) - 2, -1, -1):
        if cost[k + 1] < cost[k]:
            cost[k], source[k] = cost[k + 1], source[k + 1]
    for k in range(1, len(row)):
        if cost[k - 1] + unmet < cost[k]:
            cost[k], source[k] = cost[k - 1] + unmet, source[k - 1]
    return cost, source
