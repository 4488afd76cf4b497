"""Storage need when storage recharges slowly or with loss, releases slowly, or demand grows."""

from __future__ import annotations

from dataclasses import dataclass, field

import numpy as np
from numba import njit

from evenfire.demand.series import FloatArray, StorageNeed, StorageNeedPiece
from evenfire.demand.storage_need import checked_flow
from evenfire.errors import Problem, RecordError


@dataclass(frozen=True, slots=True, kw_only=True)
class LimitedStorageNeed:
    """S(C) with limits: convex, exact at its breakpoints, never below the truth between them."""

    capacity_kg_s: FloatArray = field(repr=False)
    """Rising, from the least capacity to the peak [kg/s], shape (points,)."""
    storage_kg: FloatArray = field(repr=False)
    """Exact at the breakpoints; a straight line between two is too high by ``error_kg`` at most."""
    cuts: tuple[StorageNeedPiece, ...] = field(repr=False)
    """A valid line at each breakpoint: storage + capacity × ``duration_s`` >= ``energy_kg``; the interval
    is the part of the record that the line comes from."""
    error_kg: float
    least_capacity_kg_s: float
    """Peak demand less the largest release; a smaller boiler fails however large the store [kg/s]."""


@njit(cache=True)  # type: ignore[untyped-decorator]  # numba has no types
def _limited_draw(
    flow_kg_s: FloatArray, capacity: float, recharge: float, efficiency: float
) -> tuple[float, float, int, int]:
    """Largest draw in kg/s steps, minus its slope in capacity in steps, first and last step."""
    best, best_steps, best_first, best_last = 0.0, 0.0, 0, -1
    level, steps, first = 0.0, 0.0, 0
    for step in range(flow_kg_s.size):
        if level <= 0.0:
            level, steps, first = 0.0, 0.0, step
        lacking = flow_kg_s[step] - capacity
        if lacking > 0.0:
            level += lacking
            steps += 1.0
        elif -lacking < recharge:
            level += efficiency * lacking
            steps += efficiency
        else:
            level -= efficiency * recharge
        if level > best:
            best, best_steps, best_first, best_last = level, steps, first, step
    return best, best_steps, best_first, best_last


