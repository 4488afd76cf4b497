"""Steam that storage must hold for a firm boiler capacity, over the whole record (the mass curve)."""

from __future__ import annotations

import numpy as np
from numba import njit

from evenfire.demand.envelope import largest_draws
from evenfire.demand.series import FloatArray, StorageNeed, StorageNeedPiece
from evenfire.errors import Problem, RecordError
from evenfire.units import kg_h_to_kg_s


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def _worst_interval(flow_kg_s: FloatArray, capacity_kg_s: float) -> tuple[int, int]:
    best, level = 0.0, 0.0
    first, best_first, best_last = 0, 0, -1
    for step in range(flow_kg_s.size):
        if level <= 0.0:
            level, first = 0.0, step
        level += flow_kg_s[step] - capacity_kg_s
        if level > best:
            best, best_first, best_last = level, first, step
    return best_first, best_last


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def _unmet(flow_kg_s: FloatArray, step_s: float, capacity: float, storage: float, release: float) -> float:
    level, unmet = storage, 0.0
    for step in range(flow_kg_s.size):
        lacking = (flow_kg_s[step] - capacity) * step_s
        if lacking > 0.0:
            given = min(lacking, release * step_s, level)
            unmet += lacking - given
            level -= given
        else:
            level = min(storage, level - lacking)
    return unmet


def storage_need(
    flow_kg_s: FloatArray, step_s: float, lowest_capacity_kg_s: float | None = None
) -> StorageNeed:
    r"""Steam that storage must hold, as an exact convex piecewise-linear curve of firm boiler capacity.

    Use it on the raw record, before any averaging, to see what each tonne per hour of boiler saves in
    storage, and to give a plan the intervals that size storage. It assumes that the firm capacity is
    lit all the time, that storage recharges with all spare capacity and loses nothing, and that it
    can release as fast as needed.

    .. math:: S(C) = \max_{s \le t} \int_s^t (\dot m - C)\,d\tau

    Parameters
    ----------
    flow_kg_s
        Mean demand of each step [kg/s], shape (steps,), finite, not negative.
    step_s
        Length of a step [s].
    lowest_capacity_kg_s
        Smallest capacity of interest [kg/s]; the mean demand when left out.

    Returns
    -------
    StorageNeed
        Breakpoints, values and the interval of the record behind every piece. A capacity at or above
        the peak needs no storage: there is one breakpoint then and no piece.

    Raises
    ------
    RecordError
        R120 when the flow is empty, negative or not finite, the step not positive or the capacity
        negative.

    Notes
    -----
    The difference points (length of an interval, its steam) of all intervals have one upper hull;
    S(C) is its conjugate. Halves of the record are joined by adding the upper hull of the later
    cumulated steam to the mirrored lower hull of the earlier one: O(n log n), near O(n) on records
    with peaks. Breakpoints closer than 1e-11 of the peak are one.

    References
    ----------
    W. Rippl, The capacity of storage-reservoirs for water supply, Minutes of Proceedings of the
    Institution of Civil Engineers 71 (1883): the mass curve.

    Examples
    --------
    One hour of 12 t/h, then three of 4 t/h, twice: 6 t/h of boiler needs 6 t of storage.

    >>> flow = np.tile([12.0, 4.0, 4.0, 4.0], 2) / 3.6
    >>> need = storage_need(flow, 3600.0)
    >>> [round(float(capacity) * 3.6, 6) for capacity in need.capacity_kg_s]
    [6.0, 12.0]
    >>> [round(float(storage), 3) for storage in need.storage_kg]
    [6000.0, 0.0]
    """
    flow = checked_flow(flow_kg_s, step_s, lowest_capacity_kg_s)
    lowest = float(flow.mean()) if lowest_capacity_kg_s is None else float(lowest_capacity_kg_s)
    peak = float(flow.max())
    tolerance = 1e-11 * peak
    if lowest >= peak - tolerance:
        return StorageNeed(capacity_kg_s=np.array([lowest]), storage_kg=np.zeros(1), pieces=())
    excess = np.concatenate([[0.0], np.cumsum(flow - lowest)])  # small numbers: the sum stays exact
    first, after = largest_draws(excess, 0.0)
    length = (after - first).astype(np.float64)
    slope = lowest + np.diff(excess[after] - excess[first]) / np.diff(length)  # falling from the peak
    steam = excess[after] - excess[first] + lowest * length
    kept = np.flatnonzero(slope - np.append(slope[1:], lowest) > tolerance)
    capacity = np.concatenate([[lowest], slope[kept][:0:-1], [peak]])
    vertex = kept[::-1] + 1
    pieces = tuple(
        StorageNeedPiece(
            energy_kg=float(steam[at] * step_s),
            duration_s=float(length[at] * step_s),
            first_step=int(first[at]),
            last_step=int(after[at]) - 1,
        )
        for at in vertex
    )
    storage = [
        piece.energy_kg - float(at) * piece.duration_s
        for piece, at in zip(pieces, capacity[:-1], strict=True)
    ]
    return StorageNeed(capacity_kg_s=capacity, storage_kg=np.array([*storage, 0.0]), pieces=pieces)


