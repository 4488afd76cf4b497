"""Compiled recursion over stored steam and burner states, one cyclic day at a time.

A boiler's burner state is its age: off for 1, 2, ... steps (the last meaning "or longer"), then lit for
1, 2, ... steps likewise, so that minimum times are states. The joint state is a mixed-radix number
over the boilers; the other coordinate is stored steam in quanta. ``lap`` carries the least cost of
every state once round the day; ``path`` also keeps the way. Work per step is states * levels * outputs;
memory is states * levels, for ``path`` times the steps.
"""

from __future__ import annotations

import numpy as np
from numba import njit
from numpy.typing import NDArray

FloatArray = NDArray[np.float64]
IntArray = NDArray[np.int64]


def joint_states(off_ages: IntArray, lit_ages: IntArray) -> tuple[IntArray, IntArray]:
    """Stride of each boiler in the joint state, and the lit set (bits) of each joint state.

    Parameters
    ----------
    off_ages, lit_ages : integer arrays of shape (boilers,)
        Ages told apart when off and when lit, at least 1.
    """
    sizes = off_ages + lit_ages
    strides = np.concatenate([[1], np.cumprod(sizes)])
    state = np.arange(strides[-1])
    lit = np.zeros_like(state)
    for b in range(len(sizes)):
        age = state // strides[b] % sizes[b]
        lit |= (age >= off_ages[b]).astype(np.int64) << b
    return strides[:-1].astype(np.int64), lit


@njit(cache=True, nogil=True)  # type: ignore[untyped-decorator]
def _switch(
    before: FloatArray,
    after: FloatArray,
    stride: int,
    off: int,
    lit: int,
    start: float,
) -> None:
    """One boiler ages by a step, lights or goes out where its age allows."""
    states, levels = before.shape
    size = off + lit
    for state in range(states):
        age = state // stride % size
        base = state - age * stride
        if age < off:
            younger = base + (age - 1) * stride
            if age == 0:
                source = before[base + (size - 1) * stride]
                for s in range(levels):
                    after[state, s] = source[s]
            else:
                for s in range(levels):
                    after[state, s] = before[younger, s]
            if age == off - 1:
                for s in range(levels):
                    after[state, s] = min(after[state, s], before[state, s])
        else:
            if age == off:
                source = before[base + (off - 1) * stride]
                for s in range(levels):
                    after[state, s] = source[s] + start
            else:
                younger = base + (age - 1) * stride
                for s in range(levels):
                    after[state, s] = before[younger, s]
            if age == size - 1:
                for s in range(levels):
                    after[state, s] = min(after[state, s], before[state, s])


@njit(cache=True, nogil=True)  # type: ignore[untyped-decorator]
def _switch_tracked(
    before: FloatArray,
    after: FloatArray,
    came: NDArray[np.int32],
    kept: NDArray[np.int32],
    stride: int,
    off: int,
    lit: int,
    start: float,
) -> None:
    """``_switch`` that also carries which state each state came from."""
    states, levels = before.shape
    size = off + lit
    for state in range(states):
        age = state // stride % size
        base = state - age * stride
        if age == 0:
            source, extra = base + (size - 1) * stride, 0.0
        elif age == off:
            source, extra = base + (off - 1) * stride, start
        else:
            source, extra = base + (age - 1) * stride, 0.0
        stays = age in (off - 1, size - 1)
        for s in range(levels):
            cost = before[source, s] + extra
            origin = came[source, s]
            if stays and before[state, s] <= cost:
                cost = before[state, s]
                origin = came[state, s]
            after[state, s] = cost
            kept[state, s] = origin


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
    off_ages: IntArray,
    lit_ages: IntArray,
    strides: IntArray,
    lit_set: IntArray,
    unmet: float,
    credit: float,
    discharge: int,
) -> FloatArray:
    """Least cost of reaching each state after one day, from ``value`` before it.

    Parameters
    ----------
    value : array of shape (states, levels)
        Cost already paid in each state.
    demand : integer array of shape (steps,)
        Demand and standing loss per step [quanta].
    costs, most, start : arrays
        As in ``StepCosts``.
    off_ages, lit_ages, strides, lit_set : integer arrays
        As in ``joint_states``.
    unmet, credit : float
        Cost per quantum not met; saving per quantum charged.
    discharge : int
        Largest fall of stored steam in a step [quanta].

    Returns
    -------
    array of shape (states, levels)
    """
    states, levels = value.shape
    before = value.copy()
    after = np.empty_like(value)
    moves = np.empty(discharge + levels + 1)
    for t in range(demand.size):
        for b in range(start.size):
            _switch(before, after, strides[b], off_ages[b], lit_ages[b], start[b])
            before, after = after, before
        for state in range(states):
            lit = lit_set[state]
            target = after[state]
            target[:] = np.inf
            if not np.isfinite(costs[lit, 0]):
                continue
            lowest = -min(discharge, demand[t], levels - 1)
            highest = min(levels - 1, most[lit])
            _move_costs(costs[lit], most[lit], demand[t], unmet, credit, lowest, highest, moves)
            source = before[state]
            for g in range(lowest, highest + 1):
                cost = moves[g - lowest]
                for s in range(max(0, g), min(levels, levels + g)):
                    target[s] = min(target[s], source[s - g] + cost)
        before, after = after, before
    return before


