"""What the report shows of the replay: what was realised, the worst events, the set-point sheet."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

from evenfire.appraisal.results import Appraisal, Replayed
from evenfire.report.figures_paper import Drawing
from evenfire.report.figures_replay import worst_drawing
from evenfire.report.formats import MISSING, number, percent, signed_percent, thousands
from evenfire.report.page_table import Group, Table, plain_table
from evenfire.report.tables import boiler_columns
from evenfire.report.trade_units import gauge


@dataclass(frozen=True, slots=True, kw_only=True)
class ReplayChapter:
    """One alternative's replay."""

    name: str
    words: str
    tables: tuple[Table, ...]
    drawings: tuple[Drawing, ...]


def replay_table(appraisal: Appraisal) -> Table:
    """What of each planned saving real control keeps, and how the plant fares; one column per alternative."""
    money = f"thousand\u00a0{appraisal.case.finance.currency}"
    runs = [(each.name, each.replayed) for each in appraisal.alternatives if each.replayed is not None]

    def row(words: str, cell: Callable[[Replayed], str]) -> tuple[str, ...]:
        return (words, *(cell(run) for _, run in runs))

    return Table(
        caption="Replay of the whole record: controls see the present and the past only.",
        head=("", *(name for name, _ in runs)),
        groups=(
            Group(
                rows=(
                    row("Verdict", lambda run: "works" if run.passes else "leaves more unmet than tolerated"),
                )
            ),
            Group(
                title="Saving",
                rows=(
                    row(f"Planned [{money}]", lambda run: thousands(run.planned_saving)),
                    row(f"Realised [{money}]", lambda run: thousands(run.net_present_saving)),
                    row(
                        "Realised share",
                        lambda run: MISSING if run.realised_share is None else percent(run.realised_share),
                    ),
                    row(
                        "Vessel larger than with foresight by",
                        lambda run: (
                            MISSING if run.margin_percent is None else percent(run.margin_percent / 100.0)
                        ),
                    ),
                    row(
                        f"Following demand better than a pressure band by [{money}]",
                        lambda run: thousands(run.band_cost - run.net_present_cost),
                    ),
                    row(
                        "Cost of operation on weeks not learnt on, against those learnt on",
                        lambda run: signed_percent(run.judged_cost_per_t / run.learnt_cost_per_t - 1.0),
                    ),
                ),
            ),
            Group(
                title="A year of operation",
                rows=(
                    row("Unmet steam [t/a]", lambda run: number(run.unmet_steam_t_per_year, 1)),
                    row("Lowest process pressure [bar g]", lambda run: gauge(run.lowest_process_bar_abs)),
                    row("Lowest boiler pressure [bar g]", lambda run: gauge(run.lowest_boiler_bar_abs)),
                    row(
                        "Danger of wet steam: boiler pressure too low [h/a]",
                        lambda run: number(run.boiler_low_hours_per_year, 1),
                    ),
                    row(
                        "Vessel cannot release fast enough [h/a]",
                        lambda run: number(run.release_limited_hours_per_year, 1),
                    ),
                    row(
                        "Vessel empty when asked [h/a]",
                        lambda run: number(run.vessel_empty_hours_per_year, 1),
                    ),
                ),
            ),
            Group(
                title="Books",
                rows=(
                    row("Mass closes to", lambda run: f"{run.mass_closure_relative:.0e}"),
                    row("Energy closes to", lambda run: f"{run.energy_closure_relative:.0e}"),
                ),
            ),
        ),
    )


def replay_chapters(appraisal: Appraisal) -> tuple[ReplayChapter, ...]:
    """Sizes tried, worst week, worst events and set-points of each alternative."""
    order = boiler_columns(appraisal)
    chapters = []
    for at, result in enumerate(appraisal.alternatives, start=1):
        run = result.replayed
        if run is None:
            continue
        events = (_events_table(run),) if run.events else ()
        sizes = (_sizes_table(appraisal, run),) if len(run.sizes) > 1 else ()
        chapters.append(
            ReplayChapter(
                name=result.name,
                words=_words(run),
                tables=(*sizes, *events, _set_points_table(run)),
                drawings=(worst_drawing(f"replay-{at}", result, run, order),),
            )
        )
    return tuple(chapters)


def _words(run: Replayed) -> str:
    worst = (
        f"Its worst {len(run.events)} events with unmet steam are listed."
        if run.events
        else "The process never got less steam than it asked for."
    )
    return f"{worst} The settings were found in {run.trials} trials on every other week of the record."


def _sizes_table(appraisal: Appraisal, run: Replayed) -> Table:
    money = f"thousand {appraisal.case.finance.currency}"
    return plain_table(
        "Near-optimal plants that were replayed; the first is the optimum with foresight.",
        (
            "Boilers",
            "Vessel [m³]",
            "Window [bar g]",
            f"Planned cost [{money}]",
            f"Replayed cost [{money}]",
            "Unmet steam [t/a]",
        ),
        tuple(
            (
                ", ".join(each.boilers),
                number(each.vessel_volume_m3, 1),
                MISSING
                if each.charged_bar_abs is None or each.discharged_bar_abs is None
                else f"{gauge(each.charged_bar_abs)} to {gauge(each.discharged_bar_abs)}",
                thousands(each.planned_cost),
                thousands(each.replayed_cost),
                number(each.unmet_steam_t_per_year, 1),
            )
            for each in run.sizes
        ),
    )


def _events_table(run: Replayed) -> Table:
    return plain_table(
        "The worst events, by steam that was not met.",
        ("Begins", "Minutes", "Unmet steam [kg]", "Lowest process pressure [bar g]"),
        tuple(
            (
                each.start.replace("T", " "),
                number(each.minutes, 1),
                number(each.unmet_kg),
                gauge(each.lowest_process_bar_abs),
            )
            for each in run.events
        ),
    )


def _set_points_table(run: Replayed) -> Table:
    return plain_table(
        "Set-points of this replay: where commissioning starts, not a release for operation.",
        ("Setting", "Value", "Unit", "Purpose"),
        tuple((each.name, each.value, each.unit, each.purpose) for each in run.set_points),
        word_columns=(2, 3),
    )
