"""Compiled recursion over stored steam and lit boilers, one cyclic day at a time.

State: the set of lit boilers (bits) and stored steam in quanta. ``lap`` carries the least cost of
every state once round the day; ``path`` does the same from one state and keeps the way. Work per step
is sets * levels * outputs; memory is sets * levels, for ``path`` times the steps.
"""

from __future__ import annotations

import numpy as np
from numba import njit
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]


@njit(cache=True, nogil=True)  # type: ignore[untyped-decorator]
def _move_costs(
    costs: FloatArray,
    most: int,
    demand: int,
    unmet: float,
    credit: float,
    lowest: int,
    highest: int,
    moves: FloatArray,
) -> None:
    """Cost of every change of stored steam between `lowest` and `highest` quanta."""
    for g in range(lowest, highest + 1):
        k = demand + g
        cost = costs[k] if k <= most else costs[most] + unmet * (k - most)
        if g > 0:
            cost -= credit * g
        moves[g - lowest] = cost


@njit(cache=True, nogil=True)  # type: ignore[untyped-decorator]
def lap(
    value: FloatArray,
    demand: IntArray,
    costs: FloatArray,
    most: IntArray,
    start: FloatArray,
    unmet: float,
    credit: float,
    discharge: int,
) -> FloatArray:
    """Least cost of reaching each state after one day, from ``value`` before it.

    Parameters
    ----------
    value : array of shape (sets, levels)
        Cost already paid in each state.
    demand : integer array of shape (steps,)
        Demand and standing loss per step [quanta].
    costs, most, start : arrays
        As in ``StepCosts``.
    unmet, credit : float
        Cost per quantum not met; saving per quantum charged.
    discharge : int
        Largest fall of stored steam in a step [quanta].

    Returns
    -------
    array of shape (sets, levels)
    """
    sets, levels = value.shape
    before = value.copy()
    after = np.empty_like(value)
    moves = np.empty(discharge + levels + 1)
    for t in range(demand.size):
        for b in range(start.size):
            bit = 1 << b
            for off in range(sets):
                if off & bit:
                    continue
                on = off | bit
                for s in range(levels):
                    cold = before[off, s]
                    hot = before[on, s]
                    before[off, s] = min(cold, hot)
                    before[on, s] = min(hot, cold + start[b])
        for lit in range(sets):
            if not np.isfinite(costs[lit, 0]):
                after[lit, :] = np.inf
                continue
            lowest = -min(discharge, demand[t], levels - 1)
            highest = min(levels - 1, most[lit])
            _move_costs(costs[lit], most[lit], demand[t], unmet, credit, lowest, highest, moves)
            target = after[lit]
            target[:] = np.inf
            source = before[lit]
            for g in range(lowest, highest + 1):
                cost = moves[g - lowest]
                low = max(0, g)
                high = min(levels, levels + g)
                for s in range(low, high):
                    candidate = source[s - g] + cost
                    target[s] = min(target[s], candidate)
        before, after = after, before
    return before


@njit(cache=True, nogil=True)  # type: ignore[untyped-decorator]
def path(
    value: FloatArray,
    last_set: int,
    last_level: int,
    demand: IntArray,
    costs: FloatArray,
    most: IntArray,
    start: FloatArray,
    unmet: float,
    credit: float,
    discharge: int,
    hold: int,
    offset: int,
) -> tuple[float, IntArray, IntArray]:
    """The cheapest day that ends in one state, from costs ``value`` already paid before it.

    ``hold`` > 1 lets burners change only at steps t with (t - offset) % hold == 0, which keeps
    minimum times of up to ``hold`` steps (the day's length must be a multiple of ``hold``).

    Returns
    -------
    tuple
        Cost (infinite if the state cannot be reached), lit set before the day and in each step,
        shape (steps + 1,), and stored steam at the start of each step and after the last [quanta],
        shape (steps + 1,).
    """
    sets, levels = value.shape
    steps = demand.size
    before = value.copy()
    after = np.empty_like(before)
    move = np.zeros((steps, sets, levels), dtype=np.int16)
    came = np.zeros((steps, sets, levels), dtype=np.uint8)
    moves = np.empty(discharge + levels + 1)
    for t in range(steps):
        for lit in range(sets):
            for s in range(levels):
                came[t, lit, s] = lit
        if (t - offset) % hold == 0:
            for b in range(start.size):
                bit = 1 << b
                for off in range(sets):
                    if off & bit:
                        continue
                    on = off | bit
                    for s in range(levels):
                        cold = before[off, s]
                        hot = before[on, s]
                        from_cold = came[t, off, s]
                        from_hot = came[t, on, s]
                        if hot < cold:
                            before[off, s] = hot
                            came[t, off, s] = from_hot
                        if cold + start[b] < hot:
                            before[on, s] = cold + start[b]
                            came[t, on, s] = from_cold
        for lit in range(sets):
            target = after[lit]
            target[:] = np.inf
            if not np.isfinite(costs[lit, 0]):
                continue
            lowest = -min(discharge, demand[t], levels - 1)
            highest = min(levels - 1, most[lit])
            _move_costs(costs[lit], most[lit], demand[t], unmet, credit, lowest, highest, moves)
            source = before[lit]
            taken = move[t, lit]
            for g in range(lowest, highest + 1):
                cost = moves[g - lowest]
                for s in range(max(0, g), min(levels, levels + g)):
                    candidate = source[s - g] + cost
                    if candidate < target[s]:
                        target[s] = candidate
                        taken[s] = g
        before, after = after, before
    sequence = np.zeros(steps + 1, dtype=np.int64)
    stored = np.zeros(steps + 1, dtype=np.int64)
    best = before[last_set, last_level]
    if not np.isfinite(best):
        return best, sequence, stored
    lit = last_set
    stored[steps] = last_level
    for t in range(steps - 1, -1, -1):
        sequence[t + 1] = lit
        stored[t] = stored[t + 1] - move[t, lit, stored[t + 1]]
        lit = came[t, lit, stored[t]]
    sequence[0] = lit
    return best, sequence, stored
