"""The page of a sweep."""

from __future__ import annotations

from collections import Counter

from jinja2 import Environment, PackageLoader, StrictUndefined

from evenfire.report.cautions import CAUTIONS
from evenfire.report.figures_sweep import cost_drawing, ranking_drawing, winner_drawing
from evenfire.report.formats import MISSING, digits, gap_words, number, percent, plain, thousands
from evenfire.report.page_table import Group, Table, plain_table
from evenfire.sweep.results import PointAlternative, SweepResult, VariedInput

SWEEP_TEMPLATE = "sweep.html"
SHOWN_POINTS = 400


def sweep_page(result: SweepResult) -> str:
    """A sweep as one self-contained HTML text."""
    environment = Environment(
        loader=PackageLoader("evenfire.report"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    varied = ", ".join(input_words(each, result.currency) for each in result.inputs)
    return environment.get_template(SWEEP_TEMPLATE).render(
        result=result,
        question=f"Varied: {varied}" if varied else "Inputs ranked",
        answer=answer_words(result),
        cautions=CAUTIONS,
        costs=cost_drawing(result) if len(result.inputs) == 1 else None,
        winners=winner_drawing(result) if len(result.inputs) == 2 else None,
        stretches=stretches_table(result) if result.stretches else None,
        break_evens=break_evens_table(result) if result.break_evens else None,
        points=points_table(result) if result.points else None,
        ranking=ranking_drawing(result) if result.ranking else None,
        ranking_table=ranking_table(result) if result.ranking else None,
        files=Table(
            caption="Input files, SHA-256.", head=("", ""), groups=(Group(rows=result.input_hashes),)
        ),
        versions=Table(caption="Versions.", head=("", ""), groups=(Group(rows=result.versions),)),
    )


def input_words(each: VariedInput, currency: str) -> str:
    """An input with its unit."""
    unit = each.unit.replace("currency", currency)
    return f"{each.path} [{unit}]" if unit else each.path


def answer_words(result: SweepResult) -> str:
    """Who wins where: by stretch of one input, or how often over two."""
    if len(result.inputs) == 2:
        wins = Counter(point.winner for point in result.points if point.winner is not None)
        return "; ".join(
            f"“{name}” is the cheapest at {times} of {len(result.points)} points"
            for name, times in wins.most_common()
        ) + ("." if wins else "No alternative has a plan.")
    if not result.inputs:
        return ""
    unit = result.inputs[0].unit.replace("currency", result.currency)
    words = []
    for each in result.stretches:
        range_words = f"from {plain(each.low, 4)} to {plain(each.high, 4)} {unit}".strip()
        if each.low == each.high:
            range_words = f"at {plain(each.low, 4)} {unit}".strip()
        doubt = f" (not proven against {' and '.join(f'“{x}”' for x in each.rivals)})" if each.rivals else ""
        words.append(f"“{each.winner}” is the cheapest {range_words}{doubt}")
    return ("; ".join(words) + ".") if words else "No alternative has a plan."


def stretches_table(result: SweepResult) -> Table:
    """The cheapest alternative on every stretch."""
    return plain_table(
        "The cheapest alternative on every stretch of "
        + input_words(result.inputs[result.along], result.currency)
        + ".",
        (*_other_heads(result), "From", "To", "Cheapest", "Not excluded by the bounds"),
        tuple(
            (
                *(plain(value) for value in each.at),
                digits(each.low, 4),
                digits(each.high, 4),
                each.winner,
                ", ".join(each.rivals) or "none",
            )
            for each in result.stretches
        ),
        word_columns=(len(result.inputs) + 1, len(result.inputs) + 2),
    )


def break_evens_table(result: SweepResult) -> Table:
    """Every break-even with the interval that the gaps leave."""
    return plain_table(
        "Values of "
        + input_words(result.inputs[result.along], result.currency)
        + " at which two alternatives cost the same.",
        (*_other_heads(result), "Cheaper below", "Cheaper above", "Break-even", "Not below", "Not above", ""),
        tuple(
            (
                *(plain(value) for value in each.at),
                each.cheaper_below,
                each.cheaper_above,
                digits(each.value, 4),
                digits(each.low, 4),
                digits(each.high, 4),
                "proven" if each.proven else "the bounds leave open whether there is one",
            )
            for each in result.break_evens
        ),
        word_columns=tuple(len(result.inputs) - 1 + x for x in (0, 1, 5)),
    )


def _other_heads(result: SweepResult) -> tuple[str, ...]:
    return tuple(
        input_words(each, result.currency) for i, each in enumerate(result.inputs) if i != result.along
    )


def points_table(result: SweepResult) -> Table:
    """Every alternative at every point, the first few hundred rows; the CSV table holds all."""
    rows = [
        (
            *(plain(value) for value in point.values),
            f"{each.name} *" if each.name == point.winner else each.name,
            thousands(each.net_present_cost),
            gap_words(each.gap) if each.net_present_cost is not None else each.standing,
            " + ".join(each.boilers) or MISSING,
            vessel_words(each),
            number(each.fuel_mwh_per_year),
            number(each.unmet_steam_t_per_year, 1),
        )
        for point in result.points
        for each in point.alternatives
    ]
    rest = len(rows) - SHOWN_POINTS
    more = f" The first {SHOWN_POINTS} rows; {rest} more are in sweep.csv." if rest > 0 else ""
    return plain_table(
        f"Every point; * the cheapest. Costs in thousand {result.currency}.{more}",
        (
            *(input_words(each, result.currency) for each in result.inputs),
            "Alternative",
            "Net present cost",
            "Proven gap",
            "Boilers",
            "Vessel",
            "Fuel, MWh/a",
            "Unmet steam, t/a",
        ),
        tuple(rows[:SHOWN_POINTS]),
        word_columns=tuple(len(result.inputs) + x for x in (0, 3, 4)),
    )


def vessel_words(each: PointAlternative) -> str:
    """Volume and window of a vessel."""
    if each.vessel_volume_m3 is None or each.charged_bar_g is None or each.discharged_bar_g is None:
        return "none" if each.boilers else MISSING
    return (
        f"{number(each.vessel_volume_m3, 1)} m³, "
        f"{number(each.charged_bar_g, 1)} to {number(each.discharged_bar_g, 1)} bar g"
    )


def ranking_table(result: SweepResult) -> Table:
    """The ranked inputs with winners and gaps."""
    return plain_table(
        f"Inputs by what they move, saving in thousand {result.currency}.",
        ("Input", "Saving, low", "Saving, high", "Cheapest, low", "Cheapest, high", "Gap up to", "Paths"),
        tuple(
            (
                each.name,
                thousands(each.low.saving),
                thousands(each.high.saving),
                each.low.winner or MISSING,
                each.high.winner or MISSING,
                percent(each.gap, 2),
                "\n".join(each.paths),
            )
            for each in result.ranking
        ),
        word_columns=(3, 4, 6),
    )
