"""The page of random scenarios."""

from __future__ import annotations

from jinja2 import Environment, PackageLoader, StrictUndefined

from evenfire.report.cautions import CAUTIONS
from evenfire.report.figures_risk import regret_drawing
from evenfire.report.formats import gap_words, number, percent, plain, thousands
from evenfire.report.page_table import Group, Table, plain_table
from evenfire.sweep.risk_results import AlternativeRisk, RiskResult

RISK_TEMPLATE = "risk.html"


def risk_page(result: RiskResult) -> str:
    """What random scenarios found as one self-contained HTML text."""
    environment = Environment(
        loader=PackageLoader("evenfire.report"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    return environment.get_template(RISK_TEMPLATE).render(
        result=result,
        scenarios=number(result.scenarios),
        replanned_scenarios="" if result.replanned is None else number(result.replanned.scenarios),
        answer=risk_words(result),
        cautions=CAUTIONS,
        regret=regret_drawing(result),
        alternatives=alternatives_table(result, result.alternatives),
        inputs=inputs_table(result),
        replanned=replanned_table(result),
        files=Table(
            caption="Input files, SHA-256.", head=("", ""), groups=(Group(rows=result.input_hashes),)
        ),
        versions=Table(caption="Versions.", head=("", ""), groups=(Group(rows=result.versions),)),
    )


def risk_words(result: RiskResult) -> str:
    """Which alternative is cheapest how often, and what choosing it can cost."""
    likeliest = next(x for x in result.alternatives if x.name == result.likeliest_cheapest)
    words = (
        f"“{likeliest.name}” is the cheapest in {percent(likeliest.probability_cheapest)} of "
        f"{number(result.scenarios)} scenarios; its largest regret is "
        f"{thousands(likeliest.largest_regret)} thousand {result.currency}."
    )
    if result.least_largest_regret != likeliest.name:
        safest = next(x for x in result.alternatives if x.name == result.least_largest_regret)
        words += (
            f" The least largest regret has “{safest.name}”, {thousands(safest.largest_regret)} thousand "
            f"{result.currency}."
        )
    if result.least_expected_regret not in (likeliest.name, result.least_largest_regret):
        words += f" The least expected regret has “{result.least_expected_regret}”."
    return words


def alternatives_table(result: RiskResult, rows: tuple[AlternativeRisk, ...]) -> Table:
    """Probability, percentiles and regret."""
    return plain_table(
        f"Net present cost and regret in thousand {result.currency}.",
        (
            "Alternative",
            "Cheapest in",
            "As stated",
            "Proven gap",
            "Expected",
            "P10",
            "P50",
            "P90",
            "Expected regret",
            "Largest regret",
        ),
        tuple(
            (
                each.name,
                f"{percent(each.probability_cheapest)} ± {percent(each.probability_error)}",
                thousands(each.base_cost),
                gap_words(each.gap),
                *(
                    thousands(value)
                    for value in (
                        each.expected_cost,
                        each.p10_cost,
                        each.p50_cost,
                        each.p90_cost,
                        each.expected_regret,
                        each.largest_regret,
                    )
                ),
            )
            for each in rows
        ),
    )


def inputs_table(result: RiskResult) -> Table:
    """What is uncertain, as stated and as drawn."""
    return plain_table(
        "Deviation from what the case states, % (of growth, % a year).",
        (
            "Uncertain",
            "Distribution",
            "Low",
            "Likely",
            "High",
            "Drawn P10",
            "P50",
            "P90",
            "Walk, % a year",
            "Correlation with fuel price",
        ),
        tuple(
            (
                each.name,
                each.distribution,
                plain(each.low_percent),
                plain(each.likely_percent) if each.distribution == "triangular" else "",
                plain(each.high_percent),
                number(each.drawn_p10_percent, 1),
                number(each.drawn_p50_percent, 1),
                number(each.drawn_p90_percent, 1),
                plain(each.yearly_volatility_percent) if each.yearly_volatility_percent else "none",
                plain(each.correlation_with_fuel_price) if each.correlation_with_fuel_price else "none",
            )
            for each in result.inputs
        ),
        word_columns=(1,),
    )


def replanned_table(result: RiskResult) -> Table | None:
    """The scenarios planned anew; None where it was not asked for."""
    again = result.replanned
    if again is None:
        return None
    return plain_table(
        f"Planned anew, thousand {result.currency}; gap up to {percent(again.largest_gap, 2)}.",
        (
            "Alternative",
            "Cheapest in",
            "Expected",
            "Expected regret",
            "Largest regret",
            "Saved by planning anew",
        ),
        tuple(
            (
                each.name,
                f"{percent(each.probability_cheapest)} ± {percent(each.probability_error)}",
                thousands(each.expected_cost),
                thousands(each.expected_regret),
                thousands(each.largest_regret),
                thousands(saved),
            )
            for each, saved in zip(again.alternatives, again.saved_by_replanning, strict=True)
        ),
    )
