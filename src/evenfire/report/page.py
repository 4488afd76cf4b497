"""The report: one HTML file that needs nothing else, verdict first."""

from __future__ import annotations

from dataclasses import dataclass

from jinja2 import Environment, PackageLoader, StrictUndefined

from evenfire.appraisal.results import AlternativeResult, Appraisal, Standing
from evenfire.demand.peaks import ranked_peaks
from evenfire.demand.quality import record_quality
from evenfire.report.cautions import CAUTIONS
from evenfire.report.figures_demand import duration_drawing, record_drawing, storage_need_drawing
from evenfire.report.figures_dispatch import dispatch_drawing, peak_drawing, shown_days
from evenfire.report.figures_money import money_drawing
from evenfire.report.figures_paper import Drawing
from evenfire.report.formats import gap_words, number, thousands
from evenfire.report.notices import all_notices
from evenfire.report.page_alternatives import (
    cost_tables,
    fuel_table,
    gap_table,
    overview_table,
    payback_words,
    standing_sentences,
)
from evenfire.report.page_equipment import boilers_table, vessel_table
from evenfire.report.page_inputs import (
    boilers_on_offer_table,
    files_table,
    input_tables,
    notices_table,
    record_table,
    typical_days_errors,
    typical_days_table,
)
from evenfire.report.page_record import peaks_table, quality_table
from evenfire.report.page_replay import replay_chapters, replay_table
from evenfire.report.page_storage import storage_need_table
from evenfire.report.page_table import Table
from evenfire.report.tables import boiler_columns
from evenfire.report.trade_units import FUEL_BASIS_WORDS, repeating_command

TEMPLATE = "report.html"


@dataclass(frozen=True, slots=True, kw_only=True)
class Chapter:
    """One alternative's pages: equipment and dispatch."""

    name: str
    standing: str
    best: bool
    tables: tuple[Table, ...]
    drawings: tuple[Drawing, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class KeyNumber:
    """One number beside the verdict."""

    words: str
    value: str
    unit: str


def report_page(appraisal: Appraisal) -> str:
    """The report of an appraisal as one self-contained HTML text.

    It loads nothing, runs no script and shows everything that came from a case as text.

    Parameters
    ----------
    appraisal
        What was found. Alternatives without a plan are shown with the reason, without numbers.
    """
    environment = Environment(
        loader=PackageLoader("evenfire.report"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    notices = all_notices(appraisal)
    return environment.get_template(TEMPLATE).render(
        appraisal=appraisal,
        finance=appraisal.case.finance,
        record_days=number(appraisal.record.days),
        program_version=dict(appraisal.versions).get("evenfire", ""),
        fuel_basis=FUEL_BASIS_WORDS[appraisal.fuel_basis],
        cautions=CAUTIONS,
        key_numbers=key_numbers(appraisal),
        overview=overview_table(appraisal),
        unplanned=tuple(
            (each.name, standing_sentences(each))
            for each in appraisal.alternatives
            if each.standing is not Standing.PLANNED
        ),
        warnings=tuple(each.text for each in notices if each.severity == "warning"),
        money=money_drawing(appraisal) if any(each.planned for each in appraisal.alternatives) else None,
        record=record_drawing(appraisal),
        duration=duration_drawing(appraisal),
        record_table=record_table(appraisal.record),
        quality=quality_table(appraisal.record, record_quality(appraisal.record)),
        peaks=_peaks_table(appraisal),
        storage_need=storage_need_drawing(appraisal),
        storage_need_table=storage_need_table(appraisal),
        chapters=_chapters(appraisal),
        replay_table=replay_table(appraisal),
        replays=replay_chapters(appraisal),
        costs=cost_tables(appraisal),
        fuel_parts=fuel_table(appraisal),
        typical_days=typical_days_table(appraisal.typical_days),
        typical_days_errors=typical_days_errors(appraisal),
        gaps=gap_table(appraisal),
        inputs=input_tables(appraisal),
        boilers_on_offer=boilers_on_offer_table(appraisal) if appraisal.case.boilers else None,
        assumed=notices_table(
            tuple(each for each in notices if each.severity == "assumed"),
            "Assumed by the program, because the case did not state it.",
        ),
        remarks=notices_table(
            tuple(each for each in notices if each.severity != "assumed"), "Remarks and warnings."
        ),
        files=files_table(appraisal),
        command=repeating_command(appraisal),
    )


def _peaks_table(appraisal: Appraisal) -> Table:
    """Peaks above the boilers in place."""
    capacity_kg_s = sum(offer.spec.rated_kg_s for offer in appraisal.case.boilers if offer.existing)
    return peaks_table(appraisal.record, ranked_peaks(appraisal.record, capacity_kg_s), capacity_kg_s)


def key_numbers(appraisal: Appraisal) -> tuple[KeyNumber, ...]:
    """The few numbers of the best alternative that stand beside the verdict."""
    best = next((each for each in appraisal.alternatives if each.name == appraisal.best), None)
    if best is None or not best.planned:
        return ()
    money = f"thousand {appraisal.case.finance.currency}"
    run = best.replayed
    return (
        KeyNumber(words="net present cost", value=thousands(best.headline_cost), unit=money),
        KeyNumber(
            words=f"saved against “{appraisal.reference}”",
            value=thousands(best.net_present_saving if run is None else run.net_present_saving),
            unit=money,
        ),
        KeyNumber(words="investment", value=thousands(best.investment), unit=money),
        KeyNumber(
            words="simple payback",
            value=payback_words(best.payback if run is None else run.payback),
            unit="",
        ),
        KeyNumber(words="proven gap of the plan", value=gap_words(best.gap), unit=""),
    )


def _chapters(appraisal: Appraisal) -> tuple[Chapter, ...]:
    boilers = boiler_columns(appraisal)
    return tuple(
        Chapter(
            name=each.name,
            standing=standing_sentences(each),
            best=each.name == appraisal.best,
            tables=_equipment(each),
            drawings=_dispatch(f"dispatch-{at}", each, boilers),
        )
        for at, each in enumerate(appraisal.alternatives, start=1)
    )


def _dispatch(key: str, result: AlternativeResult, boilers: tuple[str, ...]) -> tuple[Drawing, ...]:
    days = shown_days(result)
    whole = tuple(
        dispatch_drawing(f"{key}-{count}", result, day, boilers) for count, day in enumerate(days, start=1)
    )
    close = tuple(peak_drawing(f"{key}-peak", result, day, boilers) for day in days[-1:])
    return whole + close


def _equipment(result: AlternativeResult) -> tuple[Table, ...]:
    if not result.planned:
        return ()
    vessel = (vessel_table(result.vessel),) if result.vessel is not None else ()
    return (boilers_table(result), *vessel)
