"""Tables of what an appraisal rests on: record, typical days, inputs, assumptions, files."""

from __future__ import annotations

from evenfire.appraisal.results import Appraisal
from evenfire.demand.series import DemandRecord, TypicalDays
from evenfire.demand.statistics import demand_statistics
from evenfire.errors import Notice
from evenfire.report.formats import MISSING, digits, number, percent, plain, signed_percent
from evenfire.report.page_table import Group, Table, plain_table
from evenfire.report.trade_units import SECONDS_PER_MINUTE, Quantity, boiler_quantities, input_sections
from evenfire.units import KG_PER_TONNE, kg_s_to_t_h

SECTION_TITLES = {
    "steam": "Steam",
    "fuel": "Fuel and carbon",
    "money": "Money",
    "plan": "Plan",
    "vessel": "Accumulator on offer",
}
ORIGIN_WORDS = {"assumed": "assumed", "note": "remark", "warning": "warning"}


def record_table(record: DemandRecord) -> Table:
    """The record in figures."""
    found = demand_statistics(record)
    return plain_table(
        "The record in figures.",
        ("", "", ""),
        (
            ("File", record.source, ""),
            ("First step, local time", f"{record.start:%Y-%m-%d\u00a0%H:%M}", ""),
            ("Length", number(found.days, 1), "days"),
            ("Step", plain(record.step_s / SECONDS_PER_MINUTE), "min"),
            ("Steam", number(found.steam_kg / KG_PER_TONNE), "t"),
            ("Mean demand", digits(kg_s_to_t_h(found.mean_kg_s)), "t/h"),
            ("Peak demand, highest step", digits(kg_s_to_t_h(found.peak_kg_s)), "t/h"),
            ("Lowest step", digits(kg_s_to_t_h(found.lowest_kg_s)), "t/h"),
            ("Mean over peak", percent(found.load_factor), ""),
            (
                "Steepest rise from step to step",
                digits(kg_s_to_t_h(found.steepest_rise_kg_s2) * SECONDS_PER_MINUTE),
                "t/h\u00a0per\u00a0min",
            ),
        ),
        word_columns=(2,),
    )


def typical_days_table(typical: TypicalDays) -> Table:
    """The typical days and their weights."""
    return plain_table(
        "Typical days: real days of the record, each standing for several.",
        ("Day", "Date", "Days per year", "Steam [t]", "Mean [t/h]", "Highest step [t/h]"),
        tuple(
            (
                day.name,
                day.date.isoformat(),
                number(day.days_per_year, 1),
                digits(kg_s_to_t_h(float(day.flow_kg_s.mean())) * 24.0),
                digits(kg_s_to_t_h(float(day.flow_kg_s.mean()))),
                digits(kg_s_to_t_h(float(day.flow_kg_s.max()))),
            )
            for day in typical.days
        ),
        word_columns=(1,),
    )


def typical_days_errors(appraisal: Appraisal) -> Table:
    """What the typical days get wrong."""
    typical = appraisal.typical_days
    return plain_table(
        "What the typical days get wrong.",
        ("", "Error", "Meaning"),
        (
            (
                "Steam of a year",
                signed_percent(typical.energy_error),
                "steam of the weighted days against steam of the record",
            ),
            (
                "Load duration curve",
                percent(typical.duration_curve_error),
                "mean distance of the two curves, as a share of mean demand",
            ),
            (
                "Highest step",
                signed_percent(typical.peak_error),
                "highest step of the typical days against the highest raw step; "
                "shorter peaks are averaged away here and checked on the raw record instead",
            ),
            (
                "Steam above today's boilers",
                signed_percent(appraisal.day_errors.peak_steam),
                "depth of the peaks, against every complete day of the record",
            ),
            (
                "Time above today's boilers",
                signed_percent(appraisal.day_errors.peak_time),
                "number and length of the peaks, against every complete day of the record",
            ),
            (
                "Operating cost",
                MISSING
                if appraisal.day_errors.cost is None
                else signed_percent(appraisal.day_errors.cost, 2),
                "today's plant, and one with storage, operated on the typical days against every complete "
                "day of the record; the larger difference",
            ),
        ),
        word_columns=(2,),
    )


def input_tables(appraisal: Appraisal) -> tuple[Table, ...]:
    """Every input that is one number, as the program used it, one table per section of the case."""
    return tuple(
        plain_table(
            SECTION_TITLES[section],
            ("", "", ""),
            tuple(_input_row(each) for each in quantities),
            word_columns=(2,),
        )
        for section, quantities in input_sections(appraisal.case)
    )


def boilers_on_offer_table(appraisal: Appraisal) -> Table:
    """Boilers in place and boilers on offer, as the program used them."""
    currency = appraisal.case.finance.currency
    offers = [(offer, boiler_quantities(offer)) for offer in appraisal.case.boilers]
    head = tuple(_head(each, currency) for each in offers[0][1])
    return Table(
        caption="Boilers as the program used them; efficiency on net calorific value.",
        head=head,
        groups=tuple(
            Group(
                title=title,
                rows=tuple(
                    tuple(_shown(cell, 4) for cell in each) for offer, each in offers if offer.existing is old
                ),
            )
            for title, old in (("In place", True), ("On offer", False))
            if any(offer.existing is old for offer, _ in offers)
        ),
    )


def notices_table(notices: tuple[Notice, ...], caption: str) -> Table:
    """Notices with their origin and code."""
    return plain_table(
        caption,
        ("What", "Origin", "Code"),
        tuple((each.text, ORIGIN_WORDS.get(each.severity, each.severity), each.code) for each in notices),
        word_columns=(1, 2),
    )


def files_table(appraisal: Appraisal) -> Table:
    """Input files with their hashes, and versions of the programs."""
    return Table(
        caption="Files and versions.",
        head=("", ""),
        groups=(
            Group(title="SHA-256 of the input files", rows=appraisal.case.input_hashes),
            Group(title="Versions", rows=appraisal.versions),
        ),
        word_columns=(1,),
    )


def _input_row(quantity: Quantity) -> tuple[str, str, str]:
    return (
        quantity.words,
        _shown(quantity),
        "" if quantity.unit == "1" else quantity.unit.replace(" ", "\u00a0"),
    )


def _head(quantity: Quantity, currency: str) -> str:
    unit = currency if quantity.unit == "money" else quantity.unit
    return f"{quantity.words} [{unit}]" if unit not in ("", "1") else quantity.words


def _shown(quantity: Quantity, significant: int = 6) -> str:
    match quantity.value:
        case None:
            return MISSING
        case str() as words:
            return words
        case tuple() as several:
            return ", ".join(words.replace(" ", "\u00a0") for words in several)
        case value:
            return plain(value, significant)
