"""``evenfire record``: what a record of steam demand is worth, from a case or from a bare data file."""

from __future__ import annotations

import gzip
import hashlib
from collections.abc import Callable
from dataclasses import asdict, dataclass
from pathlib import Path

from rich.console import Console

from evenfire.appraisal.case_record import case_record
from evenfire.appraisal.day_choice import MOST_DAYS, chosen_days
from evenfire.appraisal.record_study import RecordStudy, record_study
from evenfire.appraisal.vessels import window_tables
from evenfire.case.load import load_case
from evenfire.demand.enough_days import DayTolerances, EnoughDays, enough_typical_days
from evenfire.demand.read import demand_record
from evenfire.demand.record_format import HeatMeter, RecordFormat
from evenfire.demand.series import DemandRecord
from evenfire.demand.storage_need import storage_need
from evenfire.errors import ExitStatus, Notice, Problem, RecordError
from evenfire.report.folder import RECORD_FILES, check_output_folder, write_record
from evenfire.units import J_PER_KWH, KG_PER_TONNE, SECONDS_PER_DAY, kg_h_to_kg_s, kg_s_to_kg_h

SECONDS_PER_MINUTE = 60.0
J_PER_KJ = 1000.0
USUAL_STEP_S = 300.0
NEEDED = {"time_column": "--time-column", "flow_column": "--flow-column", "unit": "--unit"}


@dataclass(frozen=True, slots=True, kw_only=True)
class FileOptions:
    """What the command line says of a bare data file; None or empty where it says nothing."""

    time_column: str | None = None
    flow_column: str | None = None
    unit: str | None = None
    zone: str | None = None
    clock_column: str | None = None
    sheet: str | None = None
    header_row: int | None = None
    delimiter: str | None = None
    decimal: str | None = None
    encoding: str | None = None
    date_order: str | None = None
    stamp: str | None = None
    on_change_step_seconds: float | None = None
    gaps: str | None = None
    largest_gap_minutes: float | None = None
    status_column: str | None = None
    good_status: tuple[str, ...] = ()
    missing_value: tuple[str, ...] = ()
    negative_flow: str | None = None
    counter_rollover: float | None = None
    heat_kj_per_kg: float | None = None
    boiler_efficiency_percent: float | None = None
    calorific_value_kwh_per_m3: float | None = None
    boilers_kg_h: float | None = None
    step_minutes: float | None = None


def run(path: Path, options: FileOptions, out: Path | None, *, replace: bool, quiet: bool) -> ExitStatus:
    """Study a record and write its folder."""
    console = Console(quiet=quiet, highlight=False)
    is_case = path.is_dir() or path.suffix.lower() == ".toml"
    folder = out if out is not None else (path if path.is_dir() else path.parent) / "record"
    if is_case:
        _refuse_options(path, options)
    else:
        _refuse_lack(path, options)
    check_output_folder(folder, replace, RECORD_FILES)
    study, inputs = _of_case(path) if is_case else _of_file(path, options)
    write_record(study, inputs, folder, replace)
    found = study.statistics
    console.print(
        f"{study.title}: {found.steam_kg / KG_PER_TONNE:,.0f} t of steam in {found.days:,.1f} days, mean "
        f"{kg_s_to_kg_h(found.mean_kg_s):,.0f} kg/h, peak {kg_s_to_kg_h(found.peak_kg_s):,.0f} kg/h, "
        f"{study.quality.coverage:.2%} measured.",
        soft_wrap=True,
    )
    for problem in study.problems:
        console.print(f"{problem.code}: {problem.text} ({problem.done})", soft_wrap=True)
    console.print("Pressurised steam and hot water kill.", soft_wrap=True)
    console.print(f"Written: {folder / 'record.html'}", soft_wrap=True)
    return ExitStatus.DONE


def _of_case(path: Path) -> tuple[RecordStudy, tuple[tuple[str, str], ...]]:
    case = load_case(path)
    record = case_record(case)
    capacity_kg_s = sum(offer.spec.rated_kg_s for offer in case.boilers if offer.existing)
    need = storage_need(record.flow_kg_s, record.step_s)
    typical, untypical = _tried(lambda: chosen_days(case, record, need, window_tables(case)))
    study = record_study(record, case.name, capacity_kg_s, "boilers in place today", typical, untypical)
    return study, case.input_hashes


