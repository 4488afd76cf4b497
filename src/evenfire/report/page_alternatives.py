"""Tables that set the alternatives beside each other: sizes, money, operation, proof."""

from __future__ import annotations

from collections.abc import Callable

from evenfire.appraisal.results import AlternativeResult, Appraisal, Payback, Replayed, Standing, VesselChoice
from evenfire.report.figures_money import cost_line_names
from evenfire.report.formats import MISSING, digits, gap_words, number, percent, sentence, thousands, years
from evenfire.report.page_table import Group, Table, plain_table
from evenfire.report.trade_units import gauge

STANDING_WORDS = {
    Standing.PLANNED: "planned",
    Standing.GAP_NOT_REACHED: "planned, gap not reached",
    Standing.INFEASIBLE: "not possible",
    Standing.NO_PLAN: "no plan found",
}
"""The result of an alternative in the fewest words."""
STANDING_SENTENCES = {
    Standing.PLANNED: "The plan is within the asked gap.",
    Standing.GAP_NOT_REACHED: "The plan can be built and run, but the search stopped before the asked gap: "
    "a cheaper plan of this kind may exist, by at most the gap shown.",
    Standing.INFEASIBLE: "No plant of this kind can do what the case asks.",
    Standing.NO_PLAN: "The search stopped before it found any plan; this does not mean that there is none.",
}
BASIS_WORD = {"lhv": "net", "hhv": "gross"}

Cell = Callable[[AlternativeResult], str]


def overview_table(appraisal: Appraisal) -> Table:
    """The main table: one column per alternative, the best one set off."""
    finance = appraisal.case.finance
    money = f"thousand\u00a0{finance.currency}"
    basis = BASIS_WORD[appraisal.fuel_basis]
    against = f"against “{appraisal.reference}”"
    return Table(
        caption=(
            f"Alternatives as replayed over the whole record. Money at prices of {finance.price_date}, over "
            f"{finance.horizon_years} years."
        ),
        head=("", *(each.name for each in appraisal.alternatives)),
        groups=(
            Group(rows=(_row("Result", appraisal, _standing, always=True),)),
            Group(
                title="Sizes",
                rows=(
                    _row("Boilers", appraisal, _boilers),
                    _row("Boiler pressure [bar g]", appraisal, _boiler_pressure),
                    _row("Accumulator", appraisal, lambda each: vessel_words(each.vessel)),
                ),
            ),
            Group(
                title="Money",
                rows=(
                    _row(
                        f"Net present cost [{money}]",
                        appraisal,
                        lambda each: thousands(each.headline_cost),
                    ),
                    _row(
                        f"Saved {against} [{money}]",
                        appraisal,
                        lambda each: _run(each, lambda run: thousands(run.net_present_saving)),
                    ),
                    _row(f"Investment [{money}]", appraisal, lambda each: thousands(each.investment)),
                    _row(
                        "Payback, simple",
                        appraisal,
                        lambda each: _run(each, lambda run: payback_words(run.payback)),
                    ),
                    _row(
                        "Payback, discounted",
                        appraisal,
                        lambda each: _run(each, lambda run: discounted_words(run.payback)),
                    ),
                ),
            ),
            Group(
                title="A year of operation",
                rows=(
                    _row(
                        f"Fuel [MWh/a,\u00a0{basis}]",
                        appraisal,
                        lambda each: _run(each, lambda run: number(run.fuel_mwh_per_year)),
                    ),
                    _row(
                        f"Fuel saved [MWh/a,\u00a0{basis}]",
                        appraisal,
                        lambda each: _run(each, lambda run: number(run.fuel_saved_mwh_per_year)),
                    ),
                    _row(
                        "Burner starts [1/a]",
                        appraisal,
                        lambda each: _run(each, lambda run: number(run.burner_starts_per_year)),
                    ),
                    _row(
                        "Unmet steam [t/a]",
                        appraisal,
                        lambda each: _run(each, lambda run: number(run.unmet_steam_t_per_year, 1)),
                    ),
                    _row(
                        "Peaks of the record not covered [t]",
                        appraisal,
                        lambda each: number(each.record_shortfall_t, 1),
                    ),
                ),
            ),
            Group(
                title="As planned, with foresight",
                rows=(
                    _row(
                        f"Net present cost [{money}]",
                        appraisal,
                        lambda each: thousands(each.net_present_cost),
                    ),
                    _row(
                        f"Saved {against} [{money}]",
                        appraisal,
                        lambda each: thousands(each.net_present_saving),
                    ),
                    _row(f"Fuel saved [MWh/a,\u00a0{basis}]", appraisal, _fuel_saved),
                    _row("CO2 saved [t/a]", appraisal, lambda each: number(each.co2_saved_t_per_year)),
                    _row("Burner starts [1/a]", appraisal, lambda each: number(each.burner_starts_per_year)),
                    _row("Unmet steam [t/a]", appraisal, lambda each: number(each.unmet_steam_t_per_year, 1)),
                    _row(
                        f"Cost of steam [{finance.currency}/t]",
                        appraisal,
                        lambda each: number(each.steam_cost_per_t, 2),
                    ),
                ),
            ),
            Group(title="Proof", rows=(_row("Proven gap", appraisal, lambda each: gap_words(each.gap)),)),
        ),
        marked_column=_column_of(appraisal, appraisal.best),
    )


