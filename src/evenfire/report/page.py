"""The report: one HTML file that needs nothing else, verdict first."""

from __future__ import annotations

from dataclasses import dataclass

from jinja2 import Environment, PackageLoader, StrictUndefined

from evenfire.appraisal.results import AlternativeResult, Appraisal
from evenfire.report.cautions import CAUTIONS
from evenfire.report.figures_demand import duration_drawing, record_drawing, storage_need_drawing
from evenfire.report.figures_dispatch import dispatch_drawing, shown_days
from evenfire.report.figures_money import money_drawing
from evenfire.report.figures_paper import Drawing
from evenfire.report.formats import gap_words, thousands
from evenfire.report.notices import all_notices
from evenfire.report.page_alternatives import (
    STANDING_WORDS,
    cost_tables,
    gap_table,
    overview_table,
    payback_words,
)
from evenfire.report.page_equipment import boilers_table, vessel_table
from evenfire.report.page_inputs import (
    boilers_on_offer_table,
    files_table,
    inputs_table,
    notices_table,
    record_table,
    storage_need_table,
    typical_days_errors,
    typical_days_table,
)
from evenfire.report.page_table import Table
from evenfire.report.tables import boiler_columns
from evenfire.report.trade_units import FUEL_BASIS_WORDS, repeating_command

TEMPLATE = "report.html"


@dataclass(frozen=True, slots=True, kw_only=True)
class Chapter:
    """One alternative's pages: equipment and dispatch."""

    name: str
    standing: str
    note: str
    best: bool
    tables: tuple[Table, ...]
    drawings: tuple[Drawing, ...]


@dataclass(frozen=True, slots=True, kw_only=True)
class Figure:
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
        fuel_basis=FUEL_BASIS_WORDS[appraisal.fuel_basis],
        cautions=CAUTIONS,
        figures=verdict_figures(appraisal),
        overview=overview_table(appraisal),
        warnings=tuple(each.text for each in notices if each.severity == "warning"),
        money=money_drawing(appraisal) if any(each.planned for each in appraisal.alternatives) else None,
        record=record_drawing(appraisal),
        duration=duration_drawing(appraisal),
        record_table=record_table(appraisal),
        storage_need=storage_need_drawing(appraisal),
        storage_need_table=storage_need_table(appraisal),
        chapters=_chapters(appraisal),
        costs=cost_tables(appraisal),
        typical_days=typical_days_table(appraisal),
        typical_days_errors=typical_days_errors(appraisal),
        gaps=gap_table(appraisal),
        inputs=inputs_table(appraisal),
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


def verdict_figures(appraisal: Appraisal) -> tuple[Figure, ...]:
    """The few numbers of the best alternative that stand beside the verdict."""
    best = next((each for each in appraisal.alternatives if each.name == appraisal.best), None)
    if best is None or not best.planned:
        return ()
    money = f"thousand {appraisal.case.finance.currency}"
    return (
        Figure(words="Net present cost", value=thousands(best.net_present_cost), unit=money),
        Figure(
            words=f"saved against “{appraisal.reference}”",
            value=thousands(best.net_present_saving),
            unit=money,
        ),
        Figure(words="investment", value=thousands(best.investment), unit=money),
        Figure(words="simple payback", value=payback_words(best.payback), unit=""),
        Figure(words="proven gap", value=gap_words(best.gap), unit=""),
    )


def _chapters(appraisal: Appraisal) -> tuple[Chapter, ...]:
    boilers = boiler_columns(appraisal)
    return tuple(
        Chapter(
            name=each.name,
            standing=STANDING_WORDS[each.standing],
            note=each.note,
            best=each.name == appraisal.best,
            tables=_equipment(each),
            drawings=tuple(
                dispatch_drawing(f"dispatch-{at}-{number}", each, day, boilers)
                for number, day in enumerate(shown_days(each), start=1)
            ),
        )
        for at, each in enumerate(appraisal.alternatives, start=1)
    )


def _equipment(result: AlternativeResult) -> tuple[Table, ...]:
    if not result.planned:
        return ()
    vessel = (vessel_table(result.vessel),) if result.vessel is not None else ()
    return (boilers_table(result), *vessel)
