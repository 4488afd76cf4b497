"""``evenfire risk``: random scenarios, and how often each alternative is the cheapest."""

from __future__ import annotations

from pathlib import Path

from rich.console import Console

from evenfire.case.load import load_case
from evenfire.cli.sweep import progress_bar
from evenfire.errors import ExitStatus
from evenfire.report.folder import RISK_FILES, check_output_folder, write_risk
from evenfire.report.formats import percent, thousands
from evenfire.report.page_risk import risk_words
from evenfire.sweep.risk import risk
from evenfire.sweep.risk_results import RiskResult


def run(
    path: Path,
    out: Path | None,
    *,
    scenarios: int | None,
    seed: int | None,
    replan: int,
    processes: int,
    cluster: str | None,
    replace: bool,
    quiet: bool,
) -> ExitStatus:
    """Draw the scenarios of a case and write their folder; an interrupted run is continued."""
    console = Console(quiet=quiet, highlight=False)
    case = load_case(path)
    folder = out if out is not None else case.folder / "risk"
    check_output_folder(folder, replace, RISK_FILES)
    kept = folder.resolve().parent / f"{folder.resolve().name}.unfinished"
    with progress_bar(console) as bar:
        task = bar.add_task("planning the alternatives", total=None)

        def watch(done: int, of: int) -> None:
            if of:
                words = f"planning anew, {done} of {of} scenarios done"
                bar.update(task, completed=done, total=of, description=words)

        try:
            result, forget = risk(
                path.resolve(),
                kept,
                scenario_count=scenarios,
                seed=seed,
                replan=replan,
                processes=processes,
                cluster=cluster,
                watch=watch,
            )
        except KeyboardInterrupt:
            bar.stop()
            console.print(f"Interrupted; the same command goes on from {kept}", soft_wrap=True)
            return ExitStatus.INTERRUPTED
    write_risk(result, folder, replace)
    forget()
    _print(console, result)
    missed = any(each.gap > case.plan.gap * (1.0 + 1e-9) for each in result.alternatives)
    console.print(f"Written: {folder / 'risk.html'}", soft_wrap=True)
    return ExitStatus.GAP_MISSED if missed else ExitStatus.DONE


def _print(console: Console, result: RiskResult) -> None:
    console.print(risk_words(result), soft_wrap=True)
    for each in result.alternatives:
        console.print(
            f"{each.name}: cheapest in {percent(each.probability_cheapest)}, P10 to P90 "
            f"{thousands(each.p10_cost)} to {thousands(each.p90_cost)}, expected regret "
            f"{thousands(each.expected_regret)} thousand {result.currency}",
            soft_wrap=True,
        )
    console.print(
        "Pressurised steam and hot water kill. Sizes are for an investment decision, not for construction.",
        soft_wrap=True,
    )