def gap_table(appraisal: Appraisal) -> Table:
    """Cost, proven bound and gap of every alternative, and whether it could still be the cheapest."""
    best = next((each for each in appraisal.alternatives if each.name == appraisal.best), None)
    asked = gap_words(appraisal.case.plan.gap)
    currency = appraisal.case.finance.currency
    return plain_table(
        f"Proven gaps; asked for: {asked}.",
        (
            "Alternative",
            f"Net present cost [{currency}]",
            f"Cannot cost less than [{currency}]",
            "Gap",
            "Why it stopped",
            "Could it still be the cheapest?",
        ),
        tuple(
            (
                each.name,
                number(each.net_present_cost),
                number(each.bound),
                gap_words(each.gap),
                each.solver_status,
                _could_win(each, best),
            )
            for each in appraisal.alternatives
        ),
        word_columns=(4, 5),
    )


def cost_tables(appraisal: Appraisal) -> tuple[Table, Table]:
    """Every cost line of every plant as replayed: over the horizon, and in a year at today's prices."""
    planned = tuple(each for each in appraisal.alternatives if each.planned)
    finance = appraisal.case.finance
    head = ("Cost line", *(each.name for each in planned))
    present, yearly = [], []
    for name in cost_line_names(planned):
        lines = [[line for line in each.headline_cost_lines if line.name == name] for each in planned]
        present.append((name, *(number(sum(line.present_cost for line in found)) for found in lines)))
        if any(line.per_year for found in lines for line in found):
            yearly.append((name, *(number(sum(line.per_year for line in found)) for found in lines)))
    total = ("net present cost", *(number(each.headline_cost) for each in planned))
    return (
        Table(
            caption=f"Present cost over {finance.horizon_years} years [{finance.currency}].",
            head=head,
            groups=(Group(rows=tuple(present)), Group(rows=(total,), total=True)),
        ),
        plain_table(
            f"Cost of one year at prices of {finance.price_date} [{finance.currency}/a].", head, tuple(yearly)
        ),
    )


def fuel_table(appraisal: Appraisal) -> Table:
    """What every plant burns its fuel for."""
    planned = tuple(each for each in appraisal.alternatives if each.planned)
    names = dict.fromkeys(part.name for each in planned for part in each.headline_fuel_parts)
    shares = {
        each.name: {part.name: part.mwh_per_year for part in each.headline_fuel_parts} for each in planned
    }
    return Table(
        caption=f"What the fuel of a year is burnt for [MWh/a, {BASIS_WORD[appraisal.fuel_basis]}].",
        head=("Purpose", *(each.name for each in planned)),
        groups=(
            Group(
                rows=tuple(
                    (name, *(number(shares[each.name].get(name, 0.0)) for each in planned)) for name in names
                )
            ),
            Group(
                rows=(("fuel", *(number(sum(shares[each.name].values())) for each in planned)),), total=True
            ),
        ),
    )


def vessel_words(vessel: VesselChoice | None) -> str:
    """Size and window of an accumulator in a few words."""
    if vessel is None:
        return "none"
    return (
        f"{digits(vessel.volume_m3)}\u00a0m³\n"
        f"{gauge(vessel.charged_bar_abs)} to {gauge(vessel.discharged_bar_abs)}\u00a0bar\u00a0g\n"
        f"gives {number(vessel.steam_capacity_kg)}\u00a0kg"
    )


def payback_words(payback: Payback) -> str:
    """Simple payback in years, or why there is none."""
    return payback.note or MISSING if payback.simple_years is None else years(payback.simple_years)


def discounted_words(payback: Payback) -> str:
    """Discounted payback in years, or why there is none."""
    if payback.discounted_years is None:
        return payback.note or MISSING
    return years(payback.discounted_years)


def _run(result: AlternativeResult, cell: Callable[[Replayed], str]) -> str:
    """A figure of the replay."""
    return MISSING if result.replayed is None else cell(result.replayed)


def _row(label: str, appraisal: Appraisal, cell: Cell, always: bool = False) -> tuple[str, ...]:
    return (
        label,
        *(cell(each) if always or each.planned else MISSING for each in appraisal.alternatives),
    )


def _column_of(appraisal: Appraisal, name: str) -> int | None:
    names = [each.name for each in appraisal.alternatives]
    return names.index(name) + 1 if name in names else None


def standing_sentences(result: AlternativeResult) -> str:
    """What the result of an alternative is, in whole sentences, with its own note."""
    return f"{STANDING_SENTENCES[result.standing]} {sentence(result.note)}".strip()


def _standing(result: AlternativeResult) -> str:
    return STANDING_WORDS[result.standing]


def _boilers(result: AlternativeResult) -> str:
    return (
        "\n".join(f"{boiler.name}{'' if boiler.existing else ' (new)'}" for boiler in result.boilers)
        or "none"
    )


def _boiler_pressure(result: AlternativeResult) -> str:
    return gauge(result.boiler_working_bar_abs)


def _fuel_saved(result: AlternativeResult) -> str:
    return f"{number(result.fuel_saved_mwh_per_year)}\n({percent(result.fuel_saved_percent / 100.0)})"


def _could_win(result: AlternativeResult, best: AlternativeResult | None) -> str:
    if best is None or best.net_present_cost is None:
        return MISSING
    if result.standing is Standing.INFEASIBLE:
        return "no: it cannot be built as the case stands"
    if result is best:
        return "it is the cheapest found"
    if result.bound is not None and result.bound >= best.net_present_cost:
        return "no: its bound lies above the cheapest cost"
    return (
        "yes: its bound lies below the cheapest cost" if result.bound is not None else "not known: no bound"
    )
