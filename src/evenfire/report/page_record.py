"""The page of a record's study, and the quality sheet as it stands in a report."""

from __future__ import annotations

import datetime as dt

from jinja2 import Environment, PackageLoader, StrictUndefined

from evenfire.appraisal.record_study import RecordProblem, RecordStudy
from evenfire.demand.enough_days import EnoughDays
from evenfire.demand.peaks import Peak
from evenfire.demand.quality import QualitySheet
from evenfire.demand.sensor_faults import Stretch
from evenfire.demand.series import DemandRecord, StorageNeed
from evenfire.report.cautions import CAUTIONS
from evenfire.report.figures_demand import course_drawing, curve_drawing
from evenfire.report.figures_record import need_drawing, peaks_drawing, ramps_drawing, week_drawing
from evenfire.report.formats import MISSING, digits, number, percent, plain, short, signed_percent
from evenfire.report.page_inputs import record_table, typical_days_table
from evenfire.report.page_table import Group, Table, plain_table
from evenfire.units import KG_PER_TONNE, SECONDS_PER_HOUR, kg_s_to_t_h

RECORD_TEMPLATE = "record.html"
SECONDS_PER_MINUTE = 60.0
SHOWN_PEAKS = 12
SHOWN_STRETCHES = 6
SHOWN_BREAKPOINTS = 40


def record_page(study: RecordStudy, inputs: tuple[tuple[str, str], ...]) -> str:
    """The study of a record as one self-contained HTML text.

    Parameters
    ----------
    study
        What was found.
    inputs
        Name and SHA-256 of every input file.
    """
    environment = Environment(
        loader=PackageLoader("evenfire.report"),
        autoescape=True,
        undefined=StrictUndefined,
        trim_blocks=True,
        lstrip_blocks=True,
    )
    capacity_t_h = kg_s_to_t_h(study.capacity_kg_s)
    record = study.record
    return environment.get_template(RECORD_TEMPLATE).render(
        study=study,
        cautions=CAUTIONS,
        numbers=_key_numbers(study),
        problems=problems_table(record, study.problems),
        course=course_drawing(record, capacity_t_h, study.capacity_words, f"{study.capacity_words} is"),
        duration=curve_drawing(record, capacity_t_h, study.capacity_words),
        figures=record_table(record),
        peaks=peaks_drawing(study.peaks, study.capacity_kg_s),
        peaks_table=peaks_table(record, study.peaks, study.capacity_kg_s),
        week=week_drawing(record),
        ramps=ramps_drawing(study.quality.ramps),
        quality=quality_table(record, study.quality),
        need=need_drawing(study.storage_need, study.capacity_kg_s, study.capacity_words),
        need_table=need_table(record, study.storage_need),
        days=None if study.typical is None else typical_days_table(study.typical.days),
        errors=None if study.typical is None else errors_table(study.typical),
        files=Table(caption="Input files, SHA-256.", head=("", ""), groups=(Group(rows=inputs),)),
    )


def _key_numbers(study: RecordStudy) -> tuple[tuple[str, str, str], ...]:
    found = study.statistics
    return (
        ("steam", number(found.steam_kg / KG_PER_TONNE), "t"),
        ("mean demand", digits(kg_s_to_t_h(found.mean_kg_s)), "t/h"),
        ("peak demand", digits(kg_s_to_t_h(found.peak_kg_s)), "t/h"),
        ("measured", percent(study.quality.coverage), ""),
        ("step", plain(study.record.step_s), "s"),
    )


def problems_table(record: DemandRecord, problems: tuple[RecordProblem, ...]) -> Table | None:
    """What was found, where, and what was done; None where nothing was found."""
    if not problems:
        return None
    return plain_table(
        "What was found in the record and what was done.",
        ("Finding", "Where", "Done", "Code"),
        tuple((each.text, _places(record, each.stretches), each.done, each.code) for each in problems),
        word_columns=(1, 2, 3),
    )


def _places(record: DemandRecord, stretches: tuple[tuple[int, int], ...]) -> str:
    lines = [
        f"{_moment(record, first)}, {short((last - first + 1) * record.step_s / SECONDS_PER_MINUTE)} min"
        for first, last in stretches[:SHOWN_STRETCHES]
    ]
    if len(stretches) > SHOWN_STRETCHES:
        lines.append(f"and {number(len(stretches) - SHOWN_STRETCHES)} more")
    return "\n".join(lines) or MISSING


