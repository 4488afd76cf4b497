"""Plans of one case in random scenarios: which is cheapest how often, and what a wrong choice costs."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path
from typing import Any

import numpy as np

from evenfire.appraisal.plan_inputs import K
from evenfire.appraisal.priced import Priced, priced
from evenfire.case.case import Case, RiskRequest
from evenfire.case.change import stated_inputs
from evenfire.case.load import load_case
from evenfire.errors import InfeasibleError, Problem, SweepError
from evenfire.money.present_rates import investment_present_cost
from evenfire.money.yearly_costs import RUNNING_LINES, discount_factors, tax_rate
from evenfire.sweep.engine import Watch, results
from evenfire.sweep.journal import PLANS_FOLDER, Journal
from evenfire.sweep.results import package_versions
from evenfire.sweep.risk_results import AlternativeRisk, FloatArray, Replanned, RiskInput, RiskResult
from evenfire.sweep.scenarios import SCALED_LINES, Scenarios, scenarios
from evenfire.sweep.strand import Changes, Strand, planned_point, strand_key, strand_record
from evenfire.sweep.study import Study, swept_case

_TIE = 1e-9
_PATHS: tuple[tuple[str, str], ...] = (
    (r"fuel.price_per_mwh", "fuel"),
    (r"fuel.carbon_price_per_t", "carbon"),
    (r"money.electricity_price_per_mwh", "electricity"),
    (r"money.water_price_per_m3", "water"),
    (r"money.unmet_steam_price_per_t", "unmet steam"),
    (r"vessel.reference_installed_cost", "vessel"),
)
"""Inputs of the case that scale a cost line, by path."""


def risk(
    path: Path,
    kept: Path,
    *,
    scenario_count: int | None = None,
    seed: int | None = None,
    replan: int = 0,
    processes: int = 1,
    cluster: str | None = None,
    watch: Watch | None = None,
) -> tuple[RiskResult, Callable[[], None]]:
    """Cost of every alternative of a case in the random scenarios of its risk section.

    Each alternative is planned once at the case's own values; in every scenario the same plan is paid for at
    the scenario's prices, exactly. The first `replan` scenarios are also planned anew.

    Parameters
    ----------
    path : Path
        Case folder or file.
    kept : Path
        Folder for what is done so far; the same request goes on from there.
    scenario_count, seed : int, optional
        In place of the case's.
    replan : int
        How many scenarios are planned anew.
    processes : int
        Processes of this machine for those.
    cluster : str, optional
        Address of a Dask scheduler to use instead.
    watch : callable, optional
        Called with the number of scenarios planned anew, and of all to be.

    Returns
    -------
    RiskResult
    callable
        Removes the folder of results so far, to be called when the result is safe.

    Raises
    ------
    SweepError
        S109 for a case without a risk section, S110 for numbers of scenarios that cannot be drawn.
    InfeasibleError
        E101 where no alternative has a plan.
    """
    case, notices = swept_case(load_case(path))
    request = _request(case, path, scenario_count, seed, replan)
    plans = None if cluster is not None else kept / PLANS_FOLDER
    journal = Journal(kept, repr((path, case.input_hashes, request, replan, package_versions())))
    base = Strand(
        case=path,
        points=((),),
        along_line=False,
        gap=case.plan.gap,
        time_limit_s=case.plan.time_limit_s,
        plans_folder=kept / PLANS_FOLDER,
    )
    at, outcomes = planned_point(base)
    planned = [(name, outcome) for name, outcome in outcomes if outcome.plan is not None]
    if not planned:
        raise InfeasibleError(
            Problem(
                code="E101",
                where=str(path),
                found="no alternative has a plan",
                allowed="offer boilers or vessels that meet the peaks, or allow unmet steam",
            )
        )
    drawn = scenarios(case, request)
    lines = np.array([_present_lines(at, priced_plan(at, outcome.plan)) for _, outcome in planned])
    costs: FloatArray = drawn.factors @ lines.T
    names = tuple(name for name, _ in planned)
    base_costs = lines.sum(axis=1)
    gaps = tuple(
        float("inf") if outcome.bound_k is None else max(0.0, 1.0 - outcome.bound_k * K / float(cost))
        for (_, outcome), cost in zip(planned, base_costs, strict=True)
    )
    alternatives = alternative_risks(names, base_costs, gaps, costs)
    strands = tuple(
        replace(base, points=(changes,), plans_folder=plans)
        for changes in scenario_changes(path, case, drawn, replan)
    )
    records = results(
        strand_record, strands, strand_key, journal, processes=processes, cluster=cluster, watch=watch
    )
    return RiskResult(
        case_name=case.name,
        currency=case.finance.currency,
        scenarios=request.scenarios,
        seed=request.seed,
        inputs=_inputs(request, drawn),
        alternatives=alternatives,
        likeliest_cheapest=max(alternatives, key=lambda each: each.probability_cheapest).name,
        least_expected_regret=min(alternatives, key=lambda each: each.expected_regret).name,
        least_largest_regret=min(alternatives, key=lambda each: each.largest_regret).name,
        replanned=_replanned(names, base_costs, costs[:replan], records) if replan else None,
        draws=100.0 * np.column_stack(drawn.draws),
        costs=costs,
        notices=(*case.notices, *notices),
        input_hashes=case.input_hashes,
        versions=package_versions(),
    ), journal.remove


def _request(
    case: Case, path: Path, scenario_count: int | None, seed: int | None, replan: int
) -> RiskRequest:
    if case.risk is None:
        raise SweepError(
            Problem(
                code="S109",
                where=f"{path}: [risk]",
                found="missing section",
                allowed="state what is uncertain in [[risk.uncertain]] tables (docs/case-file.md)",
            )
        )
    request = replace(
        case.risk,
        scenarios=case.risk.scenarios if scenario_count is None else scenario_count,
        seed=case.risk.seed if seed is None else seed,
    )
    if not 1 <= request.scenarios <= 1_000_000 or not 0 <= replan <= request.scenarios or request.seed < 0:
        raise SweepError(
            Problem(
                code="S110",
                where="evenfire risk",
                found=f"found {request.scenarios} scenarios, {replan} planned anew, seed {request.seed}",
                allowed="draw 1 to 1000000 scenarios, plan at most as many anew, seed 0 or above",
            )
        )
    return request


def priced_plan(at: Study, plan: Any) -> Priced:
    """A plan with its quantities and money at the case's own values."""
    return priced(at.case, at.inputs, at.tables, plan)