@njit(cache=True, nogil=True)  # type: ignore[untyped-decorator]
def path(
    value: FloatArray,
    last_state: int,
    last_level: int,
    demand: IntArray,
    costs: FloatArray,
    most: IntArray,
    start: FloatArray,
    off_ages: IntArray,
    lit_ages: IntArray,
    strides: IntArray,
    lit_set: IntArray,
    unmet: float,
    credit: float,
    discharge: int,
    hold: int,
    offset: int,
) -> tuple[float, IntArray, IntArray]:
    """The cheapest day that ends in one state, from costs ``value`` already paid before it.

    ``hold`` > 1 lets burners change only at steps t with (t - offset) % hold == 0, which keeps
    minimum times of up to ``hold`` steps without ages (the day's length must be a multiple of it).

    Returns
    -------
    tuple
        Cost (infinite if the state cannot be reached), joint state before the day and in each step,
        shape (steps + 1,), and stored steam at the start of each step and after the last [quanta],
        shape (steps + 1,).
    """
    states, levels = value.shape
    steps = demand.size
    before = value.copy()
    after = np.empty_like(before)
    move = np.zeros((steps, states, levels), dtype=np.int16)
    origin = np.zeros((steps, states, levels), dtype=np.int16)
    came = np.empty((states, levels), dtype=np.int32)
    kept = np.empty((states, levels), dtype=np.int32)
    moves = np.empty(discharge + levels + 1)
    for t in range(steps):
        for state in range(states):
            for s in range(levels):
                came[state, s] = state
        if (t - offset) % hold == 0:
            for b in range(start.size):
                _switch_tracked(before, after, came, kept, strides[b], off_ages[b], lit_ages[b], start[b])
                before, after = after, before
                came, kept = kept, came
        for state in range(states):
            lit = lit_set[state]
            target = after[state]
            target[:] = np.inf
            for s in range(levels):
                origin[t, state, s] = came[state, s]
            if not np.isfinite(costs[lit, 0]):
                continue
            lowest = -min(discharge, demand[t], levels - 1)
            highest = min(levels - 1, most[lit])
            _move_costs(costs[lit], most[lit], demand[t], unmet, credit, lowest, highest, moves)
            source = before[state]
            taken = move[t, state]
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
    best = before[last_state, last_level]
    if not np.isfinite(best):
        return best, sequence, stored
    state = last_state
    stored[steps] = last_level
    for t in range(steps - 1, -1, -1):
        sequence[t + 1] = state
        stored[t] = stored[t + 1] - move[t, state, stored[t + 1]]
        state = origin[t, state, stored[t]]
    sequence[0] = state
    return best, sequence, stored