def quality_table(record: DemandRecord, quality: QualitySheet) -> Table:
    """The quality sheet: what was measured, what is doubtful, how well the step shows the peaks."""
    cut, resolution = quality.saturation, quality.resolution
    if cut is None:
        top = "no sign of it"
    elif cut.likely_peak_kg_s is None:
        top = f"{digits(kg_s_to_t_h(cut.top_kg_s))} t/h for {short(cut.hours)} h; true peaks not known"
    else:
        top = (
            f"{digits(kg_s_to_t_h(cut.top_kg_s))} t/h for {short(cut.hours)} h; the highest peak was perhaps "
            f"{digits(kg_s_to_t_h(cut.likely_peak_kg_s))} t/h"
        )
    hidden = f", half the step might show {digits(kg_s_to_t_h(resolution.hidden_kg_s))} t/h more"
    return plain_table(
        "Quality sheet of the record.",
        ("", ""),
        (
            ("Measured by a meter", percent(quality.coverage, 2)),
            (
                "Gaps filled",
                f"{number(len(quality.gaps))}, the longest {short(quality.longest_gap_s / 60.0)} min"
                if quality.gaps
                else "none",
            ),
            ("Single steps far above the rest", _count(quality.spikes)),
            ("Single steps that drop to nothing", _count(quality.dropouts)),
            ("Hours at exactly one value", _hours(quality.flat_lines, record.step_s)),
            ("Cut off at the meter's top of range", top),
            ("No flow", percent(quality.zero_share)),
            ("Below 1 % of the peak", percent(quality.idle_share)),
            ("Smallest change of a value", f"{digits(kg_s_to_t_h(quality.smallest_change_kg_s))} t/h"),
            (
                "Length of the highest peaks",
                f"{short(resolution.peak_length_s / SECONDS_PER_MINUTE)} min at a step of "
                f"{plain(record.step_s / SECONDS_PER_MINUTE)} min{hidden if resolution.coarse else ''}",
            ),
            *(
                (
                    f"Rise within {short(ramp.within_s / SECONDS_PER_MINUTE)} min",
                    f"largest {digits(kg_s_to_t_h(ramp.largest_rise_kg_s))} t/h, passed in 1 % of the record "
                    f"{digits(kg_s_to_t_h(ramp.usual_rise_kg_s))} t/h",
                )
                for ramp in quality.ramps
            ),
        ),
        word_columns=(1,),
    )


def _count(stretches: tuple[Stretch, ...]) -> str:
    return number(len(stretches)) if stretches else "none"


def _hours(stretches: tuple[Stretch, ...], step_s: float) -> str:
    steps = sum(each.last_step - each.first_step + 1 for each in stretches)
    return short(steps * step_s / SECONDS_PER_HOUR) if stretches else "none"


def peaks_table(record: DemandRecord, peaks: tuple[Peak, ...], capacity_kg_s: float) -> Table:
    """The peaks with the most steam above a capacity, then the longest ones."""
    longest = sorted(peaks, key=lambda peak: -peak.duration_s)[:SHOWN_PEAKS]

    def rows(shown: list[Peak] | tuple[Peak, ...]) -> tuple[tuple[str, ...], ...]:
        return tuple(
            (
                _moment(record, peak.first_step),
                short(peak.duration_s / SECONDS_PER_MINUTE),
                digits(peak.steam_above_kg / KG_PER_TONNE),
                digits(kg_s_to_t_h(peak.highest_kg_s)),
            )
            for peak in shown
        )

    return Table(
        caption=f"Peaks above {short(kg_s_to_t_h(capacity_kg_s))} t/h, of {number(len(peaks))} in all.",
        head=("Begins", "Duration [min]", "Steam above [t]", "Highest step [t/h]"),
        groups=(
            Group(title="Most steam above it", rows=rows(peaks[:SHOWN_PEAKS])),
            Group(title="Longest", rows=rows(longest)),
        ),
    )


def need_table(record: DemandRecord, need: StorageNeed) -> Table:
    """Breakpoints of S(C) with the stretch of the record that decides each piece."""
    deciding = (
        *(
            f"{short(piece.duration_s / SECONDS_PER_MINUTE)} min from {_moment(record, piece.first_step)}"
            for piece in need.pieces
        ),
        "none: the peak is met",
    )
    rows = tuple(
        (plain(kg_s_to_t_h(float(capacity)), 4), digits(float(storage) / KG_PER_TONNE), words)
        for capacity, storage, words in zip(need.capacity_kg_s, need.storage_kg, deciding, strict=True)
    )
    left_out = len(rows) - SHOWN_BREAKPOINTS
    rest = f" {number(left_out)} smaller capacities stand in record.json." if left_out > 0 else ""
    return plain_table(
        f"Storage that the record needs, exact at these capacities and straight in between.{rest}",
        ("Boilers [t/h]", "Storage [t]", "Stretch that decides it from here on"),
        rows[-SHOWN_BREAKPOINTS:],
        word_columns=(2,),
    )


def errors_table(found: EnoughDays) -> Table:
    """What typical days get wrong against all complete days of the record."""
    errors = found.errors
    return plain_table(
        "What the typical days get wrong.",
        ("", "Error", "Meaning"),
        (
            ("Steam", signed_percent(errors.energy, 2), "of the weighted days against all complete days"),
            (
                "Load duration curve",
                percent(errors.duration_curve, 2),
                "mean distance of the two curves, as a share of mean demand",
            ),
            ("Steam above the capacity", signed_percent(errors.peak_steam), "depth of the peaks"),
            ("Time above the capacity", signed_percent(errors.peak_time), "number and length of the peaks"),
            (
                "Highest step",
                signed_percent(found.days.peak_error),
                "highest step of the typical days against the highest raw step: what averaging hides",
            ),
            (
                "Cost",
                MISSING if errors.cost is None else signed_percent(errors.cost, 2),
                "the same plant dispatched on the typical days against every complete day"
                if errors.cost is not None
                else "not compared: needs the boilers and prices of a case",
            ),
        ),
        word_columns=(2,),
    )


def _moment(record: DemandRecord, step: int) -> str:
    moment = record.start + dt.timedelta(seconds=step * record.step_s)
    return f"{moment:%Y-%m-%d\u00a0%H:%M}" + (f":{moment:%S}" if moment.second else "")