def storage_need_at(flow_kg_s: FloatArray, step_s: float, capacity_kg_s: float) -> StorageNeedPiece:
    """Interval of the record that needs the most steam from storage at one boiler capacity.

    Use it where one value is enough: a single pass over the record. The storage needed is
    ``energy_kg - capacity_kg_s * duration_s``.

    Parameters
    ----------
    flow_kg_s
        Mean demand of each step [kg/s], shape (steps,).
    step_s
        Length of a step [s].
    capacity_kg_s
        Firm boiler capacity [kg/s], not negative.

    Returns
    -------
    StorageNeedPiece
        The interval; empty (no steam, no length, last step before first) when the capacity is at or
        above the peak.

    Raises
    ------
    RecordError
        R120 as for :func:`storage_need`.

    Notes
    -----
    The running draw-down x <- max(0, x + (demand - capacity) step) reaches its largest value at the
    end of the interval; the sequent-peak method.

    Examples
    --------
    >>> piece = storage_need_at(np.array([1.0, 5.0, 4.0, 1.0]), 60.0, 3.0)
    >>> piece.first_step, piece.last_step, piece.energy_kg - 3.0 * piece.duration_s
    (1, 2, 180.0)
    """
    flow = checked_flow(flow_kg_s, step_s, capacity_kg_s)
    first, last = _worst_interval(flow, float(capacity_kg_s))
    return StorageNeedPiece(
        energy_kg=float(flow[first : last + 1].sum() * step_s),
        duration_s=(last + 1 - first) * step_s,
        first_step=first,
        last_step=last,
    )


def storage_need_kg(flow_kg_h: FloatArray, step_s: float, capacity_kg_h: float) -> float:
    """Steam [kg] that storage must hold for one firm boiler capacity, in trade units.

    Use it by hand; inside the program :func:`storage_need_at` gives the interval as well.

    Parameters
    ----------
    flow_kg_h
        Mean demand of each step [kg/h], shape (steps,).
    step_s
        Length of a step [s].
    capacity_kg_h
        Firm boiler capacity [kg/h], not negative.

    Returns
    -------
    float
        Steam from storage [kg]; 0 when the capacity is at or above the peak.

    Raises
    ------
    RecordError
        R120 as for :func:`storage_need`.

    Examples
    --------
    >>> storage_need_kg(np.array([12000.0, 4000.0, 4000.0, 4000.0]), 3600.0, 9000.0)
    3000.0
    """
    capacity_kg_s = kg_h_to_kg_s(capacity_kg_h)
    piece = storage_need_at(np.asarray(flow_kg_h, dtype=np.float64) / 3600.0, step_s, capacity_kg_s)
    return piece.energy_kg - capacity_kg_s * piece.duration_s


def shortfall_kg(
    flow_kg_s: FloatArray, step_s: float, capacity_kg_s: float, storage_kg: float, release_kg_s: float
) -> float:
    """Steam [kg] of the record that a firm boiler capacity and a store of a given size cannot meet.

    Use it to see what a smaller store than S(C) costs in unmet steam. The store starts full, gives
    whatever is lacking at once and takes all spare capacity; it loses nothing.

    Parameters
    ----------
    flow_kg_s
        Mean demand of each step [kg/s], shape (steps,).
    step_s
        Length of a step [s].
    capacity_kg_s
        Firm boiler capacity [kg/s].
    storage_kg
        Steam capacity of the store [kg].
    release_kg_s
        Largest rate of release [kg/s].

    Returns
    -------
    float
        Steam not met [kg]; 0 exactly when ``storage_kg`` reaches S(C) and the release is never short.

    Raises
    ------
    RecordError
        R120 as for :func:`storage_need`, and for a negative store or release.

    Notes
    -----
    Giving at once whatever is lacking is the least possible total, since steam kept back can at best
    be given later for the same shortfall.

    Examples
    --------
    >>> shortfall_kg(np.array([1.0, 5.0, 4.0, 1.0]), 60.0, 3.0, 150.0, 10.0)
    30.0
    """
    flow = checked_flow(flow_kg_s, step_s, capacity_kg_s)
    for name, value, unit in (("storage_kg", storage_kg, "kg"), ("release_kg_s", release_kg_s, "kg/s")):
        if not value >= 0.0:
            raise RecordError(_problem(name, f"found {value:g} {unit}", "must not be negative"))
    return float(_unmet(flow, step_s, float(capacity_kg_s), float(storage_kg), float(release_kg_s)))


def checked_flow(flow_kg_s: FloatArray, step_s: float, capacity_kg_s: float | None) -> FloatArray:
    """Flow as a contiguous array, or every reason why it, the step or the capacity cannot be used (R120)."""
    flow = np.ascontiguousarray(flow_kg_s, dtype=np.float64)
    problems = []
    if flow.ndim != 1 or flow.size == 0:
        problems.append(_problem("flow", f"found shape {flow.shape}", "give one row of at least one step"))
    elif not np.isfinite(flow).all() or flow.min() < 0.0:
        wrong = int(np.argmax(~(flow >= 0.0) | np.isinf(flow)))
        problems.append(
            _problem("flow", f"found {flow[wrong]:g} at step {wrong}", "must be finite and not negative")
        )
    if not (step_s > 0.0 and np.isfinite(step_s)):
        problems.append(_problem("step_s", f"found {step_s:g} s", "must be positive"))
    if capacity_kg_s is not None and not (capacity_kg_s >= 0.0 and np.isfinite(capacity_kg_s)):
        problems.append(_problem("capacity", f"found {capacity_kg_s:g}", "must be finite and not negative"))
    if problems:
        raise RecordError(*problems)
    return flow


def _problem(where: str, found: str, allowed: str) -> Problem:
    return Problem(code="R120", where=f"storage need: {where}", found=found, allowed=allowed)