def _present_lines(at: Study, price: Priced) -> list[float]:
    """Present cost of each of ``SCALED_LINES`` after tax; their sum is the net present cost."""
    kept = 1.0 - tax_rate(at.case.finance)
    running = [kept * price.cash.line_present_cost(line) for line in RUNNING_LINES]
    capital = float(discount_factors(at.case.finance) @ price.cash.yearly_capital)
    boilers = sum(
        investment_present_cost(offer.investment, at.case.finance)
        for offer in price.offers
        if offer.investment is not None
    )
    return [*running, boilers, capital - boilers]


def alternative_risks(
    names: tuple[str, ...], base_costs: FloatArray, gaps: tuple[float, ...], costs: FloatArray
) -> tuple[AlternativeRisk, ...]:
    """Probability, percentiles and regret of every alternative.

    Parameters
    ----------
    names : tuple of str
    base_costs : array
        At the case's own values, shape (alternatives,) [currency].
    gaps : tuple of float
    costs : array
        Shape (scenarios, alternatives) [currency].
    """
    least = costs.min(axis=1)
    winning = costs <= (least + _TIE * np.abs(least))[:, None]
    shares = (winning / winning.sum(axis=1)[:, None]).mean(axis=0)
    regret = costs - least[:, None]
    p10, p50, p90 = np.quantile(costs, (0.1, 0.5, 0.9), axis=0)
    return tuple(
        AlternativeRisk(
            name=name,
            base_cost=float(base_costs[i]),
            gap=gaps[i],
            probability_cheapest=float(shares[i]),
            probability_error=float(np.sqrt(shares[i] * (1.0 - shares[i]) / len(costs))),
            expected_cost=float(costs[:, i].mean()),
            p10_cost=float(p10[i]),
            p50_cost=float(p50[i]),
            p90_cost=float(p90[i]),
            expected_regret=float(regret[:, i].mean()),
            largest_regret=float(regret[:, i].max()),
        )
        for i, name in enumerate(names)
    )


def scenario_changes(path: Path, case: Case, drawn: Scenarios, count: int) -> list[Changes]:
    """The inputs that make a case cost what a scenario does: each scales the present cost of its line."""
    stated = dict(stated_inputs(path))
    scaled = [(name, line) for name, line in _PATHS if stated.get(name)]
    scaled += [(name, "boilers") for name in stated if name.startswith("new_boiler.sizes") and "cost" in name]
    scaled += [(name, "maintenance") for name in stated if name.endswith("maintenance_per_year")]
    return [
        tuple(
            (name, stated[name] * float(drawn.factors[row, SCALED_LINES.index(line)]))
            for name, line in scaled
            if drawn.factors[row, SCALED_LINES.index(line)] != 1.0
        )
        for row in range(count)
    ]


def _replanned(
    names: tuple[str, ...], base_costs: FloatArray, fixed: FloatArray, records: tuple[Any, ...]
) -> Replanned:
    rows = [{row["name"]: row for row in record["points"][0]} for record in records]
    anew = np.array(
        [[by_name[name].get("net_present_cost", np.inf) for name in names] for by_name in rows], dtype=float
    )
    anew = np.minimum(anew, fixed)  # the plan at the case's own values can be had in every scenario
    gaps = np.array([[by_name[name].get("gap") or 0.0 for name in names] for by_name in rows])
    return Replanned(
        scenarios=len(anew),
        alternatives=alternative_risks(names, base_costs, tuple(map(float, gaps.max(axis=0))), anew),
        saved_by_replanning=tuple(map(float, (fixed - anew).mean(axis=0))),
        largest_gap=float(gaps.max()),
    )


def _inputs(request: RiskRequest, drawn: Scenarios) -> tuple[RiskInput, ...]:
    found = []
    for each, values in zip(request.uncertain, drawn.draws, strict=True):
        p10, p50, p90 = (100.0 * float(x) for x in np.quantile(values, (0.1, 0.5, 0.9)))
        found.append(
            RiskInput(
                name=each.name,
                distribution=each.distribution,
                low_percent=100.0 * each.low_deviation,
                likely_percent=100.0 * each.likely_deviation,
                high_percent=100.0 * each.high_deviation,
                yearly_volatility_percent=100.0 * each.yearly_volatility,
                correlation_with_fuel_price=each.correlation,
                drawn_p10_percent=p10,
                drawn_p50_percent=p50,
                drawn_p90_percent=p90,
            )
        )
    return tuple(found)