def _of_file(path: Path, options: FileOptions) -> tuple[RecordStudy, tuple[tuple[str, str], ...]]:
    record = demand_record(path, _form(options))
    asked = options.step_minutes
    step_s = _usual_step_s(record) if asked is None else asked * SECONDS_PER_MINUTE
    capacity_kg_s = None if options.boilers_kg_h is None else kg_h_to_kg_s(options.boilers_kg_h)
    compared = capacity_kg_s
    if compared is None:
        compared = (float(record.flow_kg_s.mean()) + float(record.flow_kg_s.max())) / 2.0
    typical, untypical = _tried(
        lambda: enough_typical_days(record, step_s, compared, DayTolerances(), MOST_DAYS)
    )
    study = record_study(record, path.name, capacity_kg_s, "boilers as stated", typical, untypical)
    return study, ((path.name, hashlib.sha256(path.read_bytes()).hexdigest()),)


def _tried(choose: Callable[[], EnoughDays]) -> tuple[EnoughDays | None, Notice | None]:
    """Typical days, or why there are none: everything else a study shows needs no complete day."""
    try:
        return choose(), None
    except RecordError as refused:
        problem = refused.problems[0]
        text = f"No typical days: {problem.found}; {problem.allowed}."
        return None, Notice(code=problem.code, text=text, severity="warning")


def _usual_step_s(record: DemandRecord) -> float:
    """Smallest step of five minutes or more that the record's step divides and that divides a day [s]."""
    count = max(1, round(USUAL_STEP_S / record.step_s))
    while count * record.step_s < USUAL_STEP_S or SECONDS_PER_DAY % (count * record.step_s):
        count += 1
        if count * record.step_s > SECONDS_PER_DAY:
            return record.step_s
    return count * record.step_s


def _form(options: FileOptions) -> RecordFormat:
    heat = None
    if options.heat_kj_per_kg is not None:
        efficiency, calorific = options.boiler_efficiency_percent, options.calorific_value_kwh_per_m3
        heat = HeatMeter(
            heat_j_per_kg=options.heat_kj_per_kg * J_PER_KJ,
            boiler_efficiency=None if efficiency is None else efficiency / 100.0,
            fuel_j_per_m3=None if calorific is None else calorific * J_PER_KWH,
        )
    return RecordFormat(
        time_column=options.time_column or "",
        flow_column=options.flow_column or "",
        flow_unit=options.unit or "",
        gaps=options.gaps or "refuse",
        largest_gap_s=(options.largest_gap_minutes or 0.0) * SECONDS_PER_MINUTE,
        clock_column=options.clock_column or "",
        sheet=options.sheet or "",
        header_row=1 if options.header_row is None else options.header_row,
        delimiter="\t" if options.delimiter == "tab" else options.delimiter or "",
        decimal=options.decimal or "",
        encoding=options.encoding or "",
        date_order=options.date_order or "",
        zone=options.zone or "",
        stamp=options.stamp or "start",
        logging="regular" if options.on_change_step_seconds is None else "on change",
        step_s=options.on_change_step_seconds or 0.0,
        status_column=options.status_column or "",
        good_status=options.good_status,
        missing_values=options.missing_value,
        negative_flow=options.negative_flow or "refuse",
        counter_rollover=options.counter_rollover or 0.0,
        heat=heat,
    )


def _refuse_options(path: Path, options: FileOptions) -> None:
    given = [name for name, value in asdict(options).items() if value not in (None, ())]
    if given:
        shown = ", ".join(f"--{name.replace('_', '-')}" for name in given)
        problem = Problem(
            code="R133",
            where=str(path),
            found=f"is a case, but {shown} was given",
            allowed="leave it out: a case says in [record] how its file is to be read",
        )
        raise RecordError(problem)


def _refuse_lack(path: Path, options: FileOptions) -> None:
    if not path.is_file():
        problem = Problem(
            code="R101",
            where=str(path),
            found="no such file",
            allowed="give a case folder, its case.toml, or a record file",
        )
        raise RecordError(problem)
    lacking = [option for name, option in NEEDED.items() if not getattr(options, name)]
    if lacking:
        header = _header(path, options)
        problem = Problem(
            code="R132",
            where=str(path),
            found=f"a data file does not say what {', '.join(lacking)} would" + header,
            allowed="give these options, e.g. --time-column time --flow-column steam --unit kg/h",
        )
        raise RecordError(problem)


def _header(path: Path, options: FileOptions) -> str:
    """The column names of a text file as it holds them, for a message."""
    if path.suffix.lower() in (".xlsx", ".parquet"):
        return ""
    try:
        with gzip.open(path, "rb") if path.suffix.lower() == ".gz" else path.open("rb") as lines:
            for _ in range(options.header_row or 1):
                line = lines.readline(2000)
    except (OSError, EOFError):
        return ""
    words = line.decode("utf-8", "replace").strip()
    return f"; its header row is: {words[:160]}" if words.isprintable() or "\t" in words else ""
