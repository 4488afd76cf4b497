"""HiGHS on the whole mixed-integer model: one call, every status mapped, every answer re-evaluated."""

from __future__ import annotations

import time
from collections.abc import Callable
from dataclasses import dataclass, field

import highspy
import numpy as np
from numpy.typing import NDArray

from evenfire.plan.compiled import CompiledModel, highs_lp
from evenfire.plan.outcome import Has, Stop
from evenfire.plan.quiet import QuietHighs

FloatArray = NDArray[np.float64]

FEASIBILITY_TOLERANCE = 1e-6
"""Largest violation of a row, bound or integrality accepted from the solver, in model units."""

_STOP = {
    highspy.HighsModelStatus.kOptimal: Stop.GAP_REACHED,
    highspy.HighsModelStatus.kInfeasible: Stop.INFEASIBLE,
    highspy.HighsModelStatus.kUnboundedOrInfeasible: Stop.INFEASIBLE,
    highspy.HighsModelStatus.kTimeLimit: Stop.TIME_LIMIT,
    highspy.HighsModelStatus.kInterrupt: Stop.INTERRUPTED,
    highspy.HighsModelStatus.kIterationLimit: Stop.SOLVER_LIMIT,
    highspy.HighsModelStatus.kSolutionLimit: Stop.SOLVER_LIMIT,
    highspy.HighsModelStatus.kObjectiveBound: Stop.SOLVER_LIMIT,
    highspy.HighsModelStatus.kObjectiveTarget: Stop.SOLVER_LIMIT,
    highspy.HighsModelStatus.kMemoryLimit: Stop.SOLVER_LIMIT,
}


def stop_of(status: highspy.HighsModelStatus) -> Stop:
    """Why the search stopped, for every status HiGHS can give."""
    return _STOP.get(status, Stop.SOLVER_ERROR)


@dataclass(frozen=True, slots=True, kw_only=True)
class MilpResult:
    """What HiGHS found."""

    stop: Stop
    has: Has
    point: FloatArray | None = field(repr=False)
    cost_k: float | None
    """Objective of ``point``, evaluated outside the solver [k]."""
    bound_k: float | None
    largest_violation: float
    seconds: float


def solve(
    model: CompiledModel,
    *,
    gap: float,
    time_limit_s: float,
    start: FloatArray | None = None,
    watch: Callable[[float | None, float | None, float], None] | None = None,
) -> MilpResult:
    """Minimise with HiGHS on one thread.

    Parameters
    ----------
    model : CompiledModel
    gap : float
        Relative gap at which to stop [1].
    time_limit_s : float
        Honoured by HiGHS between its own checks [s].
    start : array of shape (columns,), optional
        A feasible point to start from.
    watch : callable, optional
        Called with cost [k], bound [k] and seconds as they move; it may raise KeyboardInterrupt.

    Notes
    -----
    "Infeasible" is believed only after a second run without presolve (several releases of HiGHS
    have called feasible models infeasible).
    """
    begin = time.monotonic()
    result = _run(model, gap, time_limit_s, start, watch, presolve="choose")
    if result.stop is Stop.INFEASIBLE:
        left = max(1.0, time_limit_s - (time.monotonic() - begin))
        result = _run(model, gap, left, start, watch, presolve="off")
    return result


def _run(
    model: CompiledModel,
    gap: float,
    time_limit_s: float,
    start: FloatArray | None,
    watch: Callable[[float | None, float | None, float], None] | None,
    presolve: str,
) -> MilpResult:
    begin = time.monotonic()
    solver = QuietHighs()
    solver.setOptionValue("mip_rel_gap", gap)
    solver.setOptionValue("mip_abs_gap", 0.0)
    solver.setOptionValue("time_limit", time_limit_s)
    solver.setOptionValue("mip_feasibility_tolerance", FEASIBILITY_TOLERANCE)
    solver.setOptionValue("presolve", presolve)
    solver.passModel(highs_lp(model, integer=True))
    if start is not None:
        solution = highspy.HighsSolution()
        solution.col_value = list(start)
        solver.setSolution(solution)
    interrupted = False

    def moved(event: highspy.highs.HighsCallbackEvent) -> None:
        nonlocal interrupted
        if watch is None or interrupted:
            return
        out = event.data_out
        try:
            watch(_finite(out.mip_primal_bound), _finite(out.mip_dual_bound), time.monotonic() - begin)
        except KeyboardInterrupt:
            interrupted = True

    def check(event: highspy.highs.HighsCallbackEvent) -> None:
        if interrupted:
            event.data_in.user_interrupt = True

    solver.cbMipLogging.subscribe(moved)
    solver.cbMipInterrupt.subscribe(check)
    solver.run()
    info = solver.getInfo()
    stop = Stop.INTERRUPTED if interrupted else stop_of(solver.getModelStatus())
    point, cost, violation = None, None, 0.0
    if info.primal_solution_status == highspy.SolutionStatus.kSolutionStatusFeasible:
        raw = np.array(solver.getSolution().col_value)
        point = np.where(model.integer, np.round(raw), raw)
        cost, violation = model.objective(point), model.largest_violation(point)
    return MilpResult(
        stop=stop,
        has=Has.PLAN if point is not None else Has.NOTHING,
        point=point,
        cost_k=cost,
        bound_k=_finite(info.mip_dual_bound) if stop is not Stop.INFEASIBLE else None,
        largest_violation=violation,
        seconds=time.monotonic() - begin,
    )


def _finite(value: float) -> float | None:
    return float(value) if np.isfinite(value) and abs(value) < highspy.kHighsInf else None
