"""What the report shows of the replay: what was realised, the worst events, the set-point sheet."""

from __future__ import annotations

from dataclasses import dataclass

from evenfire.appraisal.results import AlternativeResult, Appraisal, Replayed
from evenfire.report.figures_paper import Drawing
from evenfire.report.figures_replay import worst_drawing
from evenfire.report.formats import MISSING, number, percent, thousands
from evenfire.report.page_table import Table, plain_table
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
    """What of each planned saving real control keeps, and how the plant fares."""
    money = f"thousand {appraisal.case.finance.currency}"
    run = [(each.name, each.replayed) for each in appraisal.alternatives if each.replayed is not None]
    return plain_table(
        "Replay of the whole record: controls see the present and the past only.",
        (
            "Alternative",
            f"Saving planned [{money}]",
            f"Saving realised [{money}]",
            "Realised",
            "Vessel larger than with foresight",
            f"Tuned control better than pressure band by [{money}]",
            "Unmet steam [t/a]",
            "Lowest process pressure [bar g]",
            "Lowest boiler pressure [bar g]",
            "Hours a year with danger of wet steam",
            "Books close to",
            "Verdict",
        ),
        tuple(
            (
                name,
                thousands(each.planned_saving),
                thousands(each.net_present_saving),
                MISSING if each.realised_share is None else percent(each.realised_share),
                MISSING if each.margin_percent is None else percent(each.margin_percent / 100.0),
                thousands(each.band_cost - each.net_present_cost),
                number(each.unmet_steam_t_per_year, 1),
                gauge(each.lowest_process_bar_abs),
                gauge(each.lowest_boiler_bar_abs),
                number(each.boiler_low_hours_per_year, 1),
                f"{max(each.mass_closure_relative, each.energy_closure_relative):.0e}",
                "works" if each.passes else "leaves more unmet than tolerated",
            )
            for name, each in run
        ),
        word_columns=(11,),
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
                words=_words(result, run),
                tables=(*sizes, *events, _set_points_table(run)),
                drawings=(worst_drawing(f"replay-{at}", result, run, order),),
            )
        )
    return tuple(chapters)


def _words(result: AlternativeResult, run: Replayed) -> str:
    worst = (
        f"{len(run.events)} of its events with unmet steam are listed."
        if run.events
        else "The process never got less steam than it asked for."
    )
    learnt = f"{run.trials} trials on every other week; cost of operation per tonne of demand, "
    learnt += (
        f"{run.learnt_cost_per_t:.2f} on the weeks learnt on and {run.judged_cost_per_t:.2f} on the others."
    )
    return f"{worst} Settings: {learnt}"


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