def limited_storage_need(
    flow_kg_s: FloatArray,
    step_s: float,
    recharge_kg_s: float,
    recharge_efficiency: float,
    release_kg_s: float,
    error_kg: float,
) -> LimitedStorageNeed:
    r"""Storage need over firm boiler capacity for a store that recharges and releases at limited rates.

    Use it once a vessel, its charging line and its water surface are known roughly; without limits
    :func:`~evenfire.demand.storage_need.storage_need` is exact and faster.

    .. math::

        S(C) = \max_{s \le t} \int_s^t g(\dot m, C)\,d\tau, \qquad
        g = \dot m - C \text{ if positive, else } -\eta \min(C - \dot m, r)

    Parameters
    ----------
    flow_kg_s
        Mean demand of each step [kg/s], shape (steps,).
    step_s
        Length of a step [s].
    recharge_kg_s
        Largest rate of charging [kg/s], positive; infinite for no limit.
    recharge_efficiency
        Steam gained in storage over steam charged [1], above 0 and at most 1.
    release_kg_s
        Largest rate of release [kg/s], positive; infinite for no limit.
    error_kg
        Largest error of straight lines between breakpoints [kg], positive.

    Returns
    -------
    LimitedStorageNeed
        From the larger of mean demand and peak less release, up to the peak.

    Raises
    ------
    RecordError
        R120 for an unusable flow, step or limit.

    Notes
    -----
    For every interval the sum of g is convex in C since its slopes -1, -efficiency and 0 rise; so is
    the largest of them. Tangents at two capacities meet where the curve is looked at next, until it is
    within ``error_kg`` of them. The release limit does not change S: it cuts off capacities that
    leave more than the release uncovered. The rate of a real vessel falls as it empties: use the
    rates at the end of discharge and of charge.

    Examples
    --------
    12 t/h for an hour, then 4 t/h for three, three times; a boiler of 6 t/h with at most 1 t/h of
    charging falls behind by 3 t in each period.

    >>> flow = np.tile([12.0, 4.0, 4.0, 4.0], 3) / 3.6
    >>> need = limited_storage_need(flow, 3600.0, 1.0 / 3.6, 1.0, np.inf, 1.0)
    >>> round(float(need.capacity_kg_s[0]) * 3.6, 6), round(float(need.storage_kg[0]), 3)
    (6.0, 12000.0)
    """
    flow = checked_flow(flow_kg_s, step_s, None)
    _check_limits(recharge_kg_s, recharge_efficiency, release_kg_s, error_kg)
    peak = float(flow.max())
    least = max(0.0, peak - release_kg_s)
    lowest = max(float(flow.mean()), least)
    points: dict[float, tuple[float, StorageNeedPiece]] = {}

    def looked_at(capacity: float) -> tuple[float, float]:
        """Storage and its slope at a capacity, remembered."""
        draw, steps, first, last = _limited_draw(
            flow, capacity, float(recharge_kg_s), float(recharge_efficiency)
        )
        piece = StorageNeedPiece(
            energy_kg=(draw + capacity * steps) * step_s,
            duration_s=steps * step_s,
            first_step=first,
            last_step=last,
        )
        points[capacity] = (draw * step_s, piece)
        return draw * step_s, -steps * step_s

    low, high = (lowest, *looked_at(lowest)), (peak, *looked_at(peak))
    open_ranges = [(low, high)] if peak > lowest else []
    while open_ranges:
        low, high = open_ranges.pop()
        if high[2] - low[2] <= 0.0:
            continue
        meeting = (low[1] - high[1] - low[2] * low[0] + high[2] * high[0]) / (high[2] - low[2])
        if not low[0] < meeting < high[0]:
            continue
        below = low[1] + low[2] * (meeting - low[0])
        middle = (meeting, *looked_at(meeting))
        if middle[1] - below > error_kg:
            open_ranges += [(low, middle), (middle, high)]
    capacities = sorted(points)
    return LimitedStorageNeed(
        capacity_kg_s=np.array(capacities),
        storage_kg=np.array([points[capacity][0] for capacity in capacities]),
        cuts=tuple(points[capacity][1] for capacity in capacities),
        error_kg=error_kg,
        least_capacity_kg_s=least,
    )


def grown_storage_need(need: StorageNeed, growth: float) -> StorageNeed:
    """Storage need when all demand has grown by one factor.

    Use it to see how long a size lasts: ``S_grown(C) = growth S(C / growth)``, exactly. It takes peaks
    and base load to grow alike; more batches of the same size make a new record instead.

    Parameters
    ----------
    need
        S(C) of the record.
    growth
        Later demand over demand of the record [1], positive.

    Returns
    -------
    StorageNeed
        The same intervals with more steam.

    Raises
    ------
    RecordError
        R120 when the factor is not positive.

    Examples
    --------
    >>> from evenfire.demand.storage_need import storage_need
    >>> need = storage_need(np.array([12.0, 4.0, 4.0, 4.0]) / 3.6, 3600.0)
    >>> grown = grown_storage_need(need, 1.5)
    >>> round(float(grown.capacity_kg_s[0]) * 3.6, 6), round(float(grown.storage_kg[0]), 3)
    (9.0, 9000.0)
    """
    if not (growth > 0.0 and np.isfinite(growth)):
        raise RecordError(_problem("growth", growth, "must be positive"))
    return StorageNeed(
        capacity_kg_s=need.capacity_kg_s * growth,
        storage_kg=need.storage_kg * growth,
        pieces=tuple(
            StorageNeedPiece(
                energy_kg=piece.energy_kg * growth,
                duration_s=piece.duration_s,
                first_step=piece.first_step,
                last_step=piece.last_step,
            )
            for piece in need.pieces
        ),
    )


def _check_limits(recharge: float, efficiency: float, release: float, error: float) -> None:
    problems = [
        _problem(name, value, "must be positive")
        for name, value in (("recharge_kg_s", recharge), ("release_kg_s", release), ("error_kg", error))
        if not value > 0.0
    ]
    if not 0.0 < efficiency <= 1.0:
        problems.append(_problem("recharge_efficiency", efficiency, "must be above 0 and at most 1"))
    if problems:
        raise RecordError(*problems)


def _problem(name: str, value: float, allowed: str) -> Problem:
    return Problem(code="R120", where=f"storage need: {name}", found=f"found {value:g}", allowed=allowed)
