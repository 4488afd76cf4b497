"""``evenfire appraise``: progress while planning, then the table and the verdict."""

from __future__ import annotations

from pathlib import Path

from rich.console import Console
from rich.progress import Progress as Bar
from rich.progress import SpinnerColumn, TextColumn, TimeElapsedColumn
from rich.table import Table

from evenfire.appraisal.appraise import appraise
from evenfire.appraisal.results import AlternativeResult, Appraisal, Standing
from evenfire.case.case import Case
from evenfire.case.load import load_case
from evenfire.errors import ExitStatus
from evenfire.plan.outcome import Progress
from evenfire.plan.store import PlanStore, default_folder
from evenfire.report.folder import check_output_folder, write_appraisal


def run(
    case_path: Path,
    out: Path | None,
    *,
    replace: bool,
    quiet: bool,
    fresh: bool,
    whole_record: bool,
) -> ExitStatus:
    """Appraise a case and write its folder; the exit status says how far the plans are proven."""
    console = Console(quiet=quiet, highlight=False)
    case = load_case(case_path)
    folder = out if out is not None else case.folder / "appraisal"
    check_output_folder(folder, replace)
    result = appraised(console, case, fresh=fresh, whole_record=whole_record)
    write_appraisal(result, folder, replace)
    print_appraisal(console, result)
    console.print(f"Written: {folder / 'report.html'}", soft_wrap=True)
    return status_of(result)


def appraised(console: Console, case: Case, *, fresh: bool, whole_record: bool) -> Appraisal:
    """The appraisal of a case, with progress on the terminal."""
    console.print(f"{case.name}: {len(case.plan.alternatives)} alternatives")
    with Bar(
        SpinnerColumn(),
        TextColumn("{task.description}"),
        TimeElapsedColumn(),
        console=console,
        transient=True,
    ) as bar:
        task = bar.add_task("reading the record")

        def watch(progress: Progress) -> None:
            bar.update(task, description=_progress_words(progress))

        store = None if fresh else PlanStore(default_folder())
        return appraise(case, watch, store, whole_record)


def print_appraisal(console: Console, result: Appraisal) -> None:
    """Table, verdict, warnings and cautions."""
    console.print(_table(result))
    console.print(result.verdict, soft_wrap=True)
    if any(x.replayed is not None and not x.replayed.passes for x in result.alternatives):
        console.print("! leaves more steam unmet in its replay than its plan and the case's tolerance allow")
    for notice in result.notices:
        if notice.severity == "warning":
            console.print(f"Note: {notice.text}", soft_wrap=True)
    console.print(
        "Pressurised steam and hot water kill. These sizes are for an investment decision, not for "
        "construction.",
        soft_wrap=True,
    )


def status_of(result: Appraisal) -> ExitStatus:
    """How far the plans are proven, and whether the best one works when it is run."""
    if any(x.solver_status == "interrupted" for x in result.alternatives):
        return ExitStatus.INTERRUPTED
    if any(x.standing in (Standing.GAP_NOT_REACHED, Standing.NO_PLAN) for x in result.alternatives):
        return ExitStatus.GAP_MISSED
    best = result.alternative(result.best).replayed
    return ExitStatus.REPLAY_REFUSED if best is not None and not best.passes else ExitStatus.DONE


def _progress_words(progress: Progress) -> str:
    words = f"planning '{progress.alternative}' ({progress.stage})"
    if progress.bound_k is not None:
        words += f": bound {progress.bound_k:,.0f} k"
    if progress.cost_k is not None and progress.gap is not None:
        words += f", best plan {progress.cost_k:,.0f} k, gap {100 * progress.gap:.2f} %"
    return words


def _table(result: Appraisal) -> Table:
    """One column per alternative, so that five fit an ordinary terminal."""
    currency = result.case.finance.currency
    columns = [_column(x) for x in result.alternatives]
    labels = (
        "boilers, t/h",
        "vessel, m³",
        f"net present cost, 1000 {currency}",
        "  the plan's, with foresight",
        f"investment, 1000 {currency}",
        "fuel saved, MWh/a",
        "burner starts per year",
        "unmet steam, t/a",
        "simple payback, years",
        "saving realised, % of planned",
        "proven gap of the plan, %",
    )
    table = Table(show_lines=False, pad_edge=False)
    table.add_column("", no_wrap=True)
    for alternative in result.alternatives:
        words = "\n".join(alternative.name.split(" "))
        table.add_column(f"{words} *" if alternative.name == result.best else words, justify="right")
    for number, label in enumerate(labels):
        table.add_row(label, *(column[number] for column in columns))
    return table


def _column(alternative: AlternativeResult) -> list[str]:
    run = alternative.replayed
    if alternative.net_present_cost is None or run is None:
        return [alternative.standing.value, *[""] * 10]
    payback = run.payback
    return [
        " + ".join(f"{boiler.rating_kg_h / 1000:.3g}" for boiler in alternative.boilers),
        f"{alternative.vessel.volume_m3:.1f}" if alternative.vessel else "none",
        f"{run.net_present_cost / 1000:,.0f}{'' if run.passes else ' !'}",
        f"{alternative.net_present_cost / 1000:,.0f}",
        f"{alternative.investment / 1000:,.0f}",
        f"{run.fuel_saved_mwh_per_year:,.0f}",
        f"{run.burner_starts_per_year:,.0f}",
        f"{run.unmet_steam_t_per_year:,.1f}",
        payback.note if payback.simple_years is None else f"{payback.simple_years:.1f}",
        "–" if run.realised_share is None else f"{100 * run.realised_share:.0f}",
        "unknown" if alternative.gap is None else f"{100 * alternative.gap:.2f}",
    ]
