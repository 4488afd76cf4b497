"""The largest steam drawn in any interval of each length: the compiled upper hull behind S(C)."""

from __future__ import annotations

import numpy as np
from numba import njit
from numpy.typing import NDArray

from evenfire.demand.series import FloatArray

IndexArray = NDArray[np.int64]

LEAF = 16
"""Steps whose intervals are tried one by one before halves are joined."""


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def _upper_hull(points: IndexArray, count: int, cumulated: FloatArray, lowest: float) -> int:
    """Keep, in place, the points of the upper hull whose outgoing slopes matter above ``lowest``."""
    kept = 0
    for at in range(count):
        new = points[at]
        while kept > 1:
            a, b = points[kept - 2], points[kept - 1]
            if (cumulated[b] - cumulated[a]) * (new - b) > (cumulated[new] - cumulated[b]) * (b - a):
                break
            kept -= 1
        points[kept] = new
        kept += 1
    while kept > 1:
        a, b = points[kept - 2], points[kept - 1]
        if cumulated[b] - cumulated[a] > lowest * (b - a):
            break
        kept -= 1
    return kept


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def _lower_hull(points: IndexArray, count: int, cumulated: FloatArray, lowest: float) -> int:
    """Keep, in place, the points of the lower hull whose incoming slopes matter above ``lowest``."""
    kept = 0
    for at in range(count):
        new = points[at]
        while kept > 1:
            a, b = points[kept - 2], points[kept - 1]
            if (cumulated[b] - cumulated[a]) * (new - b) < (cumulated[new] - cumulated[b]) * (b - a):
                break
            kept -= 1
        points[kept] = new
        kept += 1
    dropped = 0
    while dropped < kept - 1:
        a, b = points[dropped], points[dropped + 1]
        if cumulated[b] - cumulated[a] > lowest * (b - a):
            break
        dropped += 1
    for at in range(kept - dropped):
        points[at] = points[at + dropped]
    return kept - dropped


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def _joined(
    early: IndexArray,
    early_count: int,
    late: IndexArray,
    late_count: int,
    cumulated: FloatArray,
    first: IndexArray,
    after: IndexArray,
) -> int:
    """Intervals from the earlier half into the later: mirrored lower hull plus upper hull, by slope."""
    i, j, count = early_count - 1, 0, 0
    first[0], after[0] = early[i], late[j]
    count = 1
    while i > 0 or j < late_count - 1:
        if i == 0:
            j += 1
        elif j == late_count - 1:
            i -= 1
        else:
            rise_late = (cumulated[late[j + 1]] - cumulated[late[j]]) * (early[i] - early[i - 1])
            rise_early = (cumulated[early[i]] - cumulated[early[i - 1]]) * (late[j + 1] - late[j])
            if rise_late >= rise_early:
                j += 1
            else:
                i -= 1
        first[count], after[count] = early[i], late[j]
        count += 1
    return count


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def _added(
    first: IndexArray, after: IndexArray, kept: int, new_first: int, new_after: int, cumulated: FloatArray
) -> int:
    """Append one interval to the hull of (length, steam), dropping what it covers; the new count."""
    length = new_after - new_first
    steam = cumulated[new_after] - cumulated[new_first]
    while kept > 0:
        b_length = after[kept - 1] - first[kept - 1]
        b_steam = cumulated[after[kept - 1]] - cumulated[first[kept - 1]]
        if b_length == length:
            if b_steam >= steam:
                return kept
            kept -= 1
            continue
        if kept == 1:
            break
        a_length = after[kept - 2] - first[kept - 2]
        a_steam = cumulated[after[kept - 2]] - cumulated[first[kept - 2]]
        if (b_steam - a_steam) * (length - b_length) > (steam - b_steam) * (b_length - a_length):
            break
        kept -= 1
    first[kept], after[kept] = new_first, new_after
    return kept + 1


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def _cut(first: IndexArray, after: IndexArray, kept: int, cumulated: FloatArray, lowest: float) -> int:
    """Number of intervals left of a hull when it ends where its slope falls to ``lowest``."""
    while kept > 1:
        length = (after[kept - 1] - first[kept - 1]) - (after[kept - 2] - first[kept - 2])
        steam = cumulated[after[kept - 1]] - cumulated[first[kept - 1]]
        steam -= cumulated[after[kept - 2]] - cumulated[first[kept - 2]]
        if steam > lowest * length:
            break
        kept -= 1
    return kept


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def _merged(
    firsts: tuple[IndexArray, IndexArray, IndexArray],
    afters: tuple[IndexArray, IndexArray, IndexArray],
    counts: IndexArray,
    cumulated: FloatArray,
    lowest: float,
    first: IndexArray,
    after: IndexArray,
) -> int:
    """Hull of three lists of intervals, each rising in length, cut where its slope falls to ``lowest``."""
    at = np.zeros(3, dtype=np.int64)
    kept = 0
    never = cumulated.size + 1
    while True:
        length_0 = afters[0][at[0]] - firsts[0][at[0]] if at[0] < counts[0] else never
        length_1 = afters[1][at[1]] - firsts[1][at[1]] if at[1] < counts[1] else never
        length_2 = afters[2][at[2]] - firsts[2][at[2]] if at[2] < counts[2] else never
        if length_0 == never and length_1 == never and length_2 == never:
            break
        if length_0 <= length_1 and length_0 <= length_2:
            source = 0
        elif length_1 <= length_2:
            source = 1
        else:
            source = 2
        if source == 0:
            kept = _added(first, after, kept, firsts[0][at[0]], afters[0][at[0]], cumulated)
        elif source == 1:
            kept = _added(first, after, kept, firsts[1][at[1]], afters[1][at[1]], cumulated)
        else:
            kept = _added(first, after, kept, firsts[2][at[2]], afters[2][at[2]], cumulated)
        at[source] += 1
    left: int = _cut(first, after, kept, cumulated, lowest)
    return left


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def _leaf(
    start: int, end: int, cumulated: FloatArray, lowest: float, first: IndexArray, after: IndexArray
) -> int:
    """Hull of the intervals inside a few steps, by trying all of each length; its count."""
    kept = 0
    for length in range(end - start):
        best = start
        for at in range(start + 1, end - length):
            if cumulated[at + length] - cumulated[at] > cumulated[best + length] - cumulated[best]:
                best = at
        kept = _added(first, after, kept, best, best + length, cumulated)
    left: int = _cut(first, after, kept, cumulated, lowest)
    return left


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def largest_draws(cumulated: FloatArray, lowest: float) -> tuple[IndexArray, IndexArray]:
    """Intervals on the upper hull of (length, steam) over all intervals, as (first step, step after last).

    ``cumulated`` holds the running sum of the flow, one value more than there are steps. The list
    starts with the empty interval and stops where the hull's slope falls to ``lowest``. Halves are
    joined as in a merge sort from the bottom up; the nodes not yet joined lie one after the other in
    shared stacks.
    """
    points = cumulated.size
    upper = np.empty(points, dtype=np.int64)
    lower = np.empty(points, dtype=np.int64)
    first = np.empty(2 * points, dtype=np.int64)
    after = np.empty(2 * points, dtype=np.int64)
    cross_first = np.empty(points + 1, dtype=np.int64)
    cross_after = np.empty(points + 1, dtype=np.int64)
    new_first = np.empty(points + 1, dtype=np.int64)
    new_after = np.empty(points + 1, dtype=np.int64)
    node_points = np.zeros(64, dtype=np.int64)
    upper_from = np.zeros(65, dtype=np.int64)
    lower_from = np.zeros(65, dtype=np.int64)
    draws_from = np.zeros(65, dtype=np.int64)
    counts = np.zeros(3, dtype=np.int64)
    nodes = 0
    for start in range(0, points, LEAF):
        end = min(start + LEAF, points)
        u, p, d = upper_from[nodes], lower_from[nodes], draws_from[nodes]
        for at in range(end - start):
            upper[u + at] = lower[p + at] = start + at
        nodes += 1
        node_points[nodes - 1] = end - start
        upper_from[nodes] = u + _upper_hull(upper[u:], end - start, cumulated, lowest)
        lower_from[nodes] = p + _lower_hull(lower[p:], end - start, cumulated, lowest)
        draws_from[nodes] = d + _leaf(start, end, cumulated, lowest, first[d:], after[d:])
        while nodes > 1 and (node_points[nodes - 2] == node_points[nodes - 1] or end == points):
            a, b = nodes - 2, nodes - 1
            u, v, w = upper_from[a], upper_from[b], upper_from[nodes]
            p, q, r = lower_from[a], lower_from[b], lower_from[nodes]
            d, e, f = draws_from[a], draws_from[b], draws_from[nodes]
            counts[0], counts[1] = e - d, f - e
            counts[2] = _joined(lower[p:q], q - p, upper[v:w], w - v, cumulated, cross_first, cross_after)
            kept = _merged(
                (first[d:e], first[e:f], cross_first),
                (after[d:e], after[e:f], cross_after),
                counts,
                cumulated,
                lowest,
                new_first,
                new_after,
            )
            first[d : d + kept] = new_first[:kept]
            after[d : d + kept] = new_after[:kept]
            node_points[a] += node_points[b]
            upper_from[b] = u + _upper_hull(upper[u:w], w - u, cumulated, lowest)
            lower_from[b] = p + _lower_hull(lower[p:r], r - p, cumulated, lowest)
            draws_from[b] = d + kept
            nodes -= 1
    return first[: draws_from[1]].copy(), after[: draws_from[1]].copy()
