"""``evenfire sweep``: progress while planning, then who wins where."""

from __future__ import annotations

from pathlib import Path

from rich.console import Console
from rich.progress import BarColumn, SpinnerColumn, TextColumn, TimeElapsedColumn
from rich.progress import Progress as Bar

from evenfire.case.load import load_case
from evenfire.errors import ExitStatus
from evenfire.report.folder import SWEEP_FILES, check_output_folder, write_sweep
from evenfire.report.page_sweep import answer_words
from evenfire.sweep.axis import axis
from evenfire.sweep.results import SweepResult
from evenfire.sweep.run import SweepRequest, sweep
from evenfire.sweep.usual import usual_request


def run(
    path: Path,
    vary: tuple[str, ...],
    out: Path | None,
    *,
    rank_percent: float | None,
    processes: int,
    cluster: str | None,
    replace: bool,
    quiet: bool,
) -> ExitStatus:
    """Sweep a case and write its folder; an interrupted sweep is continued by the same command."""
    console = Console(quiet=quiet, highlight=False)
    request = (
        SweepRequest(case=path.resolve(), axes=tuple(axis(text) for text in vary), rank_percent=rank_percent)
        if vary or rank_percent is not None
        else usual_request(path.resolve())
    )
    case = load_case(path)
    folder = out if out is not None else case.folder / "sweep"
    check_output_folder(folder, replace, SWEEP_FILES)
    kept = folder.resolve().parent / f"{folder.resolve().name}.unfinished"
    with progress_bar(console) as bar:
        task = bar.add_task("planning", total=None)

        def watch(done: int, of: int) -> None:
            bar.update(task, completed=done, total=of, description=f"planning, {done} of {of} parts done")

        try:
            result, forget = sweep(request, kept, processes=processes, cluster=cluster, watch=watch)
        except KeyboardInterrupt:
            bar.stop()
            console.print(f"Interrupted; the same command goes on from {kept}", soft_wrap=True)
            return ExitStatus.INTERRUPTED
    write_sweep(result, folder, replace)
    forget()
    _print(console, result)
    console.print(
        "Pressurised steam and hot water kill. Sizes are for an investment decision, not for construction.",
        soft_wrap=True,
    )
    console.print(f"Written: {folder / 'sweep.html'}", soft_wrap=True)
    missed = any(
        each.standing in ("gap not reached", "no plan found")
        for point in result.points
        for each in point.alternatives
    )
    return ExitStatus.GAP_MISSED if missed else ExitStatus.DONE


def progress_bar(console: Console) -> Bar:
    """Parts done of all, with the time they took."""
    return Bar(
        SpinnerColumn(),
        TextColumn("{task.description}"),
        BarColumn(),
        TimeElapsedColumn(),
        console=console,
        transient=True,
    )


def _print(console: Console, result: SweepResult) -> None:
    words = answer_words(result)
    if words:
        console.print(words, soft_wrap=True)
    if len(result.inputs) == 1:
        for each in result.break_evens:
            console.print(
                f"'{each.cheaper_below}' and '{each.cheaper_above}' cost the same at {each.value:.4g} "
                f"({each.low:.4g} to {each.high:.4g}{'' if each.proven else ', not proven'})",
                soft_wrap=True,
            )
    for ranked in result.ranking[:5]:
        console.print(
            f"{ranked.name}: moves the saving by {ranked.swing / 1000:,.0f} thousand {result.currency}",
            soft_wrap=True,
        )
