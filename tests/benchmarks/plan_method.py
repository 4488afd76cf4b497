"""The plan's exact method beside the same model handed whole to HiGHS, on the cannery; prints tables.

Run with ``python -m tests.benchmarks.plan_method``; some forty minutes on two cores. Every line is a process
of its own, so that memory is its own. Times are of one shared machine: compare them within one run.
"""

from __future__ import annotations

import multiprocessing
import resource
import time
from collections.abc import Callable
from dataclasses import dataclass, replace
from pathlib import Path

from evenfire.appraisal.basis import basis
from evenfire.appraisal.case_record import case_record
from evenfire.appraisal.day_choice import every_day
from evenfire.appraisal.vessels import window_tables
from evenfire.case.load import load_case
from evenfire.plan.compiled import compiled
from evenfire.plan.inputs import AlternativeRules, PlanInputs, VesselUse
from evenfire.plan.milp import solve
from evenfire.plan.model import alternative_model
from evenfire.plan.outcome import Progress
from evenfire.plan.search import Search

CASE = Path(__file__).parents[2] / "cases" / "cannery"
GAPS = (1e-2, 5e-3, 2e-3, 1e-3)
METHOD_LIMIT_S = 300.0
SOLVER_LIMIT_S = 300.0
"""Ten times the method's time is cut here."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Setting:
    """What is planned: boilers that stand, a vessel to be sized, typical days and step."""

    step_minutes: int
    boilers: int
    days: int

    def words(self) -> str:
        return f"{self.step_minutes} min, {self.boilers} boilers, {self.days} days"


@dataclass(frozen=True, slots=True, kw_only=True)
class Line:
    """How one way of solving fared."""

    way: str
    seconds_to_gap: tuple[float | None, ...]
    final_gap: float | None
    seconds: float
    memory_mb: float
    size: str


def inputs_and_rules(setting: Setting) -> tuple[PlanInputs, AlternativeRules]:
    """The cannery with that many boilers standing and as many days, spread over its record."""
    case = load_case(CASE)
    case = replace(case, plan=replace(case.plan, step_s=60.0 * setting.step_minutes))
    record = case_record(case)
    found = basis(case, record, window_tables(case)).inputs
    whole = every_day(found, record)
    places = [round((k + 0.5) * len(whole.days) / setting.days) for k in range(setting.days)]
    days = tuple(replace(whole.days[place], days_per_year=365.0 / setting.days) for place in places)
    standing = frozenset(boiler.name for boiler in found.boilers[: setting.boilers])
    inputs = replace(
        found,
        days=days,
        transitions_per_year=whole.transitions_per_year[: len(days), : len(days)] * 0.0,
    )
    return inputs, AlternativeRules(
        name="storage",
        required=standing,
        allowed=standing,
        fewest_new=0,
        most_new=len(standing),
        vessel=VesselUse.REQUIRED,
        adequate=False,
    )


class Clock:
    """When each gap was first reached."""

    def __init__(self) -> None:
        self.begin = time.monotonic()
        self.reached: list[float | None] = [None] * len(GAPS)

    def saw(self, cost_k: float | None, bound_k: float | None) -> None:
        """Note cost and bound as they stand now."""
        if cost_k is None or bound_k is None or cost_k <= 0:
            return
        for place, gap in enumerate(GAPS):
            if self.reached[place] is None and (cost_k - bound_k) / cost_k <= gap:
                self.reached[place] = time.monotonic() - self.begin


def by_method(setting: Setting) -> Line:
    """The exact method until the smallest gap."""
    inputs, rules = inputs_and_rules(setting)
    Search(inputs, rules).run(gap=0.5, time_limit_s=60.0)
    clock = Clock()

    def watch(progress: Progress) -> None:
        clock.saw(progress.cost_k, progress.bound_k)

    outcome = Search(inputs, rules).run(min(GAPS), METHOD_LIMIT_S, watch)
    clock.saw(outcome.cost_k, outcome.bound_k)
    return _line("evenfire", clock, outcome.gap, "")


def by_solver(setting: Setting, time_limit_s: float, way: str) -> Line:
    """The whole model in HiGHS; building it is not counted."""
    inputs, rules = inputs_and_rules(setting)
    model = compiled(alternative_model(inputs, rules))
    clock = Clock()
    result = solve(
        model,
        gap=min(GAPS),
        time_limit_s=time_limit_s,
        watch=lambda cost, bound, _: clock.saw(cost, bound),
    )
    clock.saw(result.cost_k, result.bound_k)
    gap = None
    if result.cost_k is not None and result.bound_k is not None:
        gap = (result.cost_k - result.bound_k) / result.cost_k
    rows, columns = model.matrix.shape
    return _line(way, clock, gap, f"{rows} rows, {columns} columns, {int(model.integer.sum())} integer")


def _line(way: str, clock: Clock, gap: float | None, size: str) -> Line:
    return Line(
        way=way,
        seconds_to_gap=tuple(clock.reached),
        final_gap=gap,
        seconds=time.monotonic() - clock.begin,
        memory_mb=resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024.0,
        size=size,
    )


def alone(work: Callable[..., Line], *arguments: object) -> Line:
    """A line worked out in a process of its own."""
    with multiprocessing.get_context("spawn").Pool(1) as pool:
        return pool.apply(work, arguments)


def main() -> None:
    """Print one table over steps, boilers and days."""
    settings = [Setting(step_minutes=step, boilers=2, days=4) for step in (15, 5, 1)]
    settings += [Setting(step_minutes=5, boilers=boilers, days=4) for boilers in (1, 3, 4)]
    settings += [Setting(step_minutes=5, boilers=2, days=days) for days in (2, 8, 12)]
    print("| model | solved by | 1 % | 0.5 % | 0.2 % | 0.1 % | gap at end | seconds | memory MB |")
    print("|---|---|---|---|---|---|---|---|---|")
    for setting in settings:
        method = alone(by_method, setting)
        same = max(1.0, method.seconds)
        lines = [
            method,
            alone(by_solver, setting, same, "HiGHS, same time"),
            alone(by_solver, setting, min(SOLVER_LIMIT_S, 10.0 * same), "HiGHS, ten times"),
        ]
        for line in lines:
            reached = ["–" if x is None else f"{x:.1f} s" for x in line.seconds_to_gap]
            gap = "no plan" if line.final_gap is None else f"{100.0 * line.final_gap:.2f} %"
            cells = [setting.words(), line.way, *reached, gap, f"{line.seconds:.1f}", f"{line.memory_mb:.0f}"]
            print(f"| {' | '.join(cells)} |", flush=True)
        print(f"|  | {lines[-1].size} |  |  |  |  |  |  |  |", flush=True)


if __name__ == "__main__":
    main()
