"""Compiled recursion over stored steam and burner states, one cyclic day at a time.

A boiler's burner state is its age: off for 1, 2, ... steps (the last meaning "or longer"), then lit for
1, 2, ... steps likewise, so that minimum times are states. The joint state is a mixed-radix number
over the boilers; the other coordinate is stored steam in quanta. ``lap`` carries the least cost of
every state once round the day; ``path`` also finds the way, from layers kept every few steps. Work per
step is states * levels * outputs. Layers have infinite margins so that the innermost loop, which takes
four outputs at once, has no bounds to look after: that is what processors do fastest.
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


_AT_ONCE = 4
"""Changes of stored steam taken at once; the margin of a layer covers them."""


@njit(cache=True, nogil=True)  # type: ignore[untyped-decorator]
def _switch(before: FloatArray, after: FloatArray, stride: int, off: int, lit: int, start: float) -> None:
    """One boiler ages by a step, lights or goes out where its age allows."""
    states, width = before.shape
    size = off + lit
    for state in range(states):
        age = state // stride % size
        base = state - age * stride
        target = after[state]
        if age == 0:
            source, extra = before[base + (size - 1) * stride], 0.0
        elif age == off:
            source, extra = before[base + (off - 1) * stride], start
        else:
            source, extra = before[base + (age - 1) * stride], 0.0
        if age == off - 1 or age == size - 1:
            stays = before[state]
            for s in range(width):
                target[s] = min(source[s] + extra, stays[s])
        else:
            for s in range(width):
                target[s] = source[s] + extra


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
def _cheapest_moves(
    source: FloatArray, target: FloatArray, moves: FloatArray, count: int, first: int
) -> None:
    """Least cost of every level of ``target`` over ``count`` moves, the first one from ``first``."""
    levels = target.size
    target[:] = np.inf
    whole = count // _AT_ONCE * _AT_ONCE
    for j in range(0, whole, _AT_ONCE):
        a = source[first - j : first - j + levels]
        b = source[first - j - 1 : first - j - 1 + levels]
        c = source[first - j - 2 : first - j - 2 + levels]
        d = source[first - j - 3 : first - j - 3 + levels]
        cost_a, cost_b, cost_c, cost_d = moves[j], moves[j + 1], moves[j + 2], moves[j + 3]
        for s in range(levels):
            least = min(min(a[s] + cost_a, b[s] + cost_b), min(c[s] + cost_c, d[s] + cost_d))
            target[s] = min(target[s], least)
    for j in range(whole, count):
        a = source[first - j : first - j + levels]
        cost_a = moves[j]
        for s in range(levels):
            target[s] = min(target[s], a[s] + cost_a)


@njit(cache=True, nogil=True)  # type: ignore[untyped-decorator]
def _margin(levels: int, most: IntArray, discharge: int) -> int:
    """Infinite cells that a layer needs at either end."""
    margin: int = min(levels - 1, max(most.max(), discharge)) + _AT_ONCE
    return margin


@njit(cache=True, nogil=True)  # type: ignore[untyped-decorator]
def _layer(value: FloatArray, margin: int) -> FloatArray:
    """Costs of all states and levels with the margins added."""
    states, levels = value.shape
    layer = np.full((states, levels + 2 * margin), np.inf)
    layer[:, margin : margin + levels] = value
    return layer


@njit(cache=True, nogil=True)  # type: ignore[untyped-decorator]
def _advance(
    before: FloatArray,
    after: FloatArray,
    margin: int,
    moves: FloatArray,
    demand: int,
    costs: FloatArray,
    most: IntArray,
    lit_set: IntArray,
    unmet: float,
    credit: float,
    discharge: int,
) -> None:
    """Steam made, stored and drawn in one step, burner states as they are."""
    states, width = before.shape
    levels = width - 2 * margin
    for state in range(states):
        lit = lit_set[state]
        target = after[state, margin : margin + levels]
        if not np.isfinite(costs[lit, 0]):
            target[:] = np.inf
            continue
        lowest = -min(discharge, demand, levels - 1)
        highest = min(levels - 1, most[lit])
        _move_costs(costs[lit], most[lit], demand, unmet, credit, lowest, highest, moves)
        _cheapest_moves(before[state], target, moves, highest - lowest + 1, margin - lowest)


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
    levels = value.shape[1]
    margin = _margin(levels, most, discharge)
    before = _layer(value, margin)
    after = before.copy()
    moves = np.empty(2 * margin + 1)
    for t in range(demand.size):
        for b in range(start.size):
            _switch(before, after, strides[b], off_ages[b], lit_ages[b], start[b])
            before, after = after, before
        _advance(before, after, margin, moves, demand[t], costs, most, lit_set, unmet, credit, discharge)
        before, after = after, before
    reached: FloatArray = before[:, margin : margin + levels].copy()
    return reached


@njit(cache=True, nogil=True)  # type: ignore[untyped-decorator]
def _switch_tracked(
    before: FloatArray,
    after: FloatArray,
    came: IntArray,
    kept: IntArray,
    stride: int,
    off: int,
    lit: int,
    start: float,
) -> None:
    """``_switch`` at one level that also carries which state each state came from."""
    size = off + lit
    for state in range(before.shape[0]):
        age = state // stride % size
        base = state - age * stride
        if age == 0:
            source, extra = base + (size - 1) * stride, 0.0
        elif age == off:
            source, extra = base + (off - 1) * stride, start
        else:
            source, extra = base + (age - 1) * stride, 0.0
        after[state, 0] = before[source, 0] + extra
        kept[state] = came[source]
        if (age == off - 1 or age == size - 1) and before[state, 0] <= after[state, 0]:
            after[state, 0] = before[state, 0]
            kept[state] = came[state]


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
    Layers are kept at the start of each of about sqrt(steps) blocks; the way back computes one block's
    layers at a time again.

    Returns
    -------
    tuple
        Cost (infinite if the state cannot be reached), joint state before the day and in each step,
        shape (steps + 1,), and stored steam at the start of each step and after the last [quanta],
        shape (steps + 1,).
    """
    states, levels = value.shape
    steps = demand.size
    block = int(np.ceil(np.sqrt(steps)))
    blocks = (steps + block - 1) // block
    margin = _margin(levels, most, discharge)
    width = levels + 2 * margin
    kept = np.empty((blocks, states, width))
    layers = np.full((block + 1, states, width), np.inf)
    switched = np.full((2, states, width), np.inf)
    moves = np.empty(2 * margin + 1)
    sequence = np.zeros(steps + 1, dtype=np.int64)
    stored = np.zeros(steps + 1, dtype=np.int64)
    column = np.empty((2, states, 1))
    origin = np.empty((2, states), dtype=np.int64)
    layers[0] = _layer(value, margin)
    state, level = last_state, last_level
    total = np.inf
    for turn in range(2 * blocks - 1):
        forward = turn < blocks
        number = turn if forward else 2 * blocks - 2 - turn
        if forward:
            kept[number] = layers[0]
        else:
            layers[0] = kept[number]
        first = number * block
        length = min(block, steps - first)
        for i in range(length):
            t = first + i
            now = layers[i]
            if (t - offset) % hold == 0:
                for b in range(start.size):
                    _switch(now, switched[b % 2], strides[b], off_ages[b], lit_ages[b], start[b])
                    now = switched[b % 2]
            _advance(
                now, layers[i + 1], margin, moves, demand[t], costs, most, lit_set, unmet, credit, discharge
            )
        if turn < blocks - 1:
            layers[0] = layers[length]
            continue
        if forward:
            total = layers[length, last_state, margin + last_level]
            if not np.isfinite(total):
                return total, sequence, stored
            stored[steps] = last_level
        for i in range(length - 1, -1, -1):
            t = first + i
            sequence[t + 1] = state
            lit = lit_set[state]
            lowest = -min(discharge, demand[t], levels - 1)
            highest = min(levels - 1, most[lit])
            _move_costs(costs[lit], most[lit], demand[t], unmet, credit, lowest, highest, moves)
            least, best_level, best_state = np.inf, level, state
            for g in range(max(lowest, level - levels + 1), min(highest, level) + 1):
                column[0, :, 0] = layers[i, :, margin + level - g]
                for x in range(states):
                    origin[0, x] = x
                last = 0
                if (t - offset) % hold == 0:
                    for b in range(start.size):
                        _switch_tracked(
                            column[last],
                            column[1 - last],
                            origin[last],
                            origin[1 - last],
                            strides[b],
                            off_ages[b],
                            lit_ages[b],
                            start[b],
                        )
                        last = 1 - last
                cost = column[last, state, 0] + moves[g - lowest]
                if cost < least:
                    least, best_level, best_state = cost, level - g, origin[last, state]
            state, level = best_state, best_level
            stored[t] = level
    sequence[0] = state
    return total, sequence, stored
